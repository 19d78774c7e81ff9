"""The bracketing rules by hand: steps with their accounts, and what becomes of points that the rule did not propose."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.runs import Walk, run, stepper_for
from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.problem import Problem
from surefoot.errors import PlanError
from surefoot.methods.bracket import BracketState, held_between, narrowed, neighbours
from surefoot.methods.brent_dekker import BrentState
from surefoot.methods.chandrupatla import ThreePointState
from surefoot.methods.contract import Account, Breakdown, Iterate, Point, Progress, Proposal
from surefoot.methods.false_position import KeptState
from surefoot.methods.itp import ItpState
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.methods.rounding import sign
from surefoot.methods.safeguarded_newton import SafeguardedState
from surefoot.methods.settings import read_settings
from surefoot.methods.states import decode_state, encode_state
from surefoot.methods.table import METHODS
from surefoot.methods.toms_748 import Toms748State

BINARY64 = arithmetic_of("binary64")
SQUARE = Problem("x", "x^2 - 2")
A, B = Point(1.0, -1.0), Point(2.0, 2.0)
WIDTH = ("width", 1.0)
BRACKETING = [code for code, method in METHODS.items() if method.traits.bracket]
every_method = pytest.mark.parametrize("code", BRACKETING)


def plan(
    method: str,
    *starts: str,
    control: Control | None = None,
    stop: Stop | None = None,
    steps: int = 50,
    **settings: str,
) -> Plan:
    return Plan(method, starts, steps, tuple(settings.items()), control or Control(), stop or Stop())


def walked(plan: Plan, problem: Problem = SQUARE, limit: int = 1_000_000) -> Walk:
    return run(plan, problem, limit=limit)


def steps_of(method: str, count: int, problem: Problem = SQUARE, **settings: str) -> list[tuple[Iterate, Any]]:
    """The first iterates after the starts, each with the state after it."""
    walk = walked(plan(method, "1", "2", **settings), problem, limit=count)
    return list(zip(walk.iterates[2:], walk.states[1:], strict=True))


def account_of(iterate: Iterate) -> Account:
    assert iterate.account is not None
    return iterate.account


def square(x: float) -> Point:
    return Point(x, x**2 - 2)


# False position


@pytest.mark.parametrize(
    ("form", "x"),
    [
        ("symmetric", (1.0 * 2.0 - 2.0 * -1.0) / (2.0 - -1.0)),
        ("product", 2.0 - 2.0 * (2.0 - 1.0) / (2.0 - -1.0)),
        ("ratio", 2.0 - 2.0 / (2.0 - -1.0) * (2.0 - 1.0)),
        ("slope", 2.0 - 2.0 / ((2.0 - -1.0) / (2.0 - 1.0))),
    ],
)
def test_regula_falsi_step(form: str, x: float) -> None:
    ((iterate, state),) = steps_of("regula-falsi", 1, form=form)
    assert iterate == Iterate(2, x, x**2 - 2, x, Account("chord", (B, A), 3.0, (WIDTH,)))
    assert state == BracketState(square(x), B)


def test_illinois_halves_the_end_that_is_kept() -> None:
    (_, first), (second, kept), (third, _) = steps_of("illinois", 3)
    x = 4.0 / 3.0
    assert first == KeptState(B, square(x), 2.0)
    assert account_of(second).figures == (("width", 2.0 - x),)
    assert kept == KeptState(B, square(second.x), 1.0)
    assert dict(account_of(third).figures)["kept_f"] == 1.0
    assert account_of(third).points == (square(second.x), B)
    assert third.x == (2.0 * square(second.x).f - second.x * 1.0) / (square(second.x).f - 1.0)


def test_anderson_bjorck_scales_the_end_that_is_kept() -> None:
    (first, _), (second, kept), _ = steps_of("anderson-bjorck", 3)
    assert kept == KeptState(B, square(second.x), 2.0 * (1 - square(second.x).f / square(first.x).f))


def test_anderson_bjorck_halves_where_the_value_did_not_shrink() -> None:
    """The quotient of the values is never formed where it could overflow."""
    state = KeptState(Point(0.0, -1.0), Point(3.0, 1e-300), -1.0)
    method, proposal = METHODS["anderson-bjorck"], Proposal(2.0, Account("chord", ()))
    assert method.accept(state, proposal, Point(2.0, 1e300)).kept == -0.5
    assert method.accept(state, proposal, Point(2.0, 1e-300)).kept == -0.5


@pytest.mark.parametrize("code", ["regula-falsi", "illinois", "anderson-bjorck"])
def test_a_chord_that_overflows_breaks_down(code: str) -> None:
    walk = walked(plan(code, "0", "2"), Problem("x", "piecewise(x < 1: -1e308; otherwise: 1e308)"))
    assert walk.ending is not None
    assert walk.ending.says == "the step overflows: f(0.0) = -1e+308, f(2.0) = 1e+308"


@pytest.mark.parametrize("code", ["regula-falsi", "illinois", "anderson-bjorck"])
def test_a_chord_between_two_zeros_is_horizontal(code: str) -> None:
    walk = walked(plan(code, "1", "2", stop=Stop(exact_zero=False)), Problem("x", "(x - 1)*(2 - x)"))
    assert walk.ending is not None
    assert walk.ending.says == "the chord is horizontal: f(1.0) = 0.0, f(2.0) = 0.0"


@pytest.mark.parametrize("code", ["illinois", "anderson-bjorck"])
def test_an_iterate_that_repeats_is_not_the_end_of_a_rule_that_scales(code: str) -> None:
    """f falls from 3e6 to 1e-11 across the bracket: chords land on its end until the value there is halved away."""
    problem = Problem("x", "-40*x*exp(-x)")
    walk = walked(plan(code, "-9", "31", steps=300), problem)
    assert walk.x[2:5] == [31.0, 31.0, 31.0]
    assert (walk.outcome, walk.x[-1]) == ("converged", 0.0)
    stuck = walked(plan("regula-falsi", "-9", "31"), problem)
    assert (stuck.outcome, len(stuck.x)) == ("no_progress", 3)


# Ridders


RIDDERS_S = math.sqrt(0.25 * 0.25 - -1.0 * 2.0)


@pytest.mark.parametrize(
    ("form", "x"),
    [
        ("product", 1.5 - 0.5 * 0.25 / RIDDERS_S),
        ("quotient", 1.5 - 0.5 * (0.25 / RIDDERS_S)),
        ("offset", 1.5 - 0.5 * 0.25 / RIDDERS_S),
        ("ratios", 1.5 - 0.5 / math.sqrt(1 - (-1.0 / 0.25) * (2.0 / 0.25))),
    ],
)
def test_ridders_step(form: str, x: float) -> None:
    ((iterate, state),) = steps_of("ridders", 1, form=form)
    middle = Point(1.5, 0.25)
    assert (iterate.x, account_of(iterate)) == (
        x, Account("bracket", (A, B, middle), figures=(WIDTH, ("middle", 1.5))),
    )  # fmt: skip
    assert state == (BracketState(square(x), middle) if form == "offset" else BracketState(middle, square(x)))


def test_ridders_takes_the_middle_where_f_is_zero_there() -> None:
    walk = walked(plan("ridders", "0", "2"), Problem("x", "x - 1"))
    assert (walk.outcome, walk.x) == ("converged", [0.0, 2.0, 1.0])
    assert walk.spent.f == 4


def test_ridders_keeps_clear_of_the_ends() -> None:
    ((iterate, _),) = steps_of("ridders", 1, tolerance="0.9")
    assert iterate.x == 1.5 - (0.5 - 0.9 / 2)
    ((iterate, _),) = steps_of("ridders", 1, tolerance="3")
    assert iterate.x == 1.5


def test_ridders_breaks_down_where_its_products_are_lost() -> None:
    """1e-200 squared is zero; the ratios need no product."""
    tiny = Problem("x", "(x^2 - 2)*1e-200")
    walk = walked(plan("ridders", "1", "2"), tiny)
    assert walk.ending is not None
    assert walk.ending.says == (
        "fm^2 - fa*fb overflows, or underflows to zero: "
        "f(1.0) = -1e-200, f(2.0) = 2e-200, f(1.5) = 2.5e-201"
    )  # fmt: skip
    assert walk.ending.account is not None
    assert len(walk.ending.account.points) == 3
    assert walked(plan("ridders", "1", "2", form="ratios"), tiny).x[-1] == pytest.approx(2**0.5, rel=1e-15)


def test_ridders_cuts_at_the_middle_whatever_point_is_taken() -> None:
    method, settings = METHODS["ridders"], read_settings(METHODS["ridders"], plan("ridders", "1", "2"), BINARY64)
    state = BracketState(A, B)
    proposal = method.propose(state, settings, _Functions(lambda x: x**2 - 2))
    assert isinstance(proposal, Proposal)
    assert method.accept(state, proposal, square(1.9)) == BracketState(A, square(1.5))
    assert method.accept(state, proposal, square(1.1)) == BracketState(square(1.5), square(1.1))
    assert method.accept(state, proposal, square(7.0)) == BracketState(A, square(1.5))
    by_hand = Proposal(1.9, Account("tangent", ()))
    assert method.accept(state, by_hand, square(1.9)) == BracketState(A, square(1.9))


# Brent-Dekker


def test_brent_dekker_step() -> None:
    """The better start is b; a = c, so that the first step is the chord's, and it is half of the bracket at most."""
    ((iterate, state),) = steps_of("brent-dekker", 1)
    assert (iterate.x, account_of(iterate)) == (1.0 + 0.5 / 1.5, Account("chord", (A, B), 3.0, (WIDTH,)))
    assert state == BrentState(B, square(iterate.x), A, 0.5 / 1.5, 1.0)


