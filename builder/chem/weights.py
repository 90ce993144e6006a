"""Atomic weights and molar masses.

Standard atomic weights are printed with a bound: `107.87 ± 0.01` says that the atomic weight in
any normal material lies within it. As a standard uncertainty it is the half-width of a rectangle,
± / sqrt(3) (JCGM 100:2008, 4.3.7).
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass

from builder.chem.formula import ELEMENTS, Formula


@dataclass(frozen=True)
class AtomicWeight:
    """The standard atomic weight of one element, in g/mol."""

    symbol: str
    value: float
    plus_minus: float
    printed: str  # the characters of the table, such as '1.0080 ± 0.0002'

    @property
    def uncertainty(self) -> float:
        """Standard uncertainty in g/mol."""
        return self.plus_minus / math.sqrt(3)

    @property
    def number(self) -> int:
        """Atomic number."""
        return ELEMENTS.index(self.symbol) + 1


class MissingWeightError(ValueError):
    """An element that has no standard atomic weight in the collection."""

    def __init__(self, symbol: str, formula: str) -> None:
        super().__init__(
            f"{symbol} in {formula} has no standard atomic weight: no molar mass can be given"
        )
        self.symbol = symbol


def molar_mass(formula: Formula, weights: Mapping[str, AtomicWeight]) -> tuple[float, float]:
    """Molar mass and its standard uncertainty, both in g/mol.

    Atomic weights of different elements vary independently, of one element together. The
    electrons of an ion (0.0005 g/mol a charge) are not counted.
    """
    masses, squares = [], []
    for symbol, count in formula.elements:
        if symbol not in weights:
            raise MissingWeightError(symbol, formula.canonical)
        weight = weights[symbol]
        masses.append(float(count) * weight.value)
        squares.append((float(count) * weight.uncertainty) ** 2)
    return math.fsum(masses), math.sqrt(math.fsum(squares))
