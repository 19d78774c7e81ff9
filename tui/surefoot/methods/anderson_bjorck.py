"""Anderson-Bjorck: false position whose kept end is scaled by how much the newest value shrank.

Idea: as Illinois, but the value at the kept end is scaled so that the next chord is the tangent, at the new point, of
the parabola through the last three.

Update rule, with a = `state.a`, b, fb = `state.b`, ga = `state.kept`:
    x = (a*fb - b*ga)/(fb - ga)              setting form = "symmetric"; the other forms as in regula falsi
    where f(x) and f(b) differ in sign:      a := b, ga := fb
    otherwise:                               a stays, ga := ga*c with c = 1 - f(x)/fb; c = 1/2 where that is <= 0
    b := x
At the start b is the second start and ga = f(a). x beyond an end by rounding is that end. The same holds for whatever
point inside the bracket is taken in the place of x, also by hand; one outside the bracket changes nothing.

Needs: two starts with opposite signs of f; the second counts as the newer. An exact zero counts as a sign change.
Costs: one value of f a step. Near a simple root the order is 8^(1/4) = 1.682 or 5^(1/3) = 1.710 a step, as the third
derivative has it.
Breaks down when: the starts show no sign change; both ends count with the same value; an operation overflows.
Good at: smooth f near a root. Bad at: multiple roots and very flat f, where the factor stays close to one.
Source: N. Anderson, A. Bjorck, A new high order method of regula falsi type for computing a root of an equation,
BIT 13 (1973) 253-264 (from memory).
"""

from __future__ import annotations

from surefoot.equation.results import Real
from surefoot.methods.bracket import without_sign_change
from surefoot.methods.contract import Breakdown, Functions, Point, Proposal, Settings, Traits
from surefoot.methods.false_position import FORM, KeptState, accept_keeping, propose_chord_zero


class AndersonBjorck:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="anderson-bjorck",
        title="Anderson-Bjorck",
        idea="false position; an end that is kept is scaled by how much the newest value shrank",
        starts=2,
        derivatives=0,
        bracket=True,
        evaluations=(1, 0, 0),
        order=8 ** (1 / 4),
        source="N. Anderson, A. Bjorck, BIT 13 (1973) 253-264",
        cost_note="order 8 over four steps, or 5 over three, as the third derivative has it",
        moves_on=True,
    )
    settings = (FORM,)
    state_type = KeptState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> KeptState | Breakdown:
        a, b = starts
        return without_sign_change(functions.arithmetic, a, b) or KeptState(a, b, a.f)

    def propose(self, state: KeptState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        return propose_chord_zero(functions.arithmetic, state.a, state.b, state.kept, settings["form"])

    def accept(self, state: KeptState, proposal: Proposal, point: Point) -> KeptState:
        return accept_keeping(state, point, _scaled(state.kept, state.b.f, point.f))


def _scaled(kept: Real, before: Real, now: Real) -> Real:
    """The kept value times 1 - now/before, or times a half; compared first, so that the quotient cannot overflow."""
    if abs(now) >= abs(before):
        return kept / 2
    return kept * (1 - now / before)
