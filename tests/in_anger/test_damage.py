"""Damage a salt's file line by line: what is wrong is named within one line of the damage.

Every line of three shipped files is deleted, doubled, and its value overwritten, one at a time.
What can not be noticed there is listed below with its reason; a line of the list that is no longer
needed fails the test.
"""

from __future__ import annotations

import re
import shutil
from collections.abc import Iterator
from pathlib import Path
from typing import TypeAlias

import pytest
from small_tree import small_tree

from builder.collection.folders import read_folders
from builder.collection.inspection import inspect_files, inspect_salt, shipped_shapes
from builder.collection.records import Collection
from builder.read.findings import Finding
from builder.read.shape import Shapes

SALTS = ("lead-sulfate", "gypsum", "brucite")
JUNK = "zzz"

# kind of damage, line damaged, its number, what was found elsewhere
Missed: TypeAlias = tuple[str, str, int, list[Finding]]

# kind of damage, the line (regular expression), is it found elsewhere in the file, why not here
EXCEPTIONS: tuple[tuple[str, str, bool, str], ...] = (
    ("deleted", r" +note: .+", False, "a note may be there or not"),
    ("deleted", r" +reduced_with: .+", False, "most sources do not say what they reduced with"),
    ("overwritten", r"  - id: .+", False, "an id that nothing names is free"),
    ("overwritten", r"  - id: .+", True, "an id that is named: reported where it is named"),
    ("deleted", r"  - id: .+", True, "the first item of a list, without its dash, reads as one "
     "mapping until the second item begins"),
    ("deleted", r"laws:", True, "the laws join the list above and are missed where they would "
     "have ended"),
)  # fmt: skip


def damages(lines: list[str]) -> Iterator[tuple[str, str, int, list[str]]]:
    """(kind, line damaged, its number from 1 in the damaged file, lines of the damaged file)."""
    for i, line in enumerate(lines):
        yield "deleted", line, i + 1, lines[:i] + lines[i + 1 :]
        yield "doubled", line, i + 1, lines[: i + 1] + lines[i:]
        value = re.match(r"( *(?:- )?(?:[a-z_]+:)?)(?: |$)", line)
        assert value is not None, f"a line that is neither key nor item: {line}"
        yield "overwritten", line, i + 1, [*lines[:i], f"{value[1]} {JUNK}", *lines[i + 1 :]]


def missed(salt: str, collection: Collection, shapes: Shapes) -> Iterator[Missed]:
    """Damages of a salt's file without a finding within one line of them."""
    file = f"constants/salts/{salt}.yaml"
    lines = collection.files[file].decode("utf-8").splitlines()
    assert len(lines) > 40
    for kind, line, number, damaged in damages(lines):
        data = "\n".join([*damaged, ""]).encode()
        findings = list(inspect_salt(data, file, collection, shapes))
        # of two equal lines either may be called the damage
        ends = (number - 1, number + (2 if kind == "doubled" else 1))
        if not any(ends[0] <= f.place.line <= ends[1] for f in findings):
            yield kind, line, number, findings


def fits(one: Missed, exception: tuple[str, str, bool, str]) -> bool:
    kind, line, _, findings = one
    expected, pattern, elsewhere, _ = exception
    return kind == expected and bool(findings) == elsewhere and bool(re.fullmatch(pattern, line))


@pytest.fixture(scope="module")
def shapes() -> Shapes:
    return shipped_shapes()


@pytest.fixture(scope="module")
def shipped(shapes: Shapes) -> Collection:
    inspection = inspect_files(read_folders([small_tree() / "constants"], shapes), shapes)
    assert inspection.reference is not None
    return inspection.collection


@pytest.fixture(scope="module")
def unnoticed(shapes: Shapes, shipped: Collection) -> dict[str, list[Missed]]:
    return {salt: list(missed(salt, shipped, shapes)) for salt in SALTS}


@pytest.mark.parametrize("salt", SALTS)
def test_damage_is_named_where_it_is(salt: str, unnoticed: dict[str, list[Missed]]) -> None:
    unexplained = [one for one in unnoticed[salt] if not any(fits(one, e) for e in EXCEPTIONS)]
    assert unexplained == []


@pytest.mark.parametrize("exception", EXCEPTIONS, ids=lambda e: f"{e[0]}-{e[3][:40]}")
def test_exceptions_are_needed(
    exception: tuple[str, str, bool, str], unnoticed: dict[str, list[Missed]]
) -> None:
    assert any(fits(one, exception) for each in unnoticed.values() for one in each)


@pytest.mark.parametrize("salt", SALTS)
def test_an_undamaged_file_is_sound(salt: str, shapes: Shapes, shipped: Collection) -> None:
    file = f"constants/salts/{salt}.yaml"
    found = inspect_salt(shipped.files[file], file, shipped, shapes)
    assert [str(f) for f in found if f.level != "note"] == []


@pytest.mark.parametrize("number", ["1e300", "-9e99"])
@pytest.mark.parametrize("salt", SALTS)
def test_absurd_numbers_are_no_traceback(
    salt: str, number: str, shapes: Shapes, shipped: Collection
) -> None:
    """Every printed number in turn: absurd in any quantity, and named on its line."""
    file = f"constants/salts/{salt}.yaml"
    text = shipped.files[file].decode("utf-8")
    numbers = [m for m in re.finditer(r'"[-–]?[0-9][^"]*"', text) if ": " + m[0] in text]
    tried = 0
    for match in numbers:
        before = text[: match.start()]
        if not re.search(r"(as|plus_minus|one|inverse_t|log10_t): $", before):
            continue
        tried += 1
        data = f'{before}"{number}"{text[match.end() :]}'.encode()
        found = inspect_salt(data, file, shipped, shapes)
        assert any(f.place.line == before.count("\n") + 1 for f in found), match[0]
    assert tried >= 14


HOSTILE = (
    '"1e300"', '"-1e300"', '"0"', "0", "1e308", "-9.9", "[]", "{}", "none", "not stated", "exact",
    "true", "null", '"(((((((("', '"²"', "Pb^2+", "H2O", "H^+", '"H2O = H2O"', '"Pb9999999999SO4"',
    '"PbSO4 = PbSO4"', '"1e9 PbSO4 = 1e9 Pb^2+"', "2026-13-40", "[100, 150]", "[0, 0.001]",
    "lead-sulfate", "formation", "water", "SO4^2-", '"<script>"', '"9 ± 9e99"',
)  # fmt: skip


def test_hostile_values_are_no_traceback(shapes: Shapes, tmp_path: Path) -> None:
    """Every value of the small invented collection of tests/reading in turn, in every file."""
    small = Path(__file__).resolve().parent.parent / "reading" / "small"
    folder = Path(shutil.copytree(small, tmp_path / "small"))
    tried = answered = 0
    for path in sorted(folder.rglob("*.yaml")):
        text = path.read_text(encoding="utf-8")
        for match in re.finditer(r'(?<=: )(?:"[^"]*"|[^\s{}\[\],"][^{}\[\],\n]*)', text):
            junk = HOSTILE[tried % len(HOSTILE)]
            tried += 1
            path.write_text(text[: match.start()] + junk + text[match.end() :], encoding="utf-8")
            answered += bool(inspect_files(read_folders([folder], shapes), shapes).findings)
        path.write_text(text, encoding="utf-8")
    assert tried >= 250
    assert answered > 0.7 * tried  # the others are free texts, and numbers that may be so
