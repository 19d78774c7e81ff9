"""Convergence measures of the iterates of a run: how long the steps are, and how fast they shrink.

The observed order is told only where rounding, limits and points put by hand leave it honest; a missing figure is
better than a wrong one. Each measure looks back at most `TAIL` iterates, so the last one costs the same in a long run.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Failure, Real
from surefoot.methods.contract import Iterate

TAIL = 4
"""Iterates that a measure needs: the one measured and three before it."""

_SPACINGS = 64  # a step below so many last places of x is rounding as much as convergence
_DIGITS = 17  # significant decimal digits of a binary64


@dataclass(frozen=True, slots=True)
class Measure:
    """Measures of one iterate; None where there is nothing to compare with, or no honest figure.

    Attributes:
        dx: x_k - x_{k-1} as rounded.
        relative_dx: |dx|/|x_k|.
        f: the function value, or why there is none.
        contraction: |dx_k/dx_{k-1}|, both of steps of the rule.
        order: observed order ln|dx_k/dx_{k-1}| / ln|dx_{k-1}/dx_{k-2}|, for methods without a bracket.
        width_ratio: width of the bracket that this step halved, over that of the step before.
        steady: leading significant digits of x_k that are those of x_{k-1}, of the 17 of a binary64.
    """

    k: int
    dx: Real | None
    relative_dx: Real | None
    f: Real | Failure
    contraction: float | None
    order: float | None
    width_ratio: float | None
    steady: int


def measures(iterates: Sequence[Iterate], arithmetic: Arithmetic) -> tuple[Measure, ...]:
    """One measure an iterate, in order."""
    return tuple(measure_last(iterates[max(0, end - TAIL) : end], arithmetic) for end in range(1, len(iterates) + 1))


def measure_last(tail: Sequence[Iterate], arithmetic: Arithmetic) -> Measure:
    """The measure of the last iterate of `tail`, which needs to hold no more than the last `TAIL` of the run."""
    tail = tail[-TAIL:]
    last = tail[-1]
    steps = [_difference(arithmetic, new, old) for old, new in pairwise(tail)]
    dx = steps[-1] if steps else None
    return Measure(
        last.k,
        dx,
        _quotient(arithmetic, dx, last.x),
        last.f,
        _contraction(arithmetic, tail, steps),
        _order(arithmetic, tail, steps),
        _width_ratio(arithmetic, tail),
        steady_digits(arithmetic, tail[-2].x, last.x) if len(tail) > 1 else 0,
    )


def steady_digits(arithmetic: Arithmetic, before: Real, after: Real) -> int:
    """How many leading significant digits of two numbers agree, of the 17 that a binary64 needs."""
    texts = [f"{arithmetic.approximate(x):+.{_DIGITS - 1}e}".partition("e") for x in (before, after)]
    (mantissa, _, exponent), (other, _, other_exponent) = texts
    if exponent != other_exponent or not exponent or mantissa[0] != other[0]:
        return 0
    digits, others = mantissa[1:].replace(".", ""), other[1:].replace(".", "")
    return next((at for at, pair in enumerate(zip(digits, others, strict=True)) if pair[0] != pair[1]), _DIGITS)


def _difference(arithmetic: Arithmetic, new: Iterate, old: Iterate) -> Real | None:
    try:
        return arithmetic.subtract(new.x, old.x)
    except OperationFailed:
        return None


def _quotient(arithmetic: Arithmetic, a: Real | None, b: Real | None) -> Real | None:
    """|a/b|, None where one is missing, b is zero, or the quotient overflows."""
    if a is None or b is None or b == 0:
        return None
    try:
        return abs(arithmetic.divide(a, b))
    except OperationFailed:
        return None


def _contraction(arithmetic: Arithmetic, tail: Sequence[Iterate], steps: Sequence[Real | None]) -> float | None:
    if len(steps) < 2 or any(iterate.raw is None for iterate in tail[-2:]):
        return None
    quotient = _quotient(arithmetic, steps[-1], steps[-2])
    return None if quotient is None else arithmetic.approximate(quotient)


def _order(arithmetic: Arithmetic, tail: Sequence[Iterate], steps: Sequence[Real | None]) -> float | None:
    """The observed order from three clean steps: of the rule, without limits, shrinking, well above rounding."""
    clean = [it for it in tail[-3:] if it.raw is not None and not it.limited and it.account is not None]
    if len(steps) < 3 or len(clean) < 3 or any(it.account and it.account.shape == "bracket" for it in clean):
        return None
    first, second, third = (None if step is None else abs(step) for step in steps)
    if first is None or second is None or third is None:
        return None
    ln = arithmetic.functions["ln"]
    try:
        floor = arithmetic.multiply(arithmetic.integer(_SPACINGS), arithmetic.spacing(tail[-1].x))
        if not (floor < third < second < arithmetic.divide(first, arithmetic.integer(2))):
            return None
        shrunk = ln(arithmetic.divide(third, second))
        return arithmetic.approximate(arithmetic.divide(shrunk, ln(arithmetic.divide(second, first))))
    except OperationFailed:
        return None


def _width_ratio(arithmetic: Arithmetic, tail: Sequence[Iterate]) -> float | None:
    widths = [
        dict(iterate.account.figures).get("width")
        for iterate in tail[-2:]
        if iterate.account is not None and iterate.account.shape == "bracket"
    ]
    quotient = _quotient(arithmetic, widths[1], widths[0]) if len(widths) == 2 else None
    return None if quotient is None else arithmetic.approximate(quotient)
