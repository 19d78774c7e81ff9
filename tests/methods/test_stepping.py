"""The stepper: the fixed order of a step, every outcome with its sentence, and what it leaves alone."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from support.runs import Walk, run, simple, stepper_for, walk
from surefoot.equation.problem import Input, Problem
from surefoot.equation.results import Failure, FailureKind
from surefoot.errors import PlanError
from surefoot.methods.contract import Iterate, Limited, Point, Spent, Verdict
from surefoot.methods.fixed_point import IterateState
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.methods.stepper import Stepper
from surefoot.methods.tangent import SlopeState

SQUARE = Problem("x", "x^2 - 2")
HALF = Problem("x", "x = x/2", range=("0.1", "10"))
"""Substitution halves x in each step, to the bit."""


def newton(*, stop: Stop | None = None, control: Control | None = None, start: str = "2", max_steps: int = 50) -> Plan:
    return Plan("newton-raphson", (start,), max_steps, control=control or Control(), stop=stop or Stop())


def halving(*, stop: Stop | None = None, control: Control | None = None, start: str = "8", max_steps: int = 50) -> Plan:
    return Plan("fixed-point", (start,), max_steps, control=control or Control(), stop=stop or Stop())


def ended(plan: Plan, problem: Problem) -> tuple[str, str, int]:
    """Outcome, sentence and step rules applied."""
    walked = run(plan, problem)
    assert walked.ending is not None
    return walked.ending.outcome, walked.ending.says, len([it for it in walked.iterates if it.raw is not None])


# Outcomes


def test_converged_by_a_test_of_the_plan() -> None:
    walked = run(halving(stop=Stop(x_absolute="0.25")), HALF)
    assert walked.x == [8.0, 4.0, 2.0, 1.0, 0.5, 0.25]
    assert walked.ending is not None
    assert walked.ending.verdict == Verdict("x_absolute", (("x_absolute", 0.25, 0.25),))
    assert walked.ending.says == "x_absolute holds after 5 steps: |dx| = 0.25 <= 0.25"
    assert walked.spent == Spent(6, 0, 5)
    assert walked.spent.total == 11


def test_converged_by_an_exact_zero() -> None:
    walked = run(newton(start="4"), Problem("x", "x - 3"))
    assert walked.ending is not None
    assert (walked.outcome, walked.x) == ("converged", [4.0, 3.0])
    assert walked.ending.says == "the residual is exactly zero at x = 3.0"
    assert walked.ending.verdict == Verdict("exact_zero", (("exact_zero", 0.0, 0.0),))


def test_an_exact_zero_at_a_start() -> None:
    walked = run(Plan("secant", ("3", "4")), Problem("x", "x - 3"))
    assert (walked.outcome, walked.x, walked.spent) == ("converged", [3.0], Spent(1))
    assert walked.begun.state is None


def test_an_exact_zero_counts_whatever_the_tests_wait_for() -> None:
    stop = Stop(min_steps=9, before_step=True, test="k > 40")
    assert ended(newton(start="4", stop=stop), Problem("x", "x - 3"))[0] == "converged"


def test_exact_zero_off() -> None:
    outcome, says, steps = ended(newton(start="4", stop=Stop(exact_zero=False)), Problem("x", "x - 3"))
    assert (outcome, steps) == ("no_progress", 2)
    assert says == "x = 3.0 repeats bit for bit and no test fired"


def test_step_limit_tells_the_tests_as_they_stood() -> None:
    walked = run(halving(stop=Stop(x_absolute="1e-9", residual="1e-12"), max_steps=3), HALF)
    assert walked.ending is not None
    assert walked.ending.outcome == "step_limit"
    assert walked.ending.verdict == Verdict("max_steps", (("max_steps", 3.0, 3.0),))
    assert walked.ending.says == ("3 steps taken and no test fired: |dx| = 1.0 > 1e-09, |residual| = 0.5 > 1e-12")
    assert len(walked.x) == 4


def test_step_limit_of_one_without_tests() -> None:
    assert ended(halving(max_steps=1), HALF) == ("step_limit", "1 step taken and no test fired", 1)


def test_a_test_goes_before_the_cap() -> None:
    assert ended(halving(stop=Stop(x_absolute="1"), max_steps=3), HALF)[0] == "converged"


def test_the_cap_as_success() -> None:
    outcome, says, steps = ended(halving(stop=Stop(cap_is_success=True), max_steps=3), HALF)
    assert (outcome, steps) == ("converged", 3)
    assert says == "3 steps taken, which the plan counts as converged"


def test_a_host_code_that_counts_goes_on_with_a_repeating_iterate() -> None:
    line = Problem("x", "x - 3")
    assert ended(newton(start="4", stop=Stop(exact_zero=False, cap_is_success=True), max_steps=7), line)[::2] == (
        "converged", 7,
    )  # fmt: skip
    assert ended(newton(start="4", stop=Stop(exact_zero=False, test="k >= 5")), line)[::2] == ("converged", 5)


def test_a_failed_evaluation_keeps_the_iterate() -> None:
    walked = run(newton(start="3"), Problem("x", "ln(x)"))
    assert walked.ending is not None
    assert walked.outcome == "failed_evaluation"
    last = walked.iterates[-1]
    assert last.f == Failure(FailureKind.DOMAIN, "ln(x)", (repr(last.x),))
    assert last.raw == last.x < 0
    assert walked.ending.says == f"the residual has no value at x = {last.x!r}: outside the domain: ln(x) at {last.x!r}"
    assert walked.states[-1] is None
    assert walked.pieces[-1].spent == Spent(1, 1)


def test_a_failed_derivative_has_no_iterate() -> None:
    problem = Problem("x", "x^2 - 2", derivative="1/(x - 2)")
    walked = run(newton(), problem)
    assert walked.ending is not None
    assert walked.outcome == "failed_evaluation"
    assert walked.ending.says.startswith("the derivative has no value at x = 2.0: division by zero: 1/(x - 2) at")
    assert len(walked.iterates) == 1
    assert walked.pieces[0].state == SlopeState(Point(2.0, 2.0))
    assert walked.pieces[0].spent == Spent(0, 1)


def test_a_start_that_fails() -> None:
    walked = run(Plan("secant", ("1", "-1")), Problem("x", "ln(x) + 1"))
    assert walked.ending is not None
    assert (walked.outcome, walked.x, walked.begun.state) == ("failed_evaluation", [1.0, -1.0], None)
    assert walked.ending.says == "the residual has no value at x = -1.0: outside the domain: ln(x) at -1.0"
    assert walked.spent == Spent(2)


def test_leaving_the_working_range_ends_only_where_the_plan_says_so() -> None:
    stop = Control(leave="stop")
    walked = run(halving(control=stop), HALF)
    assert walked.ending is not None
    assert (walked.outcome, walked.x[-1]) == ("left_range", 0.0625)
    assert walked.ending.says == "x = 0.0625 lies outside the working range 0.1 to 10.0"
    assert walked.states[-1] == IterateState(Point(0.0625, 0.03125))
    assert run(halving(stop=Stop(x_absolute="0.01")), HALF).outcome == "converged"


def test_leaving_goes_before_a_failure_and_before_a_test() -> None:
    control = Control(leave="stop")
    failing = run(newton(start="3", control=control), Problem("x", "ln(x)", range=("0.5", "4")))
    assert failing.outcome == "left_range"
    assert isinstance(failing.iterates[-1].f, Failure)
    assert (
        ended(halving(control=control, stop=Stop(x_absolute="1")), replace(HALF, range=("3", "10")))[0] == "left_range"
    )


def test_a_start_outside_the_range_is_no_leaving() -> None:
    walked = run(halving(control=Control(leave="stop"), start="16", stop=Stop(x_absolute="8")), HALF)
    assert walked.outcome == "converged"


def test_breaking_down_keeps_the_state() -> None:
    walked = run(Plan("secant", ("-1", "1")), SQUARE)
    assert walked.outcome == "broke_down"
    assert walked.pieces[0].iterate is None
    assert walked.pieces[0].state == walked.begun.state
    assert walked.pieces[0].spent == Spent()


# The order of a step


def test_control_acts_before_the_evaluation_and_is_flagged() -> None:
    walked = run(halving(control=Control(step_limit="1"), stop=Stop(x_absolute="0")), HALF, limit=1)
    last = walked.iterates[-1]
    assert (last.x, last.raw, last.f) == (7.0, 4.0, 3.5)
    assert last.limited == (Limited("step_limit", 4.0, 7.0),)
    assert walked.states[-1] == IterateState(Point(7.0, 3.5))


def test_the_first_step_has_a_limit_of_its_own() -> None:
    walked = run(halving(control=Control(first_step_limit="1")), HALF, limit=2)
    assert walked.x == [8.0, 7.0, 3.5]


def test_control_that_overflows_breaks_down() -> None:
    outcome, says, steps = ended(halving(control=Control(damping="1e308"), start="1e10"), HALF)
    assert (outcome, says, steps) == ("broke_down", "step control overflows at x = 10000000000.0", 0)


def test_the_raw_step_can_be_tested() -> None:
    control = Control(step_limit="0.125")
    assert ended(halving(control=control, stop=Stop(x_absolute="0.125")), HALF)[2] == 1
    assert ended(halving(control=control, stop=Stop(x_absolute="3.9", step_tested="raw")), HALF)[2] == 3
    # |g(x) - x| = x/2: at 8, 7.875, 7.75 the raw steps are 4, 3.9375, 3.875


def test_min_steps() -> None:
    for min_steps, steps in ((0, 1), (1, 1), (4, 4)):
        assert ended(halving(stop=Stop(x_absolute="4", min_steps=min_steps)), HALF)[::2] == ("converged", steps)


def test_a_repeating_iterate_waits_for_min_steps_too() -> None:
    stop = Stop(exact_zero=False, x_absolute="0", min_steps=6)
    assert ended(newton(start="4", stop=stop), Problem("x", "x - 3"))[::2] == ("converged", 6)


def test_before_the_step_the_iterate_in_hand_is_tested() -> None:
    walked = run(halving(stop=Stop(x_absolute="1", before_step=True)), HALF)
    assert walked.ending is not None
    assert (walked.outcome, walked.x) == ("converged", [8.0, 4.0, 2.0, 1.0])
    assert walked.ending.says == "x_absolute holds after 3 steps: |dx| = 1.0 <= 1.0"
    assert walked.pieces[-1].iterate is None
    assert walked.pieces[-1].state == walked.states[-1]
    assert walked.spent == Spent(4, 0, 3)


def test_before_the_first_step_only_the_residual_can_be_tested() -> None:
    assert ended(halving(stop=Stop(residual="4", x_absolute="100", before_step=True)), HALF) == (
        "converged", "residual holds after 0 steps: |residual| = 4.0 <= 4.0", 0,
    )  # fmt: skip
    assert ended(halving(stop=Stop(x_absolute="100", before_step=True)), HALF)[2] == 1


def test_before_the_first_step_two_starts_are_a_step_apart() -> None:
    plan = Plan("secant", ("1", "2"), stop=Stop(x_absolute="1", before_step=True))
    assert ended(plan, SQUARE)[::2] == ("converged", 0)


def test_before_the_step_the_cap_comes_without_a_last_test() -> None:
    stop = Stop(x_absolute="1", before_step=True)
    assert ended(halving(stop=stop, max_steps=3), HALF)[::2] == ("step_limit", 3)


def test_before_the_step_a_repeating_iterate_is_found_after_its_test() -> None:
    line = Problem("x", "x - 3")
    stop = Stop(exact_zero=False, before_step=True)
    walked = run(newton(start="4", stop=stop), line)
    assert (walked.outcome, walked.x, walked.pieces[-1].iterate) == ("no_progress", [4.0, 3.0, 3.0], None)
    tested = replace(stop, x_absolute="0")
    assert ended(newton(start="4", stop=tested), line)[::2] == ("converged", 2)


def test_a_limit_that_holds_x_in_place() -> None:
    control = Control(bounds=("4", "10"))
    assert ended(halving(control=control), HALF)[::2] == ("no_progress", 2)
    assert ended(halving(control=control, stop=Stop(x_absolute="1e-9")), HALF)[::2] == ("converged", 2)
    assert run(halving(control=control), HALF).iterates[-1].limited == (Limited("bounds", 2.0, 4.0),)


def test_a_bracket_survives_points_that_limits_moved() -> None:
    """Damping by 1.6 and a bound move the midpoint; the bracket still holds the root at every step."""
    control = Control(damping="1.6", bounds=("1.2", "1.9"))
    walked = run(Plan("bisection", ("1", "2"), 200, control=control, stop=Stop(x_absolute="1e-9")), SQUARE)
    assert walked.ending is not None
    for state in walked.states[1:]:
        assert min(state.a.x, state.b.x) < 2**0.5 < max(state.a.x, state.b.x)
    widths = [abs(state.b.x - state.a.x) for state in walked.states]
    assert widths == sorted(widths, reverse=True)


# Iterates put by hand


def test_an_iterate_put_by_hand() -> None:
    stepper = stepper_for(halving(), HALF)
    walked = walk(stepper, limit=2)
    put = stepper.put(walked.progress, "3.0", "back to the survey's depth")
    assert put.iterate == Iterate(3, 3.0, 1.5, put="back to the survey's depth")
    assert (put.state, put.spent, put.ending) == (IterateState(Point(3.0, 1.5)), Spent(1), None)
    assert stepper.put(walked.progress, 3.0).state == put.state


def test_a_held_slope_is_dropped_by_an_iterate_put_by_hand() -> None:
    stepper = stepper_for(newton(control=Control(derivative_every=5)), SQUARE)
    walked = walk(stepper, limit=2)
    assert walked.states[-1].age == 2
    assert stepper.put(walked.progress, "1.4").state == SlopeState(Point(1.4, 1.4**2 - 2))


def test_a_secant_goes_on_from_the_iterate_before_and_the_one_put() -> None:
    stepper = stepper_for(Plan("secant", ("1", "2")), SQUARE)
    walked = walk(stepper, limit=1)
    state = stepper.put(walked.progress, "1.5").state
    assert (state.older.x, state.newer) == (walked.x[-1], Point(1.5, 0.25))


def test_a_bracket_refuses_a_point_outside() -> None:
    stepper = stepper_for(Plan("bisection", ("1", "2")), SQUARE)
    walked = walk(stepper, limit=1)
    for outside in ("0.9", "1.75", "-1"):
        with pytest.raises(PlanError, match=r"x: .* lies outside the bracket 1\.0 to 1\.5"):
            stepper.put(walked.progress, outside)
    put = stepper.put(walked.progress, "1.25")
    assert (put.state.a, put.state.b) == (Point(1.25, 1.25**2 - 2), Point(1.5, 0.25))


def test_an_iterate_put_by_hand_may_fail_or_be_exact() -> None:
    stepper = stepper_for(Plan("secant", ("1", "2")), Problem("x", "ln(x) - ln(4)"))
    walked = walk(stepper, limit=1)
    failed = stepper.put(walked.progress, "-3")
    assert failed.ending is not None
    assert (failed.ending.outcome, failed.state, failed.spent) == ("failed_evaluation", None, Spent(1))
    exact = stepper.put(walked.progress, "4")
    assert exact.ending is not None
    assert (exact.ending.outcome, exact.state is None) == ("converged", False)


def test_no_literal_to_put() -> None:
    stepper = stepper_for(halving(), HALF)
    with pytest.raises(PlanError, match="x: 'here' is not a number of binary64"):
        stepper.put(walk(stepper, limit=1).progress, "here")


def test_a_put_iterate_that_repeats_is_not_without_progress() -> None:
    stepper = stepper_for(halving(stop=Stop(before_step=True)), HALF)
    walked = walk(stepper, limit=1)
    put = stepper.put(walked.progress, "4")
    assert put.iterate is not None
    progress = replace(walked.progress, state=put.state, current=put.iterate, previous=walked.iterates[-1])
    assert stepper.advance(progress).ending is None


# Stopped by the user


class _StopAfter:
    """Says stop from the given question on."""

    def __init__(self, questions: int) -> None:
        self.left = questions

    def __call__(self) -> bool:
        self.left -= 1
        return self.left < 0


@pytest.mark.parametrize(("questions", "iterates"), [(0, 0), (1, 0), (2, 2), (3, 3)])
def test_a_stopped_evaluation_leaves_nothing_behind(questions: int, iterates: int) -> None:
    stepper = Stepper(Plan("secant", ("1", "2")), simple("x^2 - 2"), (), _StopAfter(questions))
    begun = stepper.begin()
    if iterates == 0:
        assert (begun.iterates, begun.state, begun.ending) == ((), None, None)
        return
    walked = Walk(begun, (), begun.iterates, (begun.state,), begun.spent, None)
    for _ in range(iterates - 2):
        piece = stepper.advance(walked.progress)
        assert piece.iterate is not None
        walked = Walk(begun, (), (*walked.iterates, piece.iterate), (*walked.states, piece.state), begun.spent, None)
    for stopped in (stepper.advance(walked.progress), stepper.put(walked.progress, "1.5")):
        assert (stopped.iterate, stopped.ending, stopped.state) == (None, None, walked.states[-1])


@pytest.mark.parametrize("questions", [1, 2, 3])
def test_stopped_within_a_step(questions: int) -> None:
    """After the start: the derivative, f at the iterate proposed, or the derivative that the test asks for."""
    from surefoot.equation.derivatives import derive

    checked = simple("x^2 - 2")
    plan = newton(stop=Stop(test="abs(d_k) < 1"))
    stepper = Stepper(plan, checked, (derive(checked, 1),), _StopAfter(questions))
    begun = stepper.begin()
    progress = Walk(begun, (), begun.iterates, (begun.state,), begun.spent, None).progress
    stopped = stepper.advance(progress)
    assert (stopped.iterate, stopped.ending, stopped.state) == (None, None, begun.state)


# What a stepper is


def test_it_holds_no_state_of_a_run() -> None:
    stepper = stepper_for(newton(stop=Stop(x_relative="1e-12")), SQUARE)
    first, again = walk(stepper), walk(stepper)
    assert repr(first) == repr(again)
    assert repr(stepper.advance(replace(first.progress, steps=3))) == repr(
        stepper.advance(replace(first.progress, steps=3))
    )


def test_a_plan_that_cannot_run_is_refused_at_once() -> None:
    with pytest.raises(PlanError, match=r"plan\.start: newton-raphson takes 1 start, not 2"):
        Stepper(Plan("newton-raphson", ("1", "2")), simple("x^2 - 2"))


@pytest.mark.parametrize("arithmetic", ["binary64", "binary32", "multiprecision:30"])
def test_tests_and_control_use_the_arithmetic_of_the_run(arithmetic: str) -> None:
    problem = Problem("x", "x = x/c", inputs=(Input("c", "3"),))
    control = Control(step_limit="0.1", bounds=("0.2", "1"))
    plan = Plan("fixed-point", ("1",), 30, control=control, stop=Stop(x_absolute="0"), arithmetic=arithmetic)
    stepper = stepper_for(plan, problem)
    numbers: Any = stepper.arithmetic
    walked = walk(stepper)
    tenth, x = numbers.literal("0.1", False), numbers.integer(1)
    low = numbers.literal("0.2", False)
    expected = [x]
    while x != low:
        raw = numbers.divide(x, numbers.integer(3))
        step = numbers.subtract(raw, x)
        x = numbers.subtract(x, tenth) if abs(step) > tenth else raw
        x = max(x, low)
        expected.append(x)
    assert [numbers.encode(value) for value in walked.x] == [numbers.encode(value) for value in [*expected, low]]
    assert walked.outcome == "converged"
