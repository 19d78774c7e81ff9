"""Brent-Dekker: inverse interpolation where it is safe, halving where it is not.

Idea: keep the best iterate, the one before it and the end across the root; go to the zero of the inverse parabola (or
of the chord) through them if that lies well inside the bracket and steps shrink, and to the middle otherwise.

Update rule, with b = `state.b` the best iterate, a = `state.previous` the one before it, c = `state.a` the end across
the root, d = `state.step` the last step and e = `state.before` the one before it:
    delta = 2*eps*|b| + tolerance,  m = (c - b)/2
    |e| < delta or |fa| <= |fb|:  d = e = m
    else with s = fb/fa:
        a = c:  p = 2*m*s,  q = 1 - s
        else:   q = fa/fc, r = fb/fc:  p = s*(2*m*q*(q - r) - (b - a)*(r - 1)),  q = (q - 1)*(r - 1)*(s - 1)
        p > 0:  q := -q, else p := -p
        2*p < 3*m*q - |delta*q| and p < |e/2*q|:  e := d, d := p/q;  else d = e = m
    x = b + d, or b + delta towards c where |d| <= delta
    a := b, b := x;  where f(b) has the sign of f(c): c := a, d = e = b - a;  where |fc| < |fb|: b and c change places
                     and a := c
This is setting interpolation = "ratios". With "differences", the form of a common library, p/q is
    -fb*(b - a)/(fb - fa), or with A = (fa - fb)/(a - b), C = (fc - fb)/(c - b): -fb*(fc*C - fa*A)/(C*A*(fc - fa)),
interpolation asks |e| > delta and |fb| < |fa|, and d is taken where 2|d| < min(|e|, 3|m| - delta). "hyperbolic" differs
from that in the step through three points alone, the zero of their hyperbola: -fb*(fc - fa)/(fc*A - fa*C).

eps is the spacing of the numbers at 1. `tolerance` is t of the published algorithm: no step is shorter than delta, so
that both ends close in. There it is part of the stopping test too, |m| <= delta or f(b) = 0; a run whose own test has
not fired halves from there on. `relative_tolerance` takes the place of 2*eps where it is larger.

A point taken in the place of x, by step control or by hand, becomes b and its distance from b becomes d; the ends are
kept by sign as above. One outside the bracket changes nothing.

Needs: two starts with opposite signs of f, in either order. An end where f is exactly zero counts as a sign change.
Costs: one value of f a step; order between 1.618 and 1.839 once it interpolates, halving in between.
Breaks down when: the starts show no sign change; the width overflows. An interpolation that overflows is a halving.
Good at: being the default. Bad at: f over many powers of ten, where steps of delta creep.
Source: R. P. Brent, Algorithms for Minimization without Derivatives, 1973, chapter 4; T. J. Dekker 1969; for the
hyperbola J. C. P. Bus, T. J. Dekker, ACM TOMS 1 (1975) 330-345 (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Real
from surefoot.methods.bracket import (
    breakdown,
    contains,
    held_between,
    tolerance_setting,
    width_figure,
    without_sign_change,
)
from surefoot.methods.chord import chord_slope
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
class BrentState:
    """The bracket a, b with b its better end, and what the last steps were.

    Attributes:
        previous: the better end before b, or a itself.
        step: the last step as the rule computed it.
        before: the step before that.
    """

    a: Point
    b: Point
    previous: Point
    step: Real
    before: Real


class BrentDekker:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="brent-dekker",
        title="Brent-Dekker",
        idea="inverse interpolation where it is safe, halving where it is not",
        starts=2,
        derivatives=0,
        bracket=True,
        evaluations=(1, 0, 0),
        order=None,
        source="R. P. Brent, Algorithms for Minimization without Derivatives, 1973; T. J. Dekker, 1969",
        cost_note="order between 1.618 and 1.839 once it interpolates",
    )
    settings = (
        tolerance_setting("t in the shortest step 2*eps*|b| + t; 0 leaves its rounding part"),
        Setting(
            key="relative_tolerance",
            kind="real",
            default="0",
            meaning="takes the place of 2*eps in the shortest step where it is larger",
            allowed="[0, inf)",
        ),
        Setting(
            key="interpolation",
            kind="choice",
            default="ratios",
            meaning="how the step is computed and admitted: by ratios of values of f as published, by divided "
            "differences, or by these with a hyperbola in the place of the inverse parabola",
            choices=("ratios", "differences", "hyperbolic"),
        ),
    )
    state_type = BrentState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> BrentState | Breakdown:
        a, b = starts
        arithmetic = functions.arithmetic
        missing = without_sign_change(arithmetic, a, b)
        if missing:
            return missing
        try:
            step = arithmetic.subtract(b.x, a.x)
        except OperationFailed:
            return breakdown(arithmetic, "the width of the bracket overflows", (a, b))
        return _ordered(a, b, a, step, step)

    def propose(self, state: BrentState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        try:
            return _proposal(functions.arithmetic, state, settings)
        except OperationFailed:
            return breakdown(functions.arithmetic, "the step overflows", (state.a, state.b))

    def accept(self, state: BrentState, proposal: Proposal, point: Point) -> BrentState:
        if not contains(state.a, state.b, point.x):
            return state
        taken = point.x - state.b.x
        if sign(point.f) == sign(state.a.f):
            return _ordered(state.b, point, state.b, taken, taken)
        step, before = proposal.memo if proposal.memo is not None else (taken, taken)
        if point.x != proposal.x:
            step = taken
        return _ordered(state.a, point, state.b, step, before)


def _ordered(c: Point, b: Point, a: Point, step: Real, before: Real) -> BrentState:
    """The state with the better end in b; where the ends change places, a is the new c."""
    if abs(c.f) < abs(b.f):
        return BrentState(b, c, b, step, before)
    return BrentState(c, b, a, step, before)


def _proposal(arithmetic: Arithmetic, state: BrentState, settings: Settings) -> Proposal:
    """The step. Raises OperationFailed where the middle or the shortest step has no finite value."""
    b, c = guarded(arithmetic, (state.b.x, state.a.x))
    delta = _shortest_step(b, settings)
    m = (c - b) / 2
    ended = abs(m) <= delta or state.b.f == 0
    step = None if ended else _interpolated(arithmetic, state, m, delta, settings["interpolation"])
    width = width_figure(arithmetic, state.a, state.b)
    ends = (state.a, state.b)
    if step is None:
        x, account, memo = b + m, Account("bracket", ends, figures=width), (m.value, m.value)
    elif abs(step) > delta:
        x, memo = b + step, (step.value, state.step)
        account = _interpolation(arithmetic, state, x, settings["interpolation"])
    else:
        x, memo = b + (delta if m > 0 else -delta), (step.value, state.step)
        account = Account("bracket", ends, figures=(*width, ("shortest_step", delta.value)))
    return Proposal(held_between(*ends, x.value), account, memo)


def _shortest_step(b: Guarded, settings: Settings) -> Guarded:
    """delta."""
    arithmetic = b.arithmetic
    relative, twice = Guarded(arithmetic, settings["relative_tolerance"]), 2 * rounding_unit(arithmetic)
    return (relative if relative > twice else twice) * abs(b) + Guarded(arithmetic, settings["tolerance"])


def _interpolated(arithmetic: Arithmetic, state: BrentState, m: Guarded, delta: Guarded, form: str) -> Guarded | None:
    """The interpolated step where it is admitted, None where the bracket is to be halved."""
    e = abs(Guarded(arithmetic, state.before))
    shrinking = abs(state.b.f) < abs(state.previous.f)
    try:
        if form == "ratios":
            return _by_ratios(arithmetic, state, m, delta) if e >= delta and shrinking else None
        hyperbolic = form == "hyperbolic"
        return _by_differences(arithmetic, state, m, delta, hyperbolic) if e > delta and shrinking else None
    except OperationFailed:
        return None


def _by_ratios(arithmetic: Arithmetic, state: BrentState, m: Guarded, delta: Guarded) -> Guarded | None:
    a, b, e = guarded(arithmetic, (state.previous.x, state.b.x, state.before))
    fa, fb, fc = guarded(arithmetic, (state.previous.f, state.b.f, state.a.f))
    s = fb / fa
    if state.previous.x == state.a.x:
        p, q = 2 * m * s, 1 - s
    else:
        q, r = fa / fc, fb / fc
        p = s * (2 * m * q * (q - r) - (b - a) * (r - 1))
        q = (q - 1) * (r - 1) * (s - 1)
    p, q = (p, -q) if p > 0 else (-p, q)
    admitted = 2 * p < 3 * m * q - abs(delta * q) and p < abs(e / 2 * q)
    return p / q if admitted else None


def _by_differences(
    arithmetic: Arithmetic, state: BrentState, m: Guarded, delta: Guarded, hyperbolic: bool
) -> Guarded | None:
    a, b, c = guarded(arithmetic, (state.previous.x, state.b.x, state.a.x))
    fa, fb, fc = guarded(arithmetic, (state.previous.f, state.b.f, state.a.f))
    if state.previous.x == state.a.x:
        step = -fb * (b - a) / (fb - fa)
    else:
        across_a, across_c = (fa - fb) / (a - b), (fc - fb) / (c - b)
        if hyperbolic:
            step = -fb * (fc - fa) / (fc * across_a - fa * across_c)
        else:
            step = -fb * (fc * across_c - fa * across_a) / (across_c * across_a * (fc - fa))
    admitted = 2 * abs(step) < abs(Guarded(arithmetic, state.before)) and 2 * abs(step) < 3 * abs(m) - delta
    return step if admitted else None


def _interpolation(arithmetic: Arithmetic, state: BrentState, x: Guarded, form: str) -> Account:
    """The chord through b and c, or the curve through a, b and c."""
    width = width_figure(arithmetic, state.a, state.b)
    if state.previous.x == state.a.x:
        return Account("chord", (state.b, state.a), chord_slope(arithmetic, state.a, state.b), width)
    if form == "hyperbolic":  # a curve that the pictures do not have
        points = (state.a, state.b, state.previous)
        return Account("bracket", points, figures=(*width, ("zero_of_the_hyperbola", x.value)))
    return Account("parabola", (state.previous, state.b, state.a), figures=width)
