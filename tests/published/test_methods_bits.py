"""Iterates equal to the bit to plain loops in Python's floats, one loop a method, on every published problem.

The loops below and the functions they call know nothing of the package: `support.plain` lets Python evaluate the text.
The problems and starts are those of data/published.json, with their sources.
"""

from __future__ import annotations

from collections.abc import Callable
from itertools import product

import pytest

from support.plain import Formula, residual_of
from support.published import (
    DIFFERENTIABLE,
    FAILURES,
    PUBLISHED,
    WITHOUT_DERIVATIVE,
    brackets,
    derivative,
    problem,
    residual,
)
from support.runs import Walk, problem_of, run
from surefoot.equation.checking import check_problem
from surefoot.equation.derivatives import NoDerivative, derive
from surefoot.errors import PlanError
from surefoot.methods.plan import Plan, Stop

TOLERANCE = 1e-13
STOP = Stop(x_absolute="1e-13", x_relative="1e-13")
MAX_STEPS = 60
_NO_VALUE = (ValueError, OverflowError, ZeroDivisionError, TypeError)

F = Callable[[float], float]
Trace = tuple[list[float], list[float], str]  # x_k, f_k, how it ended


def plain_loop(starts: tuple[float, ...], f: F, rule: Callable[[list[float], list[float]], float | None]) -> Trace:
    """The loop that every host code has around its rule: |dx| <= tol or |dx| <= tol*|x|, f = 0, a cap."""
    xs: list[float] = []
    fs: list[float] = []
    for x in starts:
        xs.append(x)
        try:
            fs.append(f(x))
        except _NO_VALUE:
            return xs, fs, "failed_evaluation"
        if fs[-1] == 0.0:
            return xs, fs, "converged"
    for _ in range(MAX_STEPS):
        try:
            x = rule(xs, fs)
        except _NO_VALUE:
            return xs, fs, "failed_evaluation"
        if x is None:
            return xs, fs, "broke_down"
        xs.append(x)
        try:
            fs.append(f(x))
        except _NO_VALUE:
            return xs, fs, "failed_evaluation"
        dx = abs(x - xs[-2])
        if fs[-1] == 0.0 or dx <= TOLERANCE or dx <= TOLERANCE * abs(x):
            return xs, fs, "converged"
    return xs, fs, "step_limit"


def plain_newton(f: F, d: F, x0: float) -> Trace:
    def rule(xs: list[float], fs: list[float]) -> float | None:
        slope = d(xs[-1])
        return None if slope == 0.0 else xs[-1] - fs[-1] / slope

    return plain_loop((x0,), f, rule)


def plain_difference(f: F, x0: float, h: float, relative: bool, central: bool) -> Trace:
    def rule(xs: list[float], fs: list[float]) -> float | None:
        x = xs[-1]
        step = h * abs(x) if relative else h
        if step == 0.0:
            return None
        if central:
            left = f(x - step)
            slope = (f(x + step) - left) / (2 * step)
        else:
            slope = (f(x + step) - fs[-1]) / step
        return None if slope == 0.0 else x - fs[-1] / slope

    return plain_loop((x0,), f, rule)


def plain_secant(f: F, x0: float, x1: float, form: str) -> Trace:
    def rule(xs: list[float], fs: list[float]) -> float | None:
        (x0, x1), (f0, f1) = xs[-2:], fs[-2:]
        if f1 == f0 or x1 == x0:
            return None
        if form == "product":
            return x1 - f1 * (x1 - x0) / (f1 - f0)
        if form == "ratio":
            return x1 - f1 / (f1 - f0) * (x1 - x0)
        if form == "slope":
            return x1 - f1 / ((f1 - f0) / (x1 - x0))
        return (x0 * f1 - x1 * f0) / (f1 - f0)

    return plain_loop((x0, x1), f, rule)


def plain_bisection(f: F, a: float, b: float, midpoint: str) -> Trace:
    ends = [a, b]
    values: list[float] = []

    def rule(xs: list[float], fs: list[float]) -> float | None:
        if not values:
            values.extend(fs)
            if (values[0] > 0) == (values[1] > 0):
                return None
        else:
            side = 0 if (fs[-1] > 0) == (values[0] > 0) else 1
            ends[side], values[side] = xs[-1], fs[-1]
        a, b = ends
        return (a + b) / 2 if midpoint == "halfsum" else a + (b - a) / 2

    return plain_loop((a, b), f, rule)


