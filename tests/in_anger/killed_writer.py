"""Kill the writer at every moment and look at what stands: run by test_writer.py as a script.

    killed_writer.py sweep FOLDER METHOD RENAMES   kill at each moment in turn
    killed_writer.py alternate TARGET METHOD       write two sites in turn until killed
    killed_writer.py shut FOLDER                   write as a user who may not

A moment is a line of the writer's modules (or of shutil, which removes trees for them) before
which the disk differs from the line before: between two moments a kill leaves the same disk. The
child dies by SIGKILL, so nothing is flushed, undone or cleaned up by Python. With RENAMES above 0
it is the recovery that is killed, after a writer that was killed after its swap or n-th rename.
"""

from __future__ import annotations

import hashlib
import json
import os
import shutil
import signal
import sys
from collections.abc import Callable, Mapping
from functools import partial
from pathlib import Path
from types import FrameType
from typing import Any

HERE = Path(__file__).resolve()
sys.path.insert(0, str(HERE.parents[2]))

from builder.site import writer  # noqa: E402 - the path comes first
from builder.site.writer import Ground, TargetRefused, recover, write_site  # noqa: E402

WATCHED = {shutil.__file__, *map(str, Path(writer.__file__).parent.glob("*.py"))}

OLD = {
    "index.html": b"old first page",
    "sheets/lead-sulfate.html": b"old sheet",
    "sheets/gone.html": b"a sheet the new site lacks",
}
NEW = {
    "index.html": b"new first page",
    "sheets/lead-sulfate.html": b"new sheet",
    "salts/new.html": b"a sheet the old site lacked",
}
DOTS = {".gitkeep": b"", ".git/HEAD": b"ref: refs/heads/main\n"}


def never(*_: Path) -> bool:
    return False


GROUNDS = {
    "exchanged": Ground(),
    "two-renames": Ground(swap_folders=never),
    "file-by-file": Ground(stands_beside=never),
}


def with_manifest(pages: Mapping[str, bytes]) -> dict[str, bytes]:
    """The site as it must stand, its manifest put together here and not by the writer."""
    lines = [f"{hashlib.sha256(pages[path]).hexdigest()}  {path}\n" for path in sorted(pages)]
    return {**pages, "MANIFEST.sha256": "".join(lines).encode()}


def lay(files: Mapping[str, bytes], target: Path) -> None:
    for path, content in files.items():
        (target / path).parent.mkdir(parents=True, exist_ok=True)
        (target / path).write_bytes(content)


def read(target: Path) -> dict[str, bytes]:
    return {
        file.relative_to(target).as_posix(): file.read_bytes()
        for file in target.rglob("*")
        if not file.is_dir()
    }


def torn(target: Path) -> list[str]:
    """Pages that are neither wholly their old nor wholly their new selves."""
    wholes = with_manifest(OLD), with_manifest(NEW)
    return [
        path
        for path, content in read(target).items()
        if not path.startswith(".")
        and "/." not in path
        and content not in [whole.get(path) for whole in wholes]
    ]


def which(target: Path, *, dots: bool) -> str:
    """'old', 'new', 'missing' or 'mixed'; with `dots`, the dot-files must stand as well."""
    if not target.exists():
        return "missing"
    found = read(target)
    if not dots:
        found = {path: found[path] for path in found if not path.startswith(".")}
    kept = DOTS if dots else {}
    for name, pages in (("old", OLD), ("new", NEW)):
        if found == {**with_manifest(pages), **kept}:
            return name
    return "mixed"


def traced(act: Callable[[], object], each_line: Callable[[int], None]) -> None:
    """Do it, calling `each_line` with 1, 2, 3 ... just before each watched line runs."""
    passed = 0

    def line(_frame: FrameType, event: str, _argument: Any) -> Any:
        nonlocal passed
        if event == "line":
            passed += 1
            each_line(passed)
        return line

    def call(frame: FrameType, _event: str, _argument: Any) -> Any:
        return line if frame.f_code.co_filename in WATCHED else None

    sys.settrace(call)
    try:
        act()
    finally:
        sys.settrace(None)


def in_child(act: Callable[[], object]) -> int:
    """Do it in a forked child; the wait status (0 when it ended well)."""
    child = os.fork()
    if child == 0:
        status = 1
        try:
            act()
            status = 0
        finally:
            os._exit(status)
    return os.waitpid(child, 0)[1]


def die() -> None:
    os.kill(os.getpid(), signal.SIGKILL)


