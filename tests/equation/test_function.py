"""The function of a problem: definitions, derivatives, conditions, and why there is no value."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.binary64 import BINARY64, Binary64
from surefoot.equation.checking import check_problem
from surefoot.equation.function import Function
from surefoot.equation.problem import Definition, Derivative, Input, Problem
from surefoot.equation.results import EvaluationFailed, Failure, FailureKind
from surefoot.errors import EquationError, ProblemError

# A trapezoidal channel; the plain Python below is the same text by hand.
CHANNEL = Problem(
    unknown="y",
    equation="Q = Qd",
    admissible=("y > yc", "A/P < 10"),
    where=(
        Definition("A", "(b + z*y)*y"),
        Definition("P", "b + 2*y*sqrt(1 + z^2)"),
        Definition("Q", "A/n*(A/P)^(2/3)*sqrt(S)"),
        Definition("yc", "1.05"),
        Definition("spare", "ln(y - yc)"),
        Definition("double", "2*spare"),
    ),
    inputs=(Input("b", "3.0"), Input("z", "1.5"), Input("S", "8e-4"), Input("n", "0.025"), Input("Qd", "12")),
    derivative="Qd*y",
)


def channel(y: float) -> float:
    area, perimeter = (3.0 + 1.5 * y) * y, 3.0 + 2.0 * y * math.sqrt(1.0 + math.pow(1.5, 2.0))
    return area / 0.025 * math.pow(area / perimeter, 2.0 / 3.0) * math.sqrt(8e-4) - 12.0


def function(
    problem: Problem = CHANNEL, *derivatives: Derivative, g: str | None = None, host: bool = False
) -> Function:
    return Function(check_problem(problem), BINARY64, derivatives, g=g, host_derivative=host)


def failure(caught: pytest.ExceptionInfo[EvaluationFailed]) -> Failure:
    assert isinstance(caught.value.result, Failure)
    return caught.value.result


@pytest.mark.parametrize("y", [0.2, 1.0, 1.7853, 6.0])
def test_the_value_has_the_bits_of_the_same_text_by_hand(y: float) -> None:
    assert function().value(y) == channel(y)


def test_definitions_that_are_not_needed_are_not_evaluated() -> None:
    assert function().value(0.5) == channel(0.5)  # spare = ln(0.5 - 1.05) has no value here


def test_a_definition_that_fails_is_named() -> None:
    problem = replace(CHANNEL, equation="Q + 0*double = Qd")
    with pytest.raises(EvaluationFailed) as caught:
        function(problem).value(1.0)
    assert failure(caught) == Failure(FailureKind.DOMAIN, "ln(y - yc)", ("-0.050000000000000044",), "spare")
    assert str(caught.value) == "outside the domain: ln(y - yc) at -0.050000000000000044 in spare"


def test_the_residual_itself_can_overflow() -> None:
    problem = Problem("x", "x = 0 - a", inputs=(Input("a", "1.5e308"),))
    with pytest.raises(EvaluationFailed) as caught:
        function(problem).value(1.5e308)
    assert failure(caught) == Failure(FailureKind.OVERFLOW, "x - (0 - a)", ("1.5e+308", "-1.5e+308"))


@pytest.mark.parametrize(
    ("x", "kind"),
    [(math.inf, FailureKind.OVERFLOW), (-math.inf, FailureKind.OVERFLOW), (math.nan, FailureKind.NOT_A_NUMBER)],
)
def test_an_iterate_that_is_no_number_fails_in_its_own_name(x: float, kind: FailureKind) -> None:
    with pytest.raises(EvaluationFailed) as caught:
        function().value(x)
    assert failure(caught) == Failure(kind, "y", (repr(x),))


def test_the_same_function_gives_the_same_bits_again() -> None:
    one = function()
    first = [one.value(y) for y in (0.5, 2.0, 3.0)]
    with pytest.raises(EvaluationFailed):
        one.value(-5.0)  # A/P is negative here
    assert [one.value(y) for y in (0.5, 2.0, 3.0)] == first


# Derivatives

FIRST = Derivative(1, (Definition("u", "b + 2*z*y"), Definition("w", "u*A")), "w + u")
SECOND = Derivative(2, (Definition("u", "2*z"),), "u + spare")


def test_derivatives_have_definitions_of_their_own() -> None:
    one = function(CHANNEL, FIRST, SECOND)
    y = 2.0
    u, area = 3.0 + 2.0 * 1.5 * y, (3.0 + 1.5 * y) * y
    assert one.derivative(y) == u * area + u
    assert one.derivative(y, 2) == 2.0 * 1.5 + math.log(y - 1.05)
    assert one.value(y) == channel(y)


def test_a_failure_in_a_derivative_names_the_line() -> None:
    broken = Derivative(1, (Definition("u", "sqrt(y - 3)"),), "1/(y - 4) + u")
    one = function(CHANNEL, broken)
    with pytest.raises(EvaluationFailed) as caught:
        one.derivative(2.0)
    assert failure(caught) == Failure(FailureKind.DOMAIN, "sqrt(y - 3)", ("-1.0",), "u")
    with pytest.raises(EvaluationFailed) as caught:
        one.derivative(4.0)
    assert failure(caught) == Failure(FailureKind.DIVISION_BY_ZERO, "1/(y - 4)", ("1.0", "0.0"), "d1")


def test_a_derivative_that_was_not_recorded() -> None:
    with pytest.raises(EvaluationFailed) as caught:
        function(CHANNEL, FIRST).derivative(2.0, 3)
    assert failure(caught) == Failure(FailureKind.NO_DERIVATIVE, "Q - Qd", (), "d3")


def test_where_no_branch_of_a_derivative_holds_there_is_no_derivative() -> None:
    problem = Problem("x", "B + 0*C", where=(Definition("B", "abs(x)"), Definition("C", "piecewise(x < 9: x)")))
    gap = Derivative(1, (Definition("s", "piecewise(x < 0: -1; x > 0: 1)"),), "s")
    over_c = Derivative(2, (), "C")
    one = function(problem, gap, over_c)
    assert one.derivative(-2.0) == -1.0
    with pytest.raises(EvaluationFailed) as caught:
        one.derivative(0.0)
    assert failure(caught) == Failure(FailureKind.NO_DERIVATIVE, "piecewise(x < 0: -1; x > 0: 1)", (), "s")
    with pytest.raises(EvaluationFailed) as caught:
        one.derivative(9.0, 2)
    assert failure(caught) == Failure(FailureKind.NO_BRANCH, "piecewise(x < 9: x)", (), "C")


def test_the_derivative_as_the_host_code_has_it() -> None:
    assert function(CHANNEL, FIRST, host=True).derivative(2.0) == 12.0 * 2.0
    assert function(CHANNEL, FIRST).derivative(2.0) != 12.0 * 2.0
    with pytest.raises(EvaluationFailed) as caught:
        function(replace(CHANNEL, derivative=""), FIRST, host=True).derivative(2.0)
    assert failure(caught).kind == FailureKind.NO_DERIVATIVE


@pytest.mark.parametrize(
    ("derivative", "message"),
    [
        (Derivative(1, (), "2*q"), "d1: column 3: unknown name q"),
        (Derivative(2, (Definition("u", "y +"),), "u"), "d2: column 4: the text ends"),
        (Derivative(1, (Definition("A", "y"),), "A"), "d1: A is defined already"),
        (Derivative(1, (Definition("u", "v"), Definition("v", "y")), "u"), "d1: column 1: unknown name v"),
    ],
)
def test_refused_derivatives(derivative: Derivative, message: str) -> None:
    with pytest.raises(ProblemError) as caught:
        function(CHANNEL, derivative)
    assert str(caught.value).startswith(message)


# The iteration function and conditions


def test_the_iteration_function() -> None:
    one = function(g="y + spare")
    assert one.g(2.0) == 2.0 + math.log(2.0 - 1.05)
    with pytest.raises(EvaluationFailed) as caught:
        one.g(1.0)
    assert failure(caught).definition == "spare"
    with pytest.raises(EvaluationFailed) as caught:
        function(g="1/(y - 1)").g(1.0)
    assert failure(caught).definition == "g"
    with pytest.raises(ValueError, match="without an iteration function"):
        function().g(1.0)
    with pytest.raises(EquationError, match="unknown name q"):
        function(g="y + q")


def test_conditions_over_the_names_of_the_problem_and_further_ones() -> None:
    one = function()
    assert one.condition("y > yc and A < 20", 2.0)
    assert not one.condition("y > yc and A < 5", 2.0)
    assert one.condition("dx < tol", 2.0, {"dx": 1e-9, "tol": 1e-6})
    assert not one.condition("dx < tol", 2.0, {"dx": 1e-3, "tol": 1e-6})
    assert not one.condition("dx < tol", 2.0, {"tol": 1e-9, "dx": 1e-6})
    assert one.condition("A == 7", 2.0, {"A": 7.0})  # a further name stands before one of the problem


def test_conditions_that_cannot_be_decided() -> None:
    one = function()
    with pytest.raises(EvaluationFailed) as caught:
        one.condition("double > 0", 1.0)
    assert failure(caught).definition == "spare"
    with pytest.raises(EvaluationFailed) as caught:
        one.condition("1/(y - 1) > 0", 1.0)
    assert failure(caught).definition == "condition"
    with pytest.raises(EquationError, match=r"unknown name dy"):
        one.condition("dy < 1", 1.0, {"dx": 1.0})


def test_admissible() -> None:
    one = function()
    assert one.admissible(2.0) == (True, True)
    assert one.admissible(1.0) == (False, True)
    assert function(replace(CHANNEL, admissible=())).admissible(1.0) == ()
    with pytest.raises(EvaluationFailed, match="in spare"):
        function(replace(CHANNEL, admissible=("spare > 0",))).admissible(1.0)


def test_quantities_show_each_definition_or_why_it_has_no_value() -> None:
    shown = dict(function().quantities(1.0))
    assert list(shown) == ["A", "P", "Q", "yc", "spare", "double"]
    assert shown["A"] == 4.5
    assert shown["Q"] == pytest.approx(channel(1.0) + 12.0, rel=1e-15)
    failed = Failure(FailureKind.DOMAIN, "ln(y - yc)", ("-0.050000000000000044",), "spare")
    assert shown["spare"] == shown["double"] == failed
    assert dict(function().quantities(2.0))["double"] == 2.0 * math.log(2.0 - 1.05)


def test_quantities_at_no_number() -> None:
    shown = dict(function().quantities(math.nan))
    assert shown["A"] == shown["double"] == Failure(FailureKind.NOT_A_NUMBER, "y", ("nan",))
    assert shown["yc"] == 1.05


# Inputs


def test_inputs_are_converted_once_from_their_text() -> None:
    converted: list[str] = []

    class Watched(Binary64):
        def literal(self, text: str, single: bool) -> float:
            converted.append(text)
            return super().literal(text, single)

    problem = Problem("x", "x - S + n", inputs=(Input("S", "0x1.a36e2eb1c432dp-11"), Input("n", "-0.5")))
    one = Function(check_problem(problem), Watched())
    assert converted == ["0x1.a36e2eb1c432dp-11", "-0.5"]
    assert one.value(1.0) == 1.0 - float.fromhex("0x1.a36e2eb1c432dp-11") - 0.5
    assert len(converted) == 2


def test_an_input_that_the_arithmetic_cannot_hold() -> None:
    class Small(Binary64):
        kind = "small"

        def literal(self, text: str, single: bool) -> float:
            if float(text) > 1e30:
                raise OperationFailed(FailureKind.OVERFLOW)
            return super().literal(text, single)

    problem = Problem("x", "x - a", inputs=(Input("a", "1e39"),))
    with pytest.raises(ProblemError) as caught:
        Function(check_problem(problem), Small())
    assert str(caught.value) == "inputs.a.value: 1e39 is beyond the range of small"
