"""Stopping conditions of one's own: every reserved name with its value, both sides in the verdict, and what fails."""

from __future__ import annotations

import pytest

from support.runs import Walk, run, stepper_for
from surefoot.equation.checking import check_problem
from surefoot.equation.problem import Definition, Input, Problem
from surefoot.errors import PlanError
from surefoot.methods.contract import Spent
from surefoot.methods.own_test import parse_test, reserved_names
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.methods.table import METHODS

HALF = Problem("x", "x = x/2", inputs=(Input("tol", "0.5"),), where=(Definition("twice", "2*x"),))
"""Substitution halves x in each step, to the bit; f is x/2."""


def halving(test: str, control: Control | None = None, *, before_step: bool = False, max_steps: int = 12) -> Plan:
    stop = Stop(test=test, before_step=before_step)
    return Plan("fixed-point", ("8",), max_steps, control=control or Control(), stop=stop)


def steps(walk: Walk) -> int:
    return sum(iterate.raw is not None for iterate in walk.iterates)


@pytest.mark.parametrize(
    ("test", "taken"),
    [
        ("x_k <= 1", 3),
        ("f_k <= 1", 2),
        ("x_prev <= 1", 4),
        ("f_prev <= 1", 3),
        ("f_k <= f_0/16", 4),
        ("dx >= -1", 3),
        ("abs(dx) < tol", 5),
        ("dx_raw >= -1", 3),
        ("k >= 6", 6),
        ("x <= 1", 3),
        ("twice <= 1", 4),
        ("k >= 2 and x_k < 1", 4),
        ("x_k < 1 or k == 2", 2),
        ("not x_k > 1", 3),
        ("0 < x_k <= pi/3", 3),
    ],
)
def test_names(test: str, taken: int) -> None:
    walk = run(halving(test), HALF)
    assert (walk.outcome, steps(walk)) == ("converged", taken)


def test_the_raw_step_is_the_one_of_the_rule() -> None:
    damped = Control(damping="0.5")  # x falls by a quarter of itself a step: 8, 6, 4.5, 3.375; raw steps 4, 3, 2.25
    assert steps(run(halving("abs(dx_raw) <= 3", damped), HALF)) == 2
    assert steps(run(halving("abs(dx) <= 1.5", damped), HALF)) == 2
    assert steps(run(halving("abs(dx_raw) <= 2.25", damped), HALF)) == 3


def test_the_derivative_at_the_iterate_is_evaluated_for_the_test() -> None:
    problem = Problem("x", "x^2 - 2")
    plan = Plan("newton-raphson", ("2",), stop=Stop(test="abs(f_k/d_k) <= 0.1"))
    walk = run(plan, problem)
    assert walk.x == [2.0, 1.5]
    assert walk.ending is not None
    assert walk.ending.verdict is not None
    assert walk.ending.verdict.sides == (("abs(f_k/d_k) <= 0.1", 0.25 / 3.0, 0.1),)
    assert walk.spent == Spent(2, 2)
    before = run(Plan("newton-raphson", ("2",), stop=Stop(test="d_prev >= 4 and k >= 1")), problem)
    assert before.spent == Spent(2, 1)
    assert before.x == [2.0, 1.5]


def test_the_width_of_the_bracket_in_hand() -> None:
    walk = run(Plan("bisection", ("1", "2"), stop=Stop(test="width <= 0.125")), Problem("x", "x^2 - 2"))
    assert (walk.outcome, steps(walk)) == ("converged", 3)
    assert walk.ending is not None
    assert walk.ending.verdict is not None
    assert walk.ending.verdict.sides == (("width <= 0.125", 0.125, 0.125),)


