"""TOMS 748: inverse cubic and quadratic interpolation, a secant of double length, and halving where that is not enough.

Idea: k interpolations from four points bring one end close to the root; a secant step of double length from there goes
just past the root, so that the other end comes close too.

Update rule: a step is one value of f; an iteration of the published algorithm is made of steps, by `state.stage`,
    0  once, at the start:  c = a - (fa/(fb - fa))*(b - a)
    1  c = inverse cubic through a, b, d, e where their values of f differ and c comes out between a and b; otherwise 2
       Newton steps on the quadratic through a, b, d from the end where it has the sign of its curvature
    2  with k = 2 only: as 1, with 3 Newton steps
    3  u the end where |f| is less:  c = u - 2*(fu/(fb - fa))*(b - a), the middle where |c - u| > (b - a)/2
    4  where b - a is not below half of what it was when the iteration began:  c = a + (b - a)/2
with a < b = `state.a`, `state.b`, d = `state.d` the end dropped last and e = `state.e` the one before it. Each c is
kept clear of the ends: with TOL = 2*(tolerance + 2*|u|*eps) and delta = 0.7*TOL, c is the middle where
b - a <= 2*delta, otherwise within [a + delta, b - delta]. The published stopping test is made after each value of f,
not after each iteration; that is why a step is one value of f.

eps is the spacing of the numbers at 1. `tolerance` is that of the published code, there also the absolute part of its
stopping test b - a <= TOL; a run whose own test has not fired halves from there on. The published code takes values of
f to differ where the product of their differences is not zero, which underflows for small f; here each pair is
compared, and differs where it is further apart than `value_gap` (0; a common library has 32*eps).

A point taken in the place of c, by step control, counts as c: every formula holds for whatever points there are. A
point put by hand begins an iteration. One outside the bracket changes nothing.

Needs: two starts with opposite signs of f, in either order. An end where f is exactly zero counts as a sign change.
Costs: one value of f a step. An iteration takes k + 1 of them, at times k + 2, and has order 2.732 with k = 1 and at
least 4.646 with k = 2: 1.653 and 1.668 an evaluation.
Breaks down when: the starts show no sign change; the width overflows. An interpolation that overflows is a halving.
Good at: few evaluations near a simple root, with both ends closing in. Bad at: multiple roots, where it mostly halves.
Source: G. E. Alefeld, F. A. Potra, Y. Shi, Algorithm 748: enclosing zeros of continuous functions, ACM TOMS 21 (1995)
327-344, algorithms 4.1 (k = 1) and 4.2 (k = 2) with mu = 0.5, lambda = 0.7; the operations are those of its Fortran
(from memory, compared with a later translation).
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Real
from surefoot.methods.bracket import breakdown, contains, tolerance_setting, width_figure, without_sign_change
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

_SECANT, _FIRST, _SECOND, _DOUBLE, _HALVE = range(5)


@dataclass(frozen=True, slots=True)
class Toms748State:
    """The bracket a < b, the two ends dropped last, and the place in an iteration.

    Attributes:
        width: b - a when the iteration began.
        stage: the step to come, 0 to 4, as the module numbers them.
    """

    a: Point
    b: Point
    width: Real
    stage: int = _SECANT
    d: Point | None = None
    e: Point | None = None


class Toms748:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="toms-748",
        title="TOMS 748",
        idea="inverse cubic interpolation, a secant of double length, halving where that is not enough",
        starts=2,
        derivatives=0,
        bracket=True,
        evaluations=(1, 0, 0),
        order=None,
        source="G. E. Alefeld, F. A. Potra, Y. Shi, ACM TOMS 21 (1995) 327-344",
        cost_note="order 2.732 in 2 steps with k = 1, at least 4.646 in 3 with k = 2",
    )
    settings = (
        Setting(
            key="k",
            kind="choice",
            default="2",
            meaning="interpolations in an iteration: 1 (algorithm 4.1) or 2 (algorithm 4.2, the published code)",
            choices=("2", "1"),
        ),
        tolerance_setting("absolute part of the published tolerance, which keeps c clear of the ends"),
        Setting(
            key="value_gap",
            kind="real",
            default="0",
            meaning="values of f that are no further apart than this count as equal",
            allowed="[0, inf)",
        ),
    )
    state_type = Toms748State

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> Toms748State | Breakdown:
        arithmetic = functions.arithmetic
        a, b = sorted(starts, key=lambda point: point.x)
        missing = without_sign_change(arithmetic, *starts)
        if missing:
            return missing
        try:
            return Toms748State(a, b, arithmetic.subtract(b.x, a.x))
        except OperationFailed:
            return breakdown(arithmetic, "the width of the bracket overflows", starts)

    def propose(self, state: Toms748State, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        arithmetic = functions.arithmetic
        try:
            c, account = _candidate(arithmetic, state, settings)
            x, account = _kept_clear(arithmetic, state, c, account, settings)
        except OperationFailed:
            return breakdown(arithmetic, "the step overflows", (state.a, state.b))
        figures = (*width_figure(arithmetic, state.a, state.b), *account.figures)
        account = Account(account.shape, account.points, account.slope, figures)
        following = state.stage + 1
        if following == _SECOND and settings["k"] == "1":
            following = _DOUBLE
        return Proposal(x.value, account, following)

    def accept(self, state: Toms748State, proposal: Proposal, point: Point) -> Toms748State:
        if not contains(state.a, state.b, point.x):
            return state
        to_the_right = sign(point.f) == sign(state.a.f)
        a, b, dropped = (point, state.b, state.a) if to_the_right else (state.a, point, state.b)
        width, stage = b.x - a.x, proposal.memo
        unfinished = stage in (_SECOND, _DOUBLE) or (stage == _HALVE and width >= state.width / 2)
        if unfinished:
            return Toms748State(a, b, state.width, stage, dropped, state.d)
        return Toms748State(a, b, width, _FIRST, dropped, state.d)


def _candidate(arithmetic: Arithmetic, state: Toms748State, settings: Settings) -> tuple[Guarded, Account]:
    """c as the stage has it, and what it rests on. Raises OperationFailed where the middle has no finite value."""
    a, b = guarded(arithmetic, (state.a.x, state.b.x))
    try:
        if state.d is None:
            return _secant(arithmetic, state)
        if state.stage in (_FIRST, _SECOND):
            return _interpolated(arithmetic, state, state.d, settings)
        if state.stage == _DOUBLE:
            c, account = _double_secant(arithmetic, state)
            if abs(c - Guarded(arithmetic, account.points[0].x)) <= (b - a) / 2:
                return c, account
    except OperationFailed:
        pass  # the middle is what the source has where a step is not to be had
    return a + (b - a) / 2, Account("bracket", (state.a, state.b))


def _kept_clear(
    arithmetic: Arithmetic, state: Toms748State, c: Guarded, account: Account, settings: Settings
) -> tuple[Guarded, Account]:
    """c, or the point that keeps delta clear of the ends, with the account of the one or the other."""
    best = state.b if abs(state.b.f) <= abs(state.a.f) else state.a
    a, b, u, tolerance = guarded(arithmetic, (state.a.x, state.b.x, best.x, settings["tolerance"]))
    whole = 2 * (tolerance + 2 * abs(u) * rounding_unit(arithmetic))
    delta = Guarded(arithmetic, arithmetic.literal("0.7", False)) * whole
    if b - a <= 2 * delta:
        return a + (b - a) / 2, Account("bracket", (state.a, state.b))
    if a + delta < c < b - delta:
        return c, account
    return (
        a + delta if c <= a + delta else b - delta,
        Account("bracket", (state.a, state.b), figures=(("clear_of_end", delta.value),)),
    )


def _secant(arithmetic: Arithmetic, state: Toms748State) -> tuple[Guarded, Account]:
    a, b, fa, fb = guarded(arithmetic, (state.a.x, state.b.x, state.a.f, state.b.f))
    c = a - fa / (fb - fa) * (b - a)
    return c, Account("chord", (state.a, state.b), chord_slope(arithmetic, state.a, state.b))


def _double_secant(arithmetic: Arithmetic, state: Toms748State) -> tuple[Guarded, Account]:
    """Twice the secant step from the better end: the step of a line of half the chord's slope."""
    u, other = (state.a, state.b) if abs(state.a.f) < abs(state.b.f) else (state.b, state.a)
    a, b, fa, fb = guarded(arithmetic, (state.a.x, state.b.x, state.a.f, state.b.f))
    c = Guarded(arithmetic, u.x) - 2 * (Guarded(arithmetic, u.f) / (fb - fa)) * (b - a)
    slope = chord_slope(arithmetic, state.a, state.b)
    half = None if slope is None else slope / 2
    return c, Account("chord", (u, other), half, (("secant_length", arithmetic.integer(2)),))


