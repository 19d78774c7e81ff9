"""Can this plan run on this problem? No opinion on whether it is wise."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.checking import CheckedProblem, parse_known
from surefoot.equation.functions import nearest
from surefoot.equation.parser import parse_expression
from surefoot.errors import EquationError, PlanError
from surefoot.methods.contract import Method
from surefoot.methods.control import STAGES, read_limits
from surefoot.methods.own_test import parse_test
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.methods.preparation import arithmetic_of_plan, iteration_function, uses_host_derivative
from surefoot.methods.settings import read_number, read_settings
from surefoot.methods.stopping import read_tolerances
from surefoot.methods.table import method_of
from surefoot.methods.tangent import SlopeState

MAX_STEPS = 1_000_000
"""The largest `max_steps`."""


def check_plan(plan: Plan, checked: CheckedProblem) -> None:
    """Returns when the plan can run on the problem.

    Raises:
        PlanError: it cannot; `key` names the place (`plan.stop.x_absolute`).
    """
    method, arithmetic = method_of(plan.method), arithmetic_of_plan(plan)
    _check_starts(plan, method, arithmetic)
    if not 1 <= plan.max_steps <= MAX_STEPS:
        raise PlanError(f"from 1 to {MAX_STEPS} steps, not {plan.max_steps}", key="plan.max_steps")
    _check_settings(method, read_settings(method, plan, arithmetic), checked)
    _check_control(plan.control, method, arithmetic, checked)
    _check_stop(plan.stop, method, arithmetic, checked)


def _check_starts(plan: Plan, method: Method, arithmetic: Arithmetic) -> None:
    wanted = method.traits.starts
    if len(plan.start) != wanted:
        plural = "the two ends of a bracket" if method.traits.bracket else f"{wanted} start{'s' if wanted > 1 else ''}"
        raise PlanError(f"{plan.method} takes {plural}, not {len(plan.start)}", key="plan.start")
    for text in plan.start:
        read_number(text, arithmetic, "plan.start")


def _check_settings(method: Method, settings: Mapping[str, Any], checked: CheckedProblem) -> None:
    for setting in method.settings:
        if setting.kind == "expression" and settings[setting.key]:
            try:
                parse_known(settings[setting.key], parse_expression, checked.names)
            except EquationError as error:
                raise PlanError(str(error), key=f"plan.settings.{setting.key}") from error
    if "h" in settings and not settings["h"] > 0:
        raise PlanError("the difference step must be above zero", key="plan.settings.h")
    if "g" in settings:
        iteration_function(settings["g"], checked)
    if "derivative" in settings:
        uses_host_derivative(settings["derivative"], checked)


def _check_control(control: Control, method: Method, arithmetic: Arithmetic, checked: CheckedProblem) -> None:
    limits = read_limits(control, arithmetic)
    for stage, number in limits.numbers.items():
        if number < 0 and stage != "damping":
            raise PlanError("must not be below zero", key=f"plan.control.{stage}")
    if limits.numbers.get("factor_limit") == 0:
        raise PlanError("must be above zero", key="plan.control.factor_limit")
    if limits.bounds is not None and not limits.bounds[0] < limits.bounds[1]:
        raise PlanError("the lower bound must be below the upper one", key="plan.control.bounds")
    if control.edge_fraction is not None and control.bounds is None:
        raise PlanError("needs plan.control.bounds", key="plan.control.edge_fraction")
    if control.leave == "stop" and checked.problem.range is None:
        raise PlanError("needs the problem's range", key="plan.control.leave")
    if control.derivative_every < 1:
        raise PlanError("must be 1 or more", key="plan.control.derivative_every")
    if control.derivative_every > 1 and method.state_type is not SlopeState:
        raise PlanError(f"{method.traits.code} has no derivative to hold", key="plan.control.derivative_every")
    _check_order(control)


def _check_order(control: Control) -> None:
    key = "plan.control.order"
    for stage in control.order:
        if stage not in STAGES:
            meant = nearest(stage, STAGES)
            offered = f"nearest: {meant}" if meant else f"there are {', '.join(STAGES)}"
            raise PlanError(f"there is no stage {stage!r}; {offered}", key=key)
    if len(set(control.order)) < len(control.order):
        raise PlanError("a stage stands in it twice", key=key)
    for stage in STAGES:
        if getattr(control, stage) is not None and stage not in control.order:
            raise PlanError(f"{stage} is set but does not stand in it", key=key)


def _check_stop(stop: Stop, method: Method, arithmetic: Arithmetic, checked: CheckedProblem) -> None:
    tolerances = read_tolerances(stop, arithmetic)
    for key in ("x_absolute", "x_relative", "residual"):
        tolerance = getattr(tolerances, key)
        if tolerance is not None and tolerance < 0:
            raise PlanError("a tolerance must not be below zero", key=f"plan.stop.{key}")
    if stop.min_steps < 0:
        raise PlanError("must not be below zero", key="plan.stop.min_steps")
    if stop.test:
        parse_test(stop.test, checked, method)
