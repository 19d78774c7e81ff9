"""Runs in tests: a stepper driven to its end as a session drives it, and problems made of the published data."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from typing import Any

from surefoot.equation.checking import CheckedProblem, check_problem
from surefoot.equation.derivatives import derive
from surefoot.equation.problem import Derivative, Input, Problem
from surefoot.methods.contract import Begun, Ending, Iterate, Progress, Spent, State, Stepped
from surefoot.methods.plan import Plan
from surefoot.methods.stepper import Stepper
from surefoot.methods.table import method_of


@dataclass(frozen=True, slots=True)
class Walk:
    """A whole run. `states` are those after each of the last iterates, in order; `pieces` what the stepper gave."""

    begun: Begun
    pieces: tuple[Stepped, ...]
    iterates: tuple[Iterate, ...]
    states: tuple[State, ...]
    spent: Spent
    ending: Ending | None

    @property
    def x(self) -> list[Any]:
        return [iterate.x for iterate in self.iterates]

    @property
    def outcome(self) -> str:
        return self.ending.outcome if self.ending else "stepping"

    @property
    def progress(self) -> Progress:
        """What a further step would be made from."""
        previous = self.iterates[-2] if len(self.iterates) > 1 else None
        steps = sum(iterate.raw is not None for iterate in self.iterates)
        return Progress(self.states[-1], self.iterates[-1], previous, self.iterates[0], steps)


def walk(stepper: Stepper, limit: int = 1_000_000) -> Walk:
    """The run to its end, or its first `limit` steps."""
    begun = stepper.begin()
    iterates, states, pieces = list(begun.iterates), [begun.state], []
    spent, ending = begun.spent, begun.ending
    while ending is None and len(pieces) < limit:
        previous = iterates[-2] if len(iterates) > 1 else None
        piece = stepper.advance(Progress(states[-1], iterates[-1], previous, iterates[0], len(pieces)))
        pieces.append(piece)
        spent, ending = spent + piece.spent, piece.ending
        if piece.iterate is not None:
            iterates.append(piece.iterate)
            states.append(piece.state)
    return Walk(begun, tuple(pieces), tuple(iterates), tuple(states), spent, ending)


def run(
    plan: Plan, problem: Problem, derivatives: tuple[Derivative, ...] | None = None, limit: int = 1_000_000
) -> Walk:
    """The walk of a plan on a problem; the first derivative is made where none is handed in and the method needs it."""
    return walk(stepper_for(plan, problem, derivatives), limit)


def stepper_for(plan: Plan, problem: Problem, derivatives: tuple[Derivative, ...] | None = None) -> Stepper:
    """The stepper of a plan on a problem, with the first derivative where the method needs it."""
    checked = check_problem(problem)
    if derivatives is None:
        derivatives = (first_derivative(problem),) if method_of(plan.method).traits.derivatives else ()
    return Stepper(plan, checked, derivatives)


@cache
def first_derivative(problem: Problem) -> Derivative:
    """The derivative of the residual, made once a test run."""
    return derive(check_problem(problem), 1)


def problem_of(row: Mapping[str, Any]) -> Problem:
    """The problem of a row of published.json or failures.json; a derivative in the row is the host code's."""
    ends = row.get("range") or row["search_range"]
    return Problem(
        unknown=row["unknown"],
        equation=row["equation"],
        range=(ends[0], ends[1]),
        derivative=row.get("derivative") or "",
        inputs=tuple(Input(name, text.split()[0]) for name, text in row["parameters"].items()),
    )


def simple(equation: str, unknown: str = "x", range: tuple[str, str] | None = None, **inputs: str) -> CheckedProblem:  # noqa: A002
    """A checked problem of one line."""
    given = tuple(Input(name, value) for name, value in inputs.items())
    return check_problem(Problem(unknown, equation, range=range, inputs=given))
