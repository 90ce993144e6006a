"""Numbers that are shown carry the steps that lead to them (contract 6)."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Step:
    """One step of arithmetic: what is done, with the numbers put in, and the result as text."""

    what: str
    sum: str
    result: str


@dataclass(frozen=True)
class Shown:
    """A number as displayed, its value, and its steps from the printed text."""

    text: str
    value: float
    steps: tuple[Step, ...]
