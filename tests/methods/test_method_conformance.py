"""What every registered method owes the frame, whatever its rule; a new row of the table is taken by itself."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.runs import run
from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.problem import Input, Problem
from surefoot.equation.results import EvaluationFailed, Failure, FailureKind
from surefoot.methods.contract import Breakdown, Method, Point, Proposal
from surefoot.methods.plan import Plan, Stop
from surefoot.methods.rounding import sign
from surefoot.methods.settings import read_settings
from surefoot.methods.states import decode_state, encode_state
from surefoot.methods.table import METHODS

BINARY64 = arithmetic_of("binary64")
REQUIRED = {"h": "1e-6", "g": "cos(x)"}
"""A value for each setting that some method cannot do without."""

MIDDLE_FIRST = ("safeguarded-newton",)
"""Methods whose first step is the middle of the bracket and takes no derivative."""
CYCLES = {"illinois": 3, "anderson-bjorck": 3, "ridders": 2}
"""Steps after which the error falls as before, where that is not at every step: the order is that of a cycle."""

every_method = pytest.mark.parametrize("code", METHODS)


@dataclass
class Counting:
    """Functions made of plain ones, which count their calls and name what fails."""

    value: Callable[[float], float]
    slope: Callable[[float], float] = lambda x: 1.0
    image: Callable[[float], float] = math.cos
    calls: list[str] = field(default_factory=list)
    arithmetic: Arithmetic = BINARY64

    def f(self, x: float) -> float:
        return self._called("f", self.value, x)

    def derivative(self, x: float, order: int = 1) -> float:
        return self._called("derivative", self.slope, x)

    def g(self, x: float) -> float:
        return self._called("g", self.image, x)

    def _called(self, what: str, function: Callable[[float], float], x: float) -> float:
        self.calls.append(what)
        try:
            return function(x)
        except ValueError:
            raise EvaluationFailed(Failure(FailureKind.DOMAIN, what, (repr(x),))) from None


def settings_of(method: Method) -> Any:
    taken = tuple((key, text) for key, text in REQUIRED.items() if key in {setting.key for setting in method.settings})
    return read_settings(method, Plan(method.traits.code, (), settings=taken), BINARY64)


def starts_of(method: Method, f: Callable[[float], float]) -> tuple[Point, ...]:
    return tuple(Point(x, f(x)) for x in (0.25, 1.75)[: method.traits.starts])


def kepler(x: float) -> float:
    return x - 0.5 * math.sin(x) - 0.7


def kepler_slope(x: float) -> float:
    return 1.0 - 0.5 * math.cos(x)


def walk_rule(method: Method, functions: Counting, steps: int) -> list[tuple[Any, Proposal, Point]]:
    """States with the proposal made from each and the point taken, by the rule alone."""
    settings, trail = settings_of(method), []
    state = method.begin(starts_of(method, kepler), settings, functions)
    for _ in range(steps):
        proposal = method.propose(state, settings, functions)
        if isinstance(proposal, Breakdown):
            break
        point = Point(proposal.x, kepler(proposal.x))
        trail.append((state, proposal, point))
        state = method.accept(state, proposal, point)
    return trail


@every_method
def test_traits_are_whole(code: str) -> None:
    traits = METHODS[code].traits
    assert traits.code == code
    assert all((traits.title, traits.idea, traits.source))
    assert traits.revision >= 1
    assert 1 <= traits.starts <= 3
    assert traits.starts == 2 or not traits.bracket
    assert (traits.derivatives > 0) == (traits.evaluations[1] > 0)
    assert traits.evaluations[0] >= 1
    keys = [setting.key for setting in METHODS[code].settings]
    assert len(set(keys)) == len(keys)
    for setting in METHODS[code].settings:
        assert (setting.kind == "choice") == bool(setting.choices)
        assert setting.default is None or not setting.choices or setting.default in setting.choices


@every_method
def test_the_module_says_what_a_method_must(code: str) -> None:
    import sys

    text = sys.modules[type(METHODS[code]).__module__].__doc__ or ""
    for heading in ("Idea:", "Update rule", "Needs:", "Costs:", "Breaks down when:", "Good at:", "Bad at:", "Source:"):
        assert heading in text


@every_method
def test_the_state_is_a_small_frozen_dataclass(code: str) -> None:
    state_type = METHODS[code].state_type
    assert dataclasses.is_dataclass(state_type)
    assert state_type.__dataclass_params__.frozen  # type: ignore[attr-defined]
    assert "__slots__" in vars(state_type)
    if METHODS[code].traits.bracket:  # the width of a bracket is read from its ends
        assert {"a", "b"} <= {each.name for each in dataclasses.fields(state_type)}


@every_method
def test_the_same_input_gives_the_same_output(code: str) -> None:
    method = METHODS[code]
    first = walk_rule(method, Counting(kepler, kepler_slope), 6)
    again = walk_rule(method, Counting(kepler, kepler_slope), 6)
    assert repr(first) == repr(again)
    settings = settings_of(method)
    for state, proposal, point in first:
        before = repr(state)
        assert repr(method.propose(state, settings, Counting(kepler, kepler_slope))) == repr(proposal)
        method.accept(state, proposal, point)
        assert repr(state) == before


@every_method
def test_states_on_the_way_survive_the_record(code: str) -> None:
    method = METHODS[code]
    for state, _, _ in walk_rule(method, Counting(kepler, kepler_slope), 12):
        assert repr(decode_state(method, encode_state(state, BINARY64), BINARY64)) == repr(state)


@every_method
def test_a_step_evaluates_what_the_traits_declare(code: str) -> None:
    """f at the iterate taken is the stepper's; the rest is the rule's."""
    method = METHODS[code]
    functions = Counting(kepler, kepler_slope)
    method.begin(starts_of(method, kepler), settings_of(method), functions)
    assert functions.calls == []
    trail = walk_rule(method, functions, 3)
    counts = tuple(functions.calls.count(what) for what in ("f", "derivative", "g"))
    f, derivative, g = method.traits.evaluations
    without = derivative if code in MIDDLE_FIRST else 0
    assert counts == ((f - 1) * len(trail), derivative * len(trail) - without, g * len(trail))


@every_method
def test_a_run_is_charged_what_the_traits_declare(code: str) -> None:
    method = METHODS[code]
    problem = Problem("x", "x - 0.5*sin(x) = 0.7", inputs=(Input("unused", "1"),))
    settings = tuple((s.key, REQUIRED[s.key]) for s in method.settings if s.key in REQUIRED)
    walk = run(Plan(code, ("0.25", "1.75")[: method.traits.starts], 3, settings, stop=Stop()), problem)
    spent = walk.spent
    f, derivative, g = method.traits.evaluations
    without = derivative if code in MIDDLE_FIRST else 0
    assert (spent.f, spent.derivative, spent.g) == (method.traits.starts + 3 * f, 3 * derivative - without, 3 * g)
    assert [piece.spent.f for piece in walk.pieces] == [f] * 3


@every_method
def test_the_account_names_its_shape_and_points(code: str) -> None:
    for _, proposal, _ in walk_rule(METHODS[code], Counting(kepler, kepler_slope), 4):
        account = proposal.account
        assert account.shape in ("tangent", "chord", "bracket", "cobweb", "parabola")
        assert all(point.f == kepler(point.x) for point in account.points)
        if account.shape in ("tangent", "chord"):  # the line of this slope through the first point meets zero at x
            base = account.points[0]
            assert account.slope is not None
            assert base.x - base.f / account.slope == pytest.approx(proposal.x, rel=1e-9)
        if account.step is not None:
            assert account.points[-1 if code == "secant" else 0].x + account.step == proposal.x


@every_method
def test_the_measured_order_is_the_declared_one(code: str) -> None:
    """ln(e(k+1)/e(k))/ln(e(k)/e(k-1)) in 200 digits; the linear ones by an error that falls as evenly."""
    method = METHODS[code]
    if method.traits.order is None:
        assert method.traits.bracket
        return
    settings = tuple(
        (s.key, {"h": "1e-3", "g": "0.7 + 0.5*sin(x)"}[s.key]) for s in method.settings if s.key in REQUIRED
    )
    plan = Plan(
        code, ("1.1", "1.2")[: method.traits.starts], 11, settings, stop=Stop(), arithmetic="multiprecision:1000"
    )
    problem = Problem("x", "x - 0.5*sin(x) = 0.7")
    walk = run(plan, problem, limit=8 if method.traits.order >= 2 else 11)
    precise = run(
        Plan("newton-raphson", ("1.1",), 14, stop=Stop(), arithmetic="multiprecision:1000"), problem, limit=14
    )
    cycle = CYCLES.get(code, 1)
    errors = [abs(x - precise.x[-1]) for x in walk.x][-1 - 2 * cycle :: cycle]
    ln = arithmetic_of("multiprecision:1000").functions["ln"]
    measured = ln(errors[2] / errors[1]) / ln(errors[1] / errors[0])
    assert float(measured) ** (1 / cycle) == pytest.approx(method.traits.order, abs=0.03)


@pytest.mark.parametrize("code", [code for code, method in METHODS.items() if method.traits.bracket])
@given(data=st.data())
def test_a_bracket_never_widens_and_keeps_its_sign_change(code: str, data: st.DataObject) -> None:
    """Whatever point inside was taken in the place of the one proposed; a point outside leaves it as it is.

    Points that the rule evaluated on its way cut the bracket too, and may cut off the point taken.
    """
    method = METHODS[code]
    settings = settings_of(method)
    functions = Counting(kepler, kepler_slope)
    state = method.begin(starts_of(method, kepler), settings, functions)
    for _ in range(data.draw(st.integers(1, 12))):
        proposal = method.propose(state, settings, functions)
        assert isinstance(proposal, Proposal)
        low, high = sorted((state.a.x, state.b.x))
        assert low <= proposal.x <= high
        x = data.draw(st.one_of(st.just(proposal.x), st.floats(low, high), st.floats(-10.0, 10.0)))
        state = method.accept(state, proposal, Point(x, kepler(x)))
        assert low <= min(state.a.x, state.b.x) <= max(state.a.x, state.b.x) <= high
        assert sign(state.a.f) != sign(state.b.f)
        inner = {point.x for point in proposal.account.points} - {low, high} if method.traits.evaluations[0] > 1 else ()
        if any(point in (state.a.x, state.b.x) for point in inner):
            assert state.b.x - state.a.x < high - low
        elif not low <= x <= high:
            assert sorted((state.a.x, state.b.x)) == [low, high]
        else:
            assert x in (state.a.x, state.b.x)


@every_method
def test_equal_values_and_zero_slopes_break_down_with_figures(code: str) -> None:
    """f constant, its derivative zero: a step is either proposed or refused in words, never an exception."""
    method, settings = METHODS[code], settings_of(METHODS[code])
    functions = Counting(lambda x: 3.0, lambda x: 0.0)
    state = method.begin(starts_of(method, lambda x: 3.0), settings, functions)
    proposal = state if isinstance(state, Breakdown) else method.propose(state, settings, functions)
    if code == "fixed-point":
        assert isinstance(proposal, Proposal)
        return
    assert isinstance(proposal, Breakdown)
    assert "3.0" in proposal.reason
    assert proposal.account is not None
    assert proposal.account.points[0] == Point(0.25, 3.0)


@every_method
@pytest.mark.parametrize(("x0", "x1"), [(-1.7e308, 1.7e308), (1e-320, 1e308), (0.25, math.nextafter(0.25, 1))])
@pytest.mark.parametrize("scale", [1e308, 1e-308, 5e-324])
def test_huge_and_tiny_figures_break_down_or_stay_finite(code: str, x0: float, x1: float, scale: float) -> None:
    method, settings = METHODS[code], settings_of(METHODS[code])

    def f(x: float) -> float:
        return scale if x > x0 else -scale

    functions = Counting(f, lambda x: 1e-300)
    starts = tuple(Point(x, f(x)) for x in (x0, x1)[: method.traits.starts])
    state = method.begin(starts, settings, functions)
    proposal = state if isinstance(state, Breakdown) else method.propose(state, settings, functions)
    if isinstance(proposal, Proposal):
        assert math.isfinite(proposal.x)
    else:
        assert proposal.reason


@every_method
def test_a_value_that_there_is_not_is_carried_past_the_rule(code: str) -> None:
    """Only EvaluationFailed leaves a rule, and only from a function that it called."""

    def fails(x: float) -> float:
        raise ValueError

    method, settings = METHODS[code], settings_of(METHODS[code])
    functions = Counting(fails, fails, fails)
    state = method.begin(starts_of(method, kepler), settings, functions)
    if code in MIDDLE_FIRST:
        middle = method.propose(state, settings, functions)
        assert isinstance(middle, Proposal)
        state = method.accept(state, middle, Point(middle.x, kepler(middle.x)))
    if method.traits.evaluations == (1, 0, 0):
        assert isinstance(method.propose(state, settings, functions), Proposal)
    else:
        with pytest.raises(EvaluationFailed):
            method.propose(state, settings, functions)


@every_method
@pytest.mark.parametrize("kind", ["binary32", "multiprecision:40"])
def test_every_arithmetic_comes_to_the_root(code: str, kind: str) -> None:
    method, problem = METHODS[code], Problem("x", "x - 0.5*sin(x) = 0.7")
    given_settings = {"h": "1e-3", "g": "0.7 + 0.5*sin(x)"}
    settings = tuple((s.key, given_settings[s.key]) for s in method.settings if s.key in given_settings)
    starts = ("0.25", "1.75")[: method.traits.starts]
    walk = run(Plan(code, starts, 100, settings, stop=Stop(x_relative="1e-6"), arithmetic=kind), problem)
    assert walk.outcome == "converged"
    assert kepler(float(walk.x[-1])) == pytest.approx(0.0, abs=2e-6)
    numbers = arithmetic_of(kind)
    assert [numbers.encode(numbers.decode(numbers.encode(x))) for x in walk.x] == [numbers.encode(x) for x in walk.x]
    assert {type(x) for x in walk.x} == {type(walk.x[0])}
