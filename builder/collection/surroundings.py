"""How much dissolves at a held pH, under carbon dioxide, or when other solids may form.

Held pH: the hydrogen ion's activity is a hold; what it exchanges is a named acid or base, and the
one that comes out with a positive amount is the answer. Other solids: a solid forms when the
solution is supersaturated with it and goes when it would dissolve, until neither happens
(complementarity).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from builder.chem.equilibrium import solve
from builder.chem.problem import COMPUTED
from builder.collection.answer import Dissolved, Formed
from builder.collection.conditions import (
    CARBON_DIOXIDE,
    HIGHEST_PH,
    LOWEST_PH,
    Conditions,
    everything_present,
    gas_hold,
    ph_hold,
    solid_hold,
    totals,
)
from builder.collection.dissolve import computed, dissolve, refused, unsolved
from builder.collection.mixture import Hold, NotKnownError, mixture, problem
from builder.collection.reference import Reference

ROUNDS = 12  # solids coming and going; more means that they chase each other
SUPERSATURATED = 1e-9  # log10


def dissolve_under(
    reference: Reference, salt_id: str, t_celsius: float, conditions: Conditions
) -> Dissolved:
    """Solubility of a salt under conditions; refused in words where it can not be answered."""
    plain = conditions.ph is None and conditions.co2_bar is None and not conditions.also
    free = dissolve(reference, salt_id, t_celsius, conditions.additions)
    if plain or free.constant.log10_k is None:
        return free
    if conditions.ph is not None and not LOWEST_PH <= conditions.ph <= HIGHEST_PH:
        reason = f"pH {conditions.ph:g} is outside {LOWEST_PH:g} to {HIGHEST_PH:g}"
        return refused(salt_id, free.constant, reason)
    titrants: Sequence[str | None] = (None,)
    if conditions.ph is not None:
        titrants = (conditions.acid, conditions.base)
    answer = free
    for titrant in titrants:
        try:
            answer = _closed_by(reference, salt_id, free, conditions, titrant)
        except NotKnownError as unknown:
            return refused(salt_id, free.constant, str(unknown))
        if answer.state == "computed" and (
            titrant is None or (answer.titrant_mol_per_kg or 0) >= 0
        ):
            return answer
    if answer.state == "computed":
        reason = f"neither {conditions.acid} nor {conditions.base} closes the charge at this pH"
        return refused(salt_id, free.constant, reason)
    return answer


def _closed_by(
    reference: Reference,
    salt_id: str,
    free: Dissolved,
    conditions: Conditions,
    titrant: str | None,
) -> Dissolved:
    """The answer with one titrant (or none); its amount may come out negative."""
    t = free.temperature_c
    needs = reference.salts[salt_id].salt.needs
    present = everything_present(reference, conditions, titrant)
    # a solid that may form brings no ion of its own: what is not there can not precipitate
    mix = mixture(
        reference.forms, reference.collection, reference.dissolving[salt_id], present, needs
    )
    possible = [
        other for other in conditions.also
        if other != salt_id and set(reference.dissolving[other].base) <= set(mix.bases)
    ]  # fmt: skip
    fixed = [solid_hold(reference, salt_id)]
    if titrant is not None and conditions.ph is not None:
        fixed.append(ph_hold(reference, conditions.ph, titrant))
    if conditions.co2_bar is not None:
        fixed.append(gas_hold(reference, CARBON_DIOXIDE, conditions.co2_bar))
    formed: list[str] = []
    for _ in range(ROUNDS):
        holds = fixed + [solid_hold(reference, other) for other in formed]
        _refuse_dependent(holds, mix.bases, formed)
        asked = problem(mix, t, totals(reference, conditions), holds)
        answer = solve(asked)
        if answer.state[0] != COMPUTED:
            return unsolved(
                salt_id, free.constant, mix, int(answer.state[0]), free.textbook_mol_per_kg
            )
        amounts = [float(s) for s in answer.amount[0]]
        came = dict(zip(formed, amounts[len(fixed) :], strict=True))
        leaving = [other for other, s in came.items() if s > 0.0]
        if leaving:
            formed.remove(max(leaving, key=lambda other: came[other]))
            continue
        full = computed(
            reference, salt_id, free.constant, mix, asked, answer, free.textbook_mol_per_kg
        )
        entering = [
            o for o in full.other_solids
            if o.salt in possible and o.salt not in formed
            and o.saturation_index > SUPERSATURATED
        ]  # fmt: skip
        if entering:
            formed.append(max(entering, key=lambda o: o.saturation_index).salt)
            continue
        return replace(
            full,
            titrant=titrant or "",
            titrant_mol_per_kg=amounts[1] if titrant is not None else None,
            formed=tuple(Formed(other, -s) for other, s in came.items()),
            other_solids=tuple(o for o in full.other_solids if o.salt not in formed),
        )
    return refused(salt_id, free.constant, "the solids that may form chase each other")


def _refuse_dependent(holds: Sequence[Hold], bases: Sequence[str], formed: Sequence[str]) -> None:
    """Two solids of one composition can not both last: the one turns into the other."""
    rows = np.array([[h.made.base.get(b, 0.0) for b in bases] for h in holds])
    if len(holds) > 1 and np.linalg.matrix_rank(rows) < len(holds):
        raise NotKnownError(
            f"the solid would turn wholly into {formed[-1]} here: ask for that solid instead"
        )
