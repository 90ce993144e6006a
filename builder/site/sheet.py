"""The sheet of one salt: one self-contained page. Everything on it is put together here."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from builder.chem.curve import Curve, at
from builder.chem.rounding import display, fixed, significant
from builder.chem.temperature import basis_at
from builder.chem.water import kelvin
from builder.collection.answer import Dissolved
from builder.collection.dissolve import amounts, dissolve, metal_of
from builder.collection.figures import Reported
from builder.collection.identity import digest, figure_digest, record_digest
from builder.collection.laws import LawCurve, plain_van_t_hoff
from builder.collection.records import SideReaction
from builder.collection.reference import Reference
from builder.collection.shown import Shown, Step
from builder.site.frame import Frame
from builder.site.payload import sheet_payload
from builder.site.plot import law_picture
from builder.site.render import Renderer
from builder.site.sources import Citation, citation
from builder.site.words import amount_text, constant_text, short_state, shown

HOUSE_TEMPERATURES = (4.0, 37.0)
SCRIPTS = (
    "rounding.js", "water.js", "engine.js", "curve.js", "words.js", "dissolve.js", "sheet.js",
)  # fmt: skip
EVIDENCE_WORDS = {
    "open-copy": "read in the source or an open copy",
    "recalled": "recalled, not looked at",
    "computed": "computed from other records",
    "estimated": "estimated here",
    "measured-here": "measured here",
}


@dataclass(frozen=True)
class TableRow:
    """One temperature of the static table."""

    t: str
    house: bool
    constant: Any
    mol_per_kg: str
    mg_per_l: str
    state: str


def pages(reference: Reference, frame: Frame, renderer: Renderer) -> dict[str, bytes]:
    """All sheets by address."""
    out: dict[str, bytes] = {}
    for salt_id, evaluated in reference.salts.items():
        payload = sheet_payload(reference, salt_id)
        context = frame.context(evaluated.salt.name, 1, "")
        context |= sheet_context(reference, salt_id, payload)
        address = f"salts/{salt_id}.html"
        out[address] = renderer.page("sheet.html", context, SCRIPTS, payload)
    return out


def sheet_context(reference: Reference, salt_id: str, payload: Mapping[str, Any]) -> dict[str, Any]:
    """What sheet.html asks for, beside the frame. payload: what the page's answers rest on."""
    evaluated = reference.salts[salt_id]
    salt = evaluated.salt
    hazard = reference.collection.hazards[salt.hazard] if salt.hazard else None
    at_25 = dissolve(reference, salt_id, 25.0)
    used = _used_side_reactions(reference, at_25)
    rows = [_reported_row(reference, salt_id, name) for name in evaluated.reported]
    cited = _cited(reference, salt_id, used)
    return {
        "salt": salt,
        "hazard": hazard,
        "metal": metal_of(reference, salt_id),
        "molar_mass": fixed(reference.molar_mass(salt.formula), 3),
        "constant": constant_text(at_25.constant),
        "answer": at_25,
        "amount": amount_text(at_25),
        "forms": [f for f in at_25.forms if f.share is not None and f.share >= 0.0005],
        "percent": _percent,
        "shown": shown,
        "table": _table(reference, salt_id),
        "picture": law_picture(evaluated),
        "evaluated": evaluated,
        "u_text": "not evaluated" if evaluated.u is None else fixed(evaluated.u, 3),
        "reported": rows,
        "outlying": [r for r in rows if r["far"]],
        "law": evaluated.law,
        "other_laws": [
            _law_row(c) for name, c in evaluated.laws.items() if name != salt.choice.law
        ],
        "working": displayed_constant(reference, salt_id, 25.0),
        "plain": _plain(evaluated.law.curve),
        "side_reactions": [_side_row(reference, r) for r in used],
        "sources": cited,
        "evidence_words": EVIDENCE_WORDS,
        "record_digest": record_digest(salt),
        "payload_digest": digest(json.dumps(payload, sort_keys=True, ensure_ascii=False)),
    }  # fmt: skip


LAW_WORDS = {
    "enthalpy": "enthalpy of dissolution, heat capacity estimated by charge type",
    "heat-capacity": "enthalpy and heat capacity of dissolution",
    "formation": "enthalpy and heat capacity from formation properties",
    "expression": "published expression",
    "points": "fit to values at several temperatures",
}


