"""Newton-Raphson: follow the tangent to its zero.

Idea: replace f by its tangent at the iterate and go where the tangent is zero.

Update rule, with x = `state.point.x`, f = `state.point.f`, D the derivative:
    x+ = x - f/D
D is f'(x), evaluated at every step; with control.derivative_every = r it is held in `state.slope` and evaluated anew
every r steps, `state.age` steps after it was taken (r beyond the last step is the chord method of a frozen slope).

Needs: one start and f': the host code's own (setting derivative = "host"), or the exact one ("exact").
Costs: one value of f and one of f' a step; order 2 at a simple root. At a root of multiplicity m the error only shrinks
by 1 - 1/m a step; with a held slope by 1 - f'(x*)/D.
Breaks down when: the derivative is exactly zero; the step overflows. Where f' has no value, the evaluation fails.
Good at: taking hold quickly near a simple root. Bad at: starts beyond a maximum or minimum of f, multiple roots, poles.
Source: J. F. Traub, Iterative Methods for the Solution of Equations, 1964; T. J. Ypma, SIAM Review 37 (1995) 531 (from
memory).
"""

from __future__ import annotations

from surefoot.methods.contract import (
    Breakdown,
    Functions,
    Point,
    Proposal,
    Setting,
    Settings,
    Traits,
)
from surefoot.methods.tangent import Slope, SlopeState, accept_with_slope, propose_along_slope


class NewtonRaphson:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="newton-raphson",
        title="Newton-Raphson",
        idea="follow the tangent to its zero",
        starts=1,
        derivatives=1,
        bracket=False,
        evaluations=(1, 1, 0),
        order=2.0,
        source="J. F. Traub, Iterative Methods, 1964; T. J. Ypma, SIAM Review 37 (1995) 531",
        cost_note="with control.derivative_every = r the derivative is evaluated every r steps",
    )
    settings = (
        Setting(
            key="derivative",
            kind="choice",
            default="auto",
            meaning="host: as the problem states it; exact: made from the equation; auto: host where one is stated",
            choices=("auto", "host", "exact"),
        ),
    )
    state_type = SlopeState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> SlopeState | Breakdown:
        (start,) = starts
        return SlopeState(start)

    def propose(self, state: SlopeState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        def find() -> Slope:
            return Slope(functions.derivative(state.point.x))

        return propose_along_slope(state, settings, functions.arithmetic, find)

    def accept(self, state: SlopeState, proposal: Proposal, point: Point) -> SlopeState:
        return accept_with_slope(proposal, point)