def _interpolated(arithmetic: Arithmetic, state: Toms748State, d: Point, settings: Settings) -> tuple[Guarded, Account]:
    """Stage 1 or 2: the inverse cubic where it can be had, the quadratic otherwise."""
    points = (state.a, state.b, d)
    if state.e is not None and _differ((*points, state.e), arithmetic, settings["value_gap"]):
        c = _inverse_cubic_zero(arithmetic, (*points, state.e))
        if c is not None and state.a.x < c.value < state.b.x:
            return c, Account("parabola", (*points, state.e))
    newton_steps = 2 if state.stage == _FIRST else 3
    return _quadratic_zero(arithmetic, points, newton_steps), Account("parabola", points)


def _differ(points: tuple[Point, ...], arithmetic: Arithmetic, gap: Real) -> bool:
    """Whether each two values of f are further apart than the gap."""
    pairs = combinations(points, 2)
    if gap == 0:
        return all(p.f != q.f for p, q in pairs)
    return all(abs(arithmetic.subtract(p.f, q.f)) > gap for p, q in pairs)


def _inverse_cubic_zero(arithmetic: Arithmetic, points: tuple[Point, ...]) -> Guarded | None:
    """The zero of the inverse cubic by the scheme of Aitken and Neville (PZERO); None where it overflows."""
    a, b, d, e = guarded(arithmetic, (point.x for point in points))
    fa, fb, fd, fe = guarded(arithmetic, (point.f for point in points))
    try:
        q11 = (d - e) * fd / (fe - fd)
        q21 = (b - d) * fb / (fd - fb)
        q31 = (a - b) * fa / (fb - fa)
        d21 = (b - d) * fd / (fd - fb)
        d31 = (a - b) * fb / (fb - fa)
        q22 = (d21 - q11) * fb / (fe - fb)
        q32 = (d31 - q21) * fa / (fd - fa)
        d32 = (d31 - q21) * fd / (fd - fa)
        q33 = (d32 - q22) * fa / (fe - fa)
        return a + q31 + q32 + q33
    except OperationFailed:
        return None


def _quadratic_zero(arithmetic: Arithmetic, points: tuple[Point, ...], newton_steps: int) -> Guarded:
    """The zero of the quadratic through three points by Newton steps (NEWQUA). Raises OperationFailed."""
    a, b, d = guarded(arithmetic, (point.x for point in points))
    fa, fb, fd = guarded(arithmetic, (point.f for point in points))
    slope = (fb - fa) / (b - a)
    curvature = ((fd - fb) / (d - b) - slope) / (d - a)
    if sign(curvature.value) == 0:
        return a - fa / slope
    c = a if sign(curvature.value) == sign(fa.value) else b
    for _ in range(newton_steps):
        value = fa + (slope + curvature * (c - b)) * (c - a)
        derivative = slope + curvature * (2 * c - (a + b))
        if sign(derivative.value) == 0:
            return a - fa / slope
        c = c - value / derivative
    return c
