"""Columns of iterates: fixed width, digit under digit, and the mark behind the digits that did not change."""

import math
from decimal import Decimal
from typing import cast

import pytest
from hypothesis import given
from hypothesis import strategies as st

from surefoot.figures.columns import column_layout, iterate_column, with_steady_mark

# Newton-Raphson on a trapezoidal channel; the digits are those of the sketch of the step log.
DEPTHS = [3.6744937721, 2.3716946576, 1.8685718634, 1.7853874719, 1.7831642853]

numbers = st.floats() | st.none() | st.sampled_from(["f32:0.1", "mp50:1.25", "division by zero: 1/x at 0", "-0.0"])


def test_a_solve_takes_hold() -> None:
    assert iterate_column(DEPTHS, 13, before=6.11) == [
        "'3.6744937721",
        "'2.3716946576",
        "'1.8685718634",
        "1.'7853874719",
        "1.78'31642853",
    ]


@pytest.mark.parametrize(
    ("text", "previous", "marked"),
    [
        ("1.7853", "1.8685", "1.'7853"),
        ("1.7831", "1.7853", "1.78'31"),
        ("2.3716", "3.6744", "'2.3716"),
        ("1.7831", "1.7831", "1.7831'"),
        (" 9.99", "10.01", " '9.99"),
        ("10.01", " 9.99", "'10.01"),
        ("13.3", "12.3", "1'3.3"),
        ("1.23", "12.3", "'1.23"),
        ("-1.23", "1.23", "'-1.23"),
        (" 1.23", "-1.23", " '1.23"),
        ("-1.23", "-1.24", "-1.2'3"),
        ("1.234", "1.23", "1.23'4"),
        ("1.23", "1.234", "1.23'"),
        ("1.23e-05", "1.24e-05", "1.2'3e-05"),
        ("1.23e-05", "1.23e-06", "'1.23e-05"),
        ("1.23e-05 ", "1.23e-05 ", "1.23e-05' "),
        ("0", "0", "0'"),
        ("nan", "1.2", " nan"),
        ("1.2", "nan", " 1.2"),
        ("1.2", "", " 1.2"),
    ],
)
def test_the_mark_stands_behind_the_digits_that_did_not_change(text: str, previous: str, marked: str) -> None:
    assert with_steady_mark(text, previous) == marked


def test_another_mark() -> None:
    assert with_steady_mark("1.78", "1.75", "|") == "1.7|8"


@given(st.lists(numbers, max_size=12), st.integers(0, 40), numbers)
def test_every_line_has_the_width_of_the_column(values: list[float | str | None], width: int, before: float) -> None:
    lines = iterate_column(values, width, before)
    assert [len(line) for line in lines] == [width] * len(values)
    assert all(line.isascii() for line in lines)


@given(st.lists(st.floats(allow_nan=False, allow_infinity=False), min_size=1, max_size=12), st.integers(11, 40))
def test_what_is_written_is_the_number_rounded(values: list[float], width: int) -> None:
    layout = column_layout(values, width)
    for x in values:
        written = Decimal(layout.text(x))
        half_place = Decimal(5).scaleb(cast(int, written.as_tuple().exponent) - 1)
        assert abs(written - Decimal(x)) <= half_place
        assert len(written.as_tuple().digits) >= 3 or x == 0.0


@given(st.floats(1e-3, 1e6), st.lists(st.floats(0.9, 1.1), min_size=1, max_size=8), st.integers(16, 30))
def test_near_numbers_stand_point_under_point(x: float, factors: list[float], width: int) -> None:
    values = [x * factor for factor in factors]
    layout = column_layout(values, width)
    assert len({layout.text(value).index(".") for value in values}) == 1
    assert not any("e" in layout.text(value) for value in values)


def test_at_most_the_digits_of_the_arithmetic_are_shown() -> None:
    assert iterate_column([12.3, 1.1], 40)[0].strip() == "12.300000000000001"
    assert iterate_column([12.3, 1.1], 40)[1].strip() == "'1.1000000000000001"
    assert iterate_column(["f32:0.1", "f32:0.12"], 16) == [" 0.100000001    ", "0.1'19999997    "]
    assert iterate_column(["mp20:0.33333333333333333333"], 40)[0].strip() == "0.33333333333333333333"


def test_huge_tiny_and_missing_values_keep_the_others_legible() -> None:
    assert iterate_column([1.0, 1e12, -1e300, 1.3, math.nan, "division by zero: 1/x at 0", 1.31], 16, before=0.5) == [
        "'1.0000000000000",
        "'1.000000000e+12",
        "'-1.0000000e+300",
        "'1.3000000000000",
        " nan            ",
        " division by ze~",
        " 1.3100000000000",
    ]
    assert iterate_column([1e-7, 1.2e-7], 16) == [" 1.000000000e-07", "1.'200000000e-07"]


def test_the_last_number_decides_where_not_all_can_be_shown_alike() -> None:
    ran_away = iterate_column([1.5, 1.6, 1.7, 123456789.125], 14)
    assert ran_away[-1] == "'123456789.125"
    assert ran_away[0] == " 1.5000000e+00"


def test_nothing_is_shown_rather_than_a_wrong_number() -> None:
    assert iterate_column([1e22], 5) == [" ~~~~"]
    assert iterate_column([1e22], 6) == [" 1e+22"]
