"""Where rounding, signs and the wording of figures are decided once, for every method.

Nothing here multiplies two function values to compare their signs: the product can underflow to zero.
"""

from __future__ import annotations

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.results import Real
from surefoot.methods.contract import Point

_LONGEST_FIGURE = 24  # a binary64 in its shortest decimal form never needs more


def sign(x: Real) -> int:
    """-1, 0 or 1; both zeros give 0."""
    return 1 if x > 0 else -1 if x < 0 else 0


def same_bits(arithmetic: Arithmetic, a: Real, b: Real) -> bool:
    """Whether two numbers are the same to the bit, so that -0.0 differs from 0.0."""
    return bool(a == b) and (a != 0 or arithmetic.encode(a) == arithmetic.encode(b))


def half_sum(arithmetic: Arithmetic, a: Real, b: Real) -> Real:
    """(a + b)/2: two roundings; the sum can overflow (OperationFailed)."""
    return arithmetic.divide(arithmetic.add(a, b), arithmetic.integer(2))


def offset_midpoint(arithmetic: Arithmetic, a: Real, b: Real) -> Real:
    """a + (b - a)/2: three roundings; the difference can overflow (OperationFailed)."""
    return arithmetic.add(a, arithmetic.divide(arithmetic.subtract(b, a), arithmetic.integer(2)))


def told(arithmetic: Arithmetic, x: Real) -> str:
    """A figure as a sentence quotes it: every digit of a binary64 or binary32, 17 digits of a longer number."""
    text = arithmetic.encode(x).rpartition(":")[2]
    return text if len(text) <= _LONGEST_FIGURE else repr(arithmetic.approximate(x))


def told_values(arithmetic: Arithmetic, points: tuple[Point, ...]) -> str:
    """Points as a sentence quotes them: `f(1.0) = -1.0, f(2.0) = 2.0`."""
    return ", ".join(f"f({told(arithmetic, point.x)}) = {told(arithmetic, point.f)}" for point in points)
