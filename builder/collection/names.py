"""Finds a salt or an electrolyte by what people call it.

A record answers to its id, its formula in any writing and its names. Spaces, hyphens, dots, case,
raised and lowered digits make no difference; a slip of a letter is answered by a question only.
"""

from __future__ import annotations

import difflib
import unicodedata
from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction

from builder.chem.formula import Formula, FormulaError, parse_typed_formula
from builder.collection.records import Collection

LONGEST_TEXT = 200  # characters; nothing longer is looked for
MOST_SUGGESTED = 5
CLOSE_ENOUGH = 0.7  # of difflib's ratio
SHORTEST_PART = 3  # characters of a name that may stand for all names that hold them

_DOTS = frozenset(".*·•∙⋅・")
Composition = tuple[frozenset[tuple[str, Fraction]], Fraction]


@dataclass(frozen=True)
class Named:
    """What a record is called."""

    id: str
    formula: str
    names: tuple[str, ...]


@dataclass(frozen=True)
class Match:
    """What a text stands for: `id`, or several `solids` to choose from, or like `suggestions`.

    Exactly one of the three says something, or none where nothing is even like the text.
    """

    id: str | None
    solids: tuple[str, ...] = ()
    suggestions: tuple[str, ...] = ()


class Names:
    """All that a collection's salts, or its electrolytes, are called."""

    def __init__(self, records: Iterable[Named]) -> None:
        self._by_id: dict[str, str] = {}
        self._by_key: dict[str, list[str]] = {}
        self._by_composition: dict[Composition, list[str]] = {}
        for record in records:
            self._by_id[record.id] = record.id
            for key in dict.fromkeys(map(loose, (record.id, record.formula, *record.names))):
                self._by_key.setdefault(key, []).append(record.id)
            formula = _formula(record.formula)
            if formula is not None:
                self._by_composition.setdefault(_composition(formula), []).append(record.id)

    def find(self, text: str) -> Match:
        """What `text` stands for: first as an id, then as a formula, then as any name.

        A formula without water is the anhydrous solid; where there is none, its hydrates are
        offered, never taken.
        """
        if text in self._by_id:
            return Match(text)
        if len(text) > LONGEST_TEXT:
            return Match(None)
        formula = _formula(text)
        if formula is not None:
            found = self._by_composition.get(_composition(formula), [])
            if found:
                return _match(found)
        found = self._by_key.get(loose(text), [])
        if found:
            return _match(found)
        if formula is not None and (hydrates := self._hydrates(formula)):
            return Match(None, solids=tuple(hydrates))
        return Match(None, suggestions=self._suggestions(loose(text)))

    def _hydrates(self, formula: Formula) -> list[str]:
        bare, _ = _composition(formula)
        return [
            id
            for (elements, water), ids in self._by_composition.items()
            if water and _without_water(elements, water) == bare
            for id in ids
        ]

    def _suggestions(self, key: str) -> tuple[str, ...]:
        """Records with the text in a name, then those with a name much like it."""
        near: list[str] = []
        if len(key) >= SHORTEST_PART:
            near = [name for name in self._by_key if key in name]
        near += difflib.get_close_matches(key, self._by_key, MOST_SUGGESTED, CLOSE_ENOUGH)
        ids = dict.fromkeys(id for name in near for id in self._by_key[name])
        return tuple(ids)[:MOST_SUGGESTED]


def salt_names(collection: Collection) -> Names:
    """Ids, formulae, names, minerals and CAS numbers of the salts."""
    return Names(
        Named(
            salt.id,
            salt.formula,
            tuple(n for n in (salt.name, *salt.other_names, salt.mineral, salt.cas) if n),
        )
        for salt in collection.salts.values()
    )


def electrolyte_names(collection: Collection) -> Names:
    """Formulae and names of the electrolytes; the formula is the id."""
    return Names(Named(e.formula, e.formula, (e.name,)) for e in collection.electrolytes.values())


def loose(text: str) -> str:
    """A text without what people leave out or write otherwise: `CaSO₄ · 2H₂O` is `caso42h2o`."""
    decomposed = unicodedata.normalize("NFKD", text).casefold()
    kept = "".join(
        c
        for c in decomposed
        if not c.isspace() and c not in _DOTS and unicodedata.category(c) not in ("Mn", "Pd", "Sm")
    )
    return kept.replace("sulph", "sulf")


def _match(ids: list[str]) -> Match:
    return Match(ids[0]) if len(ids) == 1 else Match(None, solids=tuple(ids))


def _formula(text: str) -> Formula | None:
    """A neutral formula; None for any other text."""
    try:
        formula = parse_typed_formula(text)
    except FormulaError:
        return None
    return formula if formula.charge == 0 and formula.state in ("", "s") else None


def _composition(formula: Formula) -> Composition:
    return frozenset(formula.elements), formula.water


def _without_water(
    elements: frozenset[tuple[str, Fraction]], water: Fraction
) -> frozenset[tuple[str, Fraction]]:
    counts = dict(elements)
    counts["H"] = counts.get("H", Fraction(0)) - 2 * water
    counts["O"] = counts.get("O", Fraction(0)) - water
    return frozenset((symbol, n) for symbol, n in counts.items() if n)
