"""Safeguarded Newton: follow the tangent while it stays in the bracket and steps shrink, halve otherwise.

Idea: Newton-Raphson from a point inside a bracket; where the tangent leaves the bracket, or the step is more than half
of the one before last, take the middle instead.

Update rule, with f(a) < 0 < f(b) = `state.a`, `state.b`, x, f = `state.point`, D = f'(x), dx = `state.step` the length
of the last step, dx0 = `state.before` that of the one before:
    (x - b)*D - f and (x - a)*D - f of one sign (the tangent leaves the bracket), or |2*f| > |dx0*D|:
        dx0 := dx, dx := (b - a)/2, x := a + dx
    otherwise:
        dx0 := dx, dx := f/D, x := x - dx
    x replaces the end whose sign f has there
The first step is the middle, (a + b)/2, and needs no derivative; with setting first = "end" it goes from the second
start. At the start dx = dx0 = |b - a|. D is the host code's derivative (setting derivative = "host") or the exact one.

A point taken in the place of x, by step control, is the next x, and its distance from the last one is dx; one put by
hand is the next x with dx = dx0 = |b - a| anew. One outside the bracket leaves it as it is, and the next step is the
middle.

Needs: two starts with opposite signs of f, in either order, and f'. An exact zero counts as a sign change.
Costs: one value of f and one of f' a step (the first step: f alone); order 2 at a simple root.
Breaks down when: the starts show no sign change; the middle overflows. A slope of zero, and a tangent that overflows,
are a halving. Where f' has no value, the evaluation fails.
Good at: Newton's speed with a certain end. Bad at: a wrong f', which turns it into bisection without a word.
Source: W. H. Press et al., Numerical Recipes, 3rd edition 2007, section 9.4 (from memory); signs are compared here,
where the source multiplies.
"""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Real
from surefoot.methods.bracket import (
    breakdown,
    contains,
    halved,
    held_between,
    narrowed,
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
from surefoot.methods.newton_raphson import NewtonRaphson
from surefoot.methods.rounding import half_sum, sign


@dataclass(frozen=True, slots=True)
class SafeguardedState:
    """The bracket with f below zero at a, and the iterate that the tangent is taken at.

    Attributes:
        step: length of the last step; `before` that of the one before.
        point: None where the next step is the middle.
    """

    a: Point
    b: Point
    step: Real
    before: Real
    point: Point | None = None


class SafeguardedNewton:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="safeguarded-newton",
        title="Safeguarded Newton",
        idea="the tangent while it stays in the bracket and steps shrink, the middle otherwise",
        starts=2,
        derivatives=1,
        bracket=True,
        evaluations=(1, 1, 0),
        order=2.0,
        source="W. H. Press et al., Numerical Recipes, 2007, section 9.4",
        cost_note="the first step is the middle, without f'",
    )
    settings = (
        *NewtonRaphson.settings,
        Setting(
            key="first",
            kind="choice",
            default="middle",
            meaning="the first step: the middle of the bracket, or the tangent at its second end",
            choices=("middle", "end"),
        ),
    )
    state_type = SafeguardedState

    def begin(
        self, starts: tuple[Point, ...], settings: Settings, functions: Functions
    ) -> SafeguardedState | Breakdown:
        arithmetic = functions.arithmetic
        missing = without_sign_change(arithmetic, *starts)
        if missing:
            return missing
        a, b = sorted(starts, key=lambda point: sign(point.f))
        try:
            width = abs(arithmetic.subtract(b.x, a.x))
        except OperationFailed:
            return breakdown(arithmetic, "the width of the bracket overflows", starts)
        return SafeguardedState(a, b, width, width, starts[1] if settings["first"] == "end" else None)

    def propose(self, state: SafeguardedState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        arithmetic, point = functions.arithmetic, state.point
        if point is None:
            return halved(arithmetic, state.a, state.b, half_sum, memo=(state.step, state.before))
        slope = functions.derivative(point.x)
        step = _tangent_step(arithmetic, state, point, slope)
        try:
            if step is None:
                return _halving(arithmetic, state, slope)
            x = Guarded(arithmetic, point.x) - step
        except OperationFailed:
            return breakdown(arithmetic, "the step overflows", (state.a, state.b))
        figures = width_figure(arithmetic, state.a, state.b)
        account = Account("tangent", (point,), slope, figures, (-step).value)
        return Proposal(held_between(state.a, state.b, x.value), account, (abs(step.value), state.step))

    def accept(self, state: SafeguardedState, proposal: Proposal, point: Point) -> SafeguardedState:
        if not contains(state.a, state.b, point.x):
            return SafeguardedState(state.a, state.b, state.step, state.before)
        a, b = narrowed(state.a, state.b, point)
        if proposal.memo is None:
            width = abs(b.x - a.x)
            return SafeguardedState(a, b, width, width, point)
        step, before = proposal.memo
        if point.x != proposal.x and state.point is not None:
            step = abs(point.x - state.point.x)
        return SafeguardedState(a, b, step, before, point)


def _tangent_step(arithmetic: Arithmetic, state: SafeguardedState, point: Point, slope: Real) -> Guarded | None:
    """f/D, None where the tangent leaves the bracket, overflows, or the steps do not shrink."""
    a, b, x, f = guarded(arithmetic, (state.a.x, state.b.x, point.x, point.f))
    d, before = guarded(arithmetic, (slope, state.before))
    try:
        beyond_b, beyond_a = (x - b) * d - f, (x - a) * d - f
        leaves = sign(beyond_b.value) == sign(beyond_a.value) != 0
        if leaves or abs(2 * f) > abs(before * d):
            return None
        return f / d
    except OperationFailed:
        return None


def _halving(arithmetic: Arithmetic, state: SafeguardedState, slope: Real) -> Proposal:
    """a + (b - a)/2, with the slope that was not followed. Raises OperationFailed."""
    a, b = guarded(arithmetic, (state.a.x, state.b.x))
    half = (b - a) / 2
    figures = (*width_figure(arithmetic, state.a, state.b), ("slope", slope))
    account = Account("bracket", (state.a, state.b), figures=figures)
    return Proposal((a + half).value, account, (abs(half.value), state.step))
