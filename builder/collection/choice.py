"""One salt evaluated: every reported value, how far they agree, the chosen one and its curve."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from builder.collection.figures import Reported
from builder.collection.laws import LawCurve, law_curve, median, spread
from builder.collection.records import Collection, Salt

U_FLOOR = 0.02  # log10 K: no spread of sources is believed to be smaller

# The written order of choice where the record's own choice is held out.
KIND_ORDER = ("critical-evaluation", "primary-measurement", "formation-table", "compilation")
EVIDENCE_ORDER = ("open-copy", "measured-here", "computed", "recalled")


@dataclass(frozen=True)
class Corroboration:
    """Independent families among the comparable values at 25 °C.

    families: family -> median log10 K of its members. agreeing: families within
    max(0.1, 2u) of the chosen value, its own included.
    """

    families: Mapping[str, float]
    middle: float | None
    spread: float | None
    agreeing: tuple[str, ...]


@dataclass(frozen=True)
class Evaluated:
    """A salt with everything the pages and commands show of its constants.

    u: standard uncertainty of log10 K of the chosen determination, None where not evaluated;
    u_basis in words. curve: the chosen law. Other laws stay in `laws`.
    """

    salt: Salt
    reported: Mapping[str, Reported]
    chosen: Reported
    u: float | None
    u_basis: str
    corroboration: Corroboration
    laws: Mapping[str, LawCurve]
    law: LawCurve

    @property
    def refused(self) -> str:
        """Why no constant can be shown; empty where one can."""
        if self.law.curve is None:
            return self.law.reason
        return ""


def evaluate(
    salt: Salt,
    reported: Mapping[str, Reported],
    collection: Collection,
    without: frozenset[str] = frozenset(),
) -> Evaluated:
    """Evaluate a salt, leaving out the determinations named in `without` (hold-outs).

    Raises ValueError when nothing is left to choose from.
    """
    kept = {name: r for name, r in reported.items() if name not in without}
    name = salt.choice.determination
    if name not in kept:
        name = _first_choice(kept, collection)
    chosen = kept[name]
    families = _families(kept, collection)
    values = list(families.values())
    u_of = {n: _uncertainty(r, values)[0] for n, r in kept.items()}
    u, basis = _uncertainty(chosen, values)
    laws = {n: law_curve(salt, law, kept, u_of, collection) for n, law in salt.laws.items()}
    return Evaluated(
        salt=salt,
        reported=kept,
        chosen=chosen,
        u=u,
        u_basis=basis,
        corroboration=_corroboration(chosen, u, families),
        laws=laws,
        law=_law(salt, laws, without),
    )


def _law(salt: Salt, laws: Mapping[str, LawCurve], without: frozenset[str]) -> LawCurve:
    """The chosen law; where it rests on what is held out, the first one that does not."""
    chosen = laws[salt.choice.law]
    if chosen.curve is not None or not without:
        return chosen
    return next((law for law in laws.values() if law.curve is not None), chosen)


def _first_choice(kept: Mapping[str, Reported], collection: Collection) -> str:
    def rank(name: str) -> tuple[int, int, str]:
        citation = kept[name].determination.citation
        kind = collection.sources[citation.source].kind
        place = KIND_ORDER.index(kind) if kind in KIND_ORDER else len(KIND_ORDER)
        evidence = citation.evidence
        seen = EVIDENCE_ORDER.index(evidence) if evidence in EVIDENCE_ORDER else 9
        return place, seen, name

    usable = [n for n, r in kept.items() if r.comparable and r.log10_k is not None]
    if not usable:
        raise ValueError("no determination is left to choose from")
    return min(usable, key=rank)


def _families(kept: Mapping[str, Reported], collection: Collection) -> dict[str, float]:
    """Median of every family; copies of one table are one vote."""
    members: dict[str, list[float]] = {}
    for r in kept.values():
        if r.comparable and r.log10_k is not None:
            family = collection.sources[r.determination.citation.source].family
            members.setdefault(family, []).append(r.log10_k)
    return {family: median(values) for family, values in sorted(members.items())}


def _uncertainty(r: Reported, families: Sequence[float]) -> tuple[float | None, str]:
    """Stated, or from the spread of the families; half the distance from their median at least.

    A value that others contradict is less certain than their agreement among themselves.
    """
    if r.u_stated is not None:
        return math.hypot(r.u_stated, r.u_digits), "stated by the source"
    u_spread = spread(families)
    if u_spread is None:
        return None, "not evaluated: no uncertainty stated and no second family to compare with"
    off = 0.5 * abs((r.log10_k or 0.0) - median(families)) if r.comparable else 0.0
    u = max(u_spread, U_FLOOR, r.u_digits, off)
    return u, f"estimated from the spread of {len(families)} independent families"


def _corroboration(
    chosen: Reported, u: float | None, families: Mapping[str, float]
) -> Corroboration:
    values = list(families.values())
    near = max(0.1, 2.0 * (u or 0.0))
    at_25 = chosen.log10_k
    agreeing = tuple(f for f, v in families.items() if at_25 is not None and abs(v - at_25) <= near)
    return Corroboration(families, median(values) if values else None, spread(values), agreeing)
