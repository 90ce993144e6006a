"""`dissolve`: how much of a salt dissolves, in which forms and how surely; records for JSON."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import asdict, dataclass
from typing import Any

from builder.collection.answer import Dissolved
from builder.collection.dissolve import dissolve, dissolve_textbook
from builder.collection.reference import Reference
from builder.commands.telling import number

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
)


@dataclass(frozen=True)
class Answer:
    """The full answer and the textbook's; `shown` is the one that was asked for."""

    shown: Dissolved
    full: Dissolved
    additions: Mapping[str, float]

    @property
    def textbook_asked(self) -> bool:
        return self.shown is not self.full


def answer(
    reference: Reference,
    salt_id: str,
    t_celsius: float,
    additions: Mapping[str, float],
    textbook: bool,
) -> Answer:
    """Ask the collection; additions in mol/kg by electrolyte."""
    given = list(additions.items())
    full = dissolve(reference, salt_id, t_celsius, given)
    shown = dissolve_textbook(reference, full, given) if textbook else full
    return Answer(shown, full, additions)


def record(asked: Answer) -> dict[str, Any]:
    """The answer for JSON: every key of KEYS, null where refused.

    lower_95, upper_95 are of solubility_mol_per_kg; a negative solubility is what comes out of a
    solution that is oversaturated as made up. textbook_factor: full answer over the textbook's.
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
    }


def _rounded(item: Mapping[str, Any]) -> dict[str, Any]:
    return {key: number(x) if isinstance(x, float) else x for key, x in item.items()}
