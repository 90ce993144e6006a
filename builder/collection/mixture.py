"""What is in the solution, and the engine's problem made from it.

Here it is decided, before anything is solved, whether the collection knows enough to answer: a
question whose dissolved forms are not all known is refused with the reason, never answered from
free ions.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from builder.chem.formula import to_unicode
from builder.chem.problem import DAVIES, EXTENDED, IDEAL, Problem
from builder.chem.temperature import combined
from builder.collection.forms import HYDROGEN, HYDROXIDE, Form, Made
from builder.collection.records import Collection

LIMIT = 0.5  # mol/kg
LIMIT_TWO_TWO = 0.2  # a 2:2 salt
LIMIT_HIGH_CHARGE = 0.3  # an ion of charge 3 or more


class NotKnownError(Exception):
    """The collection does not know enough to answer; the message is the reason, one sentence."""


@dataclass(frozen=True)
class Hold:
    """A product of base-ion activities that is fixed, its law, and what it exchanges."""

    made: Made
    law: tuple[float, ...]
    exchange: Made


@dataclass(frozen=True)
class Mixture:
    """Base ions present and the dissolved forms they make, in the order of the arrays."""

    bases: tuple[str, ...]
    forms: tuple[Form, ...]
    model: int
    limit: float


def mixture(
    forms: Mapping[str, Form],
    collection: Collection,
    solid: Made | None,
    added: Iterable[Made],
    needs: Sequence[str] = (),
) -> Mixture:
    """Everything that can be present. Raises NotKnownError for an unknown combination of ions."""
    missing = [f for f in needs if f not in forms]
    if missing:
        raise NotKnownError(f"it needs {', '.join(missing)}, not in the collection yet")
    present = {HYDROGEN}
    for part in (*([solid] if solid else []), *added):
        present |= set(part.base)
    bases = [f for f in forms if f in present]
    bases.remove(HYDROGEN)
    bases.insert(0, HYDROGEN)
    made = [f for f in forms.values() if f.formula not in bases and set(f.made.base) <= present]
    for cation, anion in unknown_pairs(bases, made, collection):
        raise NotKnownError(
            f"the collection holds nothing on how {pair_words(cation, anion)} combine in solution"
        )
    ordered = (*(forms[b] for b in bases), *made)
    charges = [abs(forms[b].charge) for b in bases]
    sizes_known = all(f.size is not None for f in ordered)
    return Mixture(
        tuple(bases), ordered, EXTENDED if sizes_known else DAVIES, _limit(solid, forms, charges)
    )


def _limit(solid: Made | None, forms: Mapping[str, Form], charges: Sequence[int]) -> float:
    if solid is not None:
        own = [abs(forms[ion].charge) for ion in solid.base if ion != HYDROGEN]
        if solid.base.get(HYDROGEN, 0.0) < 0.0:
            own.append(1)  # a hydroxide: OH^- is its anion
        if own and min(own) >= 2:
            return LIMIT_TWO_TWO
    return LIMIT_HIGH_CHARGE if max(charges) >= 3 else LIMIT


def unknown_pairs(
    bases: Sequence[str], made: Sequence[Form], collection: Collection
) -> list[tuple[str, str]]:
    """Cations and anions present that are neither a known form nor a known non-form."""
    ions = [*bases, HYDROXIDE]
    known = {
        (c, a) for statement in collection.no_pairs.values()
        for c in statement.cations for a in statement.anions
    }  # fmt: skip
    known.add((HYDROGEN, HYDROXIDE))
    return [
        (cation, anion)
        for cation in ions
        if cation.endswith("+")
        for anion in ions
        if anion.endswith("-") and (cation, anion) not in known
        if not _combine(cation, anion, made)
    ]


def pair_words(cation: str, anion: str) -> str:
    """Two ions as sentences name them: `Tl⁺ and CrO₄²⁻`."""
    return f"{to_unicode(cation)} and {to_unicode(anion)}"


def _combine(cation: str, anion: str, made: Sequence[Form]) -> bool:
    """Is there a form made of these two (and water or H^+)? OH^- counts as H^+ taken away."""
    for form in made:
        base = form.made.base
        others = set(base) - {cation, anion, HYDROGEN}
        if others:
            continue
        if anion == HYDROXIDE:
            if base.get(cation, 0.0) > 0.0 and base.get(HYDROGEN, 0.0) < 0.0:
                return True
        elif base.get(cation, 0.0) > 0.0 and base.get(anion, 0.0) > 0.0:
            return True
    return False


def textbook(mix: Mixture) -> Mixture:
    """The same ions as a textbook treats them: free, with concentrations for activities."""
    kept = tuple(f for f in mix.forms if f.formula in mix.bases or f.formula == HYDROXIDE)
    return Mixture(mix.bases, kept, IDEAL, float("inf"))


def problem(
    mix: Mixture,
    t_celsius: float,
    totals: Mapping[str, float],
    holds: Sequence[Hold],
) -> Problem:
    """A stack of one. totals: mol/kg of base ions."""
    bases = {b: i for i, b in enumerate(mix.bases)}

    def row(made: Made) -> list[float]:
        out = [0.0] * len(bases)
        for ion, n in made.base.items():
            out[bases[ion]] = n
        return out

    def array(value: object) -> np.ndarray[tuple[int, ...], np.dtype[np.float64]]:
        return np.asarray([value], dtype=float)

    return Problem(
        t_celsius=array(t_celsius),
        model=array(mix.model),
        limit=array(min(mix.limit, 1e9)),
        stoichiometry=array([row(f.made) for f in mix.forms]),
        water=array([f.made.water for f in mix.forms]),
        charge=array([f.charge for f in mix.forms]),
        law=array([f.law for f in mix.forms]),
        size=array([f.size or 0.0 for f in mix.forms]),
        linear=array([f.linear for f in mix.forms]),
        total=array([totals.get(b, 0.0) for b in mix.bases]),
        hold=array([row(h.made) for h in holds]).reshape(1, len(holds), len(bases)),
        hold_water=array([h.made.water for h in holds]).reshape(1, len(holds)),
        hold_law=array([h.law for h in holds]).reshape(1, len(holds), 7),
        exchange=array([row(h.exchange) for h in holds]).reshape(1, len(holds), len(bases)),
    )


def hold_law(
    law: tuple[float, ...], dissolved: Made, side_laws: Mapping[str, tuple[float, ...]]
) -> tuple[float, ...]:
    """Law of the product of base-ion activities: that of the salt less the constants inside."""
    return combined([(1.0, law), *((-n, side_laws[c]) for c, n in dissolved.constants.items())])
