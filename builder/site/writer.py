"""Write a whole site so that a reader, or a power cut, never meets half of one.

The new site is staged beside the target, read back, and exchanged with the old one in one step
where the system can, else by two renames with a recovery note. Where the target cannot be
exchanged at all (a mount point, a share) its files are replaced one by one with a journal.
A folder that holds anything no earlier issue wrote is refused, never replaced.
"""

from __future__ import annotations

import errno
import os
from collections.abc import Callable, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass
from itertools import islice
from pathlib import Path
from typing import Literal

from builder.site import exchange, in_place
from builder.site.disk import (
    TargetRefused,
    digest_on_disk,
    files_below,
    first_difference,
    flush_folder,
    sole_writer,
    write_tree,
)
from builder.site.exchange import JOURNAL, Place
from builder.site.manifest import MANIFEST, Site, paths_listed, site_of

__all__ = ["Ground", "Recovery", "TargetRefused", "WriteReport", "recover", "write_site"]

Method = Literal["exchanged", "two-renames", "file-by-file", "fresh", "unchanged"]

# A folder that may not be renamed (mounted on, or somebody else's) may still be written into.
_HELD = {errno.EBUSY, errno.EXDEV, errno.EPERM, errno.EACCES}
_NAMED = 5


@dataclass(frozen=True)
class WriteReport:
    """Where a site was written and how. Files and bytes count the manifest."""

    target: Path
    method: Method
    files: int
    bytes: int
    manifest_sha256: str

    @property
    def unchanged(self) -> bool:
        return self.method == "unchanged"


@dataclass(frozen=True)
class Recovery:
    """What `recover` found and did; the message is empty when there was nothing to do."""

    target: Path
    state: Literal["nothing", "tidied", "finished", "undone", "incomplete", "left-alone"]
    message: str


def stands_beside(target: Path) -> bool:
    """Whether a folder can be staged beside the target, in its own file system."""
    return not os.path.ismount(target) and os.access(target.parent, os.W_OK | os.X_OK)


@dataclass(frozen=True)
class Ground:
    """What the system under the target can do: the one place where the method is decided."""

    stands_beside: Callable[[Path], bool] = stands_beside
    swap_folders: Callable[[Path, Path], bool] = exchange.swap_folders


def write_site(
    pages: Mapping[str, bytes],
    target: Path,
    *,
    ground: Ground = Ground(),
) -> WriteReport:
    """Make `target` (links resolved) hold exactly these pages and their manifest.

    `pages` maps POSIX relative paths to content; top-level dot-files of the target stay.
    ValueError for paths that a site cannot have; TargetRefused, with the old site standing, for
    all that a user can cause. Only file by file can a failure leave a mixture; the message says so.
    """
    site = site_of(pages)
    with _refusing(target):
        place = Place(target.resolve())
        with sole_writer(place.parent, patient=True) as alone:
            if not alone and exchange.may_be_live(place.note):
                raise TargetRefused(f"another command is writing {str(place.target)!r}")
            try:
                _tidy_all(place)
                method = _write(site, place, ground)
            finally:
                _tidy_all(place)
    return WriteReport(
        target=place.target,
        method=method,
        files=len(site.files),
        bytes=sum(map(len, site.files.values())),
        manifest_sha256=site.digests[MANIFEST],
    )


def recover(target: Path) -> Recovery:
    """Put right what a killed run left at or beside the target; every command begins with it.

    Never raises for what it finds: what it may not or cannot touch is `left-alone`, and why.
    """
    try:
        place = Place(target.resolve())
        with sole_writer(place.parent, patient=False) as alone:
            if not alone and exchange.may_be_live(place.note):
                return Recovery(target, "left-alone", "another command is writing the site")
            beside = exchange.tidy(place)
            within = in_place.finish(place.target) if place.target.is_dir() else "nothing"
    except (OSError, RuntimeError, TargetRefused) as problem:
        return Recovery(target, "left-alone", _sentence(target, problem))
    state = beside if within == "nothing" else within
    return Recovery(place.target, state, _MESSAGES[state])


