"""The one rounding rule: decimal, half away from zero, on the exact value of the binary float.

Expected texts were worked out by hand, or by the decimal module of the standard library.
"""

import math
import random
from decimal import ROUND_HALF_UP, Decimal, localcontext

import pytest

from builder.chem.rounding import display, fixed, significant, ten_digits, with_uncertainty

FIXED = [
    # Ties that binary holds exactly go away from zero.
    (0.5, 0, "1"),
    (1.5, 0, "2"),
    (2.5, 0, "3"),
    (-0.5, 0, "-1"),
    (-2.5, 0, "-3"),
    (0.125, 2, "0.13"),
    (-0.125, 2, "-0.13"),
    (0.375, 2, "0.38"),
    # Ties on paper only: the float lies below (2.675, 1.005, 8.345 is above).
    (2.675, 2, "2.67"),
    (1.005, 2, "1.00"),
    (8.345, 2, "8.35"),
    (1.115, 2, "1.11"),
    # Neighbouring floats on either side of a tie.
    (math.nextafter(0.125, 0), 2, "0.12"),
    (math.nextafter(0.125, 1), 2, "0.13"),
    (math.nextafter(2.5, 0), 0, "2"),
    (math.nextafter(-2.5, 0), 0, "-2"),
    # Zero has no sign, also when rounding makes it.
    (0.0, 2, "0.00"),
    (-0.0, 2, "0.00"),
    (-0.004, 2, "0.00"),
    (-0.006, 2, "-0.01"),
    # Carrying, padding, large and tens.
    (9.995, 2, "9.99"),
    (99.996, 2, "100.00"),
    (0.05, 3, "0.050"),
    (-7.75, 1, "-7.8"),
    (1e22, 1, "10000000000000000000000.0"),
    (1234.0, -1, "1230"),
    (1235.0, -1, "1240"),
    (-1235.0, -1, "-1240"),
    (1234.9999, -1, "1230"),
    (4.0, -1, "0"),
    (5.0, -1, "10"),
]

SIGNIFICANT = [
    (0.0, 3, "0"),
    (-0.0, 3, "0"),
    (1.0, 3, "1.00"),
    (-8.4567, 3, "-8.46"),
    (123456.0, 3, "123000"),
    (999999.0, 6, "999999"),
    (1000000.0, 3, "1.00e6"),
    (999499.0, 3, "999000"),
    (999500.0, 3, "1.00e6"),  # the magnitude is that of the rounded number
    (0.0001, 2, "0.00010"),
    (0.00009994, 3, "9.99e-5"),
    (0.000099996, 3, "0.000100"),
    (1.23e-8, 3, "1.23e-8"),
    (-1.6e-10, 1, "-2e-10"),
    (9.5, 1, "10"),
    (9.4999, 1, "9"),
    (0.00125, 2, "0.0013"),  # the float lies above
    (2.5, 1, "3"),
    (-2.5, 1, "-3"),
    (1e23, 15, "1.00000000000000e23"),  # the float lies below
    (5e-324, 3, "4.94e-324"),
]

WITH_UNCERTAINTY = [
    (-8.4567, 0.023, ("-8.457", "0.023")),
    (-8.4567, 0.0996, ("-8.46", "0.10")),
    (-8.4567, 0.0994, ("-8.457", "0.099")),
    (-8.4567, 1.0, ("-8.5", "1.0")),
    (12.0, 9.96, ("12", "10")),
    (12.5, 9.94, ("12.5", "9.9")),
    (1234.0, 150.0, ("1230", "150")),
    (0.0, 0.02, ("0.000", "0.020")),
    (-0.0004, 0.02, ("0.000", "0.020")),
    (3.0, 400.0, ("0", "400")),
    (0.00001, 0.0003, ("0.00001", "0.00030")),
    # One power of ten for both, that of the larger.
    (1.234e-8, 3.1e-9, ("1.23e-8", "0.31e-8")),
    (1.234e-9, 3.1e-8, ("0.1e-8", "3.1e-8")),
    (9.96e-8, 1.2e-8, ("1.00e-7", "0.12e-7")),
    (2.5e7, 1.5e5, ("2.500e7", "0.015e7")),
]