def test_the_verdict_has_both_sides_of_each_comparison() -> None:
    walk = run(halving("abs(dx) < tol*2 and 0 < x_k <= 1 or twice > 1e9"), HALF)
    assert walk.ending is not None
    assert walk.ending.verdict is not None
    assert walk.ending.verdict.test == "test"
    assert walk.ending.verdict.sides == (
        ("abs(dx) < tol*2", 0.5, 1.0),
        ("0 < x_k", 0.0, 0.5),
        ("x_k <= 1", 0.5, 1.0),
        ("twice > 1e9", 1.0, 1e9),
    )
    assert walk.ending.says == (
        "test holds after 4 steps: abs(dx) < tol*2 (0.5 and 1.0), 0 < x_k (0.0 and 0.5), "
        "x_k <= 1 (0.5 and 1.0), twice > 1e9 (1.0 and 1000000000.0)"
    )


def test_a_comparison_that_was_not_needed_and_has_no_value_is_left_out() -> None:
    walk = run(halving("x_k <= 4 or ln(-x_k) > 0"), HALF)
    assert walk.ending is not None
    assert walk.ending.verdict is not None
    assert walk.ending.verdict.sides == (("x_k <= 4", 4.0, 4.0),)


def test_a_definition_that_fails_does_not_hide_the_other_sides() -> None:
    problem = Problem("x", "x = x/2", where=(Definition("lost", "ln(-x)"),))
    walk = run(halving("x_k <= 4 or lost > 0"), problem)
    assert (walk.outcome, walk.ending is not None) == ("failed_evaluation", True)
    assert walk.ending is not None
    assert walk.ending.says.startswith("the stopping test has no value at x = 4.0: outside the domain: ln(-x)")
    assert walk.states[-1] is not None
    assert len(walk.iterates) == 2


def test_before_the_step_names_that_need_one_are_waited_for() -> None:
    walk = run(halving("abs(dx) < 100", before_step=True), HALF)
    assert (walk.outcome, steps(walk)) == ("converged", 1)
    at_once = run(halving("x_k <= 8", before_step=True), HALF)
    assert (at_once.outcome, steps(at_once)) == ("converged", 0)


def test_before_the_step_a_test_that_fails_ends_the_run() -> None:
    walk = run(halving("ln(x_k - 6) < -10", before_step=True), HALF)
    assert walk.ending is not None
    assert walk.outcome == "failed_evaluation"
    assert walk.ending.says.startswith("the stopping test has no value at x = 4.0: outside the domain: ln(x_k - 6)")
    assert walk.pieces[-1].iterate is None


def test_reserved_names_go_before_the_problems_own() -> None:
    """An input named k is hidden by the count of steps in the test, and nowhere else."""
    problem = Problem("x", "x = x/k", inputs=(Input("k", "2"),))
    walk = run(halving("k >= 3"), problem)
    assert (steps(walk), walk.x[-1]) == (3, 1.0)
    assert walk.ending is not None
    assert walk.ending.verdict is not None
    assert walk.ending.verdict.sides == (("k >= 3", 3.0, 3.0),)


def test_a_step_too_long_for_the_numbers_goes_on() -> None:
    problem = Problem("x", "x + 1", derivative="1")
    plan = Plan("fixed-point", ("1.7e308",), 1, (("g", "-x"),), stop=Stop(test="abs(dx) > 0"))
    walk = run(plan, problem)
    assert walk.outcome == "step_limit"


def test_the_names_of_each_method() -> None:
    codes = ("bisection", "secant", "finite-difference-newton", "fixed-point", "newton-raphson")
    names = {code: set(reserved_names(METHODS[code])) for code in codes}
    shared = {"x_k", "f_k", "x_prev", "f_prev", "f_0", "dx", "dx_raw", "k"}
    assert names == {
        "bisection": shared | {"width"},
        "secant": shared | {"d_prev"},
        "finite-difference-newton": shared | {"d_prev"},
        "fixed-point": shared,
        "newton-raphson": shared | {"d_prev", "d_k"},
    }


def test_a_text_that_is_no_condition() -> None:
    with pytest.raises(PlanError, match=r"plan\.stop\.test: column"):
        parse_test("abs(dx)", check_problem(HALF), METHODS["secant"])
    with pytest.raises(PlanError, match=r"plan\.stop\.test: .*unknown name d_k"):
        stepper_for(halving("d_k > 0"), HALF)
