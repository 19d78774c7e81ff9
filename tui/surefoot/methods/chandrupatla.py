"""Chandrupatla: inverse quadratic interpolation where the three points say that it holds, halving elsewhere.

Idea: the inverse parabola through the last three points is one to one between the ends exactly where two inequalities
hold; interpolate there, halve everywhere else.

Update rule, with x1, f1 = `state.a` the newest end, x2, f2 = `state.b` the other one, x3, f3 = `state.third` the point
that was dropped last:
    x = x1 + t*(x2 - x1)
    t = 1/2 in the first step; then with xi = (x1 - x2)/(x3 - x2), phi = (f1 - f2)/(f3 - f2), where
    1 - sqrt(1 - xi) < phi < sqrt(xi):
        t = f1/(f1 - f2)*f3/(f3 - f2) - alpha*f1/(f3 - f1)*f2/(f2 - f3),  alpha = (x3 - x1)/(x2 - x1)
    and t = 1/2 otherwise; t is held within [tl, 1 - tl], tl = (2*eps*|xm| + tolerance)/|x2 - x1|, with xm the end
    where |f| is less
    where f(x) has the sign of f1: x3 := x1;  otherwise: x3 := x2, x2 := x1;  then x1 := x
Products and quotients are taken from the left.

eps is the spacing of the numbers at 1. `tolerance` is the absolute part of the published tolerance, which keeps x clear
of the ends and there also ends the run (tl > 1/2); `relative_tolerance` takes the place of 2*eps where it is larger. A
run whose own test has not fired halves from there on.

A point taken in the place of x, by step control or by hand, is treated as x: the three points are what they are. One
outside the bracket changes nothing.

Needs: two starts with opposite signs of f; the first step is the middle. An exact zero counts as a sign change.
Costs: one value of f a step; order up to 1.839 once it interpolates.
Breaks down when: the starts show no sign change; the width overflows. An interpolation that overflows is a halving.
Good at: flat and multiple roots, where it halves at once. Bad at: the last steps to a simple root, where rules of
higher order need fewer.
Source: T. R. Chandrupatla, A new hybrid quadratic/bisection algorithm for finding the zero of a nonlinear function
without using derivatives, Advances in Engineering Software 28 (1997) 145-149 (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.methods.bracket import (
    breakdown,
    contains,
    held_between,
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
from surefoot.methods.guarded import Guarded, guarded, rounding_unit
from surefoot.methods.rounding import sign


@dataclass(frozen=True, slots=True)
class ThreePointState:
    """The bracket with its newest end in a, and the point that was dropped last; None before the first step."""

    a: Point
    b: Point
    third: Point | None = None


class Chandrupatla:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="chandrupatla",
        title="Chandrupatla",
        idea="inverse quadratic interpolation where the points say that it holds, halving elsewhere",
        starts=2,
        derivatives=0,
        bracket=True,
        evaluations=(1, 0, 0),
        order=None,
        source="T. R. Chandrupatla, Adv. Eng. Software 28 (1997) 145-149",
        cost_note="order up to 1.839 once it interpolates",
        moves_on=True,
    )
    settings = (
        tolerance_setting("x stays 2*eps*|x| and this clear of the ends; 0 leaves the rounding part"),
        Setting(
            key="relative_tolerance",
            kind="real",
            default="0",
            meaning="takes the place of 2*eps where it is larger",
            allowed="[0, inf)",
        ),
    )
    state_type = ThreePointState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> ThreePointState | Breakdown:
        a, b = starts
        return without_sign_change(functions.arithmetic, a, b) or ThreePointState(a, b)

    def propose(self, state: ThreePointState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        arithmetic = functions.arithmetic
        ends = state.a, state.b
        x1, x2 = guarded(arithmetic, (state.a.x, state.b.x))
        t, clear = _fraction(arithmetic, state, settings)
        try:
            x = x1 + ((x2 - x1) / 2 if t is None else t * (x2 - x1))
            figures = width_figure(arithmetic, *ends)
            if clear is not None:
                figures = (*figures, ("clear_of_end", (clear * abs(x2 - x1)).value))
        except OperationFailed:
            return breakdown(arithmetic, "the step overflows", ends)
        account = Account("bracket", ends, figures=figures)
        if t is not None and clear is None and state.third is not None:
            account = Account("parabola", (*ends, state.third), figures=figures)
        return Proposal(held_between(*ends, x.value), account)

    def accept(self, state: ThreePointState, proposal: Proposal, point: Point) -> ThreePointState:
        if not contains(state.a, state.b, point.x):
            return state
        if sign(point.f) == sign(state.a.f):
            return ThreePointState(point, state.b, state.a)
        return ThreePointState(point, state.a, state.b)


def _fraction(
    arithmetic: Arithmetic, state: ThreePointState, settings: Settings
) -> tuple[Guarded | None, Guarded | None]:
    """t, and tl where t was held by it; no t where the bracket is to be halved."""
    if state.third is None:
        return None, None
    try:
        clear = _clearance(arithmetic, state, settings)
        t = _interpolated(arithmetic, state, state.third)
    except OperationFailed:
        return None, None
    if t is None or 2 * clear > 1:  # the published algorithm ends where 2 tl > 1
        return None, None
    if t < clear:
        return clear, clear
    return (1 - clear, clear) if t > 1 - clear else (t, None)


def _clearance(arithmetic: Arithmetic, state: ThreePointState, settings: Settings) -> Guarded:
    """tl: how close to the ends t may come."""
    best = state.a if abs(state.a.f) < abs(state.b.f) else state.b
    x1, x2, xm = guarded(arithmetic, (state.a.x, state.b.x, best.x))
    relative, twice = Guarded(arithmetic, settings["relative_tolerance"]), 2 * rounding_unit(arithmetic)
    part = (relative if relative > twice else twice) * abs(xm)
    return (part + Guarded(arithmetic, settings["tolerance"])) / abs(x2 - x1)


def _interpolated(arithmetic: Arithmetic, state: ThreePointState, third: Point) -> Guarded | None:
    x1, x2, x3 = guarded(arithmetic, (state.a.x, state.b.x, third.x))
    f1, f2, f3 = guarded(arithmetic, (state.a.f, state.b.f, third.f))
    xi, phi = (x1 - x2) / (x3 - x2), (f1 - f2) / (f3 - f2)
    if not 1 - (1 - xi).sqrt() < phi < xi.sqrt():
        return None
    alpha = (x3 - x1) / (x2 - x1)
    return f1 / (f1 - f2) * f3 / (f3 - f2) - alpha * f1 / (f3 - f1) * f2 / (f2 - f3)
