"""The writer in anger: links, strangers' files, umask, full disks, two at once, SIGKILL.

Sites to compare with are put together in killed_writer.py (hashlib and plain writes), and one
manifest is checked by the system's own sha256sum.
"""

from __future__ import annotations

import errno
import json
import os
import random
import resource
import shutil
import signal
import stat
import subprocess
import sys
import tempfile
import threading
import time
from pathlib import Path
from typing import Any

import pytest
from killed_writer import DOTS, GROUNDS, NEW, OLD, lay, read, which, with_manifest

from builder.site import exchange
from builder.site.writer import Ground, TargetRefused, recover, write_site

KILLER = Path(__file__).with_name("killed_writer.py")
METHODS = ["exchanged", "two-renames", "file-by-file"]


def drive(*arguments: object) -> Any:
    """What killed_writer.py prints, read as JSON."""
    command = [sys.executable, str(KILLER), *map(str, arguments)]
    done = subprocess.run(command, capture_output=True, text=True, timeout=60)
    assert done.returncode == 0, done.stderr
    return json.loads(done.stdout)


def beside(target: Path) -> list[str]:
    return sorted(entry.name for entry in target.parent.iterdir() if entry != target)


def modes(target: Path) -> dict[str, int]:
    return {
        str(entry.relative_to(target)): stat.S_IMODE(entry.lstat().st_mode)
        for entry in [target, *target.rglob("*")]
    }


def a_dead_pid() -> int:
    child = subprocess.Popen([sys.executable, "-c", ""])
    child.wait()
    return child.pid


# Ordinary issues


def test_first_issue_is_whole_and_reported(tmp_path: Path) -> None:
    report = write_site(NEW, tmp_path / "site")
    expected = with_manifest(NEW)
    assert read(tmp_path / "site") == expected
    assert (report.method, report.files, report.unchanged) == ("fresh", 4, False)
    assert report.bytes == sum(len(content) for content in expected.values())
    assert report.target == tmp_path / "site"
    assert beside(tmp_path / "site") == []


def test_sha256sum_agrees_with_the_manifest(tmp_path: Path) -> None:
    report = write_site(NEW, tmp_path / "site")
    check = subprocess.run(
        ["sha256sum", "--strict", "-c", "MANIFEST.sha256"],
        cwd=tmp_path / "site",
        capture_output=True,
        text=True,
    )
    assert check.returncode == 0
    assert check.stdout.count(": OK") == len(NEW)
    printed = subprocess.run(
        ["sha256sum", tmp_path / "site/MANIFEST.sha256"], capture_output=True, text=True
    )
    assert printed.stdout.split()[0] == report.manifest_sha256


@pytest.mark.parametrize("method", METHODS)
def test_second_issue_replaces_the_first_and_keeps_dot_files(tmp_path: Path, method: str) -> None:
    target = tmp_path / "site"
    lay({**with_manifest(OLD), **DOTS}, target)
    report = write_site(NEW, target, ground=GROUNDS[method])
    assert report.method == method
    assert read(target) == {**with_manifest(NEW), **DOTS}
    assert not (target / "sheets/gone.html").exists()
    assert beside(target) == []


def test_this_system_exchanges_in_one_step(tmp_path: Path) -> None:
    """On Linux with an ordinary file system nobody may meet a missing target."""
    write_site(OLD, tmp_path / "site")
    expected = "exchanged" if sys.platform == "linux" else "two-renames"
    assert write_site(NEW, tmp_path / "site").method == expected


def test_folder_with_only_dot_files_may_be_filled(tmp_path: Path) -> None:
    (tmp_path / ".gitkeep").touch()
    (tmp_path / "site").mkdir()
    (tmp_path / "site/.gitkeep").touch()
    write_site(NEW, tmp_path / "site")
    assert read(tmp_path / "site") == {**with_manifest(NEW), ".gitkeep": b""}


@pytest.mark.parametrize("method", METHODS)
def test_unchanged_site_is_not_touched(tmp_path: Path, method: str) -> None:
    target = tmp_path / "site"
    write_site(NEW, target)
    times = {entry: entry.stat().st_mtime_ns for entry in [tmp_path, target, *target.rglob("*")]}
    inode = target.stat().st_ino
    report = write_site(NEW, target, ground=GROUNDS[method])
    assert (report.method, report.unchanged) == ("unchanged", True)
    assert target.stat().st_ino == inode
    assert times == {entry: entry.stat().st_mtime_ns for entry in times}


