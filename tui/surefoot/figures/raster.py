"""The one place that draws with plotext: lines in the unit square become a grid of cells.

plotext 5.3.2 cannot be handed just any data (infinities, equal limits and huge ranges raise or make the picture vanish)
and its global figure is limited to the terminal. So it is given finite points of the unit square alone, limits of 0 and
1, no axes and no ticks, on a figure of its own; its private parts are touched here and nowhere else.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final, TypeAlias

DOTS_ACROSS: Final = 2
DOTS_UP: Final = 4
BRAILLE: Final = "braille"

_BRAILLE_BLANK: Final = 0x2800

Polyline: TypeAlias = Sequence[tuple[float, float]]


@dataclass(frozen=True, slots=True)
class Layer:
    """Lines drawn with one marker: `BRAILLE`, or an ASCII character. Points lie in the unit square."""

    lines: Sequence[Polyline]
    marker: str = BRAILLE


def dot(fraction: float, dots: int) -> int:
    """The dot of a line of dots at a fraction of its length: 0 is the middle of the first, 1 that of the last."""
    return math.floor(round(0.5 + (dots - 1) * fraction, 8))


def column_of(fraction: float, columns: int) -> int:
    """The column of cells at a fraction of the width."""
    return dot(fraction, columns * DOTS_ACROSS) // DOTS_ACROSS


def row_of(fraction: float, rows: int) -> int:
    """The row of cells, counted from the top, at a fraction of the height counted from the bottom."""
    return rows - 1 - dot(fraction, rows * DOTS_UP) // DOTS_UP


def raster(layers: Sequence[Layer], columns: int, rows: int) -> list[list[str]]:
    """The cells of a picture, rows from the top; later layers cover earlier ones."""
    from plotext._figure import _figure_class

    figure = _figure_class()
    figure._set_size(columns, rows)
    figure.theme("clear")
    figure.frame(False)
    figure.xlim(0, 1)
    figure.ylim(0, 1)
    figure.xticks([], [])
    figure.yticks([], [])
    drawn = [layer for layer in layers if any(layer.lines)]
    for layer in drawn:
        xs, ys = _joined(layer.lines)
        figure.plot(xs, ys, marker=layer.marker)
    if not drawn:
        return [[" "] * columns for _ in range(rows)]
    # Not `build`: composing its coloured text takes longer than all the drawing.
    figure._set_sizes()
    figure._build_matrix()
    matrix: list[list[str]] = figure.monitor.matrix.marker
    return matrix[::-1]


def as_ascii(cell: str) -> str:
    """A cell of braille dots as the ASCII character that has its ink at the same height."""
    dots = ord(cell) - _BRAILLE_BLANK
    if not 0 < dots < 256:
        return " " if dots == 0 else cell
    upper, lower = dots & 0b00011011, dots & 0b11100100
    return ":" if upper and lower else "'" if upper else "."


def _joined(lines: Sequence[Polyline]) -> tuple[list[float], list[float]]:
    """All lines as one, with a gap behind each."""
    xs: list[float] = []
    ys: list[float] = []
    for line in lines:
        for x, y in line:
            xs.append(x)
            ys.append(y)
        xs.append(math.nan)
        ys.append(math.nan)
    return xs, ys
