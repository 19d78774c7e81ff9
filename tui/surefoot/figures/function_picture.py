"""The picture of f over a range, with the iterates and what the last step took for true."""

from __future__ import annotations

import math
import sys
from collections.abc import Sequence
from dataclasses import replace
from typing import Final, TypeAlias

from surefoot.figures.picture import Axis, Mark, Picture, Vertical, place
from surefoot.figures.poles import broken_at_poles
from surefoot.figures.step_shape import Point, StepShape, base_marks, step_segments

__all__ = ["Samples", "StepShape", "function_picture", "zoom"]

Samples: TypeAlias = tuple[Sequence[float], Sequence[float | None]]

_FEWEST_PLACES: Final = 8  # units in the last place: a narrower range would show nothing but the rounding of x


def function_picture(
    samples: Samples,
    *,
    iterates: Sequence[Point] = (),
    step: StepShape | None = None,
    x: Axis | None = None,
    f: Axis | None = None,
    bounds: tuple[float, float] | None = None,
    marks: Sequence[Mark] = (),
) -> Picture:
    """f over the range of the samples: the curve, the zero line with the iterates on it, and the last step.

    On the zero line stand the iterates, the one in hand as `o`, the one before it as `x`. The points that the step
    rests on are marked on the curve. The curve breaks at poles and where f has no value; an iterate beside the range
    is an arrow at the edge.

    Args:
        samples: xs in ascending order and f at them, None where f has no value.
        iterates: (x, f) of the iterates, the oldest first.
        step: what the last step took for true.
        x: name and unit of the unknown; limits other than those of the samples.
        f: name and unit of f; limits other than those that suit the curve.
        bounds: the bounds of the step control, drawn as vertical lines.
        marks: further marks, such as the places where trial steps would land.
    """
    curve, poles = broken_at_poles(*samples)
    f = f or Axis("f")
    on_zero = iterate_marks(iterates, on_zero=True)
    verticals = [Vertical(pole, "pole") for pole in poles]
    verticals += [Vertical(bound) for bound in bounds or ()]
    return Picture(
        curves=(curve,),
        segments=() if step is None else step_segments(step),
        marks=(*on_zero[:-1], *(() if step is None else base_marks(step)), *marks, *on_zero[-1:]),
        verticals=tuple(verticals),
        horizontals=(0.0,),
        x=sampled_axis(x or Axis("x"), samples[0]),
        y=f,
        empty=f"no value of {f.name} here",
    )


def zoom(iterates: Sequence[Point], count: int = 3, margin: float = 0.25) -> tuple[float, float] | None:
    """A range around the last iterates that differ, to sample f over; None without a finite iterate.

    Args:
        iterates: (x, f) of the iterates, the oldest first.
        count: how many different iterates the range takes in.
        margin: what is added at either side, in widths of the range.
    """
    last: list[float] = []
    for at in (place(x) for x, _ in reversed(iterates)):
        if math.isfinite(at) and at not in last:
            last.append(at)
        if len(last) == count:
            break
    if not last:
        return None
    low, high = min(last), max(last)
    if low == high:
        room = abs(low) / 10 or 1.0
    else:
        room = max((high / 2 - low / 2) * 2 * margin, _FEWEST_PLACES * math.ulp(max(abs(low), abs(high))))
    largest = sys.float_info.max
    return max(low - room, -largest), min(high + room, largest)


def sampled_axis(axis: Axis, xs: Sequence[float]) -> Axis:
    """The axis with the ends of the samples as limits, where it gives none of its own."""
    finite = [x for x in map(place, xs) if math.isfinite(x)]
    if not finite:
        return axis
    low, high = min(finite), max(finite)
    return replace(axis, low=low if axis.low is None else axis.low, high=high if axis.high is None else axis.high)


def iterate_marks(points: Sequence[Point], on_zero: bool = False) -> list[Mark]:
    """Marks of iterates, the oldest first: the last is the one in hand, the one before it stands out too."""
    kinds = ["iterate"] * (len(points) - 2) + ["previous", "current"]
    return [
        Mark(x, y, kind, keep=False, on_zero=on_zero)
        for (x, y), kind in zip(points, kinds[-len(points) :], strict=False)
    ]
