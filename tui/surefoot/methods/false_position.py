"""What the three rules of false position share: the chord across the bracket, and a kept end whose value is scaled."""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Real
from surefoot.methods.bracket import breakdown, contains, held_between, width_figure
from surefoot.methods.chord import FORMS, chord_zero
from surefoot.methods.contract import Account, Breakdown, Point, Proposal, Setting
from surefoot.methods.rounding import sign

FORM = Setting(
    key="form",
    kind="choice",
    default="symmetric",
    meaning="how the zero of the chord is computed: symmetric (a*fb-b*fa)/(fb-fa), product b-fb*(b-a)/(fb-fa), "
    "ratio b-fb/(fb-fa)*(b-a), slope b-fb/((fb-fa)/(b-a))",
    choices=("symmetric", *(form for form in FORMS if form != "symmetric")),
)
"""Across a sign change the products of `symmetric` have one sign where the ends have: nothing cancels."""


@dataclass(frozen=True, slots=True)
class KeptState:
    """A bracket whose older end is kept with a scaled value.

    Attributes:
        a: the older end, with its own f.
        b: the newest end.
        kept: what stands in the place of f at a.
    """

    a: Point
    b: Point
    kept: Real


def propose_chord_zero(arithmetic: Arithmetic, a: Point, b: Point, kept: Real, form: str) -> Proposal | Breakdown:
    """The zero of the chord through b and (a, kept), held inside the bracket."""
    if b.f == kept:
        return breakdown(arithmetic, "the chord is horizontal", (a, b), "chord")
    try:
        zero = chord_zero(arithmetic, Point(a.x, kept), b, form)
    except OperationFailed:
        return breakdown(arithmetic, "the step overflows", (a, b), "chord")
    figures = width_figure(arithmetic, a, b)
    if kept != a.f:
        figures = (*figures, ("kept_f", kept))
    return Proposal(held_between(a, b, zero.x), Account("chord", (b, a), zero.slope, figures))


def accept_keeping(state: KeptState, point: Point, scaled: Real) -> KeptState:
    """The next bracket: across the sign change the newest end moves up with its own f, else a is kept with `scaled`.

    A point outside the bracket changes nothing.
    """
    if not contains(state.a, state.b, point.x):
        return state
    if sign(point.f) == sign(state.b.f):
        return KeptState(state.a, point, scaled)
    return KeptState(state.b, point, state.b.f)