def test_one_changed_byte_is_put_right(tmp_path: Path) -> None:
    write_site(NEW, tmp_path / "site")
    (tmp_path / "site/index.html").write_bytes(b"NEW first page")  # same length
    assert not write_site(NEW, tmp_path / "site").unchanged
    assert read(tmp_path / "site") == with_manifest(NEW)


@pytest.mark.parametrize("method", METHODS)
def test_page_may_become_a_folder_and_back(tmp_path: Path, method: str) -> None:
    flat, deep = {"a": b"page", "x/y/z": b"1"}, {"a/b": b"page", "x": b"2"}
    target = tmp_path / "site"
    for pages in (flat, deep, flat):
        write_site(pages, target, ground=GROUNDS[method])
        assert read(target) == with_manifest(pages)
    assert not (target / ".sparingly-journal").exists()


@pytest.mark.parametrize("method", METHODS)
@pytest.mark.parametrize("umask", [0o077, 0o000])
def test_modes_do_not_depend_on_the_umask(tmp_path: Path, umask: int, method: str) -> None:
    before = os.umask(umask)
    try:
        write_site(OLD, tmp_path / "site")
        write_site(NEW, tmp_path / "site", ground=GROUNDS[method])
    finally:
        os.umask(before)
    found = modes(tmp_path / "site")
    assert {found.pop("."), found.pop("sheets"), found.pop("salts")} == {0o755}
    assert set(found.values()) == {0o644}


def test_file_by_file_changes_first_page_then_manifest_last(tmp_path: Path, monkeypatch) -> None:
    order: list[str] = []
    replace = Path.replace

    def noted(self: Path, other: Path) -> Path:
        order.append(other.name)
        return replace(self, other)

    lay(with_manifest(OLD), tmp_path / "site")
    monkeypatch.setattr(Path, "replace", noted)
    write_site(NEW, tmp_path / "site", ground=GROUNDS["file-by-file"])
    assert order[0] == ".sparingly-journal"
    assert order[-2:] == ["index.html", "MANIFEST.sha256"]
    assert len(order) == 5


# Places that are not what they seem


def test_link_is_followed_and_stays_a_link(tmp_path: Path) -> None:
    (tmp_path / "disk").mkdir()
    (tmp_path / "www").mkdir()
    lay(with_manifest(OLD), tmp_path / "disk/site")
    link = tmp_path / "www/current"
    link.symlink_to("../disk/site")
    report = write_site(NEW, link)
    assert link.is_symlink()
    assert report.target == tmp_path / "disk/site"
    assert read(tmp_path / "disk/site") == with_manifest(NEW)
    assert beside(link) == []


def test_links_in_a_circle_are_refused(tmp_path: Path) -> None:
    (tmp_path / "a").symlink_to("b")
    (tmp_path / "b").symlink_to("a")
    with pytest.raises(TargetRefused, match=r"circle|no folder"):
        write_site(NEW, tmp_path / "a")
    assert recover(tmp_path / "a").state in {"left-alone", "nothing"}


@pytest.mark.parametrize("method", METHODS)
def test_strangers_files_are_never_replaced(tmp_path: Path, method: str) -> None:
    target = tmp_path / "Documents"
    mine = {f"letter {number}.txt": b"mine" for number in range(7)}
    lay(mine, target)
    with pytest.raises(TargetRefused) as refusal:
        write_site(NEW, target, ground=GROUNDS[method])
    assert str(refusal.value).count("letter") == 5
    assert "and more" in str(refusal.value)
    assert "\n" not in str(refusal.value)
    assert read(target) == mine
    assert beside(target) == []


@pytest.mark.parametrize(
    "stranger", ["notes.txt", "sheets/my notes.txt", "sheets/.hidden", "own/deep/file"]
)
def test_a_strangers_file_within_a_site_is_named(tmp_path: Path, stranger: str) -> None:
    target = tmp_path / "site"
    lay({**with_manifest(OLD), stranger: b"mine"}, target)
    with pytest.raises(TargetRefused) as refusal:
        write_site(NEW, target)
    assert stranger in str(refusal.value)
    assert read(target) == {**with_manifest(OLD), stranger: b"mine"}