def _law_row(law: LawCurve) -> dict[str, str]:
    """A law that was not chosen, with what it would give."""
    at_25 = at_60 = "none"
    if law.curve is not None:
        at_25, at_60 = (constant_text(at(law.curve, t)).log10_k or "refused" for t in (25.0, 60.0))
    return {
        "id": law.law.id,
        "kind": LAW_WORDS[law.law.kind],
        "source": law.law.citation.source,
        "evidence": law.law.citation.evidence,
        "at_25": at_25,
        "at_60": at_60,
        "note": law.law.note or law.reason,
    }


def _percent(share: float) -> str:
    return f"{fixed(100.0 * share, 1)} %"


def _table(reference: Reference, salt_id: str) -> list[TableRow]:
    temperatures = sorted({*(5.0 * i for i in range(21)), *HOUSE_TEMPERATURES})
    rows: list[TableRow] = []
    for t, answer in zip(temperatures, amounts(reference, salt_id, temperatures), strict=True):
        amount = amount_text(answer)
        rows.append(
            TableRow(
                f"{t:g}",
                t in HOUSE_TEMPERATURES,
                constant_text(answer.constant),
                amount.mol_per_kg or "refused",
                amount.metal_mg_per_l or "refused",
                short_state(answer.constant),
            )
        )
    return rows


def _plain(curve: Curve | None) -> list[dict[str, str]]:
    """Plain van 't Hoff beside the law, at four temperatures."""
    if curve is None:
        return []
    plain = plain_van_t_hoff(curve)
    out: list[dict[str, str]] = []
    for t in (0.0, 37.0, 60.0, 90.0):
        real, simple = at(curve, t).log10_k, at(plain, t).log10_k
        if real is not None and simple is not None:
            out.append(
                {
                    "t": f"{t:g}",
                    "law": display(fixed(real, 3)),
                    "plain": display(fixed(simple, 3)),
                    "off": display(fixed(simple - real, 3)),
                }
            )
    return out


def displayed_constant(reference: Reference, salt_id: str, t_celsius: float) -> Shown | None:
    """The displayed log10 K with every step from the printed text; None where refused."""
    evaluated = reference.salts[salt_id]
    curve = evaluated.law.curve
    if curve is None:
        return None
    value = at(curve, t_celsius)
    text = constant_text(value)
    if value.log10_k is None:
        return None
    anchor = evaluated.chosen
    steps = [*(anchor.steps if evaluated.law.law.determination else ()), *evaluated.law.steps]
    steps += [Step(what, put_in, result) for what, put_in, result in law_terms(curve, t_celsius)]
    steps.append(Step("rounded to match its uncertainty", f"u = {text.u}", text.log10_k))
    steps.append(Step("K = 10^(log10 K)", text.log10_k, text.k))
    return Shown(text.log10_k, value.log10_k, tuple(steps))


_TERM_TEXTS = (
    "c0", "c1 (1/T - 1/T0)", "c2 (T0/T - 1 + ln(T/T0))", "c3 (T - T0)", "c4 (1/T² - 1/T0²)",
    "c5 (T² - T0²)",
)  # fmt: skip


def law_terms(curve: Curve, t_celsius: float) -> list[tuple[str, str, str]]:
    """The law term by term with its numbers: (what, numbers put in, result). Twin in sheet.js."""
    functions = basis_at(kelvin(t_celsius), curve.law[0])
    out: list[tuple[str, str, str]] = []
    for name, c, b in zip(_TERM_TEXTS, curve.law[1:], functions, strict=True):
        if c != 0.0:
            out.append((f"term {name}", f"{c:.10g} × {significant(b, 6)}", fixed(c * b, 5)))
    total = math.fsum(c * b for c, b in zip(curve.law[1:], functions, strict=True))
    where = f"T = {fixed(kelvin(t_celsius), 2)} K, T0 = {fixed(curve.law[0], 2)} K"
    out.append(("sum of the terms, log10 K", where, fixed(total, 5)))
    return out


