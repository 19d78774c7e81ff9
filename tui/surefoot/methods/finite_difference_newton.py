"""Finite-difference Newton: the tangent's slope from values of f.

Idea: as Newton-Raphson, with a difference quotient in the place of the derivative.

Update rule, with x = `state.point.x`, f = `state.point.f`, h the setting h (h_mode = "absolute") or h|x| ("relative"):
    D = (f(x + h) - f)/h              scheme = "forward"
    D = (f(x + h) - f(x - h))/(2h)    scheme = "central"
    x+ = x - f/D
The difference is divided by h as typed and scaled, as host codes do, not by the distance (x + h) - x after rounding.
With control.derivative_every = r the slope is held for r steps.

Needs: one start, and h. With h_mode = "relative" there is no step at x = 0.
Costs: two values of f a step (forward), three (central). A fixed h makes convergence linear: the error shrinks by
|f''|h/2|f'| a step (forward), |f'''|h^2/6|f'| (central).
Breaks down when: the slope is exactly zero, as it is when h is below the spacing of the numbers at x.
Good at: functions without a derivative at hand. Bad at: noisy f, where h must balance noise against curvature.
Source: J. E. Dennis, R. B. Schnabel, Numerical Methods for Unconstrained Optimization and Nonlinear Equations, 1983
(from memory).
"""

from __future__ import annotations

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.results import Real
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
from surefoot.methods.rounding import told
from surefoot.methods.tangent import Slope, SlopeState, accept_with_slope, propose_along_slope


class FiniteDifferenceNewton:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="finite-difference-newton",
        title="Finite-difference Newton",
        idea="follow the tangent whose slope is a difference quotient",
        starts=1,
        derivatives=0,
        bracket=False,
        evaluations=(2, 0, 0),
        order=1.0,
        source="J. E. Dennis, R. B. Schnabel, Numerical Methods for Unconstrained Optimization, 1983",
        cost_note="central takes 3 f a step; the error shrinks by |f''|h/2|f'| a step, so a small h looks like order 2",
    )
    settings = (
        Setting(
            key="h", kind="real", default=None, meaning="the difference step, in the unknown's unit or a part of |x|"
        ),
        Setting(
            key="h_mode",
            kind="choice",
            default="absolute",
            meaning="absolute: h itself; relative: h times |x|",
            choices=("absolute", "relative"),
        ),
        Setting(
            key="scheme",
            kind="choice",
            default="forward",
            meaning="forward (f(x + h) - f(x))/h, central (f(x + h) - f(x - h))/(2h)",
            choices=("forward", "central"),
        ),
    )
    state_type = SlopeState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> SlopeState | Breakdown:
        (start,) = starts
        return SlopeState(start)

    def propose(self, state: SlopeState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        def find() -> Slope | Breakdown:
            return _difference_slope(state.point, settings, functions)

        return propose_along_slope(state, settings, functions.arithmetic, find)

    def accept(self, state: SlopeState, proposal: Proposal, point: Point) -> SlopeState:
        return accept_with_slope(proposal, point)


def _difference_slope(here: Point, settings: Settings, functions: Functions) -> Slope | Breakdown:
    arithmetic = functions.arithmetic
    seen = Account("tangent", (here,))
    h: Real = settings["h"]
    try:
        if settings["h_mode"] == "relative":
            h = arithmetic.multiply(h, abs(here.x))
            if h == 0:
                return Breakdown(
                    f"h|x| is zero at x = {told(arithmetic, here.x)}: a relative h has no step there", seen
                )
        right = arithmetic.add(here.x, h)
        if settings["scheme"] == "forward":
            points: tuple[Point, ...] = (Point(right, functions.f(right)),)
            slope = arithmetic.divide(arithmetic.subtract(points[0].f, here.f), h)
        else:
            left = arithmetic.subtract(here.x, h)
            points = (Point(left, functions.f(left)), Point(right, functions.f(right)))
            rise = arithmetic.subtract(points[1].f, points[0].f)
            slope = arithmetic.divide(rise, arithmetic.multiply(arithmetic.integer(2), h))
    except OperationFailed:
        return Breakdown(
            f"the difference quotient overflows at x = {told(arithmetic, here.x)}, h = {told(arithmetic, h)}", seen
        )
    if slope == 0 and right == here.x:
        reason = (
            f"x + h rounds to x = {told(arithmetic, here.x)} (h = {told(arithmetic, h)}): the slope is exactly zero"
        )
        return Breakdown(reason, Account("chord", (here, *points), slope, (("h", h),)))
    return Slope(slope, points, (("h", h),))
