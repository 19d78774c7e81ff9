"""What a step took for true, as lines and marks: tangent, chord, bracket, parabola."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Final, Literal, TypeAlias

from surefoot.figures.picture import Mark, Segment, place

Shape: TypeAlias = Literal["tangent", "chord", "bracket", "cobweb", "parabola"]
Point: TypeAlias = tuple[float, float | None]

_PIECES: Final = 24
_MEETS_ZERO: Final = 1e-3


@dataclass(frozen=True, slots=True)
class StepShape:
    """What a step took for true, as drawn.

    Attributes:
        shape: tangent, chord, bracket, cobweb or parabola.
        points: the points it rests on (x, f), in the order of the method's definition.
        landing: where the line meets zero: what the rule itself proposed, before any step control; None if unknown.
        slope: of the line through the first point; a rule may have followed another one than that of its points.
    """

    shape: Shape
    points: tuple[Point, ...]
    landing: float | None = None
    slope: float | None = None


def base_marks(step: StepShape) -> list[Mark]:
    """The points that the step rests on: the ends of a bracket on the zero line, others on the curve."""
    if step.shape == "bracket" and len(step.points) > 1:
        low, high = sorted(step.points[:2], key=lambda point: point[0])
        return [
            Mark(*low, "bracket_low", keep=False, on_zero=True),
            Mark(*high, "bracket_high", keep=False, on_zero=True),
        ]
    return [Mark(x, y, "base") for x, y in step.points if y is not None and math.isfinite(place(y))]


def step_segments(step: StepShape) -> tuple[Segment, ...]:
    """The straight lines, or pieces of the curve, of a step."""
    points = [(place(x), place(y)) for x, y in step.points]
    points = [point for point in points if all(map(math.isfinite, point))]
    if not points or step.shape in ("bracket", "cobweb"):
        return ()
    if step.shape == "parabola" and len(points) > 2:
        return _curve(points, step.landing)
    slope = place(step.slope)
    ends = _chord(points[:2], slope) if step.shape == "chord" else points[:1]
    if step.landing is not None:
        ends.append((place(step.landing), 0.0))
    elif len(ends) == 1 and math.isfinite(slope) and slope != 0:
        ends.append((ends[0][0] - ends[0][1] / slope, 0.0))
    return tuple(Segment(*a, *b) for a, b in pairwise(sorted(ends)))


def _chord(points: list[tuple[float, float]], slope: float) -> list[tuple[float, float]]:
    """The ends of a chord; where its slope is known, the second end is on the line of that slope."""
    if len(points) < 2 or not math.isfinite(slope):
        return points
    (x0, f0), (x1, _) = points
    height = f0 + slope * (x1 - x0)
    return [points[0], (x1, height)] if math.isfinite(height) else points


def _curve(points: Sequence[tuple[float, float]], landing: float | None) -> tuple[Segment, ...]:
    """The parabola through three points: f over x, or x over f where only that one meets zero at the landing.

    Through more points it is x over f: only inverse interpolation takes more than three.
    """
    xs, fs = [x for x, _ in points], [f for _, f in points]
    if len(points) == 3 and len(set(xs)) == 3 and (landing is None or _is_root(points, landing)):
        path = [(x, _through(points, x)) for x in _spread(xs + ([] if landing is None else [landing]))]
    elif len(set(fs)) == len(points):
        turned = [(f, x) for x, f in points]
        path = [(_through(turned, f), f) for f in _spread([*fs, 0.0])]
    else:
        return ()
    return tuple(Segment(*start, *end) for start, end in pairwise(path))


def _is_root(points: Sequence[tuple[float, float]], landing: float) -> bool:
    return abs(_through(points, landing)) <= _MEETS_ZERO * max(abs(f) for _, f in points)


def _through(points: Sequence[tuple[float, float]], at: float) -> float:
    """The polynomial through points with different abscissae (Lagrange's form)."""
    total = 0.0
    for a, fa in points:
        term = fa
        for b, _ in points:
            if b != a:
                term *= (at - b) / (a - b)
        total += term
    return total


def _spread(ends: Sequence[float]) -> list[float]:
    low, high = min(ends), max(ends)
    return [low * (1 - n / _PIECES) + high * (n / _PIECES) for n in range(_PIECES + 1)]
