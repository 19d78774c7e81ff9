"""Each step of a run beside the same step in 200 bits from the same iterates: within a bound that is computed.

The bound is first-order running error analysis (N. J. Higham, Accuracy and Stability of Numerical Algorithms, 2002,
section 3.3): E bounds the error of f, or of a slope, in binary64 (`support.plain.Rounded`), u = 2^-53. A quotient a/b
with errors Ea, Eb is off by at most (Ea + |a/b| Eb)/(|b| - Eb), each further operation by u of its result. A step
whose slope is known to less than one digit (Eb >= |b|/10) has no such bound and is left out.
"""

from __future__ import annotations

from typing import Any

import mpmath
import pytest

from support.plain import MP, UNIT, Rounded
from support.published import DIFFERENTIABLE, PUBLISHED, brackets, derivative, problem, residual
from support.runs import Walk, run
from surefoot.methods.contract import Iterate
from surefoot.methods.plan import Plan, Stop

SECOND_ORDER = 1.01  # what first-order analysis leaves out
STOP = Stop(x_absolute="1e-12", x_relative="1e-12")


def quotient_bound(a: Any, ea: Any, b: Any, eb: Any) -> Any:
    return (ea + abs(a / b) * eb) / (abs(b) - eb)


def known(slope: Any, error: Any) -> bool:
    return bool(error < abs(slope) / 10)


def assert_within(x: float, exact: Any, bound: Any) -> None:
    assert abs(MP.mpf(x) - exact) <= SECOND_ORDER * bound


def walked(method: str, code: str, *starts: float, **settings: str) -> Walk:
    plan = Plan(method, tuple(map(repr, starts)), 40, tuple(settings.items()), stop=STOP)
    return run(plan, problem(code))


def steps(walk: Walk, back: int) -> list[tuple[Iterate, ...]]:
    """The iterates each step rests on, and the one it gave."""
    return [walk.iterates[at - back : at + 1] for at in range(back, len(walk.iterates))]


@pytest.mark.parametrize("code", DIFFERENTIABLE)
def test_newton_raphson(code: str) -> None:
    f, d = residual(code).rounded(), derivative(code).rounded()
    checked = 0
    for start in PUBLISHED[code]["starts"]:
        for here, there in steps(walked("newton-raphson", code, float(start)), 1):
            value, slope = f(here.x), d(here.x)
            if known(slope.value, slope.error):
                step = value.value / slope.value
                bound = quotient_bound(value.value, value.error, slope.value, slope.error) + UNIT * abs(step)
                assert_within(there.x, MP.mpf(here.x) - step, bound + UNIT * abs(there.x))
                checked += 1
    assert checked


@pytest.mark.parametrize("code", DIFFERENTIABLE)
def test_the_derivative_is_that_of_the_residual(code: str) -> None:
    """The recorded text against numerical differentiation of the equation in 200 bits, to 30 digits, at each start."""
    f, d = residual(code).decimal(), derivative(code).decimal()
    for start in PUBLISHED[code]["starts"]:
        x = MP.mpf(float(start))
        try:
            slope = d(x)
        except ValueError:
            assert "piecewise" in derivative(code).text
            continue
        assert abs(slope - MP.diff(f, x)) <= MP.mpf(10) ** -30 * max(abs(slope), 1)


