"""The problem form: what the engine takes and gives, arrays of numbers only (contract 4).

A problem is a solution in which *base ions* (B of them) combine to *dissolved forms* (F; the base
ions are the first B of them) while *holds* (H) fix an activity product: a solid at saturation, a
gas at a pressure, a pH. What a hold exchanges with the solution is its unknown amount.

    m_i γ_i = K_i Π_b a_b^ν_ib · a_w^ν_iw        dissolved form i
    Π_b a_b^r_kb · a_w^r_kw = K_k                hold k
    Σ_i ν_ib m_i = T_b + Σ_k e_kb s_k            balance of base ion b

H^+ is base ion 0 and its balance is the proton condition, which for neutral additions is the
charge balance: free pH needs no further equation. Molalities are per kilogram of all solvent
water, water of crystallisation included.

The same arrays without the leading stack axis are the JSON of the pages, of the vectors and of
the exports; keys are the field names.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, fields, replace
from typing import Any, TypeVar

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

IDEAL, EXTENDED, DAVIES = 0, 1, 2
MODEL_NAMES = ("ideal", "extended Debye-Hückel", "Davies")

COMPUTED, BEYOND_LIMIT, NO_SOLUTION = 0, 1, 2

FILLING = 1e-30  # mol/kg of an inert form that fills up a stack
T0_FILLING = 298.15  # K


@dataclass(frozen=True)
class Problem:
    """A stack of P problems.

    t_celsius (P,); model (P,) of IDEAL, EXTENDED, DAVIES; limit (P,) largest ionic strength, mol/kg
    stoichiometry (P,F,B), water (P,F): base ions and water in one dissolved form
    charge (P,F); law (P,F,7): formation from base ions, see chem/temperature.py
        (a base ion: T0 and zeros)
    size (P,F): ion size in Å; linear (P,F): coefficient b of I in log10 γ, kg/mol
    total (P,B): amounts given, mol/kg; negative for H^+ means OH^-
    hold (P,H,B), hold_water (P,H), hold_law (P,H,7), exchange (P,H,B)
    """

    t_celsius: Array
    model: Array
    limit: Array
    stoichiometry: Array
    water: Array
    charge: Array
    law: Array
    size: Array
    linear: Array
    total: Array
    hold: Array
    hold_water: Array
    hold_law: Array
    exchange: Array

    def __len__(self) -> int:
        return int(self.t_celsius.shape[0])


@dataclass(frozen=True)
class Solution:
    """What the engine gives for a stack of P problems.

    state (P,): COMPUTED, BEYOND_LIMIT, NO_SOLUTION; every other field is NaN where not COMPUTED
    molality, log10_gamma (P,F); amount (P,H): s_k, mol/kg; ln_activity (P,B) of the base ions
    ionic_strength, ln_water (P,): mol/kg, natural logarithm of the activity of water
    residual (P,): largest balance error relative to the sum of absolute terms
    by_form (P,F), by_hold (P,H): ∂log10 s_0/∂log10 K of every form and hold (implicit function).
        For a base ion the entry is the sensitivity to 1/γ of that ion.
    by_total (P,B): ∂ln s_0/∂T_b, kg/mol
    """

    state: NDArray[np.int64]
    molality: Array
    log10_gamma: Array
    amount: Array
    ln_activity: Array
    ionic_strength: Array
    ln_water: Array
    residual: Array
    by_form: Array
    by_hold: Array
    by_total: Array


_SCALARS = ("t_celsius", "model", "limit")


def single(problem: Mapping[str, Any]) -> Problem:
    """A stack of one from the JSON form. Raises KeyError or ValueError on a malformed mapping."""
    arrays = {f.name: np.asarray([problem[f.name]], dtype=float) for f in fields(Problem)}
    if arrays["hold"].size == 0:  # no hold: JSON's [] does not say how wide its rows would be
        bases = arrays["total"].shape[1]
        arrays |= {
            "hold": np.zeros((1, 0, bases)),
            "hold_law": np.zeros((1, 0, 7)),
            "exchange": np.zeros((1, 0, bases)),
        }
    return Problem(**arrays)


def as_json(problem: Problem, index: int = 0) -> dict[str, Any]:
    """One problem of a stack in the JSON form."""
    return {f.name: getattr(problem, f.name)[index].tolist() for f in fields(Problem)}


Stack = TypeVar("Stack", Problem, Solution)


def one(stacked: Stack, index: int) -> Stack:
    """One problem or solution of a stack, as a stack of one."""
    rows = {f.name: getattr(stacked, f.name)[index : index + 1] for f in fields(stacked)}
    return replace(stacked, **rows)


def at_temperatures(problem: Problem, temperatures: Sequence[float]) -> Problem:
    """One problem (a stack of one) at several temperatures in °C."""
    count = len(temperatures)
    rows = {f.name: np.repeat(getattr(problem, f.name), count, axis=0) for f in fields(Problem)}
    return Problem(**{**rows, "t_celsius": np.asarray(temperatures, dtype=float)})


def stack(problems: Sequence[Problem]) -> Problem:
    """Put stacks of different sizes into one, filling up with inert neutral forms.

    A filling base ion is a neutral form of 1e-30 mol/kg that takes part in nothing. A filling hold
    fixes the activity of a filling base ion at just that amount, and so exchanges nothing.
    """
    holds = max(p.hold.shape[1] for p in problems)
    # every filling hold needs a filling base ion of its own
    bases = max(p.total.shape[1] + holds - p.hold.shape[1] for p in problems)
    forms = max(p.charge.shape[1] + bases - p.total.shape[1] for p in problems)
    filled = [_fill(p, forms, bases, holds) for p in problems]
    return Problem(
        **{f.name: np.concatenate([getattr(p, f.name) for p in filled]) for f in fields(Problem)}
    )


def _fill(p: Problem, forms: int, bases: int, holds: int) -> Problem:
    count, f, b = p.stoichiometry.shape
    h = p.hold.shape[1]
    if (f, b, h) == (forms, bases, holds):
        return p
    new_bases = bases - b

    def grown(a: Array, *shape: int) -> Array:
        out = np.zeros((count, *shape))
        out[tuple(slice(0, n) for n in a.shape)] = a
        return out

    # base ions come first among the forms: make room behind the old base ions
    order = [*range(b), *range(f, f + new_bases), *range(b, f)]
    order += list(range(f + new_bases, forms))

    def forms_grown(a: Array, *rest: int) -> Array:
        return grown(a, forms, *rest)[:, order]

    stoichiometry = forms_grown(p.stoichiometry, bases)
    total = grown(p.total, bases)
    law = forms_grown(p.law, 7)
    law[:, [*range(b, bases), *range(f + new_bases, forms)], 0] = T0_FILLING
    for j in range(b, bases):
        stoichiometry[:, j, j] = 1.0
        total[:, j] = FILLING
    for i in range(f + new_bases, forms):
        law[:, i, 1] = -300.0  # no amount worth the name
    hold = grown(p.hold, holds, bases)
    exchange = grown(p.exchange, holds, bases)
    hold_law = grown(p.hold_law, holds, 7)
    for k in range(h, holds):
        hold[:, k, b + k - h] = exchange[:, k, b + k - h] = 1.0
        hold_law[:, k, 0] = T0_FILLING
        hold_law[:, k, 1] = math.log10(FILLING)
    return Problem(
        t_celsius=p.t_celsius,
        model=p.model,
        limit=p.limit,
        stoichiometry=stoichiometry,
        water=forms_grown(p.water),
        charge=forms_grown(p.charge),
        law=law,
        size=forms_grown(p.size),
        linear=forms_grown(p.linear),
        total=total,
        hold=hold,
        hold_water=grown(p.hold_water, holds),
        hold_law=hold_law,
        exchange=exchange,
    )
