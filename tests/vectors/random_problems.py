"""Random problems of the size and range of real ones, from numbers alone.

Every problem is a solution of neutral additions: a sparingly soluble solid (or none) of a cation
and an anion in water with some of: a background electrolyte, a common ion, acid or base, ligands,
pairs, protonation, hydrolysis, a gas, a held pH, a second solid. No constant of the collection
takes part: a corrected constant never changes a problem. Seeds are fixed and the draws are of
`random.Random`, whose sequence Python guarantees.
"""

from __future__ import annotations

import math
import random
from dataclasses import dataclass, field
from typing import Any

# kind: share of the problems
KINDS = {
    "salt": 0.24,  # solid with pairs, perhaps a background electrolyte
    "common ion": 0.16,
    "amphoteric": 0.14,  # hydroxide whose cation takes up to four hydroxides, in acid or base
    "complexing": 0.14,  # neutral or charged ligand, four complexes
    "held pH": 0.12,
    "gas": 0.06,
    "two solids": 0.05,
    "no hold": 0.05,
    "strong": 0.04,  # more electrolyte than the limit allows
}
# (charge of the cation, charge of the anion): 1:1, 1:2, 2:1, 2:3, 3:2 solids
TYPES = ((1, -1), (2, -2), (3, -3), (2, -1), (1, -2), (3, -2), (2, -3))
SCALE = 8.314462618 * math.log(10.0)  # J/(mol K): enthalpy to law coefficient
PROTON = 0


def twelve(x: float) -> float:
    """Twelve significant digits: what is in the file is what is solved."""
    return float(f"{x:.12g}")


@dataclass
class Draft:
    """A problem being put together; a form or hold is a mapping of base ion number to count."""

    rng: random.Random
    charges: list[int] = field(default_factory=list)
    totals: list[float] = field(default_factory=list)
    forms: list[tuple[dict[int, int], int, float]] = field(default_factory=list)
    holds: list[tuple[dict[int, int], int, float, dict[int, int]]] = field(default_factory=list)

    def base(self, charge: int, total: float = 0.0) -> int:
        self.charges.append(charge)
        self.totals.append(total)
        return len(self.charges) - 1

    def form(self, made_of: dict[int, int], log10_k: float, water: int = 0) -> None:
        self.forms.append((made_of, water, log10_k))

    def hold(
        self,
        product: dict[int, int],
        log10_k: float,
        water: int = 0,
        exchange: dict[int, int] | None = None,
    ) -> None:
        self.holds.append((product, water, log10_k, product if exchange is None else exchange))

    def add(self, cation: int, anion: int, molality: float) -> None:
        """A neutral electrolyte of two base ions: so many moles of its cation's charge."""
        self.totals[cation] += molality / abs(self.charges[cation])
        self.totals[anion] += molality / abs(self.charges[anion])

    def law(self, log10_k: float, spread: float = 1.0) -> list[float]:
        rng = self.rng
        t0 = rng.choice((298.15, 298.15, 298.15, 293.15, 310.15))
        c1 = -spread * rng.uniform(-6e4, 6e4) / SCALE
        c2 = spread * rng.uniform(-300.0, 300.0) / SCALE if rng.random() < 0.5 else 0.0
        rest = [0.0, 0.0, 0.0]
        if rng.random() < 0.1:  # a published expression with more terms
            rest = [rng.uniform(-5e-3, 5e-3), rng.uniform(-1e4, 1e4), rng.uniform(-5e-6, 5e-6)]
        return [twelve(v) for v in (t0, log10_k, c1, c2, *rest)]

    def problem(self) -> dict[str, Any]:
        """The JSON form."""
        rng, bases = self.rng, len(self.charges)
        made: list[tuple[dict[int, int], int, float | None]] = [
            ({b: 1}, 0, None) for b in range(bases)
        ]
        made += self.forms

        def row(counts: dict[int, int]) -> list[int]:
            return [counts.get(b, 0) for b in range(bases)]

        charge = [sum(n * self.charges[b] for b, n in counts.items()) for counts, _, _ in made]
        rest = [298.15, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0]
        return {
            "t_celsius": 25.0 if rng.random() < 0.3 else round(rng.uniform(0.0, 100.0), 1),
            "model": rng.choices((0, 1, 2), (0.1, 0.6, 0.3))[0],
            "limit": rng.choice((0.5, 0.5, 0.5, 0.3)),
            "stoichiometry": [row(counts) for counts, _, _ in made],
            "water": [water for _, water, _ in made],
            "charge": charge,
            "law": [rest if k is None else self.law(k) for _, _, k in made],
            "size": [round(rng.uniform(3.0, 9.0), 2) if z else 0.0 for z in charge],
            "linear": [
                0.1 if not z else rng.choice((0.0, round(rng.uniform(-0.05, 0.2), 3)))
                for z in charge
            ],
            "total": [twelve(t) for t in self.totals],
            "hold": [row(product) for product, _, _, _ in self.holds],
            "hold_water": [water for _, water, _, _ in self.holds],
            "hold_law": [self.law(k, 0.5) for _, _, k, _ in self.holds],
            "exchange": [row(exchange) for _, _, _, exchange in self.holds],
        }


def random_problem(seed: int) -> tuple[str, dict[str, Any]]:
    """(kind, problem in the JSON form) of a seed."""
    rng = random.Random(seed)
    kind = rng.choices(list(KINDS), list(KINDS.values()))[0]
    draft = Draft(rng)
    draft.base(1)
    z_cation, z_anion = rng.choice(TYPES)
    if kind == "gas":
        z_cation, z_anion = rng.choice((1, 2)), -2
    draft.form({PROTON: -1}, -14.0 + rng.uniform(-0.1, 0.1), water=1)
    cation, anion = draft.base(z_cation), draft.base(z_anion)
    sodium, chloride = draft.base(1), draft.base(-1)
    _side_reactions(draft, kind, cation, anion, sodium, chloride)
    if kind != "no hold":
        _solid(draft, kind, cation, anion)
    _additions(draft, kind, cation, anion, sodium, chloride)
    return kind, draft.problem()


