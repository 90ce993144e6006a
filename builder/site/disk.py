"""Bytes on the disk: fixed modes, flushed, read back, one writer at a time."""

from __future__ import annotations

import errno
import os
import stat
import sys
import time
from collections.abc import Iterator, Mapping
from contextlib import contextmanager, suppress
from pathlib import Path

from builder.site.manifest import Site, sha256_hex

if sys.platform != "win32":
    import fcntl

FOLDER_MODE = 0o755
FILE_MODE = 0o644

_LOCK_TRIES = 200
_LOCK_PAUSE_S = 0.05
_NO_FLUSH = {errno.EINVAL, errno.ENOTSUP, errno.EACCES, errno.EBADF}


class TargetRefused(Exception):  # noqa: N818 - says what happened, not that we erred
    """The site cannot be written there; the message is one sentence for the user."""


def write_file(path: Path, content: bytes) -> None:
    """Write a new file with the fixed mode and flush it. FileExistsError if something is there."""
    with path.open("xb") as file:
        file.write(content)
        file.flush()
        _set_mode(path, FILE_MODE)
        os.fsync(file.fileno())


def make_folders(root: Path, below: Path) -> None:
    """Make the folders from `root` (which stands) down to `below`, with the fixed mode."""
    for folder in [*reversed(below.relative_to(root).parents), below.relative_to(root)]:
        if not (root / folder).is_dir():
            make_folder(root / folder)


def make_folder(path: Path) -> None:
    """Make one new folder with the fixed mode, whatever the umask."""
    path.mkdir()
    _set_mode(path, FOLDER_MODE)


def _set_mode(path: Path, mode: int) -> None:
    # We have just made it, so only a share that knows no modes says no.
    with suppress(PermissionError):
        path.chmod(mode)


def flush_folder(path: Path) -> None:
    """Make the names in a folder survive a power cut, where the system can do that."""
    if os.name != "posix":
        return
    try:
        handle = os.open(path, os.O_RDONLY)
    except PermissionError:
        return
    try:
        os.fsync(handle)
    except OSError as problem:
        if problem.errno not in _NO_FLUSH:
            raise
    finally:
        os.close(handle)


def write_tree(site: Site, root: Path) -> None:
    """Make `root` and the whole site in it, flush it, read it back. TargetRefused if it differs."""
    make_folder(root)
    for path, content in site.files.items():
        file = root / path
        make_folders(root, file.parent)
        write_file(file, content)
    for folder, _, _ in os.walk(root, topdown=False):
        flush_folder(Path(folder))
    if wrong := first_difference(root, site.digests):
        raise TargetRefused(f"{str(root / wrong)!r} does not read back as written; check the disk")


def first_difference(root: Path, digests: Mapping[str, str]) -> str | None:
    """The first path under `root` whose bytes on disk lack the given SHA-256; None if all agree."""
    return next((path for path in digests if digest_on_disk(root / path) != digests[path]), None)


def digest_on_disk(path: Path) -> str | None:
    """SHA-256 of a regular file; None for anything else: links and pipes are not followed."""
    try:
        if not stat.S_ISREG(path.lstat().st_mode):
            return None
    except (FileNotFoundError, NotADirectoryError):
        return None
    return sha256_hex(path.read_bytes())


def files_below(root: Path) -> Iterator[str]:
    """Paths of all that is no folder under `root`, except top-level names with a dot, sorted.

    A symbolic link counts as a file. OSError if a folder cannot be read, so that nothing hides.
    """

    def give_up(problem: OSError) -> None:
        raise problem

    for folder, names, files in os.walk(root, onerror=give_up):
        here = Path(folder)
        links = [name for name in names if (here / name).is_symlink()]
        if here == root:
            names[:] = [name for name in names if not name.startswith(".")]
        names.sort()
        for name in sorted([*files, *links]):
            if here != root or not name.startswith("."):
                yield (here / name).relative_to(root).as_posix()


@contextmanager
def sole_writer(folder: Path, *, patient: bool) -> Iterator[bool]:
    """Hold the folder's lock, which the system drops when the process ends, however it ends.

    Yields False where there is no such lock (a share, a folder that cannot be opened).
    TargetRefused when another process keeps it; a patient caller waits ten seconds first.
    """
    if sys.platform == "win32":
        yield False
        return
    try:
        handle = os.open(folder, os.O_RDONLY)
    except OSError:
        yield False
        return
    try:
        yield _lock(handle, folder, _LOCK_TRIES if patient else 1)
    finally:
        os.close(handle)


def _lock(handle: int, folder: Path, tries: int) -> bool:
    for again in reversed(range(tries)):
        try:
            fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            if again:
                time.sleep(_LOCK_PAUSE_S)
        except OSError:
            return False
        else:
            return True
    raise TargetRefused(
        f"another command is writing a site in {str(folder)!r}: try again when it is done"
    )


def is_alive(pid: int) -> bool:
    """Whether a process with this number runs. Where that cannot be asked, only this one does."""
    if sys.platform == "win32":
        return pid == os.getpid()
    try:
        os.kill(pid, 0)
    except (ProcessLookupError, OverflowError):
        return False
    except PermissionError:
        return True
    return True
