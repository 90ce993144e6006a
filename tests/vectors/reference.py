"""Answers of problems in 40 digits, written from the equations of the problem form alone.

    m_i γ_i = K_i Π_b a_b^ν_ib · a_w^ν_iw        dissolved form i
    Π_b a_b^r_kb · a_w^r_kw = K_k                hold k
    Σ_i ν_ib m_i = T_b + Σ_k e_kb s_k            balance of base ion b
    I = ½ Σ z² m,   ln a_w = -0.018015 Σ m       (an ideal solution: γ = 1, a_w = 1)

A walk in doubles (search.py) finds the neighbourhood of the root of lowest I, or that there is none
up to the limit: refused. Newton in 50 digits on all equations at once then finishes it. Nothing of
the engine under test is used.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from typing import Any

from mpmath import mp, mpf
from vectors.posed import WATER, Point, Posed, Unsolved, pose
from vectors.search import Search

SMALLEST = mpf(10) ** -35  # largest error left in any equation, relative
COMPUTED, BEYOND_LIMIT = 0, 1


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