def plain_substitution(f: F, g: F, x0: float) -> Trace:
    return plain_loop((x0,), f, lambda xs, fs: g(xs[-1]))


def assert_same(trace: Trace, walked: Walk) -> None:
    """The same iterates and residuals to the bit, and the same way to end."""
    xs, fs, how = trace
    assert [x.hex() for x in walked.x] == [x.hex() for x in xs]
    assert [it.f.hex() for it in walked.iterates if isinstance(it.f, float)] == [f.hex() for f in fs]
    assert walked.outcome == how or (how == "step_limit" and walked.outcome == "no_progress")


def plan(method: str, *starts: float, **settings: str) -> Plan:
    return Plan(method, tuple(map(repr, starts)), MAX_STEPS, tuple(settings.items()), stop=STOP)


def starts_of(code: str) -> list[float]:
    return [float(start) for start in PUBLISHED[code]["starts"]]


every_problem = pytest.mark.parametrize("code", PUBLISHED)


@pytest.mark.parametrize("code", DIFFERENTIABLE)
def test_newton_raphson(code: str) -> None:
    f, d = residual(code).plain(), derivative(code).plain()
    for x0 in starts_of(code):
        assert_same(plain_newton(f, d, x0), run(plan("newton-raphson", x0), problem(code)))


@pytest.mark.parametrize("code", WITHOUT_DERIVATIVE)
def test_what_newton_raphson_cannot_take(code: str) -> None:
    with pytest.raises(NoDerivative, match="the derivative of an Airy function is not in the language"):
        derive(check_problem(problem(code)), 1)
    with pytest.raises(PlanError, match="newton-raphson needs derivative 1 of the equation, and none is recorded"):
        run(plan("newton-raphson", 1.0), problem(code), ())


@every_problem
@pytest.mark.parametrize(("h", "h_mode"), [("1e-6", "relative"), ("1e-5", "absolute")])
def test_finite_difference_newton(code: str, h: str, h_mode: str) -> None:
    f = residual(code).plain()
    for x0, scheme in product(starts_of(code), ("forward", "central")):
        trace = plain_difference(f, x0, float(h), h_mode == "relative", scheme == "central")
        assert_same(trace, run(plan("finite-difference-newton", x0, h=h, h_mode=h_mode, scheme=scheme), problem(code)))


@every_problem
@pytest.mark.parametrize("form", ["product", "slope", "symmetric", "ratio"])
def test_secant(code: str, form: str) -> None:
    f = residual(code).plain()
    for x0 in starts_of(code):
        assert_same(plain_secant(f, x0, 1.01 * x0, form), run(plan("secant", x0, 1.01 * x0, form=form), problem(code)))


@every_problem
@pytest.mark.parametrize("midpoint", ["halfsum", "offset"])
def test_bisection(code: str, midpoint: str) -> None:
    f = residual(code).plain()
    for a, b, _ in brackets(code):
        for ends in ((a, b), (b, a)):
            walked = run(plan("bisection", *ends, midpoint=midpoint), problem(code))
            assert_same(plain_bisection(f, *ends, midpoint), walked)


@every_problem
def test_fixed_point(code: str) -> None:
    """g(x) = x - f(x)/c with c the chord's slope near a root, a rearrangement that contracts there."""
    formula = residual(code)
    f = formula.plain()
    for start in (0.98, 1.01):
        x0 = float(PUBLISHED[code]["roots"][0]["value"]) * start
        slope = (f(x0 * 1.0009765625) - f(x0)) / (x0 * 0.0009765625)
        text = f"{formula.unknown} - ({formula.text})/({slope!r})"
        g = Formula(text, formula.unknown, formula.inputs).plain()
        assert_same(plain_substitution(f, g, x0), run(plan("fixed-point", x0, g=text), problem(code)))


@pytest.mark.parametrize("code", [code for code, row in FAILURES.items() if row["iteration_function"]])
def test_fixed_point_as_host_codes_have_it(code: str) -> None:
    row = FAILURES[code]
    formula = residual_of(row)
    g = Formula(row["iteration_function"], formula.unknown, formula.inputs).plain()
    x0 = float(row["starts"][0])
    walked = run(plan("fixed-point", x0, g=row["iteration_function"]), problem_of(row))
    assert_same(plain_substitution(formula.plain(), g, x0), walked)
