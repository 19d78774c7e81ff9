"""Secant: follow the chord through the last two iterates to its zero.

Idea: replace f by its chord and go where the chord is zero.

Update rule, with x0, f0 = `state.older`, x1, f1 = `state.newer`; equal in algebra, not in rounding:
    x+ = x1 - f1*(x1 - x0)/(f1 - f0)         setting form = "product": (f1*(x1 - x0))/(f1 - f0), from the left
    x+ = x1 - f1/((f1 - f0)/(x1 - x0))       form = "slope"
    x+ = (x0*f1 - x1*f0)/(f1 - f0)           form = "symmetric"; cancels when the points are close
    x+ = x1 - f1/(f1 - f0)*(x1 - x0)         form = "ratio": (f1/(f1 - f0))*(x1 - x0)
Then x0 := x1, x1 := x+. The order of the two starts is kept as given.

Needs: two different starts; no derivative.
Costs: one value of f a step; order (1 + sqrt 5)/2 = 1.618 at a simple root.
Breaks down when: f is equal at both points (the chord is horizontal), as at alternate points of a curve, or when the
iterates have settled to the last place; when the points coincide; when the step overflows.
Good at: smooth f near a root, cheaply. Bad at: leaving the domain of f, since nothing holds it.
Source: A. M. Ostrowski, Solution of Equations and Systems of Equations, 1966; J. F. Traub 1964 (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.methods.chord import FORMS, chord_zero
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
from surefoot.methods.rounding import told_values


@dataclass(frozen=True, slots=True)
class ChordState:
    """The last two iterates."""

    older: Point
    newer: Point


class Secant:
    """See the module."""

    __slots__ = ()

    traits = Traits(
        code="secant",
        title="Secant",
        idea="follow the chord through the last two iterates to its zero",
        starts=2,
        derivatives=0,
        bracket=False,
        evaluations=(1, 0, 0),
        order=(1 + 5**0.5) / 2,
        source="A. M. Ostrowski, Solution of Equations, 1966; J. F. Traub, Iterative Methods, 1964",
    )
    settings = (
        Setting(
            key="form",
            kind="choice",
            default="product",
            meaning="how the step is computed: product f1*(x1-x0)/(f1-f0), ratio f1/(f1-f0)*(x1-x0), "
            "slope f1/((f1-f0)/(x1-x0)), or the new x symmetric (x0*f1-x1*f0)/(f1-f0)",
            choices=FORMS,
        ),
    )
    state_type = ChordState

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> ChordState | Breakdown:
        older, newer = starts
        return ChordState(older, newer)

    def propose(self, state: ChordState, settings: Settings, functions: Functions) -> Proposal | Breakdown:
        arithmetic = functions.arithmetic
        if state.newer.x == state.older.x:
            return _breakdown(arithmetic, state, "the two points coincide")
        if state.newer.f == state.older.f:
            return _breakdown(arithmetic, state, "the chord is horizontal")
        try:
            return _landing(arithmetic, state, settings["form"])
        except OperationFailed:
            return _breakdown(arithmetic, state, "the step overflows")

    def accept(self, state: ChordState, proposal: Proposal, point: Point) -> ChordState:
        return ChordState(state.newer, point)


def _breakdown(arithmetic: Arithmetic, state: ChordState, reason: str) -> Breakdown:
    points = (state.older, state.newer)
    return Breakdown(f"{reason}: {told_values(arithmetic, points)}", Account("chord", points))


def _landing(arithmetic: Arithmetic, state: ChordState, form: str) -> Proposal:
    """The zero of the chord. Raises OperationFailed when an operation of the form has no value."""
    zero = chord_zero(arithmetic, state.older, state.newer, form)
    return Proposal(zero.x, Account("chord", (state.older, state.newer), zero.slope, step=zero.step))
