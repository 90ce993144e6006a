"""Formulae and reactions: what reads, as what, and what is refused with which words.

Expected counts and charges were counted by hand.
"""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from builder.chem.formula import (
    ELEMENTS,
    FormulaError,
    canonical,
    parse_formula,
    parse_typed_formula,
    to_html,
    to_unicode,
)
from builder.chem.reaction import ReactionError, imbalance, parse_reaction, stoichiometry

HALF = Fraction(1, 2)

READ = [
    # text, canonical, elements, charge, water, state
    ("PbSO4", "PbSO4", {"Pb": 1, "S": 1, "O": 4}, 0, 0, ""),
    ("Pb^2+", "Pb^2+", {"Pb": 1}, 2, 0, ""),
    ("Cl^-", "Cl^-", {"Cl": 1}, -1, 0, ""),
    ("Cl^1-", "Cl^-", {"Cl": 1}, -1, 0, ""),
    ("SO4^2-", "SO4^2-", {"S": 1, "O": 4}, -2, 0, ""),
    ("SO₄²⁻", "SO4^2-", {"S": 1, "O": 4}, -2, 0, ""),
    ("Ag⁺", "Ag^+", {"Ag": 1}, 1, 0, ""),
    ("Hg2^2+", "Hg2^2+", {"Hg": 2}, 2, 0, ""),
    ("PbSO4(aq)", "PbSO4(aq)", {"Pb": 1, "S": 1, "O": 4}, 0, 0, "aq"),
    ("CO2(g)", "CO2(g)", {"C": 1, "O": 2}, 0, 0, "g"),
    ("H2O(l)", "H2O(l)", {"H": 2, "O": 1}, 0, 0, "l"),  # no water of crystallisation of its own
    ("Cl^-(aq)", "Cl^-(aq)", {"Cl": 1}, -1, 0, "aq"),
    ("CaSO4·2H2O", "CaSO4·2H2O", {"Ca": 1, "S": 1, "O": 6, "H": 4}, 0, 2, ""),
    ("CaSO4.2H2O", "CaSO4·2H2O", {"Ca": 1, "S": 1, "O": 6, "H": 4}, 0, 2, ""),
    ("CaSO4*2H2O", "CaSO4·2H2O", {"Ca": 1, "S": 1, "O": 6, "H": 4}, 0, 2, ""),
    ("CaSO4•2H2O", "CaSO4·2H2O", {"Ca": 1, "S": 1, "O": 6, "H": 4}, 0, 2, ""),
    ("CaSO4∙2H2O", "CaSO4·2H2O", {"Ca": 1, "S": 1, "O": 6, "H": 4}, 0, 2, ""),
    ("CaSO4⋅2H2O", "CaSO4·2H2O", {"Ca": 1, "S": 1, "O": 6, "H": 4}, 0, 2, ""),
    ("CaSO₄·2H₂O(s)", "CaSO4·2H2O(s)", {"Ca": 1, "S": 1, "O": 6, "H": 4}, 0, 2, "s"),
    ("CaSO4·0.5H2O", "CaSO4·0.5H2O", {"Ca": 1, "S": 1, "O": 4 + HALF, "H": 1}, 0, HALF, ""),
    ("CaSO4.0.5H2O", "CaSO4·0.5H2O", {"Ca": 1, "S": 1, "O": 4 + HALF, "H": 1}, 0, HALF, ""),
    ("CaSO4·½H2O", "CaSO4·0.5H2O", {"Ca": 1, "S": 1, "O": 4 + HALF, "H": 1}, 0, HALF, ""),
    ("CaSO4·1/2H2O", "CaSO4·0.5H2O", {"Ca": 1, "S": 1, "O": 4 + HALF, "H": 1}, 0, HALF, ""),
    ("CaC2O4·H2O", "CaC2O4·H2O", {"Ca": 1, "C": 2, "O": 5, "H": 2}, 0, 1, ""),
    (
        "3CaO·Al2O3·CaSO4·12H2O",
        "3CaO·Al2O3·CaSO4·12H2O",
        {"Ca": 4, "O": 22, "Al": 2, "S": 1, "H": 24},
        0,
        12,
        "",
    ),
    ("AgCl·NaCl", "AgCl·NaCl", {"Ag": 1, "Cl": 2, "Na": 1}, 0, 0, ""),
    ("(NH4)2SO4", "(NH4)2SO4", {"N": 2, "H": 8, "S": 1, "O": 4}, 0, 0, ""),
    ("Fe4[Fe(CN)6]3", "Fe4[Fe(CN)6]3", {"Fe": 7, "C": 18, "N": 18}, 0, 0, ""),
    ("[Ag(NH3)2]^+", "[Ag(NH3)2]^+", {"Ag": 1, "N": 2, "H": 6}, 1, 0, ""),
    ("Pb(SO4)2^2-", "Pb(SO4)2^2-", {"Pb": 1, "S": 2, "O": 8}, -2, 0, ""),
    ("Ca10(PO4)6(OH)2", "Ca10(PO4)6(OH)2", {"Ca": 10, "P": 6, "O": 26, "H": 2}, 0, 0, ""),
    ("CO", "CO", {"C": 1, "O": 1}, 0, 0, ""),
    ("Co", "Co", {"Co": 1}, 0, 0, ""),
]


