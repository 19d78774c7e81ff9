"""Roots by each bracketing method: the published problems, and the set of Alefeld, Potra and Shi (ACM TOMS 21, 1995).

No test stops these runs: they go on until f is exactly zero or the numbers have run out.
"""

from __future__ import annotations

from decimal import Decimal
from itertools import islice

import pytest
import scipy.optimize
from scipy.optimize._tstutils import get_tests

from support import plain_brackets as plain
from support.aps import APS, aps_bracket, aps_problem, aps_residual
from support.plain import MP, Formula
from support.published import (
    PRINTED,
    PUBLISHED,
    WITHOUT_DERIVATIVE,
    assert_as_printed,
    attainable,
    brackets,
    problem,
    residual,
    roots,
)
from support.runs import Walk, run
from surefoot.equation.problem import Problem
from surefoot.methods.contract import Iterate
from surefoot.methods.plan import Plan, Stop
from surefoot.methods.table import METHODS

METHODS_OF_BRACKETS = [code for code, method in METHODS.items() if method.traits.bracket]
every_method = pytest.mark.parametrize("method", METHODS_OF_BRACKETS)
CAP = 4000


def walked(method: str, stated: Problem, a: float, b: float) -> Walk:
    return run(Plan(method, (repr(a), repr(b)), CAP, stop=Stop()), stated)


def best(walk: Walk) -> Iterate:
    return min(walk.iterates, key=lambda iterate: abs(iterate.f))


@every_method
def test_every_published_root_to_what_binary64_attains_and_to_the_figure_as_printed(method: str) -> None:
    for code, row in PUBLISHED.items():
        if METHODS[method].traits.derivatives and code in WITHOUT_DERIVATIVE:
            continue
        for index, (a, b, _) in enumerate(brackets(code)):
            walk = walked(method, problem(code), a, b)
            x, value = best(walk).x, Decimal(row["roots"][index]["value"])
            allowed = attainable(code, index) + stagnation(method, walk, residual(code), float(value))
            assert abs(Decimal(x) - value) <= allowed * abs(value), code
            if (code, index) in PRINTED:
                assert_as_printed(x, code, index)


def test_the_brackets_hold_every_published_root() -> None:
    assert sum(len(brackets(code)) for code in PUBLISHED) == sum(len(roots(code)) for code in PUBLISHED)


# The set of Alefeld, Potra and Shi


def test_the_set_is_whole() -> None:
    families = [code.split("-")[1] for code in APS]
    assert [families.count(f"{family:02d}") for family in range(1, 16)] == [
        1, 10, 3, 14, 1, 10, 3, 5, 7, 5, 4, 19, 1, 40, 31,
    ]  # fmt: skip


def test_formulas_brackets_and_figures_are_those_that_scipy_carries() -> None:
    """Values of f at nine places in each bracket: to 1e-12 of the largest term, which the powers of numpy differ by."""
    for theirs, (code, row) in zip(get_tests("aps"), APS.items(), strict=True):
        assert tuple(map(float, theirs["bracket"])) == aps_bracket(code)
        assert float(row["published"]) == theirs["root"]
        a, b = aps_bracket(code)
        f = aps_residual(code).plain()
        for ninth in range(10):
            x = a + (b - a) * ninth / 9
            assert f(x) == pytest.approx(float(theirs["f"](x, *theirs["args"])), rel=1e-11, abs=1e-12), code


def test_roots_to_25_digits() -> None:
    """f, over the literals as decimals, changes sign within a unit of the last of them; and the figures agree."""
    for code, row in APS.items():
        root = Decimal(row["root"])
        assert abs(root - Decimal(row["published"])) <= abs(root) * Decimal("1e-15")
        if root == 0:
            assert aps_residual(code).plain()(0.0) == 0.0
            continue
        f = aps_residual(code).decimal()
        with MP.workdps(50):
            below, above = (f(MP.mpf(row["root"]) * (1 + MP.mpf(side) / 10**24)) for side in (-1, 1))
            assert (below > 0) != (above > 0)
            if (published := PUBLISHED.get(_name_in_published(code))) is not None:
                assert published["roots"][0]["value"][:24] == row["root"][:24]


def _name_in_published(code: str) -> str:
    return {
        "aps-01-01": "aps-01", "aps-02-01": "aps-02-1", "aps-02-02": "aps-02-2", "aps-06-05": "aps-06-5",
        "aps-08-03": "aps-08-10", "aps-10-02": "aps-10-5", "aps-14-01": "aps-14-1",
    }.get(code, "")  # fmt: skip


