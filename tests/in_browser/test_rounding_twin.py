"""The page writes every number with the characters Python writes (rounding.js, rounding.py)."""

from __future__ import annotations

import math
import random
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import Page

from builder.chem import rounding

PLACES = 12


def values() -> list[float]:
    """20,000 random values of every size, exact ties, and the neighbours of ties."""
    rng = random.Random(20261201)
    out = [rng.choice((-1, 1)) * 10 ** rng.uniform(-40.0, 25.0) for _ in range(12_000)]
    out += [rng.uniform(-1000.0, 1000.0) for _ in range(4_000)]
    # decimal ties as typed: most lie just beside the tie in binary
    out += [
        float(f"{rng.randint(0, 99_999)}5e{rng.randint(-12, 6)}") * rng.choice((-1, 1))
        for _ in range(2_000)
    ]
    # ties exact in binary: odd multiples of a power of two
    exact = [(2 * rng.randint(0, 5_000) + 1) / 2 ** rng.randint(1, 12) for _ in range(1_000)]
    out += exact
    out += [math.nextafter(v, rng.choice((0.0, math.inf))) for v in exact]
    out += [0.0, -0.0, 5e-324, 1.7976931348623157e308, 1e23, 9.5, 99.95, 999999.5, 0.000099995]
    return out


@pytest.fixture
def twin(page: Page, repository: Path) -> Page:
    script = repository / "templates/rounding.js"
    page.add_script_tag(content=script.read_text(encoding="utf-8"))
    return page


def differing(numbers: list[Any], got: list[Any], expected: list[Any]) -> list[Any]:
    together = zip(numbers, got, expected, strict=True)
    return [(x, g, e) for x, g, e in together if g != e][:10]


def test_significant(twin: Page) -> None:
    rng = random.Random(1)
    asked = [(v, rng.randint(1, rounding.MOST_DIGITS)) for v in values()]
    got = twin.evaluate("a => a.map(q => Sparingly.rounding.significant(q[0], q[1]))", asked)
    assert differing(asked, got, [rounding.significant(v, n) for v, n in asked]) == []


def test_fixed(twin: Page) -> None:
    rng = random.Random(2)
    asked = [(v, rng.randint(-3, PLACES)) for v in values() if abs(v) < 1e25]
    got = twin.evaluate("a => a.map(q => Sparingly.rounding.fixed(q[0], q[1]))", asked)
    assert differing(asked, got, [rounding.fixed(v, n) for v, n in asked]) == []


def test_with_uncertainty_and_display(twin: Page) -> None:
    rng = random.Random(3)
    asked = [
        (v, abs(v) * 10 ** rng.uniform(-6.0, 1.0)) for v in values() if 1e-200 < abs(v) < 1e200
    ]
    script = """a => a.map(q => Sparingly.rounding.withUncertainty(q[0], q[1])
        .map(Sparingly.rounding.display))"""
    expected = [[rounding.display(t) for t in rounding.with_uncertainty(v, u)] for v, u in asked]
    assert differing(asked, twin.evaluate(script, asked), expected) == []


def test_the_rule_itself_in_the_page(twin: Page) -> None:
    """Half away from zero on the binary value: 2.675 is below its tie, 0.125 is on it."""
    script = "a => a.map(q => Sparingly.rounding.fixed(q[0], q[1]))"
    asked = [[2.675, 2], [0.125, 2], [-0.125, 2], [-0.001, 2], [1250.0, -2]]
    assert twin.evaluate(script, asked) == ["2.67", "0.13", "-0.13", "0.00", "1300"]


@pytest.mark.parametrize("call", ["significant(NaN, 3)", "significant(1, 16)", "fixed(1/0, 2)"])
def test_what_is_no_number_is_refused_in_words(twin: Page, call: str) -> None:
    script = (
        f"() => {{ try {{ return Sparingly.rounding.{call}; }} catch (e) {{ return e.name; }} }}"
    )
    assert twin.evaluate(script) == "RangeError"
