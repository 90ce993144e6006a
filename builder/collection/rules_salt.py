"""Rules for one salt's file: what it names exists, what identifies it is sound."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from pathlib import PurePosixPath
from typing import Any, cast

from builder.chem.formula import Formula, parse_formula
from builder.collection.records import Collection, Determination, Law, Origin, Salt
from builder.collection.rules_figures import check_figure, check_law, check_own_figure
from builder.collection.rules_reactions import (
    dissolves_solid,
    known_forms,
    read_formula,
    read_reaction,
    unknown_forms,
    weighable,
)
from builder.read.findings import Finding, Level, Place, quoted

CODES: Mapping[str, Level] = {
    "chem-file-name": "error",
    "chem-solid-state": "error",
    "chem-solid-as": "error",
    "chem-needs-missing": "note",
    "chem-cas": "error",
    "chem-hazard": "error",
    "chem-choice": "error",
    "chem-law-anchor": "error",
    "chem-table": "error",
    "chem-chosen-kind": "error",
}

NEVER_CHOSEN = ("teaching-table", "practice")


def check_salt(salt: Salt, collection: Collection) -> Iterator[Finding]:
    """Everything that the file of one salt says, against itself and the other records."""
    yield from _identity(salt, collection)
    yield from _dissolution(salt, collection)
    yield from _choice(salt, collection)
    for determination in salt.determinations.values():
        yield from _determination(determination, salt, collection)
    for law in salt.laws.values():
        yield from _law(law, salt, collection)


def _identity(salt: Salt, collection: Collection) -> Iterator[Finding]:
    origin = salt.origin
    name = PurePosixPath(origin.document.file).stem
    if name != salt.id:
        place = origin.place("id")
        found = f"the id {quoted(salt.id)} in the file {name}.yaml"
        yield Finding("error", "chem-file-name", place, found, "name both alike")
    formula = read_formula(salt.formula, collection, origin, "formula")
    if isinstance(formula, Finding):
        yield formula
    elif formula.charge or formula.state:
        place = origin.place("formula")
        cure = "write a neutral formula without (s) or (aq)"
        yield Finding("error", "chem-solid-state", place, quoted(salt.formula), cure)
    else:
        yield from weighable(formula, collection, origin, "formula")
    if salt.cas is not None and not cas_is_sound(salt.cas):
        place = origin.place("cas")
        found = f"the CAS number {salt.cas}, whose check digit is wrong"
        yield Finding("error", "chem-cas", place, found, "look the number up again, digit by digit")
    if salt.hazard is not None and salt.hazard not in collection.hazards:
        yield _missing("chem-hazard", origin.place("hazard"), "hazard", salt.hazard,
                       collection.hazards)  # fmt: skip


def cas_is_sound(cas: str) -> bool:
    """Check digit: the digits before it, weighted 1, 2, 3 ... from the right, modulo 10 (CAS)."""
    digits = [int(d) for d in cas.replace("-", "")]
    weighted = sum(i * d for i, d in enumerate(reversed(digits[:-1]), 1))
    return weighted % 10 == digits[-1]


def _dissolution(salt: Salt, collection: Collection) -> Iterator[Finding]:
    origin, known = salt.origin, known_forms(collection)
    reaction = read_reaction(salt.reaction, collection, origin, "reaction")
    if isinstance(reaction, Finding):
        yield reaction
    else:
        place = origin.place("reaction")
        yield from dissolves_solid(reaction, salt.formula, place)
        yield from unknown_forms(reaction, known, place, salt.formula)
    for i, form in enumerate(salt.needs):
        formula = read_formula(form, collection, origin, "needs", i)
        if isinstance(formula, Finding):
            yield formula
        elif form not in known:
            place = origin.place("needs", i)
            found = f"{form}, which no side reaction forms: no dissolved amount can be given"
            yield Finding("note", "chem-needs-missing", place, found, "add its side reaction")


def _choice(salt: Salt, collection: Collection) -> Iterator[Finding]:
    origin, choice = salt.origin, salt.choice
    records: tuple[tuple[str, str, Mapping[str, Determination] | Mapping[str, Law]], ...] = (
        ("determination", choice.determination, salt.determinations),
        ("law", choice.law, salt.laws),
    )
    for key, name, known in records:
        place = origin.place("choice", key)
        if name not in known:
            yield _missing("chem-choice", place, key, name, known)
            continue
        source = collection.sources.get(known[name].citation.source)
        estimated = known[name].citation.evidence == "estimated"  # says itself what it is
        if source is not None and source.kind in NEVER_CHOSEN and not estimated:
            found = f"{quoted(name)}, from a source of the kind {source.kind}"
            cure = "choose one that names its own source: such a table shows, it does not decide"
            yield Finding("error", "chem-chosen-kind", place, found, cure)


def _determination(
    determination: Determination, salt: Salt, collection: Collection
) -> Iterator[Finding]:
    origin, figure = determination.origin, determination.figure
    if figure is None:
        yield from _table(determination.table, origin.place("computed", "table"), collection)
        return
    yield from check_figure(figure, origin)
    yield from check_own_figure(figure, origin, determination.note is not None)
    if figure.reaction is not None:
        reaction = read_reaction(figure.reaction, collection, origin, "printed", "reaction")
        if isinstance(reaction, Finding):
            yield reaction
        else:
            place = origin.place("printed", "reaction")
            yield from dissolves_solid(reaction, salt.formula, place)
    if figure.solid_as is not None:
        keys = ("printed", "solid_as")
        named = read_formula(figure.solid_as, collection, origin, *keys)
        if isinstance(named, Finding):
            yield named
            return
        yield from weighable(named, collection, origin, *keys)
        if _anhydrous(named) != _anhydrous_or_none(salt.formula):
            found = f"{figure.solid_as}, which is another salt than {salt.formula}"
            cure = f"write the formula the mass refers to: {salt.formula} with or without its water"
            yield Finding("error", "chem-solid-as", origin.place(*keys), found, cure)


def _anhydrous(formula: Formula) -> dict[str, Any]:
    counts: dict[str, Any] = dict(formula.elements)
    for symbol, each in (("H", 2), ("O", 1)):
        counts[symbol] = counts.get(symbol, 0) - each * formula.water
    return {symbol: n for symbol, n in counts.items() if n}


def _anhydrous_or_none(text: str) -> dict[str, Any] | None:
    try:
        return _anhydrous(parse_formula(text))
    except ValueError:
        return None  # the formula of the salt is a finding of its own


def _law(law: Law, salt: Salt, collection: Collection) -> Iterator[Finding]:
    origin = cast(Origin, law.origin)
    yield from check_law(law, origin)
    named = [("determination",)] if law.determination is not None else []
    keys: list[tuple[str | int, ...]] = [
        *named, *(("determinations", i) for i in range(len(law.determinations)))
    ]  # fmt: skip
    names = [*([law.determination] if law.determination else []), *law.determinations]
    for path, name in zip(keys, names, strict=True):
        if name not in salt.determinations:
            place = origin.place(*path)
            yield _missing("chem-law-anchor", place, "determination", name, salt.determinations)
    if law.table is not None:
        yield from _table(law.table, origin.place("table"), collection)


def _table(table: str | None, place: Place, collection: Collection) -> Iterator[Finding]:
    if table not in collection.formation:
        yield _missing("chem-table", place, "formation table", str(table), collection.formation)


def _missing(code: str, place: Place, what: str, name: str, known: Mapping[str, object]) -> Finding:
    listed = ", ".join(list(known)[:12]) or "none"
    return Finding("error", code, place, f"no {what} {quoted(name)}", f"known: {listed}")
