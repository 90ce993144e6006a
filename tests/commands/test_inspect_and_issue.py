"""`inspect` and `issue`: what is found, what is written, and what stays untouched."""

from __future__ import annotations

import hashlib
import re
import shutil
import signal
import subprocess
import sys
from pathlib import Path

import pytest
from running import ROOT, here, house, one_line, program, shipped, there

from builder.collection.identity import check
from builder.commands import asking, issue

PLACE = re.compile(r"(\S+):(\d+):(\d+): (error|doubt|note) ([a-z-]+): found .+; .+")
LAST = re.compile(r"(\d+) errors?, (\d+) doubts?, (\d+) notes? in \d+ files?")


def tree(folder: Path) -> dict[str, bytes]:
    return {
        p.relative_to(folder).as_posix(): p.read_bytes() for p in folder.rglob("*") if p.is_file()
    }


@pytest.fixture
def damaged(tmp_path: Path) -> Path:
    """A copy of the shipped constants with a key doubled in line 2 of one file."""
    copy = tmp_path / "mine"
    shutil.copytree(ROOT / "constants", copy)
    text = shipped("gypsum")
    first = text.splitlines(keepends=True)[0]
    (copy / "salts" / "gypsum.yaml").write_text(first + text, encoding="utf-8")
    return copy


def test_the_shipped_constants_are_inspected_when_no_folder_is_named() -> None:
    ran = here("inspect")
    assert (ran.code, ran.err) == (0, "")
    *findings, last = ran.out.splitlines()
    assert all(PLACE.fullmatch(line) for line in findings)
    assert LAST.fullmatch(last)
    assert last.startswith("0 errors, ")


def test_findings_come_sorted_with_their_place(damaged: Path) -> None:
    ran = here("inspect", str(damaged))
    assert ran.code == 1
    lines = ran.out.splitlines()
    assert any(
        line.startswith("mine/salts/gypsum.yaml:2:1: error read-duplicate-key: ") for line in lines
    )
    places = [PLACE.fullmatch(line) for line in lines[:-1]]
    keys = [(m[1], int(m[2]), int(m[3])) for m in places if m]
    assert len(keys) == len(lines) - 1
    assert keys == sorted(keys)
    counted = LAST.fullmatch(lines[-1])
    assert counted is not None
    assert sum(map(int, counted.groups())) == len(keys)


def test_json_has_the_same_findings(damaged: Path) -> None:
    text = here("inspect", str(damaged)).out.splitlines()
    ran = here("inspect", str(damaged), "--json")
    assert ran.code == 1
    assert list(ran.json) == ["findings", "errors", "doubts", "notes"]
    assert len(ran.json["findings"]) == len(text) - 1
    levels = [finding["level"] for finding in ran.json["findings"]]
    for level in ("error", "doubt", "note"):
        assert ran.json[f"{level}s"] == levels.count(level)
    assert list(ran.json["findings"][0]) == [
        "level", "code", "file", "line", "column", "found", "cure",
    ]  # fmt: skip


def test_summary_counts_what_the_files_hold() -> None:
    """Counted again from the text of the files, without the reader."""
    texts = [p.read_text("utf-8") for p in sorted((ROOT / "constants" / "salts").glob("*.yaml"))]
    ran = here("inspect", "--summary", "--json")
    assert ran.code == 0
    assert ran.json["salts"] == len(texts)
    determinations = [t.split("\ndeterminations:")[1].split("\nlaws:")[0] for t in texts]
    laws = [t.split("\nlaws:")[1].split("\nentered:")[0] for t in texts]
    ids = [len(re.findall(r"(?m)^  - id: ", t)) for t in determinations]
    assert ran.json["determinations"] == sum(ids) == sum(ran.json["evidence"].values())
    kinds = [kind for t in laws for kind in re.findall(r"(?m)^    kind: (\S+)", t)]
    assert ran.json["laws"] == {kind: kinds.count(kind) for kind in set(kinds)}
    assert sum(ran.json["evidence_of_chosen"].values()) == len(texts)
    seen = [word for t in determinations for word in re.findall(r"evidence: ([a-z-]+)", t)]
    assert ran.json["evidence"] == {word: seen.count(word) for word in set(seen)}
    assert f"salts                 {len(texts)}\n" in here("inspect", "--summary").out


def test_the_summary_of_nothing_sound_is_no_division_by_zero(tmp_path: Path) -> None:
    own = house(tmp_path / "own", "x.yaml", "id: [\n")
    ran = here("inspect", str(own), "--summary")
    assert ran.code == 1
    assert ran.out.startswith("salts                 0\n")


@pytest.mark.parametrize("name", ["missing", "file", "empty", "/", "x" * 300, "loop"])
def test_a_folder_that_is_none_gets_one_line(tmp_path: Path, name: str) -> None:
    (tmp_path / "file").write_text("")
    (tmp_path / "empty").mkdir()
    (tmp_path / "loop").symlink_to(tmp_path / "loop")
    for arguments in (["inspect"], ["value", "PbSO4", "--at", "25", "--constants"]):
        ran = here(*arguments, str(tmp_path / name))
        assert (ran.code, ran.out) == (2, "")
        assert one_line(ran.err)


def test_folders_of_one_name_are_told_apart_first() -> None:
    ran = here("inspect", "--constants", str(ROOT / "constants"))
    assert (ran.code, one_line(ran.err)) == (2, True)
    assert "rename one" in ran.err


