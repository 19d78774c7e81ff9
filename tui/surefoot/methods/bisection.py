"""Bisection: halve a bracket that holds a sign change.

Idea: f has opposite signs at the two ends; look at the middle and keep the half whose ends still differ in sign.

Update rule, with a = `state.a.x`, b = `state.b.x`:
    m = (a + b)/2             setting midpoint = "halfsum"
    m = a + (b - a)/2         setting midpoint = "offset"
    a := m where f(m) has the sign of f(a), b := m otherwise
The two forms round differently, and the sum of two huge ends can overflow. Signs are compared, never products.

Needs: two starts with opposite signs of f, in either order. An end where f is exactly zero counts as a sign change.
Costs: one value of f a step, and one correct binary digit.
Breaks down when: the starts show no sign change; the midpoint overflows.
Good at: certainty; it needs nothing of f but its sign. Bad at: speed; and it finds every change of sign, so a pole or a
jump as readily as a root.
Source: B. Bolzano 1817 for the argument; the rule is folklore (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.arithmetic import OperationFailed
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
from surefoot.methods.rounding import half_sum, offset_midpoint, sign, told


@dataclass(frozen=True, slots=True)
class BracketState:
    """The ends of a bracket with a sign change, in the order in which they were given."""

    a: Point
    b: Point


class Bisection:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="bisection",
        title="Bisection",
        idea="halve a bracket that holds a sign change",
        starts=2,
        derivatives=0,
        bracket=True,
        evaluations=(1, 0, 0),
        order=None,
        source="B. Bolzano 1817 (the argument); folklore",
        cost_note="the bracket halves at every step",
    )
    settings = (
        Setting(
            key="midpoint",
            kind="choice",
            default="halfsum",
            meaning="how the middle is computed: halfsum (a + b)/2, offset a + (b - a)/2",
            choices=("halfsum", "offset"),
        ),
    )
    state_type = BracketState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> BracketState | Breakdown:
        a, b = starts
        if sign(a.f) == sign(b.f) != 0:
            arithmetic = functions.arithmetic
            at_a, at_b = (f"f({told(arithmetic, p.x)}) = {told(arithmetic, p.f)}" for p in (a, b))
            return Breakdown(f"no sign change between the starts: {at_a}, {at_b}", Account("bracket", (a, b)))
        return BracketState(a, b)

    def propose(self, state: BracketState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        arithmetic = functions.arithmetic
        middle = half_sum if settings["midpoint"] == "halfsum" else offset_midpoint
        points = (state.a, state.b)
        try:
            width = abs(arithmetic.subtract(state.b.x, state.a.x))
            x = middle(arithmetic, state.a.x, state.b.x)
        except OperationFailed:
            ends = f"{told(arithmetic, state.a.x)} and {told(arithmetic, state.b.x)}"
            return Breakdown(f"the middle of {ends} overflows", Account("bracket", points))
        return Proposal(x, Account("bracket", points, figures=(("width", width),)))

    def accept(self, state: BracketState, proposal: Proposal, point: Point) -> BracketState:
        """The part of the bracket that keeps the sign change; a point outside the bracket changes nothing."""
        low, high = sorted((state.a.x, state.b.x))
        if not low <= point.x <= high:
            return state
        if sign(point.f) == sign(state.a.f):
            return BracketState(point, state.b)
        return BracketState(state.a, point)
