"""Any data in any size, far more cases than in the normal run."""

import math

from hypothesis import given, settings
from hypothesis import strategies as st

from support.pictures import check_lines, pictures
from surefoot.figures.characters import ASCII, Characters
from surefoot.figures.picture import Curve, Mark, Picture
from surefoot.figures.plot import draw


@settings(max_examples=20_000, deadline=None)
@given(pictures, st.integers(0, 250), st.integers(0, 80), st.booleans())
def test_any_data_gives_exactly_the_cells_asked_for(picture: Picture, width: int, height: int, unicode: bool) -> None:
    check_lines(draw(picture, width, height, Characters(unicode)), width, height, unicode)


def test_a_million_points_and_marks_are_drawn() -> None:
    xs = [n / 10**6 for n in range(10**6)]
    ys = [math.sin(50 * x) for x in xs]
    marks = tuple(Mark(x, y, "iterate") for x, y in zip(xs, ys, strict=True))
    for picture in (Picture(curves=(Curve(xs, ys),)), Picture(marks=marks)):
        lines = draw(picture, 60, 12, ASCII)
        check_lines(lines, 60, 12, False)
        assert all(line[5:].strip() for line in lines)
