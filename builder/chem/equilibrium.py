"""The engine: solves stacks of problems (chem/problem.py) and differentiates the answer.

Method. Unknowns are x = ln a of the base ions and the amounts s exchanged by the holds.
At fixed activity coefficients the balances are the gradient of the convex function
Σ m_i(x) - T·x on the plane of the holds, so the inner problem has one root; damped Newton with the
analytic Jacobian finds it. Ionic strength I and Σ m (for the activity of water) close the outer
problem: first Newton on everything at once from the solution at I = 0; where that does not
arrive at a root with falling I_calc(I) - I, the root is bracketed from I = 0 upwards, so that of
several roots the one of lowest I is given. Convex formulation: Smith and Missen, Chemical Reaction
Equilibrium Analysis (1982), ch. 6; sensitivities: implicit function theorem.
"""

from __future__ import annotations

from contextlib import suppress
from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from builder.chem import temperature
from builder.chem.activity import (
    MOLAR_MASS_WATER,
    coefficients,
    log10_gamma,
    log10_gamma_slope,
)
from builder.chem.problem import (
    BEYOND_LIMIT,
    COMPUTED,
    IDEAL,
    NO_SOLUTION,
    Array,
    Problem,
    Solution,
)
from builder.chem.water import kelvin

LN10 = temperature.LN10
LARGEST_STEP = 4.0  # in ln a
LOWEST_LN_A = -230.0
ALLOWANCE = 1.000001  # 0.5 mol/kg of a salt is not beyond 0.5 for the H+ and OH- of water
MOST_SOLUTES = 20.0  # mol/kg: beyond it the scan holds the activity of water
INNER_STEPS = 200
COUPLED_STEPS = 40
SCAN_STEPS = 120
CONVERGED = 1e-13  # balance error relative to the sum of absolute terms
ACCEPTED = 1e-12
TINY = 1e-300


@dataclass(frozen=True)
class _Numbers:
    """A problem evaluated at its temperature, in natural logarithms."""

    nu: Array  # (P,F,B)
    nu_water: Array  # (P,F)
    z2: Array  # (P,F)
    ln_k: Array  # (P,F)
    strength: Array
    p: Array
    q: Array
    total: Array  # (P,B)
    hold: Array  # (P,H,B)
    hold_water: Array  # (P,H)
    hold_ln_k: Array  # (P,H)
    exchange: Array  # (P,H,B)
    limit: Array  # (P,)

    def of(self, index: NDArray[np.int64]) -> _Numbers:
        return _Numbers(**{f.name: getattr(self, f.name)[index] for f in fields(self)})


@dataclass
class _State:
    """Where the iteration stands; arrays are overwritten row by row."""

    x: Array  # (P,B)
    s: Array  # (P,H)
    ionic: Array  # (P,)
    solutes: Array  # (P,) Σ m
    error: Array  # (P,)

    def of(self, index: NDArray[np.int64]) -> _State:
        return _State(**{f.name: getattr(self, f.name)[index] for f in fields(self)})

    def put(self, index: NDArray[np.int64], rows: _State) -> None:
        for f in fields(self):
            getattr(self, f.name)[index] = getattr(rows, f.name)


def solve(problem: Problem) -> Solution:
    """Solve a stack of P problems. Never raises for finite input; see Solution.state."""
    n = _evaluate(problem)
    count = len(problem)
    state = _start(n)
    everything = np.arange(count)
    with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
        _inner(n, state)
        after_zero = state.of(everything)
        found = _coupled(n, state)
        beyond = np.zeros(count, dtype=bool)
        lost = np.flatnonzero(~found)
        if lost.size:
            rows = after_zero.of(lost)
            found_rows, beyond[lost] = _scan(n.of(lost), rows)
            state.put(lost, rows)
            found[lost] = found_rows
        beyond |= found & (state.ionic > n.limit)
        outcome = np.where(beyond, BEYOND_LIMIT, np.where(found, COMPUTED, NO_SOLUTION))
        return _answer(n, state, outcome)


