"""The five rules by hand: each step with its account, each breakdown with its sentence."""

from __future__ import annotations

import math
from typing import Any

import pytest

from support.runs import run, stepper_for
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.problem import Input, Problem
from surefoot.methods.bisection import BracketState
from surefoot.methods.contract import Account, Iterate, Point, Progress, Stepped
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.methods.rounding import half_sum, offset_midpoint, same_bits, sign, told
from surefoot.methods.secant import ChordState
from surefoot.methods.table import METHODS, method_of, trait_rows
from surefoot.methods.tangent import SlopeState

BINARY64 = arithmetic_of("binary64")
SQUARE = Problem("x", "x^2 - 2")


def plan(method: str, *starts: str, control: Control | None = None, stop: Stop | None = None, **settings: str) -> Plan:
    pairs = tuple(settings.items())
    return Plan(method, starts, 50, pairs, control or Control(), stop or Stop())


def first_step(plan: Plan, problem: Problem = SQUARE) -> Stepped:
    walk = run(plan, problem, limit=1)
    assert len(walk.pieces) == 1
    return walk.pieces[0]


def says(plan: Plan, problem: Problem = SQUARE) -> str:
    ending = run(plan, problem).ending
    assert ending is not None
    assert ending.outcome == "broke_down"
    return ending.says


# Newton-Raphson


def test_newton_raphson_step() -> None:
    stepped = first_step(plan("newton-raphson", "2"))
    assert stepped.iterate == Iterate(1, 1.5, 0.25, 1.5, Account("tangent", (Point(2.0, 2.0),), 4.0, (), -0.5))
    assert stepped.state == SlopeState(Point(1.5, 0.25))


def test_a_held_derivative_is_refreshed_every_r_steps() -> None:
    control = Control(derivative_every=3)
    walk = run(plan("newton-raphson", "2", control=control), SQUARE, limit=7)
    accounts = [iterate.account for iterate in walk.iterates[1:]]
    ages = [dict(account.figures)["age"] for account in accounts if account]
    assert ages == [0.0, 1.0, 2.0, 0.0, 1.0, 2.0, 0.0]
    slopes = [account.slope for account in accounts if account]
    assert slopes[:3] == [4.0] * 3
    assert slopes[3:6] == [2 * walk.x[3]] * 3
    assert walk.spent.derivative == 3
    assert walk.x[2] == 1.5 - 0.25 / 4.0
    assert walk.states[1] == SlopeState(Point(1.5, 0.25), 4.0, 1)


def test_a_slope_of_zero() -> None:
    problem = Problem("x", "x^2 + 1")
    walk = run(plan("newton-raphson", "0"), problem)
    assert walk.ending is not None
    assert walk.ending.says == "the slope is exactly zero at x = 0.0, f = 1.0"
    assert walk.ending.account == Account("tangent", (Point(0.0, 1.0),), 0.0)
    assert walk.pieces[0].iterate is None
    assert walk.pieces[0].state == SlopeState(Point(0.0, 1.0))


def test_a_step_that_overflows() -> None:
    problem = Problem("x", "1e-300*x + 1e10", derivative="1e-300")
    assert says(plan("newton-raphson", "1"), problem) == (
        "the step overflows at x = 1.0, f = 10000000000.0, slope = 1e-300"
    )


def test_the_host_codes_derivative_goes_first_and_is_told() -> None:
    problem = Problem("x", "x^2 - 2", derivative="2*x*1.25")
    begun = stepper_for(plan("newton-raphson", "2"), problem).begin()
    assert begun.readings == ("the derivative is the host code's: 2*x*1.25",)
    slopes = {
        choice: run(plan("newton-raphson", "2", derivative=choice), problem, limit=1).iterates[1].account
        for choice in ("auto", "host", "exact")
    }
    assert {choice: account and account.slope for choice, account in slopes.items()} == {
        "auto": 5.0, "host": 5.0, "exact": 4.0,
    }  # fmt: skip
    assert stepper_for(plan("newton-raphson", "2", derivative="host"), problem).begin().readings == ()


# Finite differences


def test_forward_difference_step() -> None:
    stepped = first_step(plan("finite-difference-newton", "2", h="0.5"))
    points = (Point(2.0, 2.0), Point(2.5, 4.25))
    step = -(2.0 / 4.5)
    assert stepped.iterate is not None
    assert stepped.iterate.account == Account("chord", points, 4.5, (("h", 0.5),), step)
    assert stepped.iterate.x == 2.0 + step
    assert (stepped.spent.f, stepped.spent.derivative) == (2, 0)


