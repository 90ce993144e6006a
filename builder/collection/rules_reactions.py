"""Rules for formulae and reactions: ions, side reactions, statements of no pairs, electrolytes."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from fractions import Fraction

from builder.chem.curve import Curve
from builder.chem.formula import Formula, FormulaError, parse_formula
from builder.chem.reaction import Reaction, imbalance, parse_reaction, stoichiometry
from builder.chem.weights import MissingWeightError, molar_mass
from builder.collection.forms import HYDROGEN, HYDROXIDE, WATER, FormsError, dissolved_forms
from builder.collection.records import Collection, Electrolyte, NoPairs, Origin, SideReaction
from builder.read.findings import Finding, Level, Place, quoted

CODES: Mapping[str, Level] = {
    "chem-formula": "error",
    "chem-spelling": "error",
    "chem-molar-mass": "error",
    "chem-reaction": "error",
    "chem-balance": "error",
    "chem-solid": "error",
    "chem-unknown-form": "error",
    "chem-forms": "error",
    "chem-form-twice": "error",
    "chem-form-circle": "error",
    "chem-water-law": "error",
    "chem-water-missing": "error",
    "chem-side-quantity": "error",
}

# Bounds on hostile records, far above any real one: the arithmetic must not overflow.
MOST_ATOMS = 10_000
MOST_TIMES = 100
WATER_IONISATION = {WATER: Fraction(-1), HYDROGEN: Fraction(1), HYDROXIDE: Fraction(1)}


def known_forms(collection: Collection) -> frozenset[str]:
    """Ions, what side reactions form, and water."""
    formed = (r.forms for r in collection.side_reactions.values())
    return frozenset((*collection.ions, *formed, WATER))


def inside(collection: Collection, origin: Origin, column: int, *keys: str | int) -> Place:
    """The place of a column (from 1) of a text; of the text itself where it spans lines."""
    place = origin.place(*keys)
    lines = collection.files[place.file].decode("utf-8").split("\n")
    line = lines[place.line - 1]
    quotes = 1 if line[place.column - 1] in "\"'" else 0
    at = place.column + quotes + column - 1
    return Place(place.file, place.line, at) if at <= len(line) else place


def read_formula(
    text: str, collection: Collection, origin: Origin, *keys: str | int
) -> Formula | Finding:
    """The formula, or why it is none or not in the one spelling that records are found by."""
    try:
        formula = parse_formula(text)
    except FormulaError as wrong:
        place = inside(collection, origin, wrong.column, *keys)
        return Finding("error", "chem-formula", place, wrong.found, wrong.cure)
    place = origin.place(*keys)
    if any(count > MOST_ATOMS for _, count in formula.elements):
        cure = f"write a formula with at most {MOST_ATOMS} atoms of an element"
        return Finding("error", "chem-formula", place, quoted(text), cure)
    if formula.canonical != text:
        cure = f"write {formula.canonical}: records find one another by this spelling"
        return Finding("error", "chem-spelling", place, f"the spelling {quoted(text)}", cure)
    return formula


def weighable(
    formula: Formula, collection: Collection, origin: Origin, *keys: str | int
) -> Iterator[Finding]:
    try:
        molar_mass(formula, collection.weights)
    except MissingWeightError as wrong:
        yield Finding(
            "error",
            "chem-molar-mass",
            origin.place(*keys),
            str(wrong),
            f"add the standard atomic weight of {wrong.symbol}, or leave the record out",
        )


def read_reaction(
    text: str, collection: Collection, origin: Origin, *keys: str | int
) -> Reaction | Finding:
    """The reaction, balanced in elements and charge, or what is wrong with it."""
    try:
        reaction = parse_reaction(text)
        excess = imbalance(reaction)
    except FormulaError as wrong:
        place = inside(collection, origin, wrong.column, *keys)
        return Finding("error", "chem-reaction", place, wrong.found, wrong.cure)
    place = origin.place(*keys)
    if excess:
        words = ", ".join(f"{name} {'+' if n > 0 else ''}{n}" for name, n in excess.items())
        found = f"a reaction that does not balance, right minus left: {words}"
        return Finding("error", "chem-balance", place, found, "mend coefficients or charges")
    if any(n > MOST_TIMES for n, _ in (*reaction.left, *reaction.right)):
        cure = f"write coefficients of at most {MOST_TIMES}"
        return Finding("error", "chem-reaction", place, "a coefficient this large", cure)
    return reaction


def unknown_forms(
    reaction: Reaction, known: frozenset[str], place: Place, besides: str = ""
) -> Iterator[Finding]:
    """Every formula of the reaction but the solid is an ion, water or formed somewhere."""
    for formula in dict.fromkeys(f for _, f in (*reaction.left, *reaction.right)):
        if formula != besides and formula not in known:
            yield unknown_form(formula, place)


def unknown_form(formula: str, place: Place) -> Finding:
    cure = "add it to the ions or as the form of a side reaction, or write the one that is meant"
    found = f"{quoted(formula)}, which is neither an ion nor formed by a side reaction"
    return Finding("error", "chem-unknown-form", place, found, cure)


def dissolves_solid(reaction: Reaction, solid: str, place: Place) -> Iterator[Finding]:
    """One formula unit of the solid is used up, and stands on the left."""
    if stoichiometry(reaction).get(solid) != -1 or reaction.left[0] != (Fraction(1), solid):
        found = f"a reaction that does not dissolve one {solid}"
        yield Finding("error", "chem-solid", place, found, f"begin with {solid} on the left side")


def check_reactions(collection: Collection) -> list[Finding]:
    """Everything about ions, side reactions and electrolytes."""
    findings: list[Finding] = []
    known = known_forms(collection)
    for ion in collection.ions.values():
        formula = read_formula(ion.formula, collection, ion.origin, "formula")
        findings += [formula] if isinstance(formula, Finding) else []
    for table in collection.formation.values():
        for i, of in enumerate(table.entries):
            formula = read_formula(of, collection, table.origin, "entries", i, "of")
            findings += [formula] if isinstance(formula, Finding) else []
    makers: dict[str, SideReaction] = {}
    for reaction in collection.side_reactions.values():
        findings += _side(reaction, known, collection)
        first = makers.setdefault(reaction.forms, reaction)
        if first is not reaction:
            found = f"{reaction.forms}, which {first.id} forms already"
            cure = "keep one of the two: a form has one constant"
            place = reaction.origin.place("forms")
            findings.append(Finding("error", "chem-form-twice", place, found, cure))
    for statement in collection.no_pairs.values():
        findings += _no_pairs(statement, known)
    for electrolyte in collection.electrolytes.values():
        findings += _electrolyte(electrolyte, known, collection)
    findings += _water(collection, makers)
    return findings or _circles(collection)


def _side(side: SideReaction, known: frozenset[str], collection: Collection) -> Iterator[Finding]:
    origin = side.origin
    form = read_formula(side.forms, collection, origin, "forms")
    if isinstance(form, Finding):
        yield form
    if side.figure.quantity not in ("log10-k", "gibbs-energy"):
        yield Finding(
            "error",
            "chem-side-quantity",
            origin.place("printed", "quantity"),
            f"the quantity {side.figure.quantity} of a side reaction",
            "write log10-k or gibbs-energy: the others are quantities of a solid",
        )
    reaction = read_reaction(side.reaction, collection, origin, "reaction")
    if isinstance(reaction, Finding):
        yield reaction
        return
    place = origin.place("reaction")
    yield from unknown_forms(reaction, known, place)
    net = stoichiometry(reaction)
    if side.forms not in net or side.forms == HYDROGEN:
        found = f"{quoted(side.forms)}, which this reaction does not form"
        cure = (
            "name the dissolved form on the side of the products, or of an acid that gives up H^+"
        )
        yield Finding("error", "chem-forms", origin.place("forms"), found, cure)
    if side.law.kind == "water" and net != WATER_IONISATION:
        found = "the law of the ionisation of water at another reaction"
        cure = "write kind: enthalpy, heat-capacity or expression"
        yield Finding("error", "chem-water-law", origin.place("law", "kind"), found, cure)


def _no_pairs(statement: NoPairs, known: frozenset[str]) -> Iterator[Finding]:
    for key, ions in (("cations", statement.cations), ("anions", statement.anions)):
        for i, ion in enumerate(ions):
            if ion not in known:
                yield unknown_form(ion, statement.origin.place(key, i))


def _electrolyte(
    electrolyte: Electrolyte, known: frozenset[str], collection: Collection
) -> Iterator[Finding]:
    origin = electrolyte.origin
    formula = read_formula(electrolyte.formula, collection, origin, "formula")
    if isinstance(formula, Finding):
        yield formula
    else:
        yield from weighable(formula, collection, origin, "formula")
    reaction = read_reaction(electrolyte.dissolves, collection, origin, "dissolves")
    if isinstance(reaction, Finding):
        yield reaction
        return
    place = origin.place("dissolves")
    yield from dissolves_solid(reaction, electrolyte.formula, place)
    yield from unknown_forms(reaction, known, place, electrolyte.formula)


def _water(collection: Collection, makers: Mapping[str, SideReaction]) -> Iterator[Finding]:
    """Every answer holds water: H^+ an ion of its own, OH^- formed from water."""
    if not collection.salts or (HYDROGEN in collection.ions and HYDROXIDE in makers):
        return
    first = next(iter(collection.salts.values()))
    yield Finding(
        "error",
        "chem-water-missing",
        first.origin.place("reaction"),
        f"a salt, but no ion {HYDROGEN} or no side reaction that forms {HYDROXIDE}",
        f"add {HYDROGEN} to the ions and {WATER} = {HYDROGEN} + {HYDROXIDE} to the side reactions",
    )


def _circles(collection: Collection) -> list[Finding]:
    """Every form is reduced to base ions; asked only when all reactions are sound by themselves."""
    any_law = Curve((298.15, *[0.0] * 6), None, (0.0, 100.0), 0.0, thermodynamic=False)
    try:
        dissolved_forms(collection, dict.fromkeys(collection.side_reactions, any_law))
    except FormsError as wrong:
        place = wrong.side_reaction.origin.place("reaction")
        cure = "write the reaction from ions that no other reaction forms"
        return [Finding("error", "chem-form-circle", place, wrong.found, cure)]
    return []
