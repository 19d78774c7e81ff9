"""What a person can ask of a session. A command is checked, done, and becomes events; it is never recorded itself."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

from surefoot.equation.problem import Problem
from surefoot.methods.plan import Plan


@dataclass(frozen=True, slots=True)
class StateProblem:
    """Accept a problem, new or changed. `readings` are the notes of a paste that change a value."""

    problem: Problem
    readings: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class BeginRun:
    """Accept a plan and evaluate its starts: a new run, which becomes the run in hand."""

    plan: Plan


@dataclass(frozen=True, slots=True)
class TakeSteps:
    """Take up to `count` steps; None goes on to the stop."""

    count: int | None = 1


@dataclass(frozen=True, slots=True)
class Withdraw:
    """Take back the last thing that was done: step, iterate put by hand, run, variant, problem."""


@dataclass(frozen=True, slots=True)
class PutIterate:
    """Go on from an x of one's own. `x` is a literal as typed; the reason is required."""

    x: str
    reason: str


@dataclass(frozen=True, slots=True)
class BeginVariant:
    """A run that begins at iterate k of run `run` (counted from 1) under a changed plan.

    The starts of `plan` are replaced: the last iterates up to k, as many as the method needs, to the bit; for a
    bracketing method iterate k and the last one before it where f has the other sign. The problem is that of the run.
    """

    run: int
    k: int
    plan: Plan


@dataclass(frozen=True, slots=True)
class TakeUp:
    """Make another run the run in hand (`run` counts from 1)."""

    run: int


@dataclass(frozen=True, slots=True)
class AddNote:
    text: str


@dataclass(frozen=True, slots=True)
class Abandon:
    """End the run in hand without a verdict. The reason is required."""

    reason: str


Command: TypeAlias = (
    StateProblem | BeginRun | TakeSteps | Withdraw | PutIterate | BeginVariant | TakeUp | AddNote | Abandon
)
