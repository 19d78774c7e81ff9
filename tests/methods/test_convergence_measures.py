"""Convergence measures: their figures, and where they keep silent."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.runs import run
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.problem import Problem
from surefoot.methods.contract import Account, Iterate, Limited, Point
from surefoot.methods.measures import TAIL, measure_last, measures, steady_digits
from surefoot.methods.plan import Control, Plan, Stop

BINARY64 = arithmetic_of("binary64")
ACCOUNT = Account("tangent", (Point(1.0, 1.0),), 1.0)


def rule_iterates(*xs: float) -> tuple[Iterate, ...]:
    """A start, and iterates of a rule."""
    start, *rest = xs
    return (Iterate(0, start, 1.0), *(Iterate(k, x, 1.0, x, ACCOUNT) for k, x in enumerate(rest, 1)))


def last(*iterates: Iterate) -> tuple[float | None, float | None]:
    measure = measure_last(iterates, BINARY64)
    return measure.contraction, measure.order


def test_figures_of_a_clean_run() -> None:
    """Steps 1, 1/4, 1/64: each the square of the one before over 4, order ln(1/16)/ln(1/4) = 2."""
    *_, third, fourth = measures(rule_iterates(0.0, 1.0, 1.25, 1.265625), BINARY64)
    assert (third.dx, third.relative_dx, third.contraction, third.order) == (0.25, 0.2, 0.25, None)
    assert (fourth.k, fourth.dx, fourth.f, fourth.contraction) == (3, 0.015625, 1.0, 0.0625)
    assert fourth.order == pytest.approx(2.0, abs=1e-15)
    assert fourth.relative_dx == 0.015625 / 1.265625


def test_a_start_has_nothing_to_compare_with() -> None:
    (first,) = measures(rule_iterates(3.0), BINARY64)
    assert (first.dx, first.relative_dx, first.contraction, first.order, first.width_ratio, first.steady) == (
        None, None, None, None, None, 0,
    )  # fmt: skip


def test_no_relative_step_at_zero() -> None:
    measure = measure_last(rule_iterates(1.0, 0.0), BINARY64)
    assert (measure.dx, measure.relative_dx) == (-1.0, None)


def test_steps_that_are_not_of_the_rule_have_no_ratio() -> None:
    a, b, c = rule_iterates(0.0, 1.0, 1.25)
    assert last(a, b, c)[0] == 0.25
    assert last(a, Iterate(1, 1.0, 1.0), c)[0] is None  # a second start
    assert last(a, b, Iterate(2, 1.25, 1.0, put="tried"))[0] is None
    assert last(a, b)[0] is None


def test_no_ratio_after_a_step_of_zero() -> None:
    assert last(*rule_iterates(1.0, 1.0, 1.0))[0] is None


def test_the_order_keeps_silent_where_a_limit_or_a_hand_was_in_it() -> None:
    a, b, c, d = rule_iterates(0.0, 1.0, 1.25, 1.265625)
    assert last(a, b, c, d)[1] is not None
    limited = Iterate(2, 1.25, 1.0, 3.0, ACCOUNT, (Limited("step_limit", 3.0, 1.25),))
    assert last(a, b, limited, d)[1] is None
    assert last(a, b, Iterate(2, 1.25, 1.0, put="tried"), d)[1] is None
    assert last(a, Iterate(1, 1.0, 1.0), c, d)[1] is None


def test_the_order_keeps_silent_for_brackets() -> None:
    account = Account("bracket", (Point(0.0, -1.0), Point(1.0, 1.0)), None, (("width", 1.0),))
    start, *rest = rule_iterates(0.0, 1.0, 1.25, 1.265625)
    assert last(start, *(Iterate(it.k, it.x, it.f, it.x, account) for it in rest))[1] is None


@pytest.mark.parametrize(
    "steps",
    [
        (1.0, 0.5, 0.25),  # not shrinking by more than half: no order can be told yet
        (1.0, 0.25, 0.5),  # growing
        (1.0, 0.25, 0.25),
        (1.0, 0.25, 0.0),
        (1e-12, 1e-13, 64 * 2.0**-52),  # the last step is within 64 spacings of x
    ],
)
def test_the_order_keeps_silent_where_the_steps_say_nothing(steps: tuple[float, float, float]) -> None:
    x, xs = 1.0, [1.0]
    for step in steps:
        x += step
        xs.append(x)
    assert last(*rule_iterates(*xs))[1] is None


def test_a_last_step_just_above_64_spacings_counts() -> None:
    spacing = 2.0**-52
    xs = [1.0, 1.0 + 2**20 * spacing, 1.0 + (2**20 + 2**12) * spacing, 1.0 + (2**20 + 2**12 + 65) * spacing]
    order = last(*rule_iterates(*xs))[1]
    assert order == pytest.approx(math.log(65 / 2**12) / math.log(2**-8), rel=1e-12)


def test_steps_beyond_the_range_of_the_numbers_have_no_figures() -> None:
    measure = measure_last(rule_iterates(-1.7e308, 1.7e308), BINARY64)
    assert (measure.dx, measure.relative_dx, measure.order) == (None, None, None)
    assert last(*rule_iterates(0.0, 5e-324, 1e308))[0] is None  # the ratio overflows


def test_width_ratio_of_a_bracket() -> None:
    walk = run(Plan("bisection", ("1", "2"), 6), Problem("x", "x^2 - 2"))
    assert [measure.width_ratio for measure in measures(walk.iterates, BINARY64)] == [None, None, None] + [0.5] * 5


@pytest.mark.parametrize(
    ("before", "after", "digits"),
    [
        (1.7853874719, 1.7831642853, 3),
        (1.8685718634, 1.7853874719, 1),
        (2.3716946576, 1.8685718634, 0),
        (9.9999, 10.0001, 0),
        (1.5, -1.5, 0),
        (1.5, 1.5, 17),
        (0.1, 0.1 + 2**-56, 16),
        (0.0, 1e-5, 0),
        (1.25e-300, 1.24e-300, 2),
    ],
)
def test_steady_digits(before: float, after: float, digits: int) -> None:
    assert steady_digits(BINARY64, before, after) == digits


def test_steady_digits_beyond_the_range_of_binary64() -> None:
    numbers = arithmetic_of("multiprecision:30")
    huge = numbers.literal("1e400", False)
    assert steady_digits(numbers, huge, huge) == 0


def test_the_last_measure_needs_only_a_tail() -> None:
    plan = Plan("newton-raphson", ("40",), 30, stop=Stop(x_relative="1e-14"))
    walk = run(plan, Problem("x", "x^3 - 2*x - 5"))
    every = measures(walk.iterates, BINARY64)
    for k, measure in enumerate(every):
        assert measure_last(walk.iterates[max(0, k + 1 - TAIL) : k + 1], BINARY64) == measure
        assert measure_last(walk.iterates[: k + 1], BINARY64) == measure


def test_the_order_of_real_runs() -> None:
    """Wallis's cubic (J. Wallis, A Treatise of Algebra, 1685): from steps alone, Newton-Raphson 2, secant 1.6."""
    wallis = Problem("x", "x^3 - 2*x - 5")
    newton = run(Plan("newton-raphson", ("2.2",), stop=Stop(x_relative="1e-15")), wallis)
    secant = run(Plan("secant", ("2.2", "2.15"), stop=Stop(x_relative="1e-15")), wallis)
    damped = run(Plan("newton-raphson", ("2.2",), 9, control=Control(damping="0.9")), wallis)
    orders = {
        name: [m.order for m in measures(walk.iterates, BINARY64) if m.order is not None]
        for name, walk in (("newton", newton), ("secant", secant), ("damped", damped))
    }
    assert orders["newton"][-1] == pytest.approx(2.0, abs=0.1)
    assert orders["secant"][-1] == pytest.approx(1.618, abs=0.15)
    assert orders["damped"] == []


