"""Least squares of two or three centred terms, by explicit formulae with exact summation.

The normal equations of the centred basis (chem/temperature.py) are tiny; solving them by cofactors
with math.fsum gives the same digits on every processor (contract 8).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

Matrix3 = tuple[tuple[float, float, float], tuple[float, float, float], tuple[float, float, float]]


@dataclass(frozen=True)
class Fit:
    """Coefficients (c0, c1, c2), their covariance, chi-squared over nu, and nu.

    A term that was not fitted is 0 with zero (co)variance.
    """

    coefficients: tuple[float, float, float]
    covariance: Matrix3
    reduced_chi2: float
    freedom: int


def weighted(rows: Sequence[Sequence[float]], values: Sequence[float], u: Sequence[float]) -> Fit:
    """Fit values = Σ c_j rows[i][j] with standard uncertainties u (all > 0).

    rows: n rows of 1, 2 or 3 columns, n >= columns. The covariance is multiplied by
    chi-squared/nu where that is above 1. Raises ValueError when the terms can not be told apart.
    """
    size = len(rows[0])
    weights = [1.0 / (x * x) for x in u]
    normal = [
        [
            math.fsum(w * r[j] * r[k] for w, r in zip(weights, rows, strict=True))
            for k in range(size)
        ]
        for j in range(size)
    ]
    right = [
        math.fsum(w * r[j] * y for w, r, y in zip(weights, rows, values, strict=True))
        for j in range(size)
    ]
    inverse = _inverse(normal)
    c = [math.fsum(inverse[j][k] * right[k] for k in range(size)) for j in range(size)]
    residuals = [
        y - math.fsum(c[j] * r[j] for j in range(size)) for r, y in zip(rows, values, strict=True)
    ]
    freedom = len(rows) - size
    chi2 = math.fsum(w * e * e for w, e in zip(weights, residuals, strict=True))
    reduced = chi2 / freedom if freedom else 0.0
    factor = max(1.0, reduced)
    full = [[0.0] * 3 for _ in range(3)]
    for j in range(size):
        for k in range(size):
            full[j][k] = factor * inverse[j][k]
    padded = (*c, 0.0, 0.0)[:3]
    return Fit(
        (padded[0], padded[1], padded[2]),
        ((*full[0],), (*full[1],), (*full[2],)),  # type: ignore[arg-type]
        reduced,
        freedom,
    )


def _inverse(m: Sequence[Sequence[float]]) -> list[list[float]]:
    """Inverse of a symmetric matrix up to 3x3 by cofactors, scaled to unit diagonal first."""
    size = len(m)
    scale = [1.0 / math.sqrt(m[j][j]) if m[j][j] > 0.0 else 0.0 for j in range(size)]
    a = [[m[j][k] * scale[j] * scale[k] for k in range(size)] for j in range(size)]
    for j in range(size, 3):  # fill up to 3x3 with ones on the diagonal
        for row in a:
            row.append(0.0)
        a.append([0.0] * j + [1.0])
    minor = [
        [
            a[(j + 1) % 3][(k + 1) % 3] * a[(j + 2) % 3][(k + 2) % 3]
            - a[(j + 1) % 3][(k + 2) % 3] * a[(j + 2) % 3][(k + 1) % 3]
            for k in range(3)
        ]
        for j in range(3)
    ]
    determinant = math.fsum(a[0][k] * minor[0][k] for k in range(3))
    if not determinant > 1e-12:
        raise ValueError("the temperatures are too close together to fit so many terms")
    return [
        [minor[k][j] / determinant * scale[j] * scale[k] for k in range(size)] for j in range(size)
    ]


# Two-sided 95 % quantiles of Student's t, degrees of freedom 1 to 30 (common statistical table).
_STUDENT_95 = (
    12.706, 4.303, 3.182, 2.776, 2.571, 2.447, 2.365, 2.306, 2.262, 2.228,
    2.201, 2.179, 2.160, 2.145, 2.131, 2.120, 2.110, 2.101, 2.093, 2.086,
    2.080, 2.074, 2.069, 2.064, 2.060, 2.056, 2.052, 2.048, 2.045, 2.042,
)  # fmt: skip
NORMAL_95 = 1.96


def student_95(freedom: int) -> float:
    """Two-sided 95 % quantile of Student's t; the normal one beyond 30 degrees of freedom."""
    if freedom < 1:
        return _STUDENT_95[0]
    return _STUDENT_95[freedom - 1] if freedom <= len(_STUDENT_95) else NORMAL_95
