"""Whether the root that a run came to is the good answer: converged, in the working range, admissible."""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.cli.exits import Exit
from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.checking import check_problem
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.function import Function
from surefoot.equation.problem import Problem
from surefoot.equation.results import EvaluationFailed, Real
from surefoot.session.state import Run


@dataclass(frozen=True, slots=True)
class Judgement:
    """What is known of the end of a run.

    Attributes:
        root: the last iterate of a converged run, None for any other outcome.
        in_range: None when there is no root or no working range.
        admissible: None when there is no root, no condition, or a condition that has no value there.
    """

    root: Real | None
    in_range: bool | None
    admissible: bool | None

    @property
    def exit(self) -> Exit:
        """Good only when converged, in the working range and not inadmissible."""
        good = self.root is not None and self.in_range is not False and self.admissible is not False
        return Exit.GOOD if good else Exit.OTHER


def judge(run: Run) -> Judgement:
    """Judge the run as it stands."""
    if run.ending is None or run.ending.outcome != "converged":
        return Judgement(None, None, None)
    arithmetic = arithmetic_of(run.plan.arithmetic)
    problem, root = run.stated.problem, run.current.x
    return Judgement(root, _in_range(problem, root, arithmetic), _admissible(problem, root, arithmetic))


def _in_range(problem: Problem, root: Real, arithmetic: Arithmetic) -> bool | None:
    """Compared in binary64, in which every end of a range can be held whatever the arithmetic of the run."""
    if problem.range is None:
        return None
    low, high = (BINARY64.literal(text, single=False) for text in problem.range)
    return low <= arithmetic.approximate(root) <= high


def _admissible(problem: Problem, root: Real, arithmetic: Arithmetic) -> bool | None:
    if not problem.admissible:
        return None
    function = Function(check_problem(problem), arithmetic)
    decided: list[bool] = []
    for text in problem.admissible:
        try:
            decided.append(function.condition(text, root))
        except EvaluationFailed:
            continue
    if not all(decided):
        return False
    return True if len(decided) == len(problem.admissible) else None
