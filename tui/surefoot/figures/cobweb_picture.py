"""The picture of a fixed-point iteration: g, the line y = x, and the path of the iterates between them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace
from itertools import pairwise

from surefoot.figures.function_picture import Samples, iterate_marks, sampled_axis
from surefoot.figures.picture import Axis, Curve, Picture, Segment, place


def cobweb_picture(samples: Samples, *, iterates: Sequence[float] = (), x: Axis | None = None) -> Picture:
    """g over the range of the samples, y = x, and the path from each iterate to g and across to the next.

    Args:
        samples: xs in ascending order and g at them, None where g has no value.
        iterates: the iterates, the oldest first; the one in hand is marked `o`, the one before it `x`.
        x: name and unit of the unknown; limits other than those of the samples.
    """
    across = sampled_axis(x or Axis("x"), samples[0])
    path = [value for value in map(place, iterates) if math.isfinite(value)]
    steps = [Segment(a, a, a, b) for a, b in pairwise(path)] + [Segment(a, b, b, b) for a, b in pairwise(path)]
    diagonal = [value for value in (across.low, across.high) if value is not None]
    return Picture(
        curves=(Curve(*samples), Curve(diagonal, diagonal)),
        segments=tuple(steps),
        marks=tuple(iterate_marks([(value, value) for value in path])),
        x=across,
        y=replace(across, name="g"),
        empty="no value of g here",
    )
