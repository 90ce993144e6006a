"""Reactions such as `Pb^2+ + 2 SO4^2- = Pb(SO4)2^2-`: reading and balance.

Terms are joined by ` + ` with its spaces, the sides by one `=`. A coefficient stands before its
formula, with a space or without (`2H2O`, `0.5 O2`).
"""

import functools
import re
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from builder.chem.formula import FormulaError, parse_formula

Terms = tuple[tuple[Fraction, str], ...]

LONGEST_TEXT = 1000

_COEFFICIENT = re.compile(r"([0-9]+(?:\.[0-9]+|/0*[1-9][0-9]*)?)(\s*)(?=\S)")
_JOINT = re.compile(r"\s\+\s")
_ARROW = re.compile(r"<=+>|<->|=+>|-+>|==+|[⇌→←↔⇄⟶]")


class ReactionError(FormulaError):
    """A text that does not read as a reaction; `column` counts from 1 in the text given."""


@dataclass(frozen=True)
class Reaction:
    """Both sides as (coefficient, canonical formula), in the order written."""

    text: str
    left: Terms
    right: Terms


@functools.cache
def parse_reaction(text: str) -> Reaction:
    """Read a reaction; `ReactionError` says where and what would be right."""
    if len(text) > LONGEST_TEXT:
        raise ReactionError(
            text, 1, "a text this long", f"a reaction has at most {LONGEST_TEXT} characters"
        )
    arrow = _ARROW.search(text)
    if arrow:
        raise ReactionError(text, arrow.start() + 1, repr(arrow.group()), "write one = instead")
    sides = text.split("=")
    if len(sides) != 2:
        column = len(text) + 1 if len(sides) == 1 else len(sides[0]) + len(sides[1]) + 2
        found = "no =" if len(sides) == 1 else "a second ="
        raise ReactionError(text, column, found, "write reactants = products")
    left, right = sides
    return Reaction(text, _side(text, left, 0), _side(text, right, len(left) + 1))


def stoichiometry(reaction: Reaction) -> dict[str, Fraction]:
    """Net coefficient of each canonical formula, products positive; what cancels is left out."""
    net: dict[str, Fraction] = {}
    for sign, terms in ((-1, reaction.left), (1, reaction.right)):
        for coefficient, formula in terms:
            net[formula] = net.get(formula, Fraction(0)) + sign * coefficient
    return {formula: n for formula, n in net.items() if n}


def imbalance(reaction: Reaction) -> Mapping[str, Fraction]:
    """Elements, and 'charge', that do not balance: right minus left. Empty when balanced."""
    excess: dict[str, Fraction] = {}
    for text, n in stoichiometry(reaction).items():
        formula = parse_formula(text)
        for name, count in (*formula.elements, ("charge", Fraction(formula.charge))):
            excess[name] = excess.get(name, Fraction(0)) + n * count
    return {name: value for name, value in excess.items() if value}


def _side(text: str, side: str, offset: int) -> Terms:
    terms = []
    start = 0
    for joint in [*_JOINT.finditer(side), None]:
        end = joint.start() if joint else len(side)
        terms.append(_term(text, side[start:end], offset + start))
        start = joint.end() if joint else end
    return tuple(terms)


def _term(text: str, term: str, offset: int) -> tuple[Fraction, str]:
    """One term of the text, which begins at `offset`."""
    offset += len(term) - len(term.lstrip())
    term = term.strip()
    if not term:
        raise ReactionError(text, offset + 1, "no formula", "each side is like A + 2 B")
    coefficient = Fraction(1)
    match = _COEFFICIENT.match(term)
    if match:
        coefficient = Fraction(match.group(1))
        if coefficient == 0:
            raise ReactionError(text, offset + 1, "the coefficient 0", "leave the formula out")
    formula_at = match.end() if match else 0
    try:
        formula = parse_formula(term[formula_at:])
    except FormulaError as error:
        column = offset + formula_at + error.column
        raise ReactionError(text, column, error.found, error.cure) from None
    if match and not match.group(2) and "·" in formula.canonical:
        # 3CaO·Al2O3: three of the whole, or of CaO? A reader may not guess.
        raise ReactionError(
            text,
            offset + 1,
            "a number joined to a formula of several parts",
            f"write '{match.group(1)} ' with a space for so many of the whole, "
            "or '1 ' before it where the number belongs to the first part",
        )
    return coefficient, formula.canonical