def test_central_difference_step() -> None:
    stepped = first_step(plan("finite-difference-newton", "2", h="0.5", scheme="central"))
    assert stepped.iterate is not None
    assert stepped.iterate.account == Account(
        "chord", (Point(2.0, 2.0), Point(1.5, 0.25), Point(2.5, 4.25)), 4.0, (("h", 0.5),), -0.5
    )
    assert stepped.spent.f == 3


def test_relative_difference_scales_with_the_size_of_x() -> None:
    stepped = first_step(plan("finite-difference-newton", "-2", h="0.25", h_mode="relative"))
    assert stepped.iterate is not None
    assert stepped.iterate.account is not None
    assert dict(stepped.iterate.account.figures) == {"h": 0.5}
    assert stepped.iterate.account.points[1].x == -1.5


def test_a_relative_difference_has_no_step_at_zero() -> None:
    assert says(plan("finite-difference-newton", "0", h="1e-6", h_mode="relative")) == (
        "h|x| is zero at x = 0.0: a relative h has no step there"
    )


def test_a_difference_below_the_spacing_of_the_numbers() -> None:
    assert says(plan("finite-difference-newton", "9000", h="1e-13")) == (
        "x + h rounds to x = 9000.0 (h = 1e-13): the slope is exactly zero"
    )


def test_the_difference_is_divided_by_h_as_typed() -> None:
    """(x + h) - x is 2.2e-16 for h = 1.5e-16 at 1; host codes divide by their h."""
    stepped = first_step(plan("finite-difference-newton", "1", h="1.5e-16"))
    rise = (1.0 + 1.5e-16) ** 2 - 2 + 1.0
    assert stepped.iterate is not None
    assert stepped.iterate.account is not None
    assert stepped.iterate.account.slope == rise / 1.5e-16


def test_a_held_difference_evaluates_nothing_in_between() -> None:
    control = Control(derivative_every=2)
    walk = run(plan("finite-difference-newton", "2", h="0.5", control=control), SQUARE, limit=4)
    assert [piece.spent.f for piece in walk.pieces] == [2, 1, 2, 1]
    held = walk.iterates[2].account
    assert held is not None
    assert (held.shape, held.slope, held.figures) == ("tangent", 4.5, (("age", 1.0),))
    fresh = walk.iterates[3].account
    assert fresh is not None
    assert [name for name, _ in fresh.figures] == ["h", "age"]


def test_a_difference_quotient_that_overflows() -> None:
    """A jump of 1e300 over a difference of 1e-10."""
    problem = Problem("x", "piecewise(x > 1: 1e300; otherwise: -1)")
    assert says(plan("finite-difference-newton", "1", h="1e-10"), problem) == (
        "the difference quotient overflows at x = 1.0, h = 1e-10"
    )


def test_a_failing_neighbour_ends_the_run_and_is_named() -> None:
    walk = run(plan("finite-difference-newton", "1", h="1"), Problem("x", "sqrt(1.5 - x)"))
    assert walk.ending is not None
    assert walk.outcome == "failed_evaluation"
    assert walk.ending.says == "the residual has no value at x = 2.0: outside the domain: sqrt(1.5 - x) at -0.5"
    assert walk.pieces[0].iterate is None


# Secant


@pytest.mark.parametrize(
    ("form", "x"),
    [
        ("product", 2.0 - 2.0 * (2.0 - 1.0) / (2.0 - -1.0)),
        ("ratio", 2.0 - 2.0 / (2.0 - -1.0) * (2.0 - 1.0)),
        ("slope", 2.0 - 2.0 / ((2.0 - -1.0) / (2.0 - 1.0))),
        ("symmetric", (1.0 * 2.0 - 2.0 * -1.0) / (2.0 - -1.0)),
    ],
)
def test_secant_step(form: str, x: float) -> None:
    stepped = first_step(plan("secant", "1", "2", form=form))
    assert stepped.iterate is not None
    assert stepped.iterate.x == x
    account = stepped.iterate.account
    assert account is not None
    assert (account.shape, account.slope) == ("chord", 3.0)
    assert account.points == (Point(1.0, -1.0), Point(2.0, 2.0))
    assert account.step == (None if form == "symmetric" else -(2.0 / 3.0))
    assert stepped.state == ChordState(Point(2.0, 2.0), Point(x, x * x - 2.0))


def test_the_forms_round_differently() -> None:
    """One step of each form in plain Python: four different numbers, and ours are those four."""
    x0, x1 = 0.1, 7.910000000000001
    f0, f1 = x0**2 - 2, x1**2 - 2
    plain = {
        "product": x1 - f1 * (x1 - x0) / (f1 - f0),
        "ratio": x1 - f1 / (f1 - f0) * (x1 - x0),
        "slope": x1 - f1 / ((f1 - f0) / (x1 - x0)),
        "symmetric": (x0 * f1 - x1 * f0) / (f1 - f0),
    }
    assert len(set(plain.values())) == 4
    ours = {form: run(plan("secant", repr(x0), repr(x1), form=form), SQUARE, limit=1).x[-1] for form in plain}
    assert ours == plain


