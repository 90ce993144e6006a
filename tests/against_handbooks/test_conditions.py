"""Carbon dioxide, held pH, ligands and other solids, against figures of the literature.

Named beside each check; all are recalled from the document named, none was looked at for the test.
"""

from __future__ import annotations

import math

import pytest

from builder.collection.conditions import Conditions
from builder.collection.reference import Reference
from builder.collection.surroundings import dissolve_under


@pytest.mark.parametrize(
    ("co2_bar", "millimol", "within", "ph"),
    [
        # Plummer and Busenberg 1982, Geochim. Cosmochim. Acta 46, 1011: calcite, 25 °C, 1 atm CO2
        (1.0, 9.4, 0.3, 6.0),
        # Stumm and Morgan, Aquatic Chemistry, calcite open to air, 10^-3.4 atm
        (0.0004, 0.53, 0.02, 8.2),
    ],
)
def test_calcite_under_carbon_dioxide(
    co2_bar: float, millimol: float, within: float, ph: float, reference: Reference
) -> None:
    answer = dissolve_under(reference, "calcite", 25.0, Conditions(co2_bar=co2_bar))
    assert answer.state == "computed", answer.reason
    assert answer.solubility_mol_per_kg == pytest.approx(millimol * 1e-3, abs=within * 1e-3)
    assert answer.ph == pytest.approx(ph, abs=0.1)


def test_calcite_without_carbon_dioxide(reference: Reference) -> None:
    """About 0.12 mmol/kg and pH 9.9: textbooks of water chemistry, as Stumm and Morgan."""
    answer = dissolve_under(reference, "calcite", 25.0, Conditions())
    assert answer.solubility_mol_per_kg == pytest.approx(0.12e-3, rel=0.06)
    assert answer.ph == pytest.approx(9.9, abs=0.1)


@pytest.mark.parametrize("chloride", [0.0015, 0.0025, 0.005])
def test_silver_chloride_at_its_minimum_in_chloride(chloride: float, reference: Reference) -> None:
    """Flat minimum of 4.9e-7 mol/kg between 1.5 and 5 mmol/kg chloride: after Seward 1976, Geochim.
    Cosmochim. Acta 40, 1329, and the classical curve of Jonte and Martin 1952."""
    conditions = Conditions(additions=[("NaCl", chloride)])
    answer = dissolve_under(reference, "silver-chloride", 25.0, conditions)
    assert answer.solubility_mol_per_kg == pytest.approx(4.9e-7, rel=0.20)


@pytest.mark.parametrize(
    ("salt", "molar"), [("silver-chloride", 0.060), ("silver-bromide", 0.0033)]
)
def test_silver_halides_in_molar_ammonia(salt: str, molar: float, reference: Reference) -> None:
    """Textbook figures for 1 mol/L ammonia: Skoog, West, Holler; Harris, complex formation."""
    answer = dissolve_under(reference, salt, 25.0, Conditions(additions=[("NH3", 1.0)]))
    assert answer.solubility_mol_per_kg == pytest.approx(molar, rel=0.10)


def test_fluorite_in_acid(reference: Reference) -> None:
    """The HF formed is what its constant asks for, 10^3.18 of the NEA review (recalled), and acid
    dissolves more: fluoride and pH in Skoog, West, Holler."""
    answer = dissolve_under(reference, "fluorite", 25.0, Conditions(ph=3.0))
    assert answer.titrant == "HCl"
    assert answer.titrant_mol_per_kg is not None
    assert answer.titrant_mol_per_kg > 0.0
    assert answer.ph == pytest.approx(3.0, abs=1e-9)
    forms = {f.form: f for f in answer.forms}
    fluoride = forms["F^-"].mol_per_kg * forms["F^-"].activity_coefficient
    hf = 10.0**3.18 * 1e-3 * fluoride / forms["HF(aq)"].activity_coefficient
    assert forms["HF(aq)"].mol_per_kg == pytest.approx(hf, rel=0.02)
    free = dissolve_under(reference, "fluorite", 25.0, Conditions())
    assert answer.solubility_mol_per_kg is not None
    assert free.solubility_mol_per_kg is not None
    assert answer.solubility_mol_per_kg > 1.5 * free.solubility_mol_per_kg


def test_lead_sulfate_turns_to_carbonate_in_carbonate_water(reference: Reference) -> None:
    """Carbonate precipitation from sulfate, the classical soda treatment: nearly all carbonate that
    was added is bound as lead carbonate, as its constant is far smaller."""
    conditions = Conditions(additions=[("Na2CO3", 0.002)], also=["lead-carbonate"])
    answer = dissolve_under(reference, "lead-sulfate", 25.0, conditions)
    assert [f.salt for f in answer.formed] == ["lead-carbonate"]
    assert answer.formed[0].mol_per_kg == pytest.approx(0.002, rel=0.02)
    assert "lead-carbonate" not in [o.salt for o in answer.other_solids]


def test_molecular_mercury_chloride_is_right_or_refused(reference: Reference) -> None:
    """0.27 mol/kg at 25 °C (handbooks): from free ions it would be 4e-5."""
    if "mercury-ii-chloride" in reference.salts:
        answer = dissolve_under(reference, "mercury-ii-chloride", 25.0, Conditions())
        if answer.state == "computed":
            assert answer.solubility_mol_per_kg == pytest.approx(0.27, rel=0.15)
    assert "HgCl2(aq)" in reference.forms


def test_charge_is_closed_by_the_titrant(reference: Reference) -> None:
    """Electroneutrality of every dissolved form at a held pH, to the solver's accuracy."""
    from builder.chem.formula import parse_formula

    for ph in (2.0, 5.0, 9.0, 11.0):
        answer = dissolve_under(reference, "fluorite", 25.0, Conditions(ph=ph))
        charges = [parse_formula(f.form).charge * f.mol_per_kg for f in answer.forms]
        assert abs(math.fsum(charges)) <= 1e-10 * math.fsum(abs(c) for c in charges)
