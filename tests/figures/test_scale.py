"""Limits that a picture chooses itself, and where values lie between them."""

import math
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.pictures import pictures
from surefoot.figures.picture import Axis, Curve, Mark, Picture, Segment
from surefoot.figures.scale import FAR, Scale, scales

finite = st.floats(allow_nan=False, allow_infinity=False)


@given(finite, finite, finite)
def test_fractions_are_those_of_exact_arithmetic(low: float, high: float, value: float) -> None:
    if low >= high:
        return
    exact = (Fraction(value) - Fraction(low)) / (Fraction(high) - Fraction(low))
    expected = min(max(exact, Fraction(-FAR)), Fraction(FAR))
    # Three roundings of 2**-53, each of numbers no larger than the greatest of the three.
    scale = max(abs(low), abs(high), abs(value))
    slack = Fraction(4, 2**53) * Fraction(scale or 1) / (Fraction(high) - Fraction(low)) + Fraction(4, 2**53)
    assert abs(Fraction(Scale(low, high).fraction(value)) - expected) <= slack * (1 + abs(expected))


def test_fractions_of_a_range_that_is_wider_than_any_float() -> None:
    scale = Scale(-1.7e308, 1.7e308)
    assert [scale.fraction(value) for value in (-1.7e308, 0.0, 0.85e308, 1.7e308)] == pytest.approx(
        [0.0, 0.5, 0.75, 1.0]
    )


@pytest.mark.parametrize("value", [None, math.nan, math.inf, -math.inf, 10**400])
def test_what_has_no_place_has_no_fraction(value: float | None) -> None:
    assert math.isnan(Scale(0.0, 1.0).fraction(value))


def test_a_logarithmic_axis_has_no_place_for_zero() -> None:
    scale = Scale(-6.0, 0.0, log=True)
    assert scale.fraction(1e-3) == pytest.approx(0.5, abs=1e-12)
    assert all(math.isnan(scale.fraction(value)) for value in (0.0, -1.0))


@given(pictures)
def test_limits_are_finite_and_differ(picture: Picture) -> None:
    axes = scales(picture)
    if axes is not None:
        for scale in axes:
            assert math.isfinite(scale.low)
            assert math.isfinite(scale.high)
            assert scale.low < scale.high


def y_limits(ys: list[float | None], **rest: object) -> tuple[float, float]:
    picture = Picture(curves=(Curve(list(range(len(ys))), ys),), **rest)  # type: ignore[arg-type]
    axes = scales(picture)
    assert axes is not None
    return axes[1].low, axes[1].high


def test_limits_take_in_all_values_where_none_stands_out() -> None:
    assert y_limits([-2.0, 0.5, 3.0]) == (-2.0, 3.0)
    assert y_limits([x**3 for x in (0.0, 1.0, 2.0, 3.0, 4.0, 5.0, 6.0)]) == (0.0, 216.0)
    assert y_limits([0.0] * 9 + [1.0]) == (0.0, 1.0)


def test_a_pole_is_left_out_but_what_is_kept_is_not() -> None:
    tangent = [math.tan(n / 100) for n in range(-628, 629)]
    low, high = y_limits(list(tangent))
    # The upper quartile of |tan| is tan(3 pi/8), for angles spread evenly.
    assert high == pytest.approx(3 * math.tan(3 * math.pi / 8), rel=0.02)
    assert low == -high
    kept = (Mark(3.0, 50.0, "base"), Mark(3.0, 500.0, "iterate", keep=False), Mark(-9.0, 999.0, "base"))
    assert y_limits(list(tangent), marks=kept, x=Axis(low=0.0, high=1256.0))[1] == 50.0


def test_the_zero_line_is_always_in_the_picture() -> None:
    assert y_limits([5.0, 6.0], horizontals=(0.0,)) == (0.0, 6.0)


def test_given_limits_hold_and_are_put_in_order() -> None:
    axes = scales(Picture(x=Axis(low=2.0, high=1.0), y=Axis(low=-1.0, high=1.0)))
    assert axes is not None
    assert [(scale.low, scale.high) for scale in axes] == [(1.0, 2.0), (-1.0, 1.0)]


def test_values_beside_the_picture_do_not_count() -> None:
    picture = Picture(curves=(Curve([0, 1, 2], [1.0, 2.0, 99.0]),), x=Axis(low=0.0, high=1.0))
    axes = scales(picture)
    assert axes is not None
    assert (axes[1].low, axes[1].high) == (1.0, 2.0)


def test_straight_lines_count_for_the_width_alone() -> None:
    axes = scales(Picture(segments=(Segment(0.0, 0.0, 4.0, 99.0),), horizontals=(0.0, 1.0)))
    assert axes is not None
    assert [(scale.low, scale.high) for scale in axes] == [(0.0, 4.0), (0.0, 1.0)]


@pytest.mark.parametrize("value", [0.0, 2.5, -2.5, 5e-324, 1.7976931348623157e308, -1.7976931348623157e308])
def test_a_single_value_gets_room_around_it(value: float) -> None:
    low, high = y_limits([value])
    assert low <= value <= high
    assert low < high


def test_nothing_finite_has_no_limits() -> None:
    assert scales(Picture(curves=(Curve([1.0, 2.0], [math.nan, None]),))) is None
    assert scales(Picture()) is None
