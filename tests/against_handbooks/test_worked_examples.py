"""Worked examples of an open textbook through the product's textbook path.

Flowers, Theopold, Langley, Robinson: Chemistry 2e (OpenStax, 2019), sections 15.1 (module m68811),
15.3 (m68814) and 16.4 (m68819); read in the book's own files. Each example gives its own solubility
product, which is put in place of the law of the salt; the rest is what the product does for the
value it calls the textbook's: free ions, concentrations for activities. The book's mol/L are taken
as they stand: with activity coefficients of 1 the algebra is that of mol/kg.

The answer must round to the printed one: half a unit of its last digit is allowed, and the little
that the book's own rounding of steps adds (1 % of the answer).

Left out among the examples on these salts, because the printed answer is wrong:
- 15.1, exercise, AgI with 1.5 × 10^-16: prints 1.3 × 10^-5, which is the answer for AgCl.
- Appendix J, BaSO4 2.3 × 10^-8: the book's own answers need 1.08 × 10^-10, used below.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import replace

import pytest

from builder.chem.equilibrium import solve
from builder.chem.problem import COMPUTED, IDEAL, Solution
from builder.chem.temperature import combined, constant_law
from builder.collection.dissolve import dissolve
from builder.collection.forms import Form, Made, add
from builder.collection.mixture import Hold, Mixture, hold_law, mixture, problem, textbook
from builder.collection.reference import Reference


def rounds_to(value: float, printed: str) -> bool:
    """Does a value agree with a printed answer such as 6.4e-9?"""
    mantissa, _, exponent = printed.partition("e")
    places = len(mantissa.partition(".")[2])
    unit = 10.0 ** (int(exponent or 0) - places)
    return abs(value - float(printed)) <= 0.5 * unit + 0.01 * abs(float(printed))


def saturated(
    reference: Reference,
    salt: str,
    ksp: float,
    additions: Mapping[str, float] | None = None,
) -> tuple[float, dict[str, float]]:
    """(dissolved amount, concentrations by form) with the solid there; mol/L of the book."""
    solid = reference.dissolving[salt]
    given = [(m, reference.additions[e]) for e, m in (additions or {}).items()]
    mix = textbook(mixture(reference.forms, reference.collection, solid, [g for _, g in given]))
    answer = _solve(reference, mix, add(given, {}).base, (solid, ksp))
    return float(answer.amount[0, 0]), _by_form(mix, answer)


def ion_product(reference: Reference, salt: str, ions: Mapping[str, float]) -> float:
    """Q of a solution that holds these ions, no solid present."""
    solid = reference.dissolving[salt]
    mix = textbook(mixture(reference.forms, reference.collection, solid, []))
    totals = add([(m, reference.forms[ion].made) for ion, m in ions.items()], {}).base
    answer = _solve(reference, mix, totals, None)
    ln_activity = dict(zip(mix.bases, answer.ln_activity[0].tolist(), strict=True))
    log_q = math.fsum(n * ln_activity[ion] for ion, n in solid.base.items())
    constants = combined(
        [(n, reference.side_curves[name].law) for name, n in solid.constants.items()]
    )
    return math.exp(log_q) * math.pow(10.0, constants[1])


def _solve(
    reference: Reference,
    mix: Mixture,
    totals: Mapping[str, float],
    solid: tuple[Made, float] | None,
) -> Solution:
    side_laws = {name: curve.law for name, curve in reference.side_curves.items()}
    holds = []
    if solid is not None:
        made, ksp = solid
        law = hold_law(constant_law(math.log10(ksp), 25.0), made, side_laws)
        holds = [Hold(made, law, made)]
    answer = solve(problem(mix, 25.0, totals, holds))
    assert answer.state[0] == COMPUTED
    return answer


def _by_form(mix: Mixture, answer: Solution) -> dict[str, float]:
    return {f.formula: float(m) for f, m in zip(mix.forms, answer.molality[0], strict=True)}


# (salt, printed Ksp, electrolytes, what is asked, printed answer, place in the book)
SATURATED = [
    ("fluorite", 3.98e-11, {}, "Ca^2+", "2.15e-4", "15.1, Example: Ksp, turned"),
    ("gypsum", 6.1e-5, {}, "SO4^2-", "7.8e-3", "15.1, end-of-chapter answer"),
    ("brucite", 8.9e-12, {}, "Mg^2+", "1.3e-4", "15.1, end-of-chapter answer"),
    ("brucite", 8.9e-12, {}, "OH^-", "2.6e-4", "15.1, end-of-chapter answer"),
    ("silver-chloride", 1.6e-10, {"NaCl": 0.025}, "Ag^+", "6.4e-9", "15.1, end-of-chapter answer"),
    ("thallium-chloride", 1.7e-4, {"TlNO3": 0.025}, "Tl^+", "0.031", "15.1, answer by quadratic"),
    ("thallium-chloride", 1.7e-4, {"TlNO3": 0.025}, "Cl^-", "0.0056", "15.1, answer by quadratic"),
    ("barium-sulfate", 1.08e-10, {"BaCl2": 0.0758}, "SO4^2-", "1.42e-9", "15.1, answer, onset"),
    ("silver-bromide", 5.0e-13, {"NaBr": 1.0e-4}, "Ag^+", "5.0e-9", "15.1, Example: halides"),
    ("silver-chloride", 1.6e-10, {"NaCl": 0.10}, "Ag^+", "1.6e-9", "15.1, Example: halides"),
]  # fmt: skip


@pytest.mark.parametrize(
    ("salt", "ksp", "additions", "form", "printed", "place"),
    SATURATED,
    ids=[
        f"{salt} {form} in {' '.join(with_) or 'water'}" for salt, _, with_, form, *_ in SATURATED
    ],
)
def test_saturated_solutions(
    reference: Reference,
    salt: str,
    ksp: float,
    additions: dict[str, float],
    form: str,
    printed: str,
    place: str,
) -> None:
    _, amounts = saturated(reference, salt, ksp, additions)
    assert rounds_to(amounts[form], printed), f"{amounts[form]:.4g}, printed {printed} ({place})"


# (salt, printed Ksp, electrolytes, printed amount dissolved, place)
AMOUNTS = [
    ("fluorite", 3.98e-11, [], "2.15e-4", "15.1, Example: Ksp, turned"),
    ("gypsum", 6.1e-5, [], "7.8e-3", "15.1, end-of-chapter answer"),
    ("brucite", 8.9e-12, [], "1.3e-4", "15.1, end-of-chapter answer"),
    ("silver-chloride", 1.6e-10, [("NaCl", 0.025)], "6.4e-9", "15.1, end-of-chapter answer"),
    ("thallium-chloride", 1.7e-4, [("TlNO3", 0.025)], "0.0056", "15.1, answer by quadratic"),
]


@pytest.mark.parametrize(
    ("salt", "ksp", "additions", "printed", "place"), AMOUNTS, ids=[row[0] for row in AMOUNTS]
)
def test_textbook_result_beside_the_answer(
    reference: Reference,
    salt: str,
    ksp: float,
    additions: list[tuple[str, float]],
    printed: str,
    place: str,
) -> None:
    """The same through `dissolve`, whose textbook result stands beside every answer."""
    evaluated = reference.salts[salt]
    assert evaluated.law.curve is not None
    curve = replace(evaluated.law.curve, law=constant_law(math.log10(ksp), 25.0))
    book = replace(evaluated, law=replace(evaluated.law, curve=curve))
    answer = dissolve(replace(reference, salts={salt: book}), salt, 25.0, additions)
    value = answer.textbook_mol_per_kg
    assert value is not None
    assert rounds_to(value, printed), f"{value:.4g}, printed {printed} ({place})"


# (salt, ions in mol/L, printed product, printed Ksp or None, place)
PRODUCTS = [
    ("fluorite", {"Ca^2+": 2.15e-4, "F^-": 4.30e-4}, "3.98e-11", None, "15.1, Example: Ksp"),
    ("brucite", {"Mg^2+": 0.0537, "OH^-": 0.0010}, "5.4e-8", 8.9e-12, "15.1, Example: Mg(OH)2"),
    ("silver-chloride", {"Ag^+": 1.0e-4, "Cl^-": 1.0e-4}, "1.0e-8", 1.6e-10, "15.1, Example: AgCl"),
]  # fmt: skip


@pytest.mark.parametrize(
    ("salt", "ions", "printed", "ksp", "place"), PRODUCTS, ids=[row[0] for row in PRODUCTS]
)
def test_ion_products(
    reference: Reference,
    salt: str,
    ions: dict[str, float],
    printed: str,
    ksp: float | None,
    place: str,
) -> None:
    """The product Q of the reaction quotient; where the book asks, it precipitates: Q > Ksp."""
    q = ion_product(reference, salt, ions)
    assert rounds_to(q, printed), f"{q:.4g}, printed {printed} ({place})"
    assert ksp is None or q > ksp


def test_chloride_precipitates_before_bromide(reference: Reference) -> None:
    """15.1, Example: with 0.10 M chloride and 0.00010 M bromide, AgCl comes down first."""
    _, bromide = saturated(reference, "silver-bromide", 5.0e-13, {"NaBr": 1.0e-4})
    _, chloride = saturated(reference, "silver-chloride", 1.6e-10, {"NaCl": 0.10})
    assert chloride["Ag^+"] < bromide["Ag^+"]


def test_barium_sulfate_in_hydrogen_sulfate(reference: Reference) -> None:
    """15.3, end-of-chapter answer: BaSO4 in 0.250 M NaHSO4, Ka 1.2e-2, Ksp 1.08e-10.

    Printed: [SO4^2-] = 0.049, dissolved 2.2e-9.
    """
    solid = reference.dissolving["barium-sulfate"]
    given = [(0.250, reference.additions["Na2SO4"]), (-0.250, Made({"Na^+": 1.0}, 0.0, {}))]
    given.append((0.250, Made({"H^+": 1.0}, 0.0, {})))
    full = mixture(reference.forms, reference.collection, solid, [reference.additions["Na2SO4"]])
    acid = replace(reference.forms["HSO4^-"], law=constant_law(-math.log10(1.2e-2), 25.0))
    mix = _with(textbook(full), acid)
    answer = _solve(reference, mix, add(given, {}).base, (solid, 1.08e-10))
    amounts = _by_form(mix, answer)
    assert rounds_to(amounts["SO4^2-"], "0.049"), amounts
    assert rounds_to(float(answer.amount[0, 0]), "2.2e-9"), answer.amount


def test_silver_chloride_in_ammonia(reference: Reference) -> None:
    """15.3, Check Your Learning: 2.00 g AgCl in 1.00 L, Ksp 1.6e-10, Kf 1.7e7. Printed: 5.0 g NH3.

    Turned: 5.0 g of ammonia dissolve 2.00 g. The last digit of 5.0 is 1 % of the answer, and the
    ammonium that the book leaves out takes another 1 %.
    """
    solid = reference.dissolving["silver-chloride"]
    ammonia = reference.additions["NH3"]
    free = reference.forms["NH3(aq)"]
    pair = reference.forms["Ag(NH3)2^+"]
    pair = replace(
        pair, law=combined([(1.0, constant_law(math.log10(1.7e7), 25.0)), (2.0, free.law)])
    )
    full = mixture(reference.forms, reference.collection, solid, [ammonia])
    mix = _with(textbook(full), free, pair)
    m = 5.0 / reference.molar_mass("NH3")
    answer = _solve(reference, mix, add([(m, ammonia)], {}).base, (solid, 1.6e-10))
    grams = float(answer.amount[0, 0]) * reference.molar_mass("AgCl")
    assert grams == pytest.approx(2.00, rel=0.02)


def _with(mix: Mixture, *forms: Form) -> Mixture:
    return Mixture(mix.bases, (*mix.forms, *forms), IDEAL, mix.limit)


def test_solubility_product_from_free_energies(reference: Reference) -> None:
    """16.4, Example: 77.1 and -131.2 less -109.8 kJ/mol give 1.74e-10 for AgCl, 298.15 K."""
    entries = reference.collection.formation["crc-formation"].entries
    used = {name: entries[name].gibbs_kj_mol for name in ("Ag^+", "Cl^-", "AgCl(s)")}
    texts = {name: number.text for name, number in used.items() if number is not None}
    assert texts == {"Ag^+": "77.1", "Cl^-": "-131.2", "AgCl(s)": "-109.8"}, "the book's numbers"
    value = reference.salts["silver-chloride"].reported["crc-formation"].log10_k
    assert value is not None
    assert rounds_to(10.0**value, "1.74e-10"), f"{10.0**value:.4g}"