def test_brent_dekker_goes_through_three_points_and_halves() -> None:
    steps = [account_of(iterate) for iterate, _ in steps_of("brent-dekker", 6)]
    assert [account.shape for account in steps].count("parabola") >= 2
    parabola = next(account for account in steps if account.shape == "parabola")
    assert len({point.x for point in parabola.points}) == 3
    flat = [account_of(it).shape for it, _ in steps_of("brent-dekker", 12, Problem("x", "(x - 1.3)^9"))]
    assert "bracket" in flat


def test_brent_dekker_steps_at_least_delta_towards_the_other_end() -> None:
    """A step of interpolation that is shorter than the tolerance is lengthened to it."""
    walk = walked(plan("brent-dekker", "1", "2", tolerance="0.02"), limit=6)
    short = [it for it in walk.iterates if it.account and dict(it.account.figures).get("shortest_step")]
    assert short
    for iterate in short:
        assert account_of(iterate).shape == "bracket"
        assert dict(account_of(iterate).figures)["shortest_step"] == pytest.approx(0.02, rel=1e-12)


def test_the_relative_part_of_the_shortest_step_can_be_stated() -> None:
    walk = walked(plan("brent-dekker", "1", "2", relative_tolerance="0.01"), limit=6)
    steps = [dict(it.account.figures).get("shortest_step") for it in walk.iterates if it.account]
    assert any(step == pytest.approx(0.01 * 1.41, rel=0.01) for step in steps)


