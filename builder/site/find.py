"""The first page: one field that finds a salt, and the list of all salts that reads without it."""

from __future__ import annotations

import json
from dataclasses import dataclass

from builder.chem.rounding import display, significant
from builder.collection.choice import Evaluated
from builder.collection.dissolve import amounts, metal_of
from builder.collection.laws import REFERENCE_C
from builder.collection.reference import Reference
from builder.collection.summary import summarise
from builder.site.frame import Frame, aligned, salt_address, words_of_count
from builder.site.render import Renderer
from builder.site.words import ConstantText, constant_text

LARGEST_ENTRY = 300  # bytes of JSON

ADDRESS = "index.html"
SCRIPTS = ("words.js", "find.js")


@dataclass(frozen=True)
class Line:
    """One salt of the list. solubility: mg of the salt in a litre, or empty with the reason."""

    evaluated: Evaluated
    cation: str
    constant: ConstantText
    solubility: str
    reason: str


def pages(reference: Reference, frame: Frame, renderer: Renderer) -> dict[str, bytes]:
    """The find page under its address."""
    lines = [line(reference, salt_id) for salt_id in reference.salts]
    lines.sort(key=lambda e: (e.evaluated.salt.formula, e.evaluated.salt.name))
    context = frame.context("Find a salt", 0, ADDRESS) | {
        "groups": groups(reference, lines),
        "count": words_of_count(len(lines), "salt", "salts"),
        "held": summarise(reference.collection),
        "aligned": aligned,
        "address": salt_address,
    }
    return {ADDRESS: renderer.page("find.html", context, SCRIPTS, index(reference, lines))}


def line(reference: Reference, salt_id: str) -> Line:
    """What the list says of one salt at 25 °C in water."""
    evaluated = reference.salts[salt_id]
    (answer,) = amounts(reference, salt_id, (REFERENCE_C,))
    solubility = ""
    if answer.solubility_g_per_l is not None:
        solubility = display(significant(answer.solubility_g_per_l * 1e3, 2))
    return Line(
        evaluated,
        metal_of(reference, salt_id),
        constant_text(answer.constant),
        solubility,
        answer.reason,
    )


def groups(reference: Reference, lines: list[Line]) -> list[tuple[str, str, list[Line]]]:
    """(cation, its name, its salts), by name; salts in the order given."""
    ions = reference.collection.ions
    of: dict[str, list[Line]] = {}
    for entry in lines:
        of.setdefault(entry.cation, []).append(entry)
    named = [(ion, ions[ion].name.removesuffix(" ion"), entries) for ion, entries in of.items()]
    return sorted(named, key=lambda group: group[1])


def index(reference: Reference, lines: list[Line]) -> dict[str, object]:
    """What the search looks through.

    salts: id, formula, name, other names, mineral, CAS number, ions, log10 K and solubility at
    25 °C as text. ions: names of every ion that the salts set free.
    """
    entries = [_entry(reference, entry) for entry in lines]
    ions = sorted({ion for entry in entries for ion in str(entry[6]).split()})
    known = reference.collection.ions
    return {
        "salts": entries,
        "ions": {i: [known[i].name, *known[i].other_names] for i in ions if i in known},
    }


def _entry(reference: Reference, entry: Line) -> list[str | list[str]]:
    salt = entry.evaluated.salt
    others = list(salt.other_names)
    ions = " ".join(reference.dissolving[salt.id].base)
    value = entry.constant.log10_k
    amount = f"{entry.solubility} mg/L" if entry.solubility else ""
    while True:
        found: list[str | list[str]] = [
            salt.id, salt.formula, salt.name, others, salt.mineral or "", salt.cas or "",
            ions, value, amount,
        ]  # fmt: skip
        text = json.dumps(found, ensure_ascii=False, separators=(",", ":"))
        if len(text.encode("utf-8")) <= LARGEST_ENTRY or not others:
            return found
        # the last of the other names are the least used ones
        others = others[:-1]
