"""Fixed point: put x into the right-hand side and take what comes out.

Idea: write the equation as x = g(x) and substitute successively.

Update rule, with x = `state.point.x`:
    x+ = g(x)
g is the setting g; where it is absent and the equation reads x = g(x), with the unknown alone on one side, the other
side is g.

Needs: one start and g. f is still the residual of the equation as stated; it is evaluated to be seen and tested.
Costs: one value of g and one of f a step; the error shrinks by |g'(x*)| a step, and grows where that exceeds 1.
Breaks down when: never of itself; where g has no value, the evaluation fails.
Good at: contracting rearrangements. Bad at: anything with |g'| near or above 1.
Source: J. M. Ortega, W. C. Rheinboldt, Iterative Solution of Nonlinear Equations in Several Variables, 1970 (from
memory).
"""

from __future__ import annotations

from dataclasses import dataclass

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


@dataclass(frozen=True, slots=True)
class IterateState:
    """The iterate in hand."""

    point: Point


class FixedPoint:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="fixed-point",
        title="Fixed point",
        idea="put x into the right-hand side of x = g(x)",
        starts=1,
        derivatives=0,
        bracket=False,
        evaluations=(1, 0, 1),
        order=1.0,
        source="J. M. Ortega, W. C. Rheinboldt, Iterative Solution of Nonlinear Equations, 1970",
        cost_note="the error shrinks by |g'| a step",
    )
    settings = (
        Setting(
            key="g",
            kind="expression",
            default="",
            meaning="the iteration function; where absent, the other side of an equation x = g(x)",
        ),
    )
    state_type = IterateState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> IterateState | Breakdown:
        (start,) = starts
        return IterateState(start)

    def propose(self, state: IterateState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        return Proposal(functions.g(state.point.x), Account("cobweb", (state.point,)))

    def accept(self, state: IterateState, proposal: Proposal, point: Point) -> IterateState:
        return IterateState(point)
