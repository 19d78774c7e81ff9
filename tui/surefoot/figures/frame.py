"""Where things go in a picture: the canvas, the gutter with the labels of the vertical axis, the footer below."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import Final

from surefoot.figures.picture import Axis, Picture
from surefoot.figures.raster import DOTS_ACROSS, column_of, row_of
from surefoot.figures.scale import Scale
from surefoot.figures.ticks import Tick, Ticks, choose

FEWEST_COLUMNS: Final = 10
FEWEST_ROWS: Final = 3

_GAP: Final = 2


@dataclass(frozen=True, slots=True)
class Frame:
    """A canvas of `columns` by `rows` cells, right of `gutter` cells and above `footer` lines.

    Attributes:
        x: the horizontal axis.
        y: the vertical axis.
        x_ticks: labels of the horizontal axis, in the first line of the footer.
        y_ticks: labels of the vertical axis, in the gutter.
        left: cells at the left end of the first line of the footer that belong to the title.
        right: cells at its right end that do.
        margin: cells right of the canvas, for a label that sticks out.
    """

    x: Scale
    y: Scale
    columns: int
    rows: int
    gutter: int
    footer: int
    y_ticks: Ticks
    x_ticks: Ticks
    left: int
    right: int
    margin: int

    @property
    def width(self) -> int:
        """Cells of a line."""
        return self.gutter + self.columns + self.margin

    @property
    def y_labels(self) -> list[tuple[int, str]]:
        """Row and text of the labels in the gutter."""
        return [(row_of(tick.fraction, self.rows), tick.text.rjust(self.gutter - 1)) for tick in self.y_ticks.ticks]

    @property
    def x_labels(self) -> list[tuple[int, str]]:
        """First cell, counted from the left end of the line, and text of the labels in the footer."""
        return self._placed(self.x_ticks.ticks)

    def column(self, value: float) -> int | None:
        """The column of a value; None beside the picture."""
        fraction = self.x.fraction(value)
        return column_of(fraction, self.columns) if 0 <= fraction <= 1 else None

    def row(self, value: float) -> int | None:
        """The row of a value, from the top; None above and below the picture."""
        fraction = self.y.fraction(value)
        return row_of(fraction, self.rows) if 0 <= fraction <= 1 else None

    def with_x_ticks(self, gap: int) -> Frame:
        """The frame with the finest labels below that stand so far apart beside the title."""

        def fits(ticks: Sequence[Tick]) -> bool:
            labels = self._placed(ticks)
            return all(start + len(text) + gap <= after for (start, text), (after, _) in pairwise(labels))

        return replace(self, x_ticks=choose(self.x, fits))

    def _placed(self, ticks: Sequence[Tick]) -> list[tuple[int, str]]:
        """Labels with their middles at most half a cell from their places; those that stick out are left out."""
        placed = []
        for tick in ticks:
            middle = (tick.fraction * (self.columns * DOTS_ACROSS - 1) - (DOTS_ACROSS - 1) / 2) / DOTS_ACROSS
            start = self.gutter + math.floor(middle - (len(tick.text) - 1) / 2 + 0.5)
            if start >= self.left and start + len(tick.text) <= self.width - self.right:
                placed.append((start, tick.text))
        return placed


def frame_of(picture: Picture, x: Scale, y: Scale, width: int, height: int) -> Frame | None:
    """The frame of a picture in so many cells; None where they are too few for a picture."""
    frame = _with_footer(picture.x, x, y, width, height, 1)
    if frame is not None and frame.x_ticks.note:
        return _with_footer(picture.x, x, y, width, height, 2)  # the note takes a line of its own
    return frame


def _with_footer(axis: Axis, x: Scale, y: Scale, width: int, height: int, footer: int) -> Frame | None:
    rows = height - footer
    if rows < FEWEST_ROWS or width < FEWEST_COLUMNS:
        return None
    y_ticks = _row_labels(y, rows)
    gutter = max((len(tick.text) + 1 for tick in y_ticks.ticks), default=0)
    if width - gutter < FEWEST_COLUMNS:
        y_ticks, gutter = Ticks(), 0
    title = len(axis.title) if footer == 1 else 0
    left = title + 1 if 0 < title < gutter else 0
    frame = Frame(x, y, width - gutter, rows, gutter, footer, y_ticks, Ticks(), left, 0, 0)
    right = title + _GAP if title and not left else 0
    # One label alone gives no scale: rather lose the place of the title, some room between labels, a few columns.
    wide = _GAP + frame.columns // 20
    for margin, reserved, gap in ((0, right, wide), (0, 0, wide), (1, 0, _GAP), (2, 0, _GAP), (3, 0, 1)):
        columns = frame.columns - margin
        if margin and columns < FEWEST_COLUMNS:
            break
        labelled = replace(frame, columns=columns, margin=margin, right=reserved).with_x_ticks(gap)
        if len(labelled.x_labels) > 1:
            return labelled
    return frame.with_x_ticks(1)


def _row_labels(y: Scale, rows: int) -> Ticks:
    """The labels of the vertical axis: with blank rows between them, but close rather than a single one."""
    apart = 2 if rows < 12 else 3 if rows < 24 else 5
    ticks = choose(y, lambda ticks: _rows_apart(ticks, rows, apart))
    return ticks if len(ticks.ticks) > 1 else choose(y, lambda ticks: _rows_apart(ticks, rows, 1))


def _rows_apart(ticks: Sequence[Tick], rows: int, apart: int) -> bool:
    at = [row_of(tick.fraction, rows) for tick in ticks]
    return all(below - above >= apart for below, above in pairwise(at))
