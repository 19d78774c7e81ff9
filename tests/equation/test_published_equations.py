"""The published equations: each parses, checks, and its published roots make it small beside its own terms.

Roots come with 25 digits from the ball arithmetic that counted them; sources of equations and values stand in the data.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import pytest

from support.published import FAILURES, PUBLISHED
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.checking import CheckedProblem, check_problem
from surefoot.equation.compiling import compile_expression
from surefoot.equation.function import Function
from surefoot.equation.parser import parse_equation
from surefoot.equation.problem import Input, Problem
from surefoot.equation.results import EvaluationFailed
from surefoot.equation.tree import Binary, Expression, Negate, Number
from surefoot.equation.wording import to_text

EVERYTHING = {**PUBLISHED, **FAILURES}


def problem_of(entry: Mapping[str, Any]) -> Problem:
    given = tuple(Input(name, *text.split(" ", 1)) for name, text in entry["parameters"].items())
    return Problem(
        entry["unknown"],
        entry["equation"],
        inputs=given,
        derivative=entry.get("derivative") or "",
        title=entry["title"],
    )


def terms(tree: Expression) -> list[Expression]:
    """What the residual is the sum of."""
    if isinstance(tree, Negate):
        return terms(tree.operand)
    if isinstance(tree, Binary) and tree.operator in "+-":
        return terms(tree.left) + terms(tree.right)
    return [] if tree == Number("0") else [tree]


def size_of_terms(checked: CheckedProblem, x: float) -> float:
    """The sum of the magnitudes of the residual's terms."""
    slots = {name: slot for slot, name in enumerate(checked.names)}
    values = [x, *(float(given.value) for given in checked.problem.inputs)]
    return sum(abs(compile_expression(term, BINARY64, slots)(values)) for term in terms(checked.residual))


@pytest.mark.parametrize("code", sorted(PUBLISHED))
def test_the_residual_at_published_roots_is_small_beside_its_terms(code: str) -> None:
    """Within 1e-13 of its terms, and what it changes by itself over eight last places of x.

    The latter speaks where a residual is one term, such as J0(x), or a term is ill-conditioned in x.
    """
    entry = PUBLISHED[code]
    checked = check_problem(problem_of(entry))
    function = Function(checked, BINARY64)
    assert entry["roots"] or entry["n_roots_in_range"] == 0
    for root in entry["roots"]:
        x = float(root["value"])
        shift = 4.0 * math.ulp(x)
        change = abs(function.value(x + shift) - function.value(x - shift))
        assert abs(function.value(x)) <= 1e-13 * size_of_terms(checked, x) + change, x
        assert change <= 1e-6 * size_of_terms(checked, x) or len(terms(checked.residual)) == 1, x


@pytest.mark.parametrize("code", sorted(EVERYTHING))
def test_the_words_of_every_equation_mean_the_same_equation(code: str) -> None:
    tree = parse_equation(EVERYTHING[code]["equation"])
    assert parse_equation(to_text(tree)) == tree


@pytest.mark.parametrize("code", sorted(FAILURES))
def test_failing_solves_are_whole_problems_with_the_values_observed(code: str) -> None:
    """Each checks, its other texts too; the value at its first iterate is the one that was observed.

    Where none was recorded, f had overflowed at the start already.
    """
    entry = FAILURES[code]
    checked = check_problem(problem_of(entry))
    function = Function(checked, BINARY64, g=entry["iteration_function"], host_derivative=bool(entry["derivative"]))
    assert (checked.host_derivative is None) == (not entry["derivative"])
    if not entry["observed"]["first_iterates"]:
        with pytest.raises(EvaluationFailed, match="overflow"):
            function.value(float(entry["starts"][0]))
        return
    first = entry["observed"]["first_iterates"][0]
    x = float(first["x"])
    assert function.value(x) == pytest.approx(float(first["f"]), rel=1e-12, abs=1e-14 * size_of_terms(checked, x))