_MESSAGES = {
    "nothing": "",
    "tidied": "left-overs of an unfinished issue were removed; the site is whole",
    "finished": "an unfinished issue was finished; the new site is whole",
    "undone": "an unfinished issue was undone; the old site is whole",
    "incomplete": "incomplete: run issue again",
}


def _write(site: Site, place: Place, ground: Ground) -> Method:
    target = place.target
    if not os.path.lexists(target):
        if not target.parent.is_dir():
            raise TargetRefused(f"there is no folder {str(target.parent)!r}: make it first")
        write_tree(site, place.staged)
        place.staged.rename(target)
        flush_folder(place.parent)
        return "fresh"
    if not target.is_dir():
        raise TargetRefused(f"{str(target)!r} is no folder: choose another place")
    in_place.finish(target)
    old_paths = _paths_of_old_site(target)
    _refuse_foreign(target, old_paths)
    if _is_unchanged(target, site):
        return "unchanged"
    if ground.stands_beside(target):
        try:
            return _replace(site, place, ground)
        except OSError as problem:
            if problem.errno not in _HELD:
                raise
            _tidy_all(place)
    in_place.write_in_place(site, target, old_paths)
    return "file-by-file"


def _replace(site: Site, place: Place, ground: Ground) -> Method:
    write_tree(site, place.staged)
    exchange.lend_dot_files(place.target, place.staged)
    if ground.swap_folders(place.staged, place.target):
        flush_folder(place.parent)
        return "exchanged"
    exchange.rename_twice(place)
    return "two-renames"


def _tidy_all(place: Place) -> None:
    exchange.tidy(place)
    exchange.retire(place.staged, place.target)


def _paths_of_old_site(target: Path) -> frozenset[str]:
    """Files that earlier issues wrote, finished or not, by their manifest and their journal."""
    journal = in_place.read_journal(target)
    unfinished = journal.paths if journal else frozenset()
    manifest = target / MANIFEST
    if not os.path.lexists(manifest):
        return unfinished
    try:
        if digest_on_disk(manifest) is None:
            raise ValueError("not a plain file")
        return paths_listed(manifest.read_bytes()) | unfinished | {MANIFEST}
    except ValueError as problem:
        raise TargetRefused(
            f"{str(manifest)!r} is not the list of an issued site: choose an empty folder"
        ) from problem


def _refuse_foreign(target: Path, old_paths: frozenset[str]) -> None:
    ours = old_paths | {in_place.part_of(path) for path in old_paths}
    foreign = (path for path in files_below(target) if path not in ours)
    found = list(islice(foreign, _NAMED + 1))
    if found:
        named = ", ".join(map(repr, found[:_NAMED])) + (" and more" if found[_NAMED:] else "")
        raise TargetRefused(
            f"{str(target)!r} holds files that no earlier issue wrote ({named}): "
            "move them elsewhere or choose an empty folder"
        )


def _is_unchanged(target: Path, site: Site) -> bool:
    return (
        not os.path.lexists(target / JOURNAL)
        and set(files_below(target)) == site.digests.keys()
        and first_difference(target, site.digests) is None
    )


@contextmanager
def _refusing(target: Path) -> Iterator[None]:
    """Turn what the system refuses into one sentence."""
    try:
        yield
    except (OSError, RuntimeError) as problem:  # RuntimeError: links that lead in a circle
        raise TargetRefused(_sentence(target, problem)) from problem


def _sentence(target: Path, problem: Exception) -> str:
    if isinstance(problem, TargetRefused):
        return str(problem)
    if not isinstance(problem, OSError):
        return f"{str(target)!r} cannot be followed: its links lead in a circle"
    names = [repr(str(name)) for name in (problem.filename, problem.filename2) if name is not None]
    told = f"{str(target)!r} cannot be written: {' to '.join(names)}: {problem.strerror}"
    mixed = os.path.lexists(target / JOURNAL)
    return told + (" (the site there is incomplete: cure this and issue again)" if mixed else "")
