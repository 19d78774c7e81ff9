"""From a command to what happened: the numerics behind a session, and nothing of files.

What is made once per problem and run is kept under its number, with the very object that it was made for: a number that
was given to something that could not be recorded is given again.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import replace
from typing import TypeAlias, TypeVar

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.checking import CheckedProblem, check_problem
from surefoot.equation.problem import Derivative, Problem
from surefoot.equation.results import Failure
from surefoot.errors import Refused
from surefoot.methods.contract import Begun, Iterate, Stepped
from surefoot.methods.plan import Plan
from surefoot.methods.rounding import sign
from surefoot.methods.stepper import Stepper
from surefoot.methods.table import method_of
from surefoot.methods.trial import Landing
from surefoot.session.commands import BeginRun, BeginVariant, PutIterate, StateProblem
from surefoot.session.events import IteratePut, ProblemStated, RunBegun, StepTaken
from surefoot.session.state import Run, SessionState, StatedProblem
from surefoot.session.tools import tools_of

Stop: TypeAlias = Callable[[], bool]
_Done = TypeVar("_Done")

_TRIAL_ITERATES = 1000  # how far back a trial step of a bracketing method looks for the other sign


class Solver:
    """Does what commands ask for. A command that is stopped before it did anything gives None."""

    def __init__(self) -> None:
        self._checked: dict[int, tuple[Problem, CheckedProblem]] = {}
        self._steppers: dict[int, tuple[Plan, Stepper]] = {}
        self._stop: Stop | None = None

    def state_problem(self, state: SessionState, command: StateProblem) -> ProblemStated:
        """The problem with its derivative, made here once and recorded as text.

        Raises:
            ProblemError: the problem is not acceptable.
        """
        number = state.problem_numbers + 1
        checked = check_problem(command.problem)
        self._checked[number] = (command.problem, checked)
        return ProblemStated(number, command.problem, (_first_derivative(checked),), command.readings)

    def begin_run(self, state: SessionState, command: BeginRun, stop: Stop | None) -> RunBegun | None:
        """A run under the problem in force. Raises PlanError when the plan cannot run on it."""
        stated = state.stated
        assert stated is not None, "the table of transitions asks for it"
        return self._begin(state, stated, command.plan, None, stop)

    def begin_variant(self, state: SessionState, command: BeginVariant, stop: Stop | None) -> RunBegun | None:
        """A run from an iterate of another, under the problem of that.

        Raises:
            Refused: there is no such iterate, or there are too few up to it.
            PlanError: the plan cannot run on the problem.
        """
        parent = next((run for run in state.runs if run.number == command.run), None)
        if parent is None:
            numbers = ", ".join(str(run.number) for run in state.runs)
            raise Refused(f"there is no run {command.run}", f"there are {numbers}")
        if not 0 <= command.k < len(parent.iterates):
            raise Refused(f"run {command.run} has no iterate {command.k}", f"its last is {len(parent.iterates) - 1}")
        start = starts_from(parent, command.k, command.plan)
        plan = replace(command.plan, start=start)
        return self._begin(state, parent.stated, plan, (command.run, command.k), stop)

    def step(self, run: Run, stop: Stop | None) -> StepTaken | None:
        """One step of a run under way."""
        stepper = self.stepper(run.plan, run.number, run.stated)
        stepped = self._asking(stop, lambda: stepper.advance(run.progress()))
        return step_taken(stepped)

    def put_iterate(self, run: Run, command: PutIterate, stop: Stop | None) -> IteratePut | None:
        """The run with an x of one's own as its next iterate.

        Raises:
            Refused: no reason is given.
            PlanError: the x is no number of the run's arithmetic, or lies outside the bracket in hand.
        """
        reason = command.reason.strip()
        if not reason:
            raise Refused("a reason is needed to put an iterate by hand")
        stepper = self.stepper(run.plan, run.number, run.stated)
        stepped = self._asking(stop, lambda: stepper.put(run.progress(), command.x.strip(), reason))
        return iterate_put(stepped)

    def landings(self, run: Run, codes: Iterable[str] | None, stop: Stop | None) -> tuple[Landing, ...]:
        """Where methods would land from the iterate in hand. Raises PlanError for a code that there is not."""
        stepper = self.stepper(run.plan, run.number, run.stated)
        return self._asking(stop, lambda: stepper.landings(run.iterates.newest(_TRIAL_ITERATES), codes))

    def stepper(self, plan: Plan, number: int, stated: StatedProblem) -> Stepper:
        """The stepper of a run, from the recorded text alone. Raises PlanError when the plan cannot run."""
        kept = self._steppers.get(number)
        if kept is not None and kept[0] is plan:
            return kept[1]
        derivatives = tuple(each for each in stated.derivatives if each.text)
        stepper = Stepper(plan, self._check(stated), derivatives, self._asked)
        self._steppers[number] = (plan, stepper)
        return stepper

    def _begin(
        self,
        state: SessionState,
        stated: StatedProblem,
        plan: Plan,
        parent: tuple[int, int] | None,
        stop: Stop | None,
    ) -> RunBegun | None:
        number = state.run_numbers + 1
        plan = replace(plan, settings=tuple(sorted(plan.settings)))  # the order that the record keeps
        stepper = self.stepper(plan, number, stated)
        return run_begun(self._asking(stop, stepper.begin), number, stated.number, plan, parent)

    def _check(self, stated: StatedProblem) -> CheckedProblem:
        kept = self._checked.get(stated.number)
        if kept is not None and kept[0] is stated.problem:
            return kept[1]
        checked = check_problem(stated.problem)
        self._checked[stated.number] = (stated.problem, checked)
        return checked

    def _asked(self) -> bool:
        return self._stop is not None and self._stop()

    def _asking(self, stop: Stop | None, work: Callable[[], _Done]) -> _Done:
        """Do work during which steppers ask `stop`."""
        self._stop = stop
        try:
            return work()
        finally:
            self._stop = None


def run_begun(begun: Begun, number: int, problem: int, plan: Plan, parent: tuple[int, int] | None) -> RunBegun | None:
    """A begun run as it is recorded; None when it was stopped."""
    if begun.state is None and begun.ending is None:
        return None
    return RunBegun(
        number,
        problem,
        plan,
        method_of(plan.method).traits.revision,
        begun.iterates,
        begun.state,
        begun.spent,
        begun.ending,
        parent,
        begun.readings,
    )


def step_taken(stepped: Stepped) -> StepTaken | None:
    """A step as it is recorded; None when it was stopped. Without an iterate the method's state has not changed."""
    if stepped.iterate is None and stepped.ending is None:
        return None
    state = stepped.state if stepped.iterate is not None else None
    return StepTaken(stepped.iterate, state, stepped.spent, stepped.ending)


