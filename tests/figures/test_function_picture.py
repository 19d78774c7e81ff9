"""The picture of f: iterates on the zero line, the lines of the step, breaks at poles, windows to zoom in."""

import math
from collections.abc import Callable

import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.pictures import check_lines, gaps, numbers
from surefoot.figures.characters import ASCII, Characters
from surefoot.figures.cobweb_picture import cobweb_picture
from surefoot.figures.function_picture import Samples, function_picture, zoom
from surefoot.figures.picture import Axis, Mark, Segment
from surefoot.figures.plot import draw
from surefoot.figures.poles import broken_at_poles
from surefoot.figures.step_shape import Shape, StepShape, step_segments


def sampled(f: Callable[[float], float], low: float, high: float, count: int = 100) -> Samples:
    xs = [low * (1 - n / (count - 1)) + high * (n / (count - 1)) for n in range(count)]
    return xs, [f(x) for x in xs]


def cubic(x: float) -> float:
    return x**3 - 2 * x - 5


shapes = st.sampled_from(["tangent", "chord", "bracket", "cobweb", "parabola"])
points = st.lists(st.tuples(numbers, gaps), max_size=4)


@given(points, points, shapes, points, gaps, gaps, st.booleans())
def test_any_step_can_be_drawn(
    samples: list[tuple[float, float | None]],
    iterates: list[tuple[float, float | None]],
    shape: Shape,
    rests_on: list[tuple[float, float | None]],
    landing: float | None,
    slope: float | None,
    unicode: bool,
) -> None:
    step = StepShape(shape, tuple(rests_on), landing, slope)
    xs, ys = [x for x, _ in samples], [y for _, y in samples]
    picture = function_picture((xs, ys), iterates=iterates, step=step, bounds=(-1.0, 1.0))
    check_lines(draw(picture, 28, 8, Characters(unicode)), 28, 8, unicode)
    cobweb = cobweb_picture((xs, ys), iterates=[x for x, _ in iterates])
    check_lines(draw(cobweb, 28, 8, Characters(unicode)), 28, 8, unicode)


def test_iterates_stand_on_the_zero_line_with_the_one_in_hand_last() -> None:
    iterates = [(3.0, 16.0), (2.4, 4.0), (2.15, 0.6), (2.1, 0.06)]
    marks = function_picture(sampled(cubic, 1, 3), iterates=iterates, marks=(Mark(2.0, None, "a", on_zero=True),)).marks
    assert [(mark.x, mark.height, mark.kind) for mark in marks] == [
        (3.0, 0.0, "iterate"),
        (2.4, 0.0, "iterate"),
        (2.15, 0.0, "previous"),
        (2.0, 0.0, "a"),
        (2.1, 0.0, "current"),
    ]


@pytest.mark.parametrize(("count", "kinds"), [(0, []), (1, ["current"]), (2, ["previous", "current"])])
def test_few_iterates(count: int, kinds: list[str]) -> None:
    picture = function_picture(sampled(cubic, 1, 3), iterates=[(2.0, -1.0)] * count)
    assert [mark.kind for mark in picture.marks] == kinds


def test_the_range_is_that_of_the_samples_unless_the_axis_says_otherwise() -> None:
    picture = function_picture(sampled(cubic, 1, 3), x=Axis("x", "m"))
    assert (picture.x.title, picture.x.low, picture.x.high) == ("x [m]", 1.0, 3.0)
    assert function_picture(sampled(cubic, 1, 3), x=Axis("x", low=2.0)).x.low == 2.0
    assert function_picture(([], []), x=Axis("x")).x.low is None


def test_a_tangent_goes_from_its_point_to_where_it_lands() -> None:
    # Newton-Raphson on x^3 - 2x - 5 from 2: f = -1, f' = 10, next 2.1 (Newton's own example, from memory).
    assert step_segments(StepShape("tangent", ((2.0, -1.0),), 2.1)) == (Segment(2.0, -1.0, 2.1, 0.0),)
    assert step_segments(StepShape("tangent", ((2.0, -1.0),), slope=10.0)) == (Segment(2.0, -1.0, 2.1, 0.0),)
    assert step_segments(StepShape("tangent", ((2.0, -1.0),))) == ()
    assert step_segments(StepShape("tangent", ((2.0, -1.0),), slope=0.0)) == ()
    assert step_segments(StepShape("tangent", ((2.0, None),), 2.1)) == ()


def test_a_chord_goes_through_its_points_to_where_it_lands() -> None:
    chord = StepShape("chord", ((3.0, 16.0), (2.0, -1.0)), 2.0 + 1 / 17)
    first, second = step_segments(chord)
    assert (first.x0, first.y0, second.x1, second.y1) == (2.0, -1.0, 3.0, 16.0)
    assert (first.x1, first.y1) == (second.x0, second.y0) == (2.0 + 1 / 17, 0.0)


def test_the_ends_of_a_bracket_stand_on_the_zero_line() -> None:
    step = StepShape("bracket", ((3.0, 16.0), (2.0, -1.0)), 2.5)
    marks = function_picture(sampled(cubic, 1, 4), iterates=[(2.5, 5.6)], step=step).marks
    assert [(mark.kind, mark.x, mark.y, mark.height) for mark in marks] == [
        ("bracket_low", 2.0, -1.0, 0.0),
        ("bracket_high", 3.0, 16.0, 0.0),
        ("current", 2.5, 5.6, 0.0),
    ]
    assert step_segments(step) == ()


def test_the_points_of_a_step_are_marked_on_the_curve_and_kept_in_the_picture() -> None:
    picture = function_picture(sampled(cubic, 1, 3), step=StepShape("tangent", ((3.0, 16.0),), 2.36))
    assert picture.marks == (Mark(3.0, 16.0, "base"),)
    assert picture.marks[0].keep