def test_brent_dekker_halves_where_the_published_algorithm_has_ended() -> None:
    walk = walked(plan("brent-dekker", "1", "2", tolerance="0.4", steps=200))
    assert walk.outcome == "no_progress"
    state = walk.states[-1]
    assert neighbours(BINARY64, state.a.x, state.b.x)


def test_an_interpolation_that_overflows_is_a_halving() -> None:
    problem = Problem("x", "piecewise(x < 1.2: -1e308; otherwise: 1e308)")
    for code, settings in (("brent-dekker", {"interpolation": "differences"}), ("chandrupatla", {}), ("toms-748", {})):
        walk = walked(plan(code, "0", "3", steps=100, **settings), problem)
        assert walk.x[2] == 1.5
        assert neighbours(BINARY64, walk.states[-1].a.x, walk.states[-1].b.x)


# Chandrupatla


def test_chandrupatla_steps() -> None:
    (first, one), (second, _) = steps_of("chandrupatla", 2)
    assert (first.x, account_of(first)) == (1.5, Account("bracket", (A, B), figures=(WIDTH,)))
    assert one == ThreePointState(Point(1.5, 0.25), A, B)
    assert account_of(second) == Account("parabola", (Point(1.5, 0.25), A, B), figures=(("width", 0.5),))
    f1, f2, f3 = 0.25, -1.0, 2.0
    alpha = (2.0 - 1.5) / (1.0 - 1.5)
    t = f1 / (f1 - f2) * f3 / (f3 - f2) - alpha * f1 / (f3 - f1) * f2 / (f2 - f3)
    assert second.x == 1.5 + t * (1.0 - 1.5)


