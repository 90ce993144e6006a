"""From a law as recorded to a curve with uncertainty, with the steps in words."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from builder.chem.curve import NO_COVARIANCE, Curve, thermodynamic_covariance
from builder.chem.fit import Matrix3, student_95, weighted
from builder.chem.formula import parse_formula
from builder.chem.heat_capacity import estimated_delta_cp
from builder.chem.reaction import parse_reaction, stoichiometry
from builder.chem.rounding import fixed, ten_digits
from builder.chem.temperature import (
    GAS_CONSTANT,
    LN10,
    basis_at,
    enthalpy_law,
    expression_law,
    log10_k,
    recentred,
)
from builder.chem.water import kelvin, log10_kw
from builder.collection.figures import Reported, reaction_change
from builder.collection.records import Collection, Law, Salt, SideReaction
from builder.collection.shown import Step

REFERENCE_C = 25.0
# Where a source states no uncertainty (judgement, see DEVELOPERS.md):
U_DELTA_H = 2000.0  # J/mol
U_DELTA_CP = 30.0  # J/(mol K), of a ΔCp that is known
U_EXPRESSION = 0.05  # log10 K
U_BETWEEN_LABORATORIES = 0.03  # log10 K; does not shrink with the number of points
U_SIDE_PAIR, U_SIDE_HYDROLYSIS = 0.1, 0.2  # log10 K
U_SIDE_DELTA_CP = 150.0  # J/(mol K): a side reaction without ΔCp is carried with 0 ± this
FULL_FIT_POINTS = 5  # with fewer points only ΔH is fitted

# How many kelvin beyond its range a law is still answered.
CARRIES_K = {"enthalpy": 40.0, "heat-capacity": 40.0, "formation": 40.0, "points": 25.0,
             "expression": 25.0}  # fmt: skip


@dataclass(frozen=True)
class LawCurve:
    """A law of a salt ready to use. curve is None where `reason` says why not."""

    law: Law
    curve: Curve | None
    steps: tuple[Step, ...]
    heat_capacity_note: str = ""
    reason: str = ""


def free_ion_charges(reaction: str) -> list[int]:
    """Charges of the ions set free, one entry for each: PbI2 gives [2, -1, -1]."""
    charges: list[int] = []
    for formula, n in stoichiometry(parse_reaction(reaction)).items():
        if "^" in formula and n > 0:
            charges += [parse_formula(formula).charge] * int(n)
    return charges


def law_curve(
    salt: Salt,
    law: Law,
    reported: Mapping[str, Reported],
    u_of: Mapping[str, float | None],
    collection: Collection,
) -> LawCurve:
    """Curve of one law. `u_of`: standard uncertainty of log10 K of each determination."""
    assert law.range_c is not None  # every law of a salt has one (schema)
    carries = 0.0 if law.interpolation_only else CARRIES_K[law.kind]
    if law.kind == "expression" and law.determination is None:
        return _expression(law, carries)
    if law.kind == "points":
        return _points(salt, law, reported, carries)
    anchor = reported.get(law.determination or "")
    if anchor is None or anchor.log10_k is None:
        return LawCurve(
            law, None, (), "", f"its determination {law.determination} gives no constant"
        )
    if law.kind == "expression":
        return _moved_expression(law, carries, anchor, u_of[anchor.determination.id])
    if law.kind == "formation":
        entries = collection.formation[law.table or ""].entries
        enthalpy = reaction_change(salt.reaction, entries, "enthalpy_kj_mol")
        capacity = reaction_change(salt.reaction, entries, "heat_capacity_j_mol_k")
        if enthalpy is None:
            return LawCurve(law, None, (), "", "the formation table lacks an enthalpy")
        dh, u_dh, sum_dh = enthalpy[0] * 1e3, max(enthalpy[1] * 1e3, 500.0), enthalpy[2]
        dcp, u_dcp = (None, None) if capacity is None else (capacity[0], U_DELTA_CP)
    else:
        assert law.delta_h is not None  # required by the schema of these kinds
        dh, sum_dh = law.delta_h.value, f"{law.delta_h.text} {law.delta_h.unit}"
        u_dh = _or(law.delta_h.uncertainty.standard, U_DELTA_H)
        dcp = None if law.delta_cp is None else law.delta_cp.value
        u_dcp = None if law.delta_cp is None else _or(law.delta_cp.uncertainty.standard, U_DELTA_CP)
    words = "known"
    if dcp is None or u_dcp is None:
        waters = float(parse_formula(salt.formula).water)
        dcp, u_dcp, words = estimated_delta_cp(free_ion_charges(salt.reaction), waters)
        words = f"estimated: {words}"
    note = f"ΔCp {fixed(dcp, 0)} ± {fixed(u_dcp, 0)} J/(mol K), {words}"
    u0 = u_of.get(anchor.determination.id)
    covariance = None if u0 is None else thermodynamic_covariance(u0, u_dh, u_dcp)
    t0 = anchor.t_celsius
    curve = Curve(
        enthalpy_law(ten_digits(anchor.log10_k), t0, dh, dcp),
        covariance,
        law.range_c,
        carries,
        thermodynamic=True,
    )
    steps = (
        Step("log10 K0 and its temperature", anchor.determination.id,
             f"{fixed(anchor.log10_k, 4)} at {t0:g} °C"),
        Step("ΔH of dissolution", sum_dh, f"{fixed(dh / 1e3, 2)} ± {fixed(u_dh / 1e3, 2)} kJ/mol"),
        Step("ΔCp of dissolution", words, f"{fixed(dcp, 0)} ± {fixed(u_dcp, 0)} J/(mol K)"),
        Step(
            "log10 K(T) = log10 K0 - ΔH/(R ln 10)·(1/T - 1/T0)"
            " + ΔCp/(R ln 10)·(T0/T - 1 + ln(T/T0))",
            f"R = 8.314462618 J/(mol K), T0 = {fixed(kelvin(t0), 2)} K",
            "",
        ),
    )  # fmt: skip
    return LawCurve(law, curve, steps, note)


def _or(value: float | None, default: float) -> float:
    return default if value is None else value


def _expression(law: Law, carries: float) -> LawCurve:
    assert law.terms is not None and law.range_c is not None
    values = {name: p.value for name, p in law.terms.items()}
    u = _or(law.uncertainty.standard, U_EXPRESSION)
    curve = Curve(
        expression_law(values, REFERENCE_C), NO_COVARIANCE, law.range_c, carries,
        thermodynamic=False, flat=ten_digits(u),
    )  # fmt: skip
    written = " ".join(
        f"{'+' if p.value >= 0 else '-'} {p.text.lstrip('-−–+')}{_TERM_WORDS[name]}"
        for name, p in law.terms.items()
    ).removeprefix("+ ")
    basis_words = "stated" if law.uncertainty.state == "number" else "taken, none is stated"
    steps = (
        Step("published expression, T in kelvin", f"log10 K = {written}", ""),
        Step("standard uncertainty of log10 K", basis_words, fixed(u, 3)),
    )
    return LawCurve(law, curve, steps, "ΔCp follows from the expression")


def _moved_expression(law: Law, carries: float, anchor: Reported, u0: float | None) -> LawCurve:
    """The expression moved, as a whole, to pass through a determination that is better known."""
    printed = _expression(law, carries)
    assert printed.curve is not None and anchor.log10_k is not None
    there = float(log10_k(np.asarray(printed.curve.law), np.asarray(kelvin(anchor.t_celsius))))
    shift = ten_digits(anchor.log10_k - there)
    first = printed.curve.law
    curve = replace(
        printed.curve,
        law=(first[0], ten_digits(first[1] + shift), *first[2:]),
        covariance=None if u0 is None else NO_COVARIANCE,
        flat=ten_digits(_or(u0, 0.0)),
    )
    step = Step(
        f"the expression moved to pass through {anchor.determination.id}",
        f"{fixed(anchor.log10_k, 4)} - ({fixed(there, 4)}) at {anchor.t_celsius:g} °C",
        fixed(shift, 4),
    )
    return replace(printed, curve=curve, steps=(printed.steps[0], step))


_TERM_WORDS = {
    "one": "",
    "t": "·T",
    "inverse_t": "/T",
    "log10_t": "·log10 T",
    "inverse_t2": "/T²",
    "t2": "·T²",
}


def _points(
    salt: Salt,
    law: Law,
    reported: Mapping[str, Reported],
    carries: float,
) -> LawCurve:
    assert law.range_c is not None
    used = [r for name in law.determinations if (r := reported.get(name)) is not None]
    used = [r for r in used if r.log10_k is not None]
    temperatures = sorted({r.t_celsius for r in used})
    if len(temperatures) < 2:
        return LawCurve(law, None, (), "", "fewer than two temperatures give a constant")
    t0 = kelvin(REFERENCE_C)
    rows = [basis_at(kelvin(r.t_celsius), t0)[:3] for r in used]
    values = [r.log10_k for r in used if r.log10_k is not None]
    u = [max(_or(r.u_stated, 0.0), r.u_digits, 0.01) for r in used]
    scale = GAS_CONSTANT * LN10
    full = len(temperatures) >= FULL_FIT_POINTS
    waters = float(parse_formula(salt.formula).water)
    dcp, u_dcp, words = estimated_delta_cp(free_ion_charges(salt.reaction), waters)
    if full:
        fit = weighted(rows, values, u)
        c, covariance = fit.coefficients, [list(row) for row in fit.covariance]
        words = "fitted"
    else:
        c2 = dcp / scale
        fit = weighted(
            [r[:2] for r in rows], [y - c2 * r[2] for y, r in zip(values, rows, strict=True)], u
        )
        c = (fit.coefficients[0], fit.coefficients[1], c2)
        covariance = [list(row) for row in fit.covariance]
        covariance[2][2] = (u_dcp / scale) ** 2
        words = f"estimated: {words}"
    covariance[0][0] += U_BETWEEN_LABORATORIES**2
    curve = Curve(
        (t0, *(ten_digits(x) for x in c), 0.0, 0.0, 0.0),
        _matrix(covariance),
        law.range_c,
        carries,
        thermodynamic=True,
        coverage_factor=student_95(fit.freedom),
    )
    span = f"{temperatures[0]:g} to {temperatures[-1]:g} °C"
    steps = (
        Step("points fitted by weighted least squares", f"{len(used)} values, {span}",
             f"χ²/ν = {fixed(fit.reduced_chi2, 2)}, ν = {fit.freedom}"),
        Step("log10 K at 25 °C", "c0", fixed(c[0], 4)),
        Step("ΔH at 25 °C", "-c1 R ln 10", f"{fixed(-c[1] * scale / 1e3, 2)} kJ/mol"),
        Step("ΔCp", words, f"{fixed(c[2] * scale, 0)} J/(mol K)"),
        Step("between laboratories, added to the variance of c0", "taken",
             f"{U_BETWEEN_LABORATORIES} in log10 K"),
    )  # fmt: skip
    return LawCurve(law, curve, steps, f"ΔCp {fixed(c[2] * scale, 0)} J/(mol K), {words}")


def _matrix(rows: Sequence[Sequence[float]]) -> Matrix3:
    a, b, c = ((ten_digits(r[0]), ten_digits(r[1]), ten_digits(r[2])) for r in rows)
    return (a, b, c)


def plain_van_t_hoff(curve: Curve) -> Curve:
    """The same anchor and ΔH at 25 °C with ΔCp left out: what a textbook would compute."""
    law = recentred(curve.law)
    t0 = law[0]
    # slope of log10 K in 1/T at T0: every term differentiated there
    slope = law[2] - law[4] * t0**2 + 2.0 * law[5] / t0 - 2.0 * law[6] * t0**3
    return Curve(
        (t0, law[1], slope, 0.0, 0.0, 0.0, 0.0), None, curve.range_c, curve.carries_k, True
    )


def water_curve() -> Curve:
    """log10 Kw: the published equation (chem/water.py) put into three centred terms, 0-100 °C.

    The largest deviation from the equation is 0.007 in log10 K, inside the ± 0.01 of the equation.
    """
    temperatures = [5.0 * i for i in range(21)]
    t0 = kelvin(REFERENCE_C)
    rows = [basis_at(kelvin(t), t0)[:3] for t in temperatures]
    values = [float(log10_kw(t)) for t in temperatures]
    c = weighted(rows, values, [0.01] * len(rows)).coefficients
    law = (t0, *(ten_digits(x) for x in c), 0.0, 0.0, 0.0)
    return Curve(law, NO_COVARIANCE, (0.0, 100.0), 0.0, thermodynamic=False, flat=0.01)


def side_curve(reaction: SideReaction, log10_k: float, u_digits: float, t_c: float) -> Curve:
    """Curve of a side reaction; answered at every temperature, with growing uncertainty."""
    law = reaction.law
    if law.kind == "water":
        return water_curve()
    hydrolysis = "H^+" in reaction.reaction or "OH^-" in reaction.reaction
    default = U_SIDE_HYDROLYSIS if hydrolysis else U_SIDE_PAIR
    u0 = ten_digits(max(_or(reaction.figure.uncertainty.standard, default), u_digits))
    everywhere = (0.0, 100.0)
    if law.kind == "expression":
        assert law.terms is not None
        terms = {name: p.value for name, p in law.terms.items()}
        return Curve(expression_law(terms, REFERENCE_C), NO_COVARIANCE, everywhere, 0.0, False, u0)
    assert law.delta_h is not None
    dh, u_dh = law.delta_h.value, _or(law.delta_h.uncertainty.standard, U_DELTA_H)
    dcp = 0.0 if law.delta_cp is None else law.delta_cp.value
    u_dcp = U_SIDE_DELTA_CP
    if law.delta_cp is not None:
        u_dcp = _or(law.delta_cp.uncertainty.standard, U_DELTA_CP)
    covariance = thermodynamic_covariance(u0, u_dh, u_dcp)
    curve_law = enthalpy_law(ten_digits(log10_k), t_c, dh, dcp)
    return Curve(curve_law, covariance, everywhere, 0.0, thermodynamic=False)


def spread(values: Sequence[float]) -> float | None:
    """Robust standard uncertainty of values of independent families; None for fewer than two.

    1.4826 times the median absolute deviation (normal consistency, Rousseeuw and Croux, J. Am.
    Stat. Assoc. 88 (1993) 1273); of two values half their distance times sqrt(2).
    """
    if len(values) < 2:
        return None
    middle = median(values)
    if len(values) == 2:
        return abs(values[0] - values[1]) / math.sqrt(2.0)
    return 1.4826 * median([abs(v - middle) for v in values])


def median(values: Sequence[float]) -> float:
    ordered = sorted(values)
    n = len(ordered)
    return 0.5 * (ordered[(n - 1) // 2] + ordered[n // 2])
