"""The numbers of a picture as plain lines, for a terminal that is too small for the picture."""

from __future__ import annotations

import math
from typing import Final

from surefoot.figures.characters import Characters
from surefoot.figures.numbers import short, significant
from surefoot.figures.picture import Picture, place

_DIGITS: Final = 6
_LARGEST_WHOLE: Final = 10.0**_DIGITS


def as_table(picture: Picture, width: int, height: int, characters: Characters) -> list[str]:
    """The marks of a picture, the most important first, then its curves: glyph, x and y.

    Returns:
        Exactly `height` lines of exactly `width` cells. Of a curve as many points are given as there are lines left,
        spread evenly over it.
    """
    width, height = max(width, 0), max(height, 0)
    titles = " ".join(filter(None, (picture.x.title, picture.y.title)))
    head = [f"  {titles}"] if titles else []
    rows = [_row(characters.mark(mark.kind), mark.x, mark.y, width) for mark in picture.marks[::-1][:height]]
    left = height - len(head) - len(rows)
    for curve in picture.curves:
        points = [(x, y) for x, y in zip(curve.xs, curve.ys, strict=False) if math.isfinite(place(y))]
        share = left // len(picture.curves)
        if share > 0:
            rows += [_row(" ", x, y, width) for x, y in points[:: math.ceil(len(points) / share) or 1]]
    lines = [*head, *rows] if rows else [picture.empty]
    lines += [""] * (height - len(lines))
    return [characters.fit(line, width) for line in lines[:height]]


def _row(glyph: str, x: float, y: float | None, width: int) -> str:
    """Both numbers where they fit, else x to as many digits as do."""
    row = f"{glyph} {_written(x, _DIGITS)} {short(y)}"
    digits = _DIGITS
    while len(row) > width and digits:
        row = f"{glyph} {_written(x, digits)}"
        digits -= 1
    return row.rstrip()


def _written(x: float, digits: int) -> str:
    at = place(x)
    return str(int(at)) if at.is_integer() and abs(at) < _LARGEST_WHOLE else significant(x, digits)