def test_chandrupatla_keeps_clear_of_the_ends() -> None:
    (_, one), (second, _) = steps_of("chandrupatla", 2, tolerance="0.1")
    assert second.x == pytest.approx(1.4, rel=1e-12)
    assert dict(account_of(second).figures)["clear_of_end"] == pytest.approx(0.1, rel=1e-12)
    assert one.third == B


# TOMS 748


def test_toms_748_goes_through_the_stages_of_an_iteration() -> None:
    steps = steps_of("toms-748", 5)
    assert [state.stage for _, state in steps] == [1, 2, 3, 1, 2]
    assert [account_of(iterate).shape for iterate, _ in steps] == ["chord", "parabola", "parabola", "chord", "parabola"]
    first, state = steps[0]
    assert (first.x, account_of(first)) == (1.0 - -1.0 / 3.0 * 1.0, Account("chord", (A, B), 3.0, (WIDTH,)))
    assert state == Toms748State(square(first.x), B, 2.0 - first.x, 1, A)
    assert [len(account_of(iterate).points) for iterate, _ in steps[1:]] == [3, 4, 2, 4]
    assert [state.stage for _, state in steps_of("toms-748", 4, k="1")] == [1, 3, 1, 3]


def test_the_double_secant_shows_the_slope_that_it_followed() -> None:
    iterate, _ = steps_of("toms-748", 4)[3]
    account = account_of(iterate)
    assert ("secant_length", 2.0) in account.figures
    u = account.points[0]
    assert account.slope is not None
    assert u.x - u.f / account.slope == pytest.approx(iterate.x, rel=1e-12)


def test_toms_748_halves_where_an_iteration_was_not_enough() -> None:
    walk = walked(plan("toms-748", "1", "2"), Problem("x", "(x - 1.3)^9"), limit=10)
    assert 4 in [state.stage for state in walk.states]
    after = next(at for at, state in enumerate(walk.states) if state.stage == 4)
    state = walk.states[after]
    assert walk.x[after + 2] == state.a.x + 0.5 * (state.b.x - state.a.x)
    assert walk.states[after + 1].stage == 1


def test_toms_748_orders_the_ends() -> None:
    assert walked(plan("toms-748", "2", "1")).x[2:] == walked(plan("toms-748", "1", "2")).x[2:]


def test_values_no_further_apart_than_the_gap_count_as_equal() -> None:
    """With a gap of 10 the inverse cubic is never tried: three points to each interpolation."""
    walk = walked(plan("toms-748", "1", "2", value_gap="10"), limit=7)
    assert {len(account_of(it).points) for it in walk.iterates[2:]} <= {2, 3}


def test_toms_748_keeps_clear_of_the_ends() -> None:
    walk = walked(plan("toms-748", "1", "2", tolerance="0.3"), limit=2)
    assert dict(account_of(walk.iterates[2]).figures)["clear_of_end"] == pytest.approx(0.42, rel=1e-12)
    assert walk.x[2] == pytest.approx(1.42, rel=1e-12)


def test_a_quadratic_without_curvature_or_slope_is_left_by_its_chord() -> None:
    """f linear: the curvature is exactly zero, and the zero of the chord is the root."""
    walk = walked(plan("toms-748", "0", "4"), Problem("x", "x - 1"))
    assert walk.x == [0.0, 4.0, 1.0]
    state = Toms748State(Point(0.0, -1.0), Point(4.0, 3.0), 4.0, 1, Point(8.0, 7.0))
    settings = read_settings(METHODS["toms-748"], plan("toms-748", "0", "4"), BINARY64)
    proposal = METHODS["toms-748"].propose(state, settings, _Functions(lambda x: x - 1))
    assert isinstance(proposal, Proposal)
    assert proposal.x == 1.0


# ITP


def test_itp_step() -> None:
    ((iterate, state),) = steps_of("itp", 1, tolerance="0.125")
    zero = 4.0 / 3.0
    figures = (WIDTH, ("radius", 0.5), ("chord_zero", zero), ("truncation", 0.1))
    assert account_of(iterate) == Account("bracket", (A, B), figures=figures)
    assert iterate.x == zero + 0.1
    assert state == ItpState(A, square(iterate.x), 0.5, 0.125)


