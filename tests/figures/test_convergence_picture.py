"""The picture of convergence: both series by their own letter, exact zeros and missing values marked."""

import math

from hypothesis import given
from hypothesis import strategies as st

from support.pictures import check_lines, gaps
from surefoot.figures.characters import ASCII, Characters
from surefoot.figures.convergence_picture import convergence_picture
from surefoot.figures.plot import draw


@given(
    st.lists(st.tuples(st.integers(0, 10**6), gaps, gaps), max_size=12),
    st.integers(0, 60),
    st.integers(0, 20),
    st.booleans(),
)
def test_any_steps_can_be_drawn(
    steps: list[tuple[int, float | None, float | None]], width: int, height: int, unicode: bool
) -> None:
    check_lines(draw(convergence_picture(steps), width, height, Characters(unicode)), width, height, unicode)


def test_both_series_are_told_apart_by_their_letters() -> None:
    steps = [(0, None, 1e2), (1, 1.0, 1.0), (2, -1e-2, -1e-4), (3, 1e-4, 1e-8)]
    picture = convergence_picture(steps, name="y")
    assert [(mark.x, mark.y, mark.kind) for mark in picture.marks] == [
        (1, 1.0, "d"),
        (2, 1e-2, "d"),
        (3, 1e-4, "d"),
        (0, 1e2, "r"),
        (1, 1.0, "r"),
        (2, 1e-4, "r"),
        (3, 1e-8, "r"),
    ]
    assert (picture.y.title, picture.y.low, picture.y.high) == ("d |dy|  r |residual|", 1e-8, 1e2)
    text = "\n".join(draw(picture, 60, 16, ASCII))
    assert text.count("d |dy|  r |residual|") == 1
    text = text.replace("d |dy|  r |residual|", "")
    assert (text.count("d"), text.count("r"), text.count("*")) == (2, 3, 1)


def test_an_exact_zero_stands_at_the_bottom_and_its_line_runs_down_to_it() -> None:
    picture = convergence_picture([(0, None, 1.0), (1, 1.0, 1e-5), (2, 1e-5, 0.0), (3, 0.0, 0.0)])
    low = picture.y.low or 0.0
    assert 0 < low < 1.01e-6
    assert picture.curves[1].ys[-2:] == [low, low]
    lines = draw(picture, 43, 12, ASCII)
    assert lines[-2][7:].count("0") == 2
    assert lines[-2].rstrip().endswith("0")


def test_no_value_is_marked_at_the_bottom_but_the_missing_first_step_is_not() -> None:
    picture = convergence_picture([(0, None, 1.0), (1, 1.0, None), (2, 1.0, math.inf)])
    assert [(mark.x, mark.kind) for mark in picture.marks if mark.kind == "no_value"] == [
        (1, "no_value"),
        (2, "no_value"),
    ]
    assert draw(picture, 40, 10, ASCII)[-2][5:].count("!") == 2


def test_only_whole_steps_are_labelled() -> None:
    labels = draw(convergence_picture([(0, None, 1.0), (1, 1.0, 0.5), (2, 0.5, 0.1)]), 70, 10, ASCII)[-1].split()
    assert labels == ["k", "0", "1", "2"]


def test_nothing_yet_is_said() -> None:
    assert draw(convergence_picture([]), 40, 1, ASCII) == ["no step and no value of f yet".center(40)]


def test_only_zeros_and_failures_can_be_drawn() -> None:
    for steps in ([(0, None, 0.0)], [(0, None, None)], [(0, None, 0.0), (1, 0.0, None)]):
        check_lines(draw(convergence_picture(steps), 28, 8, ASCII), 28, 8, False)
