"""What the rules that keep a bracket share: its sign change, which part of it is kept, and its pictures.

Signs are compared, function values are never multiplied for it: the product can underflow to zero. An end where f is
exactly zero counts as a sign change.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Real
from surefoot.methods.contract import Account, Breakdown, Point, Proposal, Setting, Shape
from surefoot.methods.rounding import sign, told, told_values


@dataclass(frozen=True, slots=True)
class BracketState:
    """The ends of a bracket with a sign change, in the order in which they were given."""

    a: Point
    b: Point


def without_sign_change(arithmetic: Arithmetic, a: Point, b: Point) -> Breakdown | None:
    """The breakdown of two starts that show no sign change, None where they show one."""
    if sign(a.f) == sign(b.f) != 0:
        return breakdown(arithmetic, "no sign change between the starts", (a, b))
    return None


def breakdown(
    arithmetic: Arithmetic, reason: str, points: tuple[Point, ...], shape: Shape = "bracket", slope: Real | None = None
) -> Breakdown:
    """A breakdown that quotes f at each of the points."""
    return Breakdown(f"{reason}: {told_values(arithmetic, points)}", Account(shape, points, slope))


def contains(a: Point, b: Point, x: Real) -> bool:
    """Whether x lies between the two ends, or is one of them."""
    return bool(a.x <= x <= b.x or b.x <= x <= a.x)


def narrowed(a: Point, b: Point, point: Point) -> tuple[Point, Point]:
    """The part of the bracket that keeps the sign change, its ends in the same order.

    A point outside the bracket changes nothing.
    """
    if not contains(a, b, point.x):
        return a, b
    return (point, b) if sign(point.f) == sign(a.f) else (a, point)


def neighbours(arithmetic: Arithmetic, x: Real, y: Real) -> bool:
    """Whether no number of the arithmetic lies between x and y."""
    larger = abs(x) if abs(x) > abs(y) else abs(y)
    return bool(abs(x - y) <= arithmetic.spacing(larger))


def held_between(a: Point, b: Point, x: Real) -> Real:
    """x itself, or the end beyond which rounding carried it."""
    low, high = (a.x, b.x) if a.x <= b.x else (b.x, a.x)
    return low if x < low else high if x > high else x


def width_figure(arithmetic: Arithmetic, a: Point, b: Point) -> tuple[tuple[str, Real], ...]:
    """The width of a bracket as a figure of an account; none where it overflows."""
    try:
        return (("width", abs(arithmetic.subtract(b.x, a.x))),)
    except OperationFailed:
        return ()


def halved(
    arithmetic: Arithmetic, a: Point, b: Point, middle: Callable[[Arithmetic, Real, Real], Real], memo: Any = None
) -> Proposal | Breakdown:
    """The middle of the bracket, or the breakdown where it or the width overflows."""
    try:
        width = abs(arithmetic.subtract(b.x, a.x))
        x = middle(arithmetic, a.x, b.x)
    except OperationFailed:
        ends = f"{told(arithmetic, a.x)} and {told(arithmetic, b.x)}"
        return Breakdown(f"the middle of {ends} overflows", Account("bracket", (a, b)))
    return Proposal(x, Account("bracket", (a, b), figures=(("width", width),)), memo)


def tolerance_setting(meaning: str) -> Setting:
    """The setting `tolerance` of a rule whose published form takes one."""
    return Setting(key="tolerance", kind="real", default="0", meaning=meaning, allowed="[0, inf)")
