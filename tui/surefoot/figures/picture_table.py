"""The numbers of a picture as plain lines, for a terminal that is too small for the picture."""

from __future__ import annotations

import math

from surefoot.figures.characters import Characters
from surefoot.figures.numbers import short, significant
from surefoot.figures.picture import Picture, place

_DIGITS = 6


def as_table(picture: Picture, width: int, height: int, characters: Characters) -> list[str]:
    """The marks of a picture, the most important first, then its curves: glyph, x and y.

    Returns:
        Exactly `height` lines of exactly `width` cells. Of a curve as many points are given as there are lines left,
        spread evenly over it.
    """
    width, height = max(width, 0), max(height, 0)
    titles = " ".join(filter(None, (picture.x.title, picture.y.title)))
    rows = [f"  {titles}"] if titles else []
    rows += [_row(characters.mark(mark.kind), mark.x, mark.y) for mark in reversed(picture.marks)][:height]
    left = height - len(rows)
    for curve in picture.curves:
        share = left // len(picture.curves)
        points = [(x, y) for x, y in zip(curve.xs, curve.ys, strict=False) if math.isfinite(place(y))]
        step = max(1, math.ceil(len(points) / share)) if share > 0 else len(points) + 1
        rows += [_row(" ", x, y) for x, y in points[::step]]
    if not rows[1 if titles else 0 :]:
        rows = [picture.empty]
    rows += [""] * (height - len(rows))
    return [characters.fit(row, width) for row in rows[:height]]


def _row(glyph: str, x: float, y: float | None) -> str:
    return f"{glyph} {significant(x, _DIGITS)} {'' if y is None else short(y)}"
