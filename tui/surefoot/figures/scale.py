"""From the numbers of an axis to fractions of its length, and the limits that a picture chooses itself.

All further drawing happens in the unit square, so no hostile number goes past this module.
"""

from __future__ import annotations

import math
import sys
from dataclasses import dataclass
from typing import Final

from surefoot.figures.picture import Axis, Picture, place

FAR: Final = 1e6
"""Fractions are cut here: what lies so many picture widths outside has no influence on what is seen."""

_TAIL: Final = 0.75
_ROOM: Final = 3.0
_WORTH_CUTTING: Final = 3.0


@dataclass(frozen=True, slots=True)
class Scale:
    """An axis with its limits, `low < high`, both finite; on a logarithmic axis they are exponents of ten.

    Attributes:
        whole: only whole numbers are labelled.
    """

    low: float
    high: float
    log: bool = False
    whole: bool = False

    def fraction(self, value: float | None) -> float:
        """Where a value lies, 0 at the lower limit and 1 at the upper; not-a-number where it has no place."""
        number = self.place(value)
        if not math.isfinite(number):
            return math.nan
        span = self.high - self.low
        if math.isinf(span):
            fraction = (number / 4 - self.low / 4) / (self.high / 4 - self.low / 4)
        else:
            fraction = (number - self.low) / span
        return min(max(fraction, -FAR), FAR)

    def place(self, value: float | None) -> float:
        """The value on the axis: its logarithm where the axis is logarithmic."""
        number = place(value)
        if not self.log:
            return number
        return math.log10(number) if 0 < number < math.inf else math.nan


def scales(picture: Picture) -> tuple[Scale, Scale] | None:
    """The two axes with their limits, as given or chosen from the data; None where there is nothing to show."""
    across, up = Scale(0.0, 1.0, picture.x.log), Scale(0.0, 1.0, picture.y.log)
    wanted = [across.place(at) for curve in picture.curves for at in curve.xs]
    wanted += [across.place(at) for segment in picture.segments for at in (segment.x0, segment.x1)]
    wanted += [across.place(mark.x) for mark in picture.marks if mark.keep]
    x = _limits(picture.x, _range(_finite(wanted)))
    if x is None:
        return None
    shown = [
        up.place(value)
        for curve in picture.curves
        for at, value in zip(curve.xs, curve.ys, strict=False)
        if x.low <= across.place(at) <= x.high
    ]
    kept = [up.place(mark.height) for mark in picture.marks if mark.keep and x.low <= across.place(mark.x) <= x.high]
    kept += [up.place(value) for value in picture.horizontals]
    values = _finite(shown)
    y = _limits(picture.y, [*(_range(values) if picture.y.log else _robust(values)), *_finite(kept)])
    return None if y is None else (x, y)


def _limits(axis: Axis, wanted: list[float]) -> Scale | None:
    """Limits as far as the axis gives them, the others around what is wanted; None where they stay open."""
    free = Scale(0.0, 1.0, axis.log)
    low, high = free.place(axis.low), free.place(axis.high)
    if not wanted and not (math.isfinite(low) and math.isfinite(high)):
        return None
    low = low if math.isfinite(low) else min(wanted)
    high = high if math.isfinite(high) else max(wanted)
    return Scale(*_widened(min(low, high), max(low, high)), axis.log, axis.whole)


def _finite(values: list[float]) -> list[float]:
    return [value for value in values if math.isfinite(value)]


def _range(values: list[float]) -> list[float]:
    return [min(values), max(values)] if values else []


def _robust(values: list[float]) -> list[float]:
    """The least and greatest value to show: poles and overflow do not flatten the rest.

    Values beyond three times the upper quartile of |value| are left out, but only where they would take more than two
    thirds of the height.
    """
    if not values:
        return []
    sizes = sorted(map(abs, values))
    reach = sizes[int(_TAIL * (len(sizes) - 1))] * _ROOM
    if reach == 0 or sizes[-1] / _WORTH_CUTTING <= reach:
        reach = sizes[-1]
    return [max(min(values), -reach), min(max(values), reach)]


def _widened(low: float, high: float) -> tuple[float, float]:
    """Limits that differ, for the picture of a single value."""
    if low < high:
        return low, high
    room = abs(low) / 10 if low else 1.0
    largest = sys.float_info.max
    low, high = max(low - room, -largest), min(high + room, largest)
    return (low, high) if low < high else (math.nextafter(low, -math.inf), math.nextafter(high, math.inf))