def test_a_parabola_goes_through_its_points() -> None:
    def parabola(x: float) -> float:
        return (x - 1) * (x - 4)

    three = tuple((x, parabola(x)) for x in (0.0, 2.0, 3.0))
    pieces = step_segments(StepShape("parabola", three, 1.0))
    assert (pieces[0].x0, pieces[-1].x1) == (0.0, 3.0)
    for piece in pieces:
        assert piece.y1 == pytest.approx(parabola(piece.x1), abs=1e-12)
    # Inverse interpolation: x over f, so the curve passes zero where the step landed.
    turned = tuple((y * y, y) for y in (1.0, 2.0, 3.0))
    pieces = step_segments(StepShape("parabola", turned, 0.0))
    assert (pieces[0].x0, pieces[0].y0) == (pytest.approx(0.0, abs=1e-12), 0.0)
    for piece in pieces:
        assert piece.x1 == pytest.approx(piece.y1**2, abs=1e-12)
    assert step_segments(StepShape("parabola", ((1.0, 1.0), (1.0, 2.0), (1.0, 2.0)))) == ()
    assert step_segments(StepShape("parabola", ((1.0, 1.0), (2.0, 2.0)), 0.0)) == (Segment(0.0, 0.0, 1.0, 1.0),)


@given(st.floats(0.05, 0.95), st.integers(40, 400))
def test_poles_are_found_where_they_are_and_roots_are_not_taken_for_poles(at: float, count: int) -> None:
    xs = [n / (count - 1) for n in range(count)]
    if min(abs(x - at) for x in xs) < 1e-9:
        return
    curve, poles = broken_at_poles(xs, [1 / (x - at) for x in xs])
    (pole,) = poles
    assert abs(pole - at) <= 0.5 / (count - 1) + 1e-12
    assert math.isnan(next(y for x, y in zip(curve.xs, curve.ys, strict=True) if x == pole) or 0.0)
    for f in (lambda x: x - at, lambda x: (x - at) ** 3, lambda x: math.atan(1e9 * (x - at)), lambda x: x - 2.0):
        ys = [f(x) for x in xs]
        assert broken_at_poles(xs, ys)[1] == []
        assert list(broken_at_poles(xs, ys)[0].ys) == ys


def test_poles_of_the_tangent() -> None:
    _, poles = broken_at_poles(*sampled(math.tan, -6, 6, 200))
    assert poles == pytest.approx([-1.5 * math.pi, -0.5 * math.pi, 0.5 * math.pi, 1.5 * math.pi], abs=6 / 199)


def test_a_jump_over_zero_breaks_the_curve_and_missing_values_do_not() -> None:
    assert broken_at_poles([0, 1, 2, 3, 4, 5, 6, 7], [-0.1, -0.1, -0.1, -0.1, -0.1, 2.0, 2.0, -0.1])[1] == [4.5, 6.5]
    assert broken_at_poles([0, 1, 2], [-1.0, None, 1.0])[1] == []
    # A steep root towards which |f| falls from one side, and noise about zero, are no poles.
    assert broken_at_poles(list(range(13)), [-0.1] * 9 + [-9.0, -5.0, 9.0, 5.0])[1] == []
    assert broken_at_poles(list(range(13)), [5.0, 9.0, -5.0, -9.0] + [-0.1] * 9)[1] == []
    assert broken_at_poles(list(range(40)), [(-1.0) ** n for n in range(40)])[1] == []
    assert broken_at_poles([], [])[1] == []


def test_zoom_takes_in_the_last_iterates_that_differ() -> None:
    iterates = [(9.0, None), (3.0, 1.0), (2.5, 1.0), (2.0, 1.0), (2.0, 1.0)]
    assert zoom(iterates, count=3, margin=0.25) == (1.75, 3.25)
    assert zoom(iterates, count=2, margin=1.0) == (1.5, 3.0)
    assert zoom(iterates[:1]) == (pytest.approx(8.1), pytest.approx(9.9))
    assert zoom([(0.0, None)]) == (-1.0, 1.0)
    assert zoom([(math.nan, None), (math.inf, None)]) is None
    assert zoom([]) is None


def test_zoom_never_goes_below_the_last_places_of_x() -> None:
    low, high = zoom([(1.5, 0.0), (math.nextafter(1.5, 2), 0.0)]) or (0.0, 0.0)
    assert 8 * math.ulp(1.5) <= 1.5 - low <= 9 * math.ulp(1.5)
    assert 8 * math.ulp(1.5) <= high - 1.5 <= 10 * math.ulp(1.5)


@given(st.lists(st.tuples(numbers, st.none()), max_size=6))
def test_a_zoom_window_is_finite_and_has_a_width(iterates: list[tuple[float, None]]) -> None:
    window = zoom(iterates)
    if window is not None:
        assert all(map(math.isfinite, window))
        assert window[0] < window[1]


def test_a_cobweb_climbs_to_g_and_goes_across_to_the_diagonal() -> None:
    picture = cobweb_picture(sampled(math.cos, 0, 1), iterates=[1.0, math.cos(1.0), math.nan], x=Axis("T", "K"))
    g = math.cos(1.0)
    assert picture.segments == (Segment(1.0, 1.0, 1.0, g), Segment(1.0, g, g, g))
    assert [(mark.x, mark.y, mark.kind) for mark in picture.marks] == [(1.0, 1.0, "previous"), (g, g, "current")]
    assert list(picture.curves[1].xs) == list(picture.curves[1].ys) == [0.0, 1.0]
    assert (picture.x.title, picture.y.title) == ("T [K]", "g [K]")
    assert draw(cobweb_picture(([], [])), 24, 1, ASCII) == ["no value of g here".center(24)]
