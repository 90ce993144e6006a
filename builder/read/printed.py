"""Numbers as sources print them: ``(7.57 ± 0.87) × 10–11``, ``7.57(87)e-11``, ``–13 774``.

The characters are kept, the value is exact decimal until it becomes a float once: what is printed
as 1.8 × 10^-8 is the same float as 1.8e-8. What can be read in two ways is refused.
"""

import math
import re
from dataclasses import dataclass
from decimal import Decimal
from typing import NoReturn

from builder.read.findings import quoted


@dataclass(frozen=True)
class Printed:
    """A printed number; ``plus_minus`` and ``last_place`` are absolute, in the unit of ``value``.

    ``digits`` counts the significant digits as printed (final zeros included, 1 for a zero);
    ``plus_minus`` is None where none is printed, never 0 for unknown.
    """

    value: float
    plus_minus: float | None
    digits: int
    last_place: float
    text: str


class PrintedError(ValueError):
    """The text is no printed number; the column counts from 1 in the text as given."""

    def __init__(self, column: int, found: str, cure: str) -> None:
        super().__init__(f"column {column}: found {found}; {cure}")
        self.column = column
        self.found = found
        self.cure = cure


_SPACES = "\u0020\u00a0\u2007\u2009\u202f"
_SPACE = re.compile(f"[{_SPACES}]*")
_MINUS = "\\-\u2010\u2011\u2012\u2013\u2212"
_SUPERSCRIPTS = str.maketrans("⁻⁺⁰¹²³⁴⁵⁶⁷⁸⁹", "-+0123456789")
_MOST_EXPONENT_DIGITS = 4

# Digits, spaced only in full groups of three: from the point to the left, and to the right of it.
_WHOLE = f"[0-9]{{1,3}}(?:[{_SPACES}][0-9]{{3}})+(?![0-9])|[0-9]+"
_FRACTION = f"[0-9]{{3}}(?:[{_SPACES}][0-9]{{3}})*(?:[{_SPACES}][0-9]{{1,3}})(?![0-9])|[0-9]+"
_UNSIGNED = f"(?:(?:{_WHOLE})(?:[.,](?:{_FRACTION})?)?|[.,](?:{_FRACTION}))"
_NUMBER = re.compile(_UNSIGNED)
_SIGN = re.compile(f"[+{_MINUS}]")
_PLUS_MINUS = re.compile(r"±|\+/?-")
_EXPONENT = re.compile(
    f"[eE](?P<e>[+{_MINUS}]?[0-9]+)"
    f"|[{_SPACES}]*[×xX·⋅∙*][{_SPACES}]*10"
    f"(?:\\^(?P<caret>[+{_MINUS}]?[0-9]+)|(?P<bare>[{_MINUS}][0-9]+)|(?P<raised>[⁻⁺]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+))"
)


def parse_printed(text: str, decimal_comma: bool = False) -> Printed:
    """The number that the text prints; PrintedError where it is none or is ambiguous."""
    return _Parser(text, decimal_comma).parse()


