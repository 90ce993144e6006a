"""What a sheet carries for its own calculator: the numbers of one salt, JSON for the page engine.

The forms are those that the salt's ions and the ions of every listed electrolyte can make; the
page picks from them exactly as `collection/mixture.py` does. Floats have ten digits at most.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from builder.chem.curve import Curve
from builder.chem.formula import parse_formula
from builder.chem.rounding import ten_digits
from builder.collection.dissolve import metal_of
from builder.collection.forms import HYDROGEN, Form, Made
from builder.collection.mixture import (
    LIMIT,
    LIMIT_HIGH_CHARGE,
    LIMIT_TWO_TWO,
    hold_law,
    pair_words,
    unknown_pairs,
)
from builder.collection.reference import Reference

# Ions of the electrolytes that every sheet offers; beside them those that share an ion with the
# salt. The command line takes every electrolyte of the collection.
BACKGROUND = frozenset(
    ("H^+", "Na^+", "K^+", "NH4^+", "Mg^2+", "Ca^2+",
     "Cl^-", "NO3^-", "ClO4^-", "SO4^2-", "CO3^2-", "CH3COO^-")
)  # fmt: skip


def curve_json(curve: Curve) -> dict[str, Any]:
    """A curve in the form of templates/curve.js."""
    return {
        "law": [ten_digits(x) for x in curve.law],
        "covariance": None
        if curve.covariance is None
        else [[ten_digits(x) for x in row] for row in curve.covariance],
        "range_c": list(curve.range_c),
        "carries_k": curve.carries_k,
        "thermodynamic": curve.thermodynamic,
        "flat": ten_digits(curve.flat),
        "coverage_factor": curve.coverage_factor,
    }


def side_json(curve: Curve) -> dict[str, Any]:
    """A side reaction's curve, short: its terms are independent and it holds at 0 to 100 °C."""
    variance = [] if curve.covariance is None else [curve.covariance[j][j] for j in range(3)]
    return {"law": _short(curve.law), "variance": _short(variance), "flat": curve.flat}


def _short(numbers: Sequence[float]) -> list[float]:
    """Ten digits at most, and no zeros at the end; the page fills them up again."""
    out = [_whole(ten_digits(x)) for x in numbers]
    while out and out[-1] == 0:
        out.pop()
    return out


def _whole(x: float) -> float:
    """7.0 travels as 7."""
    return int(x) if x == int(x) else x


def _made(made: Made) -> dict[str, Any]:
    return {
        "base": {ion: _whole(n) for ion, n in made.base.items()},
        "water": _whole(made.water),
        "constants": {name: _whole(n) for name, n in made.constants.items()},
    }


def _form(form: Form) -> dict[str, Any]:
    return {
        "form": form.formula,
        "charge": form.charge,
        **_made(form.made),
        "law": _short(form.law),
        "size": form.size,
        "linear": form.linear,
    }


def sheet_payload(reference: Reference, salt_id: str) -> dict[str, Any]:
    """Everything the sheet's answers rest on. Empty of the engine's part where no law holds."""
    evaluated = reference.salts[salt_id]
    salt = evaluated.salt
    solid = reference.dissolving[salt_id]
    curve = evaluated.law.curve
    if curve is None:
        return {"salt": salt_id, "refused": evaluated.refused}
    offered = [
        e for e in reference.collection.electrolytes.values()
        if set(reference.additions[e.formula].base) <= BACKGROUND | set(solid.base)
    ]  # fmt: skip
    ions = {HYDROGEN, *solid.base}
    for electrolyte in offered:
        ions |= set(reference.additions[electrolyte.formula].base)
    forms = [f for f in reference.forms.values() if set(f.made.base) <= ions]
    used = {name for f in forms for name in f.made.constants} | set(solid.constants)
    mass = reference.molar_mass(salt.formula)
    water = float(parse_formula(salt.formula).water) * reference.molar_mass("H2O")
    metal = metal_of(reference, salt_id)
    return {
        "salt": salt_id,
        "formula": salt.formula,
        "molar_mass": ten_digits(mass),
        "molar_mass_anhydrous": ten_digits(mass - water),
        "metal": metal,
        "metal_molar_mass": ten_digits(reference.molar_mass(metal)),
        "missing": [f for f in salt.needs if f not in reference.forms],
        "curve": curve_json(curve),
        "solid": {**_made(solid), "law": _short(hold_law(curve.law, solid, reference.side_laws))},
        "forms": [_form(f) for f in forms],
        "side": {
            name: side_json(side)
            for name, side in reference.side_curves.items()
            if name in used
        },
        "electrolytes": [
            {
                "formula": e.formula,
                "name": e.name,
                "base": _made(reference.additions[e.formula])["base"],
                "molar_mass": ten_digits(reference.molar_mass(e.formula)),
            }
            for e in offered
        ],
        "unknown": [
            [*pair, pair_words(*pair)]
            for pair in unknown_pairs([i for i in reference.forms if i in ions], forms,
                                      reference.collection)
        ],
        "limits": {"usual": LIMIT, "two_two": LIMIT_TWO_TWO, "high_charge": LIMIT_HIGH_CHARGE},
        "others": _others(reference, salt_id, ions),
    }  # fmt: skip


def _others(
    reference: Reference,
    salt_id: str,
    ions: set[str],
) -> list[dict[str, Any]]:
    """Other solids of the collection that the ions here could form."""
    out: list[dict[str, Any]] = []
    for other_id, evaluated in reference.salts.items():
        made = reference.dissolving[other_id]
        curve = evaluated.law.curve
        if other_id == salt_id or curve is None or not reference.ions[other_id] <= ions:
            continue
        law = hold_law(curve.law, made, reference.side_laws)
        out.append(
            {
                "salt": other_id,
                "name": evaluated.salt.name,
                "base": _made(made)["base"],
                "water": _whole(made.water),
                "law": _short(law),
                "range_c": [
                    max(0.0, curve.range_c[0] - curve.carries_k),
                    min(100.0, curve.range_c[1] + curve.carries_k),
                ],
            }
        )
    return out
