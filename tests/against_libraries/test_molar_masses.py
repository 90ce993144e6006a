"""Atomic weights and molar masses against two general libraries.

periodictable carries the standard atomic weights of 2021 (Prohaska et al. 2022, the table we
abridge): abridged values where an element has an interval, unabridged ones with their ± for the
others. molmass carries an older table (NIST: abundances of 2013 and earlier); the two are
independent of each other and of our file.
"""

from decimal import ROUND_HALF_UP, Decimal
from pathlib import Path

import molmass
import periodictable
import pytest
import yaml

from builder.chem.formula import parse_formula
from builder.chem.weights import AtomicWeight, MissingWeightError, molar_mass

FILE = Path(__file__).resolve().parents[2] / "constants" / "weights" / "atomic-weights.yaml"
# Read as text, so that the printed digits are kept.
ROWS = yaml.load(FILE.read_text(encoding="utf-8"), Loader=yaml.BaseLoader)["weights"]
WEIGHTS = {
    row["symbol"]: AtomicWeight(
        row["symbol"],
        float(row["value"]),
        float(row["plus_minus"]),
        f"{row['value']} ± {row['plus_minus']}",
    )
    for row in ROWS
}

# Elements of no standard atomic weight in 2021: all isotopes radioactive, none of them usual.
WITHOUT = {"Tc", "Pm", "Po", "At", "Rn", "Fr", "Ra", "Ac"}

# Formula as we write it and as the two libraries read it.
COMPOUNDS = [
    ("PbSO4", "PbSO4"),
    ("BaSO4", "BaSO4"),
    ("SrSO4", "SrSO4"),
    ("CaSO4·2H2O", "CaSO4(H2O)2"),
    ("CaSO4·0.5H2O", None),
    ("AgCl", "AgCl"),
    ("AgBr", "AgBr"),
    ("AgI", "AgI"),
    ("Ag2CrO4", "Ag2CrO4"),
    ("Ag2SO4", "Ag2SO4"),
    ("Ag3PO4", "Ag3PO4"),
    ("AgSCN", "AgSCN"),
    ("PbCl2", "PbCl2"),
    ("PbI2", "PbI2"),
    ("PbCrO4", "PbCrO4"),
    ("Pb(IO3)2", "Pb(IO3)2"),
    ("CaCO3", "CaCO3"),
    ("CaMg(CO3)2", "CaMg(CO3)2"),
    ("CaF2", "CaF2"),
    ("CaC2O4·H2O", "CaC2O4(H2O)"),
    ("Ca5(PO4)3OH", "Ca5(PO4)3OH"),
    ("CaHPO4·2H2O", "CaHPO4(H2O)2"),
    ("MgNH4PO4·6H2O", "MgNH4PO4(H2O)6"),
    ("Mg(OH)2", "Mg(OH)2"),
    ("Fe(OH)3", "Fe(OH)3"),
    ("Fe4[Fe(CN)6]3", "Fe4(Fe(CN)6)3"),
    ("Hg2Cl2", "Hg2Cl2"),
    ("Zn3(PO4)2·4H2O", "Zn3(PO4)2(H2O)4"),
    ("Cu3(CO3)2(OH)2", "Cu3(CO3)2(OH)2"),
    ("KClO4", "KClO4"),
    ("Tl2CrO4", "Tl2CrO4"),
    ("La(IO3)3", "La(IO3)3"),
    ("MnS", "MnS"),
    ("Co3(AsO4)2", "Co3(AsO4)2"),
    ("3CaO·Al2O3·3CaSO4·32H2O", "(CaO)3Al2O3(CaSO4)3(H2O)32"),
]


def bound(text: str) -> float:
    """Sum of the printed ± of a formula, in g/mol: no ordinary material lies beyond it."""
    counts = parse_formula(text).elements
    return sum(float(count) * WEIGHTS[symbol].plus_minus for symbol, count in counts)


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row["symbol"])
def test_atomic_weights_are_the_table_of_2021_abridged(row: dict[str, str]) -> None:
    element = getattr(periodictable, row["symbol"])
    full_bound = element._mass_unc  # the library's documentation names this place
    ours, plus_minus = Decimal(row["value"]), Decimal(row["plus_minus"])
    last_digit = Decimal(1).scaleb(int(ours.as_tuple().exponent))
    theirs = Decimal(repr(element.mass))
    # Abridging is rounding to our last digit, which the ± may only widen.
    assert theirs.quantize(last_digit, ROUND_HALF_UP) == ours
    assert plus_minus >= Decimal(repr(full_bound))
    # No wider than needed: one unit of the last digit more than the full ± and the rounding.
    assert plus_minus <= Decimal(repr(full_bound)) + abs(theirs - ours) + last_digit


@pytest.mark.parametrize("symbol", WEIGHTS)
def test_atomic_weights_hold_those_of_another_table(symbol: str) -> None:
    weight = WEIGHTS[symbol]
    # The ± is a bound for normal materials: every sound table lies within it.
    assert abs(molmass.ELEMENTS[symbol].mass - weight.value) <= weight.plus_minus
    assert weight.number == molmass.ELEMENTS[symbol].number


def test_every_element_with_a_standard_atomic_weight_is_there() -> None:
    expected = {e.symbol for e in periodictable.elements if 1 <= e.number <= 92} - WITHOUT
    assert set(WEIGHTS) == expected
    assert len(ROWS) == len(WEIGHTS) == 84


@pytest.mark.parametrize(("ours", "theirs"), COMPOUNDS, ids=lambda text: text or "")
def test_molar_masses(ours: str, theirs: str | None) -> None:
    value, u = molar_mass(parse_formula(ours), WEIGHTS)
    # The hemihydrate is doubled for libraries that count in whole atoms.
    second, third = (
        (periodictable.formula(theirs).mass, molmass.Formula(theirs).mass)
        if theirs
        else (
            periodictable.formula("(CaSO4)2H2O").mass / 2,
            molmass.Formula("(CaSO4)2H2O").mass / 2,
        )
    )
    # Within the printed ± of the elements, and much closer, as that of lead alone is 1.1.
    assert abs(value - second) <= bound(ours)
    assert abs(value - third) <= bound(ours)
    assert value == pytest.approx(second, rel=1e-4)  # the same table, abridged to five digits
    assert value == pytest.approx(third, rel=3e-4)  # sulfur alone is 1.5e-4 apart
    assert 0 < u < bound(ours)


def test_uncertainty_of_a_molar_mass_by_hand() -> None:
    # AgCl: both ± are 0.01, rectangles of standard deviation 0.01/sqrt(3); root of the sum of
    # squares 0.01*sqrt(2/3) = 0.0081650. Ag2O: 2 x 0.01/sqrt(3) and 0.001/sqrt(3): 0.0115614.
    assert molar_mass(parse_formula("AgCl"), WEIGHTS)[1] == pytest.approx(0.0081650, abs=1e-7)
    assert molar_mass(parse_formula("Ag2O"), WEIGHTS)[1] == pytest.approx(0.0115614, abs=1e-7)


def test_charge_and_state_weigh_nothing() -> None:
    neutral = molar_mass(parse_formula("SO4"), WEIGHTS)
    assert molar_mass(parse_formula("SO4^2-"), WEIGHTS) == neutral
    assert molar_mass(parse_formula("SO4(aq)"), WEIGHTS) == neutral


def test_an_element_without_a_weight_is_named() -> None:
    with pytest.raises(MissingWeightError, match="Ra in RaSO4 has no standard atomic weight"):
        molar_mass(parse_formula("RaSO4"), WEIGHTS)
