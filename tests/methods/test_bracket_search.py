"""Brackets found by scanning a range: every published root, poles told apart, and never more than the budget."""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise

import pytest

from support.published import PUBLISHED, problem, roots
from support.runs import run
from surefoot.equation.checking import check_problem
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.function import Function
from surefoot.equation.meter import Meter
from surefoot.equation.problem import Problem
from surefoot.equation.results import Purpose
from surefoot.methods.bracket_search import BUDGET, Bracket, find_brackets
from surefoot.methods.plan import Plan, Stop
from surefoot.methods.rounding import sign

TAN = Problem("x", "tan(x)")
PI = 3.141592653589793


def meter_of(stated: Problem, kind: str = "binary64", stop: Callable[[], bool] | None = None) -> Meter:
    return Meter(Function(check_problem(stated), arithmetic_of(kind)), stop)


def found(stated: Problem | str, low: float, high: float, budget: int = BUDGET) -> tuple[Bracket, ...]:
    meter = meter_of(Problem("x", stated) if isinstance(stated, str) else stated)
    brackets = find_brackets(meter, low, high, budget)
    assert meter.spent(Purpose.PROBE).f <= budget
    assert meter.spent(Purpose.STEP).total == 0
    for bracket in brackets:
        assert low <= bracket.a.x < bracket.b.x <= high
        assert sign(bracket.a.f) != sign(bracket.b.f)
    assert all(a.b.x <= b.a.x for a, b in pairwise(brackets))
    return brackets


def test_roots_and_poles_of_the_tangent() -> None:
    brackets = found(TAN, 0.5, 20.0)
    assert [bracket.kind for bracket in brackets] == ["pole", "crossing"] * 6
    for count, bracket in enumerate(brackets):
        place = (count + 1) * PI / 2
        assert bracket.a.x < place < bracket.b.x


@pytest.mark.parametrize("budget", [100, 500, 2000, 10_000])
def test_they_are_told_apart_at_any_budget(budget: int) -> None:
    assert [bracket.kind for bracket in found(TAN, 0.5, 20.0, budget)] == ["pole", "crossing"] * 6


@pytest.mark.parametrize("code", PUBLISHED)
def test_every_published_root_is_in_one_bracket_and_every_other_bracket_holds_a_pole(code: str) -> None:
    """Sources and singularities stand in the data."""
    row = PUBLISHED[code]
    low, high = (float(end) for end in row["range"])
    brackets = found(problem(code), low, high)
    crossings = [bracket for bracket in brackets if bracket.kind == "crossing"]
    for root in roots(code):
        assert sum(bracket.a.x <= root <= bracket.b.x for bracket in crossings) == 1
    assert len(crossings) == len(roots(code))
    others = [bracket for bracket in brackets if bracket.kind != "crossing"]
    places = [float(place["near"]) for place in row["singularities_in_range"] if "removable" not in place["kind"]]
    assert len(others) == len(places)
    for bracket in others:
        assert bracket.kind == "pole"
        assert any(bracket.a.x <= place <= bracket.b.x for place in places)


@pytest.mark.parametrize("code", ["che-pr-hexane", "gas-area-2", "heat-wall-bi1", "fin-irr-two"])
def test_a_bracket_that_was_found_is_one_to_start_from(code: str) -> None:
    low, high = (float(end) for end in PUBLISHED[code]["range"])
    crossings = [bracket for bracket in found(problem(code), low, high) if bracket.kind == "crossing"]
    for bracket, root in zip(crossings, sorted(roots(code)), strict=True):
        plan = Plan("brent-dekker", (repr(bracket.a.x), repr(bracket.b.x)), 100, stop=Stop())
        assert run(plan, problem(code)).x[-1] == pytest.approx(root, rel=1e-10)


@pytest.mark.parametrize("order", [1, 3])
def test_poles_where_the_sign_changes(order: int) -> None:
    (pole,) = found(f"1/(x - 1.1)^{order}", 0.0, 3.0)
    assert pole.kind == "pole"
    assert found("1/(x - 1.1)^2", 0.0, 3.0) == ()


def test_a_division_by_zero_or_an_overflow_inside_is_a_pole() -> None:
    """The first halving of the one cell of an odd scan falls on it."""
    (pole,) = found("1/(x - 1)", 0.0, 2.0, budget=15)
    assert pole.kind == "pole"
    (pole,) = found("1e307/(x - 1.01)", 0.0, 2.0, budget=15)
    assert pole.kind == "pole"


