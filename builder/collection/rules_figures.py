"""Rules for printed numbers and for laws, of salts and of side reactions alike.

The bounds are wide: they catch a slip of sign or exponent that leaves chemistry altogether and
keep the arithmetic of hostile files finite. Whether a number is plausible is judged on computed
values (collection/rules_judge.py).
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping

from builder.chem.temperature import basis, expression_law
from builder.chem.water import HIGHEST_C, LOWEST_C, kelvin
from builder.collection.laws import REFERENCE_C
from builder.collection.parts import JOULES
from builder.collection.records import Collection, Figure, Law, Origin, Uncertainty
from builder.read.findings import Finding, Level

CODES: Mapping[str, Level] = {
    "chem-figure": "error",
    "chem-printed-uncertainty": "error",
    "chem-uncertainty": "error",
    "chem-delta-unit": "error",
    "chem-law-value": "error",
    "chem-formation-value": "error",
    "judge-sign": "doubt",
    "judge-temperature": "doubt",
    "judge-range": "doubt",
}

LARGEST_KSP = 1e3
LARGEST_LOG10_K = 100.0
LARGEST_GIBBS_J = 600e3  # as log10 K about 105
LARGEST_SOLUBILITY = 1e7  # in any of the units; mg/L of a freely soluble salt is 1e6
LARGEST_DELTA_H_J = 2000e3  # J/mol
LARGEST_DELTA_CP_J = 10e3  # J/(mol K)
LARGEST_FORMATION = 1e5  # kJ/mol or J/(mol K)


def check_figure(figure: Figure, origin: Origin) -> Iterator[Finding]:
    """The number of a `printed:` map: possible at all, and its uncertainty as printed."""
    x, place = figure.printed.value, origin.place("printed", "as")
    words = _impossible(figure, x)
    if words:
        yield Finding(
            "error",
            "chem-figure",
            place,
            f"{figure.printed.text!r} as {figure.quantity}",
            f"{words}: look at sign, exponent and quantity",
        )
    stated = figure.uncertainty
    printed = figure.printed.plus_minus
    if printed is not None and (
        stated.plus_minus is None or not math.isclose(printed, stated.plus_minus, rel_tol=1e-9)
    ):
        yield Finding(
            "error",
            "chem-printed-uncertainty",
            origin.place("printed", "uncertainty"),
            f"{stated.words()}, where the printed text has ± {printed:g}",
            "write plus_minus as the source prints it, with its coverage",
        )
    yield from _uncertainty(stated, max(abs(x), 1.0), origin, "printed")


def _impossible(figure: Figure, x: float) -> str:
    """What such a number would have to be, in words; empty where it is."""
    match figure.quantity:
        case "ksp":
            least = 10.0**-LARGEST_LOG10_K
            # a constant in acid, written with its own reaction, may be large
            most = LARGEST_KSP if figure.reaction is None else 10.0**LARGEST_LOG10_K
            return "" if least < x < most else "a solubility product lies in 0 to 1000"
        case "gibbs-energy":
            joules = abs(x) * JOULES[figure.unit or "kJ/mol"]
            return "" if joules <= LARGEST_GIBBS_J else "it is at most 600 kJ/mol"
        case "solubility":
            return "" if 0 < x < LARGEST_SOLUBILITY else "a solubility is positive, below 10^7"
    return "" if abs(x) <= LARGEST_LOG10_K else "a logarithm of K lies in -100 to 100"


def _uncertainty(stated: Uncertainty, size: float, origin: Origin, *keys: str) -> Iterator[Finding]:
    """A stated ± is positive, and not out of all proportion to the value (same unit)."""
    if stated.plus_minus is not None and not 0.0 < stated.plus_minus <= 10.0 * size:
        yield Finding(
            "error",
            "chem-uncertainty",
            origin.place(*keys, "uncertainty"),
            f"an uncertainty of {stated.text!r}",
            "write the printed number above 0; not stated where unknown, exact by definition",
        )


def check_own_figure(figure: Figure, origin: Origin, noted: bool) -> Iterator[Finding]:
    """What holds for the constant of a salt only: sign and temperature."""
    wrong_sign = (figure.quantity == "pksp" and figure.printed.value < 0) or (
        figure.quantity == "log10-k" and figure.printed.value > 0
    )
    if wrong_sign and figure.reaction is None:
        yield Finding(
            "doubt",
            "judge-sign",
            origin.place("printed", "as"),
            f"{figure.printed.text!r} as {figure.quantity}: a salt that dissolves freely",
            "look at the sign: log10 K of a sparingly soluble salt is negative, pKsp positive",
        )
    t = figure.temperature_c
    if t is not None and not LOWEST_C <= t <= HIGHEST_C and not noted:
        yield Finding(
            "doubt",
            "judge-temperature",
            origin.place("printed", "temperature_c"),
            f"{t:g} °C, where water is not liquid at 1 bar",
            "mend it, or say in a note how the source reached it",
        )


def check_law(law: Law, origin: Origin, *keys: str) -> Iterator[Finding]:
    """Numbers of a law; `keys` lead from the origin to it."""
    for key, delta, most, per in (
        ("delta_h", law.delta_h, LARGEST_DELTA_H_J, "mol"),
        ("delta_cp", law.delta_cp, LARGEST_DELTA_CP_J, "(mol K)"),
    ):
        if delta is None:
            continue
        if delta.unit.split("/")[1] != per:
            place = origin.place(*keys, key, "unit")
            found = f"the unit {delta.unit} of {key}"
            cure = f"write a unit such as kJ/{per}" if per == "mol" else f"write J/{per}"
            yield Finding("error", "chem-delta-unit", place, found, cure)
        elif abs(delta.value) > most:
            place = origin.place(*keys, key, "as")
            found = f"{delta.text!r} {delta.unit}"
            cure = f"it is at most {most:g} J/{per}: look at number and unit"
            yield Finding("error", "chem-law-value", place, found, cure)
        yield from _uncertainty(delta.uncertainty, most / 10.0, origin, *keys, key)
    yield from _uncertainty(law.uncertainty, 1.0, origin, *keys)
    low, high = law.range_c or (LOWEST_C, HIGHEST_C)
    if low < LOWEST_C or high > HIGHEST_C:
        yield Finding(
            "doubt",
            "judge-range",
            origin.place(*keys, "range_c"),
            f"a range from {low:g} to {high:g} °C",
            "keep it within 0 to 100 °C, where water is liquid at 1 bar",
        )
    if law.terms is not None:
        yield from _terms(law, origin, *keys)


def _terms(law: Law, origin: Origin, *keys: str) -> Iterator[Finding]:
    """A published expression gives a logarithm of K all over the range of water."""
    values = {name: number.value for name, number in (law.terms or {}).items()}
    for t in (LOWEST_C, REFERENCE_C, HIGHEST_C):
        value = _expression(values, t)
        if not abs(value) <= LARGEST_LOG10_K:  # also where it is no number
            place = origin.place(*keys, "terms")
            found = f"terms that give log10 K = {value:.3g} at {t:g} °C"
            cure = "look at names, signs and exponents of the terms; T is in kelvin"
            yield Finding("error", "chem-law-value", place, found, cure)
            return


def _expression(values: Mapping[str, float], t_celsius: float) -> float:
    """log10 K at t; NaN where it overflows."""
    try:
        law = expression_law(values, REFERENCE_C)
        functions = basis(kelvin(t_celsius), law[0])
        return math.fsum(c * float(b) for c, b in zip(law[1:], functions, strict=True))
    except (ArithmeticError, ValueError):
        return math.nan


def check_formation(collection: Collection) -> Iterator[Finding]:
    """Numbers of the formation tables."""
    for table in collection.formation.values():
        for i, entry in enumerate(table.entries.values()):
            for key in (
                "gibbs_kj_mol", "enthalpy_kj_mol", "entropy_j_mol_k", "heat_capacity_j_mol_k",
            ):  # fmt: skip
                number = getattr(entry, key)
                if number is not None and abs(number.value) > LARGEST_FORMATION:
                    place = table.origin.place("entries", i, key)
                    found = f"{number.text!r} for {entry.of}"
                    cure = f"it is at most {LARGEST_FORMATION:g}: look at the exponent"
                    yield Finding("error", "chem-formation-value", place, found, cure)
