"""Nothing that can be typed gives a traceback: an answer, or one clear line and exit code 2."""

from __future__ import annotations

import json
import math
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from running import here, one_line, there

from builder.commands.telling import json_text, number

WORDS = [
    "inspect", "value", "dissolve", "PbSO4", "gypsum", "CaSO4.2H2O", "37", "--at", "--at=25",
    "--with", "--with=NaCl=0.1mol/kg", "--json", "--textbook", "--summary", "--batch", "--", "-",
    "-h", "--help", "--version", "--constants", ".", "..", "-1", "--atx", "--a", "", "=", "@x",
]  # fmt: skip
# What a process can be given: no NUL, and no lone surrogates.
TEXT = st.text(st.characters(exclude_categories=["Cs"], exclude_characters="\0"), max_size=60)
NUMBERS = st.one_of(st.floats().map(str), st.integers().map(str), st.decimals().map(str))
AMOUNTS = st.builds(
    "{}={}{}".format,
    st.one_of(TEXT, st.sampled_from(["NaCl", "Na2SO4", "KI", "NH3", "HCl"])),
    NUMBERS,
    st.sampled_from(["mol/kg", "mol/L", "mg/L", "", " g/kg"]),
)
QUIETLY = settings(
    max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture]
)


@pytest.fixture(autouse=True)
def elsewhere(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Relative paths lead into an empty folder."""
    monkeypatch.chdir(tmp_path)


def answered(*arguments: str) -> None:
    ran = here(*arguments)
    assert ran.code in (0, 2)
    if ran.code == 2:
        assert one_line(ran.err)
        assert ran.err.rstrip("\n").isprintable()
        assert len(ran.err) < 1000
    else:
        assert ran.err == ""
        assert ran.out
    if ran.out.startswith("{"):
        json.loads(ran.out, parse_constant=pytest.fail)  # NaN and Infinity


@QUIETLY
@given(st.lists(st.one_of(st.sampled_from(WORDS), TEXT), max_size=7))
def test_any_arguments(arguments: list[str]) -> None:
    if "issue" not in arguments:
        answered(*arguments)


@QUIETLY
@given(TEXT, st.one_of(TEXT, NUMBERS))
def test_any_salt_and_temperature(salt: str, at: str) -> None:
    answered("value", f"--at={at}", "--json", "--", salt)
    answered("value", "gypsum", f"--at={at}", "--json")
    answered("dissolve", "gypsum", f"--at={at}")


@QUIETLY
@given(
    st.sampled_from(["PbSO4", "gypsum", "brucite", "AgCl", "PbI2"]),
    st.floats(-10, 110),
    st.lists(AMOUNTS, max_size=3),
    st.booleans(),
)
def test_any_addition(salt: str, at: float, added: list[str], textbook: bool) -> None:
    more = ["--textbook"] if textbook else []
    words = [f"--with={text}" for text in added]
    answered("dissolve", salt, f"--at={at:.3f}", *words, *more)
    answered("dissolve", salt, f"--at={at:.3f}", *words, *more, "--json")


@QUIETLY
@given(st.one_of(st.binary(max_size=200), TEXT.map(lambda t: f"salt,at,with\n{t}".encode())))
def test_any_batch_file(content: bytes) -> None:
    file = Path("batch.csv")
    file.write_bytes(content)
    for command in ("value", "dissolve"):
        ran = here(command, "--batch", str(file))
        assert ran.code in (0, 2)
        assert all(line.startswith("sparingly: ") for line in ran.err.splitlines())
        assert (ran.code == 2) == bool(ran.err)
        assert not (ran.err and ran.out)


@pytest.mark.parametrize(
    "arguments",
    [
        [],
        [""],
        ["value", "--", "--at"],
        ["valu", "PbSO4"],
        ["value", "x" * 100_000, "--at", "25"],
        ["value", "PbSO4", "--at", "\ud800".encode("utf-8", "surrogatepass").decode("latin-1")],
        ["value", "\u202ePbSO4\n\x1b[31m", "--at", "25"],
        ["dissolve", "PbSO4", "--at", "25", "--with"],
        ["dissolve", "PbSO4", "--at", "25", "--wit", "NaCl=1g/L"],
        ["inspect", "--nonsense"],
        ["issue", "--on"],
        ["issue", "extra"],
    ],
)
def test_odd_commands_as_a_program(arguments: list[str]) -> None:
    ran = there(*arguments)
    assert (ran.code, ran.out) == (2, "")
    assert one_line(ran.err)
    assert len(ran.err) < 1000


def test_bytes_that_are_no_text_as_a_program() -> None:
    ran = there("value", "\udcff\udcfe", "--at", "25", "--json")
    assert ran.code == 2
    assert one_line(ran.err)
    assert ran.json["solids"] == []


@pytest.mark.parametrize("x", [None, math.nan, math.inf, -math.inf])
def test_what_is_no_number_is_null(x: float | None) -> None:
    assert json_text(number(x)) == "null\n"


@pytest.mark.parametrize(
    "arguments", [["--help"], ["-h"], ["--version"], ["value", "-h"], ["issue", "--help"]]
)
def test_help_is_an_answer(arguments: list[str]) -> None:
    ran = here(*arguments)
    assert (ran.code, ran.err) == (0, "")
    assert "sparingly" in ran.out
