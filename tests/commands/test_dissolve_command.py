"""`dissolve`: keys, the lead sulfate that must come out right, and answers refused in words."""

from __future__ import annotations

import math
import re

import pytest
from running import Ran, here, one_line

KEYS = [
    "salt", "temperature_c", "solubility_mol_per_kg", "solubility_mol_per_l", "solubility_g_per_l",
    "solubility_g_per_l_anhydrous", "forms", "ionic_strength", "activity_model", "ph",
    "standard_uncertainty_log10", "textbook_mol_per_kg", "state", "reason", "lower_95", "upper_95",
    "metal", "metal_mg_per_kg", "metal_mg_per_l", "budget", "other_solids", "textbook_factor",
    "ph_held", "co2_bar", "titrant", "titrant_mol_per_kg", "formed",
]  # fmt: skip
BATH = ("lead-sulfate", "--at", "37", "--with", "Na2SO4=0.05mol/kg")
LEAD_G_PER_MOL = 207.2  # IUPAC abridged standard atomic weight


def dissolve(*arguments: str) -> Ran:
    return here("dissolve", *arguments)


def test_lead_sulfate_in_a_sulfate_bath() -> None:
    """Mostly ion pairs; 2.5 to 4.5 mg/kg with the pairs of Powell et al. 2009, recommended values.

    log10 K(PbSO4(aq)) = 2.72 makes the dissolved pair alone 10^(-7.8 + 2.72) mol/kg at 25 °C:
    1.7 mg/kg of lead, before any free ion.
    """
    ran = dissolve(*BATH, "--json")
    assert ran.code == 0
    answer = ran.json
    assert list(answer) == KEYS
    assert answer["state"] == "computed"
    assert answer["reason"] is None
    assert answer["metal"] == "Pb^2+"
    assert 2.5 <= answer["metal_mg_per_kg"] <= 4.5
    assert [list(form) for form in answer["forms"]] == [
        ["form", "share", "mol_per_kg", "activity_coefficient"]
    ] * len(answer["forms"])
    shares = {form["form"]: form["share"] for form in answer["forms"]}
    assert shares["PbSO4(aq)"] + shares["Pb(SO4)2^2-"] > 0.5
    assert math.fsum(s for s in shares.values() if s is not None) == pytest.approx(1.0)
    assert shares["Na^+"] is None
    assert answer["solubility_mol_per_kg"] * LEAD_G_PER_MOL * 1e3 == pytest.approx(
        answer["metal_mg_per_kg"], rel=1e-6
    )
    half = 1.96 * answer["standard_uncertainty_log10"]
    assert answer["lower_95"] == pytest.approx(answer["solubility_mol_per_kg"] * 10**-half)
    assert answer["upper_95"] == pytest.approx(answer["solubility_mol_per_kg"] * 10**half)
    assert answer["budget"][0]["share"] >= answer["budget"][-1]["share"]


def test_the_textbook_is_wrong_on_the_unsafe_side() -> None:
    """s (0.05 + s) = K by the quadratic formula, K the answer of `value`."""
    ran = dissolve(*BATH, "--textbook", "--json")
    answer = ran.json
    assert (ran.code, list(answer)) == (0, KEYS)
    k = 10 ** here("value", "lead-sulfate", "--at", "37", "--json").json["log10_k"]
    s = (-0.05 + math.sqrt(0.05**2 + 4 * k)) / 2
    assert answer["solubility_mol_per_kg"] == pytest.approx(s, rel=1e-6)
    assert answer["metal_mg_per_kg"] < 1.0
    assert answer["activity_model"] == "ideal"
    assert {form["form"] for form in answer["forms"]} == {"Pb^2+", "SO4^2-", "Na^+", "H^+", "OH^-"}
    assert {form["activity_coefficient"] for form in answer["forms"]} == {1.0}
    assert answer["standard_uncertainty_log10"] is answer["lower_95"] is None
    full = dissolve(*BATH, "--json").json
    assert full["textbook_mol_per_kg"] == answer["solubility_mol_per_kg"]
    factor = full["solubility_mol_per_kg"] / answer["solubility_mol_per_kg"]
    assert full["textbook_factor"] == pytest.approx(factor, rel=1e-8)
    assert answer["textbook_factor"] == full["textbook_factor"]


def test_hydrate_counted_with_and_without_its_water() -> None:
    """CaSO4·2H2O 172.17 g/mol, CaSO4 136.14 g/mol."""
    answer = dissolve("gypsum", "--at", "25", "--json").json
    ratio = answer["solubility_g_per_l"] / answer["solubility_g_per_l_anhydrous"]
    assert ratio == pytest.approx(172.17 / 136.14, rel=1e-4)


