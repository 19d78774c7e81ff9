"""What the checks of the methods take from the published data: formulas, starts, brackets round single roots."""

from __future__ import annotations

import json
from collections.abc import Mapping
from functools import cache
from typing import Any

from support.plain import Formula, residual_of
from support.runs import first_derivative, problem_of
from support.tree import ROOT
from surefoot.equation.problem import Problem

_DATA = ROOT / "tests" / "published" / "data"


def _rows(name: str) -> Mapping[str, Mapping[str, Any]]:
    return {row["id"]: row for row in json.loads((_DATA / name).read_text(encoding="utf-8"))}


PUBLISHED = _rows("published.json")
WITHOUT_DERIVATIVE = ("sf-airy",)
"""The derivative of an Airy function is not in the equation language, so Newton-Raphson cannot take this one."""
DIFFERENTIABLE = tuple(code for code in PUBLISHED if code not in WITHOUT_DERIVATIVE)
FAILURES = _rows("failures.json")


@cache
def problem(code: str) -> Problem:
    return problem_of(PUBLISHED[code])


@cache
def residual(code: str) -> Formula:
    return residual_of(PUBLISHED[code])


@cache
def derivative(code: str) -> Formula:
    """The recorded derivative of a published problem, for Python to evaluate."""
    recorded, formula = first_derivative(problem(code)), residual(code)
    lines = tuple((line.name, line.text) for line in recorded.where)
    return Formula(recorded.text, formula.unknown, formula.inputs, lines)


@cache
def roots(code: str) -> tuple[float, ...]:
    return tuple(float(root["value"]) for root in PUBLISHED[code]["roots"])


@cache
def brackets(code: str) -> tuple[tuple[float, float, float], ...]:
    """(a, b, root) for each root where f changes sign, the bracket clear of other roots, singularities and range ends.

    The ends stand at 2/5 of the way to the neighbour below and 4/9 of the way to the one above, so that no halving
    meets the root by symmetry.
    """
    row, f = PUBLISHED[code], residual(code).plain()
    fixed = sorted({*roots(code), *(float(s["near"]) for s in row["singularities_in_range"])})
    low, high = (float(end) for end in row["range"])
    found = []
    for root in roots(code):
        below = max([point for point in fixed if point < root] + [low])
        above = min([point for point in fixed if point > root] + [high])
        a, b = root - 0.4 * (root - below), root + (above - root) / 2.25
        if (f(a) > 0) != (f(b) > 0):
            found.append((a, b, root))
    return tuple(found)
