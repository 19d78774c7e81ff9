"""Draws a picture into exactly `height` lines of exactly `width` cells, whatever its data; never raises, never prints.

Limits, tick labels, marks and the lines through the picture are laid out here; curves come from the raster.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from itertools import product
from typing import Final

from surefoot.figures.characters import Characters
from surefoot.figures.frame import Frame, frame_of
from surefoot.figures.picture import Axis, Curve, Mark, Picture, Segment, Vertical, place
from surefoot.figures.picture_table import as_table
from surefoot.figures.raster import DOTS_ACROSS, DOTS_UP, Layer, as_ascii, column_of, raster, row_of
from surefoot.figures.scale import scales
from surefoot.figures.strokes import curve_strokes, dashed, segment_strokes
from surefoot.figures.ticks import Ticks

__all__ = ["Axis", "Curve", "Mark", "Picture", "Segment", "Vertical", "as_table", "draw"]

_STEP_MARK: Final = "+"  # of straight lines, where there is only ASCII


def draw(picture: Picture, width: int, height: int, characters: Characters) -> list[str]:
    """Draws a picture.

    Where there are too few cells for a picture its numbers are given instead, and where there is nothing to draw the
    picture's own words say so.

    Args:
        picture: what to show.
        width: cells of each line; less than 1 gives empty lines.
        height: number of lines.
        characters: the character set; with `ASCII` the lines are pure ASCII.
    """
    width, height = max(width, 0), max(height, 0)
    axes = scales(picture)
    if axes is None or (_hollow(picture) and not picture.segments and not picture.marks):
        return _words(picture.empty, width, height, characters)
    frame = frame_of(picture, *axes, width, height)
    if frame is None:
        return as_table(picture, width, height, characters)
    cells = _curves(picture, frame, characters)
    _lines(cells, picture, frame, characters)
    _marks(cells, picture, frame, characters)
    return _composed(cells, picture, frame, characters)


def _curves(picture: Picture, frame: Frame, characters: Characters) -> list[list[str]]:
    """The cells of curves and straight lines."""
    dots = (frame.columns * DOTS_ACROSS, frame.rows * DOTS_UP)
    solid = [s for curve in picture.curves for s in curve_strokes(curve, frame.x, frame.y, frame.columns)]
    straight = [s for segment in picture.segments for s in segment_strokes(segment, frame.x, frame.y)]
    if characters.unicode:
        return raster([Layer([*solid, *dashed(straight, *dots)])], frame.columns, frame.rows)
    cells = raster([Layer(straight, _STEP_MARK), Layer(solid)], frame.columns, frame.rows)
    return [[as_ascii(cell) for cell in row] for row in cells]


def _lines(cells: list[list[str]], picture: Picture, frame: Frame, characters: Characters) -> None:
    """Draws verticals and horizontals behind the curves."""
    for vertical in picture.verticals:
        column = frame.column(vertical.x)
        if column is not None:
            # A pole is a broken line: by its glyph, or where ASCII has none by every other row.
            broken = vertical.kind == "pole" and not characters.unicode
            for row in cells[:: 2 if broken else 1]:
                _behind(row, [column], characters.mark(vertical.kind))
    covered = _covered(picture, frame)
    for value in picture.horizontals:
        at = frame.row(value)
        if at is not None:
            _behind(cells[at], [n for n in range(frame.columns) if covered[n] or n % 2 == 0], characters.rule)


def _behind(row: list[str], columns: Iterable[int], glyph: str) -> None:
    for column in columns:
        if row[column] == " ":
            row[column] = glyph


def _covered(picture: Picture, frame: Frame) -> list[bool]:
    """For each column whether some curve has a value there; all of them in a picture without curves."""
    covered = [not picture.curves] * frame.columns
    for curve in picture.curves:
        before: int | None = None
        for at, value in zip(curve.xs, curve.ys, strict=False):
            column = frame.column(at) if math.isfinite(place(value)) else None
            if column is not None:
                first = column if before is None else min(before, column)
                last = column if before is None else max(before, column)
                covered[first : last + 1] = [True] * (last + 1 - first)
            before = column
    return covered


def _marks(cells: list[list[str]], picture: Picture, frame: Frame, characters: Characters) -> None:
    """Draws the marks over all else; those beside the picture as arrows at its edge."""
    drawn: dict[tuple[int, int], str] = {}
    for mark in picture.marks:
        x, y = frame.x.fraction(mark.x), frame.y.fraction(mark.height)
        if math.isnan(x):
            continue
        kind = mark.kind
        if math.isnan(y):
            y = 0.0
        elif not 0 <= y <= 1:
            kind = "off_top" if y > 1 else "off_bottom"
        if not 0 <= x <= 1:
            kind = "off_right" if x > 1 else "off_left"
        row = row_of(min(max(y, 0.0), 1.0), frame.rows)
        column = column_of(min(max(x, 0.0), 1.0), frame.columns)
        if picture.together and drawn.get((row, column), kind) != kind:
            kind = picture.together
        drawn[row, column] = kind
    for (row, column), kind in drawn.items():
        cells[row][column] = characters.mark(kind)


def _composed(cells: list[list[str]], picture: Picture, frame: Frame, characters: Characters) -> list[str]:
    """The whole lines: labels in the gutter and in the footer, titles where they cover nothing."""
    margin = [" "] * frame.margin
    lines = [[" "] * frame.gutter + row + margin for row in cells] + [[" "] * frame.width for _ in range(frame.footer)]
    for row, text in frame.y_labels:
        lines[row][: len(text)] = text
    for start, text in frame.x_labels:
        lines[frame.rows][start : start + len(text)] = text
    hollow = _hollow(picture)
    titles = [picture.empty] if hollow else _titles(picture.y, frame.y_ticks)
    told = _titled(lines[: frame.rows // 2 + 1], map(characters.text, titles), range(frame.width))
    if frame.y_ticks.note and (hollow or not told):  # labels that nobody can read are none
        for row, text in frame.y_labels:
            lines[row][: len(text)] = " " * len(text)
    starts = (0,) if frame.left else (frame.width, 0)
    told = _titled(lines[-1:], map(characters.text, _titles(picture.x, frame.x_ticks)), starts)
    if frame.x_ticks.note and not told:
        lines[frame.rows] = [" "] * frame.width
    return ["".join(line) for line in lines]


def _hollow(picture: Picture) -> bool:
    """Whether a picture has curves but none of them a value."""
    values = (place(y) for curve in picture.curves for y in curve.ys)
    return bool(picture.curves) and not any(map(math.isfinite, values))


def _titles(axis: Axis, ticks: Ticks) -> list[str]:
    """What to write at an axis, best first: its title and how its labels are read, or the latter alone."""
    if axis.title and ticks.note:
        return [f"{axis.title}: {ticks.note}", ticks.note]
    return [axis.title or ticks.note]


def _titled(lines: Sequence[list[str]], titles: Iterable[str], starts: Iterable[int]) -> bool:
    """Writes the first title for which there is a place where it covers nothing; whether there was one.

    Args:
        lines: the lines to try, in order.
        titles: the titles to try, in order.
        starts: the cells of a line to try, in order; one so far right that the title would stick out is moved left.
    """
    for title, line, start in product(titles, lines, starts):
        at = min(start, len(line) - len(title))
        if at >= 0 and all(cell == " " for cell in line[max(0, at - 1) : at + len(title) + 1]):
            line[at : at + len(title)] = title
            return True
    return False


def _words(words: str, width: int, height: int, characters: Characters) -> list[str]:
    """A picture without a picture: words in the middle of the space."""
    lines = [" " * width] * height
    shown = characters.text(words)
    if height:
        lines[(height - 1) // 2] = characters.fit(shown, min(width, len(shown))).center(width)
    return lines