def test_strangers_files_are_named_in_order(tmp_path: Path) -> None:
    lay({f"{letter}/file": b"mine" for letter in "hbdagfce"}, tmp_path / "site")
    with pytest.raises(
        TargetRefused, match=r"\('a/file', 'b/file', 'c/file', 'd/file', 'e/file' and"
    ):
        write_site(NEW, tmp_path / "site")


def test_a_link_to_a_folder_within_a_site_is_a_strangers(tmp_path: Path) -> None:
    """Else file by file would write, and remove, through the link."""
    lay(with_manifest(OLD), tmp_path / "site")
    (tmp_path / "site/sheets").rename(tmp_path / "elsewhere")
    (tmp_path / "site/sheets").symlink_to(tmp_path / "elsewhere")
    with pytest.raises(TargetRefused, match="'sheets'"):
        write_site(NEW, tmp_path / "site", ground=GROUNDS["file-by-file"])
    assert (tmp_path / "elsewhere/gone.html").exists()


@pytest.mark.parametrize(
    "manifest",
    [
        b"",
        b"\xff\xfe",
        b"not a list\n",
        b"0" * 64 + b"  ../outside\n",
        b"0" * 64 + b"  Holiday pictures/1.jpg\n",
    ],
)
def test_a_checksum_list_that_is_not_ours_gives_no_leave(tmp_path: Path, manifest: bytes) -> None:
    lay({"MANIFEST.sha256": manifest}, tmp_path / "site")
    with pytest.raises(TargetRefused, match="MANIFEST"):
        write_site(NEW, tmp_path / "site")
    assert read(tmp_path / "site") == {"MANIFEST.sha256": manifest}


def test_target_that_is_a_file_is_refused(tmp_path: Path) -> None:
    (tmp_path / "site").write_bytes(b"a file")
    with pytest.raises(TargetRefused, match="no folder"):
        write_site(NEW, tmp_path / "site")
    assert (tmp_path / "site").read_bytes() == b"a file"


def test_missing_parent_is_refused(tmp_path: Path) -> None:
    with pytest.raises(TargetRefused, match="make it first"):
        write_site(NEW, tmp_path / "no/site")
    assert beside(tmp_path / "no") == []


def test_names_the_system_refuses_are_told_in_one_line(tmp_path: Path) -> None:
    with pytest.raises(TargetRefused) as refusal:
        write_site(NEW, tmp_path / ("x" * 250))
    assert os.strerror(errno.ENAMETOOLONG) in str(refusal.value)
    assert "\n" not in str(refusal.value)


@pytest.mark.parametrize(
    "paths",
    [
        [],
        ["/etc/passwd"],
        ["../up"],
        ["a/../b"],
        ["a//b"],
        ["./a"],
        ["a/"],
        [""],
        [".hidden"],
        ["sheets/.hidden"],
        ["a\\b"],
        ["a b"],
        ["plomb-é"],
        ["a\n"],
        ["trailing."],
        ["nul.html"],
        ["x" * 121],
        ["a.html", "A.html"],
        ["a/x", "A/y"],
        ["a", "a/b"],
        ["manifest.SHA256"],
    ],
)
def test_paths_a_site_cannot_have(tmp_path: Path, paths: list[str]) -> None:
    with pytest.raises(ValueError):
        write_site(dict.fromkeys(paths, b""), tmp_path / "site")
    assert list(tmp_path.iterdir()) == []


def test_longest_path_is_allowed(tmp_path: Path) -> None:
    path = f"{'d' * 59}/{'x' * 60}"
    assert len(path) == 120
    write_site({path: b"1"}, tmp_path / "site")
    assert (tmp_path / "site" / path).read_bytes() == b"1"


# Grounds that give way


def test_swap_says_when_it_cannot_and_raises_when_it_may_not(tmp_path: Path) -> None:
    """EINVAL (here: one folder within the other) is what file systems without exchange answer."""
    (tmp_path / "one/within").mkdir(parents=True)
    assert exchange.swap_folders(tmp_path / "one", tmp_path / "one/within") is False
    with pytest.raises(FileNotFoundError):
        exchange.swap_folders(tmp_path / "one", tmp_path / "none")
    assert (tmp_path / "one/within").is_dir()