def test_a_folder_that_cannot_be_listed_is_no_empty_folder(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Also where the tests run as an account that may read everything."""
    own = house(tmp_path / "own", "gypsum.yaml", shipped("gypsum"))
    real = asking.os.scandir

    def scandir(path: object) -> object:
        if str(path).endswith("own/salts"):
            raise PermissionError(13, "Permission denied", str(path))
        return real(path)  # type: ignore[arg-type]

    monkeypatch.setattr(asking.os, "scandir", scandir)
    ran = here("inspect", "--constants", str(own))
    assert (ran.code, one_line(ran.err)) == (2, True)
    assert "cannot be read: Permission denied" in ran.err


def test_issue_writes_a_site_and_says_where(tmp_path: Path) -> None:
    target = tmp_path / "site"
    ran = here("issue", "--out", str(target), "--on", "2026-12-01")
    assert ran.code == 0
    collection, first_page = ran.out.splitlines()
    assert check(collection.removeprefix("collection "))
    assert first_page == str(target / "index.html")
    assert Path(first_page).is_file()
    stages = [line.split()[0] for line in ran.err.splitlines()]
    assert stages == ["inspected", "computed", "rendered", "wrote"]
    listed = (target / "MANIFEST.sha256").read_text().splitlines()
    for line in listed:
        digest, path = line.split("  ")
        assert hashlib.sha256((target / path).read_bytes()).hexdigest() == digest
    again = here("issue", "--out", str(target), "--on", "2026-12-01")
    assert "(unchanged)" in again.err
    assert again.out == ran.out


@pytest.fixture
def one_page(monkeypatch: pytest.MonkeyPatch) -> None:
    """A site of one page, for what does not depend on the pages."""
    monkeypatch.setattr(
        issue, "build_site", lambda _reference, _findings, on: {"index.html": on.encode()}
    )


@pytest.mark.usefixtures("one_page")
def test_an_error_stops_the_issue_and_leaves_the_old_site(tmp_path: Path) -> None:
    target = tmp_path / "site"
    assert here("issue", "--out", str(target)).code == 0
    before = tree(target)
    own = house(tmp_path / "house", "gypsum.yaml", shipped("gypsum") + "id: again\n")
    ran = here("issue", "--out", str(target), "--constants", str(own))
    assert ran.code == 1
    assert "house/salts/gypsum.yaml:" in ran.out
    assert "error read-duplicate-key" in ran.out
    assert tree(target) == before


@pytest.mark.usefixtures("one_page")
def test_the_date_comes_from_the_option_then_the_environment_then_the_data(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def dated(*arguments: str) -> str:
        ran = here("issue", "--out", str(tmp_path / "site"), *arguments)
        assert ran.code == 0
        date = (tmp_path / "site" / "index.html").read_text()
        assert f"dated {date}\n" in ran.err
        return date

    monkeypatch.delenv("SOURCE_DATE_EPOCH", raising=False)
    newest = max(
        date
        for path in (ROOT / "constants" / "salts").glob("*.yaml")
        for date in re.findall(r"\bon: (\d{4}-\d{2}-\d{2})", path.read_text("utf-8"))
    )
    assert dated() == newest
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "951782399")  # 2000-02-28 23:59:59 UTC
    assert dated() == "2000-02-28"
    assert dated("--on", "2026-12-24") == "2026-12-24"


@pytest.mark.parametrize("on", ["", "today", "20261201", "2026-W49-2", "2026-02-30", "1.12.2026"])
def test_what_is_no_date_is_refused(tmp_path: Path, on: str) -> None:
    ran = here("issue", "--out", str(tmp_path / "site"), f"--on={on}")
    assert (ran.code, one_line(ran.err)) == (2, True)
    assert not (tmp_path / "site").exists()


@pytest.mark.parametrize("epoch", ["x", "-1", "1e9", "9" * 12, "9" * 400])
def test_what_is_no_epoch_is_refused(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, epoch: str
) -> None:
    monkeypatch.setenv("SOURCE_DATE_EPOCH", epoch)
    ran = here("issue", "--out", str(tmp_path / "site"))
    assert (ran.code, one_line(ran.err)) == (2, True)


@pytest.mark.usefixtures("one_page")
def test_a_file_and_a_full_folder_are_no_targets(tmp_path: Path) -> None:
    (tmp_path / "letter.txt").write_text("dear reader")
    for target in (tmp_path / "letter.txt", tmp_path, tmp_path / "letter.txt" / "below"):
        ran = here("issue", "--out", str(target))
        assert ran.code == 2
        assert ran.err.splitlines()[-1].startswith("sparingly: ")
    assert tree(tmp_path) == {"letter.txt": b"dear reader"}


def test_ctrl_c_ends_with_130_and_one_line(tmp_path: Path) -> None:
    target = tmp_path / "site"
    with program(["issue", "--out", str(target)]) as process:
        assert process.stderr is not None
        assert process.stderr.readline().startswith("inspected ")
        process.send_signal(signal.SIGINT)
        _, err = process.communicate(timeout=60)
    assert process.returncode == 130
    assert err.splitlines()[-1] == "sparingly: stopped"
    assert "Traceback" not in err
    assert list(tmp_path.iterdir()) == []


def test_a_reader_who_leaves_is_no_fault() -> None:
    for arguments in (["--help"], ["inspect", "--json"], ["value", "PbSO4", "--at", "37"]):
        with program(arguments) as process:
            assert process.stdout is not None
            assert process.stderr is not None
            process.stdout.close()
            err = process.stderr.read()
        assert (process.returncode, err) == (0, "")


def test_an_answer_that_cannot_be_written_is_said() -> None:
    with Path("/dev/full").open("w") as full:
        ran = there("value", "PbSO4", "--at", "37", stdout=full)
    assert ran.code == 2
    assert one_line(ran.err)
    assert "No space left" in ran.err


def test_closed_streams_do_no_harm() -> None:
    command = f"exec {sys.executable} -m builder value PbSO4 --at 37 >&- 2>&-"
    assert subprocess.run(["sh", "-c", command], cwd=ROOT, check=False).returncode == 0