def _reported_row(reference: Reference, salt_id: str, name: str) -> dict[str, Any]:
    evaluated = reference.salts[salt_id]
    reported: Reported = evaluated.reported[name]
    determination = reported.determination
    source = reference.collection.sources[determination.citation.source]
    off = _off(reference, salt_id, reported)
    figure = determination.figure
    return {
        "id": name,
        "chosen": reported is evaluated.chosen,
        "printed": "computed" if figure is None else figure.printed.text,
        "quantity": QUANTITY_WORDS["formation" if figure is None else figure.quantity],
        "unit": "" if figure is None else " ".join(filter(None, (figure.unit, figure.solid_as))),
        "uncertainty": "" if figure is None else figure.uncertainty.words(),
        "medium": "" if figure is None else MEDIUM_WORDS.get(figure.medium, figure.medium),
        "t": "not stated" if figure is not None and figure.temperature_c is None
        else f"{reported.t_celsius:g}",
        "log10_k": "" if reported.log10_k is None else display(fixed(reported.log10_k, 3)),
        "off": "" if off is None else _signed(off),
        "far": off is not None and abs(off) >= 0.5,
        "comparable": reported.comparable,
        "reason": reported.reason,
        "source": source.id,
        "locator": determination.citation.locator,
        "via": determination.citation.via,
        "where": determination.citation.where,
        "evidence": determination.citation.evidence,
        "family": source.family,
        "note": determination.note,
        "reduced_with": determination.reduced_with,
        "steps": reported.steps,
        "digest": figure_digest(evaluated.salt, determination),
    }  # fmt: skip


QUANTITY_WORDS = {
    "ksp": "solubility product",
    "pksp": "pKsp",
    "log10-k": "log10 K",
    "gibbs-energy": "Gibbs energy of dissolution",
    "solubility": "solubility",
    "formation": "formation properties",
}
MEDIUM_WORDS = {"zero": "zero ionic strength"}


def _signed(x: float) -> str:
    text = fixed(x, 2)
    return display(text) if text.startswith("-") else f"+{text}"


def _off(reference: Reference, salt_id: str, reported: Reported) -> float | None:
    """How far a reported value lies from the law at its own temperature, in log10 K."""
    curve = reference.salts[salt_id].law.curve
    if curve is None or reported.log10_k is None:
        return None
    value = at(curve, reported.t_celsius).log10_k
    return None if value is None else reported.log10_k - value


def _used_side_reactions(reference: Reference, answer: Dissolved) -> list[SideReaction]:
    """Side reactions behind the dissolved forms of the answer in water, water itself first."""
    names: dict[str, None] = {}
    for amount in answer.forms:
        for name in reference.forms[amount.form].made.constants:
            names.setdefault(name)
    return [reference.collection.side_reactions[name] for name in names]


def _side_row(reference: Reference, reaction: SideReaction) -> dict[str, Any]:
    value = at(reference.side_curves[reaction.id], 25.0)
    law = reaction.law
    heat = "" if law.delta_h is None else f"{law.delta_h.text} {law.delta_h.unit}"
    kind = {"water": "equation", "expression": "expression"}.get(law.kind, heat)
    return {
        "reaction": reaction.reaction,
        "printed": reaction.figure.printed.text,
        "log10_k": "" if value.log10_k is None else display(fixed(value.log10_k, 2)),
        "u": "" if value.u is None else fixed(value.u, 2),
        "heat": kind,
        "heat_evidence": reaction.law_evidence,
        "source": reaction.citation.source,
        "locator": reaction.citation.locator,
        "evidence": reaction.citation.evidence,
        "note": reaction.note,
    }


def _cited(reference: Reference, salt_id: str, used: list[SideReaction]) -> list[Citation]:
    """Every source named on the sheet, in full, in the order of their ids."""
    evaluated = reference.salts[salt_id]
    ids: set[str] = set()
    for determination in evaluated.salt.determinations.values():
        ids |= {determination.citation.source, determination.citation.via or ""}
    for law in evaluated.salt.laws.values():
        ids |= {law.citation.source, law.citation.via or ""}
    for reaction in used:
        ids |= {reaction.citation.source, reaction.law.citation.source}
    for amount in reference.forms.values():
        if amount.formula in reference.dissolving[salt_id].base:
            ids.add(amount.size_note)
    sources = reference.collection.sources
    return [citation(sources[i]) for i in sorted(ids) if i in sources]
