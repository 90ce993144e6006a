"""Dissolved forms written in base ions: what the engine's arrays are made from.

A base ion is an ion that no side reaction makes. Every other dissolved form is reduced to base
ions and water by its side reaction, and the laws are combined accordingly.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from builder.chem.activity import ASSIGNED_SIZE, NEUTRAL_LINEAR
from builder.chem.curve import Curve
from builder.chem.formula import parse_formula
from builder.chem.reaction import Reaction, parse_reaction, stoichiometry
from builder.chem.temperature import combined
from builder.collection.records import Collection, SideReaction

HYDROGEN = "H^+"
HYDROXIDE = "OH^-"
WATER = "H2O"


@dataclass(frozen=True)
class Made:
    """A sum of base ions, water and constants: Π a_base^n · a_w^n · Π K^n."""

    base: Mapping[str, float]
    water: float
    constants: Mapping[str, float]  # side reaction id -> power


@dataclass(frozen=True)
class Form:
    """One dissolved form. size is None for an ion without one (Davies then)."""

    formula: str
    charge: int
    made: Made
    law: tuple[float, ...]  # of its formation from base ions, log10
    size: float | None
    linear: float
    size_note: str


class FormsError(Exception):
    """A side reaction that can not be reduced to base ions."""

    def __init__(self, side_reaction: SideReaction, found: str) -> None:
        super().__init__(found)
        self.side_reaction = side_reaction
        self.found = found


def dissolved_forms(collection: Collection, side_curves: Mapping[str, Curve]) -> dict[str, Form]:
    """All dissolved forms by formula, base ions first, both in the order of the collection.

    Raises FormsError for a reaction that forms nothing new, or in a circle.
    """
    by_form = {r.forms: r for r in collection.side_reactions.values()}
    made: dict[str, Made] = {
        f: Made({f: 1.0}, 0.0, {}) for f in collection.ions if f not in by_form
    }

    def reduce(formula: str, reaction: SideReaction, above: tuple[str, ...]) -> Made:
        if formula in made:
            return made[formula]
        if formula in above:
            raise FormsError(reaction, f"{formula}, which is made from itself in a circle")
        own = by_form.get(formula)
        if own is None:
            raise FormsError(reaction, f"{formula}, which is neither an ion nor formed anywhere")
        net = {f: float(n) for f, n in stoichiometry(parse_reaction(own.reaction)).items()}
        times = net.pop(formula, 0.0)
        if times == 0.0:
            raise FormsError(own, f"a reaction in which {formula} does not appear")
        parts = [(-n / times, f) for f, n in net.items()]
        result = add(
            [(n, water_or(f, own, (*above, formula))) for n, f in parts], {own.id: 1.0 / times}
        )
        made[formula] = result
        return result

    def water_or(formula: str, reaction: SideReaction, above: tuple[str, ...]) -> Made:
        return Made({}, 1.0, {}) if formula == WATER else reduce(formula, reaction, above)

    for formula, reaction in by_form.items():
        reduce(formula, reaction, ())
    return {f: _form(f, m, collection, side_curves) for f, m in made.items()}


def add(parts: list[tuple[float, Made]], constants: Mapping[str, float]) -> Made:
    """Σ n · part, with further constants."""
    base: dict[str, float] = {}
    powers: dict[str, float] = dict(constants)
    water = 0.0
    for n, part in parts:
        water += n * part.water
        for ion, times in part.base.items():
            base[ion] = base.get(ion, 0.0) + n * times
        for name, times in part.constants.items():
            powers[name] = powers.get(name, 0.0) + n * times
    return Made(
        {ion: n for ion, n in base.items() if n}, water, {k: n for k, n in powers.items() if n}
    )


def _form(
    formula: str, made: Made, collection: Collection, side_curves: Mapping[str, Curve]
) -> Form:
    charge = parse_formula(formula).charge
    law = combined([(n, side_curves[name].law) for name, n in made.constants.items()])
    ion = collection.ions.get(formula)
    if ion is not None:
        note = ion.size_citation.source
        return Form(formula, charge, made, law, ion.size_angstrom, ion.linear, note)
    if charge == 0:
        return Form(formula, 0, made, law, 0.0, NEUTRAL_LINEAR, "neutral: 10^(0.1 I)")
    size = ASSIGNED_SIZE.get(abs(charge), 5.0)
    return Form(formula, charge, made, law, size, 0.0, "assigned by charge")


def dissolution(reaction: Reaction, solid: str, forms: Mapping[str, Form]) -> Made:
    """The dissolution of a salt as a product of base-ion activities.

    The law of the solubility product of the base ions is then that of the salt minus that of the
    constants named here (a hydroxide: Mg(OH)2 = Mg^2+ + 2 OH^-, OH^- = H2O - H^+).
    Raises KeyError for an ion the collection does not know.
    """
    net = {f: float(n) for f, n in stoichiometry(reaction).items()}
    net.pop(solid, None)
    parts = [(n, Made({}, 1.0, {}) if f == WATER else forms[f].made) for f, n in net.items()]
    return add(parts, {})
