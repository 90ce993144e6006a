"""Numbers as printed: what each notation means, typed by hand, and what is refused and where."""

from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from builder.read.printed import PrintedError, parse_printed

# Text, value, plus or minus, significant digits, one unit of the last place.
NOTATIONS = [
    ("1.8 × 10^-8", 1.8e-8, None, 2, 1e-9),
    ("1.8 x 10^-8", 1.8e-8, None, 2, 1e-9),
    ("1.8·10^-8", 1.8e-8, None, 2, 1e-9),
    ("1.8x10-8", 1.8e-8, None, 2, 1e-9),
    ("1.80 × 10⁻⁸", 1.8e-8, None, 3, 1e-10),
    ("1.8 × 10^8", 1.8e8, None, 2, 1e7),
    ("1.8 × 10⁸", 1.8e8, None, 2, 1e7),
    ("2.53E-8", 2.53e-8, None, 3, 1e-10),
    ("2.53e-8", 2.53e-8, None, 3, 1e-10),
    ("2 × 10^-32", 2e-32, None, 1, 1e-32),
    ("−6.62±0.02", -6.62, 0.02, 3, 0.01),
    ("–10.57 ± 0.08", -10.57, 0.08, 4, 0.01),
    ("10.88 ± 0.10", 10.88, 0.1, 4, 0.01),
    ("10.88 +/- 0.10", 10.88, 0.1, 4, 0.01),
    ("(7.57 ± 0.87) × 10–11", 7.57e-11, 8.7e-12, 3, 1e-13),
    ("(7.57 ± 0.87)e-11", 7.57e-11, 8.7e-12, 3, 1e-13),
    ("1.8e-8 ± 2e-9", 1.8e-8, 2e-9, 2, 1e-9),
    ("7.57(87)e-11", 7.57e-11, 8.7e-12, 3, 1e-13),
    ("1.234(5) × 10^-10", 1.234e-10, 5e-13, 4, 1e-13),
    ("20.1797(6)", 20.1797, 0.0006, 6, 0.0001),
    ("7.57(0.87)", 7.57, 0.87, 3, 0.01),
    ("–13 774", -13774.0, None, 5, 1.0),
    ("13\u2009774.5", 13774.5, None, 6, 0.1),
    ("1\u202f234\u00a0567", 1234567.0, None, 7, 1.0),
    ("0.123 456 7", 0.1234567, None, 7, 1e-7),
    ("0.0120", 0.012, None, 3, 0.0001),
    ("500", 500.0, None, 3, 1.0),
    ("5.", 5.0, None, 1, 1.0),
    (".0123", 0.0123, None, 3, 0.0001),
    ("+2", 2.0, None, 1, 1.0),
    ("0.00", 0.0, None, 1, 0.01),
    ("  1.8 ", 1.8, None, 2, 0.1),
]


@pytest.mark.parametrize(("text", "value", "plus_minus", "digits", "last_place"), NOTATIONS)
def test_notations(text, value, plus_minus, digits, last_place):
    printed = parse_printed(text)
    assert (printed.value, printed.plus_minus) == (value, plus_minus)
    assert (printed.digits, printed.last_place) == (digits, last_place)
    assert printed.text == text.strip(" ")


def test_a_decimal_comma_is_read_only_where_the_source_prints_one():
    printed = parse_printed("5,35 × 10^-13", decimal_comma=True)
    assert (printed.value, printed.digits, printed.last_place) == (5.35e-13, 3, 1e-15)
    assert parse_printed("–13 774,5(2)", decimal_comma=True).plus_minus == 0.2


