"""Bracketing methods equal to the bit to plain loops in Python's floats, on every published problem with a bracket.

The loops (`support.plain_brackets`) and the functions they call know nothing of the package; problems and brackets are
those of data/published.json and data/aps.json, with their sources.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from itertools import islice

import pytest

from support import plain_brackets as plain
from support.aps import APS, aps_bracket, aps_problem, aps_residual
from support.published import DIFFERENTIABLE, PUBLISHED, brackets, derivative, problem, residual
from support.runs import Walk, run
from surefoot.methods.plan import Plan, Stop

STEPS = 60
_NO_VALUE = (ValueError, OverflowError, ZeroDivisionError, TypeError)

PROBLEMS = [(code, index) for code in PUBLISHED for index in range(len(brackets(code)))]
every_bracket = pytest.mark.parametrize(("code", "index"), PROBLEMS)
FORMS = ("symmetric", "product", "ratio", "slope")
Loop = Callable[[plain.F, float, float], Iterator[float]]


def walked(method: str, code: str, a: float, b: float, **settings: str) -> Walk:
    plan = Plan(method, (repr(a), repr(b)), STEPS, tuple(settings.items()), stop=Stop())
    return run(plan, aps_problem(code) if code in APS else problem(code))


def assert_same(xs: Iterator[float], walk: Walk, least: int = 3) -> None:
    """The same iterates to the bit, at least so many, up to where the published algorithm ends; ours may then go on.

    Where rounding carries the loop out of its bracket, ours is held in it, and the loop is not followed any further.
    """
    same = 0
    for x, iterate, state in zip(islice(xs, STEPS), walk.iterates[2:], walk.states, strict=False):
        low, high = sorted((state.a.x, state.b.x))
        if low <= x <= high:
            assert iterate.x.hex() == x.hex()
            same += 1
        else:
            assert iterate.x in (low, high)
            assert abs(x - iterate.x) <= 2 * math.ulp(max(abs(low), abs(high)))
            break
    assert same >= least or (walk.outcome == "converged" and same == len(walk.iterates) - 2)
    assert walk.outcome in ("converged", "no_progress", "step_limit", "broke_down")


def assert_same_both_ways(method: str, code: str, index: int, loop: Loop, **settings: str) -> None:
    a, b, _ = brackets(code)[index]
    f = residual(code).plain()
    for ends in ((a, b), (b, a)):
        assert_same(loop(f, *ends), walked(method, code, *ends, **settings))


@every_bracket
@pytest.mark.parametrize("form", FORMS)
def test_false_position(code: str, index: int, form: str) -> None:
    for method, loop in (
        ("regula-falsi", plain.regula_falsi),
        ("illinois", plain.illinois),
        ("anderson-bjorck", plain.anderson_bjorck),
    ):
        assert_same_both_ways(method, code, index, lambda f, a, b, loop=loop: loop(f, a, b, form), form=form)


@every_bracket
@pytest.mark.parametrize("form", ["product", "quotient", "offset", "ratios"])
def test_ridders(code: str, index: int, form: str) -> None:
    assert_same_both_ways("ridders", code, index, lambda f, a, b: plain.ridders(f, a, b, form), form=form)


@every_bracket
@pytest.mark.parametrize("tolerance", ["0", "1e-9"])
def test_brent_dekker(code: str, index: int, tolerance: str) -> None:
    t = float(tolerance)
    assert_same_both_ways("brent-dekker", code, index, lambda f, a, b: plain.brent(f, a, b, t), tolerance=tolerance)


@every_bracket
@pytest.mark.parametrize("tolerance", ["0", "1e-9"])
def test_chandrupatla(code: str, index: int, tolerance: str) -> None:
    t = float(tolerance)
    loop: Loop = lambda f, a, b: plain.chandrupatla(f, a, b, t)  # noqa: E731
    assert_same_both_ways("chandrupatla", code, index, loop, tolerance=tolerance)


@every_bracket
@pytest.mark.parametrize("k", ["1", "2"])
@pytest.mark.parametrize("tolerance", ["0", "1e-9"])
def test_toms_748(code: str, index: int, k: str, tolerance: str) -> None:
    a, b, _ = brackets(code)[index]
    xs = plain.toms_748(residual(code).plain(), a, b, int(k), float(tolerance))
    assert_same(xs, walked("toms-748", code, a, b, k=k, tolerance=tolerance))


@every_bracket
def test_itp(code: str, index: int) -> None:
    a, b, _ = brackets(code)[index]
    f = residual(code).plain()
    epsilon = 1e-10 * max(abs(a), abs(b))
    assert_same(plain.itp(f, a, b, epsilon), walked("itp", code, a, b, tolerance=repr(epsilon)))
    others = {"kappa1": repr(0.2 / (b - a)), "kappa2": "1.5", "n0": "3"}
    xs = plain.itp(f, a, b, epsilon, 0.2 / (b - a), 1.5, 3)
    assert_same(xs, walked("itp", code, a, b, tolerance=repr(epsilon), **others))


@pytest.mark.parametrize(("code", "index"), [pair for pair in PROBLEMS if pair[0] in DIFFERENTIABLE])
def test_safeguarded_newton(code: str, index: int) -> None:
    d = derivative(code).plain()
    assert_same_both_ways(
        "safeguarded-newton", code, index, lambda f, a, b: plain.safeguarded_newton(f, d, a, b), first="middle"
    )


METHODS: dict[str, Loop] = {
    "illinois": lambda f, a, b: plain.illinois(f, a, b, "symmetric"),
    "anderson-bjorck": lambda f, a, b: plain.anderson_bjorck(f, a, b, "symmetric"),
    "ridders": lambda f, a, b: plain.ridders(f, a, b, "product"),
    "brent-dekker": plain.brent,
    "chandrupatla": plain.chandrupatla,
    "toms-748": lambda f, a, b: plain.toms_748(f, a, b, 2),
}


@pytest.mark.parametrize("code", APS)
def test_the_set_of_alefeld_potra_and_shi(code: str) -> None:
    a, b = aps_bracket(code)
    f = aps_residual(code).plain()
    for method, loop in METHODS.items():
        assert_same(loop(f, a, b), walked(method, code, a, b))
