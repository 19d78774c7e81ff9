"""Drawing: exact dimensions whatever the data, and every point in the cell where it belongs."""

import math
import subprocess
import sys
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import surefoot.figures
from support.pictures import check_lines, pictures
from surefoot.figures.characters import ASCII, UNICODE, Characters
from surefoot.figures.frame import Frame, frame_of
from surefoot.figures.picture import Axis, Curve, Mark, Picture, Segment, Vertical
from surefoot.figures.plot import draw
from surefoot.figures.scale import scales


@settings(max_examples=100, deadline=None)
@given(pictures, st.integers(0, 250), st.integers(0, 80), st.booleans())
def test_any_data_gives_exactly_the_cells_asked_for(picture: Picture, width: int, height: int, unicode: bool) -> None:
    check_lines(draw(picture, width, height, Characters(unicode)), width, height, unicode)


@settings(max_examples=300, deadline=None)
@given(pictures, st.integers(-3, 40), st.integers(-3, 14), st.booleans())
def test_any_data_in_a_small_pane(picture: Picture, width: int, height: int, unicode: bool) -> None:
    check_lines(draw(picture, width, height, Characters(unicode)), max(width, 0), max(height, 0), unicode)


def test_nothing_is_printed(capfd: pytest.CaptureFixture[str]) -> None:
    for value in (0.0, math.nan, math.inf, 1.7e308, 10**400, 5e-324):
        draw(Picture(curves=(Curve([0, 1, 2], [value, -value, value]),)), 40, 10, UNICODE)
    assert capfd.readouterr() == ("", "")


def test_a_hundred_thousand_points_are_drawn() -> None:
    xs = [n / 10**5 for n in range(10**5)]
    lines = draw(Picture(curves=(Curve(xs, [math.sin(50 * x) for x in xs]),)), 60, 12, ASCII)
    check_lines(lines, 60, 12, False)
    assert all(line[5:].strip(" ") for line in lines)


def plain_axis(low: float, high: float) -> Axis:
    return Axis(low=low, high=high)


def frame(picture: Picture, width: int, height: int) -> Frame:
    axes = scales(picture)
    assert axes is not None
    found = frame_of(picture, *axes, width, height)
    assert found is not None
    return found


@given(st.floats(0, 1), st.floats(0, 1), st.integers(30, 120), st.integers(6, 40))
def test_a_mark_stands_within_half_a_cell_of_its_point(x: float, y: float, width: int, height: int) -> None:
    picture = Picture(marks=(Mark(x, y, "@"),), x=plain_axis(0, 1), y=plain_axis(0, 1))
    place = frame(picture, width, height)
    lines = draw(picture, width, height, ASCII)
    (row,) = [n for n, line in enumerate(lines) if "@" in line]
    column = lines[row].index("@") - place.gutter
    # A cell of 2 by 4 dots; dots are counted from their middles.
    assert abs((x * (place.columns * 2 - 1) - 0.5) / 2 - column) <= 0.5 + 1e-6
    assert abs((y * (place.rows * 4 - 1) - 1.5) / 4 - (place.rows - 1 - row)) <= 0.5 + 1e-6


def test_a_straight_line_goes_through_the_cells_it_must() -> None:
    line = Curve([0, 1], [0, 1])
    lines = draw(Picture(curves=(line,), x=plain_axis(0, 1), y=plain_axis(0, 1)), 24, 11, ASCII)
    body = [row[4:] for row in lines[:-1]]  # gutter: `0.5 `
    assert all(
        text.startswith(start) for text, start in zip((row[:4] for row in lines), ("1.0 ", "    "), strict=False)
    )
    for row, text in enumerate(body):
        # Row r of 10, from the top, holds heights 0.9 - r/10 to 1 - r/10, hence columns 18 - 2r and 19 - 2r of 20.
        assert {n for n, cell in enumerate(text) if cell != " "} <= {
            17 - 2 * row,
            18 - 2 * row,
            19 - 2 * row,
            20 - 2 * row,
        }
        assert text[18 - 2 * row] != " "