STUCK = {code for code in APS if code.startswith(("aps-02", "aps-03"))}
"""Where the chord from a value of 1e27 lands on the other end by rounding: regula falsi stays there for ever."""
CREEPING = {f"aps-04-{n:02d}" for n in (2, 3, 4, 5, *range(7, 15))} | {"aps-10-04", "aps-10-05", "aps-13-01"}
"""Where the kept end makes the error shrink by less than a part in a thousand a step."""
FLAT = {"aps-04-03", "aps-04-04", "aps-04-05", "aps-04-08", "aps-04-09", "aps-04-10"}
"""x^n - a from 0 to 5: f hardly changes at the flat end, so the kept value is scaled away and chords go to and fro."""
BEYOND_REACH = {"regula-falsi": STUCK | CREEPING, "anderson-bjorck": FLAT}
PLAIN = {"regula-falsi": plain.regula_falsi, "anderson-bjorck": plain.anderson_bjorck}


@every_method
def test_every_problem_of_the_set(method: str) -> None:
    """To four spacings of x or an exact zero, but for the problems where the published rule does not come to it."""
    beyond = BEYOND_REACH.get(method, set())
    for code, row in APS.items():
        walk = walked(method, aps_problem(code), *aps_bracket(code))
        found, root = best(walk), Decimal(row["root"])
        slow = stagnation(method, walk, aps_residual(code), float(root)) if root else Decimal(0)
        near = abs(Decimal(found.x) - root) <= max(Decimal(4 * 2.0**-52) + slow, noise_of(code)) * abs(root)
        assert (near or found.f == 0.0) == (code not in beyond), (code, walk.outcome, found.x)


@pytest.mark.parametrize("method", BEYOND_REACH)
def test_where_the_published_rule_itself_does_not_come_to_the_root(method: str) -> None:
    """A plain loop of the rule, as long, is further than a part in 10^9 from the root too."""
    for code in sorted(BEYOND_REACH[method]):
        f, (a, b) = aps_residual(code).plain(), aps_bracket(code)
        *_, last = islice(PLAIN[method](f, a, b, "symmetric"), CAP)
        assert f(last) != 0.0
        root = float(APS[code]["root"])
        assert abs(last - root) > 1e-9 * abs(root), code


def stagnation(method: str, walk: Walk, formula: Formula, root: float) -> Decimal:
    """Where regula falsi stands still, relative: its step, the error times f'(x*)(b - x*)/f(b), rounds to nothing.

    No further than a part in 10^12: beyond that it counts as not solved.
    """
    if method != "regula-falsi":
        return Decimal(0)
    kept = max((walk.states[-1].a, walk.states[-1].b), key=lambda end: abs(end.x - root))
    slope = float(MP.diff(formula.exact(), MP.mpf(root)))
    shrinking = abs(slope * (kept.x - root) / kept.f) if kept.f != 0 else 1.0
    return Decimal(min(2.0**-52 / shrinking, 1e-12))


def noise_of(code: str) -> Decimal:
    """How far rounding errors of f hide its sign, relative to the root."""
    row, formula = APS[code], aps_residual(code)
    root = float(row["root"])
    if root == 0.0:
        return Decimal(0)
    value = formula.rounded()(root)
    slope = MP.diff(formula.exact(), MP.mpf(root))
    return Decimal(2 * float(value.error / abs(slope * root)))


@every_method
def test_scipy_comes_to_the_same_roots(method: str) -> None:
    """scipy.optimize.brentq at xtol = 1e-14: theirs within xtol + rtol|x| of a root, ours at one."""
    for code in ("aps-01-01", "aps-05-01", "aps-06-03", "aps-09-03", "aps-11-02", "aps-12-07", "aps-14-01"):
        theirs = scipy.optimize.brentq(aps_residual(code).plain(), *aps_bracket(code), xtol=1e-14)
        ours = best(walked(method, aps_problem(code), *aps_bracket(code))).x
        assert ours == pytest.approx(theirs, rel=1e-14, abs=2e-14)


def test_a_plain_residual_of_the_published_data_is_what_the_runs_evaluate() -> None:
    a, b, _ = brackets("hyd-colebrook-lib")[0]
    walk = walked("itp", problem("hyd-colebrook-lib"), a, b)
    f = residual("hyd-colebrook-lib").plain()
    assert [iterate.f for iterate in walk.iterates] == [f(x) for x in walk.x]
