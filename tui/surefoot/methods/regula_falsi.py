"""Regula falsi (false position): the zero of the chord across a bracket.

Idea: f has opposite signs at the two ends; go where their chord is zero and keep the part whose ends differ in sign.

Update rule, with a, fa = `state.a`, b, fb = `state.b`; equal in algebra, not in rounding:
    x = (a*fb - b*fa)/(fb - fa)              setting form = "symmetric"
    x = b - fb*(b - a)/(fb - fa)             form = "product": (fb*(b - a))/(fb - fa), from the left
    x = b - fb/(fb - fa)*(b - a)             form = "ratio": (fb/(fb - fa))*(b - a)
    x = b - fb/((fb - fa)/(b - a))           form = "slope"
    a := x where f(x) has the sign of f(a), b := x otherwise
The ends stay where they were given: b is not always the newer one. x beyond an end by rounding is that end. Whatever
point inside the bracket is taken cuts it; one outside changes nothing.

Needs: two starts with opposite signs of f, in either order. An end where f is exactly zero counts as a sign change.
Costs: one value of f a step; order 1. Where f is convex or concave one end b is kept for ever, and the error shrinks by
1 - f'(x*)(b - x*)/f(b) a step, which may be next to nothing.
Breaks down when: the starts show no sign change; f is equal at both ends (both zero); an operation of the form
overflows.
Good at: f close to a straight line across the bracket. Bad at: strong curvature, where the kept end holds it back.
Source: A. M. Ostrowski, Solution of Equations and Systems of Equations, 1966 (from memory).
"""

from __future__ import annotations

from surefoot.methods.bracket import BracketState, contains, narrowed, without_sign_change
from surefoot.methods.contract import Breakdown, Functions, Point, Proposal, Settings, Traits
from surefoot.methods.false_position import FORM, propose_chord_zero


class RegulaFalsi:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="regula-falsi",
        title="Regula falsi",
        idea="the zero of the chord across a bracket; keep the part with the sign change",
        starts=2,
        derivatives=0,
        bracket=True,
        evaluations=(1, 0, 0),
        order=1.0,
        source="A. M. Ostrowski, Solution of Equations, 1966",
        cost_note="an end b that is kept makes the error shrink by 1 - f'(x*)(b - x*)/f(b) a step",
    )
    settings = (FORM,)
    state_type = BracketState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> BracketState | Breakdown:
        a, b = starts
        return without_sign_change(functions.arithmetic, a, b) or BracketState(a, b)

    def propose(self, state: BracketState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        return propose_chord_zero(functions.arithmetic, state.a, state.b, state.a.f, settings["form"])

    def accept(self, state: BracketState, proposal: Proposal, point: Point) -> BracketState:
        return BracketState(*narrowed(state.a, state.b, point)) if contains(state.a, state.b, point.x) else state
