"""A salt is found by whatever it is called, and never by a guess."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st
from running import shipped_inspection

from builder.collection.names import Match, Named, Names, electrolyte_names, salt_names

INVENTED = Names(
    [
        Named("calcite", "CaCO3", ("calcium carbonate, calcite",)),
        Named("aragonite", "CaCO3", ("calcium carbonate, aragonite",)),
        Named("gypsum", "CaSO4·2H2O", ("calcium sulfate dihydrate", "10101-41-4")),
        Named("plaster", "CaSO4·0.5H2O", ("calcium sulfate hemihydrate",)),
        Named("lead-iodide", "PbI2", ("lead(II) iodide",)),
        Named("lead-fluoride", "PbF2", ("lead(II) fluoride",)),
    ]
)
WITH_ANHYDRITE = Names([Named("gypsum", "CaSO4·2H2O", ()), Named("anhydrite", "CaSO4", ())])


@pytest.fixture(scope="module")
def salts() -> Names:
    return salt_names(shipped_inspection().collection)


@pytest.mark.parametrize(
    ("text", "id"),
    [
        ("lead-sulfate", "lead-sulfate"),
        ("PbSO4", "lead-sulfate"),
        ("pbso4", "lead-sulfate"),
        ("PBSO4", "lead-sulfate"),
        ("PbSO₄", "lead-sulfate"),
        ("PbSO4(s)", "lead-sulfate"),
        ("  Lead (II) Sulphate ", "lead-sulfate"),
        ("Anglesite", "lead-sulfate"),
        ("7446-14-2", "lead-sulfate"),
        ("7446−14−2", "lead-sulfate"),
        ("CaSO4.2H2O", "gypsum"),
        ("CaSO₄·2H₂O", "gypsum"),
        ("CaSO4*2H2O", "gypsum"),
        ("CaSO4 2H2O", "gypsum"),
        ("caso4 · 2h2o", "gypsum"),
        ("CaSO4", "anhydrite"),
        ("Mg(OH)2", "brucite"),
        ("Mg[OH]2", "brucite"),
        ("thallous chloride", "thallium-chloride"),
    ],
)
def test_any_writing_is_found(salts: Names, text: str, id: str) -> None:
    assert salts.find(text) == Match(id)


def test_solids_of_one_formula_are_asked_for() -> None:
    assert INVENTED.find("CaCO3") == Match(None, solids=("calcite", "aragonite"))
    assert INVENTED.find("caco3") == Match(None, solids=("calcite", "aragonite"))
    assert INVENTED.find("calcite") == Match("calcite")


def test_hydrates_are_offered_only_where_no_anhydrous_solid_is() -> None:
    assert INVENTED.find("CaSO4") == Match(None, solids=("gypsum", "plaster"))
    assert WITH_ANHYDRITE.find("CaSO4") == Match("anhydrite")
    assert INVENTED.find("CaSO4·½H2O") == Match("plaster")
    assert INVENTED.find("CaSO4·3H2O").solids == ()


def test_a_slip_of_one_letter_is_a_question() -> None:
    """PbF2 and PbI2 are one letter apart: neither may stand for the other."""
    slip = INVENTED.find("calcitte")
    assert slip.id is None
    assert "calcite" in slip.suggestions
    assert INVENTED.find("PbCl2").id is None
    assert INVENTED.find("lead").suggestions == ("lead-iodide", "lead-fluoride")


@pytest.mark.parametrize("text", ["", " ", "Pb^2+", "Ca2+", "x" * 10_000, "\u202e", "½", "·" * 300])
def test_what_names_nothing_finds_nothing(text: str) -> None:
    assert INVENTED.find(text).id is None
    assert INVENTED.find(text).solids == ()


@given(st.text())
def test_find_never_raises(text: str) -> None:
    match = INVENTED.find(text)
    assert sum(map(bool, (match.id, match.solids, match.suggestions))) <= 1


def test_electrolytes_by_formula_and_name() -> None:
    names = electrolyte_names(shipped_inspection().collection)
    for text in ("Na2SO4", "na2so4", "Na₂SO₄", "sodium sulphate", "Sodium sulfate"):
        assert names.find(text) == Match("Na2SO4")
    assert names.find("(NH4)2SO4") == Match("(NH4)2SO4")
    assert names.find("Na2SO7").id is None