@pytest.mark.parametrize("code", [errno.EBUSY, errno.EXDEV, errno.EACCES])
def test_a_folder_that_may_not_be_renamed_is_written_into(tmp_path: Path, code: int) -> None:
    """As a bind mount or a lower container layer answers."""

    def held(one: Path, other: Path) -> bool:
        raise OSError(code, os.strerror(code), str(one), None, str(other))

    target = tmp_path / "site"
    lay({**with_manifest(OLD), **DOTS}, target)
    assert write_site(NEW, target, ground=Ground(swap_folders=held)).method == "file-by-file"
    assert read(target) == {**with_manifest(NEW), **DOTS}
    assert beside(target) == []


def test_users_without_rights() -> None:
    """Parent shut: written into. Target shut as well: refused in one line, site whole."""
    base = Path(tempfile.mkdtemp())  # pytest's own folder is shut to other users
    try:
        base.chmod(0o755)
        (base / "www").mkdir()
        method, stands, refusal, still = drive("shut", base / "www")
    finally:
        (base / "www").chmod(0o755)
        shutil.rmtree(base)
    assert (method, stands) == ("file-by-file", "new")
    assert os.strerror(errno.EACCES) in refusal
    assert "\n" not in refusal
    assert still == "new"


@pytest.mark.parametrize("method", METHODS)
def test_full_disk_leaves_the_old_site(tmp_path: Path, method: str) -> None:
    """A limit on file size stands for the full disk: writing fails part-way through a page."""
    target = tmp_path / "site"
    lay({**with_manifest(OLD), **DOTS}, target)
    big = {**NEW, "sheets/big.html": b"x" * 200_000}
    soft, hard = resource.getrlimit(resource.RLIMIT_FSIZE)
    resource.setrlimit(resource.RLIMIT_FSIZE, (100_000, hard))
    try:
        with pytest.raises(TargetRefused) as refusal:
            write_site(big, target, ground=GROUNDS[method])
    finally:
        resource.setrlimit(resource.RLIMIT_FSIZE, (soft, hard))
    assert os.strerror(errno.EFBIG) in str(refusal.value)
    assert beside(target) == []
    if method == "file-by-file":  # the one method that promises less, and says so
        assert "incomplete" in str(refusal.value)
        assert recover(target).message == "incomplete: run issue again"
        write_site(big, target, ground=GROUNDS[method])
        assert read(target) == {**with_manifest(big), **DOTS}
    else:
        assert which(target, dots=True) == "old"


@pytest.mark.parametrize("method", METHODS)
def test_a_disk_that_lies_is_found_out(tmp_path: Path, monkeypatch, method: str) -> None:
    target = tmp_path / "site"
    lay({**with_manifest(OLD), **DOTS}, target)
    flush = os.fsync

    def flush_and_spoil(handle: int) -> None:
        flush(handle)
        name = str(Path(f"/proc/self/fd/{handle}").readlink())
        if name.endswith(("new.html", ".new.html.sparingly-part")):
            Path(name).write_bytes(b"something else")

    monkeypatch.setattr(os, "fsync", flush_and_spoil)
    with pytest.raises(TargetRefused, match=r"new\.html.*does not read back"):
        write_site(NEW, target, ground=GROUNDS[method])
    monkeypatch.undo()
    if method != "file-by-file":
        assert which(target, dots=True) == "old"
    write_site(NEW, target, ground=GROUNDS[method])
    assert which(target, dots=True) == "new"


def test_failure_between_the_two_renames_is_undone_at_once(tmp_path: Path, monkeypatch) -> None:
    target = tmp_path / "site"
    lay({**with_manifest(OLD), **DOTS}, target)
    rename = Path.rename

    def fails_into_place(self: Path, other: Path) -> Path:
        if "staged" in self.name:
            raise OSError(errno.EIO, os.strerror(errno.EIO), str(self), None, str(other))
        return rename(self, other)

    monkeypatch.setattr(Path, "rename", fails_into_place)
    with pytest.raises(TargetRefused, match=os.strerror(errno.EIO)):
        write_site(NEW, target, ground=GROUNDS["two-renames"])
    assert which(target, dots=True) == "old"
    assert beside(target) == []


# Left-overs and company


