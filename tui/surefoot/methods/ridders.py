"""Ridders: false position after the middle has taken the curvature out of f.

Idea: evaluate f at the middle; choose the exponential factor that puts the three values on a straight line, and go
where that line is zero.

Update rule, with a, fa = `state.a`, b, fb = `state.b`, s = sqrt(fm^2 - fa*fb), t = the sign of fa - fb:
    m = (a + b)/2, x = m + t*(m - a)*fm/s            setting form = "product": ((m - a)*fm)/s, from the left
    m = (a + b)/2, x = m + t*(m - a)*(fm/s)          form = "quotient"
    h = (b - a)/2, m = a + h, x = m + t*(h*fm)/s     form = "offset"
    m = (a + b)/2, x = m +- (m - a)/sqrt(1 - (fa/fm)*(fb/fm))    form = "ratios": no product of values of f
and |x - m| is at most half the bracket less tolerance/2. With f(x):
    where f(m) and f(x) differ in sign: the new ends are m and x (x and m with "offset"); otherwise x replaces the end
    whose sign it has
The forms differ in rounding, and in which of m and x is called a. Where f(m) is exactly zero, x is m.

The middle is evaluated by the rule itself; it is the third point of the account. Whatever point inside the bracket is
taken in the place of x, the bracket that is kept is cut at the middle too, so that it at least halves; a point outside
cuts nothing, the middle still does. An iterate put by hand cuts the bracket before the middle is known.

Needs: two starts with opposite signs of f, in either order. An end where f is exactly zero counts as a sign change.
Costs: two values of f a step; order 2, hence sqrt 2 an evaluation, where x falls on both sides of the root in turn.
Where it stays on one side, the other end is the last middle, and each step gains 2*log10(2) digits more than the last.
Breaks down when: the starts show no sign change; fm^2 and fa*fb overflow, or both underflow ("ratios" cannot); the
middle overflows.
Good at: strong curvature, with the bracket at least halved. Bad at: values of f below 1e-154 or above 1e154.
Source: C. J. F. Ridders, A new algorithm for computing a single root of a real continuous function, IEEE Transactions
on Circuits and Systems 26 (1979) 979-980; "quotient" and "offset" are the forms of common libraries (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Real
from surefoot.methods.bracket import (
    BracketState,
    breakdown,
    contains,
    held_between,
    narrowed,
    tolerance_setting,
    width_figure,
    without_sign_change,
)
from surefoot.methods.contract import (
    Account,
    Breakdown,
    Functions,
    Point,
    Proposal,
    Setting,
    Settings,
    Traits,
)
from surefoot.methods.guarded import Guarded, guarded
from surefoot.methods.rounding import sign, told


@dataclass(frozen=True, slots=True)
class _Middle:
    """The middle of a step, for `accept`: `last` where x, not m, is the first end of the new bracket."""

    point: Point
    last: bool


class Ridders:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="ridders",
        title="Ridders",
        idea="false position after the middle has taken the curvature out of f",
        starts=2,
        derivatives=0,
        bracket=True,
        evaluations=(2, 0, 0),
        order=2.0,
        source="C. J. F. Ridders, IEEE Trans. Circuits Syst. 26 (1979) 979-980",
        cost_note="one f at the middle, one at x; order 2 where x changes sides, less where it stays on one",
        moves_on=True,
    )
    settings = (
        Setting(
            key="form",
            kind="choice",
            default="product",
            meaning="how x is computed: product ((m-a)*fm)/s, quotient (m-a)*(fm/s), offset with m = a + (b-a)/2, "
            "ratios (m-a)/sqrt(1-(fa/fm)*(fb/fm))",
            choices=("product", "quotient", "offset", "ratios"),
        ),
        tolerance_setting("x stays half of it clear of the ends; 0 as published"),
    )
    state_type = BracketState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> BracketState | Breakdown:
        a, b = starts
        return without_sign_change(functions.arithmetic, a, b) or BracketState(a, b)

    def propose(self, state: BracketState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        arithmetic, a, b = functions.arithmetic, state.a, state.b
        offset = settings["form"] == "offset"
        try:
            m, half = _middle(arithmetic, a.x, b.x, offset)
        except OperationFailed:
            reason = f"the middle of {told(arithmetic, a.x)} and {told(arithmetic, b.x)} overflows"
            return Breakdown(reason, Account("bracket", (a, b)))
        middle = Point(m.value, functions.f(m.value))
        points = (a, b, middle)
        x: Real = middle.x
        if middle.f != 0:
            try:
                x = held_between(a, b, (m + _step(arithmetic, points, half, settings)).value)
            except OperationFailed:
                return breakdown(arithmetic, "fm^2 - fa*fb overflows, or underflows to zero", points)
        figures = (*width_figure(arithmetic, a, b), ("middle", middle.x))
        return Proposal(x, Account("bracket", points, figures=figures), _Middle(middle, offset))

    def accept(self, state: BracketState, proposal: Proposal, point: Point) -> BracketState:
        ends = state.a, state.b
        memo = proposal.memo
        if not isinstance(memo, _Middle):
            return BracketState(*narrowed(*ends, point)) if contains(*ends, point.x) else state
        if contains(*ends, point.x):
            if sign(point.f) != sign(memo.point.f):
                ends = (point, memo.point) if memo.last else (memo.point, point)
            else:
                ends = narrowed(*ends, point)
        return BracketState(*narrowed(*ends, memo.point))


def _middle(arithmetic: Arithmetic, a: Real, b: Real, offset: bool) -> tuple[Guarded, Guarded]:
    """The middle, and the half width with its sign, as the form computes them. Raises OperationFailed."""
    low, high = guarded(arithmetic, (a, b))
    if offset:
        half = (high - low) / 2
        return low + half, half
    middle = (low + high) / 2
    return middle, middle - low


def _step(arithmetic: Arithmetic, points: tuple[Point, ...], half: Guarded, settings: Settings) -> Guarded:
    """x - m. Raises OperationFailed where s overflows or is zero."""
    fa, fb, fm = guarded(arithmetic, (point.f for point in points))
    form = settings["form"]
    if form == "ratios":
        step = half / (1 - (fa / fm) * (fb / fm)).sqrt()
        step = step if fm > 0 else -step
    else:
        s = (fm * fm - fa * fb).sqrt()
        step = half * (fm / s) if form == "quotient" else half * fm / s
    step = step if fa > fb else -step
    most = abs(half) - Guarded(arithmetic, settings["tolerance"]) / 2
    if abs(step) <= most:
        return step
    most = most if most > 0 else half - half
    return most if step > 0 else -most
