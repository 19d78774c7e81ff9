"""Trial steps: where each method would land, to the bit of a run begun there, and what they leave alone."""

from __future__ import annotations

from dataclasses import replace

import pytest

from support.runs import run, stepper_for, walk
from surefoot.equation.checking import check_problem
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.derivatives import derive
from surefoot.equation.problem import Input, Problem
from surefoot.equation.results import Failure, FailureKind
from surefoot.errors import PlanError
from surefoot.methods.contract import Account, Iterate, Point
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.methods.stepper import Stepper
from surefoot.methods.table import METHODS
from surefoot.methods.trial import Landing

KEPLER = Problem("x", "x = 0.7 + 0.5*sin(x)", inputs=(Input("unused", "1"),))
BINARY64 = arithmetic_of("binary64")


def stepper(plan: Plan, problem: Problem = KEPLER) -> Stepper:
    checked = check_problem(problem)
    return Stepper(plan, checked, (derive(checked, 1),))


def landings(plan: Plan, iterates: tuple[Iterate, ...], problem: Problem = KEPLER) -> dict[str, Landing]:
    return {landing.code: landing for landing in stepper(plan, problem).landings(iterates)}


SECANT = Plan("secant", ("0.5", "2.0"), stop=Stop(x_absolute="1e-9"))


def test_every_method_lands_where_a_run_from_there_would() -> None:
    walked = run(SECANT, KEPLER, limit=3)
    found = landings(SECANT, walked.iterates)
    assert list(found) == list(METHODS)
    for code in ("bisection", "secant", "fixed-point", "newton-raphson"):
        traits = METHODS[code].traits
        starts = [iterate.x for iterate in walked.iterates[-traits.starts :]]
        if traits.bracket:
            last = walked.iterates[-1]
            other = [it for it in walked.iterates[:-1] if (it.f > 0) != (last.f > 0)][-1]
            starts = [other.x, last.x]
        begun = run(Plan(code, tuple(map(repr, starts))), KEPLER, limit=1)
        landing = found[code]
        assert landing.x is not None
        assert (landing.x.hex(), landing.f, landing.why) == (begun.x[-1].hex(), begun.iterates[-1].f, "")
        assert landing.account == begun.iterates[-1].account


def test_what_a_method_lacks_is_said() -> None:
    found = landings(SECANT, run(SECANT, KEPLER, limit=1).iterates)
    assert found["finite-difference-newton"].why.startswith(
        "plan.settings.h: finite-difference-newton needs it: the difference step"
    )
    one = landings(SECANT, (Iterate(0, 0.5, 0.1),))
    assert one["secant"].why == "the run has fewer than 2 iterates with a value"
    same_sign = (Iterate(0, 0.5, 0.1), Iterate(1, 0.6, 0.2))
    assert landings(SECANT, same_sign)["bisection"].why == "the run has no iterates with opposite signs of f"
    level = landings(SECANT, (Iterate(0, 0.5, 0.1), Iterate(1, 0.6, 0.1)))
    assert level["secant"].why == "the chord is horizontal: f(0.5) = 0.1, f(0.6) = 0.1"
    other = landings(SECANT, run(SECANT, KEPLER, limit=1).iterates, replace(KEPLER, equation="x - 0.7 - 0.5*sin(x)"))
    assert other["fixed-point"].why.startswith("plan.settings.g: state the iteration function")
    assert all(landing.x is None for landing in (one["secant"], level["secant"], other["fixed-point"]))


def test_the_runs_own_method_keeps_its_settings() -> None:
    plan = Plan("finite-difference-newton", ("2",), settings=(("h", "0.25"), ("scheme", "central")))
    walked = run(plan, KEPLER, limit=1)
    landing = landings(plan, walked.iterates[:1])["finite-difference-newton"]
    assert (landing.x, landing.account) == (walked.x[1], walked.iterates[1].account)


def test_step_control_is_not_part_of_a_landing() -> None:
    plan = replace(SECANT, control=Control(step_limit="1e-3"))
    walked = run(plan, KEPLER, limit=1)
    assert walked.iterates[2].limited
    landing = stepper(plan).landings(walked.iterates[:2], ["secant"])[0]
    assert landing.x == walked.iterates[2].raw


def test_a_landing_where_f_has_no_value() -> None:
    problem = Problem("x", "ln(x)")
    iterates = (Iterate(0, 3.0, 1.0986122886681098),)
    plan = Plan("newton-raphson", ("3",))
    (landing,) = stepper(plan, problem).landings(iterates, ["newton-raphson"])
    assert landing.x == 3.0 - 1.0986122886681098 / (1 / 3.0)
    assert landing.f == Failure(FailureKind.DOMAIN, "ln(x)", (repr(landing.x),))
    assert landing.why == ""


def test_a_rule_that_asks_for_a_value_that_there_is_not() -> None:
    problem = Problem("x", "x^2 - 2", derivative="1/(x - 3)")
    (landing,) = stepper(Plan("newton-raphson", ("2",)), problem).landings((Iterate(0, 3.0, 7.0),), ["newton-raphson"])
    assert landing == Landing("newton-raphson", why="division by zero: 1/(x - 3) at 1.0, 0.0 in d1")


def test_iterates_without_a_value_are_passed_over() -> None:
    failed = Iterate(2, -1.0, Failure(FailureKind.DOMAIN, "ln(x)"))
    iterates = (Iterate(0, 0.5, -0.3), Iterate(1, 2.0, 0.8), failed)
    (landing,) = stepper(SECANT).landings(iterates, ["secant"])
    assert landing.account == Account("chord", (Point(0.5, -0.3), Point(2.0, 0.8)), 1.1 / 1.5, (), landing.account.step)  # type: ignore[union-attr]


def test_the_bracket_of_a_bisection_run_is_the_one_in_hand() -> None:
    """The iterate in hand is one end; the last one of the other sign before it is the other."""
    plan = Plan("bisection", ("0.5", "2.0"), 30)
    driven = stepper(plan)
    walked = walk(driven, limit=12)
    for k in range(2, 13):
        (landing,) = driven.landings(walked.iterates[: k + 1], ["bisection"])
        assert landing.x == walked.iterates[k + 1].x if k < 12 else landing.x is not None


def test_trial_steps_cost_the_run_nothing_and_change_nothing() -> None:
    driven = stepper(SECANT)
    walked = walk(driven, limit=3)
    before = driven.advance(walked.progress)
    driven.landings(walked.iterates)
    after = driven.advance(walked.progress)
    assert repr(after) == repr(before)
    assert after.spent.f == 1


@pytest.mark.parametrize(("code", "message"), [("halley", "not in this version"), ("sekant", "nearest: secant")])
def test_codes_that_there_are_not(code: str, message: str) -> None:
    with pytest.raises(PlanError, match=message):
        stepper(SECANT).landings((Iterate(0, 0.5, 0.1),), [code])


def test_stopped_trial_steps_say_so() -> None:
    checked = check_problem(KEPLER)
    driven = Stepper(SECANT, checked, (derive(checked, 1),), lambda: True)
    iterates = (Iterate(0, 0.5, -0.3), Iterate(1, 2.0, 0.8))
    assert {landing.why for landing in driven.landings(iterates, ["secant", "fixed-point"])} == {"stopped"}


def test_without_a_recorded_derivative() -> None:
    driven = stepper_for(SECANT, KEPLER)
    (landing,) = driven.landings((Iterate(0, 0.5, 0.1),), ["newton-raphson"])
    assert landing.why == "plan.method: newton-raphson needs derivative 1 of the equation, and none is recorded"
