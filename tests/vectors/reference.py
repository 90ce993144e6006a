"""Answers of problems in 40 digits, written from the equations of the problem form alone.

    m_i γ_i = K_i Π_b a_b^ν_ib · a_w^ν_iw        dissolved form i
    Π_b a_b^r_kb · a_w^r_kw = K_k                hold k
    Σ_i ν_ib m_i = T_b + Σ_k e_kb s_k            balance of base ion b
    I = ½ Σ z² m,   ln a_w = -0.018015 Σ m       (an ideal solution: γ = 1, a_w = 1)

A search in doubles walks I upwards from 0 in steps of 10 %, solving the problem at each fixed I,
up to the first change of sign of I_calc(I) - I: the root of lowest I, which the answer is defined
to be. Newton in 50 digits on all equations at once then finishes it. No change of sign up to the
limit: refused. Nothing of the engine under test is used.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from mpmath import mp, mpf
from vectors.water_mp import debye_huckel

mp.dps = 50
SMALLEST = mpf(10) ** -35  # largest error left in any equation, relative
WATER = mpf("0.018015")
GRID = 1.1
COMPUTED, BEYOND_LIMIT = 0, 1


class Unsolved(Exception):  # noqa: N818 - it reads as the sentence it says
    """The search found no answer, nor that there is none below the limit."""


@dataclass(frozen=True)
class Posed:
    """A problem at its temperature, in mpf; logarithms natural."""

    nu: list[list[int]]
    nu_water: list[int]
    charge: list[int]
    ln_k: list[Any]
    gamma: list[tuple[Any, Any, Any]]  # A z², p, q of log10 γ = -A z² √I/(1 + p √I) + q I
    total: list[Any]
    hold: list[list[int]]
    hold_water: list[int]
    hold_ln_k: list[Any]
    exchange: list[list[int]]
    limit: Any


@dataclass(frozen=True)
class Point:
    """x = ln a of the base ions, s exchanged, I, Σ m."""

    x: list[Any]
    s: list[Any]
    ionic: Any
    solutes: Any


def log10_k(law: list[float], t_celsius: float) -> Any:
    """log10 K of a law [T0, c0 ... c5]."""
    T = mpf(t_celsius) + mpf("273.15")
    # 298.15 and its like are decimal temperatures, not the doubles nearest to them
    T0, c0, c1, c2, c3, c4, c5 = (mpf(repr(v)) for v in law)
    curved = T0 / T - 1 + mp.log(T / T0)
    powers = c3 * (T - T0) + c4 * (T**-2 - T0**-2) + c5 * (T**2 - T0**2)
    return c0 + c1 * (1 / T - 1 / T0) + c2 * curved + powers


def pose(problem: dict[str, Any]) -> Posed:
    """The JSON form at its temperature."""
    t, model = mpf(repr(problem["t_celsius"])), problem["model"]
    A, B = debye_huckel(t)
    ideal = model == 0
    gamma = []
    for z, size, linear in zip(
        problem["charge"], problem["size"], problem["linear"], strict=True
    ):
        if ideal:
            gamma.append((mpf(0), mpf(0), mpf(0)))
        elif model == 1:
            gamma.append((A * z * z, B * mpf(repr(size)), mpf(repr(linear))))
        elif z == 0:
            gamma.append((mpf(0), mpf(1), mpf(repr(linear))))
        else:
            gamma.append((A * z * z, mpf(1), A * z * z * 3 / 10))
    return Posed(
        nu=problem["stoichiometry"],
        nu_water=[0 if ideal else w for w in problem["water"]],
        charge=problem["charge"],
        ln_k=[mp.log(10) * log10_k(law, t) for law in problem["law"]],
        gamma=gamma,
        total=[mpf(repr(v)) for v in problem["total"]],
        hold=problem["hold"],
        hold_water=[0 if ideal else w for w in problem["hold_water"]],
        hold_ln_k=[mp.log(10) * log10_k(law, t) for law in problem["hold_law"]],
        exchange=problem["exchange"],
        limit=mp.inf if ideal else mpf(repr(problem["limit"])),
    )


def molalities(p: Posed, at: Point) -> list[Any]:
    """m of the dissolved forms, mol/kg."""
    root = mp.sqrt(at.ionic)
    out = []
    for nu, w, ln_k, (strength, a, q) in zip(p.nu, p.nu_water, p.ln_k, p.gamma, strict=True):
        ln_gamma = mp.log(10) * (q * at.ionic - strength * root / (1 + a * root))
        ln_a = sum((n * x for n, x in zip(nu, at.x, strict=True) if n), mpf(0))
        out.append(mp.exp(ln_k + ln_a - w * WATER * at.solutes - ln_gamma))
    return out


def _errors(p: Posed, at: Point, m: list[Any]) -> tuple[list[Any], list[Any]]:
    """Errors of balances, holds, I and Σ m, and what each is measured against."""
    errors, sizes = [], []
    for b, total in enumerate(p.total):
        terms = [nu[b] * mi for nu, mi in zip(p.nu, m, strict=True)]
        terms += [-total] + [-e[b] * s for e, s in zip(p.exchange, at.s, strict=True)]
        errors.append(mp.fsum(terms))
        sizes.append(mp.fsum(abs(t) for t in terms))
    for r, w, ln_k in zip(p.hold, p.hold_water, p.hold_ln_k, strict=True):
        ln_product = sum((n * x for n, x in zip(r, at.x, strict=True) if n), mpf(0))
        errors.append(ln_product - w * WATER * at.solutes - ln_k)
        sizes.append(mpf(1))
    errors += [mp.fsum(z * z * mi for z, mi in zip(p.charge, m, strict=True)) / 2 - at.ionic]
    errors += [mp.fsum(m) - at.solutes]
    return errors, [*sizes, at.ionic, at.solutes]


def finish(p: Posed, at: Point) -> Point:
    """Newton in 50 digits from a point in doubles. Raises Unsolved."""
    bases, holds = len(p.total), len(p.hold)
    order = bases + holds + 2
    for _ in range(30):
        m = molalities(p, at)
        errors, sizes = _errors(p, at, m)
        if max(abs(e) / s for e, s in zip(errors, sizes, strict=True)) < SMALLEST:
            return at
        j = mp.zeros(order, order)
        for mi, column in _slopes(p, at, m):
            for i, (nu, z) in enumerate(zip(p.nu, p.charge, strict=True)):
                if not mi[i]:
                    continue
                for b in range(bases):
                    j[b, column] += nu[b] * mi[i]
                j[order - 2, column] += mpf(z * z) / 2 * mi[i]
                j[order - 1, column] += mi[i]
        for k in range(holds):
            for b in range(bases):
                j[b, bases + k] -= p.exchange[k][b]
                j[bases + k, b] += p.hold[k][b]
            j[bases + k, order - 1] -= WATER * p.hold_water[k]
        j[order - 2, order - 2] -= 1
        j[order - 1, order - 1] -= 1
        step = mp.lu_solve(j, mp.matrix([-e for e in errors]))
        at = Point(
            [x + d for x, d in zip(at.x, step[:bases], strict=True)],
            [s + d for s, d in zip(at.s, step[bases : bases + holds], strict=True)],
            at.ionic + step[order - 2],
            at.solutes + step[order - 1],
        )
        if at.ionic <= 0:
            break
    raise Unsolved("Newton in 50 digits does not arrive")


def _slopes(p: Posed, at: Point, m: list[Any]) -> Iterator[tuple[list[Any], int]]:
    """(∂m_i by one unknown, the unknown's column) for x, I and Σ m."""
    bases = len(p.total)
    for b in range(bases):
        yield [nu[b] * mi for nu, mi in zip(p.nu, m, strict=True)], b
    root = mp.sqrt(at.ionic)
    column = bases + len(p.hold)
    yield (
        [
            mi * mp.log(10) * (strength / (2 * root * (1 + a * root) ** 2) - q)
            for mi, (strength, a, q) in zip(m, p.gamma, strict=True)
        ],
        column,
    )
    yield [-WATER * w * mi for mi, w in zip(m, p.nu_water, strict=True)], column + 1


class Search:
    """The walk in doubles along I: at each I one solution in x and s, and Σ m fed back."""

    MOST_SOLUTES = 20.0  # mol/kg, far beyond every limit: there ln a_w is held

    def __init__(self, p: Posed) -> None:
        self.nu = np.array(p.nu, float)
        self.nu_water = np.array(p.nu_water, float)
        self.half_z2 = 0.5 * np.array(p.charge, float) ** 2
        self.ln_k = np.array([float(v) for v in p.ln_k])
        self.gamma = np.array([[float(v) for v in row] for row in p.gamma])
        self.total = np.array([float(v) for v in p.total])
        self.hold = np.array(p.hold, float).reshape(-1, len(p.total))
        self.hold_water = np.array(p.hold_water, float)
        self.hold_ln_k = np.array([float(v) for v in p.hold_ln_k])
        self.exchange = np.array(p.exchange, float).reshape(-1, len(p.total))
        self.convex = p.hold == p.exchange
        self.limit = float(p.limit)
        self.x = np.log(np.maximum(np.abs(self.total), 1e-6))
        self.s = np.zeros(len(self.hold))
        self.solutes = 0.0

    def calculated(self, ionic: float) -> float:
        """I_calc at I; moves x, s and Σ m to the solution there. Raises Unsolved."""
        root = ionic**0.5
        strength, p, q = self.gamma.T
        constant = self.ln_k - np.log(10.0) * (q * ionic - strength * root / (1 + p * root))
        for _ in range(200):
            ln_water = -float(WATER) * self.solutes
            m = self._minimum(
                constant + self.nu_water * ln_water, self.hold_ln_k - self.hold_water * ln_water
            )
            before, self.solutes = self.solutes, min(float(m.sum()), self.MOST_SOLUTES)
            if abs(self.solutes - before) <= 1e-10 * self.solutes:
                return float(self.half_z2 @ m)
        raise Unsolved("the activity of water does not settle")

    def _minimum(self, ln_k: Any, hold_ln_k: Any) -> Any:
        """Molalities at fixed activity coefficients and water.

        Where a hold exchanges what it holds, they are where Σ m - T·x is least on the plane of
        the holds: a convex function, so descent cannot fail. Else plain Newton.
        """
        bases = len(self.total)

        def forms(x: Any) -> Any:
            return np.exp(np.clip(ln_k + self.nu @ x, -690.0, 300.0))

        def height(x: Any) -> float:
            return float(forms(x).sum() - self.total @ x)

        for _ in range(600):
            m = forms(self.x)
            size = np.abs(self.nu).T @ m + np.abs(self.total)
            unit = size.min()
            j = np.zeros((bases + len(self.hold),) * 2)
            j[:bases, :bases] = (self.nu.T * m) @ self.nu / size[:, None]
            j[:bases, bases:] = -self.exchange.T * unit / size[:, None]
            j[bases:, :bases] = self.hold
            gap = hold_ln_k - self.hold @ self.x
            try:
                both = np.linalg.solve(j, np.concatenate([(self.total - self.nu.T @ m) / size, gap]))
            except np.linalg.LinAlgError as error:
                raise Unsolved("singular") from error
            step, self.s = both[:bases], both[bases:] * unit
            longest = float(np.abs(step).max())
            if not np.isfinite(longest):
                raise Unsolved("not finite")
            shorter = min(1.0, 3.0 / max(longest, 1e-300))
            if self.convex and longest > 1e-2 and np.abs(gap).sum() < 1e-6:
                while shorter > 1e-6 and height(self.x + shorter * step) > height(self.x):
                    shorter /= 3.0
            self.x = self.x + shorter * step
            if longest < 1e-9:
                m = forms(self.x)
                open_ = self.nu.T @ m - self.total - self.exchange.T @ self.s
                if np.abs(open_ / size).max() > 1e-6:  # an ion would have to be negative
                    raise Unsolved("no solution at a fixed ionic strength")
                return m
        raise Unsolved("no solution at a fixed ionic strength")

    def lowest_root(self) -> Point | None:
        """A point near the root of lowest I up to the limit; None where there is no root."""
        at_zero = self.calculated(0.0)
        low, ionic = 0.0, max(at_zero * 1e-3, 1e-12)
        top = min(self.limit, 60.0)
        while True:
            ionic = min(ionic, top)
            if self.calculated(ionic) < ionic:
                break
            if ionic >= top:
                if self.solutes >= self.MOST_SOLUTES or self.limit > top:
                    raise Unsolved("more dissolved than any solution holds")
                return None
            low, ionic = ionic, GRID * ionic
        high = ionic
        for _ in range(45):
            middle = 0.5 * (low + high)
            low, high = (low, middle) if self.calculated(middle) < middle else (middle, high)
        if self.solutes >= self.MOST_SOLUTES:
            raise Unsolved("more dissolved than any solution holds")
        return Point(
            [mpf(float(v)) for v in self.x],
            [mpf(float(v)) for v in self.s],
            mpf(high),
            mpf(self.solutes),
        )


def answer(problem: dict[str, Any]) -> dict[str, Any]:
    """The answer in doubles nearest to 40 digits; numbers only where it is computed."""
    p = pose(problem)
    near = Search(p).lowest_root()
    if near is None:
        return {"state": BEYOND_LIMIT}
    at = finish(p, near)
    if abs(at.ionic / near.ionic - 1) > 1e-6:
        raise Unsolved("Newton left the root of lowest ionic strength")
    return {
        "state": COMPUTED,
        "molality": [float(v) for v in molalities(p, at)],
        "amount": [float(v) for v in at.s],
        "ionic_strength": float(at.ionic),
        "ln_water": float(-WATER * at.solutes),
        "ph": float(-at.x[0] / mp.log(10)),
    }


def sensitivities(problem: dict[str, Any]) -> dict[str, list[float]]:
    """∂log10 |s_0| / ∂log10 K of every form and hold, central differences in 50 digits."""
    p = pose(problem)
    near = Search(p).lowest_root()
    if near is None:
        raise Unsolved("refused")
    at = finish(p, near)
    h = mpf(10) ** -14

    def slope(field: str, i: int) -> float:
        ends = []
        for sign in (1, -1):
            changed = list(getattr(p, field))
            changed[i] += sign * h * mp.log(10)
            ends.append(mp.log10(abs(finish(replace(p, **{field: changed}), at).s[0])))
        return float((ends[0] - ends[1]) / (2 * h))

    return {
        "by_form": [slope("ln_k", i) for i in range(len(p.ln_k))],
        "by_hold": [slope("hold_ln_k", k) for k in range(len(p.hold_ln_k))],
    }
