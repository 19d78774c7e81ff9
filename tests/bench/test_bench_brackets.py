"""Evaluations of f that bracketing methods need, beside scipy's with the same stop: |b - a| <= xtol + rtol*|x|.

Over the set of Alefeld, Potra and Shi (154 problems) and the published problems with a bracket. x is the end where |f|
is less; an exact zero ends a run too. What is printed (`-s`) belongs into docs/measured.md.
"""

from __future__ import annotations

import math
import sys
from collections.abc import Callable, Iterator
from typing import Any

import numpy as np
import pytest
import scipy.optimize
from scipy.optimize.elementwise import find_root

from support.aps import APS, aps_bracket, aps_problem, aps_residual
from support.published import PUBLISHED, brackets, problem, residual
from support.runs import run
from surefoot.equation.problem import Problem
from surefoot.methods.plan import Plan, Stop

F = Callable[[float], float]
Case = tuple[Problem, F, float, float]
RTOL = 4 * 2.0**-52
CAP = 2000


def published_cases() -> Iterator[Case]:
    for code in PUBLISHED:
        for a, b, _ in brackets(code):
            yield problem(code), residual(code).plain(), a, b


def set_of_alefeld() -> Iterator[Case]:
    for code in APS:
        yield aps_problem(code), aps_residual(code).plain(), *aps_bracket(code)


def ours(method: str, case: Case, xtol: float, **settings: str) -> int | None:
    """Evaluations until the bracket in hand is narrow enough or f is zero; None where 2000 steps were not enough."""
    stated, _, a, b = case
    walk = run(Plan(method, (repr(a), repr(b)), CAP, tuple(settings.items()), stop=Stop()), stated)
    spent = walk.begun.spent.total
    for piece, state in zip(walk.pieces, walk.states, strict=False):
        best = min((state.a, state.b), key=lambda end: abs(end.f))
        if abs(state.b.x - state.a.x) <= xtol + RTOL * abs(best.x):
            return spent
        spent += piece.spent.total
    return spent if walk.outcome == "converged" else None


def theirs(solver: Callable[..., Any], case: Case, xtol: float, **options: Any) -> int | None:
    _, f, a, b = case
    _, info = solver(f, a, b, xtol=xtol, rtol=RTOL, maxiter=CAP, full_output=True, disp=False, **options)
    return int(info.function_calls) if info.converged else None


def by_find_root(case: Case, xtol: float) -> int | None:
    _, f, a, b = case
    tolerances = {"xatol": xtol, "xrtol": RTOL, "fatol": 0.0, "frtol": 0.0}
    found = find_root(np.vectorize(f, otypes=[float]), (a, b), tolerances=tolerances, maxiter=CAP)
    return int(found.nfev) if found.success else None


def counters(xtol: float) -> dict[str, Callable[[Case], int | None]]:
    half = repr(xtol / 2)
    counted: dict[str, Callable[[Case], int | None]] = {
        "toms-748, k = 2": lambda case: ours("toms-748", case, xtol, k="2", tolerance=half),
        "toms-748, k = 1": lambda case: ours("toms-748", case, xtol, k="1", tolerance=half),
        "brent-dekker": lambda case: ours("brent-dekker", case, xtol, tolerance=half),
        "brent-dekker, hyperbolic": lambda case: ours(
            "brent-dekker", case, xtol, tolerance=half, interpolation="hyperbolic"
        ),
        "ridders": lambda case: ours("ridders", case, xtol, tolerance=repr(xtol)),
        "chandrupatla": lambda case: ours("chandrupatla", case, xtol, tolerance=half),
        "itp": lambda case: ours("itp", case, xtol, tolerance=half),
    }
    for method in ("illinois", "anderson-bjorck", "bisection"):
        counted[method] = lambda case, method=method: ours(method, case, xtol)
    counted |= {
        "scipy toms748, k = 2": lambda case: theirs(scipy.optimize.toms748, case, xtol, k=2),
        "scipy toms748, k = 1": lambda case: theirs(scipy.optimize.toms748, case, xtol, k=1),
        "scipy brentq": lambda case: theirs(scipy.optimize.brentq, case, xtol),
        "scipy brenth": lambda case: theirs(scipy.optimize.brenth, case, xtol),
        "scipy ridder": lambda case: theirs(scipy.optimize.ridder, case, xtol),
        "scipy find_root": lambda case: by_find_root(case, xtol),
        "scipy bisect": lambda case: theirs(scipy.optimize.bisect, case, xtol),
    }
    return counted


@pytest.mark.parametrize("xtol", [2e-12, 1e-6])
@pytest.mark.parametrize("cases", [set_of_alefeld, published_cases])
def test_evaluations_beside_scipy(cases: Callable[[], Iterator[Case]], xtol: float) -> None:
    every = list(cases())
    totals: dict[str, float] = {}
    lines = [
        f"{cases.__name__}, {len(every)} brackets, xtol = {xtol:g}, rtol = 4 eps",
        f"{'':24}  total   most  unsolved",
    ]
    for name, count in counters(xtol).items():
        counts = [count(case) for case in every]
        solved = [each for each in counts if each is not None]
        unsolved = len(counts) - len(solved)
        totals[name] = math.inf if unsolved else sum(solved)
        lines.append(f"{name:24} {sum(solved):6} {max(solved):6} {unsolved:9}")
    sys.stdout.write("\n" + "\n".join(lines) + "\n")
    best_of_scipy = min(total for name, total in totals.items() if name.startswith("scipy"))
    assert min(total for name, total in totals.items() if not name.startswith("scipy")) <= best_of_scipy