def test_a_horizontal_chord() -> None:
    assert says(plan("secant", "-1", "1")) == "the chord is horizontal: f(-1.0) = -1.0, f(1.0) = -1.0"


def test_coincident_points() -> None:
    assert says(plan("secant", "1", "1")) == "the two points coincide: f(1.0) = -1.0, f(1.0) = -1.0"


def test_a_chord_that_overflows() -> None:
    assert says(plan("secant", "-1e308", "1e308"), Problem("x", "x + 1")) == (
        "the step overflows: f(-1e+308) = -1e+308, f(1e+308) = 1e+308"
    )


def test_a_slope_that_overflows_is_not_needed_by_the_product_form() -> None:
    """A jump of 2 over the smallest number: the slope has no value, the step has."""
    problem = Problem("x", "piecewise(x > 0: 1; otherwise: -1)")
    iterate = first_step(plan("secant", "0", "5e-324"), problem).iterate
    assert iterate is not None
    assert iterate.account == Account("chord", (Point(0.0, -1.0), Point(5e-324, 1.0)), None, (), -0.0)
    assert says(plan("secant", "0", "5e-324", form="slope"), problem).startswith("the step overflows: f(0.0) = -1.0")


# Bisection


def test_bisection_step() -> None:
    stepped = first_step(plan("bisection", "1", "2"))
    points = (Point(1.0, -1.0), Point(2.0, 2.0))
    assert stepped.iterate == Iterate(2, 1.5, 0.25, 1.5, Account("bracket", points, None, (("width", 1.0),)))
    assert stepped.state == BracketState(Point(1.0, -1.0), Point(1.5, 0.25))


def test_the_ends_keep_their_order() -> None:
    stepped = first_step(plan("bisection", "2", "1"))
    assert stepped.state == BracketState(Point(1.5, 0.25), Point(1.0, -1.0))


def test_no_sign_change() -> None:
    walk = run(plan("bisection", "2", "3"), SQUARE)
    assert walk.ending is not None
    assert walk.ending.says == "no sign change between the starts: f(2.0) = 2.0, f(3.0) = 7.0"
    assert walk.ending.account == Account("bracket", (Point(2.0, 2.0), Point(3.0, 7.0)))
    assert walk.begun.state is None


def test_an_end_that_is_exactly_zero_is_exact() -> None:
    walk = run(plan("bisection", "2", "3"), Problem("x", "x^2 - 4"))
    assert (walk.outcome, walk.x) == ("converged", [2.0])
    walk = run(plan("bisection", "1", "2"), Problem("x", "x^2 - 4"))
    assert (walk.outcome, walk.x) == ("converged", [1.0, 2.0])


@pytest.mark.parametrize(("a", "b", "root"), [("2", "3", 2.0), ("1", "2", 2.0), ("1", "3", 2.0)])
def test_a_zero_that_does_not_end_the_run_is_never_lost(a: str, b: str, root: float) -> None:
    """With exact_zero off the bracket keeps an end that is zero, as an end of either sign."""
    walk = run(plan("bisection", a, b, stop=Stop(exact_zero=False, x_absolute="1e-9")), Problem("x", "x^2 - 4"))
    assert walk.outcome == "converged"
    state = walk.states[-1]
    assert root in (state.a.x, state.b.x)


def test_signs_are_compared_not_multiplied() -> None:
    """f is 1e-200 and -1e-200 at the ends: their product underflows to -0.0."""
    walk = run(plan("bisection", "0", "3", stop=Stop(x_absolute="1e-9")), Problem("x", "(x - 2)*1e-200"))
    assert walk.outcome == "converged"
    assert walk.x[-1] == pytest.approx(2.0, abs=2e-9)


def test_the_half_sum_of_huge_ends_overflows_and_the_offset_does_not() -> None:
    problem = Problem("x", "x - 1.2e308")
    assert says(plan("bisection", "1e308", "1.5e308"), problem) == "the middle of 1e+308 and 1.5e+308 overflows"
    assert first_step(plan("bisection", "1e308", "1.5e308", midpoint="offset"), problem).iterate is not None


def test_halving_ends_where_the_numbers_do() -> None:
    walk = run(Plan("bisection", ("1", "2"), 200), SQUARE)
    assert walk.outcome == "no_progress"
    state = walk.states[-1]
    assert math.nextafter(state.a.x, 2) == state.b.x
    assert state.a.x < math.sqrt(2) <= state.b.x or state.a.x <= math.sqrt(2) < state.b.x


