"""What must hold for every answer of the engine, whatever the constants."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from builder.chem.equilibrium import solve
from builder.chem.problem import (
    BEYOND_LIMIT,
    COMPUTED,
    NO_SOLUTION,
    Solution,
    single,
    stack,
)

NONE = [298.15, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0]
PROTON, CATION, ANION, SODIUM, CHLORIDE = range(5)


def constant(log10_k: float) -> list[float]:
    return [298.15, log10_k, 0.0, 0.0, 0.0, 0.0, 0.0]


def salt(
    z_cation: int = 2,
    z_anion: int = -2,
    log10_k: float = -8.0,
    *,
    model: int = 1,
    t_celsius: float = 25.0,
    pair: float | None = None,
    protonation: float | None = None,
    hydrolysis: float | None = None,
    inert: float = 0.0,
    common: float = 0.0,
    enthalpy_term: float = 0.0,
) -> dict[str, Any]:
    """A solid in water with an inert 1:1 electrolyte and the sodium salt of its anion, mol/kg."""
    common_divisor = int(np.gcd(z_cation, -z_anion))
    a, b = -z_anion // common_divisor, z_cation // common_divisor
    charges = [1, z_cation, z_anion, 1, -1]
    rows = np.eye(5, dtype=int).tolist()
    laws = [NONE] * 5
    water = [0] * 5
    extra: list[tuple[list[int], int, float | None]] = [
        ([-1, 0, 0, 0, 0], 1, -14.0),
        ([0, 1, 1, 0, 0], 0, pair),
        ([1, 0, 1, 0, 0], 0, protonation),
        ([-1, 1, 0, 0, 0], 1, hydrolysis),
    ]
    for row, w, k in extra:
        if k is not None:
            rows.append(row)
            water.append(w)
            laws.append(constant(k))
    charge = [int(np.dot(row, charges)) for row in rows]
    law = constant(log10_k)
    law[2] = enthalpy_term
    return {
        "t_celsius": t_celsius,
        "model": model,
        "limit": 0.5,
        "stoichiometry": rows,
        "water": water,
        "charge": charge,
        "law": laws,
        "size": [4.5 if z else 0.0 for z in charge],
        "linear": [0.0] * len(charge),
        # an ion that is not there would have ln a = -infinity
        "total": [0.0, 0.0, common, max(inert - z_anion * common, 1e-30), max(inert, 1e-30)],
        "hold": [[0, a, b, 0, 0]],
        "hold_water": [0],
        "hold_law": [law],
        "exchange": [[0, a, b, 0, 0]],
    }


def dissolved(**asked: Any) -> float:
    solution = solve(single(salt(**asked)))
    assert solution.state[0] == COMPUTED
    return float(solution.amount[0, 0])


# ---- closed forms


@pytest.mark.parametrize(
    ("z_cation", "z_anion", "factor", "root"),
    [(1, -1, 1.0, 2), (2, -2, 1.0, 2), (2, -1, 4.0, 3), (1, -2, 4.0, 3), (3, -2, 108.0, 5)],
)
def test_ideal_solid_of_two_ions(z_cation: int, z_anion: int, factor: float, root: int) -> None:
    """K = a^a b^b s^(a+b): s = K^(1/2), (K/4)^(1/3), (K/108)^(1/5)."""
    for log10_k in (-5.0, -9.3, -17.0, -30.0):
        expected = (10.0**log10_k / factor) ** (1.0 / root)
        found = dissolved(z_cation=z_cation, z_anion=z_anion, log10_k=log10_k, model=0)
        assert found == pytest.approx(expected, rel=1e-11)


def test_ideal_pair_adds_its_constant_times_the_product() -> None:
    """s = √K + K·K_pair where nothing else reacts."""
    expected = 1e-4 + 1e-8 * 10**2.5
    assert dissolved(log10_k=-8.0, pair=2.5, model=0) == pytest.approx(expected, rel=1e-11)


def test_pure_water_is_neutral() -> None:
    problem = salt(model=0)
    for name in ("hold", "hold_water", "hold_law", "exchange"):
        problem[name] = []
    problem["total"] = [0.0, 1e-30, 1e-30, 1e-30, 1e-30]
    solution = solve(single(problem))
    assert solution.state[0] == COMPUTED
    assert solution.molality[0, PROTON] == pytest.approx(1e-7, rel=1e-11)


# ---- directions

RANDOM = {
    "z_cation": st.sampled_from([1, 2]),
    "z_anion": st.sampled_from([-1, -2]),
    "log10_k": st.floats(-14.0, -6.0),
    "pair": st.one_of(st.none(), st.floats(0.5, 2.5)),
    "t_celsius": st.floats(0.0, 100.0),
}


@given(fixed=st.fixed_dictionaries(RANDOM), common=st.floats(1e-3, 0.05))
@settings(max_examples=60, deadline=None)
def test_a_common_ion_lowers_the_free_cation(fixed: dict[str, Any], common: float) -> None:
    """In an ideal solution the cation falls; all that dissolves falls where no pair holds it."""
    without = solve(single(salt(**fixed, model=0)))
    beside = solve(single(salt(**fixed, model=0, common=common)))
    assert beside.molality[0, CATION] < without.molality[0, CATION]
    if fixed["pair"] is None:
        assert beside.amount[0, 0] < without.amount[0, 0] * (1.0 + 1e-9)


@given(fixed=st.fixed_dictionaries(RANDOM), inert=st.floats(1e-3, 0.1))
@settings(max_examples=60, deadline=None)
def test_an_inert_salt_raises_solubility(fixed: dict[str, Any], inert: float) -> None:
    fixed = fixed | {"pair": None}
    assert dissolved(**fixed, inert=inert) > dissolved(**fixed)


# ---- continuity


def largest_kink(values: Any) -> float:
    """Largest second difference of ln s against the largest first difference."""
    first = np.diff(np.log(values))
    return float(np.max(np.abs(np.diff(first))) / np.max(np.abs(first)))


@pytest.mark.parametrize("model", [0, 1, 2])
def test_continuous_in_temperature(model: int) -> None:
    temperatures = np.linspace(0.0, 100.0, 401)
    common = {"model": model, "pair": 2.3, "protonation": 2.0, "inert": 0.05}
    problems = [
        single(salt(t_celsius=float(t), enthalpy_term=-1500.0, **common)) for t in temperatures
    ]
    solution = solve(stack(problems))
    assert (solution.state == COMPUTED).all()
    assert largest_kink(solution.amount[:, 0]) < 0.02


@pytest.mark.parametrize("added", ["inert", "common"])
def test_continuous_in_amounts(added: str) -> None:
    amounts = np.geomspace(0.001, 0.15, 401)
    problems = [single(salt(pair=2.3, **{added: float(v)})) for v in amounts]
    solution = solve(stack(problems))
    assert (solution.state == COMPUTED).all()
    assert largest_kink(solution.amount[:, 0]) < 0.05


# ---- over the shared vectors


@pytest.fixture(scope="module")
def problems(repository: Path) -> list[dict[str, Any]]:
    text = (repository / "tests/vectors/equilibrium-1.json").read_text(encoding="utf-8")
    return [v["problem"] for v in json.loads(text)["vectors"]]


@pytest.fixture(scope="module")
def stacked(problems: list[dict[str, Any]]) -> Solution:
    return solve(stack([single(p) for p in problems]))


def test_every_solution_is_electroneutral(
    problems: list[dict[str, Any]], stacked: Solution
) -> None:
    charges = stack([single(p) for p in problems]).charge
    ok = stacked.state == COMPUTED
    charge = charges[ok] * stacked.molality[ok]
    assert np.max(np.abs(charge.sum(axis=1)) / np.abs(charge).sum(axis=1)) < 1e-11


def test_filling_up_a_stack_changes_nothing(
    problems: list[dict[str, Any]], stacked: Solution
) -> None:
    for i in range(3, len(problems), 16):
        alone = solve(single(problems[i]))
        assert alone.state[0] == stacked.state[i]
        holds = alone.amount.shape[1]
        assert np.allclose(
            alone.amount[0], stacked.amount[i, :holds], rtol=1e-11, atol=0.0, equal_nan=True
        )
        assert np.allclose(
            alone.by_hold[0], stacked.by_hold[i, :holds], rtol=1e-7, atol=1e-9, equal_nan=True
        )


def test_ten_times_every_amount_is_one_unit_of_all_sensitivities() -> None:
    """Sum rule: in an ideal solution without water terms molalities may be measured in any unit.

    Ten times every molality needs log10 K of a form of n base ions lower by n - 1, of a hold of n
    ions higher by n, and ten times the totals: then log10 s rises by 1.
    """
    problem = salt(2, -1, -9.0, model=0, pair=3.0, protonation=5.0, hydrolysis=-7.0, common=0.01)
    solution = solve(single(problem))
    ions = np.array(problem["stoichiometry"], float).sum(axis=1)
    held = np.array(problem["hold"], float).sum(axis=1)
    totals = np.array(problem["total"])
    change = (
        -(solution.by_form[0] @ (ions - 1.0))
        + solution.by_hold[0] @ held
        + solution.by_total[0] @ totals
    )
    assert change == pytest.approx(1.0, abs=1e-9)


def test_sensitivities_are_slopes() -> None:
    """Against differences of the answer itself, with activity coefficients that follow."""
    base = {"pair": 2.3, "protonation": 6.0, "inert": 0.02, "common": 0.01}
    solution = solve(single(salt(**base)))
    h = 1e-4
    up, down = (dissolved(**base, log10_k=-8.0 + d) for d in (h, -h))
    assert solution.by_hold[0, 0] == pytest.approx(np.log10(up / down) / (2 * h), abs=1e-6)
    stronger, weaker = (dissolved(**(base | {"pair": 2.3 + d})) for d in (h, -h))
    slope = np.log10(stronger / weaker) / (2 * h)
    assert solution.by_form[0, 6] == pytest.approx(slope, abs=1e-6)


def test_slopes_of_a_hardly_soluble_solid_beside_much_of_its_anion() -> None:
    """1e-21 mol/kg beside 0.05 mol/kg: one more unit of log10 K is one more of log10 s."""
    solution = solve(single(salt(1, -2, -42.0, protonation=11.0, common=0.05)))
    assert solution.state[0] == COMPUTED
    # s = ½ [M+] = ½ √(K/[X2-]) with [X2-] given: half a unit each
    assert solution.by_hold[0, 0] == pytest.approx(0.5, abs=1e-6)
    # taking up a proton lowers [X2-] by the share bound, never by more than all of it
    assert 0.0 <= solution.by_form[0, 6] <= 0.5


# ---- nothing is thrown


@given(
    fixed=st.fixed_dictionaries(
        {
            "z_cation": st.sampled_from([1, 2, 3]),
            "z_anion": st.sampled_from([-1, -2, -3]),
            "log10_k": st.floats(-60.0, 3.0),
            "model": st.sampled_from([0, 1, 2]),
            "t_celsius": st.floats(0.0, 100.0),
            "pair": st.one_of(st.none(), st.floats(-2.0, 12.0)),
            "protonation": st.one_of(st.none(), st.floats(0.0, 16.0)),
            "hydrolysis": st.one_of(st.none(), st.floats(-15.0, 2.0)),
            "inert": st.floats(0.0, 3.0),
            "common": st.floats(0.0, 1.0),
        }
    )
)
@settings(max_examples=80, deadline=None)
def test_never_raises(fixed: dict[str, Any]) -> None:
    solution = solve(single(salt(**fixed)))
    assert solution.state[0] in (COMPUTED, BEYOND_LIMIT, NO_SOLUTION)
    if solution.state[0] == COMPUTED:
        assert solution.residual[0] <= 1e-12
        assert (solution.molality[0] >= 0.0).all()
    else:
        assert np.isnan(solution.amount).all()


def test_a_row_without_sense_does_not_hurt_its_neighbours() -> None:
    """A row of NaN beside a row that makes a matrix singular beside a sound one."""
    sound, nan, singular = salt(), salt(), salt()
    nan["hold_law"] = [constant(float("nan"))]
    singular["hold"] = singular["exchange"] = [[0, 0, 0, 0, 0]]
    solution = solve(stack([single(p) for p in (nan, singular, sound)]))
    assert solution.state[:2].tolist() == [NO_SOLUTION, NO_SOLUTION]
    alone = solve(single(sound))
    assert solution.amount[2, 0] == pytest.approx(alone.amount[0, 0], rel=1e-12)


def test_a_ph_out_of_reach_of_the_named_acid_has_no_solution() -> None:
    """pH 9 held in water by adding HCl would want less than no chloride: not 'beyond the limit'."""
    problem = salt(log10_k=-8.0)
    problem["hold"] = [*problem["hold"], [1, 0, 0, 0, 0]]
    problem["hold_water"] = [0, 0]
    problem["hold_law"] = [*problem["hold_law"], constant(-9.0)]
    problem["exchange"] = [*problem["exchange"], [1, 0, 0, 0, 1]]
    assert solve(single(problem)).state[0] == NO_SOLUTION
