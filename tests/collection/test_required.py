"""The salts a laboratory must find, and how much the collection holds.

The list (required.csv) was set beforehand; it is not made from the collection.
"""

from __future__ import annotations

import csv
from pathlib import Path

import pytest
import yaml

from builder.chem.curve import at
from builder.collection.choice import Evaluated
from builder.collection.folders import shipped_folder
from builder.collection.inspection import inspect
from builder.collection.reference import Reference

Row = dict[str, str]

with (Path(__file__).parent / "required.csv").open(encoding="utf-8", newline="") as _file:
    REQUIRED: list[Row] = list(csv.DictReader(_file))


@pytest.fixture(scope="module")
def reference() -> Reference:
    found = inspect([shipped_folder("constants")])
    assert found.reference is not None, [f for f in found.findings if f.level == "error"]
    return found.reference


@pytest.fixture(scope="module")
def hazards() -> set[str]:
    path = shipped_folder("constants") / "hazards" / "hazards.yaml"
    return {h["id"] for h in yaml.safe_load(path.read_text("utf-8"))["hazards"]}


def test_the_list_is_whole() -> None:
    assert len(REQUIRED) == len({row["id"] for row in REQUIRED}) == 120


@pytest.mark.parametrize("row", REQUIRED, ids=lambda r: r["id"])
def test_required_salt(row: Row, reference: Reference, hazards: set[str]) -> None:
    """It exists under its formula, with all a reader needs, and gives a value at 25 °C."""
    assert row["id"] in reference.salts
    path = shipped_folder("constants") / "salts" / f"{row['id']}.yaml"
    salt = yaml.load(path.read_text("utf-8"), yaml.BaseLoader)
    assert salt["formula"] == row["formula"]
    for key in ("name", "reaction", "solid"):
        assert salt[key] not in ("", "none", "not stated"), key
    assert salt["cas"] == "none" or salt["cas"].count("-") == 2
    assert salt["hazard"] == "none" or salt["hazard"] in hazards
    evaluated = reference.salts[row["id"]]
    assert evaluated.law.curve is not None, evaluated.law.reason
    value = at(evaluated.law.curve, 25.0)
    assert value.log10_k is not None, value
    assert evaluated.chosen.log10_k is not None
    assert value.log10_k == pytest.approx(evaluated.chosen.log10_k, abs=0.25)


def _gives_a_value(evaluated: Evaluated) -> bool:
    curve = evaluated.law.curve
    return curve is not None and at(curve, 25.0).log10_k is not None


def test_how_much_there_is(reference: Reference) -> None:
    salts = reference.salts.values()
    assert len(salts) >= 250
    with_law = [e for e in salts if _gives_a_value(e)]
    assert len(with_law) >= 160
    not_estimated = [e for e in with_law if e.law.law.citation.evidence != "estimated"]
    assert len(not_estimated) >= 160
    fitted = [e for e in with_law if e.law.law.kind in ("expression", "points")]
    assert len(fitted) >= 40


def test_how_many_salts_have_two_families(reference: Reference) -> None:
    """Families of comparable values; tables that copy one another are one."""
    two = [e for e in reference.salts.values() if len(e.corroboration.families) > 1]
    assert len(two) >= 115


def test_recalled_values_are_chosen_with_a_reason(reference: Reference) -> None:
    """No recalled value stands before one that was read or computed without a written reason."""
    short = []
    seen = 0
    for salt_id, evaluated in reference.salts.items():
        if evaluated.chosen.determination.citation.evidence != "recalled":
            continue
        others = [
            r
            for r in evaluated.reported.values()
            if r.comparable
            and r.log10_k is not None
            and r.determination.citation.evidence in ("open-copy", "computed")
        ]
        seen += bool(others)
        if others and len(evaluated.salt.choice.reason) < 40:
            short.append(salt_id)
    assert seen, "no salt is in this position: the test shows nothing"
    assert not short
