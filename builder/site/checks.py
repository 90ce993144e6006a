"""The validation report: what reading and checking found, and how well each choice is supported."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from builder.chem.curve import at
from builder.chem.rounding import display, fixed, with_uncertainty
from builder.collection.choice import Evaluated
from builder.collection.holding_out import HeldOut, figures, held_out
from builder.collection.laws import REFERENCE_C, median
from builder.collection.reference import Reference
from builder.collection.summary import summarise
from builder.read.findings import LEVELS, Finding
from builder.site.frame import Frame, aligned, salt_address, words_of_count
from builder.site.render import Renderer
from builder.site.words import constant_text

ADDRESS = "checks.html"

EVIDENCE_WORDS = {
    "open-copy": "read in the source or an open copy of it",
    "recalled": "recalled, not looked at",
    "computed": "computed from other records",
    "estimated": "estimated",
    "measured-here": "measured here",
}
LAW_WORDS = {
    "enthalpy": "enthalpy, heat capacity estimated",
    "heat-capacity": "enthalpy and heat capacity",
    "formation": "from formation properties",
    "expression": "published expression",
    "points": "fitted to points",
    "water": "ionisation of water",
}


@dataclass(frozen=True)
class Share:
    """How often something occurs among all, and among the chosen; with the shares in per cent."""

    words: str
    of_all: int
    all_percent: str
    of_chosen: int
    chosen_percent: str


@dataclass(frozen=True)
class Support:
    """How a choice is supported, as texts. spread: robust, of the independent families.

    by_law: log10 K of the chosen law at 25 °C, which other values than the chosen one may shape.
    """

    evaluated: Evaluated
    log10_k: str
    u: str
    by_law: str
    evidence: str
    agreeing: int
    families: int
    spread: str


@dataclass(frozen=True)
class Predicted:
    """Solubilities of one salt predicted without them, as texts; deviations in log10."""

    evaluated: Evaluated
    law: str
    rows: int
    unanswered: int
    middle: str
    largest: str
    reason: str


def prediction(row: HeldOut, reference: Reference) -> Predicted:
    """One line of the table of held-out solubilities."""
    off = [deviation for _, deviation in row.rows]
    far = max(off, key=abs) if off else 0.0
    return Predicted(
        evaluated=reference.salts[row.salt],
        law=LAW_WORDS.get(row.law, ""),
        rows=len(off),
        unanswered=row.unanswered,
        middle=display(fixed(median(off), 3)) if off else "",
        largest=display(fixed(far, 2)) if off else "",
        reason=row.reason,
    )


def pages(
    reference: Reference, frame: Frame, renderer: Renderer, findings: Sequence[Finding]
) -> dict[str, bytes]:
    """The checks page under its address."""
    salts = list(reference.salts.values())
    every = [r for e in salts for r in e.salt.determinations.values()]
    chosen = [e.chosen.determination for e in salts]
    laws = [law for e in salts for law in e.salt.laws.values()]
    sources = reference.collection.sources
    held = summarise(reference.collection)
    counts = Counter(f.level for f in findings)
    table = held_out(reference)
    predicted = [prediction(row, reference) for row in table]
    context = frame.context("Checks", 0, ADDRESS) | {
        "findings": [(level, [f for f in findings if f.level == level]) for level in LEVELS],
        "any_finding": bool(findings),
        "found": ", ".join(words_of_count(counts[n], n, n + "s") for n in LEVELS),
        "counts": (
            (held.salts, "salts"),
            (held.determinations, "determinations"),
            (held.families, "independent families of sources"),
            (held.two_families, "salts with two or more of them"),
            (len(laws), "laws of temperature"),
            (f"{held.required_found} of {held.required}", "salts that a laboratory must find"),
            (len(reference.collection.side_reactions), "side reactions"),
            (len(sources), "sources"),
        ),
        "evidence": shares(
            (d.citation.evidence for d in every),
            (d.citation.evidence for d in chosen),
            EVIDENCE_WORDS,
        ),
        "laws": shares((law.kind for law in laws), (e.law.law.kind for e in salts), LAW_WORDS),
        "support": [support(e) for e in sorted(salts, key=lambda e: (e.salt.formula, e.salt.name))],
        "sources": sources,
        "predicted": predicted,
        "prediction": figures(table),
        "median": display(fixed(figures(table).median, 3)),
        "aligned": aligned,
        "address": salt_address,
    }
    return {ADDRESS: renderer.page("checks.html", context)}


def shares(every: Iterable[str], chosen: Iterable[str], words: dict[str, str]) -> list[Share]:
    """One line for every kind that occurs, in the order of `words`."""
    of_all, of_chosen = Counter(every), Counter(chosen)
    return [
        Share(
            text,
            of_all[kind],
            percent(of_all[kind], of_all.total()),
            of_chosen[kind],
            percent(of_chosen[kind], of_chosen.total()),
        )
        for kind, text in words.items()
        if of_all[kind] or of_chosen[kind]
    ]


def percent(part: int, whole: int) -> str:
    """Whole per cent; empty where there is no whole."""
    return f"{fixed(100.0 * part / whole, 0)} %" if whole else ""


def support(evaluated: Evaluated) -> Support:
    """Texts of the table salt by salt."""
    chosen, agreement = evaluated.chosen, evaluated.corroboration
    value = u = ""
    if chosen.log10_k is not None:
        if evaluated.u is None:
            value = fixed(chosen.log10_k, 2)
        else:
            value, u = with_uncertainty(chosen.log10_k, evaluated.u)
    curve = evaluated.law.curve
    by_law = "" if curve is None else constant_text(at(curve, REFERENCE_C)).log10_k
    return Support(
        evaluated,
        display(value) if value else "",
        display(u) if u else "not evaluated",
        by_law,
        chosen.determination.citation.evidence.replace("-", " "),
        len(agreement.agreeing),
        len(agreement.families),
        "" if agreement.spread is None else fixed(agreement.spread, 2),
    )
