"""Strokes: whatever a curve holds, few finite points inside the unit square reach the drawing."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.pictures import curves, numbers
from surefoot.figures.picture import Curve, Segment
from surefoot.figures.scale import Scale
from surefoot.figures.strokes import curve_strokes, dashed, segment_strokes

UNIT = Scale(0.0, 1.0)


@given(curves, st.integers(1, 50))
def test_every_point_lies_in_the_unit_square(curve: Curve, columns: int) -> None:
    for stroke in curve_strokes(curve, Scale(-1.0, 2.0), Scale(-1e-3, 1e3), columns):
        assert stroke
        assert all(0 <= x <= 1 and 0 <= y <= 1 for x, y in stroke)


@given(numbers, numbers, numbers, numbers)
def test_a_segment_is_one_stroke_in_the_unit_square_or_none(x0: float, y0: float, x1: float, y1: float) -> None:
    strokes = segment_strokes(Segment(x0, y0, x1, y1), Scale(-1.0, 2.0), Scale(-2.0, 1.0))
    assert len(strokes) <= 1
    assert all(0 <= x <= 1 and 0 <= y <= 1 for stroke in strokes for x, y in stroke)


def test_lines_are_cut_where_they_leave_the_picture() -> None:
    (stroke,) = curve_strokes(Curve([-1.0, 3.0], [-1.0, 3.0]), UNIT, UNIT, 10)
    assert stroke == [(0.0, 0.0), (1.0, 1.0)]
    (stroke,) = curve_strokes(Curve([0.25, 0.5], [0.5, 1.5]), UNIT, UNIT, 10)
    assert stroke == [(0.25, 0.5), (0.375, 1.0)]
    assert curve_strokes(Curve([0.0, 1.0], [2.0, 1.5]), UNIT, UNIT, 10) == []
    assert curve_strokes(Curve([0.0, 1.0], [1.5, 2.5]), UNIT, UNIT, 10) == []
    out_and_in = curve_strokes(Curve([0.0, 0.4, 0.6, 1.0], [0.5, 1.5, 1.5, 0.5]), UNIT, UNIT, 10)
    assert [len(stroke) for stroke in out_and_in] == [2, 2]
    assert out_and_in[0][1] == (pytest.approx(0.2), 1.0)


def test_a_line_to_a_point_far_away_keeps_its_direction() -> None:
    (stroke,) = segment_strokes(Segment(0.5, 0.5, 1e300, 0.0), UNIT, UNIT)
    assert stroke[1] == (1.0, pytest.approx(0.5, abs=1e-5))


def test_a_curve_breaks_at_what_is_no_number() -> None:
    for gap in (None, math.nan, math.inf, 10**400):
        strokes = curve_strokes(Curve([0.1, 0.2, 0.3, 0.4, 0.5], [0.5, 0.5, gap, 0.5, 0.5]), UNIT, UNIT, 10)
        assert [len(stroke) for stroke in strokes] == [2, 2]


def test_a_lone_point_is_a_stroke() -> None:
    assert curve_strokes(Curve([0.5], [0.5]), UNIT, UNIT, 10) == [[(0.5, 0.5)]]
    assert curve_strokes(Curve([0.5], [1.5]), UNIT, UNIT, 10) == []


def test_at_most_two_points_a_column_are_kept_and_the_extremes_are() -> None:
    xs = [n / 9999 for n in range(10000)]
    ys = [0.5 + 0.4 * math.sin(400 * x) for x in xs]
    ys[5003] = 0.999
    (stroke,) = curve_strokes(Curve(xs, ys), UNIT, UNIT, 20)
    assert len(stroke) <= 2 * 21
    assert (xs[5003], 0.999) in stroke
    assert [x for x, _ in stroke] == sorted(x for x, _ in stroke)


def test_dashes_are_two_dots_on_and_two_off() -> None:
    dashes = dashed([[(0.0, 0.5), (1.0, 0.5)]], 41, 10)
    assert [[round(x * 40) for x, _ in dash] for dash in dashes] == [[n, min(n + 1, 40)] for n in range(0, 40, 4)]
