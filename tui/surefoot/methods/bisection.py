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

from surefoot.methods.bracket import BracketState, contains, halved, narrowed, without_sign_change
from surefoot.methods.contract import (
    Breakdown,
    Functions,
    Point,
    Proposal,
    Setting,
    Settings,
    Traits,
)
from surefoot.methods.rounding import half_sum, offset_midpoint


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
        return without_sign_change(functions.arithmetic, a, b) or BracketState(a, b)

    def propose(self, state: BracketState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        middle = half_sum if settings["midpoint"] == "halfsum" else offset_midpoint
        return halved(functions.arithmetic, state.a, state.b, middle)

    def accept(self, state: BracketState, proposal: Proposal, point: Point) -> BracketState:
        """The part of the bracket that keeps the sign change; a point outside the bracket changes nothing."""
        return BracketState(*narrowed(state.a, state.b, point)) if contains(state.a, state.b, point.x) else state
