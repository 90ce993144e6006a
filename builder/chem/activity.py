"""Activity coefficients and activity of water, one model a problem.

    log10 γ = -A z² √I / (1 + p √I) + q I

extended Debye-Hückel: p = B·size, q = b (Debye and Hückel 1923; sizes of Kielland 1937; where the
pair of Truesdell and Jones 1974 is given, size and b are theirs). Davies (1962): p = 1,
q = 0.3 A z². Neutral forms: log10 γ = b I, b = 0.1 unless a form says otherwise (common practice).
Water: ln a_w = -M_w Σ m (ideal; solutes counted as dissolved forms), good to some 0.1 % of the
activity below I = 0.5 mol/kg.
"""

from __future__ import annotations

import numpy as np

from builder.chem.problem import DAVIES, EXTENDED, Array, Problem
from builder.chem.water import debye_huckel

MOLAR_MASS_WATER = 0.018015  # kg/mol
NEUTRAL_LINEAR = 0.1  # kg/mol

# Ions whose size is in no table: pairs and complexes take a size by charge, near the middle of
# Kielland's groups for that charge. (|z|: Å)
ASSIGNED_SIZE = {1: 4.25, 2: 4.5, 3: 5.0, 4: 5.5}


def coefficients(problem: Problem) -> tuple[Array, Array, Array]:
    """(strength, p, q), each (P,F): A z², p and q of log10 γ = -A z² √I/(1 + p √I) + q I."""
    a, b = debye_huckel(problem.t_celsius)
    model = problem.model[:, None]
    z2 = problem.charge**2
    on = (model != 0.0).astype(float)
    strength = np.asarray(a)[:, None] * z2 * on
    p = np.where(model == DAVIES, 1.0, np.asarray(b)[:, None] * problem.size)
    davies_q = np.where(z2 > 0.0, 0.3 * strength, problem.linear)
    q = np.where(model == EXTENDED, problem.linear, np.where(model == DAVIES, davies_q, 0.0))
    return strength, p * on, q


def log10_gamma(strength: Array, p: Array, q: Array, ionic_strength: Array) -> Array:
    """log10 γ, shape of the coefficients (P,F), at ionic strengths (P,) in mol/kg."""
    root = np.sqrt(ionic_strength)[:, None]
    return -strength * root / (1.0 + p * root) + q * ionic_strength[:, None]


def log10_gamma_slope(strength: Array, p: Array, q: Array, ionic_strength: Array) -> Array:
    """d log10 γ / dI (P,F). Infinite at I = 0, where it is not asked for."""
    root = np.sqrt(ionic_strength)[:, None]
    return -strength / (2.0 * root * (1.0 + p * root) ** 2) + q