def die_at(moment: int, line: int) -> None:
    if line == moment:
        die()


def moments(act: Callable[[], object], folder: Path) -> list[int]:
    """The lines before which the disk is not as it was at the line before, and the first one."""
    noted = folder.with_name("moments.json")

    def note_all() -> None:
        found, last = [], None

        def look(number: int) -> None:
            nonlocal last
            if (now := everything(folder)) != last:
                found.append(number)
            last = now

        traced(act, look)
        noted.write_text(json.dumps(found))

    assert in_child(note_all) == 0
    return json.loads(noted.read_text())


def everything(folder: Path) -> list[tuple[str, int, bytes]]:
    """Every file and folder with its mode and content."""
    return sorted(
        (str(entry), entry.stat().st_mode, b"" if entry.is_dir() else entry.read_bytes())
        for entry in folder.rglob("*")
    )


def sweep(folder: Path, method: str, renames: int) -> list[dict[str, Any]]:
    """One outcome for each moment. With `renames`, the recovery is killed, after a first kill."""
    target, ground = folder / "site", GROUNDS[method]

    def prepare() -> None:
        shutil.rmtree(folder, ignore_errors=True)
        lay({**with_manifest(OLD), **DOTS}, target)
        if renames:
            assert os.WIFSIGNALED(in_child(lambda: half_done(target, method, renames)))

    def act() -> object:
        return recover(target) if renames else write_site(NEW, target, ground=ground)

    prepare()
    outcomes = []
    for moment in moments(act, folder):
        prepare()
        status = in_child(partial(traced, act, partial(die_at, moment)))
        outcome = {"moment": moment, "killed": os.WIFSIGNALED(status)}
        outcome |= {"before": which(target, dots=False), "torn": torn(target)}
        other = shutil.copytree(folder, folder.with_name(f"copy-{moment}")) / target.name
        write_site(OLD, other, ground=ground)
        outcome["back"] = which(other, dots=True)
        outcome["dot-file"] = (target / ".gitkeep").exists()
        outcome |= {"state": recover(target).state, "after": which(target, dots=True)}
        outcome["beside"] = sorted(entry.name for entry in folder.iterdir() if entry != target)
        outcome["again"] = write_site(NEW, target, ground=ground).method
        outcome["at last"] = which(target, dots=True)
        outcomes.append(outcome)
    return outcomes


def half_done(target: Path, method: str, renames: int) -> None:
    """A writer that dies at its worst: right after the swap, or after so many renames."""
    swap, rename, done = Ground().swap_folders, Path.rename, 0

    def swap_and_die(one: Path, other: Path) -> bool:
        swap(one, other)
        die()
        return True

    def rename_and_die(self: Path, other: Path) -> Path:
        nonlocal done
        moved = rename(self, other)
        done += 1
        if done == renames:
            die()
        return moved

    Path.rename = rename_and_die  # type: ignore[assignment,method-assign]
    ground = Ground(swap_folders=swap_and_die) if method == "exchanged" else GROUNDS[method]
    write_site(NEW, target, ground=ground)


def alternate(target: Path, method: str) -> None:
    """Write the two sites in turn, for ever; a line on stdout says that the writing goes on."""
    print("writing", flush=True)
    while True:
        for pages in (NEW, OLD):
            write_site(pages, target, ground=GROUNDS[method])


def shut(folder: Path) -> list[str]:
    """As a user without rights: parent shut and target open, then both shut."""
    outcomes = []
    target = folder / "site"
    lay({**with_manifest(OLD), **DOTS}, target)
    for entry in [target, *target.rglob("*")]:
        if os.geteuid() == 0:
            os.chown(entry, 65534, 65534)
    if os.geteuid() == 0:
        os.setgid(65534)
        os.setuid(65534)
    if folder.stat().st_uid == os.geteuid():
        folder.chmod(0o555)
    outcomes.append(write_site(NEW, target).method)
    outcomes.append(which(target, dots=True))
    target.chmod(0o555)
    try:
        outcomes.append(write_site(OLD, target).method)
    except TargetRefused as refusal:
        outcomes.append(str(refusal))
    outcomes.append(which(target, dots=True))
    return outcomes


if __name__ == "__main__":
    act, place = sys.argv[1], Path(sys.argv[2])
    if act == "sweep":
        print(json.dumps(sweep(place, sys.argv[3], int(sys.argv[4]))))
    elif act == "alternate":
        alternate(place, sys.argv[3])
    else:
        print(json.dumps(shut(place)))
