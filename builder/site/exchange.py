"""Put a staged site in the place of the old one, and clear up after a run that was cut short.

Everything lies side by side in the folder that holds the target `<name>`:

    .<name>.sparingly-staged-<pid>   the new site while it is written; the old one once exchanged
    .<name>.sparingly-previous       the old site between the two renames
    .<name>.sparingly-recovery.json  stands while the two renames are under way

Pages never begin with a dot, so a dot-file found in a staged or previous tree is one that the
target had: whoever clears the tree away first gives it back. That one rule serves the normal end
of a run and the recovery of a killed one.
"""

from __future__ import annotations

import ctypes
import errno
import json
import os
import re
import shutil
import sys
from collections.abc import Iterator
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path
from typing import Literal

from builder.site.disk import TargetRefused, flush_folder, is_alive, write_file

JOURNAL = ".sparingly-journal"
PART = ".sparingly-part"

Tidied = Literal["nothing", "tidied", "finished", "undone"]

_AT_FDCWD = -100
_RENAME_EXCHANGE = 2
_CANNOT_EXCHANGE = {errno.EINVAL, errno.ENOSYS, errno.ENOTSUP}


@dataclass(frozen=True)
class Place:
    """A target with all symbolic links resolved, and the names beside it."""

    target: Path

    @property
    def parent(self) -> Path:
        return self.target.parent

    @property
    def staged(self) -> Path:
        return self.parent / f"{self._stem}-staged-{os.getpid()}"

    @property
    def previous(self) -> Path:
        return self.parent / f"{self._stem}-previous"

    @property
    def note(self) -> Path:
        return self.parent / f"{self._stem}-recovery.json"

    @property
    def _stem(self) -> str:
        return f".{self.target.name}.sparingly"

    def left_stages(self) -> Iterator[Path]:
        """Staging folders of processes that are no more."""
        pattern = re.compile(re.escape(f"{self._stem}-staged-") + "([1-9][0-9]*)")
        try:
            beside = sorted(self.parent.iterdir())
        except (FileNotFoundError, PermissionError):
            return
        for entry in beside:
            match = pattern.fullmatch(entry.name)
            if match and not is_alive(int(match[1])) and _is_folder(entry):
                yield entry


def swap_folders(one: Path, other: Path) -> bool:
    """Exchange two folders in one step: renameat2(2) with RENAME_EXCHANGE, Linux 3.15 and later.

    False where the kernel, the C library or the file system cannot; OSError when it is refused.
    """
    if not sys.platform.startswith("linux"):
        return False
    renameat2 = getattr(ctypes.CDLL(None, use_errno=True), "renameat2", None)
    if renameat2 is None:
        return False
    renameat2.argtypes = [ctypes.c_int, ctypes.c_char_p, ctypes.c_int, ctypes.c_char_p]
    renameat2.argtypes += [ctypes.c_uint]
    names = os.fsencode(one), os.fsencode(other)
    if renameat2(_AT_FDCWD, names[0], _AT_FDCWD, names[1], _RENAME_EXCHANGE) == 0:
        return True
    problem = ctypes.get_errno()
    if problem in _CANNOT_EXCHANGE:
        return False
    raise OSError(problem, os.strerror(problem), str(one), None, str(other))


def rename_twice(place: Place) -> None:
    """Old site aside, staged site in. A note says so first; `tidy` undoes or finishes by it."""
    if os.path.lexists(place.previous):
        raise TargetRefused(f"{str(place.previous)!r} is in the way: move it elsewhere")
    note = {
        "what": "a site was being replaced; any sparingly command puts this right",
        "by hand": f"if {place.target.name} is missing, rename {place.previous.name} to it",
        "pid": os.getpid(),
    }
    write_file(place.note, json.dumps(note, indent=1).encode("ascii"))
    flush_folder(place.parent)
    place.target.rename(place.previous)
    place.staged.rename(place.target)
    flush_folder(place.parent)


def lend_dot_files(target: Path, staged: Path) -> None:
    """Give the staged site the target's dot-files, so that a server never misses one.

    Folders (which may be large and in use) are not copied: `retire` moves them afterwards.
    """
    for entry in _dot_entries(target):
        if not _is_folder(entry):
            try:
                os.link(entry, staged / entry.name, follow_symlinks=False)
            except OSError:
                shutil.copy2(entry, staged / entry.name, follow_symlinks=False)


def retire(tree: Path, target: Path) -> None:
    """Remove a staged or previous tree, after giving back what dot-files the target lacks."""
    if not _is_folder(tree):
        return
    lacking = [entry for entry in _dot_entries(tree) if not os.path.lexists(target / entry.name)]
    if lacking and not target.is_dir():
        return  # they would have no home; the next issue gives them one
    for entry in lacking:
        entry.rename(target / entry.name)
    # What another owner forbids us to remove is left: the site stands all the same.
    shutil.rmtree(tree, ignore_errors=True)


def may_be_live(note: Path) -> bool:
    """Whether another process that still runs wrote this recovery note."""
    pid = 0
    with suppress(OSError, ValueError, TypeError, KeyError):
        # A note that cannot be read was never finished, so nothing has been renamed yet.
        pid = int(json.loads(note.read_bytes())["pid"])
    return pid > 0 and pid != os.getpid() and is_alive(pid)


def tidy(place: Place) -> Tidied:
    """Leave either the old site or the new one whole in its place, and nothing beside it.

    The caller makes sure that no other process is at work on the place.
    """
    state: Tidied = "nothing"
    if os.path.lexists(place.note):
        state = "tidied"
        if _is_folder(place.previous) and not os.path.lexists(place.target):
            place.previous.rename(place.target)
            state = "undone"
        elif _is_folder(place.previous):
            retire(place.previous, place.target)
            state = "finished"
        if not os.path.lexists(place.previous):
            place.note.unlink()
        flush_folder(place.parent)
    for stage in place.left_stages():
        retire(stage, place.target)
        state = "tidied" if state == "nothing" else state
    return state


def _dot_entries(folder: Path) -> list[Path]:
    """Top-level dot-files and dot-folders to keep; our own journal and parts are none of them."""
    return sorted(
        entry
        for entry in folder.iterdir()
        if entry.name.startswith(".") and entry.name != JOURNAL and not entry.name.endswith(PART)
    )


def _is_folder(path: Path) -> bool:
    return path.is_dir() and not path.is_symlink()
