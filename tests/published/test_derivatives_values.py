"""Derivatives of every published equation against mpmath's numerical differentiation in 60 digits.

Equations, inputs and ranges are those of data/published.json, with their sources. The evaluation that mpmath
differentiates is Python's own, in 200 bits.
"""

from __future__ import annotations

import time
from typing import Any

import pytest

from support.plain import MP, Formula, residual_of
from support.published import DIFFERENTIABLE, PUBLISHED, WITHOUT_DERIVATIVE, problem
from surefoot.equation.checking import check_problem
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.derivatives import NoDerivative, derive
from surefoot.equation.function import Function
from surefoot.equation.parser import parse_expression
from surefoot.equation.wording import to_text

DIGITS = arithmetic_of("multiprecision:60")
THIRD = tuple(code for i, code in enumerate(DIFFERENTIABLE) if i % 5 == 0)
SECONDS = 3


def points(code: str) -> list[Any]:
    """Four points in the range, none of them round; two of them by ratio where the range spans decades."""
    low, high = (MP.mpf(end) for end in PUBLISHED[code]["range"])
    linear = [low + (high - low) * MP.mpf(share) for share in ("0.0713", "0.4137", "0.6931", "0.9079")]
    if low > 0 and high > 100 * low:
        linear[0], linear[1] = (low * (high / low) ** MP.mpf(share) for share in ("0.2713", "0.6137"))
    return linear


def decimal_residual(code: str) -> Any:
    formula = residual_of(PUBLISHED[code])
    inputs = {name: MP.mpf(text.split()[0]) for name, text in PUBLISHED[code]["parameters"].items()}
    return Formula(formula.text, formula.unknown, inputs).decimal()


@pytest.mark.parametrize(
    ("code", "order"),
    [(code, order) for code in DIFFERENTIABLE for order in (1, 2)] + [(code, 3) for code in THIRD],
)
def test_a_derivative_agrees_with_numerical_differentiation(code: str, order: int) -> None:
    """Within 1e-20 of its own size, or of the function's where the derivative itself is small."""
    checked = check_problem(problem(code))
    started = time.process_time()
    derivative = derive(checked, order)
    assert time.process_time() - started < SECONDS
    for text in (*(line.text for line in derivative.where), derivative.text):
        assert to_text(parse_expression(text)) == text
    function = Function(checked, DIGITS, (derivative,))
    residual = decimal_residual(code)
    for x in points(code):
        expected = MP.diff(residual, x, order)
        found = MP.mpf(function.derivative(DIGITS.literal(MP.nstr(x, 60), single=False), order))
        size = max(abs(expected), abs(residual(x)) / abs(x) ** order)
        assert abs(found - expected) <= MP.mpf("1e-20") * size, f"at {x}: {derivative.text}"


@pytest.mark.parametrize("code", WITHOUT_DERIVATIVE)
def test_the_equation_without_derivative_says_why(code: str) -> None:
    with pytest.raises(NoDerivative, match="Airy"):
        derive(check_problem(problem(code)), 1)