def test_a_point_outside_the_bracket_changes_nothing() -> None:
    state = BracketState(Point(1.0, -1.0), Point(2.0, 2.0))
    assert METHODS["bisection"].accept(state, None, Point(5.0, 23.0)) is state  # type: ignore[arg-type]


# Fixed point


def test_fixed_point_step() -> None:
    stepped = first_step(plan("fixed-point", "1", g="(x + 2/x)/2"))
    assert stepped.iterate == Iterate(1, 1.5, 0.25, 1.5, Account("cobweb", (Point(1.0, -1.0),)))
    assert (stepped.spent.f, stepped.spent.g) == (1, 1)


@pytest.mark.parametrize("equation", ["x = (x + c/x)/2", "(x + c/x)/2 = x"])
def test_g_is_read_from_the_equation_and_told(equation: str) -> None:
    problem = Problem("x", equation, inputs=(Input("c", "2"),))
    walk = run(plan("fixed-point", "1"), problem, limit=1)
    assert walk.begun.readings == ("g is the other side of the equation: (x + c/x)/2",)
    assert walk.x == [1.0, 1.5]
    assert run(plan("fixed-point", "1", g="2/x"), problem, limit=1).begun.readings == ()


def test_a_failing_g_ends_the_run_and_is_named() -> None:
    walk = run(plan("fixed-point", "3", g="sqrt(2 - x)"), SQUARE)
    assert walk.ending is not None
    assert walk.ending.says == "g has no value at x = 3.0: outside the domain: sqrt(2 - x) at -1.0 in g"
    assert walk.pieces[0].spent.g == 1


# Rounding and the table


def test_sign_same_bits_and_midpoints() -> None:
    assert [sign(x) for x in (-5e-324, -0.0, 0.0, 5e-324)] == [-1, 0, 0, 1]
    assert same_bits(BINARY64, 1.0, 1.0)
    assert not same_bits(BINARY64, 0.0, -0.0)
    assert same_bits(BINARY64, -0.0, -0.0)
    assert half_sum(BINARY64, 1.0, 4.0) == offset_midpoint(BINARY64, 1.0, 4.0) == 2.5
    a, b = 0.1, 0.7
    assert half_sum(BINARY64, a, b) != offset_midpoint(BINARY64, a, b)


def test_signs_of_numpy_numbers() -> None:
    numbers = arithmetic_of("binary32")
    assert [sign(numbers.integer(x)) for x in (-3, 0, 3)] == [-1, 0, 1]


def test_figures_in_sentences() -> None:
    assert told(BINARY64, 0.1) == "0.1"
    single = arithmetic_of("binary32")
    assert told(single, single.literal("0.1", False)) == "0.1"
    long = arithmetic_of("multiprecision:50")
    assert told(long, long.literal("0.1", False)) == "0.1"
    third = long.divide(long.integer(1), long.integer(3))
    assert told(long, third) == "0.3333333333333333"


def test_the_table_in_words() -> None:
    rows = {row.code: row for row in trait_rows()}
    assert list(rows) == list(METHODS)
    cells: dict[str, tuple[Any, ...]] = {code: (row.needs, row.evaluations, row.order) for code, row in rows.items()}
    assert cells == {
        "bisection": ("a bracket", "1 f", "-"),
        "regula-falsi": ("a bracket", "1 f", "1"),
        "illinois": ("a bracket", "1 f", "1.442"),
        "anderson-bjorck": ("a bracket", "1 f", "1.682"),
        "ridders": ("a bracket", "2 f", "2"),
        "brent-dekker": ("a bracket", "1 f", "-"),
        "chandrupatla": ("a bracket", "1 f", "-"),
        "toms-748": ("a bracket", "1 f", "-"),
        "itp": ("a bracket", "1 f", "-"),
        "safeguarded-newton": ("a bracket, f'", "1 f, 1 f'", "2"),
        "secant": ("2 starts", "1 f", "1.618"),
        "finite-difference-newton": ("1 start", "2 f", "1"),
        "fixed-point": ("1 start, g", "1 f, 1 g", "1"),
        "newton-raphson": ("1 start, f'", "1 f, 1 f'", "2"),
    }
    assert method_of("secant") is METHODS["secant"]


def test_progress_is_all_that_a_step_needs() -> None:
    """A stepper of its own, from the progress alone, gives the very same step."""
    walk = run(plan("secant", "1", "2"), SQUARE, limit=3)
    before = Progress(walk.states[-2], walk.iterates[-2], walk.iterates[-3], walk.iterates[0], 2)
    again = stepper_for(plan("secant", "1", "2"), SQUARE).advance(before)
    assert repr(again) == repr(walk.pieces[-1])