def test_stages_of_the_dead_go_and_others_stay(tmp_path: Path) -> None:
    target = tmp_path / "site"
    lay(with_manifest(OLD), target)
    dead = a_dead_pid()
    names = {
        f".site.sparingly-staged-{dead}": False,
        f".site.sparingly-staged-{os.getpid()}": True,
        f".site.sparingly-staged-{os.getppid()}": True,
        f".site.sparingly-staged-0{dead}": True,
        f".site.sparingly-staged-{dead}.old": True,
        f".other.sparingly-staged-{dead}": True,
        f"site.sparingly-staged-{dead}": True,
        ".site.sparingly-staged-": True,
        ".site.sparingly-previous": True,  # no note: not ours to judge
    }
    for name in names:
        lay({"index.html": b"half"}, tmp_path / name)
    assert recover(target).state == "tidied"
    assert {name: (tmp_path / name).exists() for name in names} == names
    assert which(target, dots=False) == "old"


def test_dot_folders_wait_for_a_target_that_was_lost(tmp_path: Path) -> None:
    """Killed after the exchange, then the target removed by hand: .git must not be lost."""
    target = tmp_path / "site"
    stage = tmp_path / f".site.sparingly-staged-{a_dead_pid()}"
    lay({**with_manifest(OLD), **DOTS}, stage)
    recover(target)
    assert (stage / ".git/HEAD").exists()
    write_site(NEW, target)
    assert which(target, dots=True) == "new"
    assert beside(target) == []


def test_without_locks_a_living_writer_is_left_alone(tmp_path: Path, monkeypatch) -> None:
    """A share without locks: the recovery note's process number decides."""

    def no_lock(*_: object) -> None:
        raise OSError(errno.ENOLCK, os.strerror(errno.ENOLCK))

    monkeypatch.setattr("builder.site.disk.fcntl.flock", no_lock)
    target, note = tmp_path / "site", tmp_path / ".site.sparingly-recovery.json"
    lay(with_manifest(OLD), tmp_path / ".site.sparingly-previous")
    note.write_text(json.dumps({"pid": os.getppid()}))
    assert recover(target).state == "left-alone"
    with pytest.raises(TargetRefused, match="another command"):
        write_site(NEW, target)
    assert not target.exists()
    note.write_text(json.dumps({"pid": a_dead_pid()}))
    assert recover(target).state == "undone"
    assert which(target, dots=False) == "old"
    assert beside(target) == []


def test_recover_finds_nothing_where_nothing_is(tmp_path: Path) -> None:
    lay(with_manifest(OLD), tmp_path / "site")
    for target in (tmp_path / "site", tmp_path / "none", tmp_path / "no/such/folder"):
        assert (recover(target).state, recover(target).message) == ("nothing", "")
    assert beside(tmp_path / "site") == []


def test_recover_leaves_a_journal_that_is_not_ours(tmp_path: Path) -> None:
    """A journal that names files outside the site must not get them removed."""
    (tmp_path / "precious").write_bytes(b"mine")
    journal = json.dumps({"digests": {}, "removed": ["../precious"]}).encode()
    lay({**with_manifest(OLD), ".sparingly-journal": journal}, tmp_path / "site")
    assert recover(tmp_path / "site").state == "left-alone"
    with pytest.raises(TargetRefused, match="cannot be read"):
        write_site(NEW, tmp_path / "site")
    assert (tmp_path / "precious").read_bytes() == b"mine"


def test_previous_that_is_not_ours_is_kept(tmp_path: Path) -> None:
    target, previous = tmp_path / "site", tmp_path / ".site.sparingly-previous"
    lay(with_manifest(OLD), target)
    lay({"mine": b"mine"}, previous)
    with pytest.raises(TargetRefused, match="in the way"):
        write_site(NEW, target, ground=GROUNDS["two-renames"])
    assert read(previous) == {"mine": b"mine"}
    assert which(target, dots=False) == "old"


