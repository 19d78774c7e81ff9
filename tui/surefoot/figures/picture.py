"""What a picture shows, as data: curves, straight lines, marks and axes, in the units of the problem.

Everything may be anything: values that are missing, infinite, beyond the range of a float, or all the same. Drawing
(`surefoot.figures.plot`) finds what can be shown.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field


@dataclass(frozen=True, slots=True)
class Curve:
    """A line through points, in order; it breaks where y is None, not a number or infinite."""

    xs: Sequence[float]
    ys: Sequence[float | None]


@dataclass(frozen=True, slots=True)
class Segment:
    """A straight line of the explanation (tangent, chord, cobweb): drawn so that it is told apart from a curve."""

    x0: float
    y0: float
    x1: float
    y1: float


@dataclass(frozen=True, slots=True)
class Mark:
    """One glyph at a point; of marks in one cell the last one is seen.

    A mark beside the picture becomes an arrow at its edge. Where y is None, not a number, or not positive on a
    logarithmic axis, the mark stands in the bottom row.

    Attributes:
        x: the place.
        y: the place.
        kind: a name that `Characters.mark` knows, or one ASCII character.
        keep: whether limits that the picture chooses itself must take the mark in.
        on_zero: drawn on the zero line below or above its place, as an iterate is.
    """

    x: float
    y: float | None
    kind: str
    keep: bool = True
    on_zero: bool = False

    @property
    def height(self) -> float | None:
        """The y at which the mark is drawn."""
        return 0.0 if self.on_zero else self.y


@dataclass(frozen=True, slots=True)
class Vertical:
    """A line over the whole height, for a bound or a pole; `kind` is `bound` or `pole`."""

    x: float
    kind: str = "bound"


@dataclass(frozen=True, slots=True)
class Axis:
    """One axis.

    Attributes:
        name: what it counts; empty for no title.
        unit: its unit; empty or `1` for a pure number.
        low: lower limit; None to choose it from the data, so that a pole does not flatten the rest.
        high: upper limit, likewise.
        log: logarithmic, to base ten; then `low` and `high` must be positive to count.
        whole: counts whole numbers, so that no label lies between them.
    """

    name: str = ""
    unit: str = ""
    low: float | None = None
    high: float | None = None
    log: bool = False
    whole: bool = False

    @property
    def title(self) -> str:
        """Name and unit, `y [m]`."""
        return f"{self.name} [{self.unit}]" if self.name and self.unit not in ("", "1") else self.name


@dataclass(frozen=True, slots=True)
class Picture:
    """A whole picture.

    Attributes:
        curves: what is shown.
        segments: straight lines that explain.
        marks: single points, the most important last.
        verticals: bounds and poles.
        horizontals: y of lines over the whole width (0.0 for the zero line), dashed where no curve has a value.
        x: the horizontal axis.
        y: the vertical axis.
        together: the glyph where marks of different kind meet in a cell; empty to show the later one.
        empty: what is said where there is nothing to draw.
    """

    curves: tuple[Curve, ...] = ()
    segments: tuple[Segment, ...] = ()
    marks: tuple[Mark, ...] = ()
    verticals: tuple[Vertical, ...] = ()
    horizontals: tuple[float, ...] = ()
    x: Axis = field(default_factory=Axis)
    y: Axis = field(default_factory=Axis)
    together: str = ""
    empty: str = "nothing to draw"


def place(value: float | None) -> float:
    """A coordinate as a float: infinite beyond the range of floats, not-a-number where there is none."""
    if value is None:
        return math.nan
    try:
        return float(value)
    except OverflowError:
        return math.inf if value > 0 else -math.inf
    except (TypeError, ValueError):
        return math.nan
