"""The uncertainty budget of a dissolved amount: every constant through the Jacobian."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from builder.chem.activity import coefficients, log10_gamma
from builder.chem.curve import CurveValue, at
from builder.chem.problem import DAVIES, Problem, Solution
from builder.collection.answer import BudgetLine
from builder.collection.mixture import Mixture
from builder.collection.reference import Reference


def budget(
    reference: Reference,
    salt_id: str,
    value: CurveValue,
    mix: Mixture,
    asked: Problem,
    answer: Solution,
) -> tuple[float | None, tuple[BudgetLine, ...]]:
    """u(log10 s) from all constants through the Jacobian, plus the spread of the models.

    The model line is the change of log10 s to first order when the coefficients of the other
    activity model are put in at the same ionic strength, taken as one standard deviation.
    """
    by_hold = float(answer.by_hold[0, 0])
    by_form = [float(x) for x in answer.by_form[0]]
    powers: dict[str, float] = {}
    for name, n in reference.dissolving[salt_id].constants.items():
        powers[name] = powers.get(name, 0.0) - n * by_hold
    for form, slope in zip(mix.forms, by_form, strict=True):
        for name, n in form.made.constants.items():
            powers[name] = powers.get(name, 0.0) + n * slope
    if value.u is None:
        return None, ()
    lines = [("solubility product", by_hold, value.u)]
    for name, slope in powers.items():
        side = at(reference.side_curves[name], value.t_celsius)
        lines.append((name, slope, side.u or 0.0))
    lines.append(("activity model", 1.0, abs(_model_change(asked, answer, by_form))))
    variance = math.fsum((slope * u) ** 2 for _, slope, u in lines)
    budget = [
        BudgetLine(name, slope, u, (slope * u) ** 2 / variance if variance else 0.0)
        for name, slope, u in lines
    ]
    budget.sort(key=lambda line: (-line.share, line.constant))
    return math.sqrt(variance), tuple(line for line in budget if line.share > 1e-4)


def _model_change(asked: Problem, answer: Solution, by_form: Sequence[float]) -> float:
    """First-order change of log10 s when the γ of Davies are put in; 0 where they are used."""
    other = Problem(
        **{
            **{name: getattr(asked, name) for name in asked.__dataclass_fields__},
            "model": np.full_like(asked.model, DAVIES),
        }
    )
    gamma = log10_gamma(*coefficients(other), answer.ionic_strength)[0]
    change = gamma - answer.log10_gamma[0]
    # log10 m_i = ... - log10 γ_i: a larger γ acts like a smaller constant
    return -math.fsum(s * float(d) for s, d in zip(by_form, change, strict=True))
