"""The stepper: one step of a run in its fixed order - rule, control, evaluation of f, test.

No loop, no clock, no files: it makes one step from what it is handed and says what came of it. Numeric trouble never
raises here; it ends the run with an outcome of its own.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import replace

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.checking import CheckedProblem
from surefoot.equation.meter import Meter
from surefoot.equation.problem import Derivative
from surefoot.equation.results import EvaluationFailed, Failure, Purpose, Real, Stopped
from surefoot.errors import PlanError
from surefoot.methods.bracket import neighbours
from surefoot.methods.contract import (
    Account,
    Begun,
    Breakdown,
    Ending,
    Functions,
    Iterate,
    Point,
    Progress,
    Proposal,
    Spent,
    State,
    Stepped,
    Verdict,
)
from surefoot.methods.control import controlled, read_limits
from surefoot.methods.endings import Endings
from surefoot.methods.own_test import OwnTest
from surefoot.methods.plan import Plan
from surefoot.methods.plan_check import check_plan
from surefoot.methods.preparation import prepare
from surefoot.methods.rounding import same_bits
from surefoot.methods.settings import read_number
from surefoot.methods.stopping import Stride, exact_zero, read_tolerances, sides, verdict
from surefoot.methods.trial import Landing, land
from surefoot.methods.watched import Watched


class Stepper:
    """Makes the steps of runs under one plan. It holds no state of a run; equal progress gives an equal step."""

    def __init__(
        self,
        plan: Plan,
        checked: CheckedProblem,
        derivatives: Iterable[Derivative] = (),
        stop: Callable[[], bool] | None = None,
    ) -> None:
        """Prepares the function and the numbers of the plan.

        Args:
            derivatives: the recorded derivatives of the residual.
            stop: asked before each evaluation; once it says True, the step under way is dropped.

        Raises:
            PlanError: the plan cannot run on this problem.
        """
        check_plan(plan, checked)
        self._plan, self._checked, self._derivatives, self._stop = plan, checked, tuple(derivatives), stop
        prepared = prepare(plan, checked, self._derivatives)
        self._method, self._settings = prepared.method, prepared.settings
        self._arithmetic, self.readings = prepared.arithmetic, prepared.readings
        self._meter = Meter(prepared.function, stop)
        self._limits = read_limits(plan.control, self._arithmetic)
        self._tolerances = read_tolerances(plan.stop, self._arithmetic)
        self._own_test = OwnTest(plan.stop.test, checked, self._method, prepared.function) if plan.stop.test else None
        self._range = self._read_range()
        self._endings = Endings(self._arithmetic, checked.problem.unknown)

    @property
    def arithmetic(self) -> Arithmetic:
        """The arithmetic of the run."""
        return self._arithmetic

    def begin(self) -> Begun:
        """The run after its starts were evaluated in order, up to the first that fails or is an exact zero.

        When the user stops it, `state` and `ending` are both None.
        """
        before = self._spent()
        iterates: list[Iterate] = []
        state: State | None = None
        ending: Ending | None = None
        for k, text in enumerate(self._plan.start):
            x = read_number(text, self._arithmetic, "plan.start")
            f = self._meter.evaluate(x, Purpose.STEP)
            if isinstance(f, Stopped):
                return Begun((), None, self._spent_since(before), None, self.readings)
            iterates.append(Iterate(k, x, f))
            ending = self._failed(iterates[-1]) or self._exact(iterates[-1])
            if ending is not None:
                break
        else:
            state, ending = self._first_state(iterates)
        return Begun(tuple(iterates), state, self._spent_since(before), ending, self.readings)

    def advance(self, progress: Progress) -> Stepped:
        """One step further, or how the run ends without one."""
        before = self._spent()
        functions = Watched(self._meter.calls(Purpose.STEP))
        try:
            ending = self._ending_before(progress, functions)
            if ending is not None:
                stepped = Stepped(None, progress.state, Spent(), ending)
            else:
                stepped = self._step(progress, functions)
        except EvaluationFailed as failed:
            stepped = self._without_iterate(progress, functions, failed.result)
        return replace(stepped, spent=self._spent_since(before))

    def put(self, progress: Progress, x: Real | str, reason: str = "put by hand") -> Stepped:
        """The run with an iterate of one's own as the next one: f is evaluated there, control and tests are not made.

        Args:
            x: a number of the run's arithmetic, or a literal.

        Raises:
            PlanError: the literal cannot be read, or the point lies outside the bracket in hand.
        """
        number = read_number(x, self._arithmetic, "x") if isinstance(x, str) else x
        if self._method.traits.bracket:
            self._refuse_outside(progress.state, number)
        before = self._spent()
        f = self._meter.evaluate(number, Purpose.STEP)
        if isinstance(f, Stopped):
            return Stepped(None, progress.state, self._spent_since(before), None)
        iterate = Iterate(progress.current.k + 1, number, f, put=reason)
        state, ending = None, self._failed(iterate)
        if not isinstance(f, Failure):
            proposal = Proposal(number, Account("tangent", ()))
            state = self._method.accept(progress.state, proposal, Point(number, f))
            ending = self._exact(iterate)
        return Stepped(iterate, state, self._spent_since(before), ending)

    def landings(self, iterates: Sequence[Iterate], codes: Iterable[str] | None = None) -> tuple[Landing, ...]:
        """Trial steps: where each method (all, or those of `codes`) would land from the last iterates, never taken.

        Evaluations are probes of meters of their own, so the run's costs stay as they are.
        """
        return land(self._plan, self._checked, self._derivatives, iterates, codes, self._stop)

    # The parts of a step

    def _step(self, progress: Progress, functions: Functions) -> Stepped:
        proposal = self._method.propose(progress.state, self._settings, functions)
        if isinstance(proposal, Breakdown):
            return Stepped(None, progress.state, Spent(), self._endings.broke_down(proposal))
        current = progress.current
        try:
            x, flags = controlled(
                self._arithmetic, self._limits, current.x, proposal.x, proposal.account.step, progress.steps == 0
            )
        except OperationFailed:
            return Stepped(None, progress.state, Spent(), self._endings.control_overflows(current.x))
        f = self._meter.evaluate(x, Purpose.STEP)
        if isinstance(f, Stopped):
            raise EvaluationFailed(f)
        iterate = Iterate(current.k + 1, x, f, proposal.x, proposal.account, flags)
        if isinstance(f, Failure):
            return Stepped(iterate, None, Spent(), self._left(iterate) or self._failed(iterate))
        state = self._method.accept(progress.state, proposal, Point(x, f))
        stride = Stride(iterate, current, progress.origin)
        ending = self._left(iterate) or self._ending_after(stride, state, progress.steps + 1, functions)
        return Stepped(iterate, state, Spent(), ending)

    def _first_state(self, iterates: Sequence[Iterate]) -> tuple[State | None, Ending | None]:
        points = tuple(Point(start.x, start.f) for start in iterates if not isinstance(start.f, Failure))
        state = self._method.begin(points, self._settings, self._meter.calls(Purpose.STEP))
        if isinstance(state, Breakdown):
            return None, self._endings.broke_down(state)
        return state, None

    def _without_iterate(self, progress: Progress, functions: Watched, result: Failure | Stopped) -> Stepped:
        """The rule asked for a value that there is not; or the user stopped the rule or a test."""
        if isinstance(result, Stopped):
            return Stepped(None, progress.state, Spent(), None)
        ending = self._endings.no_value(functions.what, functions.x, result)
        return Stepped(None, progress.state, Spent(), ending)

    # Endings

    def _failed(self, iterate: Iterate) -> Ending | None:
        return self._endings.no_value("the residual", iterate.x, iterate.f) if isinstance(iterate.f, Failure) else None

    def _exact(self, iterate: Iterate) -> Ending | None:
        zero = exact_zero(self._arithmetic, iterate) if self._plan.stop.exact_zero else None
        return None if zero is None else self._endings.exact(zero, iterate)

    def _left(self, iterate: Iterate) -> Ending | None:
        if self._range is None or self._range[0] <= iterate.x <= self._range[1]:
            return None
        return self._endings.left_range(iterate, self._range)

    def _ending_before(self, progress: Progress, functions: Functions) -> Ending | None:
        """The ending that a test before the step gives, at the iterate in hand."""
        if not self._plan.stop.before_step:
            return None
        stride = Stride(progress.current, progress.previous, progress.origin)
        return self._tested(stride, progress.state, progress.steps, functions)

    def _ending_after(self, stride: Stride, state: State, steps: int, functions: Functions) -> Ending | None:
        ending = self._exact(stride.new)
        if ending is None and not self._plan.stop.before_step:
            ending = self._tested(stride, state, steps, functions)
        if ending is not None or steps < self._plan.max_steps:
            return ending
        if self._plan.stop.cap_is_success:
            return self._endings.cap_as_success(steps)
        return self._endings.step_limit(steps, sides(self._arithmetic, self._tolerances, stride))

    def _tested(self, stride: Stride, state: State, steps: int, functions: Functions) -> Ending | None:
        """Converged by a test of the plan, or without progress: no test fired and the iterate repeats.

        A test of one's own that has no value ends the run too.
        """
        if steps < self._plan.stop.min_steps:
            return None
        try:
            fired = self._verdict(stride, state, steps, functions)
        except EvaluationFailed as failed:
            if isinstance(failed.result, Stopped):
                raise
            return self._endings.no_value("the stopping test", stride.new.x, failed.result)
        if fired is not None:
            return self._endings.converged(fired, steps)
        repeats = stride.old is not None and same_bits(self._arithmetic, stride.new.x, stride.old.x)
        if repeats and stride.new.raw is not None and not self._goes_on(state):
            return self._endings.no_progress(stride.new)
        return None

    def _verdict(self, stride: Stride, state: State, steps: int, functions: Functions) -> Verdict | None:
        if self._own_test is not None:
            return self._own_test.verdict(stride, state, steps, functions)
        return verdict(self._arithmetic, self._tolerances, stride)

    def _goes_on(self, state: State) -> bool:
        """Whether a run goes on with an iterate that repeats: its end counts the steps, or its rule can still move."""
        if self._plan.stop.cap_is_success or (self._own_test is not None and self._own_test.counts_steps):
            return True
        return self._method.traits.moves_on and not neighbours(self._arithmetic, state.a.x, state.b.x)

    # Numbers

    def _read_range(self) -> tuple[Real, Real] | None:
        """The working range where the plan stops a run that leaves it, otherwise None."""
        ends = self._checked.problem.range
        if ends is None or self._plan.control.leave != "stop":
            return None
        low, high = (read_number(end, self._arithmetic, "range") for end in ends)
        return low, high

    def _refuse_outside(self, state: State, x: Real) -> None:
        low, high = sorted((state.a.x, state.b.x))
        if not low <= x <= high:
            ends = " to ".join(self._arithmetic.encode(end) for end in (low, high))
            raise PlanError(f"{self._arithmetic.encode(x)} lies outside the bracket {ends}", key="x")

    def _spent(self) -> Spent:
        counts = self._meter.spent(Purpose.STEP)
        return Spent(counts.f, counts.derivative, counts.g)

    def _spent_since(self, before: Spent) -> Spent:
        now = self._spent()
        return Spent(now.f - before.f, now.derivative - before.derivative, now.g - before.g)
