"""Under what conditions a question is asked, and the holds of the engine that they mean."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from builder.chem.temperature import combined
from builder.collection.forms import HYDROGEN, Made, add
from builder.collection.mixture import Hold, NotKnownError, hold_law
from builder.collection.reference import Reference

LOWEST_PH, HIGHEST_PH = -1.0, 15.0
ACID, BASE = "HCl", "NaOH"
CARBON_DIOXIDE = "CO2(g)"


@dataclass(frozen=True)
class Conditions:
    """What surrounds the salt.

    additions: (formula of an electrolyte, mol/kg). ph: held at this -log10 a(H^+), the charge
    closed by `acid` or `base`; None for free pH. co2_bar: partial pressure of carbon dioxide over
    the solution in bar of dry gas; None for none at all. also: ids of other salts that may form.
    """

    additions: Sequence[tuple[str, float]] = ()
    ph: float | None = None
    acid: str = ACID
    base: str = BASE
    co2_bar: float | None = None
    also: Sequence[str] = ()


def given(reference: Reference, conditions: Conditions) -> list[tuple[float, Made]]:
    """What was added, in base ions."""
    return [(m, reference.additions[f]) for f, m in conditions.additions if m > 0.0]


def gas_hold(reference: Reference, gas: str, bar: float) -> Hold:
    """A gas at a partial pressure in bar. Raises NotKnownError where it is not recorded."""
    form = reference.gases.get(gas)
    if form is None:
        raise NotKnownError(f"the collection does not hold the solubility of {gas}")
    law = combined([(-1.0, form.law)])
    made = Made(form.made.base, form.made.water, {})
    return Hold(made, (law[0], law[1] + math.log10(bar), *law[2:]), made)


def ph_hold(reference: Reference, ph: float, titrant: str) -> Hold:
    """pH held by a titrant, which is what the hold exchanges with the solution."""
    activity = Made({HYDROGEN: 1.0}, 0.0, {})
    titrated = reference.additions.get(titrant)
    if titrated is None:
        raise NotKnownError(f"{titrant} is not among the electrolytes of the collection")
    return Hold(activity, (298.15, -ph, 0.0, 0.0, 0.0, 0.0, 0.0), titrated)


def solid_hold(reference: Reference, salt_id: str) -> Hold:
    """A solid at saturation. The salt must have a law."""
    curve = reference.salts[salt_id].law.curve
    assert curve is not None  # checked by the callers
    made = reference.dissolving[salt_id]
    return Hold(made, hold_law(curve.law, made, reference.side_laws), made)


def everything_present(
    reference: Reference, conditions: Conditions, titrant: str | None
) -> list[Made]:
    """All that brings ions into the solution, beside the salt itself."""
    made = [part for _, part in given(reference, conditions)]
    if conditions.co2_bar is not None:
        made.append(gas_hold(reference, CARBON_DIOXIDE, conditions.co2_bar).exchange)
    if titrant is not None:
        made.append(reference.additions[titrant])
    return made


def totals(reference: Reference, conditions: Conditions) -> Mapping[str, float]:
    """Amounts of base ions given, mol/kg."""
    return add(given(reference, conditions), {}).base