@pytest.mark.parametrize(("text", "spelled", "elements", "charge", "water", "state"), READ)
def test_formulae(text, spelled, elements, charge, water, state) -> None:
    formula = parse_formula(text)
    assert dict(formula.elements) == elements
    assert (formula.charge, formula.water, formula.state) == (charge, water, state)
    assert canonical(formula) == spelled
    assert formula.text == text
    again = parse_formula(spelled)
    assert (again.elements, again.charge, again.canonical) == (
        formula.elements,
        formula.charge,
        spelled,
    )


REFUSED = [
    # text, column, part of what was found, part of the cure
    ("", 1, "the end of the formula", "an element is wanted"),
    ("pbSO4", 1, "'pb' is no element", "perhaps Pb"),
    ("PbXx4", 3, "'Xx' is no element", "perhaps"),
    ("Pb2+", 4, "'+'", "^2+"),
    ("SO4^-2", 6, "'2'", "SO4^2-"),
    ("Pb^+2", 5, "'2'", "SO4^2-"),
    ("Pb^0+", 3, "the charge '^0+'", "^2+"),
    ("Pb^2", 3, "'^'", "^2+"),
    ("2H2O", 1, "a number before the formula", "for reactions"),
    ("Ca(SO4", 3, "'(' that is not closed", "add ')'"),
    ("Ca(SO4]", 7, "']'", "')' is wanted"),
    ("Ca)SO4", 3, "')'", "write it like"),
    ("()", 2, "')'", "an element is wanted"),
    ("PbSO4 (aq)", 6, "' '", "write it like"),
    ("PbSO4(cr)", 7, "'cr' is no element", "perhaps Cr"),
    ("PbSO4(aq)2", 10, "'2'", "write it like"),
    ("CaSO4·", 7, "the end of the formula", "an element is wanted"),
    ("·H2O", 1, "'·'", "an element is wanted"),
    ("CaSO4·2·5H2O", 8, "'·'", "a part follows its number"),
    ("CaSO4·0H2O", 7, "zero times", "leave the part out"),
    ("CaSO4·1/0H2O", 7, "zero times", "leave the part out"),
    ("Pb0", 3, "the count '0'", "1, 2, 3"),
    ("Pb02", 3, "the count '02'", "1, 2, 3"),
    ("Pb٣", 3, "'٣'", "write it like"),
    ("<b>Pb</b>", 1, "'<'", "an element is wanted"),
    ("((((((((((H))))))))))", 9, "too many brackets", "at most 8 deep"),
    ("H" * 201, 1, "a text this long", "at most 200"),
]


@pytest.mark.parametrize(("text", "column", "found", "cure"), REFUSED)
def test_what_is_no_formula_is_refused_in_one_line(text, column, found, cure) -> None:
    with pytest.raises(FormulaError) as caught:
        parse_formula(text)
    error = caught.value
    assert (error.text, error.column) == (text, column)
    assert found in error.found
    assert cure in error.cure
    assert "\n" not in str(error)