DISPLAY = [
    ("1.5", "1.5"),
    ("-1.5", "\u22121.5"),
    ("0", "0"),
    ("1.23e-8", "1.23 × 10⁻⁸"),
    ("-1.23e-10", "\u22121.23 × 10⁻¹⁰"),
    ("1.00e6", "1.00 × 10⁶"),
    ("4e+07", "4 × 10⁷"),
]


@pytest.mark.parametrize(("x", "decimals", "text"), FIXED)
def test_fixed(x: float, decimals: int, text: str) -> None:
    assert fixed(x, decimals) == text


@pytest.mark.parametrize(("x", "digits", "text"), SIGNIFICANT)
def test_significant(x: float, digits: int, text: str) -> None:
    assert significant(x, digits) == text


@pytest.mark.parametrize(("value", "u", "texts"), WITH_UNCERTAINTY)
def test_with_uncertainty(value: float, u: float, texts: tuple[str, str]) -> None:
    assert with_uncertainty(value, u) == texts


@pytest.mark.parametrize(("ascii_text", "shown"), DISPLAY)
def test_display(ascii_text: str, shown: str) -> None:
    assert display(ascii_text) == shown


def test_against_the_decimal_module() -> None:
    source = random.Random(20261201)
    for _ in range(4000):
        x = source.choice([1, -1]) * 10 ** source.uniform(-12, 12)
        if source.random() < 0.5:
            x = source.randrange(-(10**6), 10**6) / 2 ** source.randrange(12)  # many ties
        decimals = source.randrange(0, 10)
        with localcontext() as context:
            context.prec = 1200
            rounded = Decimal(x).quantize(Decimal(1).scaleb(-decimals), ROUND_HALF_UP)
            assert Decimal(fixed(x, decimals)) == rounded
            assert fixed(x, decimals) == f"{abs(rounded) if rounded == 0 else rounded:f}"
        digits = source.randrange(1, 16)
        with localcontext() as context:
            context.prec = digits
            context.rounding = ROUND_HALF_UP
            assert Decimal(significant(x, digits)) == +Decimal(x)


@pytest.mark.parametrize("u", [0.0, -0.0, -0.1, math.nan, math.inf])
def test_an_uncertainty_of_none_is_another_branch(u: float) -> None:
    with pytest.raises(ValueError, match=r"greater than zero|cannot be written"):
        with_uncertainty(1.0, u)


@pytest.mark.parametrize("x", [math.nan, math.inf, -math.inf])
def test_what_is_no_number_is_refused(x: float) -> None:
    for call in (
        lambda: fixed(x, 2),
        lambda: fixed(x, -2),
        lambda: significant(x, 3),
        lambda: with_uncertainty(x, 0.1),
        lambda: ten_digits(x),
    ):
        with pytest.raises(ValueError, match="cannot be written as a number"):
            call()


@pytest.mark.parametrize("digits", [0, -1, 16])
def test_digits_a_float_does_not_have(digits: int) -> None:
    with pytest.raises(ValueError, match="from 1 to 15"):
        significant(1.0, digits)


@pytest.mark.parametrize(
    "text", ["", "-", "1.", ".5", "1e", "x", "1,5", "\u22121", "1 e5", "1e5\n"]
)
def test_display_takes_only_numbers_as_written_here(text: str) -> None:
    with pytest.raises(ValueError, match="is not a number as this module writes it"):
        display(text)


def test_ten_digits() -> None:
    assert ten_digits(1234567890.5) == 1234567891.0  # an exact tie, away from zero
    assert ten_digits(-1234567890.5) == -1234567891.0
    assert ten_digits(math.pi) == 3.141592654
    assert ten_digits(-math.pi * 1e-9) == -3.141592654e-9
    assert ten_digits(9.99999999996) == 10.0
    assert ten_digits(0.1) == 0.1
    assert math.copysign(1, ten_digits(-0.0)) == 1
