"""How much of a salt dissolves: the first question, answered through the engine with its budget."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace

from builder.chem.curve import CurveValue, at
from builder.chem.equilibrium import solve
from builder.chem.formula import parse_formula
from builder.chem.problem import (
    BEYOND_LIMIT,
    COMPUTED,
    MODEL_NAMES,
    Problem,
    Solution,
    at_temperatures,
    one,
)
from builder.chem.temperature import LN10
from builder.chem.water import density_kg_m3
from builder.collection.answer import Dissolved, FormAmount, OtherSolid
from builder.collection.budget import budget
from builder.collection.conditions import solid_hold
from builder.collection.forms import HYDROGEN, Made, add
from builder.collection.mixture import (
    Mixture,
    NotKnownError,
    mixture,
    problem,
    textbook,
)
from builder.collection.reference import Reference

Additions = Sequence[tuple[str, float]]  # (formula of an electrolyte, mol/kg)


def dissolve(
    reference: Reference, salt_id: str, t_celsius: float, additions: Additions = ()
) -> Dissolved:
    """Solubility of a salt in water with electrolytes added, free pH, no carbon dioxide.

    Never raises for a known salt, known electrolytes and any temperature: what can not be
    answered is refused in words.
    """
    return _series(reference, salt_id, (t_celsius,), additions, computed)[0]


def amounts(
    reference: Reference, salt_id: str, temperatures: Sequence[float], additions: Additions = ()
) -> list[Dissolved]:
    """The same question at several temperatures, solved as one stack.

    Amounts and forms alone: neither the budget nor other solids are worked out.
    """
    return _series(reference, salt_id, temperatures, additions, solved_amounts)


Record = Callable[[Reference, str, CurveValue, Mixture, Problem, Solution, float | None], Dissolved]


def _series(
    reference: Reference,
    salt_id: str,
    temperatures: Sequence[float],
    additions: Additions,
    record: Record,
) -> list[Dissolved]:
    evaluated = reference.salts[salt_id]
    curve = evaluated.law.curve
    if curve is None:
        reason = evaluated.refused
        blank = CurveValue(25.0, "refused", 0.0, None, None, 1.96, reason)
        return [refused(salt_id, replace(blank, t_celsius=t), reason) for t in temperatures]
    values = [at(curve, t) for t in temperatures]
    given = [(m, reference.additions[formula]) for formula, m in additions if m > 0.0]
    solid = reference.dissolving[salt_id]
    try:
        made = [part for _, part in given]
        mix = mixture(reference.forms, reference.collection, solid, made, evaluated.salt.needs)
    except NotKnownError as unknown:
        return [refused(salt_id, v, str(unknown)) for v in values]
    open_values = [v for v in values if v.log10_k is not None]
    totals = add(given, {}).base
    answers = iter(_solved(reference, salt_id, open_values, mix, totals, record))
    return [refused(salt_id, v, v.reason) if v.log10_k is None else next(answers) for v in values]


def refused(salt_id: str, value: CurveValue, reason: str) -> Dissolved:
    """An answer that is none."""
    # a constant that is itself refused says why; it is the first reason
    return Dissolved(salt_id, value.t_celsius, "refused", value.reason or reason, value)


def _solved(
    reference: Reference,
    salt_id: str,
    values: Sequence[CurveValue],
    mix: Mixture,
    totals: Mapping[str, float],
    record: Record,
) -> list[Dissolved]:
    if not values:
        return []
    temperatures = [v.t_celsius for v in values]
    asked = at_temperatures(salt_problem(reference, salt_id, mix, 25.0, totals), temperatures)
    answer = solve(asked)
    book = salt_problem(reference, salt_id, textbook(mix), 25.0, totals)
    simple = solve(at_temperatures(book, temperatures))
    out: list[Dissolved] = []
    for i, value in enumerate(values):
        amount = float(simple.amount[i, 0]) if simple.state[i] == COMPUTED else None
        if answer.state[i] == COMPUTED:
            rows = (one(asked, i), one(answer, i))
            out.append(record(reference, salt_id, value, mix, *rows, amount))
            continue
        out.append(unsolved(salt_id, value, mix, int(answer.state[i]), amount))
    return out


def unsolved(
    salt_id: str, value: CurveValue, mix: Mixture, state: int, simple: float | None
) -> Dissolved:
    """A refusal of the engine in words."""
    reason = (
        f"the ionic strength would pass {mix.limit:g} mol/kg, where the activity model ends"
        if state == BEYOND_LIMIT
        else "there is no solution within the range of the activity model"
    )
    return replace(refused(salt_id, value, reason), textbook_mol_per_kg=simple)


def salt_problem(
    reference: Reference,
    salt_id: str,
    mix: Mixture,
    t_celsius: float,
    totals: Mapping[str, float],
) -> Problem:
    """The engine's problem of one salt at saturation."""
    return problem(mix, t_celsius, totals, [solid_hold(reference, salt_id)])


def metal_of(reference: Reference, salt_id: str) -> str:
    """The ion whose dissolved forms are shared out: the first cation of the dissolution.

    Where there is none (silica), its first ion.
    """
    ions = [ion for ion in reference.dissolving[salt_id].base if ion != HYDROGEN]
    return next((ion for ion in ions if ion.endswith("+")), ions[0])


