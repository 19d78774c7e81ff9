"""Sampling over arrays: the values of the scalar evaluation but for the last bits, NaN exactly where that fails."""

from __future__ import annotations

import json
import math
import warnings
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from surefoot.equation.binary64 import BINARY64
from surefoot.equation.checking import CheckedProblem, check_problem
from surefoot.equation.function import Function
from surefoot.equation.functions import FUNCTIONS
from surefoot.equation.problem import Definition, Input, Problem
from surefoot.equation.problem_file import read_problem_file
from surefoot.equation.results import EvaluationFailed
from surefoot.equation.vector import sample

CODE = "hyd-colebrook-lib"
PUBLISHED = Path(__file__).parents[1] / "published"
LAST_BITS = 1e-9  # of the larger terms of a residual: functions differ by some units in the last place


def checked(equation: str, **definitions: str) -> CheckedProblem:
    where = tuple(Definition(name, text) for name, text in definitions.items())
    return check_problem(Problem("x", equation, where=where, inputs=(Input("a", "2.5"),)))


def scalar(function: Function, x: float) -> float:
    try:
        return function.value(x)
    except EvaluationFailed:
        return math.nan


def compare(problem: CheckedProblem, xs: list[float]) -> int:
    """Compares both evaluations at every x; how many have a value."""
    function = Function(problem, BINARY64)
    expected = np.array([scalar(function, x) for x in xs])
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        found = sample(problem, xs)
    assert found.dtype == np.float64
    assert (np.isnan(found) == np.isnan(expected)).all(), problem.problem.equation
    valued = ~np.isnan(expected)
    scale = max(1.0, float(np.median(np.abs(expected[valued])))) if valued.any() else 1.0
    assert np.allclose(found[valued], expected[valued], rtol=LAST_BITS, atol=LAST_BITS * scale)
    return int(valued.sum())


EVERYWHERE = [
    -3.7,
    -2.0,
    -1.0,
    -0.5,
    -0.0,
    0.0,
    1e-300,
    0.25,
    0.5,
    1.0,
    1.5,
    2.0,
    7.0,
    40.0,
    800.0,
    1e160,
    -1e160,
    1e308,
]


@pytest.mark.parametrize("name", FUNCTIONS)
def test_every_function_has_a_value_where_the_scalar_one_has(name: str) -> None:
    arguments = {1: "x", 2: "x, a"}[FUNCTIONS[name].arity]
    xs = [x for x in EVERYWHERE if abs(x) < 1e3] if name in ("sin", "cos", "tan") else EVERYWHERE
    assert compare(checked(f"{name}({arguments})"), xs) > 3
    if FUNCTIONS[name].arity == 2:
        compare(checked(f"{name}(a, x)"), xs)


@pytest.mark.parametrize(
    "equation",
    [
        "x^a",
        "a^x",
        "x^3 - x",
        "(-1)^x",
        "0^x",
        "(x - x)/(x - 2)",
        "1/exp(x)",
        "(x*1e200)*0",
        "sqrt(x)^0",
        "1^ln(x)",
        "hypot(exp(x), ln(x))",
        "min(ln(x), x, 3) + max(x, 0.1f, sqrt(x))",
        "-x + pi",
        "x = a",
        "piecewise(x > 1: ln(x); x < -1: 1/x)",
        "piecewise(x > 1: sqrt(x); otherwise: x^2)",
        "piecewise(ln(x) > 0: 1; otherwise: x)",
        "piecewise(x > 0 and ln(x) > 0: x; otherwise: 2)",
        "piecewise(x <= 0 or ln(x) > 0: x; otherwise: 2)",
        "piecewise(not (x > 0 and sqrt(x) > 1): x; otherwise: 2)",
        "piecewise(0 < x <= sqrt(x) < 2: x; otherwise: 2)",
        "piecewise(x == 1: 1; x != 2: x; otherwise: 3)",
        "piecewise(x >= 1: piecewise(x > 5: x; otherwise: 5); otherwise: ln(x))",
    ],
)
def test_operations_and_branches_agree_with_the_scalar_evaluation(equation: str) -> None:
    assert compare(check_problem(Problem("x", equation, inputs=(Input("a", "2.5"),))), EVERYWHERE) > 0


def test_a_definition_that_fails_leaves_no_value_whichever_branch_is_taken() -> None:
    compare(checked("piecewise(x > 0: A; otherwise: x)", A="ln(x)"), EVERYWHERE)
    compare(checked("B", A="ln(x)", B="piecewise(x > 0: A; otherwise: x)"), EVERYWHERE)
    assert compare(checked("x", A="ln(x)"), EVERYWHERE) == len(EVERYWHERE)


@pytest.mark.parametrize("path", sorted(PUBLISHED.glob("problems/*.toml")), ids=lambda path: path.stem)
def test_published_problems_agree_with_the_scalar_evaluation(path: Path) -> None:
    problem = check_problem(read_problem_file(path.read_text(encoding="utf-8"), path.name).problem)
    assert problem.problem.range is not None
    low, high = map(float, problem.problem.range)
    assert compare(problem, list(np.linspace(low, high, 40)[1:-1])) > 10


def test_the_published_root_lies_where_the_samples_change_sign() -> None:
    """Colebrook-White of the published set, its one root between two neighbours of 2000 samples."""
    entry: Any = next(
        each for each in json.loads((PUBLISHED / "data" / "published.json").read_text()) if each["id"] == CODE
    )
    problem = check_problem(read_problem_file((PUBLISHED / "problems" / f"{CODE}.toml").read_text(), CODE).problem)
    xs = np.linspace(*map(float, problem.problem.range or ()), 2000)
    values = sample(problem, xs)
    changes = np.flatnonzero(np.sign(values[:-1]) != np.sign(values[1:]))
    assert len(changes) == entry["n_roots_in_range"] == 1
    assert xs[changes[0]] <= float(entry["roots"][0]["value"]) <= xs[changes[0] + 1]


def test_points_that_are_not_finite_give_nan() -> None:
    values = sample(checked("x*0 + 1"), [math.nan, math.inf, -math.inf, 1.0])
    assert np.isnan(values[:3]).all()
    assert values[3] == 1.0


def test_the_shape_of_the_points_is_kept() -> None:
    grid = np.linspace(1.0, 2.0, 6).reshape(2, 3)
    assert sample(checked("erf(x) - a"), grid).shape == (2, 3)
    assert sample(checked("x"), []).shape == (0,)


def test_a_tree_of_the_greatest_height_is_sampled() -> None:
    deepest = "sin(" * 198 + "x" + ")" * 198
    assert compare(checked(deepest), [0.5, 1.0]) == 2
