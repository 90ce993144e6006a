"""Rules for the words of a salt's file: names, texts, people and dates."""

from __future__ import annotations

import datetime
import re
from collections.abc import Iterator, Mapping
from typing import Any, cast

from builder.chem.formula import FormulaError
from builder.chem.reaction import parse_reaction, stoichiometry
from builder.collection.forms import HYDROGEN, WATER
from builder.collection.records import Collection, Origin, Salt
from builder.read.findings import Finding, Level, quoted

CODES: Mapping[str, Level] = {
    "chem-alias-collision": "error",
    "chem-date": "error",
    "chem-history-twice": "error",
    "chem-same-reader": "error",
    "judge-name": "doubt",
    "judge-mineral": "doubt",
    "judge-short-text": "doubt",
    "judge-short-reason": "doubt",
}

SHORTEST_REASON = 40  # characters: below this no reason is given, only an opinion
_OXIDATION_NUMBER = re.compile(r"\([IVX]+\)")


def check_words(salt: Salt, collection: Collection) -> Iterator[Finding]:
    """What is written about one salt says something, and fits its reaction."""
    yield from _names(salt, collection)
    yield from _texts(salt)
    yield from _people_and_dates(salt)


def _names(salt: Salt, collection: Collection) -> Iterator[Finding]:
    """The name holds the names of its ions, and the solid says which mineral it is."""
    name = _OXIDATION_NUMBER.sub("", salt.name.casefold())
    for ion in _own_ions(salt.reaction):
        known = collection.ions.get(ion)
        if known is None:
            continue
        word = _OXIDATION_NUMBER.sub("", known.name).removesuffix(" ion").casefold()
        if word not in name:
            place = salt.origin.place("name")
            found = f"the name {quoted(salt.name)}, without {quoted(word)} for {ion}"
            yield Finding("doubt", "judge-name", place, found, "write the name of this salt")
    if salt.mineral is not None and salt.mineral.casefold() not in salt.solid.casefold():
        place = salt.origin.place("mineral")
        found = f"the mineral {quoted(salt.mineral)}, of which the solid says nothing"
        cure = "name it in the solid too, as in crystalline, orthorhombic (anglesite), or mend it"
        yield Finding("doubt", "judge-mineral", place, found, cure)


def _own_ions(reaction: str) -> list[str]:
    """Ions set free, where they are those of the salt: not where acid or water takes part."""
    try:
        net = stoichiometry(parse_reaction(reaction))
    except FormulaError:
        return []  # a finding of its own
    if net.get(HYDROGEN, 0) < 0 or net.get(WATER, 0) < 0:
        return []
    return [f for f, n in net.items() if n > 0 and "^" in f and f != HYDROGEN]


def _texts(salt: Salt) -> Iterator[Finding]:
    """A single word is no sentence; a reason that short is none."""
    texts: list[tuple[Origin, str, str | None]] = [(salt.origin, "solid", salt.solid)]
    for determination in salt.determinations.values():
        for key, text in (
            ("reduced_with", determination.reduced_with),
            ("note", determination.note),
        ):
            if text is not None:
                texts.append((determination.origin, key, text))
    for law in salt.laws.values():
        texts.append((cast(Origin, law.origin), "note", law.note))
    for origin, key, text in texts:
        if text is not None and len(text.split()) < 2:
            cure = "say it in a sentence, or leave the key out if nothing is to be said"
            found = f"the single word {quoted(text)}"
            yield Finding("doubt", "judge-short-text", origin.place(key), found, cure)
    if len(salt.choice.reason) < SHORTEST_REASON:
        place = salt.origin.place("choice", "reason")
        found = f"the reason {quoted(salt.choice.reason)}"
        cure = "say what speaks for this determination and law, and against the others"
        yield Finding("doubt", "judge-short-reason", place, found, cure)


def _people_and_dates(salt: Salt) -> Iterator[Finding]:
    origin = salt.origin
    value = cast(Mapping[str, Any], origin.document.value)
    paths: list[tuple[str | int, ...]] = [("entered", "on")]
    paths += [("history", i, "on") for i in range(len(value["history"]))]
    if salt.second_look is not None:
        paths.append(("second_look", "on"))
        if _as_searched(value["second_look"]["by"]) == _as_searched(value["entered"]["by"]):
            place = origin.place("second_look", "by")
            found = f"{quoted(value['second_look']['by'])}, who entered the record"
            cure = "a second look is another's; write none until there is one"
            yield Finding("error", "chem-same-reader", place, found, cure)
    for path in paths:
        text = str(origin.document.at(path))
        try:
            datetime.date.fromisoformat(text)
        except ValueError:
            cure = "write a day of the calendar as year-month-day, such as 2026-12-01"
            yield Finding("error", "chem-date", origin.place(*path), quoted(text), cure)
    for i, entry in enumerate(value["history"]):
        if entry in value["history"][:i]:
            place = origin.place("history", i)
            cure = "keep one of them"
            yield Finding("error", "chem-history-twice", place, "the same entry again", cure)


def check_aliases(collection: Collection) -> Iterator[Finding]:
    """A word that finds a salt finds no other one; a formula may (polymorphs share it)."""
    owners: dict[str, tuple[Salt, bool]] = {}
    for salt in collection.salts.values():
        paths: list[tuple[str | int, ...]] = [("id",), ("formula",), ("name",)]
        paths += [("mineral",)] * (salt.mineral is not None) + [("cas",)] * (salt.cas is not None)
        paths += [("other_names", i) for i in range(len(salt.other_names))]
        for path in paths:
            word = str(salt.origin.document.at(path))
            is_formula = path == ("formula",)
            other, was_formula = owners.setdefault(_as_searched(word), (salt, is_formula))
            if other is not salt and not (is_formula and was_formula):
                place = salt.origin.place(*path)
                found = f"{quoted(word)}, which {other.id} is found by already"
                cure = "a name finds one salt: make it more exact here or there"
                yield Finding("error", "chem-alias-collision", place, found, cure)


def _as_searched(word: str) -> str:
    """Without case, spaces and hyphens."""
    return re.sub(r"[\s\-‐‑–]+", "", word.casefold())