# Text, column of the first character that cannot be, a word of the cure.
REFUSED = [
    ("", 1, "such as"),
    ("   ", 1, "such as"),
    ("abc", 1, "such as"),
    ("<1e-5", 1, "such as"),
    ("ca. 5", 1, "such as"),
    ("± 5", 1, "such as"),
    ("-", 2, "such as"),
    ("- −5", 3, "such as"),
    ("nan", 1, "such as"),
    ("\u0661", 1, "such as"),
    ("5,35 × 10^-13", 2, "decimal commas"),
    ("13,774", 3, "decimal commas"),
    ("1.8 ± 0,2", 8, "decimal commas"),
    ("10^-7.149", 3, "follow"),
    ("1.8 × 10^-7.149", 12, "follow"),
    ("1.8 × 108", 4, "follow"),
    ("1.8 × 10^-8 M", 12, "follow"),
    ("13 7745", 3, "follow"),
    ("1374 500", 5, "follow"),
    ("13  774", 3, "follow"),
    ("1.8.2", 4, "follow"),
    ("1.8 1.9", 4, "follow"),
    ("1.8e-8e-9", 7, "follow"),
    ("1.8 × 10^-8 ± 0.2", 12, "both numbers"),
    ("1.8 ± 0.2 × 10^-8", 4, "both numbers"),
    ("1.8 ± -0.2", 7, "such as"),
    ("1.8 ±", 6, "such as"),
    ("(7.5) × 10^3", 5, "±"),
    ("(7.5 ± 0.2", 11, "close"),
    ("7.57(8", 7, "close"),
    ("7.57()", 6, "such as"),
    ("1e400", 1, "too large"),
    ("1e-400", 1, "too small"),
    ("1 ± 0." + "0" * 400 + "1", 1, "too small"),
    ("1e99999", 2, "power of ten"),
]


@pytest.mark.parametrize(("text", "column", "cure"), REFUSED)
def test_refusals_name_the_column_and_a_cure(text, column, cure):
    with pytest.raises(PrintedError) as caught:
        parse_printed(text)
    assert caught.value.column == column
    assert cure in caught.value.cure
    assert str(caught.value).isprintable()


def test_a_point_among_decimal_commas_is_refused():
    with pytest.raises(PrintedError) as caught:
        parse_printed("-1.234,5", decimal_comma=True)
    assert caught.value.column == 3


@given(
    st.booleans(),
    st.integers(0, 10**18),
    st.integers(0, 20),
    st.integers(-60, 60),
    st.sampled_from([" × 10^", "x10^", "·10^", "e", "E"]),
    st.sampled_from("-−–"),
)
def test_what_is_printed_is_the_nearest_float(negative, digits, places, power, times, minus):
    """The expected value comes from the decimal library, the text from string formatting."""
    mantissa = Decimal(digits).scaleb(-places)
    written = f"{mantissa:f}{times}{power}".replace("-", minus)
    printed = parse_printed((minus if negative else "") + written)
    expected = Decimal(f"{'-' if negative else ''}{digits}e{power - places}")
    assert printed.value == float(expected)
    assert printed.last_place == float(f"1e{power - places}")
    assert printed.digits == (len(str(digits)))


@given(st.integers(1, 10**9), st.integers(0, 8), st.integers(1, 99), st.integers(-40, 40))
def test_the_three_notations_of_an_uncertainty_agree(digits, places, uncertainty, power):
    mantissa = Decimal(digits).scaleb(-places)
    spread = f"{Decimal(uncertainty).scaleb(-places):f}"
    concise = parse_printed(f"{mantissa:f}({uncertainty})e{power}")
    bracketed = parse_printed(f"({mantissa:f} ± {spread}) × 10^{power}")
    apart = parse_printed(f"{mantissa:f}e{power} ± {spread}e{power}")
    assert concise.plus_minus == float(f"{uncertainty}e{power - places}")
    for other in (bracketed, apart):
        assert (other.value, other.plus_minus) == (concise.value, concise.plus_minus)


@given(
    st.text("0123456789 .,()±+-−–×x·^eE10⁻⁸\u2009", max_size=25) | st.text(max_size=10),
    st.booleans(),
)
def test_no_text_raises_anything_but_the_refusal(text, decimal_comma):
    try:
        printed = parse_printed(text, decimal_comma)
    except PrintedError as refusal:
        assert 1 <= refusal.column <= len(text) + 1
    else:
        assert printed.digits >= 1
        assert printed.last_place > 0