def test_two_at_once_take_turns(tmp_path: Path) -> None:
    """The second waits for the first; meanwhile recover does not touch the first's staging."""
    target = tmp_path / "site"
    lay(with_manifest(OLD), target)
    staged, go_on = threading.Event(), threading.Event()

    def slow(one: Path, other: Path) -> bool:
        staged.set()
        go_on.wait(10)
        return Ground().swap_folders(one, other)

    methods: list[str] = []

    def issue(ground: Ground) -> None:
        methods.append(write_site(NEW, target, ground=ground).method)

    first = threading.Thread(target=issue, args=(Ground(swap_folders=slow),))
    second = threading.Thread(target=issue, args=(Ground(),))
    first.start()
    assert staged.wait(10)
    second.start()
    assert recover(target).state == "left-alone"
    time.sleep(0.2)
    assert methods == []
    go_on.set()
    first.join(10)
    second.join(10)
    assert methods == ["exchanged", "unchanged"]
    assert which(target, dots=False) == "new"
    assert beside(target) == []


# Killed at every moment


@pytest.mark.parametrize("method", ["exchanged", "two-renames"])
def test_killed_at_any_moment_either_site_stands_whole(tmp_path: Path, method: str) -> None:
    outcomes = drive("sweep", tmp_path / "place", method, 0)
    assert len(outcomes) > 15
    assert all(outcome["killed"] for outcome in outcomes)
    assert {outcome["after"] for outcome in outcomes} == {"old", "new"}
    assert [outcome["beside"] for outcome in outcomes if outcome["beside"]] == []
    assert {outcome["at last"] for outcome in outcomes} == {"new"}
    assert {outcome["back"] for outcome in outcomes} == {"old"}
    # Before any recovery: never half a site, and in one step never none.
    seen = {outcome["before"] for outcome in outcomes}
    assert seen == ({"old", "new"} if method == "exchanged" else {"old", "new", "missing"})
    # A server never misses its dot-files while a site stands.
    assert all(outcome["dot-file"] for outcome in outcomes if outcome["before"] != "missing")
    # Once the new site has stood, no recovery brings the old one back.
    assert all(outcome["after"] == "new" for outcome in outcomes if outcome["before"] == "new")


@pytest.mark.parametrize(
    ("method", "renames", "stands"),
    [("exchanged", 1, "new"), ("two-renames", 1, "old"), ("two-renames", 2, "new")],
)
def test_recovery_may_be_killed_too(tmp_path: Path, method: str, renames: int, stands: str) -> None:
    outcomes = drive("sweep", tmp_path / "place", method, renames)
    assert len(outcomes) > 5
    assert all(outcome["killed"] for outcome in outcomes)
    assert {outcome["after"] for outcome in outcomes} == {stands}
    assert [outcome["beside"] for outcome in outcomes if outcome["beside"]] == []
    assert {outcome["at last"] for outcome in outcomes} == {"new"}
    assert {outcome["back"] for outcome in outcomes} == {"old"}


def test_file_by_file_killed_at_any_moment_can_be_done_again(tmp_path: Path) -> None:
    outcomes = drive("sweep", tmp_path / "place", "file-by-file", 0)
    assert len(outcomes) > 12
    assert all(outcome["killed"] for outcome in outcomes)
    assert [outcome["torn"] for outcome in outcomes if outcome["torn"]] == []
    states = {outcome["state"]: outcome["after"] for outcome in outcomes}
    assert states.keys() >= {"incomplete", "finished"}
    for outcome in outcomes:
        whole = outcome["after"] in {"old", "new"}
        assert whole or outcome["state"] == "incomplete", outcome
        assert outcome["state"] != "finished" or outcome["after"] == "new", outcome
    assert {outcome["at last"] for outcome in outcomes} == {"new"}
    assert {outcome["back"] for outcome in outcomes} == {"old"}
    assert [outcome["beside"] for outcome in outcomes if outcome["beside"]] == []


@pytest.mark.parametrize("method", ["exchanged", "two-renames"])
def test_killed_by_the_clock(tmp_path: Path, method: str) -> None:
    """Two sites written in turn by a process that is killed at random times (seed 20261201)."""
    target = tmp_path / "site"
    lay({**with_manifest(OLD), **DOTS}, target)
    chance = random.Random(20261201)
    for _ in range(8):
        command = [sys.executable, str(KILLER), "alternate", str(target), method]
        with subprocess.Popen(command, stdout=subprocess.PIPE) as child:
            assert child.stdout is not None
            assert child.stdout.readline() == b"writing\n"
            time.sleep(chance.uniform(0.0, 0.06))
            child.send_signal(signal.SIGKILL)
            assert child.wait() == -signal.SIGKILL
        recover(target)
        assert which(target, dots=True) in {"old", "new"}
        assert beside(target) == []
