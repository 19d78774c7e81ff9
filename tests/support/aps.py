"""The test set of Alefeld, Potra and Shi (ACM TOMS 21, 1995, 327-344): 15 families, 154 problems, each with a bracket.

The formulas of data/aps.json were typed from memory of the paper and of the entries aps-* of data/published.json; the
parameters, brackets and printed roots are those that scipy carries in its own test data for the same paper. `root` has
25 digits, from halving in 60-digit arithmetic.
"""

from __future__ import annotations

import json
from collections.abc import Mapping
from functools import cache
from typing import Any

from support.plain import Formula, residual_of
from support.runs import problem_of
from support.tree import ROOT
from surefoot.equation.problem import Problem

APS: Mapping[str, Mapping[str, Any]] = {
    row["id"]: row
    for row in json.loads((ROOT / "tests" / "published" / "data" / "aps.json").read_text(encoding="utf-8"))
}


@cache
def aps_problem(code: str) -> Problem:
    return problem_of(APS[code])


@cache
def aps_residual(code: str) -> Formula:
    return residual_of(APS[code])


def aps_bracket(code: str) -> tuple[float, float]:
    low, high = APS[code]["range"]
    return float(low), float(high)
