"""The walk in doubles along the ionic strength, up to the root of lowest I.

An answer is defined as the root of lowest I of I_calc(I) - I. The walk starts at I = 0 and goes up
in steps of 10 %, solving the problem at each fixed I, to the first change of sign.
"""

from __future__ import annotations

from typing import Any

import numpy as np
from mpmath import mpf
from vectors.posed import WATER, Point, Posed, Unsolved

GRID = 1.1


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
                both = np.linalg.solve(
                    j, np.concatenate([(self.total - self.nu.T @ m) / size, gap])
                )
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