def test_itp_projects_what_is_too_far_from_the_middle() -> None:
    """n0 = 0: no slack, so that it must halve."""
    (first, state), (second, _) = steps_of("itp", 2, tolerance="0.125", n0="0")
    assert first.x == 1.5
    assert state == ItpState(A, Point(1.5, 0.25), 0.25, 0.125)
    assert second.x == 1.25


def test_itp_truncates_to_the_middle_at_most() -> None:
    ((iterate, _),) = steps_of("itp", 1, kappa1="5")
    assert iterate.x == 1.5


@pytest.mark.parametrize("problem", [Problem("x", "(x - 1.3)^9"), Problem("x", "exp(20*x) - exp(26)"), SQUARE])
@pytest.mark.parametrize("n0", [0, 1, 3])
def test_itp_never_needs_more_than_n0_steps_beyond_bisection(problem: Problem, n0: int) -> None:
    test = Stop(test="width <= 2.0000001e-6", exact_zero=False)
    halving = walked(plan("bisection", "1", "2", stop=test), problem)
    walk = walked(plan("itp", "1", "2", stop=test, tolerance="1e-6", n0=str(n0)), problem)
    assert walk.outcome == halving.outcome == "converged"
    assert len(walk.pieces) <= len(halving.pieces) + n0


def test_itp_halves_a_bracket_that_a_moved_point_left_too_wide() -> None:
    method, settings = METHODS["itp"], read_settings(METHODS["itp"], plan("itp", "1", "2"), BINARY64)
    proposal = method.propose(ItpState(A, B, 0.25, 1e-9), settings, _Functions(lambda x: x**2 - 2))
    assert isinstance(proposal, Proposal)
    assert proposal.x == 1.5


# Safeguarded Newton


def test_safeguarded_newton_steps() -> None:
    (first, one), (second, two) = steps_of("safeguarded-newton", 2)
    assert (first.x, account_of(first)) == (1.5, Account("bracket", (A, B), figures=(WIDTH,)))
    middle = Point(1.5, 0.25)
    assert one == SafeguardedState(A, middle, 1.0, 1.0, middle)
    assert account_of(second) == Account("tangent", (middle,), 3.0, (("width", 0.5),), -(0.25 / 3.0))
    assert second.x == 1.5 - 0.25 / 3.0
    assert two == SafeguardedState(A, square(second.x), 0.25 / 3.0, 1.0, square(second.x))


def test_safeguarded_newton_can_begin_at_the_second_start() -> None:
    walk = walked(plan("safeguarded-newton", "1", "2", first="end"), limit=1)
    assert walk.x[2] == 2.0 - 2.0 / 4.0
    assert (walk.spent.f, walk.spent.derivative) == (3, 1)


def test_safeguarded_newton_halves_where_the_tangent_leaves_the_bracket() -> None:
    """The tangent of atan at -2.5 leads to 6.1; and where the slope is exactly zero."""
    walk = walked(plan("safeguarded-newton", "-9", "4"), Problem("x", "atan(x)"), limit=2)
    assert walk.x[2:] == [-2.5, -2.5 + 6.5 / 2]
    assert dict(account_of(walk.iterates[3]).figures)["slope"] == pytest.approx(1 / 7.25)
    flat = walked(plan("safeguarded-newton", "-1", "3"), Problem("x", "(x - 1)^3 - 1"), limit=2)
    assert flat.x[2:] == [1.0, 2.0]


def test_a_host_derivative_of_zero_makes_it_bisection() -> None:
    problem = Problem("x", "x^2 - 2", derivative="0*x")
    walk = walked(plan("safeguarded-newton", "1", "2"), problem, limit=20)
    halving = walked(plan("bisection", "1", "2", midpoint="offset"), limit=20)
    assert walk.x == halving.x


# What every one of them owes


@every_method
def test_no_sign_change(code: str) -> None:
    walk = walked(plan(code, "2", "3"))
    assert walk.ending is not None
    assert walk.ending.says == "no sign change between the starts: f(2.0) = 2.0, f(3.0) = 7.0"
    assert walk.ending.account == Account("bracket", (Point(2.0, 2.0), Point(3.0, 7.0)))


@every_method
@pytest.mark.parametrize("scale", ["1e-200", "-1e250"])
def test_signs_are_compared_not_multiplied(code: str, scale: str) -> None:
    form = {"form": "ratios"} if code == "ridders" else {}
    walk = walked(plan(code, "1", "2", steps=300, **form), Problem("x", f"(x^2 - 2)*{scale}"))
    assert walk.x[-1] == pytest.approx(2**0.5, rel=1e-15)


