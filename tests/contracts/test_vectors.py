"""The engine meets the shared vectors: answers from mpmath at 40 digits (tests/vectors)."""

from __future__ import annotations

import json
import math
from dataclasses import fields
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from builder.chem import temperature, water
from builder.chem.equilibrium import solve
from builder.chem.problem import COMPUTED, Solution, as_json, single, stack

CLOSE = 1e-9
SMALLEST = 1e-25  # mol/kg; below it a form is not compared


@pytest.fixture(scope="module")
def vectors(repository: Path) -> list[dict[str, Any]]:
    text = (repository / "tests/vectors/equilibrium-1.json").read_text(encoding="utf-8")
    return list(json.loads(text)["vectors"])


@pytest.fixture(scope="module")
def at_temperatures(repository: Path) -> dict[str, Any]:
    text = (repository / "tests/vectors/temperature-1.json").read_text(encoding="utf-8")
    return dict(json.loads(text))


@pytest.fixture(scope="module")
def stacked(vectors: list[dict[str, Any]]) -> Solution:
    return solve(stack([single(v["problem"]) for v in vectors]))


def misses(solution: Solution, row: int, vector: dict[str, Any]) -> list[str]:
    """What of the answer in that row of the stack is further from the vector than allowed."""
    problem, answer = vector["problem"], vector["answer"]
    if solution.state[row] != answer["state"]:
        return [f"state {solution.state[row]}, not {answer['state']}"]
    if answer["state"] != COMPUTED:
        return [] if np.isnan(solution.molality[row]).all() else ["numbers where refused"]
    bases, forms, holds = (len(problem[k]) for k in ("total", "charge", "hold"))
    filling = solution.molality.shape[1] - forms
    # in a stack the filling base ions stand behind the old ones
    added = min(filling, solution.ln_activity.shape[1] - bases)
    place = [*range(bases), *range(bases + added, forms + added)]
    out = []

    def compare(name: str, got: Any, expected: Any, smallest: float = 0.0) -> None:
        got, expected = np.asarray(got, float), np.asarray(expected, float)
        seen = np.abs(expected) > smallest
        error = np.abs(got - expected)[seen] / np.abs(expected)[seen]
        if not np.all(error <= CLOSE):
            out.append(f"{name} by {np.max(error):.1e}")

    compare("molality", solution.molality[row, place], answer["molality"], SMALLEST)
    compare("amount", solution.amount[row, :holds], answer["amount"])
    compare("ionic strength", solution.ionic_strength[row], answer["ionic_strength"])
    compare("pH", -solution.ln_activity[row, 0] / math.log(10.0), answer["ph"])
    if problem["model"]:
        compare("ln a_w", solution.ln_water[row], answer["ln_water"])
    if not solution.residual[row] <= 1e-12:
        out.append(f"residual {solution.residual[row]:.1e}")
    if "by_form" in answer:
        got = [*solution.by_form[row, place], *solution.by_hold[row, :holds]]
        error = np.max(np.abs(np.subtract(got, answer["by_form"] + answer["by_hold"])))
        if not error <= 1e-6:
            out.append(f"sensitivities by {error:.1e}")
    return out


def test_all_at_once(vectors: list[dict[str, Any]], stacked: Solution) -> None:
    found = {i: misses(stacked, i, v) for i, v in enumerate(vectors)}
    assert {i: m for i, m in found.items() if m} == {}


def test_one_by_one(vectors: list[dict[str, Any]]) -> None:
    sample = range(0, len(vectors), 8)
    found = {i: misses(solve(single(vectors[i]["problem"])), 0, vectors[i]) for i in sample}
    assert {i: m for i, m in found.items() if m} == {}


def test_a_moved_answer_is_noticed(vectors: list[dict[str, Any]]) -> None:
    """The comparison itself: a constant off by 1e-8 must show."""
    vector = next(v for v in vectors if v["answer"]["state"] == COMPUTED and v["problem"]["hold"])
    problem = json.loads(json.dumps(vector["problem"]))
    problem["hold_law"][0][1] += 1e-8
    assert misses(solve(single(problem)), 0, vector)


def test_json_form_there_and_back(vectors: list[dict[str, Any]]) -> None:
    for vector in vectors[::20]:
        problem = single(vector["problem"])
        again = single(json.loads(json.dumps(as_json(problem))))
        for f in fields(problem):
            assert np.array_equal(getattr(problem, f.name), getattr(again, f.name)), f.name


def test_vectors_cover_what_they_promise(vectors: list[dict[str, Any]]) -> None:
    count = len(vectors)
    computed = [v for v in vectors if v["answer"]["state"] == COMPUTED]
    assert count >= 400
    assert count - len(computed) >= 0.05 * count
    assert sum(v["answer"]["ionic_strength"] > 0.1 for v in computed) >= 0.2 * count
    assert {v["problem"]["model"] for v in computed} == {0, 1, 2}
    assert {len(v["problem"]["hold"]) for v in computed} == {0, 1, 2}
    other = [v for v in computed if v["problem"]["hold"] != v["problem"]["exchange"]]
    assert len(other) >= 0.05 * count
    solids = {tuple(sorted(map(abs, h))[-2:]) for v in computed for h in v["problem"]["hold"]}
    assert {(1, 1), (1, 2), (2, 3)} <= solids
    assert sum("by_form" in v["answer"] for v in computed) >= 30
    named = {"problem", "answer"}
    assert all(set(v) == named for v in vectors), "numbers only, no ids"


def test_laws(at_temperatures: dict[str, Any]) -> None:
    laws = at_temperatures["laws"]
    got = temperature.log10_k(
        np.array([v["law"] for v in laws]), water.kelvin(np.array([v["t_celsius"] for v in laws]))
    )
    expected = np.array([v["log10_k"] for v in laws])
    # terms of the order of 10 cancel: absolute, not relative
    assert np.max(np.abs(got - expected)) < 1e-11


def test_water(at_temperatures: dict[str, Any]) -> None:
    rows = at_temperatures["water"]
    t = np.array([v["t_celsius"] for v in rows])
    slopes = water.debye_huckel(t)
    got = {
        "density_kg_m3": water.density_kg_m3(t),
        "permittivity": water.permittivity(t),
        "A": slopes[0],
        "B": slopes[1],
    }
    for name, values in got.items():
        expected = np.array([v[name] for v in rows])
        assert np.max(np.abs(values / expected - 1.0)) < 1e-12, name