def test_a_curve_breaks_where_it_has_no_value() -> None:
    xs = [n / 10 for n in range(11)]
    ys = [1.0 if n < 4 else None if n < 7 else math.inf if n == 7 else 1.0 for n in range(11)]
    lines = draw(Picture(curves=(Curve(xs, ys),), x=plain_axis(0, 1), y=plain_axis(0, 2)), 46, 8, ASCII)
    (row,) = [line for line in lines[:-1] if "." in line[4:] or "'" in line[4:]]
    drawn = [n for n, cell in enumerate(row[2:]) if cell in ".':"]
    columns = len(row) - 2
    assert all(not 0.32 * columns < n < 0.78 * columns for n in drawn)
    assert {n for n in range(columns) if n < 0.28 * columns} <= set(drawn)


def test_the_zero_line_is_broken_where_no_curve_has_a_value() -> None:
    picture = Picture(
        curves=(Curve([0, 1, 2, 3, 4], [None, None, 1.0, 1.0, 1.0]),),
        horizontals=(0.0,),
        x=plain_axis(0, 4),
        y=plain_axis(-1, 1),
    )
    zero = next(line for line in draw(picture, 43, 7, ASCII) if line.startswith(" 0"))[3:]
    assert zero == "- " * 10 + "-" * 20


def test_marks_cover_the_zero_line_and_each_other_in_order() -> None:
    marks = tuple(Mark(x, None, kind, on_zero=True) for x, kind in ((1, "iterate"), (2, "previous"), (2, "current")))
    picture = Picture(marks=marks, horizontals=(0.0,), x=plain_axis(0, 4), y=plain_axis(-1, 1))
    zero = next(line for line in draw(picture, 44, 7, ASCII) if line.startswith(" 0"))[3:]
    assert (zero.count("."), zero.count("x"), zero.count("o")) == (1, 0, 1)
    assert (zero.index("."), zero.index("o")) == (10, 20)


def test_marks_of_two_kinds_in_a_cell_can_be_told() -> None:
    picture = Picture(marks=(Mark(1, 1, "d"), Mark(1, 1, "f")), together="*", x=plain_axis(0, 2), y=plain_axis(0, 2))
    assert "*" in "".join(draw(picture, 30, 8, ASCII))


def test_a_mark_beside_the_picture_is_an_arrow() -> None:
    marks = (Mark(-1, 0.5, "current"), Mark(9, 0.5, "current"), Mark(0.5, 1.5, "current"), Mark(0.5, -7, "current"))
    lines = draw(Picture(marks=marks, x=plain_axis(0, 1), y=plain_axis(0, 1)), 24, 10, ASCII)
    text = "\n".join(lines)
    assert [text.count(arrow) for arrow in "<>^vo"] == [1, 1, 1, 1, 0]
    assert "^" in lines[0]
    assert "v" in lines[8]


def test_a_mark_without_a_place_on_the_axis_stands_in_the_bottom_row() -> None:
    marks = (Mark(0, 1e-3, "f"), Mark(1, 0.0, "exact_zero"), Mark(2, None, "no_value"))
    lines = draw(Picture(marks=marks, y=Axis(log=True, low=1e-6, high=1.0)), 24, 8, ASCII)
    assert "0" in lines[6][5:]
    assert "!" in lines[6][5:]


def test_bounds_are_solid_and_poles_broken_lines() -> None:
    picture = Picture(verticals=(Vertical(1), Vertical(3, "pole")), x=plain_axis(0, 4), y=plain_axis(0, 1))
    ascii_lines = draw(picture, 44, 9, ASCII)[:-1]
    assert sum(line.count("|") for line in ascii_lines) == 8 + 4
    unicode_lines = draw(picture, 44, 9, UNICODE)[:-1]
    assert (sum(line.count("│") for line in unicode_lines), sum(line.count("╎") for line in unicode_lines)) == (8, 8)


