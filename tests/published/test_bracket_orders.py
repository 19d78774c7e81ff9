"""How fast bracketing methods close in, in 200 digits, against theory (the sources of the methods; from memory).

Errors are taken against roots in 260 digits, made by mpmath. The bracket is a hundredth of the root wide at the start.
"""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from typing import Any

import pytest

from support.orders import SMOOTH, beside, every_smooth, local, precisely
from support.plain import MP, Formula
from support.runs import Walk, run
from surefoot.equation.problem import Problem
from surefoot.methods.plan import Plan, Stop
from surefoot.methods.table import METHODS


def digits(walk: Walk, root: Any, most: int = 195) -> list[float]:
    """-log10 of the relative error of each iterate, as far as so many digits go."""
    found = [float(-MP.log10(abs(MP.mpf(x) / root - 1))) for x in walk.x if MP.mpf(x) != root]
    return [count for count in found if count < most]


def closing_in(method: str, code: str, **settings: str) -> list[float]:
    walk = precisely(method, code, beside(code, "0.993"), beside(code, "1.006"), steps=30, **settings)
    with MP.workdps(260):
        return digits(walk, local(code)[0])


def order(counts: Sequence[float], cycle: int) -> float:
    """The order a step, over the last two cycles: constants of the error drop out of the differences."""
    growth = (counts[-1] - counts[-1 - cycle]) / (counts[-1 - cycle] - counts[-1 - 2 * cycle])
    return float(growth ** (1 / cycle))


@every_smooth
def test_regula_falsi_is_linear_with_its_rate(code: str) -> None:
    """e(k+1)/e(k) within 1 % of |1 - f'(x*)(b - x*)/f(b)|, b the end that is kept."""
    root, d1, _ = local(code)
    walk = precisely("regula-falsi", code, beside(code, "0.993"), beside(code, "1.006"), steps=25)
    with MP.workdps(260):
        ends = walk.states[-1].a, walk.states[-1].b
        kept = max(ends, key=lambda end: abs(MP.mpf(end.x) - root))
        rate = abs(1 - d1 * (MP.mpf(kept.x) - root) / MP.mpf(kept.f))
        before, after = (abs(MP.mpf(x) - root) for x in walk.x[-2:])
        assert abs(after / before / rate - 1) < 0.01
        assert METHODS["regula-falsi"].traits.order == 1.0


@every_smooth
def test_illinois_goes_to_the_cube_in_three_steps(code: str) -> None:
    declared = METHODS["illinois"].traits.order
    assert declared == pytest.approx(1.442, abs=0.001)
    assert order(closing_in("illinois", code), 3) == pytest.approx(declared, abs=0.01)


@every_smooth
def test_anderson_bjorck_goes_to_the_fifth_power_in_three_steps(code: str) -> None:
    """5^(1/3) = 1.710 here; the declared order is that of the other pattern, which is lower."""
    found = order(closing_in("anderson-bjorck", code), 3)
    assert found == pytest.approx(5 ** (1 / 3), abs=0.06)
    assert METHODS["anderson-bjorck"].traits.order == pytest.approx(1.6818, abs=1e-4)


ONE_SIDED = ("orb-kepler-curtis", "che-bubble", "hyd-chow-normal", "vib-cantilever")
"""Where each x of Ridders falls on one side of the root, and the middle of the last bracket is the other end."""


@pytest.mark.parametrize("code", [code for code in SMOOTH if code not in ONE_SIDED])
def test_ridders_doubles_the_digits_where_x_changes_sides(code: str) -> None:
    assert order(closing_in("ridders", code), 2) == pytest.approx(2.0, abs=0.06)
    assert METHODS["ridders"].traits.order == 2.0


@pytest.mark.parametrize("code", ONE_SIDED)
def test_ridders_gains_by_the_halving_alone_where_x_stays_on_one_side(code: str) -> None:
    """The error falls by the square of a width that halves: each step gains 2*log10(2) digits more than the last."""
    counts = closing_in("ridders", code)
    gains = [after - before for before, after in pairwise(counts)]
    more = [after - before for before, after in pairwise(gains)]
    assert len(counts) > 10
    assert more[-1] == pytest.approx(2 * 0.30103, abs=0.02)


@every_smooth
def test_brent_dekker_goes_to_the_fifth_power_in_three_steps(code: str) -> None:
    assert order(closing_in("brent-dekker", code), 3) == pytest.approx(5 ** (1 / 3), abs=0.02)


@every_smooth
def test_chandrupatla_has_the_order_of_inverse_quadratic_interpolation(code: str) -> None:
    """The root of t^3 = t^2 + t + 1."""
    assert order(closing_in("chandrupatla", code), 1) == pytest.approx(1.839, abs=0.03)


@every_smooth
def test_itp_doubles_the_digits_in_two_steps(code: str) -> None:
    """kappa2 = 2: order sqrt 2 a step."""
    assert order(closing_in("itp", code, tolerance="1e-190"), 2) == pytest.approx(2**0.5, abs=0.03)


@every_smooth
def test_safeguarded_newton_is_quadratic_with_its_constant(code: str) -> None:
    """e(k+1)/e(k)^2 within 5 % of |f''/2f'|."""
    root, d1, d2 = local(code)
    walk = precisely("safeguarded-newton", code, beside(code, "0.993"), beside(code, "1.006"), steps=6)
    with MP.workdps(260):
        before, after = (abs(MP.mpf(x) - root) for x in walk.x[-2:])
        assert MP.mpf(10) ** -195 * abs(root) < after
        assert abs(after / before**2 / abs(d2 / (2 * d1)) - 1) < 0.05


@every_smooth
def test_toms_748_with_one_interpolation_an_iteration(code: str) -> None:
    """2.732 = 1 + sqrt 3 in the two steps of an iteration."""
    assert order(closing_in("toms-748", code, k="1"), 2) == pytest.approx((1 + 3**0.5) ** 0.5, abs=0.03)


@pytest.mark.parametrize("equation", ["x - 0.5*sin(x) - 0.75", "x - cos(x)/1.5 - 0.875", "x^3 - 2*x - 0.125"])
def test_toms_748_with_two_interpolations_an_iteration(equation: str) -> None:
    """At least 4.646 = 2 + sqrt 7 in the three steps of an iteration; it takes 1000 digits to see two of them.

    The constants of the equations are binary fractions, the same in every precision.
    """
    plan = Plan("toms-748", ("1.0", "1.6"), 40, stop=Stop(), arithmetic="multiprecision:1000")
    walk = run(plan, Problem("x", equation), limit=16)
    with MP.workdps(1100):
        f = Formula(equation, "x", {}).exact()
        root = MP.findroot(f, MP.mpf(walk.x[-1]), tol=MP.mpf(10) ** -2000, maxsteps=100)
        counts = digits(walk, root, 990)
    assert (2 + 7**0.5) ** (1 / 3) < order(counts, 3) < 1.8
