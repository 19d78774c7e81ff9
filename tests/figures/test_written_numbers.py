"""Numbers as text: the digits are those of the exact value, and words stay words."""

import math
from decimal import ROUND_HALF_EVEN, Context, Decimal

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from surefoot.figures.numbers import all_digits, order, ratio, short, significant, with_unit

finite = st.floats(allow_nan=False, allow_infinity=False)


@given(finite, st.integers(1, 25))
def test_significant_rounds_the_exact_value_half_to_even(x: float, digits: int) -> None:
    expected = Context(prec=digits, rounding=ROUND_HALF_EVEN).plus(Decimal(x))
    text = significant(x, digits)
    assert Decimal(text) == expected
    if x:
        assert len(Decimal(text).as_tuple().digits) == digits


@given(finite)
def test_all_digits_read_back_to_the_same_bits(x: float) -> None:
    back = float(all_digits(x))
    assert (back, math.copysign(1, back)) == (x, math.copysign(1, x))


@given(st.floats(width=32, allow_nan=False, allow_infinity=False))
def test_all_digits_of_binary32_read_back_and_equal_those_of_its_record_text(x: float) -> None:
    single = np.float32(x)
    assert np.float32(all_digits(single)) == single
    assert all_digits(f"f32:{single}") == all_digits(single)


@pytest.mark.parametrize(
    ("number", "digits", "text"),
    [
        (13.4567, 4, "13.46"),
        (0.00222, 3, "0.00222"),
        (9.996, 3, "10.0"),
        (99999.5, 3, "1.00e+05"),
        (0.2, 1, "0.2"),
        (0.00001, 2, "1.0e-05"),
        (4112, 4, "4112"),
        (41120, 4, "4.112e+04"),
        (-2.5, 1, "-2"),
        (5e-324, 3, "4.94e-324"),
        (10**400, 2, "1.0e+400"),
        (0.0, 5, "0"),
        (-0.0, 5, "-0"),
        (1.0, 0, "1"),
        ("mp20:1.41421356237309504880168872", None, "1.4142135623730950488"),
        ("0.1", None, "0.10000000000000001"),
    ],
)
def test_significant(number: float | str, digits: int | None, text: str) -> None:
    assert significant(number, digits) == text


@pytest.mark.parametrize(
    ("number", "word"),
    [
        (math.nan, "nan"),
        (-math.inf, "-inf"),
        ("inf", "inf"),
        ("f32:-inf", "-inf"),
        ("mp50:nan", "nan"),
        ("1e400", "inf"),
        ("outside the domain: ln(y - yc)", "outside the domain: ln(y - yc)"),
        ("1_0", "1_0"),
        ("mp50:1e-9999999999999999999999", "1e-9999999999999999999999"),
        (None, ""),
    ],
)
def test_what_is_no_finite_number_is_a_word(number: float | str | None, word: str) -> None:
    assert [significant(number, 3), all_digits(number), short(number)] == [word] * 3


@given(st.text() | finite | st.none() | st.integers())
def test_anything_can_be_written(number: float | str | None) -> None:
    assert isinstance(significant(number, 3), str)
    assert isinstance(short(number), str)


def test_short_form_always_shows_its_sign() -> None:
    assert [short(x) for x in (2.11e-5, -42.8, 1e-300, 0.0, -0.0)] == [
        "+2.11e-05",
        "-4.28e+01",
        "+1.00e-300",
        "0",
        "-0",
    ]
    assert short(-0.0022233, 2) == "-2.2e-03"


def test_order_and_ratio() -> None:
    assert [order(x) for x in (2.0, 1.618, None, math.nan, 1e5, -0.04)] == ["2.0", "1.6", "", "", "+1e+05", "-0.0"]
    assert [ratio(x) for x in (0.4142, 0.01234, 1.3e-7, None, math.nan, 0.0)] == [
        "0.41",
        "0.012",
        "1.3e-07",
        "",
        "",
        "0",
    ]


def test_a_unit_is_kept_as_given() -> None:
    assert with_unit("13.46", "m2/s") == "13.46 m2/s"
    assert [with_unit("0.02", unit) for unit in ("", "1")] == ["0.02", "0.02"]
    assert with_unit("", "m") == ""
