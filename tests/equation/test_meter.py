"""The one counter: every evaluation counts under its purpose, and trouble is a value."""

from __future__ import annotations

import math

import pytest

from surefoot.equation.binary64 import BINARY64
from surefoot.equation.checking import check_problem
from surefoot.equation.function import Function
from surefoot.equation.meter import Counts, Meter
from surefoot.equation.problem import Derivative, Problem
from surefoot.equation.results import EvaluationFailed, Failure, FailureKind, Purpose, Stopped

FUNCTION = Function(
    check_problem(Problem("x", "ln(x) = 1")),
    BINARY64,
    (Derivative(1, (), "1/x"), Derivative(2, (), "-1/x^2")),
    g="x + 1 - ln(x)",
)


def test_values_and_failures_are_results() -> None:
    meter = Meter(FUNCTION)
    assert meter.function is FUNCTION
    assert meter.evaluate(2.0, Purpose.STEP) == math.log(2.0) - 1.0
    assert meter.evaluate(2.0, Purpose.STEP, "derivative") == 0.5
    assert meter.evaluate(2.0, Purpose.STEP, "derivative", order=2) == -0.25
    assert meter.evaluate(2.0, Purpose.STEP, "g") == 3.0 - math.log(2.0)
    assert meter.evaluate(-1.0, Purpose.STEP) == Failure(FailureKind.DOMAIN, "ln(x)", ("-1.0",))
    missing = meter.evaluate(2.0, Purpose.STEP, "derivative", order=3)
    assert missing == Failure(FailureKind.NO_DERIVATIVE, "ln(x) - 1", (), "d3")
    assert meter.spent(Purpose.STEP) == Counts(f=2, derivative=3, g=1)
    assert meter.spent(Purpose.STEP).total == 6


def test_purposes_are_counted_apart() -> None:
    meter = Meter(FUNCTION)
    assert meter.spent(Purpose.PICTURE) == Counts(0, 0, 0)
    for _ in range(3):
        meter.evaluate(2.0, Purpose.PICTURE)
    meter.evaluate(2.0, Purpose.PROBE, "g")
    meter.calls(Purpose.STEP).derivative(2.0)
    assert meter.spent(Purpose.PICTURE) == Counts(f=3)
    assert meter.spent(Purpose.PROBE) == Counts(g=1)
    assert meter.spent(Purpose.STEP) == Counts(derivative=1)


def test_a_step_rule_gets_values_or_the_exception_that_carries_the_failure() -> None:
    meter = Meter(FUNCTION)
    calls = meter.calls(Purpose.STEP)
    assert calls.arithmetic is BINARY64
    assert (calls.f(1.0), calls.derivative(2.0), calls.derivative(2.0, 2), calls.g(1.0)) == (-1.0, 0.5, -0.25, 2.0)
    with pytest.raises(EvaluationFailed) as caught:
        calls.f(0.0)
    assert caught.value.result == Failure(FailureKind.DOMAIN, "ln(x)", ("0.0",))
    assert meter.spent(Purpose.STEP) == Counts(f=2, derivative=2, g=1)


def test_a_stop_comes_before_the_next_evaluation_and_is_not_counted() -> None:
    answers = iter([False, False, True, True, True])
    meter = Meter(FUNCTION, stop=lambda: next(answers))
    calls = meter.calls(Purpose.STEP)
    assert calls.f(1.0) == -1.0
    assert meter.evaluate(1.0, Purpose.STEP) == -1.0
    assert meter.evaluate(1.0, Purpose.STEP) == Stopped()
    with pytest.raises(EvaluationFailed) as caught:
        calls.g(1.0)
    assert caught.value.result == Stopped()
    assert meter.evaluate(-1.0, Purpose.STEP, "derivative") == Stopped()
    assert meter.spent(Purpose.STEP) == Counts(f=2)
