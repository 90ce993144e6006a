"""The shipped reference, and the transcripts: printed numbers copied by hand, apart from it."""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

from builder.collection.folders import shipped_folder
from builder.collection.inspection import inspect
from builder.collection.reference import Reference

TRANSCRIPTS = Path(__file__).resolve().parent.parent / "transcripts"

Row = dict[str, str]


@pytest.fixture(scope="session")
def reference() -> Reference:
    """The reference of the shipped constants."""
    found = inspect([shipped_folder("constants")])
    assert found.reference is not None, [f for f in found.findings if f.level == "error"]
    return found.reference


@pytest.fixture(scope="session")
def transcripts() -> list[Row]:
    """Every row of the transcripts of constants, laws and solubilities."""
    names = ("textbook", "tables", "handbooks", "papers", "solubilities")
    wide = ("wide-laws", *(f"wide-{name}" for name in names))
    return [row for name in (*names, *wide) for row in _rows(name)]


@pytest.fixture(scope="session")
def activity_coefficient_rows() -> list[Row]:
    """Printed mean activity coefficients at 25 °C by molality."""
    return _rows("mean_activity_coefficients")


def _rows(name: str) -> list[Row]:
    with (TRANSCRIPTS / f"{name}.csv").open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))