def test_measures_in_other_arithmetics() -> None:
    for kind in ("binary32", "multiprecision:60"):
        walk = run(Plan("newton-raphson", ("2.2",), 5, arithmetic=kind), Problem("x", "x^3 - 2*x - 5"), limit=4)
        numbers = arithmetic_of(kind)
        *_, last_one = measures(walk.iterates, numbers)
        assert last_one.contraction is None or isinstance(last_one.contraction, float)
        assert last_one.dx == numbers.subtract(walk.x[-1], walk.x[-2])


def test_the_longest_steps_of_binary32() -> None:
    numbers = arithmetic_of("binary32")
    xs = [numbers.literal(text, False) for text in ("0", "3e38", "1e38", "1.5e38")]
    start, *rest = [Iterate(k, x, x, x if k else None, ACCOUNT if k else None) for k, x in enumerate(xs)]
    assert measure_last([start, *rest], numbers).order is None


@given(st.lists(st.floats(allow_nan=False, allow_infinity=False), min_size=1, max_size=6))
def test_any_iterates_have_measures(xs: list[float]) -> None:
    for measure in measures(rule_iterates(*xs), BINARY64):
        for figure in (measure.contraction, measure.order, measure.relative_dx):
            assert figure is None or math.isfinite(figure)
        assert 0 <= measure.steady <= 17
