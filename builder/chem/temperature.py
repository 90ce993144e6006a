"""How log10 K depends on temperature: centred law terms.

A law is one row of seven numbers ``[T0, c0, c1, c2, c3, c4, c5]``, T in kelvin:

    log10 K(T) = c0 + c1 (1/T - 1/T0) + c2 (T0/T - 1 + ln(T/T0))
                    + c3 (T - T0) + c4 (1/T^2 - 1/T0^2) + c5 (T^2 - T0^2)

c0 is log10 K at T0; c1 = -ΔH(T0)/(R ln 10); with c3 = c4 = c5 = 0, c2 = ΔCp/(R ln 10): the
integrated van 't Hoff equation with constant heat-capacity change (Atkins and de Paula, Physical
Chemistry, chapter on chemical equilibrium). Centring keeps the numbers of the order of what they
mean and makes c0 the constant at the reference temperature.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from builder.chem.rounding import ten_digits
from builder.chem.water import kelvin

Array = NDArray[np.float64]

GAS_CONSTANT = 8.314462618  # J/(mol K), CODATA 2018, exact
LN10 = math.log(10.0)
LAW_LENGTH = 7
TERM_NAMES = ("one", "t", "inverse_t", "log10_t", "inverse_t2", "t2")


def basis(t_kelvin: Any, t0_kelvin: Any) -> Array:
    """The six centred functions of temperature, shape (..., 6)."""
    t = np.asarray(t_kelvin, dtype=float)
    t0 = np.asarray(t0_kelvin, dtype=float)
    return np.stack(
        [
            np.ones(np.broadcast_shapes(t.shape, t0.shape)),
            1.0 / t - 1.0 / t0,
            t0 / t - 1.0 + np.log(t / t0),
            t - t0,
            1.0 / (t * t) - 1.0 / (t0 * t0),
            t * t - t0 * t0,
        ],
        axis=-1,
    )


def basis_at(t: float, t0: float) -> tuple[float, ...]:
    """`basis` for one temperature: many laws are evaluated one at a time."""
    return (
        1.0,
        1.0 / t - 1.0 / t0,
        t0 / t - 1.0 + math.log(t / t0),
        t - t0,
        1.0 / (t * t) - 1.0 / (t0 * t0),
        t * t - t0 * t0,
    )


def log10_k(law: Array, t_kelvin: Array) -> Array:
    """log10 K of laws (..., 7) at temperatures (...) in kelvin."""
    functions = basis(t_kelvin, law[..., 0])
    return np.asarray(np.sum(law[..., 1:] * functions, axis=-1))


def constant_law(log10_k0: float, t0_celsius: float) -> tuple[float, ...]:
    """A law for a constant known at one temperature only: c0 alone."""
    return (kelvin(t0_celsius), log10_k0, 0.0, 0.0, 0.0, 0.0, 0.0)


def enthalpy_law(
    log10_k0: float, t0_celsius: float, delta_h: float, delta_cp: float
) -> tuple[float, ...]:
    """Law from log10 K0 and ΔH (J/mol) at t0 and a constant ΔCp (J/(mol K))."""
    scale = GAS_CONSTANT * LN10
    return (
        kelvin(t0_celsius),
        log10_k0,
        ten_digits(-delta_h / scale),
        ten_digits(delta_cp / scale),
        0.0,
        0.0,
        0.0,
    )


def expression_law(terms: Mapping[str, float], t0_celsius: float) -> tuple[float, ...]:
    """Law from a published expression, a sum of the named terms with T in kelvin.

    ``one`` + ``t``·T + ``inverse_t``/T + ``log10_t``·log10 T + ``inverse_t2``/T² + ``t2``·T².
    Raises KeyError for a name outside TERM_NAMES.
    """
    unknown = sorted(set(terms) - set(TERM_NAMES))
    if unknown:
        raise KeyError(unknown[0])
    a = {name: terms.get(name, 0.0) for name in TERM_NAMES}
    t0 = kelvin(t0_celsius)
    at_t0 = math.fsum(
        (
            a["one"],
            a["t"] * t0,
            a["inverse_t"] / t0,
            a["log10_t"] * math.log10(t0),
            a["inverse_t2"] / (t0 * t0),
            a["t2"] * t0 * t0,
        )
    )
    # D log10(T/T0) = (D/ln 10) [(T0/T - 1 + ln(T/T0)) - T0 (1/T - 1/T0)]
    d = a["log10_t"] / LN10
    return (
        t0,
        ten_digits(at_t0),
        ten_digits(a["inverse_t"] - d * t0),
        ten_digits(d),
        a["t"],
        a["inverse_t2"],
        a["t2"],
    )


def delta_h(law: Sequence[float], t_celsius: float) -> float:
    """ΔH in J/mol of the reaction at t: R ln10 T² d(log10 K)/dT."""
    t = kelvin(t_celsius)
    t0, _, c1, c2, c3, c4, c5 = law
    slope = -c1 / t**2 + c2 * (1.0 / t - t0 / t**2) + c3 - 2.0 * c4 / t**3 + 2.0 * c5 * t
    return GAS_CONSTANT * LN10 * t * t * slope


def delta_cp(law: Sequence[float], t_celsius: float) -> float:
    """ΔCp in J/(mol K) of the reaction at t: d(ΔH)/dT."""
    t = kelvin(t_celsius)
    _, _, _, c2, c3, c4, c5 = law
    # ΔH = R ln10 [ -c1 + c2 (T - T0) + c3 T² - 2 c4/T + 2 c5 T³ ]
    return GAS_CONSTANT * LN10 * (c2 + 2.0 * c3 * t + 2.0 * c4 / t**2 + 6.0 * c5 * t * t)


def recentred(law: Sequence[float], t0_kelvin: float = 298.15) -> tuple[float, ...]:
    """The same function of temperature with its terms centred on another T0."""
    old, _, c1, c2, c3, c4, c5 = law
    new = t0_kelvin
    if old == new:
        return tuple(law)
    return (
        new,
        math.fsum(c * b for c, b in zip(law[1:], basis_at(new, old), strict=True)),
        c1 + c2 * (old - new),
        c2,
        c3,
        c4,
        c5,
    )


def combined(parts: Sequence[tuple[float, Sequence[float]]]) -> tuple[float, ...]:
    """Σ coefficient · law, every law recentred on 298.15 K and rounded to ten digits."""
    rows = [(n, recentred(law)) for n, law in parts]
    sums = (math.fsum(n * row[i] for n, row in rows) for i in range(1, LAW_LENGTH))
    return (298.15, *(ten_digits(x) for x in sums))
