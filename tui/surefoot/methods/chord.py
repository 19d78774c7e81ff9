"""The zero of the chord through two points, in the operations of the published and of the common forms."""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Real
from surefoot.methods.contract import Point

FORMS = ("product", "slope", "symmetric", "ratio")
"""The forms of `chord_zero`; equal in algebra, not in rounding."""


@dataclass(frozen=True, slots=True)
class ChordZero:
    """Where a chord meets zero.

    Attributes:
        step: from the newer point, as computed before it was added; None where the form gives x itself.
        slope: of the chord; None where it overflows and the form does not need it.
    """

    x: Real
    step: Real | None
    slope: Real | None


def chord_zero(arithmetic: Arithmetic, older: Point, newer: Point, form: str) -> ChordZero:
    """The zero, with (x0, f0) the older point and (x1, f1) the newer one.

    product    x1 - (f1*(x1 - x0))/(f1 - f0)
    slope      x1 - f1/((f1 - f0)/(x1 - x0))
    symmetric  (x0*f1 - x1*f0)/(f1 - f0)
    ratio      x1 - (f1/(f1 - f0))*(x1 - x0)

    Raises:
        OperationFailed: an operation has no finite value; a horizontal chord is a division by zero.
    """
    x0, f0, x1, f1 = older.x, older.f, newer.x, newer.f
    multiply, divide, subtract = arithmetic.multiply, arithmetic.divide, arithmetic.subtract
    run, rise = subtract(x1, x0), subtract(f1, f0)
    slope = _shown_slope(arithmetic, rise, run)
    if form == "symmetric":
        return ChordZero(divide(subtract(multiply(x0, f1), multiply(x1, f0)), rise), None, slope)
    if form == "slope":
        back = divide(f1, divide(rise, run))
    elif form == "ratio":
        back = multiply(divide(f1, rise), run)
    else:
        back = divide(multiply(f1, run), rise)
    return ChordZero(subtract(x1, back), arithmetic.negate(back), slope)


def chord_slope(arithmetic: Arithmetic, older: Point, newer: Point) -> Real | None:
    """The slope of a chord that a rule does not compute itself; None where it has no finite value."""
    try:
        rise, run = arithmetic.subtract(newer.f, older.f), arithmetic.subtract(newer.x, older.x)
    except OperationFailed:
        return None
    return _shown_slope(arithmetic, rise, run)


def _shown_slope(arithmetic: Arithmetic, rise: Real, run: Real) -> Real | None:
    """The slope of a chord whose step is computed without it: None where it would overflow."""
    try:
        return arithmetic.divide(rise, run)
    except OperationFailed:
        return None
