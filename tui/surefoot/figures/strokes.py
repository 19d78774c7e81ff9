"""Curves and straight lines as strokes inside the unit square: cut at gaps, thinned, clipped.

What reaches the drawing is at most two points a column, however many a curve has, and never leaves the picture: a line
to a point far away would otherwise be drawn dot by dot.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence
from itertools import pairwise
from typing import Final, TypeAlias

from surefoot.figures.picture import Curve, Segment
from surefoot.figures.scale import Scale

Point: TypeAlias = tuple[float, float]
Stroke: TypeAlias = list[Point]

_DASH: Final = 2  # dots drawn, and dots left out


def curve_strokes(curve: Curve, x: Scale, y: Scale, columns: int) -> list[Stroke]:
    """The visible pieces of a curve."""
    return [stroke for run in _runs(curve, x, y) for stroke in _clipped(_thinned(run, columns))]


def segment_strokes(segment: Segment, x: Scale, y: Scale) -> list[Stroke]:
    """The visible piece of a straight line, if any."""
    ends = [(x.fraction(segment.x0), y.fraction(segment.y0)), (x.fraction(segment.x1), y.fraction(segment.y1))]
    return [] if any(math.isnan(v) for end in ends for v in end) else list(_clipped(ends))


def dashed(strokes: Iterable[Stroke], dots_across: int, dots_up: int) -> list[Stroke]:
    """Straight strokes as dashes, two dots on and two off."""
    dashes: list[Stroke] = []
    for stroke in strokes:
        for (x0, y0), (x1, y1) in pairwise(stroke):
            length = max(abs(x1 - x0) * (dots_across - 1), abs(y1 - y0) * (dots_up - 1), 1.0)
            for start in range(0, math.ceil(length), 2 * _DASH):
                ends = (start / length, min(start + _DASH - 1, length) / length)
                dashes.append([(x0 + (x1 - x0) * t, y0 + (y1 - y0) * t) for t in ends])
    return dashes


def _runs(curve: Curve, x: Scale, y: Scale) -> Iterator[Stroke]:
    """The unbroken parts of a curve, in fractions of the axes."""
    run: Stroke = []
    for at, value in zip(curve.xs, curve.ys, strict=False):
        point = (x.fraction(at), y.fraction(value))
        if math.isnan(point[0]) or math.isnan(point[1]):
            if run:
                yield run
            run = []
        else:
            run.append(point)
    if run:
        yield run


def _thinned(run: Stroke, columns: int) -> Stroke:
    """The lowest and the highest point of each column the run goes through, in their order."""
    if len(run) <= 2 * columns:
        return run
    thinned: Stroke = []
    start = 0
    for end in range(1, len(run) + 1):
        if end < len(run) and int(run[end][0] * columns) == int(run[start][0] * columns):
            continue
        places = range(start, end)
        ends = {min(places, key=lambda n: run[n][1]), max(places, key=lambda n: run[n][1])}
        thinned += [run[n] for n in sorted(ends)]
        start = end
    return thinned


def _clipped(run: Sequence[Point]) -> Iterator[Stroke]:
    """The parts of a run that lie in the unit square."""
    if len(run) == 1 and _inside(run[0]):
        yield [run[0]]
    stroke: Stroke = []
    for a, b in pairwise(run):
        piece = _visible(a, b)
        if piece is None:
            continue
        if stroke and piece[0] == stroke[-1]:
            stroke.append(piece[1])
            continue
        if stroke:
            yield stroke
        stroke = list(piece)
    if stroke:
        yield stroke


def _inside(point: Point) -> bool:
    return 0 <= point[0] <= 1 and 0 <= point[1] <= 1


def _visible(a: Point, b: Point) -> tuple[Point, Point] | None:
    """The part of a straight line in the unit square (clipping after Liang and Barsky, from memory)."""
    if _inside(a) and _inside(b):
        return a, b
    enter, leave = 0.0, 1.0
    dx, dy = b[0] - a[0], b[1] - a[1]
    for step, room in ((-dx, a[0]), (dx, 1 - a[0]), (-dy, a[1]), (dy, 1 - a[1])):
        if step == 0:
            if room < 0:
                return None
        elif step < 0:
            enter = max(enter, room / step)
        else:
            leave = min(leave, room / step)
    if enter > leave:
        return None
    return _along(a, dx, dy, enter), _along(a, dx, dy, leave)


def _along(a: Point, dx: float, dy: float, part: float) -> Point:
    """A point of the line, kept inside against rounding."""
    return min(max(a[0] + dx * part, 0.0), 1.0), min(max(a[1] + dy * part, 0.0), 1.0)
