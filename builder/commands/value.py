"""`value`: the constant of one salt at one temperature, with its uncertainty and range."""

from __future__ import annotations

from typing import Any

from builder.chem.curve import CurveValue, at
from builder.chem.formula import to_unicode
from builder.collection.choice import Evaluated
from builder.collection.identity import figure_digest
from builder.collection.reference import Reference
from builder.commands.telling import (
    aligned,
    between,
    celsius,
    digits,
    give_or_take,
    number,
    typographic,
)

KEYS = (
    "salt",
    "formula",
    "temperature_c",
    "log10_k",
    "standard_uncertainty",
    "lower_95",
    "upper_95",
    "state",
    "beyond_by_k",
    "determination",
    "law",
    "source",
    "reason",
)


def value_at(evaluated: Evaluated, t_celsius: float) -> CurveValue:
    """The chosen law at a temperature; refused where the law has no curve."""
    if evaluated.law.curve is None:
        return CurveValue(t_celsius, "refused", 0.0, None, None, 0.0, evaluated.refused)
    return at(evaluated.law.curve, t_celsius)


def record(reference: Reference, salt_id: str, t_celsius: float) -> dict[str, Any]:
    """The answer for JSON, keys in the order of KEYS; `reason` only where it is refused.

    lower_95, upper_95 are of K itself; standard_uncertainty is of log10 K.
    """
    evaluated = reference.salts[salt_id]
    value = value_at(evaluated, t_celsius)
    low, high = value.interval or (None, None)
    answer = {
        "salt": salt_id,
        "formula": evaluated.salt.formula,
        "temperature_c": number(t_celsius),
        "log10_k": number(value.log10_k),
        "standard_uncertainty": number(value.u),
        "lower_95": number(low),
        "upper_95": number(high),
        "state": value.state,
        "beyond_by_k": number(value.beyond_by_k),
        "determination": evaluated.chosen.determination.id,
        "law": evaluated.law.law.id,
        "source": evaluated.chosen.determination.citation.source,
    }
    return {**answer, "reason": value.reason} if value.state == "refused" else answer


def text(reference: Reference, salt_id: str, t_celsius: float) -> str:
    """The answer for people."""
    evaluated = reference.salts[salt_id]
    salt, law = evaluated.salt, evaluated.law.law
    value = value_at(evaluated, t_celsius)
    determination = evaluated.chosen.determination
    citation = determination.citation
    source = reference.collection.sources[citation.source]
    title = f"{salt.name}, {to_unicode(salt.formula)} ({salt.id}), at {celsius(t_celsius)}"
    lines = [("reaction", to_unicode(salt.reaction)), *_constant(evaluated, value)]
    lines += [
        ("determination", f"{determination.id}, {citation.locator} ({citation.evidence})"),
        ("source", f"{source.id}: {source.title}"),
        ("law", f"{law.id}, from {law.citation.source} ({law.citation.evidence})"),
        ("why chosen", salt.choice.reason),
        ("figure", f"digest {figure_digest(salt, determination, law)}"),
    ]
    return f"{title}\n\n{aligned(lines)}"


def _constant(evaluated: Evaluated, value: CurveValue) -> list[tuple[str, str]]:
    if value.log10_k is None:
        return [("refused", typographic(value.reason))]
    log10_k = give_or_take(value.log10_k, value.u)
    k = digits(10.0**value.log10_k)
    if value.interval is not None:
        log10_k += " (one standard deviation)"
        k += f", {between(*value.interval)}"
    return [
        ("log10 K", log10_k),
        ("K", f"{k}, of activities at zero ionic strength"),
        ("uncertainty", _basis(evaluated)),
        ("range", range_words(evaluated, value)),
    ]


def _basis(evaluated: Evaluated) -> str:
    """What the uncertainty rests on."""
    if evaluated.law.law.kind in ("expression", "points"):
        return "that of the function of temperature"
    return f"of the determination: {evaluated.u_basis}; the law adds its own away from it"


def range_words(evaluated: Evaluated, value: CurveValue) -> str:
    """Where the temperature stands in the range of the law, in words."""
    curve = evaluated.law.curve
    assert curve is not None  # a value was computed from it
    low, high = curve.range_c
    span = f"the range of its law, {low:g} to {high:g} °C"
    if value.state == "within-range":
        return f"within {span}"
    return f"{value.beyond_by_k:g} K beyond {span}: use with care"
