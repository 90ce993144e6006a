"""The page's engine meets the shared vectors and shows the digits Python shows."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import Page

from builder.chem.equilibrium import solve
from builder.chem.problem import COMPUTED, NO_SOLUTION, single, stack
from builder.chem.rounding import significant

CLOSE = 1e-9
SMALLEST = 1e-25  # mol/kg; below it a form is not compared
BUDGET = 32 * 1024  # bytes of water.js and engine.js together, with their comments


@pytest.fixture(scope="module")
def vectors(repository: Path) -> list[dict[str, Any]]:
    text = (repository / "tests/vectors/equilibrium-1.json").read_text(encoding="utf-8")
    return list(json.loads(text)["vectors"])


@pytest.fixture(scope="module")
def at_temperatures(repository: Path) -> dict[str, Any]:
    text = (repository / "tests/vectors/temperature-1.json").read_text(encoding="utf-8")
    return dict(json.loads(text))


@pytest.fixture
def twin(page: Page, repository: Path) -> Page:
    for name in ("water", "rounding", "engine"):
        script = repository / f"templates/{name}.js"
        page.add_script_tag(content=script.read_text(encoding="utf-8"))
    return page


def relative(got: list[float], expected: list[float], smallest: float = 0.0) -> float:
    pairs = [(g, e) for g, e in zip(got, expected, strict=True) if abs(e) > smallest]
    return max((abs(g - e) / abs(e) for g, e in pairs), default=0.0)


def misses(got: dict[str, Any], vector: dict[str, Any]) -> list[str]:
    """What of the page's answer is further from the vector than allowed."""
    answer = vector["answer"]
    if got["state"] != answer["state"]:
        return [f"state {got['state']}, not {answer['state']}"]
    if answer["state"] != COMPUTED:
        return [] if all(map(math.isnan, got["molality"])) else ["numbers where refused"]
    ph = -got["ln_activity"][0] / math.log(10.0)
    errors = {
        "molality": relative(got["molality"], answer["molality"], SMALLEST),
        "amount": relative(got["amount"], answer["amount"]),
        "ionic strength": relative([got["ionic_strength"]], [answer["ionic_strength"]]),
        "pH": relative([ph], [answer["ph"]]),
    }
    if vector["problem"]["model"]:
        errors["ln a_w"] = relative([got["ln_water"]], [answer["ln_water"]])
    out = [f"{name} by {error:.1e}" for name, error in errors.items() if not error <= CLOSE]
    if not got["residual"] <= 1e-12:
        out.append(f"residual {got['residual']:.1e}")
    if "by_form" in answer:
        ours = zip(
            got["by_form"] + got["by_hold"], answer["by_form"] + answer["by_hold"], strict=True
        )
        error = max(abs(a - b) for a, b in ours)
        if not error <= 1e-6:
            out.append(f"sensitivities by {error:.1e}")
    return out


def test_all_vectors(twin: Page, vectors: list[dict[str, Any]]) -> None:
    problems = [v["problem"] for v in vectors]
    got = twin.evaluate("a => a.map(Sparingly.engine.solve)", problems)
    found = {i: misses(g, v) for i, (g, v) in enumerate(zip(got, vectors, strict=True))}
    assert {i: m for i, m in found.items() if m} == {}


def test_answer_is_solve_without_sensitivities(twin: Page, vectors: list[dict[str, Any]]) -> None:
    script = """a => a.map(p => {
        const whole = Sparingly.engine.solve(p), main = Sparingly.engine.answer(p);
        for (const name of ['by_form', 'by_hold', 'by_total']) { delete whole[name]; }
        return JSON.stringify(whole) === JSON.stringify(main);
    })"""
    assert all(twin.evaluate(script, [v["problem"] for v in vectors[::10]]))


def test_displayed_digits_are_those_of_python(twin: Page, vectors: list[dict[str, Any]]) -> None:
    """Four digits as shown, each side by its own engine and its own rounding."""
    chosen = [v["problem"] for v in vectors if v["answer"]["state"] == COMPUTED]
    script = """a => a.map(p => {
        const s = Sparingly.engine.answer(p);
        return [...s.amount, s.ionic_strength].map(v => Sparingly.rounding.significant(v, 4));
    })"""
    ours = solve(stack([single(p) for p in chosen]))
    expected = [
        [
            significant(float(v), 4)
            for v in (*ours.amount[i, : len(p["hold"])], ours.ionic_strength[i])
        ]
        for i, p in enumerate(chosen)
    ]
    got = twin.evaluate(script, chosen)
    assert [pair for pair in zip(got, expected, strict=True) if pair[0] != pair[1]] == []


def test_laws_and_water(twin: Page, at_temperatures: dict[str, Any]) -> None:
    laws, rows = at_temperatures["laws"], at_temperatures["water"]
    got = twin.evaluate(
        "a => a.map(v => Sparingly.temperature.log10K(v.law, Sparingly.water.kelvin(v.t_celsius)))",
        laws,
    )
    assert max(abs(g - v["log10_k"]) for g, v in zip(got, laws, strict=True)) < 1e-11
    script = """a => a.map(v => { const w = Sparingly.water, t = v.t_celsius;
        return {density_kg_m3: w.density(t), permittivity: w.permittivity(t), ...w.debyeHuckel(t)};
    })"""
    for ours, row in zip(twin.evaluate(script, rows), rows, strict=True):
        for name, value in ours.items():
            assert abs(value / row[name] - 1.0) < 1e-12, (name, row["t_celsius"])


def test_beyond_liquid_water_is_refused(twin: Page) -> None:
    script = "t => { try { return Sparingly.water.density(t); } catch (e) { return e.message; } }"
    for t in (-0.1, 100.1):
        assert "beyond liquid water" in twin.evaluate(script, t)


def test_a_ph_out_of_reach_of_the_named_acid_has_no_solution(twin: Page) -> None:
    assert twin.evaluate("Sparingly.engine.answer", out_of_reach())["state"] == NO_SOLUTION


def out_of_reach() -> dict[str, Any]:
    """Water held at pH 9 by adding HCl: electroneutrality would want less than no chloride."""
    none = [298.15, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0]
    return {
        "t_celsius": 25.0,
        "model": 1,
        "limit": 0.5,
        "stoichiometry": [[1, 0], [0, 1], [-1, 0]],
        "water": [0, 0, 1],
        "charge": [1, -1, -1],
        "law": [none, none, [298.15, -14.0, 0.0, 0.0, 0.0, 0.0, 0.0]],
        "size": [9.0, 3.0, 3.5],
        "linear": [0.0, 0.0, 0.0],
        "total": [0.0, 0.0],
        "hold": [[1, 0]],
        "hold_water": [0],
        "hold_law": [[298.15, -9.0, 0.0, 0.0, 0.0, 0.0, 0.0]],
        "exchange": [[1, 1]],
    }


def test_the_engine_keeps_its_size(repository: Path) -> None:
    sizes = [(repository / f"templates/{n}.js").stat().st_size for n in ("engine", "water")]
    assert sum(sizes) <= BUDGET
