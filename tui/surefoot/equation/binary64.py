"""IEEE 754 binary64 through Python's floats and the `math` module: each operation rounds once, to nearest even.

Sums, products, quotients and square roots are correctly rounded. `^` is the platform's `pow`, elementary functions are
those of its C library; special functions are correctly rounded (`surefoot.equation.special`).
"""

from __future__ import annotations

import math
import struct
from collections.abc import Callable, Mapping
from fractions import Fraction
from types import MappingProxyType

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.results import FailureKind
from surefoot.equation.tokens import is_hexadecimal, is_literal

_LARGEST = math.nextafter(math.inf, 0.0)

_SPECIAL = (
    "erf",
    "erfc",
    "normal_cdf",
    "tgamma",
    "lgamma",
    "digamma",
    "cyl_bessel_j",
    "cyl_neumann",
    "cyl_bessel_i",
    "cyl_bessel_k",
    "airy_ai",
    "airy_bi",
    "expint",
    "exp_integral_e1",
    "cos_integral",
    "sin_integral",
)


class Binary64:
    """The arithmetic `binary64`."""

    kind = "binary64"

    @property
    def functions(self) -> Mapping[str, Callable[..., float]]:
        return _FUNCTIONS

    def literal(self, text: str, single: bool) -> float:
        """The binary64 nearest to a literal; nearest to its binary32 when `single`.

        Raises:
            OperationFailed: overflow.
            ValueError: the text is no literal.
        """
        if not is_literal(text):
            raise ValueError(f"{text!r} is not a literal")
        try:
            value = float.fromhex(text) if is_hexadecimal(text) else float(text)
            if single:
                value = _single(text, value)
        except OverflowError:
            raise OperationFailed(FailureKind.OVERFLOW) from None
        return _finite(value)

    def integer(self, value: int) -> float:
        return float(value)

    def add(self, a: float, b: float) -> float:
        value = a + b
        return value if -_LARGEST <= value <= _LARGEST else _finite(value)

    def subtract(self, a: float, b: float) -> float:
        value = a - b
        return value if -_LARGEST <= value <= _LARGEST else _finite(value)

    def multiply(self, a: float, b: float) -> float:
        value = a * b
        return value if -_LARGEST <= value <= _LARGEST else _finite(value)

    def divide(self, a: float, b: float) -> float:
        if b == 0.0:
            raise OperationFailed(FailureKind.DIVISION_BY_ZERO)
        value = a / b
        return value if -_LARGEST <= value <= _LARGEST else _finite(value)

    def power(self, a: float, b: float) -> float:
        try:
            return math.pow(a, b)
        except ValueError:
            raise OperationFailed(FailureKind.DIVISION_BY_ZERO if a == 0.0 else FailureKind.DOMAIN) from None
        except OverflowError:
            raise OperationFailed(FailureKind.OVERFLOW) from None

    def negate(self, a: float) -> float:
        return -a

    def encode(self, x: float) -> str:
        return repr(x)

    def decode(self, text: str) -> float:
        """The inverse of encode. Raises ValueError for any text that encode does not give."""
        value = float(text)
        if repr(value) != text:
            raise ValueError(f"{text!r} is not the record text of a binary64")
        return value

    def spacing(self, x: float) -> float:
        return math.ulp(x)

    def approximate(self, x: float) -> float:
        return x


def _finite(value: float) -> float:
    """The value itself. Raises OperationFailed when it is not finite."""
    if math.isinf(value):
        raise OperationFailed(FailureKind.OVERFLOW)
    if math.isnan(value):
        raise OperationFailed(FailureKind.NOT_A_NUMBER)
    return value


def _single(text: str, value: float) -> float:
    """The binary32 nearest to a literal whose nearest binary64 is `value`; infinite beyond the range.

    Where `value` lies midway between two binary32 numbers, rounding it again would lose which side the literal was on.
    """
    next_above, next_below = math.nextafter(value, math.inf), math.nextafter(value, -math.inf)
    above, below = _rounded_to_single(next_above), _rounded_to_single(next_below)
    midway = above != below and above - value == value - below
    if midway and not is_hexadecimal(text):
        literal, middle = Fraction(text), Fraction(value)
        value = next_above if literal > middle else next_below if literal < middle else value
    return _rounded_to_single(value)


def _rounded_to_single(value: float) -> float:
    try:
        rounded: float = struct.unpack("<f", struct.pack("<f", value))[0]
    except OverflowError:
        return math.copysign(math.inf, value)
    return rounded


def _function(implementation: Callable[..., float], overflow: bool = False) -> Callable[..., float]:
    """A function of `math` whose exceptions are named: outside its domain, or a result that is too large."""

    def named(*arguments: float) -> float:
        try:
            value = implementation(*arguments)
        except ValueError:
            raise OperationFailed(FailureKind.DOMAIN) from None
        except OverflowError:
            raise OperationFailed(FailureKind.OVERFLOW) from None
        return _finite(value) if overflow else value

    return named


def _special(name: str) -> Callable[..., float]:
    def evaluated(*arguments: float) -> float:
        # Loaded at the first use: most equations need no ball arithmetic.
        from surefoot.equation import special

        return special.evaluate(name, *arguments)

    return evaluated


def _floor(x: float) -> float:
    return math.copysign(float(math.floor(x)), x)  # as ISO C: the sign of a zero is that of x


def _ceil(x: float) -> float:
    return math.copysign(float(math.ceil(x)), x)


def _sign(x: float) -> float:
    return float((x > 0.0) - (x < 0.0))


_FUNCTIONS: Mapping[str, Callable[..., float]] = MappingProxyType(
    {
        "pi": lambda: math.pi,
        # finite for every finite argument
        "sin": math.sin,
        "cos": math.cos,
        "tan": math.tan,
        "atan": math.atan,
        "atan2": math.atan2,
        "tanh": math.tanh,
        "asinh": math.asinh,
        "cbrt": math.cbrt,
        "abs": abs,
        "sign": _sign,
        "floor": _floor,
        "ceil": _ceil,
        "min": min,
        "max": max,
        # with a domain, or with results that may be too large
        "asin": _function(math.asin),
        "acos": _function(math.acos),
        "acosh": _function(math.acosh),
        "atanh": _function(math.atanh),
        "ln": _function(math.log),
        "log1p": _function(math.log1p),
        "log10": _function(math.log10),
        "log2": _function(math.log2),
        "sqrt": _function(math.sqrt),
        "exp": _function(math.exp),
        "expm1": _function(math.expm1),
        "sinh": _function(math.sinh),
        "cosh": _function(math.cosh),
        "hypot": _function(math.hypot, overflow=True),
        **{name: _special(name) for name in _SPECIAL},
    }
)

BINARY64 = Binary64()