def _evaluate(problem: Problem) -> _Numbers:
    t = kelvin(problem.t_celsius)[:, None]
    strength, p, q = coefficients(problem)
    ideal = problem.model == IDEAL
    # an ideal solution has an ideal solvent too: no water term
    keep_water = np.where(ideal, 0.0, 1.0)[:, None]
    return _Numbers(
        nu=problem.stoichiometry,
        nu_water=problem.water * keep_water,
        z2=problem.charge**2,
        ln_k=LN10 * temperature.log10_k(problem.law, t),
        strength=strength,
        p=p,
        q=q,
        total=problem.total,
        hold=problem.hold,
        hold_water=problem.hold_water * keep_water,
        hold_ln_k=LN10 * temperature.log10_k(problem.hold_law, t),
        exchange=problem.exchange,
        limit=np.where(ideal, np.inf, problem.limit * ALLOWANCE),
    )


def _start(n: _Numbers) -> _State:
    """First guess: the amounts given, moved onto the plane of the holds."""
    count = len(n.total)
    x = np.log(np.maximum(n.total, 1e-7))
    gram = np.einsum("phb,pkb->phk", n.hold, n.hold)
    gap = n.hold_ln_k - np.einsum("phb,pb->ph", n.hold, x)
    if n.hold.shape[1]:
        x = x + np.einsum("phb,ph->pb", n.hold, _solve(gram, gap))
    zeros = np.zeros(count)
    return _State(x, np.zeros(n.hold_ln_k.shape), zeros, zeros.copy(), np.full(count, np.inf))


def _molality(n: _Numbers, x: Array, ionic: Array, solutes: Array) -> Array:
    ln_water = -MOLAR_MASS_WATER * solutes
    ln_gamma = LN10 * log10_gamma(n.strength, n.p, n.q, ionic)
    ln_m = n.ln_k + np.einsum("pfb,pb->pf", n.nu, x) + n.nu_water * ln_water[:, None] - ln_gamma
    return np.asarray(np.exp(np.clip(ln_m, -700.0, 700.0)))


def _solve(matrix: Array, right: Array) -> Array:
    """Batched linear solve; a singular matrix gives NaN instead of an exception."""
    try:
        return np.asarray(np.linalg.solve(matrix, right[..., None])[..., 0])
    except np.linalg.LinAlgError:
        out = np.full(right.shape, np.nan)
        for i in range(len(matrix)):
            with suppress(np.linalg.LinAlgError):
                out[i] = np.linalg.solve(matrix[i], right[i])
        return out


def _balance(n: _Numbers, m: Array, s: Array) -> tuple[Array, Array]:
    """Balance error (P,B) and the sum of the absolute terms (P,B)."""
    made = np.einsum("pfb,pf->pb", n.nu, m)
    given = n.total + np.einsum("phb,ph->pb", n.exchange, s)
    size = (
        np.einsum("pfb,pf->pb", np.abs(n.nu), m)
        + np.abs(n.total)
        + np.einsum("phb,ph->pb", np.abs(n.exchange), np.abs(s))
    )
    return made - given, np.maximum(size, TINY)


def _inner(n: _Numbers, state: _State) -> None:
    """Newton at the ionic strength and Σ m of `state`; updates x, s and error in place."""
    active = np.arange(len(state.ionic))
    for _ in range(INNER_STEPS):
        if not active.size:
            return
        part, rows = n.of(active), state.of(active)
        m = _molality(part, rows.x, rows.ionic, rows.solutes)
        step, s = _inner_step(part, rows, m)
        # where a hold exchanges something else, the ion exchanged may ask for a negative amount
        # until the others settle: it must not hold them up, nor go beyond return
        skew = ~_symmetric(part)
        limited = np.clip(step, -LARGEST_STEP, LARGEST_STEP)
        limited = np.maximum(limited, np.minimum(LOWEST_LN_A - rows.x, 0.0))
        step = np.where(skew[:, None], limited, step)
        largest = np.max(np.abs(step), axis=1)
        damping = np.minimum(1.0, LARGEST_STEP / np.maximum(largest, TINY))
        damping = _descend(part, rows, m, step, damping, largest)
        rows.x = rows.x + damping[:, None] * step
        rows.s = s
        m = _molality(part, rows.x, rows.ionic, rows.solutes)
        error, size = _balance(part, m, rows.s)
        rows.error = np.max(np.abs(error) / size, axis=1)
        bad = ~np.isfinite(largest)
        rows.x[bad] = state.x[active][bad]
        rows.error[bad] = np.inf
        state.put(active, rows)
        done = bad | ((rows.error < CONVERGED) & (largest < 1e-6)) | (largest < 1e-14)
        active = active[~done]