def iterate_put(stepped: Stepped) -> IteratePut | None:
    """An iterate put by hand as it is recorded; None when it was stopped."""
    if stepped.iterate is None:
        return None
    return IteratePut(stepped.iterate, stepped.state, stepped.spent, stepped.ending)


def starts_from(parent: Run, k: int, plan: Plan) -> tuple[str, ...]:
    """The starts of a variant at iterate k, as text that is exact.

    They are the last iterates up to k. A bracketing method takes iterate k and the last one before it where f has the
    other sign; where there is none, the last two, and the method will say so.

    Raises:
        Refused: there are fewer iterates than the method needs.
        PlanError: there is no such method.
    """
    traits = method_of(plan.method).traits
    iterates = tuple(parent.iterates)[: k + 1]
    if len(iterates) < traits.starts:
        reason = f"{plan.method} needs {traits.starts} iterates, and run {parent.number} has {len(iterates)} up to {k}"
        raise Refused(reason, "choose a later iterate, or plan a new run")
    chosen = _across(iterates) if traits.bracket else None
    arithmetic = tools_of(parent).arithmetic
    return tuple(_exact_text(each, arithmetic, plan.arithmetic) for each in chosen or iterates[-traits.starts :])


def _across(iterates: tuple[Iterate, ...]) -> tuple[Iterate, Iterate] | None:
    """The last iterate behind the last one before it where f has the other sign; None when there is none."""
    last = iterates[-1]
    if isinstance(last.f, Failure):
        return None
    for other in reversed(iterates[:-1]):
        if not isinstance(other.f, Failure) and sign(other.f) != sign(last.f):
            return other, last
    return None


def _exact_text(iterate: Iterate, arithmetic: Arithmetic, wanted: str) -> str:
    """The x of an iterate as a literal for a plan under the arithmetic `wanted`, without any rounding of its own."""
    if arithmetic.kind in ("binary64", "binary32"):
        return float(iterate.x).hex()
    text = arithmetic.encode(iterate.x)
    return text if wanted == arithmetic.kind else text.partition(":")[2]


def _first_derivative(checked: CheckedProblem) -> Derivative:
    """The derivative of the residual; without text, and with the reason, where there is none."""
    from surefoot.equation.derivatives import NoDerivative, derive  # brings sympy, which only this needs

    try:
        return derive(checked, 1)
    except NoDerivative as error:
        return Derivative(1, (), "", (str(error),))