def test_electrolyte_in_any_writing_and_twice_adds_up() -> None:
    one = dissolve("AgCl", "--at", "25", "--with", "NaCl=0.02mol/kg", "--json").json
    for parts in (
        ("NaCl=0.01mol/kg", "NaCl=0.01mol/kg"),
        ("sodium chloride = 10 mmol/kg", "nacl=0.01mol/kg"),
    ):
        words = [word for part in parts for word in ("--with", part)]
        assert dissolve("AgCl", "--at", "25", *words, "--json").json == one
    grams = dissolve("AgCl", "--at", "25", "--with", "NaCl=1.1688g/kg", "--json").json
    assert grams["ionic_strength"] == pytest.approx(one["ionic_strength"], rel=1e-4)


@pytest.mark.parametrize(
    ("arguments", "reason"),
    [
        (("gypsum", "--at", "-5"), "outside 0 to 100 °C"),
        (("gypsum", "--at", "25", "--with", "NaCl=0.6mol/kg"), "the activity model ends"),
    ],
)
def test_refused_is_a_state_and_every_key_is_there(arguments: tuple[str, ...], reason: str) -> None:
    ran = dissolve(*arguments, "--json")
    assert (ran.code, list(ran.json)) == (0, KEYS)
    answer = ran.json
    assert answer["state"] == "refused"
    assert reason in answer["reason"]
    given = {key for key, value in answer.items() if value is not None}
    assert given == {"salt", "temperature_c", "state", "reason"}
    text = dissolve(*arguments)
    assert text.code == 0
    assert "refused  " in text.out


def test_textbook_of_what_the_model_cannot_carry_says_so() -> None:
    ran = dissolve("gypsum", "--at", "25", "--with", "NaCl=0.6mol/kg", "--textbook")
    assert ran.code == 0
    assert "full answer     refused: the ionic strength would pass" in ran.out


def test_a_solution_oversaturated_as_made_up_gives_its_solid_back() -> None:
    """0.01 mol/kg each of silver and chloride: nearly all of it comes out."""
    arguments = ("AgCl", "--at", "25", "--with", "AgNO3=0.01mol/kg", "--with", "NaCl=0.01mol/kg")
    answer = dissolve(*arguments, "--json").json
    assert -0.01 < answer["solubility_mol_per_kg"] < -0.0099
    assert answer["lower_95"] <= answer["solubility_mol_per_kg"] <= answer["upper_95"]
    assert answer["textbook_factor"] is None
    text = dissolve(*arguments).out
    assert "dissolves      nothing" in text
    assert "comes out      0.00998 mol/kg" in text
    assert "−0.0" not in text


def test_text_for_people() -> None:
    out = re.sub(r"\n {8,}", " ", dissolve(*BATH).out)  # lines unfolded
    for words in (
        "at 37 °C in 0.0500 mol/kg Na₂SO₄",
        "mg/L, 95 % between",
        "in a litre at 37 °C",
        "share of all Pb²⁺",
        "PbSO₄(aq)",
        "times the textbook's",
        "lead-sulfate-pair",
        "caution      Lead compounds",
    ):
        assert words in out


def test_other_solids_are_named() -> None:
    ran = dissolve("PbSO4", "--at", "25", "--with", "KI=0.1mol/kg")
    assert "lead(II) iodide (PbI₂) is oversaturated here" in ran.out


@pytest.mark.parametrize(
    ("added", "cure"),
    [
        ("Na2SO4", "write electrolyte=amount"),
        ("Na2SO4=", "write a number and a unit"),
        ("Na2SO4=0.05", "has no unit"),
        ("Na2SO4=0,05mol/kg", "write a point"),
        ("Na2SO4=5 spoons", "has the unit"),
        ("Na2SO4=50mol/kg", "more than water can hold"),
        ("Na2SO4=-1mol/kg", "no amount"),
        ("=1mol/kg", "no electrolyte is called ''"),
        ("Na2SO7=1mol/kg", "perhaps"),
        ("", "write electrolyte=amount"),
    ],
)
def test_wrong_additions_get_one_line_with_the_cure(added: str, cure: str) -> None:
    ran = dissolve("PbSO4", "--at", "25", f"--with={added}")
    assert (ran.code, ran.out) == (2, "")
    assert one_line(ran.err)
    assert cure in ran.err
