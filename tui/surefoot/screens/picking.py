"""Choosing a start on the picture of f: a cursor that moves a cell at a time and reads as one would type it."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace


@dataclass(frozen=True, slots=True)
class Picking:
    """A cursor on the picture: which start is chosen, over which window, in cells across it."""

    number: int
    low: float
    high: float
    cells: int
    place: int = 0

    @property
    def text(self) -> str:
        """The place as a decimal no finer than a tenth of a cell, as one would type it."""
        share = self.place / (self.cells - 1)
        x = self.low * (1 - share) + self.high * share
        cell = abs(self.high - self.low) / (self.cells - 1)
        decimals = 1 - math.floor(math.log10(cell)) if cell > 0 else 6
        return repr(round(x, decimals))

    @property
    def x(self) -> float:
        return float(self.text)

    def moved(self, by: int) -> Picking:
        return replace(self, place=max(0, min(self.place + by, self.cells - 1)))