def test_a_place_without_a_value_inside_is_a_gap() -> None:
    (gap,) = found("piecewise(x < 0.9: -1; x > 1.1: 1)", 0.0, 2.0, budget=15)
    assert gap.kind == "gap"


def test_a_jump_and_a_steep_root_are_crossings() -> None:
    for text in ("piecewise(x < 1.234: -1; otherwise: 2)", "tanh(1e6*(x - 1.234))", "(x - 1.234)^9", "x^3 - 1.9"):
        (crossing,) = found(text, 0.0, 2.0)
        assert crossing.kind == "crossing"


def test_a_root_behind_a_hump_is_no_pole() -> None:
    """f starts close to zero, so that the smaller value grows over the first halvings."""
    (crossing,) = found("(x - 0.0001)*(1 - x)", 0.001, 4.0, budget=25)
    assert crossing.kind == "crossing"


def test_an_exact_zero_counts_once() -> None:
    assert [(b.a.x, b.b.x) for b in found("x - 1", 0.0, 2.0, budget=20)] == [(0.5, 1.0)]
    assert [(b.a.x, b.b.x) for b in found("x - 1", 1.0, 2.0, budget=20)] == [(1.0, 1.25)]
    assert [(b.a.x, b.b.x) for b in found("x - 1", 0.0, 1.0, budget=20)] == [(0.75, 1.0)]


def test_a_run_of_zeros_counts_once() -> None:
    text = "piecewise(x < 0.4: x - 0.4; x > 0.6: x - 0.6; otherwise: 0)"
    assert len(found(text, 0.0, 1.0, budget=200)) == 1
    assert len(found(text, 0.5, 1.0, budget=200)) == 1
    assert found(text, 0.45, 0.55, budget=200) == ()


def test_cells_next_to_no_value_are_left_out() -> None:
    """ln has none below zero; its root is found all the same."""
    (crossing,) = found("ln(x)", -3.0, 3.0)
    assert crossing.a.x < 1 < crossing.b.x


@pytest.mark.parametrize("side", [1, -1])
def test_decades_are_scanned_evenly(side: int) -> None:
    """Roots at 1e-6 and 1e-3 in a range of nine decades, on either side of zero."""
    text = f"(x - {side}e-6)*(x - {side}e-3)"
    low, high = sorted((side * 1e-9, side * 1.0))
    brackets = found(text, low, high)
    assert [bracket.kind for bracket in brackets] == ["crossing", "crossing"]
    places = sorted((side * 1e-6, side * 1e-3))
    assert all(b.a.x <= place <= b.b.x for b, place in zip(brackets, places, strict=True))


def test_the_ends_of_the_numbers() -> None:
    (crossing,) = found("piecewise(x > 3: 1; otherwise: -1)", -1.7e308, 1.7e308)
    assert crossing.a.x <= 3 <= crossing.b.x
    assert len(found("piecewise(x > 3: 1; otherwise: -1)", 5e-324, 1.7e308)) == 1
    assert len(found("piecewise(x > 3: 1; otherwise: -1)", -1.7e308, 1.7e308, budget=9)) == 1


@pytest.mark.parametrize("budget", [0, 1, 5, 9])
def test_a_budget_of_next_to_nothing(budget: int) -> None:
    meter = meter_of(TAN)
    find_brackets(meter, 3.0, 3.3, budget)
    assert meter.spent(Purpose.PROBE).f <= max(2, budget)


@pytest.mark.parametrize("after", [0, 150, 405, 500])
def test_what_was_found_before_a_stop_is_returned(after: int) -> None:
    calls = 0

    def stop() -> bool:
        nonlocal calls
        calls += 1
        return calls > after

    whole, cut = found(TAN, 0.5, 20.0), find_brackets(meter_of(TAN, stop=stop), 0.5, 20.0)
    assert cut == whole[: len(cut)]
    assert len(cut) < len(whole)


@pytest.mark.parametrize("kind", ["binary32", "multiprecision:40"])
def test_in_every_arithmetic(kind: str) -> None:
    meter = meter_of(TAN, kind)
    low, high = (meter.function.arithmetic.literal(text, False) for text in ("0.5", "20"))
    brackets = find_brackets(meter, low, high)
    assert [bracket.kind for bracket in brackets] == ["pole", "crossing"] * 6
    assert {type(bracket.a.x) for bracket in brackets} == {type(low)}