def _inner_step(n: _Numbers, rows: _State, m: Array) -> tuple[Array, Array]:
    """Newton step in x (P,B) and the new s (P,H) of the balances and holds together."""
    bases, holds = n.total.shape[1], n.hold.shape[1]
    made = np.einsum("pfb,pf->pb", n.nu, m)
    hessian = np.einsum("pfb,pf,pfc->pbc", n.nu, m, n.nu)
    scale = 1.0 / np.maximum(np.einsum("pbb->pb", hessian) + np.abs(n.total), TINY)
    amount = np.min(1.0 / scale, axis=1)  # unit in which s is solved for
    matrix = np.zeros((len(m), bases + holds, bases + holds))
    matrix[:, :bases, :bases] = hessian * scale[:, :, None]
    matrix[:, :bases, bases:] = (
        -np.swapaxes(n.exchange, 1, 2) * scale[:, :, None] * amount[:, None, None]
    )
    matrix[:, bases:, :bases] = n.hold
    ln_water = -MOLAR_MASS_WATER * rows.solutes[:, None]
    gap = n.hold_ln_k - np.einsum("phb,pb->ph", n.hold, rows.x) - n.hold_water * ln_water
    right = np.concatenate([(n.total - made) * scale, gap], axis=1)
    both = _solve(matrix, right)
    return both[:, :bases], both[:, bases:] * amount[:, None]


def _symmetric(n: _Numbers) -> NDArray[np.bool_]:
    """True where every hold exchanges what it holds: only then is the problem convex."""
    return np.asarray(np.all(n.hold == n.exchange, axis=(1, 2)))


def _descend(
    n: _Numbers, rows: _State, m: Array, step: Array, damping: Array, largest: Array
) -> Array:
    """Halve the damping until the convex function falls; small steps need no check."""
    before = np.sum(m, axis=1) - np.einsum("pb,pb->p", n.total, rows.x)
    slope = np.einsum("pfb,pf,pb->p", n.nu, m, step) - np.einsum("pb,pb->p", n.total, step)
    # off the plane of the holds the function may have to rise: only descents are checked
    check = _symmetric(n) & (largest > 1e-3) & (slope < 0.0)
    for _ in range(30):
        x = rows.x + damping[:, None] * step
        trial = _molality(n, x, rows.ionic, rows.solutes)
        after = np.sum(trial, axis=1) - np.einsum("pb,pb->p", n.total, x)
        worse = check & ~(after <= before + 1e-4 * damping * slope + 1e-15 * np.abs(before))
        if not worse.any():
            break
        damping = np.where(worse, 0.5 * damping, damping)
    return damping


def _close(n: _Numbers, state: _State) -> tuple[Array, Array]:
    """I and Σ m that follow from the solution at the I and Σ m assumed."""
    m = _molality(n, state.x, state.ionic, state.solutes)
    return 0.5 * np.sum(n.z2 * m, axis=1), np.sum(m, axis=1)


def _jacobian(n: _Numbers, m: Array, ionic: Array) -> Array:
    """Jacobian (P, B+H+2, B+H+2) of balances, holds, I and Σ m by x, s, I and Σ m."""
    count, _, bases = n.nu.shape
    holds = n.hold.shape[1]
    size = bases + holds + 2
    by_ionic = -LN10 * log10_gamma_slope(n.strength, n.p, n.q, np.maximum(ionic, TINY)) * m
    by_solutes = -MOLAR_MASS_WATER * n.nu_water * m
    j = np.zeros((count, size, size))
    j[:, :bases, :bases] = np.einsum("pfb,pf,pfc->pbc", n.nu, m, n.nu)
    j[:, :bases, bases : bases + holds] = -np.swapaxes(n.exchange, 1, 2)
    j[:, bases : bases + holds, :bases] = n.hold
    j[:, bases : bases + holds, -1] = -MOLAR_MASS_WATER * n.hold_water
    weights = ((-2, 0.5 * n.z2), (-1, np.ones_like(n.z2)))
    for row, weight in weights:
        j[:, row, :bases] = np.einsum("pf,pf,pfb->pb", weight, m, n.nu)
        j[:, row, -2] = np.sum(weight * by_ionic, axis=1)
        j[:, row, -1] = np.sum(weight * by_solutes, axis=1)
        j[:, row, row] -= 1.0
    j[:, :bases, -2] = np.einsum("pfb,pf->pb", n.nu, by_ionic)
    j[:, :bases, -1] = np.einsum("pfb,pf->pb", n.nu, by_solutes)
    return j


