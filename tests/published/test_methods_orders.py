"""How fast the error falls, in 200 digits, against theory (J. F. Traub 1964, A. M. Ostrowski 1966; from memory).

Errors are taken against a root in 260 digits, made by mpmath from the text of the equation; the derivatives there too.
"""

from __future__ import annotations

from itertools import pairwise

import mpmath
import pytest

from support.orders import beside, decimal_residual, errors, every_smooth, local, precisely
from support.plain import MP
from support.published import problem, residual
from support.runs import run
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.problem import Problem
from surefoot.methods.measures import measures
from surefoot.methods.plan import Control, Plan, Stop

GOLDEN = (1 + 5**0.5) / 2


@every_smooth
def test_newton_raphson_is_quadratic_with_its_constant(code: str) -> None:
    """e(k+1)/e(k)^2 within 5 % of |f''/2f'|."""
    _, d1, d2 = local(code)
    with MP.workdps(260):
        found = errors(precisely("newton-raphson", code, beside(code, "1.001"), steps=9), code, "1e-6")
        assert len(found) >= 4
        for before, after in pairwise(found):
            assert abs(after / before**2 / abs(d2 / (2 * d1)) - 1) < 0.05


@every_smooth
@pytest.mark.parametrize("form", ["product", "slope", "symmetric", "ratio"])
def test_secant_has_the_order_of_the_golden_ratio(code: str, form: str) -> None:
    """ln(e(k+1)/e(k))/ln(e(k)/e(k-1)) within 0.02 of 1.618, and e(k+1)/(e(k) e(k-1)) within 5 % of |f''/2f'|."""
    _, d1, d2 = local(code)
    starts = beside(code, "1.001"), beside(code, "0.9995")
    with MP.workdps(260):
        *_, a, b, c, d = errors(precisely("secant", code, *starts, steps=13, form=form), code, "1e-6")
        assert abs(MP.log(d / c) / MP.log(c / b) - GOLDEN) < 0.02
        assert abs(MP.log(c / b) / MP.log(b / a) - GOLDEN) < 0.05
        assert abs(d / (c * b) / abs(d2 / (2 * d1)) - 1) < 0.05


@every_smooth
def test_a_fixed_forward_difference_makes_the_rate_linear(code: str) -> None:
    """e(k+1)/e(k) within 2 % of |f''|h/2|f'|, where h is a thousandth of the root."""
    root, d1, d2 = local(code)
    h = abs(root) / 1000
    with MP.workdps(260):
        step = str(mpmath.nstr(h, 30))
        walk = precisely("finite-difference-newton", code, beside(code, "1.001"), steps=14, h=step)
        found = errors(walk, code, "1e-9")
        assert len(found) >= 3
        for before, after in pairwise(found):
            assert abs(after / before / (abs(d2) * h / (2 * abs(d1))) - 1) < 0.02


@every_smooth
def test_a_fixed_central_difference_has_a_rate_of_the_third_derivative(code: str) -> None:
    """e(k+1)/e(k) within 2 % of |f'''|h^2/6|f'|."""
    root, d1, _ = local(code)
    h = abs(root) / 1000
    with MP.workdps(260):
        d3 = MP.diff(decimal_residual(code), root, 3)
        step = str(mpmath.nstr(h, 30))
        walk = precisely("finite-difference-newton", code, beside(code, "1.001"), steps=14, h=step, scheme="central")
        found = errors(walk, code, "1e-20")
        assert len(found) >= 3
        for before, after in pairwise(found):
            assert abs(after / before / (abs(d3) * h**2 / (6 * abs(d1))) - 1) < 0.02


@every_smooth
def test_a_frozen_slope_makes_the_rate_linear(code: str) -> None:
    """e(k+1)/e(k) within 1 % of |1 - f'(root)/D| for D held from the start on."""
    _, d1, _ = local(code)
    start = beside(code, "1.01")
    control = Control(derivative_every=1000)
    plan = Plan("newton-raphson", (start,), 20, control=control, stop=Stop(), arithmetic="multiprecision:200")
    with MP.workdps(260):
        walk = run(plan, problem(code), limit=20)
        held = MP.diff(decimal_residual(code), MP.mpf(start))
        found = errors(walk, code, "1e-6")
        assert len(found) >= 4
        for before, after in pairwise(found):
            assert abs(after / before / abs(1 - d1 / held) - 1) < 0.01
    assert walk.spent.derivative == 1


@every_smooth
def test_substitution_contracts_by_the_slope_of_g(code: str) -> None:
    """e(k+1)/e(k) within 1 % of |g'(root)|, for g(x) = x - f(x)/c with c 1.25 times the slope at the root: 1/5."""
    _, d1, _ = local(code)
    formula = residual(code)
    slope = mpmath.nstr(d1 * MP.mpf("1.25"), 30)
    with MP.workdps(260):
        text = f"{formula.unknown} - ({formula.text})/({slope})"
        found = errors(precisely("fixed-point", code, beside(code, "1.0001"), steps=30, g=text), code, "1e-7")
        assert len(found) >= 10
        for before, after in pairwise(found):
            assert abs(after / before * 5 - 1) < 0.01


@pytest.mark.parametrize("arithmetic", ["binary64", "binary32", "multiprecision:200"])
def test_bisection_halves_exactly(arithmetic: str) -> None:
    """From the bracket [1, 2], whose midpoints need one binary place more each."""
    plan = Plan("bisection", ("1", "2"), 20, stop=Stop(), arithmetic=arithmetic)
    walk = run(plan, Problem("x", "x^2 - x - 1"))
    measured = measures(walk.iterates, arithmetic_of(arithmetic))
    assert [measure.width_ratio for measure in measured] == [None] * 3 + [0.5] * 19
    assert abs(float(walk.x[-1]) - GOLDEN) <= 2.0**-20


@every_smooth
def test_the_observed_order_is_the_one_of_theory(code: str) -> None:
    """The measure from steps alone, as it is shown, in 200 digits: 2 and 1.618 within 0.05."""
    numbers = arithmetic_of("multiprecision:200")
    newton = precisely("newton-raphson", code, beside(code, "1.001"), steps=7)
    secant = precisely("secant", code, beside(code, "1.001"), beside(code, "0.9995"), steps=11)
    for walk, order in ((newton, 2.0), (secant, GOLDEN)):
        seen = [measure.order for measure in measures(walk.iterates, numbers) if measure.order is not None]
        assert abs(seen[-1] - order) < 0.05
