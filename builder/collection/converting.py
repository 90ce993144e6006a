"""A measured solubility in water as log10 K at zero ionic strength, through the engine.

The dissolved amount is given, no solid holds anything: the engine finds the free ions, their
activities and that of water, and the product of the reaction follows. Only side reactions and
water are used, never a chosen solubility product (contract 7).
"""

from __future__ import annotations

import math
from collections.abc import Mapping

from builder.chem.curve import Curve, at
from builder.chem.equilibrium import solve
from builder.chem.formula import parse_formula
from builder.chem.problem import COMPUTED
from builder.chem.rounding import fixed, significant
from builder.chem.temperature import LN10
from builder.chem.water import density_kg_m3
from builder.chem.weights import molar_mass
from builder.collection.figures import ROUNDING, Reported
from builder.collection.forms import HYDROGEN, Form, Made
from builder.collection.mixture import NotKnownError, mixture, problem
from builder.collection.records import Collection, Determination, Figure, Salt
from builder.collection.shown import Step


def convert_solubility(
    salt: Salt,
    determination: Determination,
    collection: Collection,
    forms: Mapping[str, Form],
    made: Made,
    side_curves: Mapping[str, Curve],
) -> Reported:
    """log10 K of a solubility measured in water; refused, with the reason, in other media."""
    figure = determination.figure
    assert figure is not None  # the caller asks for solubilities only
    t = 25.0 if figure.temperature_c is None else figure.temperature_c

    def refused(reason: str) -> Reported:
        return Reported(determination, t, None, None, 0.0, False, (), reason)

    if figure.temperature_c is None:
        return refused("the source states no temperature")
    if figure.medium != "water":
        return refused(f"measured in {figure.medium}, not in water")
    if not 0.0 <= t <= 100.0:
        return refused("measured outside 0 to 100 °C")
    try:
        mix = mixture(forms, collection, made, (), salt.needs)
    except NotKnownError as unknown:
        return refused(str(unknown))
    m, u_m, first = _molality(salt, figure, collection, t)
    totals = {ion: n * m for ion, n in made.base.items()}
    answer = solve(problem(mix, t, totals, ()))
    if answer.state[0] != COMPUTED:
        return refused("the solution is beyond the limit of the activity model")
    activity = {b: float(answer.ln_activity[0, i]) / LN10 for i, b in enumerate(mix.bases)}
    product = math.fsum(n * activity[ion] for ion, n in made.base.items())
    product += made.water * float(answer.ln_water[0]) / LN10
    constants = math.fsum(n * _value(side_curves[name], t) for name, n in made.constants.items())
    value = product + constants
    free = ", ".join(
        f"log10 a({ion}) = {fixed(activity[ion], 4)}" for ion in made.base if ion != HYDROGEN
    )
    steps = (
        *first,
        Step("ions, pairs and activities from the engine",
             f"ionic strength {significant(float(answer.ionic_strength[0]), 3)} mol/kg", free),
        Step("log10 K of the dissolution", salt.reaction, fixed(value, 4)),
    )  # fmt: skip
    ions = math.fsum(n for ion, n in made.base.items() if ion != HYDROGEN)
    slope = ions / (m * LN10)
    u_model = _model_u(float(answer.ionic_strength[0]))
    stated = None if figure.uncertainty.standard is None else _relative(figure) * ions / LN10
    digits = math.hypot(u_m * slope, u_model)
    return Reported(determination, t, value, stated, digits, abs(t - 25.0) <= 1.0, steps)


def _value(curve: Curve, t: float) -> float:
    value = at(curve, t).log10_k
    return math.nan if value is None else value


def _relative(figure: Figure) -> float:
    return (figure.uncertainty.standard or 0.0) / figure.printed.value


def _model_u(ionic_strength: float) -> float:
    """What the activity model leaves open: 0.03 at I = 0.1 mol/kg, in proportion to its root."""
    return 0.03 * math.sqrt(ionic_strength / 0.1)


def _molality(
    salt: Salt, figure: Figure, collection: Collection, t: float
) -> tuple[float, float, tuple[Step, ...]]:
    """(mol/kg of all water in the solution, its uncertainty from the digits, steps)."""
    x = figure.printed.value
    own = parse_formula(salt.formula)
    named = parse_formula(figure.solid_as) if figure.solid_as else own
    mass = molar_mass(named, collection.weights)[0]
    water = molar_mass(parse_formula("H2O"), collection.weights)[0]
    per_litre = density_kg_m3(t) / 1000.0
    unit = figure.unit
    if unit == "mol/kg":
        m = x
    elif unit == "mol/L":
        m = x / per_litre
    elif unit in ("g/L", "mg/L"):
        m = x * (1.0 if unit == "g/L" else 1e-3) / mass / per_litre
    elif unit == "g/100 mL":
        m = 10.0 * x / mass / per_litre
    else:  # g/100 g water: water of crystallisation that comes along joins the solvent
        moles = 10.0 * x / mass
        crystal = float(named.water) * water / 1000.0
        m = moles / (1.0 + moles * crystal)
    u = m * figure.printed.last_place / ROUNDING / abs(x)
    step = Step(
        "printed solubility as mol per kg of water",
        f"{figure.printed.text} {unit}, molar mass {fixed(mass, 3)} g/mol"
        + (f" of {figure.solid_as}" if figure.solid_as else ""),
        f"{significant(m, 5)} mol/kg",
    )
    return m, u, (Step("printed text read as a number", figure.printed.text, f"{x:g}"), step)


def in_water(determination: Determination) -> bool:
    """A solubility measured in water at a stated temperature between 0 and 100 °C."""
    figure = determination.figure
    return (
        figure is not None
        and figure.quantity == "solubility"
        and figure.medium == "water"
        and figure.temperature_c is not None
        and 0.0 <= figure.temperature_c <= 100.0
    )


def printed_molality(salt: Salt, figure: Figure, collection: Collection) -> float:
    """A printed solubility as mol per kg of all water in the solution."""
    t = 25.0 if figure.temperature_c is None else figure.temperature_c
    return _molality(salt, figure, collection, t)[0]
