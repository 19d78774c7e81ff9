"""Tick labels: true to half a cell, read as a person reads them, never over each other."""

import math
from fractions import Fraction
from itertools import pairwise

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from support.pictures import labelled_value
from surefoot.figures.frame import Frame, frame_of
from surefoot.figures.picture import Axis, Picture
from surefoot.figures.raster import row_of
from surefoot.figures.scale import Scale
from surefoot.figures.ticks import Ticks, choose

limits = st.tuples(
    st.floats(allow_nan=False, allow_infinity=False), st.floats(allow_nan=False, allow_infinity=False)
) | st.tuples(st.floats(1.78316, 1.78317), st.integers(1, 1000)).map(lambda p: (p[0], p[0] + p[1] * math.ulp(p[0])))


def framed(x: Scale, y: Scale, width: int, height: int, picture: Picture | None = None) -> Frame:
    frame = frame_of(picture or Picture(), x, y, width, height)
    assert frame is not None
    return frame


def cells_off(value: Fraction, scale: Scale, dots: int, dots_a_cell: int, middle: Fraction) -> Fraction:
    """How many cells a place in cells, counted from the middle of the first, is off a value's place on the axis."""
    at_dot = (value - Fraction(scale.low)) / (Fraction(scale.high) - Fraction(scale.low)) * (dots - 1)
    return abs((at_dot - Fraction(dots_a_cell - 1, 2)) / dots_a_cell - middle)


@settings(deadline=None)
@given(limits, limits, st.integers(16, 200), st.integers(6, 60))
def test_no_label_lies_by_more_than_half_a_cell(
    x_limits: tuple[float, float], y_limits: tuple[float, float], width: int, height: int
) -> None:
    assume(x_limits[0] != x_limits[1] and y_limits[0] != y_limits[1])
    x, y = Scale(*sorted(x_limits)), Scale(*sorted(y_limits))
    frame = framed(x, y, width, height)
    half = Fraction(1, 2) + Fraction(1, 10**5)
    for start, text in frame.x_labels:
        middle = Fraction(start - frame.gutter) + Fraction(len(text) - 1, 2)
        value = labelled_value(text, frame.x_ticks.note)
        assert cells_off(value, x, frame.columns * 2, 2, middle) <= half
    for row, text in frame.y_labels:
        value = labelled_value(text.strip(), frame.y_ticks.note)
        assert cells_off(value, y, frame.rows * 4, 4, Fraction(frame.rows - 1 - row)) <= half


@settings(deadline=None)
@given(limits, st.integers(10, 200), st.integers(5, 60))
def test_labels_stand_apart_and_there_are_at_least_two(x_limits: tuple[float, float], width: int, height: int) -> None:
    assume(x_limits[0] != x_limits[1])
    scale = Scale(*sorted(x_limits))
    frame = framed(scale, scale, width, height)
    labels = frame.x_labels
    for (start, text), (after, _) in pairwise(labels):
        assert start + len(text) < after
    assert all(start >= 0 and start + len(text) <= width for start, text in labels)
    rows = [row for row, _ in frame.y_labels]
    assert len(set(rows)) == len(rows)
    if width >= 30 and height >= 6:
        assert len(labels) >= 2
        assert len(rows) >= 2


def test_labels_have_at_most_four_digits() -> None:
    for low, high in ((0.0, 1.0), (-123456.0, 987654.0), (1.78316, 1.783167), (1e-9, 3e-8), (0.005, 0.1)):
        frame = framed(Scale(low, high), Scale(low, high), 120, 30)
        for tick in (*frame.x_ticks.ticks, *frame.y_ticks.ticks):
            assert len(tick.text.lstrip("-0.").replace(".", "")) <= 4


def spread(scale: Scale, cells: int) -> Ticks:
    """Ticks of an axis of so many cells, four of them between labels."""
    return choose(scale, lambda ticks: all(b.fraction - a.fraction >= 4 / cells for a, b in pairwise(ticks)))


@pytest.mark.parametrize(
    ("scale", "cells", "texts", "note"),
    [
        (Scale(0.0, 6.0), 20, "0 2 4 6", ""),
        (Scale(0.05, 6.0), 20, "2 4 6", ""),
        (Scale(0.05, 0.3), 24, "0.05 0.10 0.15 0.20 0.25 0.30", ""),
        (Scale(0.005, 0.1), 20, "0.02 0.04 0.06 0.08 0.10", ""),
        (Scale(-1.0, 1.0), 20, "-1.0 -0.5 0 0.5 1.0", ""),
        (Scale(0.0, 90000.0), 20, "0 20000 40000 60000 80000", ""),
        (Scale(0.0, 2e45), 20, "0 0.5 1.0 1.5 2.0", "e+45"),
        (Scale(1e-9, 3e-8), 20, "1 2 3", "e-8"),
        (Scale(1.7831612, 1.7831668), 12, "2 4 6", "1.78316 + e-6"),
        (Scale(-0.018500002, -0.0185), 12, "8 9 10", "-0.01850001 + e-9"),
        (Scale(123456.0, 123456.001), 12, "0 5 10", "123456 + e-4"),
        (Scale(0.0, 5e-324), 12, "0 2 4", "e-324"),
        (Scale(0.0, 9.0, whole=True), 40, "0 1 2 3 4 5 6 7 8 9", ""),
        (Scale(0.0, 3.0, whole=True), 80, "0 1 2 3", ""),
        (Scale(-16.0, 1.0, log=True), 20, "1e-15 1e-10 1e-5 1e0", ""),
        (Scale(-300.0, 300.0, log=True), 12, "1e-200 1e0 1e200", ""),
        (Scale(-3.0, math.log10(0.004), log=True), 12, "0.002 0.004", ""),
    ],
)
def test_chosen_labels(scale: Scale, cells: int, texts: str, note: str) -> None:
    ticks = spread(scale, cells)
    assert (" ".join(tick.text for tick in ticks.ticks), ticks.note) == (texts, note)


def test_labels_of_a_logarithmic_axis_stand_at_the_logarithm() -> None:
    ticks = spread(Scale(-3.0, math.log10(0.004), log=True), 12)
    span = math.log10(0.004) + 3
    assert [tick.fraction for tick in ticks.ticks] == pytest.approx([math.log10(2) / span, 1.0], abs=1e-12)


def test_close_rows_rather_than_a_single_label() -> None:
    frame = framed(Scale(0.0, 1.0), Scale(-3.0, 4.0), 30, 8)
    assert len(frame.y_labels) >= 2
    assert frame.y_labels[0][0] > frame.y_labels[1][0]
    assert frame.y_labels[0][0] == row_of(frame.y_ticks.ticks[0].fraction, frame.rows)


def test_labels_leave_the_title_alone() -> None:
    frame = framed(Scale(20.0, 100.0), Scale(0.0, 3.0), 40, 8, Picture(x=Axis("f")))
    assert (frame.gutter, frame.left) == (2, 2)
    assert min(start for start, _ in frame.x_labels) >= 2  # `20` would stick out to the left


def test_a_narrow_picture_has_no_labels_at_its_side() -> None:
    frame = framed(Scale(0.0, 1.0), Scale(0.0, 0.001), 14, 8)
    assert (frame.gutter, frame.columns, frame.y_labels) == (0, 14, [])


def test_room_is_made_for_a_label_that_sticks_out() -> None:
    x = Scale(0.005, 0.1)
    frame = framed(x, Scale(-2.0, 8.0), 28, 8, Picture(x=Axis("f")))
    assert len(frame.x_labels) >= 2
    assert frame.width == 28