@given(st.text(alphabet="PbSO4H2CaNl()[]·.*^+-0123½₂²⁻ aqs<&\n", max_size=24))
def test_any_text_reads_or_is_refused(text: str) -> None:
    try:
        formula = parse_formula(text)
    except FormulaError as error:
        assert 1 <= error.column <= len(text) + 1
        assert error.found
        assert error.cure
        assert "\n" not in str(error)
    else:
        # One spelling only: reading it again changes nothing.
        assert parse_formula(formula.canonical).canonical == formula.canonical
        assert set(dict(formula.elements)) <= set(ELEMENTS)


TYPED = [
    ("Pb2+", "Pb^2+"),
    ("Pb+2", "Pb^2+"),
    ("Pb 2+", "Pb^2+"),
    ("Pb++", "Pb^2+"),
    ("Ag+", "Ag^+"),
    ("Hg22+", "Hg2^2+"),
    ("Hg2 2+", "Hg2^2+"),
    ("S2-", "S^2-"),
    ("I3-", "I3^-"),
    ("N3-", "N3^-"),
    ("SO42-", "SO4^2-"),
    ("SO4 2-", "SO4^2-"),
    ("SO4-2", "SO4^2-"),
    ("SO4--", "SO4^2-"),
    ("SO4 2\u2212", "SO4^2-"),
    ("SO₄2-", "SO4^2-"),
    ("SO₄²⁻", "SO4^2-"),
    ("SO4^2-", "SO4^2-"),
    ("Cr2O72-", "Cr2O7^2-"),
    ("NH4+", "NH4^+"),
    ("NO3-", "NO3^-"),
    ("HF2-", "HF2^-"),
    ("Al(OH)4-", "Al(OH)4^-"),
    ("[Ag(NH3)2]+", "[Ag(NH3)2]^+"),
    ("CaSO4 2H2O", "CaSO4·2H2O"),
    ("CaSO4 . 2 H2O", "CaSO4·2H2O"),
    ("CaSO4 ½ H2O", "CaSO4·0.5H2O"),
    ("CaC2O4 H2O", "CaC2O4·H2O"),
    (" PbSO4 (aq) ", "PbSO4(aq)"),
    ("H2O", "H2O"),
]


@pytest.mark.parametrize(("text", "spelled"), TYPED)
def test_formulae_as_people_type_them(text: str, spelled: str) -> None:
    assert canonical(parse_typed_formula(text)) == spelled


@pytest.mark.parametrize("text", ["", "+", "-2", "Pb SO4", "lead", "37", "Pb2+-"])
def test_typed_texts_that_are_no_formula(text: str) -> None:
    with pytest.raises(FormulaError):
        parse_typed_formula(text)


def test_marks_for_a_page() -> None:
    assert to_html("CaSO4·2H2O") == [
        ("text", "CaSO"),
        ("sub", "4"),
        ("text", "·2H"),
        ("sub", "2"),
        ("text", "O"),
    ]
    assert to_html("Pb(SO4)2^2-") == [
        ("text", "Pb(SO"),
        ("sub", "4"),
        ("text", ")"),
        ("sub", "2"),
        ("sup", "2\u2212"),
    ]
    assert to_html("") == []


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("CaSO4·0.5H2O", "CaSO₄·0.5H₂O"),
        ("3CaO·Al2O3·12H2O", "3CaO·Al₂O₃·12H₂O"),
        ("SO4^2-", "SO₄²⁻"),
        ("Ag^+", "Ag⁺"),
        ("PbSO4(aq)", "PbSO₄(aq)"),
        ("Pb^2+ + 2 SO4^2- = Pb(SO4)2^2-", "Pb²⁺ + 2 SO₄²⁻ = Pb(SO₄)₂²⁻"),
    ],
)
def test_plain_unicode(text: str, shown: str) -> None:
    assert to_unicode(text) == shown