@every_method
@pytest.mark.parametrize(("a", "b"), [("1", "3"), ("2", "3"), ("1", "2"), ("1.9", "7")])
def test_a_zero_that_does_not_end_the_run_is_never_lost(code: str, a: str, b: str) -> None:
    stop = Stop(exact_zero=False, test="width <= 1e-9")
    walk = walked(plan(code, a, b, stop=stop, steps=200), Problem("x", "x^2 - 4"))
    assert walk.outcome in ("converged", "no_progress", "step_limit")
    for state in walk.states:
        low, high = sorted((state.a.x, state.b.x))
        assert low <= 2.0 <= high
        assert sign(state.a.f) != sign(state.b.f)


@every_method
def test_a_point_put_by_hand_is_gone_on_from(code: str) -> None:
    """After two steps, a place near the wrong end: the bracket is cut there, and the run comes to the root."""
    wanted = plan(code, "1", "2", steps=4000)
    stepper = stepper_for(wanted, SQUARE)
    walk = walked(wanted, limit=2)
    low, high = sorted((walk.states[-1].a.x, walk.states[-1].b.x))
    place = low + (high - low) / 16
    put = stepper.put(walk.progress, place)
    assert put.iterate is not None
    assert place in (put.state.a.x, put.state.b.x)
    state, current, previous, steps = put.state, put.iterate, walk.iterates[-1], 2
    for _ in range(60):
        stepped = stepper.advance(Progress(state, current, previous, walk.iterates[0], steps))
        if stepped.iterate is not None:
            state, previous, current, steps = stepped.state, current, stepped.iterate, steps + 1
        if stepped.ending is not None:
            break
    assert min(abs(end.f) for end in (state.a, state.b)) < 1e-6
    with pytest.raises(PlanError, match="lies outside the bracket"):
        stepper.put(walk.progress, 5.0)


@every_method
@pytest.mark.parametrize("control", [Control(damping="0.6"), Control(step_limit="0.05"), Control(damping="1.5")])
def test_step_control_moves_the_point_and_the_bracket_holds(code: str, control: Control) -> None:
    walk = walked(plan(code, "1", "2", control=control, steps=300))
    before = (1.0, 2.0)
    for state in walk.states:
        low, high = sorted((state.a.x, state.b.x))
        assert before[0] <= low <= 2**0.5 <= high <= before[1] or state.a.f == 0
        before = (low, high)
    assert min(abs(x - 2**0.5) for x in walk.x) < 1e-4


@pytest.mark.parametrize(
    ("code", "setting", "text", "interval"),
    [
        ("itp", "kappa1", "0", "(0, inf)"),
        ("itp", "kappa2", "0.5", "[1, 2.618)"),
        ("itp", "kappa2", "2.618", "[1, 2.618)"),
        ("itp", "n0", "-1", "[0, inf)"),
        ("itp", "tolerance", "-1e-9", "[0, inf)"),
        ("brent-dekker", "tolerance", "-1", "[0, inf)"),
        ("toms-748", "value_gap", "-1", "[0, inf)"),
    ],
)
def test_settings_that_the_published_rule_does_not_allow(code: str, setting: str, text: str, interval: str) -> None:
    with pytest.raises(PlanError) as refused:
        walked(plan(code, "1", "2", **{setting: text}))
    assert str(refused.value) == f"plan.settings.{setting}: {text} lies outside {interval}"


@pytest.mark.parametrize(
    "code", [code for code in BRACKETING if "tolerance" in {s.key for s in METHODS[code].settings}]
)
def test_a_tolerance_of_any_size(code: str) -> None:
    """The widest that there is: halvings, or a breakdown with its figures."""
    walk = walked(plan(code, "1", "2", tolerance="1.7e308"))
    assert walk.outcome in ("no_progress", "step_limit", "broke_down")
    assert all(1.0 <= x <= 2.0 for x in walk.x)


@every_method
@pytest.mark.parametrize("ends", [("-1.7e308", "1.7e308"), ("1.1e308", "1.7e308"), ("-5e-324", "5e-324")])
def test_ends_of_the_numbers(code: str, ends: tuple[str, str]) -> None:
    """Nothing but an ending or numbers that are finite, up to the widest bracket and down to the narrowest."""
    walk = walked(plan(code, *ends), Problem("x", "piecewise(x > 1.3e308: 1; x > 0: 1; otherwise: -1)"))
    assert walk.ending is not None
    assert all(math.isfinite(x) for x in walk.x)
    if walk.outcome == "broke_down":
        assert "overflow" in walk.ending.says or "no sign change" in walk.ending.says


