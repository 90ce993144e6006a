"""Amounts as people write them: `0.05mol/kg`, `50 mmol/L`, `7.1 g/L`.

A molarity is that of a solution made up at 20 °C (DESIGN: the flask, not the bath). It is turned
into mol per kg of water with the density of water at 20 °C; the volume of the solute itself is
left out, which costs about 2 % at 0.5 mol/L and in proportion below (common practice).
"""

from __future__ import annotations

import re
from collections.abc import Mapping

from builder.chem.water import density_kg_m3

MADE_UP_AT_C = 20.0

# unit -> (mol or g, per kg or per L, factor)
UNITS: Mapping[str, tuple[str, str, float]] = {
    "mol/kg": ("mol", "kg", 1.0),
    "mmol/kg": ("mol", "kg", 1e-3),
    "mol/L": ("mol", "L", 1.0),
    "mmol/L": ("mol", "L", 1e-3),
    "g/kg": ("g", "kg", 1.0),
    "mg/kg": ("g", "kg", 1e-3),
    "g/L": ("g", "L", 1.0),
    "mg/L": ("g", "L", 1e-3),
}
_NUMBER = re.compile(r"\s*([0-9]+(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?)\s*(.*?)\s*", re.ASCII)


class AmountError(ValueError):
    """An amount that does not read; the message says what was found and what would be right."""


def molality(text: str, molar_mass: float) -> float:
    """mol per kg of water of `text`; molar_mass in g/mol. Raises AmountError."""
    if "," in text:
        raise AmountError(f"{text!r} has a comma; write the decimals with a point, as in 0.05")
    match = _NUMBER.fullmatch(text)
    if match is None:
        raise AmountError(f"{text!r} is no amount; write a number and a unit, as in 0.05mol/kg")
    number, unit = float(match[1]), match[2]
    if unit not in UNITS:
        units = ", ".join(UNITS)
        found = "has no unit" if not unit else f"has the unit {unit!r}"
        raise AmountError(f"{text!r} {found}; write one of {units}")
    kind, per, factor = UNITS[unit]
    amount = number * factor / (1.0 if kind == "mol" else molar_mass)
    if amount > 20.0:
        raise AmountError(f"{text!r} is more than water can hold; the models end at 0.5 mol/kg")
    return amount if per == "kg" else amount / (density_kg_m3(MADE_UP_AT_C) / 1000.0)
