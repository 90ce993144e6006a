"""ΔCp of dissolution where no source gives it: a mean by charge type with its spread.

Means and standard deviations in J/(mol K) over salts whose solid and ions all have a heat capacity
in the CRC formation tables (1:1 34 salts, 1:2 6, 3:1 5, 2:1 3), and for 2:2 over estimates by
the method of Criss and Cobble (J. Am. Chem. Soc. 86 (1964) 5385) for 22 oxyanion salts. Charge type
is cation charge : anion charge. Where fewer than ten salts stand behind a mean the spread is taken
as 60 at least. Water of crystallisation gives back 47.5 ± 8 each (difference of ice-like and liquid
water, common practice).
"""

from __future__ import annotations

import math
from collections.abc import Sequence

BY_CHARGE_TYPE: dict[tuple[int, int], tuple[float, float]] = {
    (1, 1): (-151.0, 39.0),
    (1, 2): (-356.0, 61.0),
    (2, 1): (-276.0, 60.0),
    (2, 2): (-370.0, 70.0),
    (3, 1): (-516.0, 60.0),
}
PER_ION = (-102.0, 35.0)  # all types together, 67 salts
PER_WATER = (47.5, 8.0)


def estimated_delta_cp(charges: Sequence[int], waters: float) -> tuple[float, float, str]:
    """(ΔCp, spread, in words) in J/(mol K) for a solid giving free ions of these charges.

    charges: one entry for every ion set free, such as (2, -1, -1) for a fluoride MF2.
    """
    cations = {z for z in charges if z > 0}
    anions = {-z for z in charges if z < 0}
    kind = (max(cations), max(anions)) if len(cations) == 1 and len(anions) == 1 else None
    if kind in BY_CHARGE_TYPE:
        mean, spread = BY_CHARGE_TYPE[kind]
        words = f"mean of {kind[0]}:{kind[1]} salts"
    else:
        mean = PER_ION[0] * len(charges)
        spread = max(60.0, PER_ION[1] * len(charges))
        words = f"{len(charges)} ions at the mean of all salts"
    if waters:
        mean += PER_WATER[0] * waters
        spread = math.hypot(spread, PER_WATER[1] * waters)
        words += f", {waters:g} H2O given back"
    return mean, spread, words
