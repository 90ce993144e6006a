"""The one rule by which numbers are rounded and written (twin: templates/rounding.js).

Rounding is decimal, half away from zero, on the exact value of the binary float: 2.675 is
stored slightly below itself and gives 2.67, 0.125 is exact and gives 0.13. Everything rests on
one integer, `_units`, so that the two languages agree in every digit.

Texts are ASCII (`-1.5`, `1.23e-8`); `display` makes them typographic.
"""

import functools
import math
import re
from decimal import Decimal

# Beyond these magnitudes a number is written with a power of ten.
PLAIN_FROM_EXPONENT = -4
PLAIN_BELOW_EXPONENT = 6

# A double carries 15 decimal digits safely; more would show digits nobody measured.
MOST_DIGITS = 15

_NUMBER = re.compile(r"(-?)([0-9]+(?:\.[0-9]+)?)(?:e([+-]?[0-9]+))?", re.ASCII)
_SUPERSCRIPT = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


def fixed(x: float, decimals: int) -> str:
    """`x` with so many decimals; negative decimals round to tens, hundreds, ... ."""
    return _point(_units(x, decimals), decimals)


def significant(x: float, digits: int) -> str:
    """`x` with so many significant digits, plain for 1e-4 <= |x| < 1e6, else like `1.23e-8`.

    The magnitude is that of the rounded number. Zero has no significant digit and is `0`.
    """
    if not 1 <= digits <= MOST_DIGITS:
        raise ValueError(f"{digits} significant digits asked for: from 1 to {MOST_DIGITS} can be")
    _require_finite(x)
    if x == 0:
        return "0"
    exponent = _rounded_exponent(x, digits)
    decimals = digits - 1 - exponent
    return _written(_units(x, decimals), decimals, exponent)


def with_uncertainty(value: float, u: float) -> tuple[str, str]:
    """Texts of a value and its uncertainty: `u` to two significant digits, the value to match.

    After JCGM 100:2008 (GUM), 7.2.6. Both share one power of ten where one is written. A zero,
    negative or non-finite `u` raises ValueError: 'exact' and 'not stated' are not numbers.
    """
    _require_finite(value)
    _require_finite(u)
    if u <= 0:
        raise ValueError(f"an uncertainty is greater than zero, not {u!r}")
    exponent = _rounded_exponent(u, 2)
    decimals = 1 - exponent
    units = _units(value, decimals)
    if units:
        exponent = max(exponent, len(str(abs(units))) - 1 - decimals)
    return _written(units, decimals, exponent), _written(_units(u, decimals), decimals, exponent)


def display(text: str) -> str:
    """Typographic form of an ASCII number: `-1.23e-8` becomes `−1.23 × 10⁻⁸`."""
    match = _NUMBER.fullmatch(text)
    if match is None:
        raise ValueError(f"{text!r} is not a number as this module writes it")
    sign, digits, exponent = match.groups()
    shown = ("−" if sign else "") + digits
    if exponent is None:
        return shown
    return f"{shown} × 10{str(int(exponent)).translate(_SUPERSCRIPT)}"


@functools.cache
def ten_digits(x: float) -> float:
    """`x` rounded to ten significant digits, as every float in a page is."""
    _require_finite(x)
    if x == 0:
        return 0.0
    decimals = 9 - _rounded_exponent(x, 10)
    return float(f"{_units(x, decimals)}e{-decimals}")


def _require_finite(x: float) -> None:
    if not math.isfinite(x):
        raise ValueError(f"{x!r} cannot be written as a number")


def _units(x: float, decimals: int) -> int:
    """`x` times 10^decimals as an integer, half away from zero, exact."""
    _require_finite(x)
    top, bottom = abs(float(x)).as_integer_ratio()
    if decimals >= 0:
        top *= 10**decimals
    else:
        bottom *= 10**-decimals
    whole = (2 * top + bottom) // (2 * bottom)
    return -whole if x < 0 else whole


def _rounded_exponent(x: float, digits: int) -> int:
    """Power of ten of the first digit of non-zero `x` once rounded to so many digits."""
    exponent = Decimal(x).adjusted()
    carried = abs(_units(x, digits - 1 - exponent)) == 10**digits
    return exponent + 1 if carried else exponent


def _point(units: int, decimals: int) -> str:
    """An integer number of 10^-decimals in plain writing; zero has no sign."""
    sign = "-" if units < 0 else ""
    digits = str(abs(units))
    if decimals <= 0:
        return sign + (digits + "0" * -decimals if units else "0")
    digits = digits.rjust(decimals + 1, "0")
    return f"{sign}{digits[:-decimals]}.{digits[-decimals:]}"


def _written(units: int, decimals: int, exponent: int) -> str:
    """Plain or with a power of ten, by the exponent."""
    if PLAIN_FROM_EXPONENT <= exponent < PLAIN_BELOW_EXPONENT:
        return _point(units, decimals)
    return f"{_point(units, decimals + exponent)}e{exponent}"
