"""A problem at its temperature in 50 digits: what the answers of the vectors are computed from."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from mpmath import mp, mpf
from vectors.water_mp import debye_huckel

mp.dps = 50
WATER = mpf("0.018015")  # kg/mol


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
    for z, size, linear in zip(problem["charge"], problem["size"], problem["linear"], strict=True):
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