def _scaled_jacobian(
    n: _Numbers, state: _State, m: Array, size: Array
) -> tuple[Array, Array, Array]:
    """The Jacobian with rows relative to the size of their equation and columns in the unit of
    their unknown, and both factors (P, B+H+2): without them, amounts of 1e-20 drown among those
    of 1."""
    bases, holds = n.total.shape[1], n.hold.shape[1]
    ones = np.ones((len(m), holds + 2))
    row = np.concatenate([1.0 / size, ones], axis=1)
    row[:, -2] = 1.0 / state.ionic
    column = np.ones_like(row)
    column[:, bases : bases + holds] = np.min(size, axis=1)[:, None]
    column[:, -2] = state.ionic
    j = _jacobian(n, m, state.ionic) * row[:, :, None] * column[:, None, :]
    return j, row, column


def _coupled(n: _Numbers, state: _State) -> NDArray[np.bool_]:
    """Newton on everything at once. True where it arrives at a root with falling I_calc - I."""
    bases, holds = n.total.shape[1], n.hold.shape[1]
    ionic, solutes = _close(n, state)
    state.ionic, state.solutes = np.maximum(ionic, 1e-12), solutes
    found = np.zeros(len(ionic), dtype=bool)
    active = np.flatnonzero(np.isfinite(state.error))
    for _ in range(COUPLED_STEPS):
        if not active.size:
            break
        part, rows = n.of(active), state.of(active)
        m = _molality(part, rows.x, rows.ionic, rows.solutes)
        error, size = _balance(part, m, rows.s)
        ln_water = -MOLAR_MASS_WATER * rows.solutes[:, None]
        gap = (
            np.einsum("phb,pb->ph", part.hold, rows.x) + part.hold_water * ln_water - part.hold_ln_k
        )
        open_i = 0.5 * np.sum(part.z2 * m, axis=1) - rows.ionic
        open_w = np.sum(m, axis=1) - rows.solutes
        wrong = np.concatenate([error, gap, open_i[:, None], open_w[:, None]], axis=1)
        j, row, column = _scaled_jacobian(part, rows, m, size)
        step = column * _solve(j, -wrong * row)
        largest = np.maximum(
            np.max(np.abs(step[:, :bases]), axis=1), np.abs(step[:, -2]) / rows.ionic
        )
        damping = np.minimum(1.0, 1.0 / np.maximum(largest, TINY))[:, None]
        bad = ~np.isfinite(largest)
        step[bad] = 0.0
        rows.x = rows.x + damping * step[:, :bases]
        rows.s = rows.s + damping * step[:, bases : bases + holds]
        rows.ionic = np.maximum(rows.ionic + damping[:, 0] * step[:, -2], 1e-14)
        rows.solutes = rows.solutes + damping[:, 0] * step[:, -1]
        rows.error = np.max(np.abs(wrong * row), axis=1)
        state.put(active, rows)
        arrived = (largest < 1e-9) & ~bad
        found[active[arrived]] = True
        too_far = rows.ionic > 20.0 * np.maximum(part.limit, 1.0)
        active = active[~(arrived | bad | too_far)]
    return found & _falling(n, state)


def _falling(n: _Numbers, state: _State) -> NDArray[np.bool_]:
    """True where I_calc(I) crosses I from above: d I_calc/dI < 1 at the root.

    The Schur complement of the I row has the sign of I_calc' - 1: it is read from the inverse of
    the Jacobian, whose (I, I) entry is 1/(I_calc' - 1); scaling keeps its sign.
    """
    m = _molality(n, state.x, state.ionic, state.solutes)
    j, _, _ = _scaled_jacobian(n, state, m, _balance(n, m, state.s)[1])
    unit = np.zeros(j.shape[:2])
    unit[:, -2] = 1.0
    return np.asarray(_solve(j, unit)[:, -2] < 0.0)