class _Parser:
    """Reads a text from left to right; ``at`` is the index of the next character."""

    def __init__(self, text: str, decimal_comma: bool) -> None:
        self.text = text.rstrip(_SPACES)
        self.at = 0
        self.decimal_comma = decimal_comma

    def parse(self) -> Printed:
        self.take(_SPACE)
        if self.take(re.compile(r"\(")):
            mantissa = self.number(signed=True)
            plus_minus = self.stated()
            if plus_minus is None:
                self.refuse("write ± and the uncertainty inside the parentheses")
            self.take(_SPACE)
            if not self.take(re.compile(r"\)")):
                self.refuse("close the parentheses after the uncertainty")
            common = self.exponent() or 0
            return self.printed(mantissa, common, plus_minus, common)
        mantissa = self.number(signed=True)
        concise = self.concise(mantissa)
        exponent = self.exponent()
        if concise is not None:
            return self.printed(mantissa, exponent or 0, concise, exponent or 0)
        start = self.at
        plus_minus = self.stated()
        own_exponent = self.exponent() if plus_minus is not None else None
        if plus_minus is not None and (exponent is None) != (own_exponent is None):
            self.at = start
            self.refuse("the power of ten must stand with both numbers or outside parentheses")
        return self.printed(mantissa, exponent or 0, plus_minus, own_exponent or 0)

    def number(self, signed: bool) -> Decimal:
        """A decimal number without exponent, exactly as many places as printed."""
        sign = self.take(_SIGN) if signed else ""
        self.take(_SPACE)
        start = self.at
        digits = self.take(_NUMBER)
        if not digits:
            self.refuse("a printed number such as 1.8 × 10^-8 or 10.88 ± 0.10 belongs here")
        wrong, cure = (
            (".", "in a text with decimal commas, a point must not stand in a number")
            if self.decimal_comma
            else (",", "write a point, or say that the source prints decimal commas")
        )
        if wrong in digits:
            self.at = start + digits.index(wrong)
            self.refuse(cure)
        plain = re.sub(f"[{_SPACES}]", "", digits).replace(",", ".")
        return Decimal(("-" if sign and sign != "+" else "") + plain)

    def concise(self, mantissa: Decimal) -> Decimal | None:
        """The ``(87)`` of ``7.57(87)``: in units of the last place, or with a point of its own."""
        if not self.take(re.compile(r"\(")):
            return None
        uncertainty = self.number(signed=False)
        if not self.take(re.compile(r"\)")):
            self.refuse("close the parentheses after the uncertainty")
        if _last_exponent(uncertainty) < 0:
            return uncertainty
        return _shifted(uncertainty, _last_exponent(mantissa))

    def stated(self) -> Decimal | None:
        """The ``± 0.87``, if one follows."""
        start = self.at
        self.take(_SPACE)
        if not self.take(_PLUS_MINUS):
            self.at = start
            return None
        self.take(_SPACE)
        return self.number(signed=False)

    def exponent(self) -> int | None:
        start = self.at
        match = _EXPONENT.match(self.text, self.at)
        if not match:
            return None
        self.at = match.end()
        written = match["e"] or match["caret"] or match["bare"] or match["raised"]
        digits = re.sub(f"[{_MINUS}]", "-", written.translate(_SUPERSCRIPTS))
        if len(digits.lstrip("+-")) > _MOST_EXPONENT_DIGITS:
            self.at = start
            self.refuse("the power of ten is too large")
        return int(digits)

    def printed(
        self, mantissa: Decimal, exponent: int, plus_minus: Decimal | None, its_exponent: int
    ) -> Printed:
        """The record, once the whole text is read."""
        if self.at < len(self.text):
            self.refuse("nothing of that kind can follow a number here")
        value = float(_shifted(mantissa, exponent))
        last_place = float(_shifted(Decimal(1), _last_exponent(mantissa) + exponent))
        error = None if plus_minus is None else float(_shifted(plus_minus, its_exponent))
        vanished = last_place == 0 or (plus_minus and not error)
        if vanished or not all(map(math.isfinite, (value, last_place, error or 0))):
            self.at = 0
            self.refuse("the number is too large or too small to compute with")
        digits = len("".join(map(str, mantissa.as_tuple().digits)).lstrip("0")) or 1
        return Printed(value, error, digits, last_place, self.text.lstrip(_SPACES))

    def take(self, pattern: re.Pattern[str]) -> str:
        """The characters of the pattern, if they come next; else nothing."""
        match = pattern.match(self.text, self.at)
        if not match:
            return ""
        self.at = match.end()
        return match[0]

    def refuse(self, cure: str) -> NoReturn:
        rest = self.text[self.at :]
        found = quoted(rest, 40) if rest else "the end of the text"
        raise PrintedError(self.at + 1, found, cure)


def _last_exponent(number: Decimal) -> int:
    """The power of ten of the last digit: -2 for 1.80."""
    exponent = number.as_tuple().exponent
    assert isinstance(exponent, int)  # no infinity or NaN is ever parsed
    return exponent


def _shifted(number: Decimal, places: int) -> Decimal:
    """The number times 10^places, exactly (arithmetic of Decimal would round to its context)."""
    sign, digits, _ = number.as_tuple()
    return Decimal((sign, digits, _last_exponent(number) + places))
