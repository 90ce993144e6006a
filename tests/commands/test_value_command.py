"""`value`: keys, exit codes, and numbers that follow from the printed ones by a few lines."""

from __future__ import annotations

import math
import re
from pathlib import Path

import pytest
from running import here, house, one_line, shipped, there

KEYS = [
    "salt", "formula", "temperature_c", "log10_k", "standard_uncertainty", "lower_95", "upper_95",
    "state", "beyond_by_k", "determination", "law", "source",
]  # fmt: skip


def test_keys_and_numbers_at_the_temperature_of_the_source() -> None:
    """Powell et al. 2009, recommended value of PbSO4(s): log10 K = -7.80 ± 0.05 (95 %)."""
    ran = here("value", "PbSO4", "--at", "25", "--json")
    assert ran.code == 0
    assert list(ran.json) == KEYS
    answer = ran.json
    u = math.hypot(0.05 / 1.96, 0.01 / math.sqrt(12))  # the ±, and the last printed digit
    assert answer["log10_k"] == -7.80
    assert answer["standard_uncertainty"] == pytest.approx(u, rel=1e-9)
    assert answer["lower_95"] == pytest.approx(10 ** (-7.80 - 1.96 * u), rel=1e-9)
    assert answer["upper_95"] == pytest.approx(10 ** (-7.80 + 1.96 * u), rel=1e-9)
    assert (answer["salt"], answer["formula"]) == ("lead-sulfate", "PbSO4")
    assert (answer["state"], answer["beyond_by_k"]) == ("within-range", 0.0)
    assert (answer["determination"], answer["source"]) == ("powell-2009", "powell-2009")


def test_states_beside_the_range_are_no_errors() -> None:
    """The law of lead sulfate is given for 0 to 60 °C and can be carried 40 K."""
    beyond = here("value", "PbSO4", "--at", "70", "--json")
    assert (beyond.code, beyond.json["state"], beyond.json["beyond_by_k"]) == (
        0, "beyond-range", 10.0,
    )  # fmt: skip
    for t in ("-5", "100.5", "1000", "-400", "99999999999999999999"):
        ran = here("value", "PbSO4", "--at", t, "--json")
        assert (ran.code, ran.json["state"]) == (0, "refused")
        assert list(ran.json) == [*KEYS, "reason"]
        assert ran.json["log10_k"] is ran.json["lower_95"] is None
        assert "outside 0 to 100 °C" in ran.json["reason"]


@pytest.mark.parametrize(
    "at",
    ["37", "37.0", "37C", "37 C", "37°C", "37 °C", "37 ℃", "310.15 K", "310.15K", " 37 ", "+37"],
)
def test_writings_of_a_temperature(at: str) -> None:
    assert here("value", "gypsum", "--at", at, "--json").json["temperature_c"] == 37.0


@pytest.mark.parametrize(
    ("at", "cure"),
    [
        ("37,5", "write a point"),
        ("warm", "no temperature"),
        ("", "no temperature"),
        ("98.6 F", "degrees Celsius or kelvin"),
        ("1e2", "no temperature"),
        ("nan", "no temperature"),
        ("inf", "no temperature"),
        ("٣٧", "no temperature"),
        ("9" * 400, "no temperature"),
    ],
)
def test_what_is_no_temperature_is_refused_in_one_line(at: str, cure: str) -> None:
    ran = here("value", "gypsum", "--at", at)
    assert (ran.code, ran.out) == (2, "")
    assert one_line(ran.err)
    assert cure in ran.err


def test_unknown_salt_is_answered_with_the_nearest() -> None:
    ran = here("value", "lead-sulfat", "--at", "25", "--json")
    assert ran.code == 2
    assert list(ran.json) == ["error", "solids"]
    assert ran.json["solids"] == ["lead-sulfate"]
    assert one_line(ran.err)
    assert "perhaps lead-sulfate (PbSO4)?" in ran.err


def _second_lead_sulfate() -> str:
    """An invented second solid of the formula, as a house might add it."""
    text = shipped("lead-sulfate")
    for key, value in {
        "id": "lead-sulfate-two",
        "name": "lead(II) sulfate, invented second solid",
        "other_names": "[]",
        "mineral": "none",
        "cas": "none",
    }.items():
        text = re.sub(rf"(?m)^{key}: .*$", f"{key}: {value}", text)
    return text


def test_several_solids_of_one_formula_are_asked_for(tmp_path: Path) -> None:
    own = house(tmp_path / "house", "lead-sulfate-two.yaml", _second_lead_sulfate())
    ran = here("value", "PbSO4", "--at", "25", "--json", "--constants", str(own))
    assert ran.code == 2
    assert ran.json["solids"] == ["lead-sulfate", "lead-sulfate-two"]
    assert "lead-sulfate-two (PbSO4)" in ran.json["error"]
    named = here("value", "lead-sulfate-two", "--at", "25", "--json", "--constants", str(own))
    assert (named.code, named.json["log10_k"]) == (0, -7.80)


def test_the_constants_of_a_house_are_laid_over_the_shipped_ones(tmp_path: Path) -> None:
    text = shipped("lead-sulfate").replace('as: "-7.80"', 'as: "-7.70"')
    own = house(tmp_path / "house", "lead-sulfate.yaml", text)
    ran = here("value", "PbSO4", "--at", "25", "--json", "--constants", str(own))
    assert ran.json["log10_k"] == -7.70


def test_wrong_constants_end_with_1_and_their_findings(tmp_path: Path) -> None:
    own = house(tmp_path / "house", "lead-sulfate.yaml", "id: lead-sulfate\nid: again\n")
    for command in ("value", "dissolve"):
        ran = here(command, "PbSO4", "--at", "25", "--json", "--constants", str(own))
        assert ran.code == 1
        assert list(ran.json) == ["error", "solids"]
        assert "house/salts/lead-sulfate.yaml:2:1: error read-duplicate-key" in ran.err


def test_text_for_people_has_the_range_in_words_and_a_typographic_minus() -> None:
    out = here("value", "PbSO4", "--at", "25").out
    assert "log10 K        −7.800 ± 0.026 (one standard deviation)\n" in out
    assert "within the range of its law, 0 to 60 °C" in out
    assert "stated by the source" in out
    assert "10 K beyond the range of its law" in here("value", "PbSO4", "--at", "70").out
    assert "refused" in here("value", "PbSO4", "--at", "-5").out
    assert "−5 °C is outside" in here("value", "PbSO4", "--at", "-5").out


def test_json_is_ascii() -> None:
    for t in ("25", "-5"):
        assert here("value", "gypsum", "--at", t, "--json").out.isascii()


def test_as_a_program_in_a_terminal_without_unicode() -> None:
    bare = {
        "LC_ALL": "C",
        "PYTHONUTF8": "0",
        "PYTHONCOERCECLOCALE": "0",
        "PYTHONIOENCODING": "ascii",
    }
    ran = there("value", "gypsum", "--at", "25", env=bare)
    assert (ran.code, ran.err) == (0, "")
    assert ran.out.startswith("calcium sulfate dihydrate, CaSO₄·2H₂O (gypsum), at 25 °C\n")
