"""Each step of a bracketing method beside the same step in 200 bits, from the points that its account names.

The values of f are taken as they are, so that what is compared is the rounding of the rule alone. A chord or a middle
loses a few units of its step and half a unit of x; interpolation through three and four points takes differences of
quotients, where cancellation may cost half of the digits of the step, but none of x.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Any

import pytest

from support import plain_brackets as plain
from support.plain import MP, UNIT
from support.published import PUBLISHED, brackets, problem
from support.runs import run
from surefoot.methods.contract import Account, Iterate, Point
from surefoot.methods.plan import Plan, Stop

every_problem = pytest.mark.parametrize("code", PUBLISHED)
HALF_OF_THE_DIGITS = 2.0**-26


def stepped(method: str, code: str, **settings: str) -> Iterator[tuple[Iterate, Account]]:
    for a, b, _ in brackets(code):
        plan = Plan(method, (repr(a), repr(b)), 30, tuple(settings.items()), stop=Stop())
        for iterate in run(plan, problem(code)).iterates[2:]:
            assert iterate.account is not None
            yield iterate, iterate.account


def exactly(points: Sequence[Point]) -> tuple[Any, ...]:
    return tuple(MP.mpf(point.x) for point in points), tuple(MP.mpf(point.f) for point in points)


def inverse_zero(points: Sequence[Point]) -> Any:
    """The polynomial x over f through the points, at f = 0, in Lagrange's form."""
    xs, fs = exactly(points)
    total = MP.mpf(0)
    for at, (x, f) in enumerate(zip(xs, fs, strict=True)):
        for other, g in enumerate(fs):
            if other != at:
                x *= g / (g - f)
        total += x
    return total


@every_problem
@pytest.mark.parametrize("method", ["regula-falsi", "illinois", "anderson-bjorck"])
def test_the_zero_of_a_chord(code: str, method: str) -> None:
    """Both products and their difference are rounded, then the difference of the values and the quotient."""
    checked = 0
    for iterate, account in stepped(method, code):
        (b, a), (fb, fa) = exactly(account.points)
        fa = MP.mpf(dict(account.figures).get("kept_f", account.points[1].f))
        zero = (a * fb - b * fa) / (fb - fa)
        bound = 5 * UNIT * (abs(a * fb) + abs(b * fa)) / abs(fb - fa) + UNIT * abs(zero)
        assert abs(MP.mpf(iterate.x) - zero) <= 1.01 * bound
        checked += 1
    assert checked


@every_problem
@pytest.mark.parametrize("form", ["product", "quotient", "ratios"])
def test_ridders(code: str, form: str) -> None:
    checked = 0
    for iterate, account in stepped("ridders", code, form=form):
        (a, b, m), (fa, fb, fm) = exactly(account.points)
        step = (m - a) * fm / MP.sqrt(fm * fm - fa * fb)
        x = m + (step if fa > fb else -step)
        assert abs(MP.mpf(iterate.x) - x) <= 8 * UNIT * abs(step) + 2 * UNIT * (abs(x) + abs(a) + abs(b))
        checked += 1
    assert checked


@every_problem
@pytest.mark.parametrize("method", ["brent-dekker", "chandrupatla", "toms-748"])
def test_interpolation(code: str, method: str) -> None:
    """Chords of Brent-Dekker and TOMS 748; inverse parabolas; the inverse cubic, and Newton steps on the quadratic."""
    seen = set()
    for iterate, account in stepped(method, code):
        figures = dict(account.figures)
        x = MP.mpf(iterate.x)
        (first, *_), values = exactly(account.points)
        if account.shape == "chord" and account.slope is not None:
            step = values[0] / MP.mpf(account.slope)
            assert abs(x - (first - step)) <= 16 * UNIT * abs(step) + 2 * UNIT * abs(x)
        elif account.shape == "parabola":
            if method == "toms-748" and len(account.points) == 3:
                ends = [*exactly(account.points)[0], *values]
                candidates = [plain.newton_quadratic(*ends, k) for k in (2, 3)]
            else:
                candidates = [inverse_zero(account.points)]
            off = min(abs(x - zero) for zero in candidates)
            width = MP.mpf(figures["width"])
            assert off <= HALF_OF_THE_DIGITS * width + 2 * UNIT * abs(x)
        seen.add((account.shape, len(account.points)))
    assert ("parabola", 3) in seen or ("chord", 2) in seen
