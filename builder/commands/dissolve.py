"""`dissolve`: how much of a salt dissolves, in which forms and how surely; records for JSON."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import asdict, dataclass, replace
from typing import Any

from builder.collection.answer import Dissolved
from builder.collection.conditions import Conditions
from builder.collection.dissolve import dissolve_textbook, refused
from builder.collection.reference import Reference
from builder.collection.surroundings import dissolve_under
from builder.commands.telling import number
from builder.commands.value import value_at

KEYS = (
    "salt",
    "temperature_c",
    "solubility_mol_per_kg",
    "solubility_mol_per_l",
    "solubility_g_per_l",
    "solubility_g_per_l_anhydrous",
    "forms",
    "ionic_strength",
    "activity_model",
    "ph",
    "standard_uncertainty_log10",
    "textbook_mol_per_kg",
    "state",
    "reason",
    "lower_95",
    "upper_95",
    "metal",
    "metal_mg_per_kg",
    "metal_mg_per_l",
    "budget",
    "other_solids",
    "textbook_factor",
    "ph_held",
    "co2_bar",
    "titrant",
    "titrant_mol_per_kg",
    "formed",
)


@dataclass(frozen=True)
class Answer:
    """The full answer and the textbook's; `shown` is the one that was asked for."""

    shown: Dissolved
    full: Dissolved
    conditions: Conditions

    @property
    def textbook_asked(self) -> bool:
        return self.shown is not self.full

    @property
    def beyond_textbook(self) -> bool:
        """Is anything asked that the textbook's answer does not know?"""
        asked = self.conditions
        return asked.ph is not None or asked.co2_bar is not None or bool(asked.also)

    @property
    def holds(self) -> Conditions:
        """What the answer shown keeps to: the textbook's knows additions only."""
        asked = self.conditions
        return Conditions(asked.additions) if self.textbook_asked else asked


def answer(
    reference: Reference,
    salt_id: str,
    t_celsius: float,
    conditions: Conditions,
    textbook: bool,
) -> Answer:
    """Ask the collection. Refused where it has no constant for a solid that may form."""
    full = dissolve_under(reference, salt_id, t_celsius, conditions)
    for other in conditions.also:
        value = value_at(reference.salts[other], t_celsius)
        if value.log10_k is None and full.state == "computed":
            reason = f"there is no constant for {other}, which may form: {value.reason}"
            simple = full.textbook_mol_per_kg
            full = replace(refused(salt_id, full.constant, reason), textbook_mol_per_kg=simple)
    shown = dissolve_textbook(reference, full, conditions.additions) if textbook else full
    return Answer(shown, full, conditions)


def record(asked: Answer) -> dict[str, Any]:
    """The answer for JSON: every key of KEYS, null where refused.

    lower_95, upper_95 are of solubility_mol_per_kg; a negative solubility is what comes out of a
    solution that is oversaturated as made up. textbook_factor: full answer over the textbook's.
    ph_held, co2_bar: null too in the textbook's answer, which holds neither.
    """
    it = asked.shown
    computed = it.state == "computed"
    low, high = asked.shown.interval or (None, None)

    def rows(items: tuple[Any, ...]) -> list[dict[str, Any]] | None:
        return [_rounded(asdict(item)) for item in items] if computed else None

    return {
        "salt": it.salt,
        "temperature_c": number(it.temperature_c),
        "solubility_mol_per_kg": number(it.solubility_mol_per_kg),
        "solubility_mol_per_l": number(it.solubility_mol_per_l),
        "solubility_g_per_l": number(it.solubility_g_per_l),
        "solubility_g_per_l_anhydrous": number(it.solubility_g_per_l_anhydrous),
        "forms": rows(it.forms),
        "ionic_strength": number(it.ionic_strength),
        "activity_model": it.activity_model or None,
        "ph": number(it.ph),
        "standard_uncertainty_log10": number(it.standard_uncertainty_log10),
        "textbook_mol_per_kg": number(it.textbook_mol_per_kg) if computed else None,
        "state": it.state,
        "reason": it.reason or None,
        "lower_95": number(low),
        "upper_95": number(high),
        "metal": it.metal or None,
        "metal_mg_per_kg": number(it.metal_mg_per_kg),
        "metal_mg_per_l": number(it.metal_mg_per_l),
        "budget": rows(it.budget),
        "other_solids": rows(it.other_solids),
        "textbook_factor": number(asked.full.factor),
        "ph_held": number(asked.holds.ph),
        "co2_bar": number(asked.holds.co2_bar),
        "titrant": it.titrant or None,
        "titrant_mol_per_kg": number(it.titrant_mol_per_kg),
        "formed": rows(it.formed),
    }


def _rounded(item: Mapping[str, Any]) -> dict[str, Any]:
    return {key: number(x) if isinstance(x, float) else x for key, x in item.items()}
