"""Beside scipy: every point that its bracketing solvers evaluate, to the bit, where ours can be set to its forms.

scipy.optimize.brentq, brenth, ridder, toms748 and elementwise.find_root (Chandrupatla), on every published problem with
a bracket and on the set of Alefeld, Potra and Shi. The functions are Python's own; scipy's stop is made from states of
ours.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from typing import Any

import numpy as np
import pytest
import scipy.optimize
from scipy.optimize.elementwise import find_root

from support.aps import APS, aps_bracket, aps_problem, aps_residual
from support.published import PUBLISHED, brackets, problem, residual
from support.runs import Walk, run
from surefoot.methods.plan import Plan, Stop

EPS = 2.0**-52
CASES = [(code, index) for code in PUBLISHED for index in range(len(brackets(code)))] + [(code, 0) for code in APS]
every_case = pytest.mark.parametrize(("code", "index"), CASES)
tolerances = pytest.mark.parametrize(("xtol", "rtol"), [(2e-12, 4 * EPS), (1e-5, 1e-7)])


def case(code: str, index: int) -> tuple[Callable[[float], float], float, float]:
    if code in APS:
        return aps_residual(code).plain(), *aps_bracket(code)
    return residual(code).plain(), *brackets(code)[index][:2]


def walked(method: str, code: str, a: float, b: float, steps: int, **settings: str) -> Walk:
    plan = Plan(method, (repr(a), repr(b)), steps, tuple(settings.items()), stop=Stop())
    return run(plan, aps_problem(code) if code in APS else problem(code))


class Recording:
    """A function that keeps what it was asked."""

    def __init__(self, f: Callable[[float], float]) -> None:
        self.f = f
        self.xs: list[float] = []

    def __call__(self, x: float) -> float:
        self.xs.append(float(x))
        return self.f(float(x))


def hexadecimal(xs: Sequence[float]) -> list[str]:
    return [float(x).hex() for x in xs]


def evaluations_until(walk: Walk, stopped: Callable[[Any], bool], a_step: int = 1) -> int:
    """Evaluations of f up to the first state that fulfils scipy's test."""
    steps = next(count for count, state in enumerate(walk.states) if stopped(state))
    return 2 + a_step * steps


@every_case
@tolerances
@pytest.mark.parametrize(
    ("solver", "form"), [(scipy.optimize.brentq, "differences"), (scipy.optimize.brenth, "hyperbolic")]
)
def test_brentq_and_brenth(
    code: str, index: int, xtol: float, rtol: float, solver: Callable[..., Any], form: str
) -> None:
    f, a, b = case(code, index)
    theirs = Recording(f)
    root, info = solver(theirs, a, b, xtol=xtol, rtol=rtol, full_output=True, maxiter=1000)
    settings = {"interpolation": form, "tolerance": repr(xtol / 2), "relative_tolerance": repr(rtol / 2)}
    walk = walked("brent-dekker", code, a, b, max(1, info.function_calls - 2), **settings)
    assert hexadecimal(walk.x) == hexadecimal(theirs.xs)

    def stopped(state: Any) -> bool:
        return state.b.f == 0 or abs(state.a.x - state.b.x) / 2 < (xtol + rtol * abs(state.b.x)) / 2

    assert evaluations_until(walk, stopped) == info.function_calls
    assert walk.states[-1].b.x == root


@every_case
@tolerances
def test_the_published_interpolation_comes_to_the_root_of_brentq(
    code: str, index: int, xtol: float, rtol: float
) -> None:
    """Both within their tolerance of a change of sign: the same one, where there is one."""
    f, a, b = case(code, index)
    root = scipy.optimize.brentq(f, a, b, xtol=xtol, rtol=rtol, maxiter=1000)
    walk = walked("brent-dekker", code, a, b, 400, tolerance=repr(xtol / 2), relative_tolerance=repr(rtol / 2))
    ours = walk.states[-1].b
    assert abs(ours.x - root) <= xtol + rtol * abs(root) or ours.f == 0.0


@every_case
def test_ridder(code: str, index: int) -> None:
    """To the bit; where it keeps clear of an end by tol/2, to two spacings of the bracket.

    Its tol is xtol + rtol*x of the last iterate, with its sign; ours has one tolerance for the whole run.
    """
    f, a, b = case(code, index)
    theirs = Recording(f)
    xtol, rtol = 2e-12, 4 * EPS
    root, info = scipy.optimize.ridder(theirs, a, b, xtol=xtol, rtol=rtol, full_output=True, maxiter=1000)
    steps = max(1, (info.function_calls - 2) // 2)
    walk = walked("ridders", code, a, b, steps, form="offset", tolerance=repr(xtol + rtol * root))
    ours = list(walk.x[:2])
    for iterate in walk.iterates[2:]:
        assert iterate.account is not None
        ours += [iterate.account.points[2].x, iterate.x]
    assert len(ours) == len(theirs.xs)
    for mine, other in zip(ours, theirs.xs, strict=True):
        assert mine == other or abs(mine - other) <= 2 * math.ulp(max(abs(a), abs(b)))


ROUNDED_OUT = "aps-09-06"
"""Where x1 + t*(x2 - x1) falls out of the bracket by rounding, x2 being 10^4 times nearer to zero: ours stays in it."""


@every_case
def test_find_root(code: str, index: int) -> None:
    """Chandrupatla's algorithm in scipy works on arrays; here each holds one number."""
    f, a, b = case(code, index)
    theirs = Recording(f)
    tiny = float(np.finfo(float).smallest_normal)
    found = find_root(np.vectorize(theirs, otypes=[float]), (a, b))
    walk = walked("chandrupatla", code, a, b, max(1, int(found.nfev) - 2), tolerance=repr(2 * tiny))
    if code == ROUNDED_OUT:
        first = next(k for k, (mine, other) in enumerate(zip(walk.x, theirs.xs, strict=True)) if mine != other)
        ends = (walk.states[first - 2].a.x, walk.states[first - 2].b.x)
        assert theirs.xs[first] < min(ends) == walk.x[first]
        return
    assert hexadecimal(walk.x) == hexadecimal(theirs.xs)

    def stopped(state: Any) -> bool:
        best = state.a if abs(state.a.f) < abs(state.b.f) else state.b
        return abs(best.f) <= tiny or abs(state.a.x - state.b.x) < abs(best.x) * 4 * EPS + 4 * tiny

    assert evaluations_until(walk, stopped) == found.nfev


@every_case
@pytest.mark.parametrize("k", [1, 2])
def test_toms748(code: str, index: int, k: int) -> None:
    """Its program departs from the published one (which values differ, when to halve): the roots are compared."""
    f, a, b = case(code, index)
    xtol, rtol = 2e-12, 4 * EPS
    root = scipy.optimize.toms748(f, a, b, k=k, xtol=xtol, rtol=rtol, maxiter=1000)
    walk = walked("toms-748", code, a, b, 400, k=str(k))
    state = walk.states[-1]
    assert abs(root - state.a.x) <= 2 * (xtol + rtol * abs(root)) or f(root) == 0 or f(walk.x[-1]) == 0
