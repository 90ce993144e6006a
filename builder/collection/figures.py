"""A determination as log10 K of the salt's own reaction, step by step from the printed text."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from builder.chem.curve import Curve, at
from builder.chem.reaction import parse_reaction, stoichiometry
from builder.chem.rounding import fixed, significant
from builder.chem.temperature import GAS_CONSTANT, LN10
from builder.chem.water import kelvin
from builder.collection.parts import JOULES
from builder.collection.records import (
    Collection,
    Determination,
    Figure,
    FormationEntry,
    Salt,
    SideReaction,
)
from builder.collection.shown import Step
from builder.read.printed import Printed

FORMATION_T_C = 25.0  # formation properties are tabulated at 298.15 K
WATER_REACTION = {"H^+": 1.0, "OH^-": 1.0, "H2O": -1.0}
ROUNDING = math.sqrt(12.0)  # half width to standard deviation of a rounded digit, full width given


@dataclass(frozen=True)
class Reported:
    """A determination as log10 K at its temperature.

    log10_k None: not converted, `reason` says why. u_stated: from the printed uncertainty, None
    where not stated. u_digits: what the last printed digit alone leaves open.
    comparable: surely this solid and reaction, zero ionic strength or none stated, at 25 °C.
    """

    determination: Determination
    t_celsius: float
    log10_k: float | None
    u_stated: float | None
    u_digits: float
    comparable: bool
    steps: tuple[Step, ...]
    reason: str = ""


def read_figure(
    salt: Salt, determination: Determination, collection: Collection, water: Curve
) -> Reported:
    """Everything but a measured solubility, which needs the engine (collection/converting.py)."""
    if determination.figure is None:
        return _from_formation(salt, determination, collection)
    figure = determination.figure
    t = FORMATION_T_C if figure.temperature_c is None else figure.temperature_c
    value, u, digits, steps = _log10_k(figure, t)
    if figure.reaction is not None and figure.reaction != salt.reaction:
        other = _other_reaction(salt, figure.reaction, water, t)
        if other is None:
            reason = (
                "the source wrote another reaction, which water alone does not link to this one"
            )
            return Reported(determination, t, None, None, digits, False, steps, reason)
        shift, step = other
        value += shift
        steps = (*steps, step)
    comparable = (
        abs(t - 25.0) <= 1.0 and figure.medium in ("zero", "not stated") and figure.solid is None
    )
    return Reported(determination, t, value, u, digits, comparable, steps)


def _log10_k(figure: Figure, t: float) -> tuple[float, float | None, float, tuple[Step, ...]]:
    """(log10 K, stated standard uncertainty or None, that of the digits, steps)."""
    printed, stated = figure.printed, figure.uncertainty.standard
    if stated is None and printed.plus_minus is not None:
        stated = printed.plus_minus
    x, place = printed.value, printed.last_place / ROUNDING
    read = Step("printed text read as a number", printed.text, _plain(x))
    if figure.quantity == "ksp":
        value = math.log10(x)
        slope = 1.0 / (abs(x) * LN10)
        step = Step("log10 of the solubility product", f"log10({_plain(x)})", fixed(value, 4))
    elif figure.quantity == "pksp":
        value, slope = -x, 1.0
        step = Step("log10 K = -pKsp", f"-({_plain(x)})", fixed(value, 4))
    elif figure.quantity == "log10-k":
        value, slope = x, 1.0
        step = Step("log10 K as printed", _plain(x), fixed(value, 4))
    else:  # gibbs-energy
        scale = JOULES[figure.unit or "kJ/mol"]
        joules = x * scale
        slope = scale / (GAS_CONSTANT * kelvin(t) * LN10)
        value = -joules / (GAS_CONSTANT * kelvin(t) * LN10)
        step = Step(
            "log10 K = -ΔG/(R T ln 10)",
            f"-({_plain(joules)} J/mol)/(8.314462618 × {fixed(kelvin(t), 2)} × ln 10)",
            fixed(value, 4),
        )
    u = None if stated is None else stated * slope
    return value, u, place * slope, (read, step)


def _other_reaction(salt: Salt, written: str, water: Curve, t: float) -> tuple[float, Step] | None:
    """Shift of log10 K from the source's reaction to the salt's, if it is k times that of water."""
    target = stoichiometry(parse_reaction(salt.reaction))
    source = stoichiometry(parse_reaction(written))
    difference = {f: float(target.get(f, 0) - source.get(f, 0)) for f in {*target, *source}}
    times = difference.get("OH^-", 0.0)
    rest = {f: difference.get(f, 0.0) - times * WATER_REACTION.get(f, 0.0) for f in difference}
    if times == 0.0 or any(abs(n) > 1e-9 for n in rest.values()):
        return None
    kw = at(water, t).log10_k
    if kw is None:
        return None
    shift = times * kw
    step = Step(
        "from the source's reaction to this one by the ionisation of water",
        f"{written}; {times:+g} × log10 Kw, log10 Kw = {fixed(kw, 3)}",
        f"{'+' if shift >= 0 else ''}{fixed(shift, 3)}",
    )
    return shift, step


def _from_formation(salt: Salt, determination: Determination, collection: Collection) -> Reported:
    table = collection.formation[determination.table or ""]
    change = reaction_change(salt.reaction, table.entries, "gibbs_kj_mol")
    if change is None:
        reason = "the formation table lacks the Gibbs energy of the solid or of an ion"
        return Reported(determination, FORMATION_T_C, None, None, 0.0, False, (), reason)
    kj, u, text = change
    scale = 1e3 / (GAS_CONSTANT * kelvin(FORMATION_T_C) * LN10)
    value = -kj * scale
    steps = (
        Step("ΔG of dissolution, kJ/mol, products minus solid", text, fixed(kj, 2)),
        Step(
            "log10 K = -ΔG/(R T ln 10)",
            f"-({fixed(kj, 2)} kJ/mol)/(8.314462618 × 298.15 × ln 10)",
            fixed(value, 4),
        ),
    )
    return Reported(determination, FORMATION_T_C, value, None, u * scale, True, steps)


def reaction_change(
    reaction: str, entries: Mapping[str, FormationEntry], key: str
) -> tuple[float, float, str] | None:
    """(change, standard uncertainty of the rounding, sum as text) of a formation property.

    None where an entry or its number is missing. Liquid water stands in the table as H2O(l).
    """
    terms: list[tuple[float, Printed]] = []
    for formula, n in stoichiometry(parse_reaction(reaction)).items():
        # what is consumed is the solid itself; ions carry their charge, water is the liquid
        name = formula if "^" in formula else f"{formula}({'l' if formula == 'H2O' else 's'})"
        entry = entries.get(name)
        number: Printed | None = getattr(entry, key) if entry is not None else None
        if number is None:
            return None
        terms.append((float(n), number))
    total = math.fsum(n * p.value for n, p in terms)
    u = math.sqrt(math.fsum((n * p.last_place / ROUNDING) ** 2 for n, p in terms))
    text = " ".join(f"{'+' if n > 0 else '-'} {abs(n):g} × ({p.text})" for n, p in terms)
    return total, u, text.removeprefix("+ ")


def _plain(x: float) -> str:
    return significant(x, 10).rstrip("0").rstrip(".") if "e" not in significant(x, 10) else f"{x:g}"


def side_log10_k(reaction: SideReaction) -> tuple[float, float, float]:
    """(log10 K, uncertainty of its digits, temperature in °C) of a side reaction as recorded."""
    t = FORMATION_T_C if reaction.figure.temperature_c is None else reaction.figure.temperature_c
    value, _, digits, _ = _log10_k(reaction.figure, t)
    return value, digits, t