def _solid(draft: Draft, kind: str, cation: int, anion: int) -> None:
    rng = draft.rng
    z, y = draft.charges[cation], -draft.charges[anion]
    if kind == "amphoteric":
        draft.hold({cation: 1, PROTON: -z}, rng.uniform(-1.0, 4.5) * z, water=z)
        return
    common = math.gcd(z, y)
    a, b = y // common, z // common
    solubility = rng.uniform(-7.5, -1.3)
    log10_k = (a + b) * solubility + a * math.log10(a) + b * math.log10(b)
    water = rng.choice((0, 0, 1, 2, 6))
    draft.hold({cation: a, anion: b}, min(max(log10_k, -30.0), -2.0), water)


def _side_reactions(
    draft: Draft, kind: str, cation: int, anion: int, sodium: int, chloride: int
) -> None:
    rng = draft.rng
    z, y = draft.charges[cation], -draft.charges[anion]
    pair = rng.uniform(0.5, min(6.0, 1.2 * z * y))
    if kind != "amphoteric" and rng.random() < 0.8:
        draft.form({cation: 1, anion: 1}, pair)
        if rng.random() < 0.3:
            draft.form({cation: 1, anion: 2}, pair + rng.uniform(-0.5, 2.0))
    if rng.random() < 0.5:
        draft.form({sodium: 1, anion: 1}, rng.uniform(0.0, 1.0))
    if y > 1 or rng.random() < 0.4:
        pk = 10.33 if kind == "gas" else rng.uniform(1.5, 12.5)
        draft.form({anion: 1, PROTON: 1}, pk)
        if y > 1 and (kind == "gas" or rng.random() < 0.7):
            second = 6.35 if kind == "gas" else pk - rng.uniform(2.0, 6.0)
            draft.form({anion: 1, PROTON: 2}, pk + second)
    hydroxides = 4 if z > 1 else 2
    steps = hydroxides if kind == "amphoteric" else rng.choice((0, 1, 1, 2))
    log10_beta = 0.0
    for n in range(1, steps + 1):
        log10_beta -= rng.uniform(5.0, 10.5) + (1.5 * n if z == 1 else 0.0)
        draft.form({cation: 1, PROTON: -n}, log10_beta, water=n)
    if rng.random() < 0.3:
        draft.form({cation: 1, chloride: 1}, rng.uniform(-0.5, 2.0))


def _additions(
    draft: Draft, kind: str, cation: int, anion: int, sodium: int, chloride: int
) -> None:
    rng = draft.rng
    draft.add(sodium, chloride, 10 ** rng.uniform(-5.0, -0.4))
    if kind == "common ion":
        if rng.random() < 0.6:
            draft.add(sodium, anion, 10 ** rng.uniform(-4.0, -0.7))
        else:
            draft.add(cation, chloride, 10 ** rng.uniform(-4.0, -0.7))
    elif kind == "amphoteric":
        ion = rng.choice((sodium, chloride))
        _acid_or_base(draft, ion, 10 ** rng.uniform(-5.0, -0.6))
        draft.add(sodium, anion, 10 ** rng.uniform(-5.0, -1.0))
    elif kind == "complexing":
        _ligand(draft, cation, sodium, 10 ** rng.uniform(-3.0, -0.5))
    elif kind == "held pH":
        ph = rng.uniform(1.0, 12.0)
        acid = {PROTON: 1, chloride: 1}
        alkali = {PROTON: -1, sodium: 1}
        draft.hold({PROTON: 1}, -ph, exchange=acid if ph < 6.0 else alkali)
    elif kind == "gas":
        draft.hold({PROTON: 2, anion: 1}, -18.15 + rng.uniform(-5.0, 0.0), water=-1)
    elif kind == "two solids":
        z, y = draft.charges[cation], -draft.charges[anion]
        second = draft.base(z)
        common = math.gcd(z, y)
        a, b = y // common, z // common
        draft.hold({second: a, anion: b}, max((a + b) * rng.uniform(-7.0, -1.5), -30.0))
    elif kind == "no hold":
        draft.add(sodium, anion, 10 ** rng.uniform(-4.0, -1.0))
        draft.add(cation, chloride, 10 ** rng.uniform(-4.0, -1.0))
    elif kind == "strong":
        draft.add(sodium, chloride, rng.uniform(0.4, 1.5))


def _acid_or_base(draft: Draft, ion: int, molality: float) -> None:
    """Acid of an anion, or alkali of a cation."""
    draft.totals[ion] += molality
    draft.totals[PROTON] -= molality * draft.charges[ion]


def _ligand(draft: Draft, cation: int, sodium: int, molality: float) -> None:
    rng = draft.rng
    charge = rng.choice((0, 0, -1))
    ligand = draft.base(charge)
    if charge:
        draft.add(sodium, ligand, molality)
    else:
        draft.totals[ligand] += molality
    if rng.random() < 0.8:
        draft.form({ligand: 1, PROTON: 1}, rng.uniform(3.0, 10.0))
    log10_beta = 0.0
    for n in range(1, rng.choice((2, 3, 4, 4)) + 1):
        log10_beta = min(log10_beta + rng.uniform(0.5, 4.5), 12.0)
        draft.form({cation: 1, ligand: n}, log10_beta)
