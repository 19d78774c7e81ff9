"""Brackets of a range: the cells of a scan where f changes sign, told apart from those where a pole is suspected.

Idea: a change of sign between two places is a root only where f goes through zero between them. Halve the cell a few
times, each time keeping the half with the change: towards a root of a continuous f the values shrink, towards a pole
they grow. That is suspicion, not proof: an interval evaluation decides.

The scan is even in x, and where both ends have one sign and lie far apart, half of its places are even in ln |x|. It
sees no root that touches zero without a change of sign, and no pair of changes inside one cell.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Literal, TypeAlias

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.meter import Meter
from surefoot.equation.results import Failure, FailureKind, Purpose, Real, Result, Stopped
from surefoot.methods.contract import Point
from surefoot.methods.guarded import Guarded, guarded
from surefoot.methods.rounding import sign

BUDGET = 2000
"""Evaluations of f that a search makes at most, unless it is told otherwise."""

Kind: TypeAlias = Literal["crossing", "pole", "gap"]

_A_CELL = (
    5  # evaluations that the budget holds for each cell: one of the scan, four halvings if every cell has a change
)
_MOST_HALVINGS = 10
_DECADES = 100  # from this ratio of the ends on, the scan is even in ln |x| too


@dataclass(frozen=True, slots=True)
class Bracket:
    """A cell whose ends differ in the sign of f, as the scan found them.

    Attributes:
        kind: "crossing" where nothing speaks against a root; "pole" where |f| grows towards the change of sign; "gap"
            where f has no value at a place inside, for another reason than a division by zero or an overflow.
    """

    a: Point
    b: Point
    kind: Kind


def find_brackets(meter: Meter, low: Real, high: Real, budget: int = BUDGET) -> tuple[Bracket, ...]:
    """The cells of a scan from low to high where f changes sign, in the order of x.

    An end where f is exactly zero counts as a change of sign, and once: with the cell before it. Places where f has no
    value are left out with the cells that they end. When the user stops the search, what was found so far is returned.

    Args:
        meter: evaluates f, as probes; at most `budget` times, but at both ends in any case.
        low, high: the range, low < high, in the arithmetic of the meter's function.
    """
    arithmetic = meter.function.arithmetic
    cells = max(1, budget // _A_CELL)
    points = _scanned(meter, _places(arithmetic, low, high, cells))
    changes = list(_changes(points))
    if not changes:
        return ()
    halvings = min(_MOST_HALVINGS, max(0, budget - cells - 1) // len(changes))
    found: list[Bracket] = []
    for a, b in changes:
        kind = _kind(meter, a, b, halvings)
        if kind is None:
            break
        found.append(Bracket(a, b, kind))
    return tuple(found)


def _places(arithmetic: Arithmetic, low: Real, high: Real, cells: int) -> list[Real]:
    """The places of the scan in order, both ends among them; those that overflow are left out."""
    a, b = guarded(arithmetic, (low, high))
    apart = _decades_apart(a, b)
    even = cells - cells // 2 if apart else cells
    places = {low, high, *_between(a, b, even)}
    if apart:
        places |= set(_geometric(a, b, cells // 2))
    return sorted(places)


def _decades_apart(a: Guarded, b: Guarded) -> bool:
    if sign(a.value) != sign(b.value) or sign(a.value) == 0:
        return False
    small, large = (abs(a), abs(b)) if a > 0 else (abs(b), abs(a))
    try:
        return large >= small * Guarded(a.arithmetic, a.arithmetic.integer(_DECADES))
    except OperationFailed:
        return False


def _between(a: Guarded, b: Guarded, cells: int) -> Iterator[Real]:
    """The inner ends of cells of one width: a*(1 - n/cells) + b*(n/cells), which cannot overflow."""
    whole = a.arithmetic.integer(cells)
    for n in range(1, cells):
        part = Guarded(a.arithmetic, a.arithmetic.integer(n)) / Guarded(a.arithmetic, whole)
        yield (a * (1 - part) + b * part).value


def _geometric(a: Guarded, b: Guarded, cells: int) -> Iterator[Real]:
    """The inner ends of cells of one ratio: a*(b/a)^(n/cells); none where b/a overflows."""
    whole = Guarded(a.arithmetic, a.arithmetic.integer(cells))
    for n in range(1, cells):
        try:
            yield (a * (b / a).power(Guarded(a.arithmetic, a.arithmetic.integer(n)) / whole)).value
        except OperationFailed:
            return


def _scanned(meter: Meter, places: Sequence[Real]) -> list[Point | None]:
    """f at the places, None where it has no value; cut off where the user stopped it."""
    points: list[Point | None] = []
    for x in places:
        f = meter.evaluate(x, Purpose.PROBE)
        if isinstance(f, Stopped):
            break
        points.append(None if isinstance(f, Failure) else Point(x, f))
    return points


def _changes(points: Sequence[Point | None]) -> Iterator[tuple[Point, Point]]:
    """Neighbours whose values differ in sign. A run of zeros counts once, where it begins."""
    counted = False
    for a, b in pairwise(points):
        if a is None or b is None:
            counted = False
            continue
        leaves_zero = sign(a.f) == 0
        if sign(a.f) != sign(b.f) and not (leaves_zero and counted):
            yield a, b
        counted = sign(b.f) == 0 and (not leaves_zero or counted)


def _kind(meter: Meter, a: Point, b: Point, halvings: int) -> Kind | None:
    """What a few halvings say about a change of sign; None when the user stopped them."""
    arithmetic = meter.function.arithmetic
    first = a, b
    done = 0
    for _ in range(halvings):
        left, right = guarded(arithmetic, (a.x, b.x))
        x = (left / 2 + right / 2).value  # the sum of the ends, and their difference, can overflow
        if not a.x < x < b.x:
            break
        f: Result = meter.evaluate(x, Purpose.PROBE)
        if isinstance(f, Stopped):
            return None
        if isinstance(f, Failure):
            return "pole" if f.kind in (FailureKind.DIVISION_BY_ZERO, FailureKind.OVERFLOW) else "gap"
        if f == 0:
            return "crossing"
        middle = Point(x, f)
        a, b = (middle, b) if sign(f) == sign(a.f) else (a, middle)
        done += 1
    return "pole" if _grew(arithmetic, first, (a, b), done) else "crossing"


def _grew(arithmetic: Arithmetic, first: tuple[Point, Point], last: tuple[Point, Point], halvings: int) -> bool:
    """Whether |f| grew towards the change of sign as it does towards a pole.

    Near a simple pole the smaller of the two values doubles with each halving, but for the first; a third of these
    doublings is asked for, and the larger value must not have shrunk, as it does towards a root.
    """
    if halvings < 2:
        return False
    before, after = ([abs(point.f) for point in pair] for pair in (first, last))
    least, most = guarded(arithmetic, (min(after), max(after)))
    factor = Guarded(arithmetic, arithmetic.integer(2 ** (halvings // 3)))
    try:
        return bool(least > factor * Guarded(arithmetic, min(before)) and most.value >= max(before))
    except OperationFailed:
        return False
