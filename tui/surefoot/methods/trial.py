"""Trial steps: where each method would land from the last iterates of a run, without a step of the run."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass

from surefoot.equation.checking import CheckedProblem
from surefoot.equation.meter import Meter
from surefoot.equation.problem import Derivative
from surefoot.equation.results import EvaluationFailed, Failure, Purpose, Real, Stopped
from surefoot.errors import PlanError
from surefoot.methods.contract import Account, Breakdown, Iterate, Point, Traits
from surefoot.methods.plan import Plan
from surefoot.methods.preparation import Prepared, prepare
from surefoot.methods.rounding import sign
from surefoot.methods.table import METHODS


@dataclass(frozen=True, slots=True)
class Landing:
    """Where one method would go next.

    Attributes:
        code: the method.
        x: where the rule alone would land, before any step control; None where it cannot step.
        f: the residual there, or why there is none; None where there is no x.
        why: one sentence on why the method cannot step from here; empty where it can.
        account: what the step would take for true, None where there is no step.
    """

    code: str
    x: Real | None = None
    f: Real | Failure | None = None
    why: str = ""
    account: Account | None = None


def land(
    plan: Plan,
    checked: CheckedProblem,
    derivatives: Iterable[Derivative],
    iterates: Sequence[Iterate],
    codes: Iterable[str] | None,
    stop: Callable[[], bool] | None,
) -> tuple[Landing, ...]:
    """One landing a method, in the order of `codes` or of the table. The run's own method keeps its settings.

    Raises:
        PlanError: a code that there is not.
    """
    derivatives = tuple(derivatives)
    return tuple(
        _landing(_trial_plan(plan, code), checked, derivatives, iterates, stop)
        for code in (METHODS if codes is None else codes)
    )


def _trial_plan(plan: Plan, code: str) -> Plan:
    return plan if code == plan.method else Plan(code, (), arithmetic=plan.arithmetic)


def _landing(
    plan: Plan,
    checked: CheckedProblem,
    derivatives: tuple[Derivative, ...],
    iterates: Sequence[Iterate],
    stop: Callable[[], bool] | None,
) -> Landing:
    code = plan.method
    try:
        prepared = prepare(plan, checked, derivatives)
    except PlanError as error:
        if error.key == "plan.method" and code not in METHODS:
            raise
        return Landing(code, why=str(error))
    starts = _starts(prepared.method.traits, iterates)
    if starts is None:
        return Landing(code, why=_lacking(prepared.method.traits))
    try:
        return _stepped(prepared, starts, Meter(prepared.function, stop))
    except EvaluationFailed as failed:
        return Landing(code, why="stopped" if isinstance(failed.result, Stopped) else str(failed.result))


def _stepped(prepared: Prepared, starts: tuple[Point, ...], meter: Meter) -> Landing:
    """The landing of the rule itself. Raises EvaluationFailed when the rule asks for a value that there is not."""
    method, functions = prepared.method, meter.calls(Purpose.PROBE)
    state = method.begin(starts, prepared.settings, functions)
    proposal = state if isinstance(state, Breakdown) else method.propose(state, prepared.settings, functions)
    if isinstance(proposal, Breakdown):
        return Landing(method.traits.code, why=proposal.reason)
    f = meter.evaluate(proposal.x, Purpose.PROBE)
    if isinstance(f, Stopped):
        raise EvaluationFailed(f)
    return Landing(method.traits.code, proposal.x, f, account=proposal.account)


def _starts(traits: Traits, iterates: Sequence[Iterate]) -> tuple[Point, ...] | None:
    """The last iterates as starts, to the bit; for a bracket the last one, and the last before it of the other sign."""
    points = [Point(iterate.x, iterate.f) for iterate in iterates if not isinstance(iterate.f, Failure)]
    if traits.bracket and points:
        across = [point for point in points[:-1] if sign(point.f) != sign(points[-1].f)]
        return (across[-1], points[-1]) if across else None
    return tuple(points[-traits.starts :]) if len(points) >= traits.starts else None


def _lacking(traits: Traits) -> str:
    if traits.bracket:
        return "the run has no iterates with opposite signs of f"
    return f"the run has fewer than {traits.starts} iterates with a value"
