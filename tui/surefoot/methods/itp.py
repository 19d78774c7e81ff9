"""ITP: interpolate, truncate, project - the false position, moved towards the middle just far enough.

Idea: take the zero of the chord, move it a little towards the middle, so that the bracket shrinks from both sides, and
never further from the middle than bisection can make good: it needs at most n0 steps more than bisection.

Update rule, with a < b = `state.a`, `state.b`, m = (a + b)/2, w = b - a:
    x_f = (fb*a - fa*b)/(fb - fa)                                 interpolate: the zero of the chord
    t = x_f moved towards m by delta = kappa1*w^kappa2, but not beyond m                      truncate
    x = t where |t - m| <= r, otherwise m moved towards x_f by r,  r = `state.reach` - w/2     project
    x replaces the end whose sign f has there; `state.reach` := reach/2
At the start reach = epsilon*2^(n + n0), with n the least whole number for which epsilon*2^n >= w/2, the steps of
bisection. The middle itself is taken where w <= 2*epsilon, where the published algorithm ends, and where r comes out
below zero by more than rounding, since a point was taken that the rule did not propose.

`tolerance` is epsilon of the published algorithm, `state.epsilon`; with 0 it is the rounding part alone, 2*eps*|x| of
the larger start, eps the spacing of the numbers at 1. kappa1, kappa2, n0 are those of the published experiments: 0.1, 2
and 1; many codes have kappa1 = 0.2/(b - a).

A point taken in the place of x, by step control, counts as a step; one put by hand does not, since it costs no step of
bisection's account. One outside the bracket changes nothing.

Needs: two starts with opposite signs of f, in either order. An end where f is exactly zero counts as a sign change.
Costs: one value of f a step; order up to sqrt(kappa2) on the average near a simple root.
Breaks down when: the starts show no sign change; the width or the reach overflows. A chord or a delta that overflows
gives the middle.
Good at: never being worse than bisection by more than n0 steps. Bad at: reaching an order above the secant's.
Source: I. F. D. Oliveira, R. H. C. Takahashi, An enhancement of the bisection method average performance preserving
minmax optimality, ACM TOMS 47 (2020) 5 (from memory and secondary text).
"""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Real
from surefoot.methods.bracket import (
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
from surefoot.methods.guarded import Guarded, guarded, rounding_unit

_ROUNDING = 4  # spacings of the numbers at the middle by which rounding may bring r below zero


@dataclass(frozen=True, slots=True)
class ItpState:
    """The bracket a < b, and how far from an end bisection could still reach: epsilon*2^(n + n0 - steps)."""

    a: Point
    b: Point
    reach: Real
    epsilon: Real


class Itp:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="itp",
        title="ITP",
        idea="the false position, moved towards the middle just far enough",
        starts=2,
        derivatives=0,
        bracket=True,
        evaluations=(1, 0, 0),
        order=None,
        source="I. F. D. Oliveira, R. H. C. Takahashi, ACM TOMS 47 (2020) 5",
        cost_note="at most n0 steps more than bisection; order up to sqrt(kappa2) on the average",
        moves_on=True,
    )
    settings = (
        Setting(key="kappa1", kind="real", default="0.1", meaning="in delta = kappa1*(b-a)^kappa2", allowed="(0, inf)"),
        Setting(key="kappa2", kind="real", default="2", meaning="in delta = kappa1*(b-a)^kappa2", allowed="[1, 2.618)"),
        Setting(
            key="n0",
            kind="real",
            default="1",
            meaning="steps that it may take beyond those of bisection",
            allowed="[0, inf)",
        ),
        tolerance_setting("epsilon, the half width that bisection is counted to; 0 leaves 2*eps*|x|"),
    )
    state_type = ItpState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> ItpState | Breakdown:
        arithmetic = functions.arithmetic
        missing = without_sign_change(arithmetic, *starts)
        if missing:
            return missing
        a, b = sorted(starts, key=lambda point: point.x)
        try:
            return ItpState(a, b, *_reach(arithmetic, a.x, b.x, settings))
        except OperationFailed:
            return breakdown(arithmetic, "the width of the bracket or its reach overflows", starts)

    def propose(self, state: ItpState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        arithmetic = functions.arithmetic
        a, b, reach, epsilon = guarded(arithmetic, (state.a.x, state.b.x, state.reach, state.epsilon))
        try:
            middle, radius = (a + b) / 2, reach - (b - a) / 2
            rounding = _ROUNDING * Guarded(arithmetic, arithmetic.spacing(middle.value))
            followed = (b - a) / 2 > epsilon and radius >= -rounding
        except OperationFailed:
            return breakdown(arithmetic, "the middle overflows", (state.a, state.b))
        figures = width_figure(arithmetic, state.a, state.b)
        x = middle
        found = _truncated(arithmetic, state, middle, settings) if followed else None
        if found is not None:
            truncated, zero, delta = found
            figures = (*figures, ("radius", radius.value), ("chord_zero", zero.value), ("truncation", delta.value))
            x = truncated if abs(truncated - middle) <= radius else _towards(middle, zero, radius)
        account = Account("bracket", (state.a, state.b), figures=figures)
        return Proposal(held_between(state.a, state.b, x.value), account, True)

    def accept(self, state: ItpState, proposal: Proposal, point: Point) -> ItpState:
        if not contains(state.a, state.b, point.x):
            return state
        reach = state.reach if proposal.memo is None else state.reach / 2
        return ItpState(*narrowed(state.a, state.b, point), reach, state.epsilon)


def _reach(arithmetic: Arithmetic, a: Real, b: Real, settings: Settings) -> tuple[Real, Real]:
    """epsilon*2^(n + n0) and epsilon: doubling is exact, so that no logarithm decides n. Raises OperationFailed."""
    low, high, epsilon, n0 = guarded(arithmetic, (a, b, settings["tolerance"], settings["n0"]))
    half = (high - low) / 2
    if not epsilon > 0:
        larger = abs(high) if abs(high) > abs(low) else abs(low)
        epsilon = 2 * rounding_unit(arithmetic) * larger
    if not epsilon > 0:
        epsilon = Guarded(arithmetic, arithmetic.spacing(arithmetic.integer(0)))
    reach = epsilon
    while reach < half:
        reach = 2 * reach
    return (reach * Guarded(arithmetic, arithmetic.integer(2)).power(n0)).value, epsilon.value


def _truncated(
    arithmetic: Arithmetic, state: ItpState, middle: Guarded, settings: Settings
) -> tuple[Guarded, Guarded, Guarded] | None:
    """The truncated point, the zero of the chord and delta; None where one of them has no finite value."""
    a, b, fa, fb = guarded(arithmetic, (state.a.x, state.b.x, state.a.f, state.b.f))
    kappa1, kappa2 = guarded(arithmetic, (settings["kappa1"], settings["kappa2"]))
    try:
        zero = (fb * a - fa * b) / (fb - fa)
        delta = kappa1 * (b - a).power(kappa2)
        return (_towards(zero, middle, delta) if delta <= abs(middle - zero) else middle), zero, delta
    except OperationFailed:
        return None


def _towards(start: Guarded, goal: Guarded, distance: Guarded) -> Guarded:
    """The point at a distance from `start` on the way to `goal`; `start` itself where the two are one."""
    return start + distance if start < goal else start - distance if start > goal else start
