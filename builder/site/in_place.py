"""Write a site into a folder that cannot be exchanged: a mount point, a share, a parent kept shut.

Files are replaced one by one, each whole: first all other pages, then `index.html`, the manifest
last; pages that are no more go after that. A journal in the target lists what is to stand and what
is to go, so a run that was cut short can be finished, or done again, without taking its files for
somebody else's.
"""

from __future__ import annotations

import json
import os
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path, PurePosixPath
from typing import Literal

from builder.site.disk import (
    TargetRefused,
    digest_on_disk,
    first_difference,
    flush_folder,
    make_folders,
    write_file,
)
from builder.site.exchange import JOURNAL, PART
from builder.site.manifest import MANIFEST, Site, check_paths

_LAST = ("index.html", MANIFEST)


@dataclass(frozen=True)
class Journal:
    """What an unfinished run was about: SHA-256 by path of its files, and paths to remove."""

    digests: dict[str, str]
    removed: frozenset[str]

    @property
    def paths(self) -> frozenset[str]:
        """Every page that the run may have written, or may still have to remove."""
        return self.removed | self.digests.keys()


def part_of(path: str) -> str:
    """Where the bytes of a page are written before they replace it."""
    whole = PurePosixPath(path)
    return str(whole.with_name(f".{whole.name}{PART}"))


def read_journal(target: Path) -> Journal | None:
    """The journal of an unfinished run, or None. TargetRefused if it is not one of ours."""
    file = target / JOURNAL
    if not os.path.lexists(file):
        return None
    try:
        found = json.loads(file.read_bytes())
        journal = Journal(dict(found["digests"]), frozenset(found["removed"]))
        check_paths(journal.digests.keys() - {MANIFEST})
        for path in journal.removed:  # one by one: they need not fit together
            check_paths([path])
    except (ValueError, TypeError, KeyError, AttributeError) as problem:
        raise TargetRefused(
            f"{str(file)!r} cannot be read: look into it and remove it"
        ) from problem
    return journal


def write_in_place(site: Site, target: Path, old_paths: Iterable[str]) -> None:
    """Make the target hold the site. `old_paths` are the files that earlier issues wrote there.

    OSError or TargetRefused part-way leaves the journal, and the target part old and part new.
    """
    journal = Journal(dict(site.digests), frozenset(old_paths) - site.digests.keys())
    _put(target, JOURNAL, _journal_bytes(journal))
    in_the_way = {path for path in journal.removed if _clashes(path, site)}
    _remove(target, in_the_way)
    for path in sorted(site.files, key=_turn):
        if digest_on_disk(target / path) != site.digests[path]:
            _put(target, path, site.files[path])
    if wrong := first_difference(target, site.digests):
        raise TargetRefused(
            f"{str(target / wrong)!r} does not read back as written; check the disk"
        )
    _clear(target, journal)


def finish(target: Path) -> Literal["nothing", "finished", "incomplete"]:
    """Clear up after a run that had written every page; say so when it had not."""
    journal = read_journal(target)
    if journal is None:
        if os.path.lexists(unborn := target / part_of(JOURNAL)):
            unborn.unlink()  # killed before anything was replaced
        return "nothing"
    if first_difference(target, journal.digests):
        return "incomplete"
    _clear(target, journal)
    return "finished"


def _turn(path: str) -> tuple[int, str]:
    return (_LAST.index(path) + 1 if path in _LAST else 0, path)


def _put(target: Path, path: str, content: bytes) -> None:
    part, file = target / part_of(path), target / path
    make_folders(target, file.parent)
    part.unlink(missing_ok=True)
    write_file(part, content)
    part.replace(file)
    flush_folder(file.parent)


def _journal_bytes(journal: Journal) -> bytes:
    record = {"digests": journal.digests, "removed": sorted(journal.removed)}
    return json.dumps(record, indent=1).encode("ascii")


def _clashes(path: str, site: Site) -> bool:
    """Whether an old file stands where a folder is to be, or in a folder where a file is to be."""
    above = (str(folder) for folder in PurePosixPath(path).parents)
    return any(folder in site.files for folder in above) or any(
        page.startswith(f"{path}/") for page in site.files
    )


def _clear(target: Path, journal: Journal) -> None:
    _remove(target, journal.removed - journal.digests.keys())
    _remove(target, map(part_of, journal.paths))
    (target / JOURNAL).unlink()
    flush_folder(target)


def _remove(target: Path, paths: Iterable[str]) -> None:
    """Remove these files where they stand, and the folders that this leaves empty."""
    for path in sorted(paths):
        file = target / path
        if file.is_dir() and not file.is_symlink():
            continue  # a former page whose name is a folder now
        try:
            file.unlink()
        except (FileNotFoundError, NotADirectoryError):
            continue
        for folder in file.parents:
            if folder == target or any(folder.iterdir()):
                break
            folder.rmdir()
