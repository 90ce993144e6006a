"""The bath table: every salt at one temperature, live, and static at the house temperatures."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from builder.chem.curve import Curve, CurveValue, at
from builder.collection.choice import Evaluated
from builder.collection.laws import REFERENCE_C
from builder.collection.reference import Reference
from builder.site.frame import Frame, aligned, salt_address
from builder.site.payload import curve_json
from builder.site.render import Renderer
from builder.site.words import ConstantText, constant_text, shown

HOUSE_C = (4.0, REFERENCE_C, 37.0)

ADDRESS = "bath-table.html"
SCRIPTS = ("rounding.js", "curve.js", "words.js", "bath.js")


@dataclass(frozen=True)
class Row:
    """One salt at one temperature. ratio: K there over K at 25 °C, empty where either is none."""

    evaluated: Evaluated
    constant: ConstantText
    ratio: str


def pages(reference: Reference, frame: Frame, renderer: Renderer) -> dict[str, bytes]:
    """The bath table under its address."""
    salts = sorted(reference.salts.values(), key=lambda e: (e.salt.formula, e.salt.name))
    context = frame.context("Bath table", 0, ADDRESS) | {
        "rows": [row(e, REFERENCE_C) for e in salts],
        "house": [(e, [row(e, t).constant for t in HOUSE_C]) for e in salts],
        "house_c": HOUSE_C,
        "reference_c": REFERENCE_C,
        "brief": brief,
        "aligned": aligned,
        "address": salt_address,
    }
    return {ADDRESS: renderer.page("bath.html", context, SCRIPTS, data(salts))}


def row(evaluated: Evaluated, t_celsius: float) -> Row:
    """Texts of one salt at t in °C."""
    curve = evaluated.law.curve
    if curve is None:
        nothing = CurveValue(t_celsius, "refused", 0.0, None, None, 1.96, evaluated.refused)
        return Row(evaluated, constant_text(nothing), "")
    return Row(evaluated, constant_text(at(curve, t_celsius)), ratio(curve, t_celsius))


def brief(constant: ConstantText) -> str:
    """The state in the few words a cell has room for."""
    return constant.state_words.replace(" the range of the law", " range")


def ratio(curve: Curve, t_celsius: float) -> str:
    """K(t)/K(25 °C) to two digits."""
    here, there = at(curve, t_celsius).log10_k, at(curve, REFERENCE_C).log10_k
    if here is None or there is None:
        return ""
    return shown(10.0 ** (here - there), 2)


def data(salts: Sequence[Evaluated]) -> dict[str, Any]:
    """Curves in the order of the rows; null with the reason where there is none."""
    return {
        "salts": [
            {
                "curve": None if e.law.curve is None else curve_json(e.law.curve),
                "refused": e.refused,
            }
            for e in salts
        ]
    }
