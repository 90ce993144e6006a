"""`--batch`: the same answers as one by one, and every wrong line named in one run."""

from __future__ import annotations

import csv
import io
from pathlib import Path

import pytest
from running import here, one_line

ROWS = [
    ("lead-sulfate", "37", ("Na2SO4=0.05mol/kg",)),
    ("AgCl", "298.15 K", ("NaCl=0.01mol/kg", "KNO3=0.1mol/kg")),
    ("gypsum", "25", ()),
    ("brucite", "120", ()),
    ("TlCl", "20", ()),
]


def written(path: Path, text: str, encoding: str = "utf-8") -> str:
    path.write_bytes(text.encode(encoding))
    return str(path)


def table(out: str) -> list[dict[str, str]]:
    return list(csv.DictReader(io.StringIO(out)))


def cell(value: object) -> str | None:
    """What a JSON value that is no list looks like in a cell."""
    if isinstance(value, list):
        return None
    return "" if value is None else value if isinstance(value, str) else repr(value)


@pytest.mark.parametrize("textbook", [[], ["--textbook"]])
def test_dissolve_batch_equals_single_answers(tmp_path: Path, textbook: list[str]) -> None:
    lines = ["salt,at,with", *(f"{s},{t},{'; '.join(w)}" for s, t, w in ROWS)]
    file = written(tmp_path / "rows.csv", "\n".join(lines) + "\n")
    ran = here("dissolve", "--batch", file, *textbook)
    assert (ran.code, ran.err) == (0, "")
    answers = table(ran.out)
    assert len(answers) == len(ROWS)
    for row, (salt, at, added) in zip(answers, ROWS, strict=True):
        words = [word for part in added for word in ("--with", part)]
        single = here("dissolve", salt, "--at", at, *words, "--json", *textbook).json
        assert list(row) == list(single)
        for key, value in single.items():
            if isinstance(value, list):
                assert row[key].count(";") == max(len(value) - 1, 0)
                assert all(str(item["form"]) in row[key] for item in value if "form" in item)
            else:
                assert row[key] == cell(value)
    assert answers[3]["state"] == "refused"


def test_value_batch_equals_single_answers(tmp_path: Path) -> None:
    lines = ["at,SALT ", *(f"{t},{s}" for s, t, _ in ROWS)]
    ran = here("value", "--batch", written(tmp_path / "rows.csv", "\n".join(lines)))
    assert ran.code == 0
    for row, (salt, at, _) in zip(table(ran.out), ROWS, strict=True):
        single = here("value", salt, "--at", at, "--json").json
        assert row == {**{key: cell(value) for key, value in single.items()},
                       "reason": single.get("reason", "")}  # fmt: skip


def test_what_spreadsheets_write_is_read(tmp_path: Path) -> None:
    plain = written(tmp_path / "plain.csv", "salt,at,with\ngypsum,25,\nAgCl,25,NaCl=0.01mol/kg\n")
    sheet = written(
        tmp_path / "sheet.csv",
        'salt,at,with\r\n"gypsum","25",\r\n,,\r\nAgCl,25,"NaCl=0.01mol/kg"\r\n',
        "utf-8-sig",
    )
    assert here("dissolve", "--batch", sheet).out == here("dissolve", "--batch", plain).out


def test_all_wrong_lines_are_named_and_nothing_is_computed(tmp_path: Path) -> None:
    file = written(
        tmp_path / "rows.csv",
        "salt,at,with\n"
        "gypsum,25,\n"
        "no such salt,25,\n"
        "gypsum,warm,\n"
        "gypsum,37,5,NaCl=0.1mol/kg\n"
        "gypsum,,\n"
        "gypsum,25,NaCl=0.1\n"
        f"{'x' * 1001},25,\n",
    )
    ran = here("dissolve", "--batch", file)
    assert (ran.code, ran.out) == (2, "")
    lines = ran.err.splitlines()
    named = [int(line.split(", line ")[1].split(":")[0]) for line in lines]
    assert named == [3, 4, 5, 6, 7, 8]
    assert all(line.startswith("sparingly: ") for line in lines)
    assert "write decimals with a point" in lines[2]


@pytest.mark.parametrize(
    ("content", "cure"),
    [
        (b"salt;at\ngypsum;37,5\n", "a point in the numbers"),
        (b"salt\tat\ngypsum\t37\n", "commas between the columns"),
        (b"salt,when\ngypsum,25\n", "the columns are salt, at"),
        (b"salt\ngypsum\n", "no column at"),
        (b"salt,at,at\ngypsum,25,25\n", "twice"),
        (b"salt,at,with\ngypsum,25,\n", "a column 'with'"),
        (b"", "has no rows"),
        (b"salt,at\n", "has no rows"),
        (b"salt,at\ngypsum,\xff\n", "UTF-8"),
        (b'salt,at\n"gypsum,25\n', "not CSV"),
        (b"salt,at\ngypsum," + b"9" * 200_000, "not CSV"),
        (b"salt,at\n" + b"gypsum,25\n" * 1_100_000, "larger than 10 MB"),
    ],
)
def test_a_file_that_is_none_gets_one_line(tmp_path: Path, content: bytes, cure: str) -> None:
    file = tmp_path / "rows.csv"
    file.write_bytes(content)
    ran = here("value", "--batch", str(file))
    assert (ran.code, ran.out) == (2, "")
    assert one_line(ran.err)
    assert cure in ran.err


def test_unreadable_files_get_one_line(tmp_path: Path) -> None:
    for path in (tmp_path, tmp_path / "missing.csv", Path("/proc/self/mem")):
        ran = here("value", "--batch", str(path))
        assert ran.code == 2
        assert one_line(ran.err)


@pytest.mark.parametrize("more", [["gypsum"], ["--at", "25"], ["--json"], ["--with", "NaCl=1g/L"]])
def test_batch_stands_alone(tmp_path: Path, more: list[str]) -> None:
    file = written(tmp_path / "rows.csv", "salt,at\ngypsum,25\n")
    ran = here("dissolve", "--batch", file, *more)
    assert (ran.code, one_line(ran.err)) == (2, True)
    assert "leave out" in ran.err