def _scan(n: _Numbers, state: _State) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Bracket the lowest root of I_calc(I) - I from I = 0. Returns (found, beyond the limit)."""
    count = len(state.ionic)
    top = np.minimum(n.limit, 50.0)
    low, high = np.zeros(count), np.full(count, np.inf)
    beyond = np.zeros(count, dtype=bool)
    state.ionic, state.solutes = np.zeros(count), np.zeros(count)
    for _ in range(SCAN_STEPS):
        _inner(n, state)
        ionic, solutes = _close(n, state)
        above = ionic >= state.ionic
        low = np.where(above, state.ionic, low)
        high = np.where(above, high, state.ionic)
        # what is not solved at a fixed I says nothing about the limit
        beyond |= above & (state.ionic >= top) & (state.error < ACCEPTED)
        state.solutes = np.minimum(solutes, MOST_SOLUTES)
        bracketed = np.isfinite(high)
        climb = np.minimum(np.maximum(ionic, 1.05 * state.ionic), top)
        state.ionic = np.where(bracketed, 0.5 * (low + np.where(bracketed, high, low)), climb)
    found = _coupled_from(n, state)
    return found & ~beyond, beyond


def _coupled_from(n: _Numbers, state: _State) -> NDArray[np.bool_]:
    """Is the bracketed root closed to the accuracy asked for?"""
    _inner(n, state)
    ionic, solutes = _close(n, state)
    closed = np.abs(ionic - state.ionic) <= 1e-9 * np.maximum(ionic, 1e-9)
    state.solutes = solutes
    return closed & (state.error < ACCEPTED)


def _answer(n: _Numbers, state: _State, outcome: NDArray[np.int64]) -> Solution:
    m = _molality(n, state.x, state.ionic, state.solutes)
    error, size = _balance(n, m, state.s)
    residual = np.max(np.abs(error) / size, axis=1)
    outcome = np.where((outcome == COMPUTED) & ~(residual < ACCEPTED), NO_SOLUTION, outcome)
    by_form, by_hold, by_total = _sensitivities(n, state, m)
    blank = outcome != COMPUTED

    def shown(a: Array) -> Array:
        return np.where(blank.reshape(-1, *[1] * (a.ndim - 1)), np.nan, a)

    return Solution(
        state=outcome,
        molality=shown(m),
        log10_gamma=shown(log10_gamma(n.strength, n.p, n.q, state.ionic)),
        amount=shown(state.s),
        ln_activity=shown(state.x),
        ionic_strength=shown(state.ionic),
        ln_water=shown(-MOLAR_MASS_WATER * state.solutes),
        residual=shown(residual),
        by_form=shown(by_form),
        by_hold=shown(by_hold),
        by_total=shown(by_total),
    )


def _sensitivities(n: _Numbers, state: _State, m: Array) -> tuple[Array, Array, Array]:
    """Adjoint of the Jacobian for s_0: one solve gives the slope by every constant."""
    count, forms, bases = n.nu.shape
    holds = n.hold.shape[1]
    if holds == 0:
        return np.zeros((count, forms)), np.zeros((count, 0)), np.zeros((count, bases))
    j, row, column = _scaled_jacobian(n, state, m, _balance(n, m, state.s)[1])
    unit = np.zeros(j.shape[:2])
    unit[:, bases] = column[:, bases]
    adjoint = row * _solve(np.swapaxes(j, 1, 2), unit)
    # d(equations)/d ln K_i = m_i times (ν_i, 0, z²/2, 1); of a hold: -1 in its own row
    pull = (
        np.einsum("pfb,pb->pf", n.nu, adjoint[:, :bases])
        + 0.5 * n.z2 * adjoint[:, -2, None]
        + adjoint[:, -1, None]
    )
    s0 = state.s[:, :1]
    by_form = -m * pull / s0
    by_hold = adjoint[:, bases : bases + holds] / s0
    by_total = adjoint[:, :bases] / s0
    return by_form, by_hold, by_total
