"""Contract 7: the stages, and that converting never looks at a chosen solubility product."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path

import pytest
from small_tree import small_tree

from builder.collection.inspection import inspect
from builder.collection.records import Collection
from builder.collection.reference import build_reference

CHEM = Path(__file__).resolve().parents[2] / "builder"
ORDER = ("read", "chem", "collection", "site", "commands")


@pytest.fixture(scope="module")
def collection() -> Collection:
    return inspect([small_tree() / "constants"]).collection


def test_dependencies_point_downwards() -> None:
    """chem knows neither read nor collection; nothing knows what stands above it."""
    allowed = {"read": {"read"}, "chem": {"chem"}, "collection": {"read", "chem", "collection"},
               "site": set(ORDER) - {"commands"}, "commands": set(ORDER)}  # fmt: skip
    for part, below in allowed.items():
        for module in (CHEM / part).glob("*.py"):
            used = set(re.findall(r"^from builder\.(\w+)", module.read_text("utf-8"), re.M))
            assert used <= below, f"{module.name} uses {sorted(used - below)}"


def test_converted_solubilities_do_not_move_with_the_chosen_constant(
    collection: Collection,
) -> None:
    """Another choice for gypsum, the same constants from its measured solubilities."""
    before = build_reference(collection).salts["gypsum"].reported
    salt = collection.salts["gypsum"]
    other = replace(salt, choice=replace(salt.choice, determination="nordstrom-1990"))
    salts = {**collection.salts, "gypsum": other}
    after = build_reference(replace(collection, salts=salts)).salts["gypsum"].reported
    measured = [n for n, d in salt.determinations.items()
                if d.figure is not None and d.figure.quantity == "solubility"]  # fmt: skip
    assert len(measured) >= 3
    assert [before[n].log10_k for n in measured] == [after[n].log10_k for n in measured]


def test_a_held_out_choice_is_replaced_by_the_written_order(collection: Collection) -> None:
    """Without its chosen value lead sulfate falls back on the best of the others, not on it."""
    held = {"lead-sulfate": frozenset({"powell-2009"})}
    evaluated = build_reference(collection, without=held).salts["lead-sulfate"]
    assert evaluated.chosen.determination.id != "powell-2009"
    assert "powell-2009" not in evaluated.reported
    kind = collection.sources[evaluated.chosen.determination.citation.source].kind
    assert kind in ("critical-evaluation", "primary-measurement", "formation-table", "compilation")
