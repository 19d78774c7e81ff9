"""Illinois: false position whose kept end is given half its value, so that it must let go.

Idea: as regula falsi, but each time the new point falls on the side of the newest end, the older end counts with half
the value it counted with before; the chord then tips over to the other side of the root.

Update rule, with a = `state.a`, b, fb = `state.b`, ga = `state.kept`:
    x = (a*fb - b*ga)/(fb - ga)              setting form = "symmetric"; the other forms as in regula falsi
    where f(x) and f(b) differ in sign:      a := b, ga := fb
    otherwise:                               a stays, ga := ga/2
    b := x
At the start b is the second start and ga = f(a). x beyond an end by rounding is that end. The same holds for whatever
point inside the bracket is taken in the place of x, also by hand; one outside the bracket changes nothing.

Needs: two starts with opposite signs of f; the second counts as the newer. An exact zero counts as a sign change.
Costs: one value of f a step. Near a simple root two plain chords are followed by one with a halved value, and the error
goes to its cube in those three steps: order 3^(1/3) = 1.442 a step.
Breaks down when: the starts show no sign change; both ends count with the same value; an operation overflows.
Good at: what regula falsi is bad at, at the same cost. Bad at: f that spans many powers of ten across the bracket,
since each halving takes off one power of two only.
Source: M. Dowell, P. Jarratt, A modified regula falsi method for computing the root of an equation, BIT 11 (1971)
168-174 (from memory).
"""

from __future__ import annotations

from surefoot.methods.bracket import without_sign_change
from surefoot.methods.contract import Breakdown, Functions, Point, Proposal, Settings, Traits
from surefoot.methods.false_position import FORM, KeptState, accept_keeping, propose_chord_zero


class Illinois:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="illinois",
        title="Illinois",
        idea="false position; an end that is kept counts with half its value",
        starts=2,
        derivatives=0,
        bracket=True,
        evaluations=(1, 0, 0),
        order=3 ** (1 / 3),
        source="M. Dowell, P. Jarratt, BIT 11 (1971) 168-174",
        cost_note="order 3 over the three steps of a cycle",
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
        return accept_keeping(state, point, state.kept / 2)
