"""The reference: the collection with everything that is computed once, in stages (contract 7).

read -> base constants (side reactions, water) -> engine -> convert measured solubilities ->
choose -> fit. Pages and commands ask this record and compute nothing themselves.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace

from builder.chem.curve import Curve
from builder.chem.formula import parse_formula
from builder.chem.reaction import parse_reaction, stoichiometry
from builder.chem.rounding import ten_digits
from builder.chem.weights import molar_mass
from builder.collection.choice import Evaluated, evaluate
from builder.collection.converting import convert_solubility
from builder.collection.figures import Reported, read_figure, side_log10_k
from builder.collection.forms import Form, Made, dissolution, dissolved_forms
from builder.collection.laws import side_curve, water_curve
from builder.collection.records import Collection, Salt, SideReaction

GAS = "(g)"
LOG10_BAR_PER_ATM = math.log10(1.01325)


@dataclass(frozen=True)
class Reference:
    """All that is asked of the collection.

    side_curves, side_laws: by side reaction id. forms: dissolved forms by formula. gases: likewise,
    their activity is the partial pressure in bar. dissolving: the product of base ions of every
    salt, ions: which they are. additions: what an electrolyte gives, in base ions.
    """

    collection: Collection
    side_curves: Mapping[str, Curve]
    forms: Mapping[str, Form]
    gases: Mapping[str, Form]
    dissolving: Mapping[str, Made]
    ions: Mapping[str, frozenset[str]]
    side_laws: Mapping[str, tuple[float, ...]]
    additions: Mapping[str, Made]
    salts: Mapping[str, Evaluated]

    def molar_mass(self, formula: str) -> float:
        """g/mol."""
        return molar_mass(parse_formula(formula), self.collection.weights)[0]


def build_reference(
    collection: Collection, without: Mapping[str, frozenset[str]] | None = None
) -> Reference:
    """Compute the reference of a collection without errors.

    without: salt id -> determinations held out. Raises what the rules report as findings
    (collection/rules.py) for a collection that was not inspected.
    """
    side_curves = base_curves(collection)
    everything = dissolved_forms(collection, side_curves)
    gases = {name: form for name, form in everything.items() if name.endswith(GAS)}
    forms = {name: form for name, form in everything.items() if name not in gases}
    dissolving = {
        salt.id: dissolution(parse_reaction(salt.reaction), salt.formula, forms)
        for salt in collection.salts.values()
    }
    additions = {
        e.formula: dissolution(parse_reaction(e.dissolves), e.formula, forms)
        for e in collection.electrolytes.values()
    }
    held_out = without or {}
    salts: dict[str, Evaluated] = {}
    for salt in collection.salts.values():
        reported = report(salt, collection, forms, dissolving[salt.id], side_curves)
        salts[salt.id] = evaluate(salt, reported, collection, held_out.get(salt.id, frozenset()))
    return Reference(
        collection=collection,
        side_curves=side_curves,
        forms=forms,
        gases=gases,
        dissolving=dissolving,
        ions={salt_id: frozenset(made.base) for salt_id, made in dissolving.items()},
        side_laws={name: curve.law for name, curve in side_curves.items()},
        additions=additions,
        salts=salts,
    )


def base_curves(collection: Collection) -> dict[str, Curve]:
    """Curves of all side reactions, water among them."""
    curves: dict[str, Curve] = {}
    for reaction in collection.side_reactions.values():
        value, digits, t = side_log10_k(reaction)
        curve = side_curve(reaction, value, digits, t)
        curves[reaction.id] = _per_bar(reaction, curve) if reaction.gas_per == "atm" else curve
    return curves


def _per_bar(reaction: SideReaction, curve: Curve) -> Curve:
    """A constant printed for pressures in atmospheres turned to bar, 1 atm = 1.01325 bar."""
    net = stoichiometry(parse_reaction(reaction.reaction))
    gas = float(sum(n for formula, n in net.items() if formula.endswith(GAS)))
    law = curve.law
    return replace(curve, law=(law[0], ten_digits(law[1] + gas * LOG10_BAR_PER_ATM), *law[2:]))


def report(
    salt: Salt,
    collection: Collection,
    forms: Mapping[str, Form],
    made: Made,
    side_curves: Mapping[str, Curve],
) -> dict[str, Reported]:
    """Every determination as log10 K, measured solubilities through the engine."""
    water = water_curve()
    out: dict[str, Reported] = {}
    for determination in salt.determinations.values():
        figure = determination.figure
        if figure is not None and figure.quantity == "solubility":
            out[determination.id] = convert_solubility(
                salt, determination, collection, forms, made, side_curves
            )
        else:
            out[determination.id] = read_figure(salt, determination, collection, water)
    return out