class _Functions:
    """A function for the rules, in an arithmetic; its slope is one everywhere."""

    def __init__(self, f: Callable[[Any], Any], arithmetic: Arithmetic = BINARY64) -> None:
        self.f, self.arithmetic = f, arithmetic

    def derivative(self, x: float, order: int = 1) -> Any:
        return self.arithmetic.integer(1)

    def g(self, x: float) -> Any:
        raise AssertionError("no bracketing rule has a g")


def _shape(kind: str, numbers: Arithmetic, root: Any, width: Any) -> Callable[[Any], Any]:
    """A change of sign at the root: smooth, a jump, a pole, flat, or with zeros all around it."""
    one = numbers.integer(1)
    shapes: dict[str, Callable[[Any], Any]] = {
        "line": lambda x: x - root,
        "jump": lambda x: one if x > root else -one,
        "pole": lambda x: one / (x - root) if x != root else one,
        "flat": lambda x: (x - root) * (x - root) * (x - root),
        "zeros": lambda x: numbers.integer(0) if abs(x - root) <= width else x - root,
    }
    return shapes[kind]


@every_method
@pytest.mark.parametrize("kind", ["binary64", "binary32", "multiprecision:30"])
@given(data=st.data())
def test_whatever_f_and_whatever_point_is_taken_the_bracket_holds(code: str, kind: str, data: st.DataObject) -> None:
    """Nested brackets with a sign change, states that survive the record, proposals inside; never an exception."""
    numbers, method = arithmetic_of(kind), METHODS[code]

    def real(low: float, high: float) -> Any:
        return numbers.literal(repr(data.draw(st.floats(low, high, width=32))), False)

    root, width = real(0.5, 2.5), real(0.0, 0.5)
    f = _shape(data.draw(st.sampled_from(["line", "jump", "pole", "flat", "zeros"])), numbers, root, width)
    functions = _Functions(f, numbers)
    settings = read_settings(method, plan(code, "0", "3"), numbers)
    starts = tuple(Point(x, f(x)) for x in (numbers.integer(0), numbers.integer(3)))
    state = method.begin(starts if data.draw(st.booleans()) else starts[::-1], settings, functions)
    for _ in range(data.draw(st.integers(1, 10))):
        low, high = sorted((state.a.x, state.b.x))
        proposal = method.propose(state, settings, functions)
        if isinstance(proposal, Breakdown):
            assert proposal.reason
            return
        assert low <= proposal.x <= high
        taken = data.draw(st.sampled_from(["proposed", "inside", "hand", "end", "outside"]))
        x = proposal.x
        if taken in ("inside", "hand"):
            x = held_between(state.a, state.b, low + (high - low) * real(0.0, 1.0))
        elif taken == "end":
            x = low
        elif taken == "outside":
            x = high + numbers.integer(1)
        by_hand = Proposal(x, Account("tangent", ()))
        state = method.accept(state, by_hand if taken == "hand" else proposal, Point(x, f(x)))
        assert low <= min(state.a.x, state.b.x) <= max(state.a.x, state.b.x) <= high
        assert sign(state.a.f) != sign(state.b.f) or state.a.f == 0
        assert (f(state.a.x), f(state.b.x)) == (state.a.f, state.b.f)
        assert repr(decode_state(method, encode_state(state, numbers), numbers)) == repr(state)


def test_parts_of_a_bracket() -> None:
    inner = Point(1.5, 0.25)
    assert narrowed(A, B, inner) == (A, inner)
    assert narrowed(B, A, inner) == (inner, A)
    assert narrowed(A, B, Point(9.0, -1.0)) == (A, B)
    assert [held_between(B, A, x) for x in (0.5, 1.25, 2.5)] == [1.0, 1.25, 2.0]
    assert neighbours(BINARY64, 1.0, math.nextafter(1.0, 2.0))
    assert neighbours(BINARY64, -1.0, math.nextafter(-1.0, 0.0))
    assert not neighbours(BINARY64, 1.0, 1.0 + 2**-51)
