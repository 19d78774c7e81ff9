"""The picture of convergence: how long the steps are and how large f is, on a logarithmic axis, by step."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Final, TypeAlias

from surefoot.figures.picture import Axis, Curve, Mark, Picture, place

ConvergenceStep: TypeAlias = tuple[int, float | None, float | None]

_STEP: Final = "d"
_RESIDUAL: Final = "r"
_BOTH: Final = "*"
_ROOM: Final = 0.15  # of the height, below the least value


def convergence_picture(steps: Sequence[ConvergenceStep], *, name: str = "x") -> Picture:
    """|dx| and |f| by step, each drawn with its own letter and `*` where they meet.

    An exact zero has no place on a logarithmic axis: its line runs down to the bottom, where a `0` stands. Where f has
    no value a `!` stands at the bottom; the first iterate has no dx and no mark for it.

    Args:
        steps: for each iterate its index k, dx to it from the one before, and f at it; None where there is none.
        name: the unknown.
    """
    sizes = [
        (_STEP, [(k, _size(dx)) for k, dx, _ in steps]),
        (_RESIDUAL, [(k, _size(f)) for k, _, f in steps]),
    ]
    positive = [size for _, points in sizes for _, size in points if 0 < size < math.inf]
    bottom, top = _limits(positive, any(size == 0 for _, points in sizes for _, size in points))
    curves: list[Curve] = []
    marks: list[Mark] = []
    for glyph, points in sizes:
        curves.append(Curve([k for k, _ in points], [bottom if size == 0 else size for _, size in points]))
        marks += [Mark(k, size, glyph) for k, size in points if 0 < size < math.inf]
        marks += [Mark(k, size, "exact_zero") for k, size in points if size == 0]
    marks += [Mark(k, None, "no_value") for k, _, f in steps if not math.isfinite(_size(f))]
    return Picture(
        curves=tuple(curves),
        marks=tuple(marks),
        x=Axis("k", whole=True),
        y=Axis(f"{_STEP} |d{name}|  {_RESIDUAL} |residual|", low=bottom, high=top, log=True),
        together=_BOTH,
        empty="no step and no value of f yet",
    )


def _size(value: float | None) -> float:
    return abs(place(value))


def _limits(positive: Sequence[float], room: bool) -> tuple[float, float]:
    """The least and greatest value; with room below for the exact zeros."""
    if not positive:
        return 1e-16, 1.0
    low, high = min(positive), max(positive)
    decades = max(1.0, _ROOM * (math.log10(high) - math.log10(low)))
    return (max(low / 10.0**decades, math.ulp(0.0)) if room else low), high