def test_straight_lines_of_a_step_are_told_from_curves() -> None:
    curve, segment = Curve([0, 1], [0.2, 0.2]), Segment(0, 0.8, 1, 0.8)
    picture = Picture(curves=(curve,), segments=(segment,), x=plain_axis(0, 1), y=plain_axis(0, 1))
    lines = draw(picture, 34, 11, ASCII)[:-1]
    (straight,) = [line for line in lines if "+" in line]
    assert straight.count("+") == 30
    dotted = draw(picture, 34, 11, UNICODE)[:-1]
    inks = sorted(sum(bin(ord(c) - 0x2800).count("1") for c in line if c >= "\u2800") for line in dotted)
    assert inks[-2:] == [30, 60]  # dashes have half the dots


def test_poles_do_not_flatten_the_picture() -> None:
    xs = [n / 50 for n in range(-100, 101)]
    ys = [1e9 if n == 0 else 1 / x for n, x in enumerate(xs) if x] + [2.0]
    lines = draw(Picture(curves=(Curve([x for x in xs if x], ys[:-1]),), horizontals=(0.0,)), 40, 12, ASCII)
    assert sum(bool(line[5:].strip(" -")) for line in lines[:-1]) > 8


@pytest.mark.parametrize(("width", "height"), [(9, 8), (30, 3), (5, 2)])
def test_numbers_take_the_place_of_a_picture_that_is_too_small(width: int, height: int) -> None:
    picture = Picture(curves=(Curve([0, 1], [1.0, 2.0]),), marks=(Mark(0.5, 1.5, "current"),))
    lines = draw(picture, width, height, ASCII)
    check_lines(lines, width, height, False)
    assert lines[0].startswith("o 0.")


def test_nothing_to_draw_is_said() -> None:
    assert draw(Picture(empty="no value of f here"), 24, 3, ASCII) == [" " * 24, "   no value of f here   ", " " * 24]
    hollow = Picture(curves=(Curve([0, 1], [None, math.nan]),), horizontals=(0.0,), empty="no value of f here")
    assert draw(hollow, 18, 1, ASCII) == ["no value of f here"]
    assert draw(hollow, 10, 1, UNICODE) == ["no value …"]


def test_iterates_are_drawn_where_f_has_no_value() -> None:
    picture = Picture(
        curves=(Curve([0, 1], [None, None]),),
        marks=(Mark(0.5, None, "current", on_zero=True),),
        horizontals=(0.0,),
        empty="no value of f here",
    )
    lines = draw(picture, 40, 8, ASCII)
    assert any("no value of f here" in line for line in lines)
    assert any("- o -" in line for line in lines)


def test_labels_that_need_a_note_are_not_shown_without_it() -> None:
    curve = Curve([0, 1], [1e45, 2e45])
    wide = draw(Picture(curves=(curve,), y=Axis("f", "W")), 30, 8, ASCII)
    assert "f [W]: e+45" in wide[0]
    assert any(line.startswith("1.5") for line in wide)
    full = Picture(curves=tuple(Curve([0, 1], [y * 1e45] * 2) for y in (1 + n / 20 for n in range(21))))
    packed = draw(full, 30, 8, ASCII)
    assert not any("e+45" in line or "1.5" in line for line in packed)


def test_labels_below_that_need_a_note_are_not_shown_without_it() -> None:
    picture = Picture(curves=(Curve([1.78316, 1.783169], [0, 1]),), x=Axis("y", "m"))
    assert draw(picture, 24, 8, ASCII)[-1].strip() == "y [m]: 1.78316 + e-6"
    assert draw(picture, 16, 8, ASCII)[-1].strip() == "1.78316 + e-6"
    assert [line.strip() for line in draw(picture, 12, 8, ASCII)[-2:]] == ["", ""]


def test_only_the_raster_touches_plotext_and_nothing_does_on_import() -> None:
    folder = Path(surefoot.figures.__file__).parent
    assert [
        p.name
        for p in sorted(folder.glob("*.py"))
        if "import plotext" in p.read_text() or "from plotext" in p.read_text()
    ] == ["raster.py"]
    code = "import sys, surefoot.figures.plot, surefoot.figures.columns; print('plotext' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout == "False\n"
