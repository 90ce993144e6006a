"""A law with its uncertainty and its range: log10 K at a temperature, or a refusal in words.

u²(log10 K) = bᵀ C b + flat² + curvature²(t) + beyond²(t), b the centred basis at t and C the
covariance of (c0, c1, c2). Propagation: JCGM 100:2008 (GUM), 5.2, correlated inputs.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from builder.chem.fit import NORMAL_95, Matrix3
from builder.chem.rounding import ten_digits
from builder.chem.temperature import GAS_CONSTANT, LN10, basis_at
from builder.chem.water import HIGHEST_C, LOWEST_C, kelvin

# A constant ΔCp leaves about 0.06 in log10 K at 90 °C, seen against expressions fitted over the
# whole range: a term that grows from 55 °C on.
CURVATURE_FROM_C = 55.0
CURVATURE_PER_K = 0.06 / 35.0
# A fitted expression outside its range: 0.01 in log10 K for every kelvin.
BEYOND_PER_K = 0.01

NO_COVARIANCE: Matrix3 = ((0.0, 0.0, 0.0), (0.0, 0.0, 0.0), (0.0, 0.0, 0.0))


@dataclass(frozen=True)
class Curve:
    """A law ready to be evaluated.

    law: seven numbers, chem/temperature.py. covariance: of c0, c1, c2, or None where the
    uncertainty is not evaluated. flat: standard uncertainty that does not depend on t.
    range_c: where the law is meant to hold; carries_k: how many kelvin beyond it is still answered.
    thermodynamic: from ΔH and ΔCp (then C grows away from t0 by itself).
    """

    law: tuple[float, ...]
    covariance: Matrix3 | None
    range_c: tuple[float, float]
    carries_k: float
    thermodynamic: bool
    flat: float = 0.0
    coverage_factor: float = NORMAL_95


@dataclass(frozen=True)
class CurveValue:
    """log10 K at a temperature. state within-range, beyond-range or refused (then log10_k is None).

    u is None where not evaluated. coverage_factor is for 95 %.
    """

    t_celsius: float
    state: str
    beyond_by_k: float
    log10_k: float | None
    u: float | None
    coverage_factor: float
    reason: str = ""

    @property
    def interval(self) -> tuple[float, float] | None:
        """95 % interval of K itself, K·10^(±k u)."""
        if self.log10_k is None or self.u is None:
            return None
        half = self.coverage_factor * self.u
        return 10.0 ** (self.log10_k - half), 10.0 ** (self.log10_k + half)


def at(curve: Curve, t_celsius: float) -> CurveValue:
    """Evaluate a law at t in °C."""
    low, high = curve.range_c
    beyond = max(low - t_celsius, t_celsius - high, 0.0)
    k = curve.coverage_factor
    if not LOWEST_C <= t_celsius <= HIGHEST_C:
        reason = f"{t_celsius:g} °C is outside 0 to 100 °C, where water is liquid at 1 bar"
        return CurveValue(t_celsius, "refused", beyond, None, None, k, reason)
    if beyond > curve.carries_k:
        reason = (
            f"{t_celsius:g} °C is {beyond:g} K beyond the range {low:g} to {high:g} °C of the law, "
            f"which can be carried {curve.carries_k:g} K at most"
        )
        return CurveValue(t_celsius, "refused", beyond, None, None, k, reason)
    functions = basis_at(kelvin(t_celsius), curve.law[0])
    value = math.fsum(c * b for c, b in zip(curve.law[1:], functions, strict=True))
    state = "beyond-range" if beyond > 0.0 else "within-range"
    return CurveValue(
        t_celsius, state, beyond, value, _uncertainty(curve, functions, t_celsius, beyond), k
    )


def _uncertainty(curve: Curve, b: Sequence[float], t: float, beyond: float) -> float | None:
    if curve.covariance is None:
        return None
    c = curve.covariance
    variance = math.fsum(b[j] * c[j][k] * b[k] for j in range(3) for k in range(3))
    curvature = CURVATURE_PER_K * max(0.0, t - CURVATURE_FROM_C) if curve.thermodynamic else 0.0
    outside = 0.0 if curve.thermodynamic else BEYOND_PER_K * beyond
    return math.sqrt(max(variance, 0.0) + curve.flat**2 + curvature**2 + outside**2)


def thermodynamic_covariance(u_log10_k: float, u_delta_h: float, u_delta_cp: float) -> Matrix3:
    """Covariance of (c0, c1, c2) from independent u(log10 K0), u(ΔH) J/mol, u(ΔCp) J/(mol K)."""
    scale = GAS_CONSTANT * LN10
    return (
        (ten_digits(u_log10_k**2), 0.0, 0.0),
        (0.0, ten_digits((u_delta_h / scale) ** 2), 0.0),
        (0.0, 0.0, ten_digits((u_delta_cp / scale) ** 2)),
    )
