"""Numbers and states in the words and digits that pages show; twin of templates/words.js."""

from __future__ import annotations

from dataclasses import dataclass

from builder.chem.curve import CurveValue
from builder.chem.rounding import display, fixed, significant, with_uncertainty
from builder.collection.answer import Dissolved

STATE_WORDS = {"within-range": "within the range of the law", "refused": "refused"}


@dataclass(frozen=True)
class ConstantText:
    """A constant at one temperature as a page shows it; empty texts where there is none."""

    log10_k: str
    u: str
    k: str
    low: str
    high: str
    state: str
    state_words: str


def shown(x: float, digits: int = 3) -> str:
    """A number to so many significant digits in typographic form."""
    return display(significant(x, digits))


def constant_text(value: CurveValue) -> ConstantText:
    """log10 K with its uncertainty, K with its 95 % interval, and the range state in words."""
    if value.log10_k is None:
        return ConstantText("", "", "", "", "", "refused", f"refused: {value.reason}")
    k = shown(10.0**value.log10_k)
    words = (
        f"beyond the range of the law by {fixed(value.beyond_by_k, 1)} K"
        if value.state == "beyond-range"
        else STATE_WORDS[value.state]
    )
    if value.u is None or value.interval is None:
        text = display(fixed(value.log10_k, 2))
        return ConstantText(text, "not evaluated", k, "", "", value.state, words)
    log10_k, u = with_uncertainty(value.log10_k, value.u)
    low, high = value.interval
    return ConstantText(
        display(log10_k), display(u), k, shown(low), shown(high), value.state, words
    )


def short_state(value: CurveValue) -> str:
    """The state of the law for a narrow column."""
    if value.state == "beyond-range":
        return f"beyond by {value.beyond_by_k:g} K"
    return value.state.replace("-", " ")


@dataclass(frozen=True)
class AmountText:
    """A dissolved amount as a page shows it."""

    mol_per_kg: str
    metal_mg_per_l: str
    g_per_l: str
    low_mg_per_l: str
    high_mg_per_l: str
    factor: str


def amount_text(answer: Dissolved) -> AmountText:
    """Texts of a computed answer; empty ones where it is refused."""
    if answer.solubility_mol_per_kg is None or answer.metal_mg_per_l is None:
        return AmountText("", "", "", "", "", "")
    span = answer.metal_interval
    low, high = (shown(span[0]), shown(span[1])) if span else ("", "")
    return AmountText(
        shown(abs(answer.solubility_mol_per_kg)),
        shown(answer.metal_mg_per_l),
        shown(abs(answer.solubility_g_per_l or 0.0)),
        low,
        high,
        "" if answer.factor is None else shown(answer.factor),
    )
