"""Chords with a scaled end and curves through four points, as bracketing methods take them for true."""

from __future__ import annotations

import math

import pytest

from surefoot.figures.step_shape import StepShape, step_segments


def test_a_chord_with_a_scaled_end_is_one_straight_line() -> None:
    """Illinois on x^2 - 2: through (1.4, -0.04) and (2, 1), where f(2) is 2."""
    slope = 1.04 / 0.6
    landing = 1.4 + 0.04 / slope
    segments = step_segments(StepShape("chord", ((1.4, -0.04), (2.0, 2.0)), landing, slope))
    assert [(segment.x0, segment.y0) for segment in segments] == [(1.4, -0.04), (landing, 0.0)]
    assert (segments[-1].x1, segments[-1].y1) == (2.0, pytest.approx(1.0))


def test_a_line_whose_slope_is_lost_goes_through_its_points() -> None:
    for slope in (math.nan, math.inf, 1e308):
        segments = step_segments(StepShape("chord", ((0.0, -1.0), (1e10, 3.0)), 2.5e9, slope))
        assert (segments[-1].x1, segments[-1].y1) == (1e10, 3.0)


def test_an_inverse_cubic_goes_through_four_points_and_its_landing() -> None:
    """x = f^3/8 + f + 1: zero at 1."""

    def place(f: float) -> float:
        return f**3 / 8 + f + 1

    points = tuple((place(f), f) for f in (-2.0, 1.0, 3.0, -1.0))
    segments = step_segments(StepShape("parabola", points, 1.0))
    for segment in segments:
        assert segment.x1 == pytest.approx(place(segment.y1), abs=1e-9)
    assert (segments[0].y0, segments[-1].y1) == (-2.0, 3.0)


def test_a_curve_that_values_do_not_fix_is_not_drawn() -> None:
    assert step_segments(StepShape("parabola", ((0.0, 1.0), (1.0, 1.0), (2.0, -1.0), (3.0, 2.0)), 1.5)) == ()
