"""From a plan and its problem to what a run is made with: method, arithmetic, settings and the function to evaluate.

What a plan may leave open is read here (which derivative, which iteration function), and said in plain sentences.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.checking import CheckedProblem
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.function import Function
from surefoot.equation.problem import Derivative
from surefoot.equation.tree import Expression, Name
from surefoot.equation.wording import to_text
from surefoot.errors import PlanError, ProblemError
from surefoot.methods.contract import Method
from surefoot.methods.plan import Plan
from surefoot.methods.settings import read_settings
from surefoot.methods.table import method_of


@dataclass(frozen=True, slots=True)
class Prepared:
    """What a run is made with. `readings` say how the plan's open ends were read."""

    method: Method
    arithmetic: Arithmetic
    settings: Mapping[str, Any]
    function: Function
    readings: tuple[str, ...]


def arithmetic_of_plan(plan: Plan) -> Arithmetic:
    """The arithmetic that the plan names. Raises PlanError when there is no such arithmetic."""
    try:
        return arithmetic_of(plan.arithmetic)
    except ProblemError as error:
        raise PlanError(error.message, key="arithmetic.kind") from error


def prepare(plan: Plan, checked: CheckedProblem, derivatives: Iterable[Derivative]) -> Prepared:
    """Everything that a run under this plan needs.

    Raises:
        PlanError: the method is not known, a setting is not usable, or there is no g or no derivative.
    """
    method, arithmetic = method_of(plan.method), arithmetic_of_plan(plan)
    settings = read_settings(method, plan, arithmetic)
    derivatives = tuple(derivatives)
    readings: list[str] = []
    g = None
    if "g" in settings:
        g, reading = iteration_function(settings["g"], checked)
        readings += reading
    host = False
    if "derivative" in settings:
        host, reading = uses_host_derivative(settings["derivative"], checked)
        readings += reading
    recorded = {derivative.order for derivative in derivatives}
    missing = [order for order in range(1, method.traits.derivatives + 1) if order not in recorded]
    if host:
        missing = missing[1:] if missing[:1] == [1] else missing
    if missing:
        raise PlanError(
            f"{plan.method} needs derivative {missing[0]} of the equation, and none is recorded", key="plan.method"
        )
    function = Function(checked, arithmetic, derivatives, g, host)
    return Prepared(method, arithmetic, settings, function, tuple(readings))


def iteration_function(stated: str, checked: CheckedProblem) -> tuple[str, tuple[str, ...]]:
    """The text of g, and the reading where it was taken from the equation.

    Raises:
        PlanError: no g is stated and the equation does not have the unknown alone on one side.
    """
    if stated:
        return stated, ()
    unknown, equation = Name(checked.problem.unknown), checked.equation
    other: Expression | None = None
    if equation.right is not None:
        other = equation.right if equation.left == unknown else equation.left if equation.right == unknown else None
    if other is None:
        message = f"state the iteration function: the equation does not read {unknown.name} = g({unknown.name})"
        raise PlanError(message, key="plan.settings.g")
    text = to_text(other)
    return text, (f"g is the other side of the equation: {text}",)


def uses_host_derivative(choice: str, checked: CheckedProblem) -> tuple[bool, tuple[str, ...]]:
    """Whether the derivative is the one that the problem states, and the reading where the plan left it open.

    Raises:
        PlanError: the host code's derivative is wanted and the problem states none.
    """
    stated = checked.host_derivative is not None
    if choice == "host" and not stated:
        raise PlanError("the problem states no derivative", key="plan.settings.derivative")
    if choice == "auto" and stated:
        return True, (f"the derivative is the host code's: {checked.problem.derivative}",)
    return choice == "host", ()
