"""IEEE 754 binary32: numbers are `numpy.float32` scalars, so that step rules written with plain operators stay in it.

Sums, products, quotients and square roots are formed in binary64 and rounded to binary32. The second rounding changes
nothing: binary64 has more than twice the digits and two (53 >= 2*24 + 2), and then the result is that of rounding
once (S. A. Figueroa, "When is double rounding innocuous?", ACM SIGNUM Newsletter 30(3), 1995).

`^` and all other functions are those of `binary64`, rounded once more to binary32. The last bit of such a value can
differ from that of a single-precision library (`powf`, `expf`), whose own rounding no standard fixes.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import cast

import numpy as np

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.results import FailureKind, Real

_TOO_LARGE = math.ldexp(1.0, 128) - math.ldexp(1.0, 103)  # from here on the nearest binary32 is infinite
_DIGITS = 24
_LEAST_EXPONENT = -149
_PREFIX = "f32:"


class Binary32:
    """The arithmetic `binary32`."""

    kind = "binary32"

    @property
    def functions(self) -> Mapping[str, Callable[..., Real]]:
        return _FUNCTIONS

    def literal(self, text: str, single: bool) -> Real:  # noqa: ARG002  (every literal is single here)
        """The binary32 nearest to a literal, with the suffix `f` or without.

        Raises:
            OperationFailed: overflow.
            ValueError: the text is no literal.
        """
        return _number(BINARY64.literal(text, single=True))

    def integer(self, value: int) -> Real:
        return _number(float(value))

    def add(self, a: Real, b: Real) -> Real:
        return _rounded(float(a) + float(b))

    def subtract(self, a: Real, b: Real) -> Real:
        return _rounded(float(a) - float(b))

    def multiply(self, a: Real, b: Real) -> Real:
        return _rounded(float(a) * float(b))

    def divide(self, a: Real, b: Real) -> Real:
        return _rounded(BINARY64.divide(float(a), float(b)))

    def power(self, a: Real, b: Real) -> Real:
        return _rounded(BINARY64.power(float(a), float(b)))

    def negate(self, a: Real) -> Real:
        return -a

    def encode(self, x: Real) -> str:
        return _PREFIX + str(x)

    def decode(self, text: str) -> Real:
        """The inverse of encode. Raises ValueError for any text that encode does not give."""
        digits = text.removeprefix(_PREFIX)
        try:
            value = _number(
                float(digits) if digits in ("nan", "inf", "-inf") else BINARY64.literal(digits, single=True)
            )
        except (OperationFailed, ValueError):
            value = _number(math.nan)
        if self.encode(value) != text:
            raise ValueError(f"{text!r} is not the record text of a binary32")
        return value

    def spacing(self, x: Real) -> Real:
        exponent = math.frexp(x)[1] - _DIGITS if x else _LEAST_EXPONENT
        return _number(math.ldexp(1.0, max(exponent, _LEAST_EXPONENT)))

    def approximate(self, x: Real) -> float:
        return float(x)


def _number(value: float) -> Real:
    """The same number as a scalar of numpy. `value` is a binary32 already."""
    return cast(Real, np.float32(value))


def _rounded(value: float) -> Real:
    """The nearest binary32. Raises OperationFailed when it is not finite."""
    if -_TOO_LARGE < value < _TOO_LARGE:
        return _number(value)
    raise OperationFailed(FailureKind.NOT_A_NUMBER if math.isnan(value) else FailureKind.OVERFLOW)


def _through_binary64(function: Callable[..., float]) -> Callable[..., Real]:
    return lambda *arguments: _rounded(function(*map(float, arguments)))


_FUNCTIONS: Mapping[str, Callable[..., Real]] = MappingProxyType(
    {name: _through_binary64(function) for name, function in BINARY64.functions.items()}
)

BINARY32 = Binary32()
