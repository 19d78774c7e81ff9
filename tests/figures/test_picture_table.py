"""The numbers of a picture as lines, for terminals too small to draw in."""

import math

from hypothesis import given
from hypothesis import strategies as st

from support.pictures import check_lines, pictures
from surefoot.figures.characters import ASCII, Characters
from surefoot.figures.picture import Axis, Curve, Mark, Picture
from surefoot.figures.picture_table import as_table

PICTURE = Picture(
    curves=(Curve([0.0, 1.0, 2.0, 3.0], [-4.0, None, math.pi, 1e9]),),
    marks=(Mark(6.1, 150.0, "previous", on_zero=True), Mark(1.7831643, None, "current", on_zero=True)),
    x=Axis("y", "m"),
    y=Axis("f", "m3/s"),
)


@given(pictures, st.integers(0, 60), st.integers(0, 20), st.booleans())
def test_any_picture_has_a_table_of_the_size_asked_for(
    picture: Picture, width: int, height: int, unicode: bool
) -> None:
    check_lines(as_table(picture, width, height, Characters(unicode)), width, height, unicode)


def test_marks_come_first_the_latest_at_the_top_then_the_curve() -> None:
    assert [line.rstrip() for line in as_table(PICTURE, 30, 7, ASCII)] == [
        "  y [m] f [m3/s]",
        "o 1.78316",
        "x 6.10000 +1.50e+02",
        "  0 -4.00e+00",
        "  2 +3.14e+00",
        "  3 +1.00e+09",
        "",
    ]


def test_few_lines_take_points_spread_over_the_curve() -> None:
    curve = Curve(list(range(100)), list(range(100)))
    lines = [line.split() for line in as_table(Picture(curves=(curve,)), 30, 4, ASCII)]
    assert [line[0] for line in lines] == ["0", "25", "50", "75"]


def test_a_narrow_line_has_fewer_digits_and_at_last_a_cut_number_that_shows_it() -> None:
    assert as_table(PICTURE, 12, 3, ASCII)[1:] == ["o 1.78316   ", "x 6.10000   "]
    assert as_table(PICTURE, 7, 3, ASCII)[1:] == ["o 1.783", "x 6.100"]
    assert as_table(PICTURE, 3, 2, ASCII)[1] == "o 2"
    assert as_table(PICTURE, 2, 2, ASCII)[1] == "o~"


def test_an_empty_picture_says_so() -> None:
    assert as_table(Picture(empty="no value of f here"), 20, 2, ASCII) == ["no value of f here  ", " " * 20]