@pytest.mark.parametrize("code", PUBLISHED)
@pytest.mark.parametrize("scheme", ["forward", "central"])
def test_finite_difference_newton(code: str, scheme: str) -> None:
    """Binary64 rounds x + h, 200 bits do not: that moves f by |D| u |x + h|, and 1.5 times that with curvature."""
    f, h = residual(code).rounded(), MP.mpf(1e-6)
    checked = 0
    walk = walked("finite-difference-newton", code, float(PUBLISHED[code]["starts"][0]), h="1e-6", scheme=scheme)
    for here, there in steps(walk, 1):
        x, value = MP.mpf(here.x), f(here.x)
        right, left = at(f, x + h), value if scheme == "forward" else at(f, x - h)
        width = h if scheme == "forward" else 2 * h
        rise = right.value - left.value
        slope = rise / width
        moved = 3 * abs(slope) * UNIT * (abs(x) + h)
        error = (right.error + left.error + moved + UNIT * abs(rise)) / width + UNIT * abs(slope)
        if known(slope, error):
            step = value.value / slope
            bound = quotient_bound(value.value, value.error, slope, error) + UNIT * abs(step)
            assert_within(there.x, x - step, bound + UNIT * abs(there.x))
            checked += 1
    assert checked


def at(f: Any, x: Any) -> Rounded:
    """f at a 200-bit argument."""
    value = f(x)
    assert isinstance(value, Rounded)
    return value


@pytest.mark.parametrize("code", PUBLISHED)
@pytest.mark.parametrize("form", ["product", "slope", "ratio", "symmetric"])
def test_secant(code: str, form: str) -> None:
    f = residual(code).rounded()
    start = float(PUBLISHED[code]["starts"][0])
    checked = 0
    for older, newer, there in steps(walked("secant", code, start, 1.01 * start, form=form), 2):
        (x0, f0), (x1, f1) = ((MP.mpf(it.x), f(it.x)) for it in (older, newer))
        rise = f1.value - f0.value
        rise_error = f0.error + f1.error + UNIT * abs(rise)
        if not known(rise, rise_error):
            continue
        exact = x1 - f1.value * (x1 - x0) / rise
        if form == "symmetric":
            top = x0 * f1.value - x1 * f0.value
            top_error = abs(x0) * f1.error + abs(x1) * f0.error
            top_error += UNIT * (abs(x0 * f1.value) + abs(x1 * f0.value) + abs(top))
            bound = quotient_bound(top, top_error, rise, rise_error) + UNIT * abs(there.x)
        else:
            top = f1.value * (x1 - x0)
            top_error = f1.error * abs(x1 - x0) + 2 * UNIT * abs(top)
            bound = quotient_bound(top, top_error, rise, rise_error) + 2 * UNIT * abs(top / rise)
            bound += UNIT * abs(there.x)
        assert_within(there.x, exact, bound)
        checked += 1
    assert checked


@pytest.mark.parametrize("code", PUBLISHED)
def test_bisection(code: str) -> None:
    """halfsum: the sum is rounded, halving is exact. offset: the difference and the sum are."""
    a, b, _ = brackets(code)[0]
    for midpoint in ("halfsum", "offset"):
        walk = walked("bisection", code, a, b, midpoint=midpoint)
        for iterate in walk.iterates[2:]:
            assert iterate.account is not None
            ends = [MP.mpf(point.x) for point in iterate.account.points]
            bound = UNIT * abs(iterate.x)
            if midpoint == "offset":
                bound += UNIT * abs(ends[1] - ends[0]) / 2
            assert_within(iterate.x, (ends[0] + ends[1]) / 2, bound)


@pytest.mark.parametrize("code", PUBLISHED)
def test_fixed_point(code: str) -> None:
    """g is rounded as its text says: g(x) = x - f(x)/c, with the chord's slope c near a root."""
    formula = residual(code)
    f = formula.plain()
    x0 = float(PUBLISHED[code]["roots"][0]["value"]) * 1.01
    slope = (f(x0 * 1.0009765625) - f(x0)) / (x0 * 0.0009765625)
    text = f"{formula.unknown} - ({formula.text})/({slope!r})"
    g = type(formula)(text, formula.unknown, formula.inputs).rounded()
    for here, there in steps(walked("fixed-point", code, x0, g=text), 1):
        value = g(here.x)
        assert_within(there.x, value.value, value.error)


def test_the_reference_has_200_bits() -> None:
    assert MP.prec == 200
    assert mpmath.mp.prec == 53
