"""How well solubilities are predicted by constants that do not use them.

Every solubility measured in water is held out of its salt; what remains chooses again, and the
engine predicts. The table stands on the checks page.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from contextlib import suppress
from dataclasses import dataclass, replace

from builder.collection.choice import Evaluated, evaluate
from builder.collection.converting import in_water, printed_molality
from builder.collection.dissolve import amounts
from builder.collection.laws import median
from builder.collection.records import Determination
from builder.collection.reference import Reference


@dataclass(frozen=True)
class HeldOut:
    """One salt: (°C, log10 of predicted over printed) of its rows, or why it is not answered."""

    salt: str
    law: str
    rows: tuple[tuple[float, float], ...]
    unanswered: int
    reason: str


@dataclass(frozen=True)
class Figures:
    """Over all answered rows."""

    rows: int
    salts: int
    median: float
    within_008: float


def held_out(reference: Reference) -> list[HeldOut]:
    """Every salt with solubilities measured in water between 0 and 100 °C."""
    collection = reference.collection
    measured: dict[str, list[Determination]] = {}
    chosen_again: dict[str, Evaluated] = {}
    for name, evaluated in reference.salts.items():
        rows = [d for d in evaluated.salt.determinations.values() if in_water(d)]
        if not rows:
            continue
        measured[name] = rows
        with suppress(ValueError):  # nothing is left to choose from
            chosen_again[name] = evaluate(
                evaluated.salt, evaluated.reported, collection, frozenset(d.id for d in rows)
            )
    other = replace(reference, salts={**reference.salts, **chosen_again})
    out: list[HeldOut] = []
    for name, rows in measured.items():
        if name in chosen_again:
            out.append(_predicted(name, rows, other))
        else:
            out.append(HeldOut(name, "", (), len(rows), "no constant of its own beside them"))
    return out


def _predicted(salt: str, determinations: Sequence[Determination], reference: Reference) -> HeldOut:
    temperatures = [d.figure.temperature_c for d in determinations if d.figure is not None]
    known = [t for t in temperatures if t is not None]
    rows: list[tuple[float, float]] = []
    reason = ""
    for determination, answer in zip(determinations, amounts(reference, salt, known), strict=True):
        s = answer.solubility_mol_per_kg
        if s is None or s <= 0.0:
            reason = answer.reason
            continue
        assert determination.figure is not None
        record = reference.salts[salt].salt
        m = printed_molality(record, determination.figure, reference.collection)
        rows.append((answer.temperature_c, math.log10(s / m)))
    kind = reference.salts[salt].law.law.kind
    return HeldOut(salt, kind, tuple(rows), len(determinations) - len(rows), reason)


def figures(table: Sequence[HeldOut]) -> Figures:
    """Median and share of the absolute deviations over all answered rows."""
    off = [abs(deviation) for salt in table for _, deviation in salt.rows]
    return Figures(
        rows=len(off),
        salts=sum(1 for salt in table if salt.rows),
        median=median(off) if off else math.nan,
        within_008=sum(1 for x in off if x <= 0.08) / len(off) if off else math.nan,
    )
