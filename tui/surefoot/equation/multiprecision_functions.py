"""Elementary functions of multiprecision numbers: from exact arguments to results good beyond the number's digits.

They work on the plain tuples of `mpmath.libmp` with the precision as an argument, so no context is changed and no
state is shared. The caller rounds the result once. No argument within 2**65536 takes long: what would be larger than
that is named an overflow before any work is done, and what would be smaller is zero.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, TypeAlias

from mpmath import libmp

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.results import FailureKind

Raw: TypeAlias = Any  # sign, mantissa, exponent, bit count
Elementary: TypeAlias = Callable[..., Raw]  # (*arguments, bits)

EXPONENT_LIMIT = 1 << 16
"""Numbers lie within 2**-65536 and 2**65536, a range wider than that of any binary format of IEEE 754."""

_EXP_LIMIT = libmp.from_int(46_000)  # exp(46 000) is beyond 2**66000
_EXACT_POWER = 1024
_NEAREST = "n"


def magnitude(x: Raw) -> int:
    """The e with 2**(e - 1) <= |x| < 2**e, for x not zero."""
    return int(x[2]) + int(x[3])


def negative(x: Raw) -> bool:
    return bool(x[0])


def power(x: Raw, y: Raw, bits: int) -> Raw:
    """x**y for any real y where that is real."""
    if y == libmp.fzero:
        return libmp.fone
    if x == libmp.fzero:
        if negative(y):
            raise OperationFailed(FailureKind.DIVISION_BY_ZERO)
        return libmp.fzero
    whole = y[2] >= 0
    _require(whole or not negative(x))
    odd = y[2] == 0
    size = _power_of_positive(libmp.mpf_abs(x), y, bits)
    return libmp.mpf_neg(size) if negative(x) and odd else size


def _power_of_positive(x: Raw, y: Raw, bits: int) -> Raw:
    rough = libmp.mpf_mul(y, libmp.mpf_log(x, 64, _NEAREST), 64, _NEAREST)
    if libmp.mpf_gt(libmp.mpf_abs(rough), _EXP_LIMIT):
        return _beyond(rough)
    if y[2] >= 0 and magnitude(y) <= _EXACT_POWER.bit_length():
        return libmp.mpf_pow_int(x, libmp.to_int(y), bits, _NEAREST)
    # the exponent has up to 16 bits before the point, which the logarithm must have behind it
    logarithm = libmp.mpf_log(x, bits + 20, _NEAREST)
    return libmp.mpf_exp(libmp.mpf_mul(y, logarithm), bits, _NEAREST)


def _beyond(exponent: Raw) -> Raw:
    """exp of a number beyond the limit."""
    if negative(exponent):
        return libmp.fzero
    raise OperationFailed(FailureKind.OVERFLOW)


def _require(holds: bool) -> None:
    if not holds:
        raise OperationFailed(FailureKind.DOMAIN)


def _require_within_exp(x: Raw) -> None:
    if libmp.mpf_gt(libmp.mpf_abs(x), _EXP_LIMIT):
        raise OperationFailed(FailureKind.OVERFLOW)


def _positive(x: Raw) -> bool:
    return not negative(x) and x != libmp.fzero


def _within_one(x: Raw) -> bool:
    return bool(libmp.mpf_le(libmp.mpf_abs(x), libmp.fone))


def _exp(x: Raw, bits: int) -> Raw:
    if libmp.mpf_gt(libmp.mpf_abs(x), _EXP_LIMIT):
        return _beyond(x)
    return libmp.mpf_exp(x, bits, _NEAREST)


def _expm1(x: Raw, bits: int) -> Raw:
    if x == libmp.fzero:
        return x
    small = -magnitude(x)
    if small > bits:  # x + x**2/2, whose second term only tells on which side of x the value lies
        return libmp.mpf_add(x, libmp.mpf_shift(libmp.mpf_mul(x, x), -1), bits, _NEAREST)
    return libmp.mpf_sub(_exp(x, bits + max(small, 0) + 10), libmp.fone, bits, _NEAREST)


def _ln(x: Raw, bits: int) -> Raw:
    _require(_positive(x))
    return libmp.mpf_log(x, bits, _NEAREST)


def _log1p(x: Raw, bits: int) -> Raw:
    if x == libmp.fzero:
        return x
    if -magnitude(x) > bits:  # x - x**2/2
        return libmp.mpf_sub(x, libmp.mpf_shift(libmp.mpf_mul(x, x), -1), bits, _NEAREST)
    return _ln(libmp.mpf_add(libmp.fone, x), bits)  # the sum is exact


def _log10(x: Raw, bits: int) -> Raw:
    return libmp.mpf_div(_ln(x, bits + 10), libmp.mpf_ln10(bits + 10), bits, _NEAREST)


def _log2(x: Raw, bits: int) -> Raw:
    return libmp.mpf_div(_ln(x, bits + 10), libmp.mpf_ln2(bits + 10), bits, _NEAREST)


def _sqrt(x: Raw, bits: int) -> Raw:
    _require(not negative(x))
    return libmp.mpf_sqrt(x, bits, _NEAREST)


def _cbrt(x: Raw, bits: int) -> Raw:
    root = libmp.mpf_cbrt(libmp.mpf_abs(x), bits, _NEAREST)
    return libmp.mpf_neg(root) if negative(x) else root


def _asin(x: Raw, bits: int) -> Raw:
    _require(_within_one(x))
    return libmp.mpf_asin(x, bits, _NEAREST)


def _acos(x: Raw, bits: int) -> Raw:
    _require(_within_one(x))
    return libmp.mpf_acos(x, bits, _NEAREST)


def _acosh(x: Raw, bits: int) -> Raw:
    _require(bool(libmp.mpf_ge(x, libmp.fone)))
    return libmp.mpf_acosh(x, 2 * bits, _NEAREST)  # near 1 it is sqrt(2*(x - 1)): half of the digits cancel


def _atanh(x: Raw, bits: int) -> Raw:
    _require(bool(libmp.mpf_lt(libmp.mpf_abs(x), libmp.fone)))
    return libmp.mpf_atanh(x, bits, _NEAREST)


def _sinh(x: Raw, bits: int) -> Raw:
    _require_within_exp(x)
    return libmp.mpf_sinh(x, bits, _NEAREST)


def _cosh(x: Raw, bits: int) -> Raw:
    _require_within_exp(x)
    return libmp.mpf_cosh(x, bits, _NEAREST)


def _tanh(x: Raw, bits: int) -> Raw:
    if libmp.mpf_gt(libmp.mpf_abs(x), _EXP_LIMIT):
        return libmp.fnone if negative(x) else libmp.fone
    return libmp.mpf_tanh(x, bits, _NEAREST)


def _sign(x: Raw, _bits: int) -> Raw:
    return libmp.from_int(libmp.mpf_sign(x))


def _least(*arguments: Any) -> Raw:
    *numbers, _ = arguments
    least = numbers[0]
    for number in numbers[1:]:
        least = number if libmp.mpf_lt(number, least) else least
    return least


def _largest(*arguments: Any) -> Raw:
    *numbers, _ = arguments
    largest = numbers[0]
    for number in numbers[1:]:
        largest = number if libmp.mpf_gt(number, largest) else largest
    return largest


ELEMENTARY: dict[str, Elementary] = {
    "pi": lambda bits: libmp.mpf_pi(bits, _NEAREST),
    "sin": lambda x, bits: libmp.mpf_sin(x, bits, _NEAREST),
    "cos": lambda x, bits: libmp.mpf_cos(x, bits, _NEAREST),
    "tan": lambda x, bits: libmp.mpf_tan(x, bits, _NEAREST),
    "asin": _asin,
    "acos": _acos,
    "atan": lambda x, bits: libmp.mpf_atan(x, bits, _NEAREST),
    "atan2": lambda y, x, bits: libmp.mpf_atan2(y, x, bits, _NEAREST),
    "sinh": _sinh,
    "cosh": _cosh,
    "tanh": _tanh,
    "asinh": lambda x, bits: libmp.mpf_asinh(x, bits, _NEAREST),
    "acosh": _acosh,
    "atanh": _atanh,
    "exp": _exp,
    "expm1": _expm1,
    "ln": _ln,
    "log1p": _log1p,
    "log10": _log10,
    "log2": _log2,
    "sqrt": _sqrt,
    "cbrt": _cbrt,
    "hypot": lambda x, y, bits: libmp.mpf_hypot(x, y, bits, _NEAREST),
    "abs": lambda x, _bits: libmp.mpf_abs(x),
    "sign": _sign,
    "floor": lambda x, _bits: libmp.mpf_floor(x),
    "ceil": lambda x, _bits: libmp.mpf_ceil(x),
    "min": _least,
    "max": _largest,
}