def computed(
    reference: Reference,
    salt_id: str,
    value: CurveValue,
    mix: Mixture,
    asked: Problem,
    answer: Solution,
    simple: float | None,
) -> Dissolved:
    """The record of a solved problem whose first hold is the salt, with budget and other solids."""
    plain = solved_amounts(reference, salt_id, value, mix, asked, answer, simple)
    u, lines = budget(reference, salt_id, value, mix, asked, answer)
    return replace(
        plain,
        standard_uncertainty_log10=u,
        budget=lines,
        other_solids=_other_solids(reference, salt_id, mix, answer, value.t_celsius),
    )


def solved_amounts(
    reference: Reference,
    salt_id: str,
    value: CurveValue,
    mix: Mixture,
    _: Problem,
    answer: Solution,
    simple: float | None,
) -> Dissolved:
    """The record without budget and other solids."""
    evaluated = reference.salts[salt_id]
    t = value.t_celsius
    s = float(answer.amount[0, 0])
    litre = density_kg_m3(t) / 1000.0
    formula = parse_formula(evaluated.salt.formula)
    mass = reference.molar_mass(evaluated.salt.formula)
    dry = mass - float(formula.water) * reference.molar_mass("H2O")
    metal = metal_of(reference, salt_id)
    times = [f.made.base.get(metal, 0.0) for f in mix.forms]
    molality = [float(m) for m in answer.molality[0]]
    total_metal = math.fsum(n * m for n, m in zip(times, molality, strict=True))
    forms = tuple(
        FormAmount(
            f.formula,
            n * m / total_metal if n else None,
            m,
            10.0 ** float(answer.log10_gamma[0, i]),
        )
        for i, (f, n, m) in enumerate(zip(mix.forms, times, molality, strict=True))
    )
    metal_mass = reference.molar_mass(metal)
    return Dissolved(
        salt=salt_id,
        temperature_c=t,
        state="computed",
        reason="",
        constant=value,
        solubility_mol_per_kg=s,
        solubility_mol_per_l=s * litre,
        solubility_g_per_l=s * litre * mass,
        solubility_g_per_l_anhydrous=s * litre * dry,
        metal=metal,
        metal_mg_per_mol=reference.dissolving[salt_id].base[metal] * metal_mass * 1000.0,
        metal_mg_per_kg=total_metal * metal_mass * 1000.0,
        metal_mg_per_l=total_metal * metal_mass * 1000.0 * litre,
        forms=forms,
        ionic_strength=float(answer.ionic_strength[0]),
        activity_model=MODEL_NAMES[mix.model],
        ph=-float(answer.ln_activity[0, 0]) / LN10,
        textbook_mol_per_kg=simple,
    )


def _other_solids(
    reference: Reference, salt_id: str, mix: Mixture, answer: Solution, t: float
) -> tuple[OtherSolid, ...]:
    """Other solids of the collection whose saturation index is above 0 in this solution."""
    log_a = {b: float(answer.ln_activity[0, i]) / LN10 for i, b in enumerate(mix.bases)}
    found: list[OtherSolid] = []
    for other_id, evaluated in reference.salts.items():
        if other_id == salt_id or not reference.ions[other_id] <= log_a.keys():
            continue
        if evaluated.law.curve is None:
            continue
        made = reference.dissolving[other_id]
        value = at(evaluated.law.curve, t)
        if value.log10_k is None:
            continue
        index = _product(made, log_a, float(answer.ln_water[0]) / LN10, reference, t)
        if index - value.log10_k > 0.0:
            found.append(OtherSolid(other_id, index - value.log10_k))
    return tuple(sorted(found, key=lambda o: -o.saturation_index))


def _product(
    made: Made, log_a: Mapping[str, float], log_water: float, reference: Reference, t: float
) -> float:
    """log10 of the ion activity product of a dissolution, in the terms of its own constant."""
    constants = math.fsum(
        n * (at(reference.side_curves[name], t).log10_k or 0.0)
        for name, n in made.constants.items()
    )
    ions = math.fsum(n * log_a[ion] for ion, n in made.base.items())
    return ions + made.water * log_water + constants


def dissolve_textbook(reference: Reference, full: Dissolved, additions: Additions) -> Dissolved:
    """The textbook's answer, in the same form, to stand beside the full answer to a question.

    Free ions and concentrations for activities; its uncertainty is not evaluated. Refused where
    the collection does not know which other forms there are, so that nothing is hidden.
    """
    if full.textbook_mol_per_kg is None:
        reason = full.reason or "there is no solution within the range of the activity model"
        return Dissolved(full.salt, full.temperature_c, "refused", reason, full.constant)
    solid = reference.dissolving[full.salt]
    given = [(m, reference.additions[formula]) for formula, m in additions if m > 0.0]
    needs = reference.salts[full.salt].salt.needs
    made = [part for _, part in given]
    mix = textbook(mixture(reference.forms, reference.collection, solid, made, needs))
    asked = salt_problem(reference, full.salt, mix, full.temperature_c, add(given, {}).base)
    simple = full.textbook_mol_per_kg
    answer = computed(reference, full.salt, full.constant, mix, asked, solve(asked), simple)
    return replace(answer, standard_uncertainty_log10=None, budget=(), other_solids=())