def test_a_reaction() -> None:
    reaction = parse_reaction("Pb^2+ + 2 SO4^2- = Pb(SO4)2^2-")
    assert reaction.left == ((1, "Pb^2+"), (2, "SO4^2-"))
    assert reaction.right == ((1, "Pb(SO4)2^2-"),)
    assert imbalance(reaction) == {}


@pytest.mark.parametrize(
    ("text", "left", "right"),
    [
        ("2H2O = H3O^+ + OH^-", ((2, "H2O"),), ((1, "H3O^+"), (1, "OH^-"))),
        ("0.5 O2(g) + 2H^+ = H2O", ((HALF, "O2(g)"), (2, "H^+")), ((1, "H2O"),)),
        ("1/2Ag2O = Ag^+", ((HALF, "Ag2O"),), ((1, "Ag^+"),)),
        ("2 CaSO4.2H2O = Ca^2+", ((2, "CaSO4·2H2O"),), ((1, "Ca^2+"),)),
        ("1 3CaO·Al2O3 = Ca^2+", ((1, "3CaO·Al2O3"),), ((1, "Ca^2+"),)),
    ],
)
def test_coefficients(text, left, right) -> None:
    reaction = parse_reaction(text)
    assert (reaction.left, reaction.right) == (left, right)


@pytest.mark.parametrize(
    ("text", "missing"),
    [
        ("CaSO4·2H2O = Ca^2+ + SO4^2- + 2H2O", {}),
        ("Ca5(PO4)3OH + 4H^+ = 5Ca^2+ + 3HPO4^2- + H2O", {}),
        ("H^+ + OH^- = H2O", {}),
        ("Pb^2+ + SO4^- = PbSO4(aq)", {"charge": -1}),
        ("Ag^+ + CrO4^2- = Ag2CrO4", {"Ag": 1, "charge": 1}),
        ("CaSO4·2H2O = Ca^2+ + SO4^2-", {"H": -4, "O": -2}),
        ("0.5 Cl2(g) = Cl^-", {"charge": -1}),
    ],
)
def test_balance(text: str, missing: dict[str, int]) -> None:
    assert imbalance(parse_reaction(text)) == missing


def test_net_stoichiometry_cancels_what_is_on_both_sides() -> None:
    reaction = parse_reaction("PbCO3 + 2H^+ + H2O = Pb^2+ + CO2(g) + 2H2O")
    assert stoichiometry(reaction) == {
        "PbCO3": -1,
        "H^+": -2,
        "H2O": 1,
        "Pb^2+": 1,
        "CO2(g)": 1,
    }


@pytest.mark.parametrize(
    ("text", "column", "found", "cure"),
    [
        ("H2O", 4, "no =", "reactants = products"),
        ("H2O = H^+ = OH^-", 11, "a second =", "reactants = products"),
        ("H2O → H^+", 5, "'→'", "write one ="),
        ("H2O <=> H^+", 5, "'<=>'", "write one ="),
        ("= H2O", 1, "no formula", "A + 2 B"),
        ("H2O =", 6, "no formula", "A + 2 B"),
        ("H2O + = H2O", 7, "no formula", "A + 2 B"),
        ("H2O = H^+ + OHx^-", 14, "'Hx' is no element", "perhaps"),
        ("H2O = 2 Xx", 9, "'Xx' is no element", "perhaps"),
        ("H2O+H^+ = H3O^+", 4, "'+'", "^2+"),
        ("0 H2O = H2O", 1, "the coefficient 0", "leave the formula out"),
        ("2CaSO4·2H2O = Ca^2+", 1, "a number joined", "with a space"),
        ("Pb^2+ SO4^2- = PbSO4", 6, "' '", "write it like"),
        ("H2O = " + "H" * 1000, 1, "a text this long", "at most 1000"),
    ],
)
def test_what_is_no_reaction_is_refused_in_one_line(text, column, found, cure) -> None:
    with pytest.raises(ReactionError) as caught:
        parse_reaction(text)
    error = caught.value
    assert (error.text, error.column) == (text, column)
    assert found in error.found
    assert cure in error.cure
    assert "\n" not in str(error)
