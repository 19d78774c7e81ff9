"""What the checks of the methods take from the published data: formulas, starts, brackets round single roots."""

from __future__ import annotations

import json
import re
from collections.abc import Mapping
from decimal import Decimal
from functools import cache
from typing import Any

from support.plain import MP, Formula, residual_of
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


@cache
def attainable(code: str, index: int) -> Decimal:
    """How far from a root a solve in binary64 may end, relative: where the rounding errors of f hide its sign.

    Four spacings of x, four times what a bracketing solve attained, and the bound of f's rounding error over its slope.
    """
    root = roots(code)[index]
    value = residual(code).rounded()(root)
    slope = MP.diff(residual(code).exact(), MP.mpf(root))
    noise = float(value.error / abs(slope * root))
    return Decimal(max(4 * 2.0**-52, 4 * PUBLISHED[code]["float64_root_rel_error"][index], 2 * noise))


PRINTED = tuple(
    (code, index)
    for code, row in PUBLISHED.items()
    for index, root in enumerate(row["roots"])
    if row["published_agrees"] and root["published"]
)
"""Roots whose source prints a figure that holds."""


def assert_as_printed(x: float, code: str, index: int) -> None:
    """To half a unit of the last digit printed, to a whole one where the source is off by one; at best 8 spacings."""
    root = PUBLISHED[code]["roots"][index]
    printed = Decimal(root["published"])
    agreement, tolerance = root["agreement"], root["tolerance"] or ""
    rounding = abs(Decimal(x)) * Decimal(8 * 2.0**-52)
    if match := re.search(r"tested to ([0-9.e+-]+)\)", agreement):
        allowed = Decimal(match[1])
    elif match := re.search(r"quantum ([0-9.e+-]+)", tolerance):
        allowed = Decimal(match[1]) / (1 if "one unit" in agreement else 2) + rounding
    else:
        assert "double precision" in agreement or "30 decimals" in tolerance
        allowed = rounding
    assert abs(Decimal(x) - printed) <= allowed
