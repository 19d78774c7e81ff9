"""Special functions, correctly rounded: the same bits on every machine.

A value comes from ball arithmetic (Johansson 2017, "Arb: efficient arbitrary-precision midpoint-radius interval
arithmetic", IEEE Trans. Computers 66(8)): the precision is raised until both ends of the ball round to the same
number, which is then the true value rounded once. Definitions follow ISO C (`erf`, `tgamma`, `lgamma`) and ISO C++
(`cyl_bessel_j` and its kin, `expint` = Ei); where the standard stops at x >= 0 and the function is still real
(integer order), the real value is given.

The work is bounded: a Bessel function of an order beyond `MAX_ORDER` (in proportion less where more than `FIRST_BITS`
are asked for), and what is not decided at the most bits, is `not_a_number`. In binary64 the latter happens only for
orders of some thousands with an argument of like size, whose series cancel beyond the bound.
"""

from __future__ import annotations

import math
import threading
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from typing import Any, TypeAlias, TypeVar

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.results import FailureKind

FIRST_BITS = 96
MAX_BITS = 6144
MAX_ORDER = 10_000
_NEARLY_WHOLE = 64

Ball: TypeAlias = Any  # flint.arb
Exact: TypeAlias = tuple[int, int]  # mantissa, exponent: the number mantissa * 2**exponent
Number = TypeVar("Number")

# flint keeps one precision for the whole process, and pictures are sampled beside a run.
_PRECISION = threading.RLock()


@contextmanager
def arb_precision(bits: int) -> Iterator[None]:
    """The precision of flint, set for the time of the block and put back after it; one thread at a time."""
    from flint import ctx

    with _PRECISION:
        before = ctx.prec
        ctx.prec = bits
        try:
            yield
        finally:
            ctx.prec = before


def evaluate(name: str, *arguments: float) -> float:
    """The binary64 nearest to the true value of a special function (ties to even).

    Args:
        name: a key of `DEFINITIONS`.
        arguments: finite numbers, in the order of the equation language: `cyl_bessel_j(nu, x)`.

    Raises:
        OperationFailed: `domain` where there is no real value (poles included), `overflow`, `not_a_number` when the
            bound on the work was reached or an argument is not finite.
    """
    if not all(math.isfinite(argument) for argument in arguments):
        raise OperationFailed(FailureKind.NOT_A_NUMBER)
    value = settle(name, arguments, to_binary64, FIRST_BITS, MAX_BITS)
    if math.isinf(value):
        raise OperationFailed(FailureKind.OVERFLOW)
    return value


def settle(
    name: str,
    arguments: Sequence[float | Exact],
    rounded: Callable[[int, int], Number],
    first_bits: int,
    max_bits: int,
) -> Number:
    """The value of a special function, rounded once to the numbers of any arithmetic.

    Args:
        name: a key of `DEFINITIONS`.
        arguments: exact numbers.
        rounded: the number nearest to mantissa * 2**exponent, monotone; an infinity beyond the largest.
        first_bits: precision of the first attempt; it doubles from there, up to `max_bits`.
        max_bits: bound on the work.

    Raises:
        OperationFailed: `domain`, or `not_a_number` when `max_bits` do not decide.
    """
    from flint import arb

    definition = DEFINITIONS[name]
    balls = [arb(argument) for argument in arguments]
    if len(balls) == 2 and not abs(balls[0]) * first_bits <= MAX_ORDER * FIRST_BITS:
        raise OperationFailed(FailureKind.NOT_A_NUMBER)
    bits = _bits_for_k(balls[0], balls[1], first_bits) if name == "cyl_bessel_k" else first_bits
    while bits <= max_bits:
        with arb_precision(bits):
            ball = definition(*balls)
            ends = (ball.lower(), ball.upper()) if ball.is_finite() else ()
        if ends:
            low, high = (rounded(*_exact(end)) for end in ends)
            if low == high:
                return high
        bits *= 2
    raise OperationFailed(FailureKind.NOT_A_NUMBER)


def to_binary64(mantissa: int, exponent: int) -> float:
    """mantissa * 2**exponent, rounded once to binary64, subnormal numbers included; infinite beyond the largest."""
    magnitude = exponent + mantissa.bit_length()
    sign = -1.0 if mantissa < 0 else 1.0
    if magnitude > 1024:
        return sign * math.inf
    if magnitude < -1075:
        return sign * 0.0
    try:
        # the division of whole numbers rounds once, also into the subnormal range
        return float(mantissa << exponent) if exponent >= 0 else mantissa / (1 << -exponent)
    except OverflowError:  # it rounds up to 2**1024
        return sign * math.inf


def _exact(end: Ball) -> Exact:
    mantissa, exponent = end.man_exp()
    return int(mantissa), int(exponent)


def _bits_for_k(nu: Ball, x: Ball, bits: int) -> int:
    """Bits with which K needs no numerical integration, its slow way out when more than half of the bits cancel.

    Cancelled are exp(2x), where the asymptotic series does not reach, and the nearness of the order to a whole number.
    """
    if not 0 < x < bits:
        return bits
    return max(bits, 2 * (3 * math.ceil(float(x)) + min(_nearness(nu), _NEARLY_WHOLE)) + 64)


def _nearness(order: Ball) -> int:
    """The n by which an order lies about 2**-n beside a whole number; 0 for a whole number itself."""
    mantissa, exponent = _exact(order)
    if exponent >= 0:
        return 0
    fraction = mantissa % (1 << -exponent)
    return -exponent - min(fraction, (1 << -exponent) - fraction).bit_length()


def _whole(x: Ball) -> bool:
    return bool(x.is_integer())


def _require(holds: bool) -> None:
    if not holds:
        raise OperationFailed(FailureKind.DOMAIN)


def _tgamma(x: Ball) -> Ball:
    _require(x > 0 or not _whole(x))
    return x.gamma()


def _lgamma(x: Ball) -> Ball:
    """ln |gamma(x)|."""
    _require(x > 0 or not _whole(x))
    return x.lgamma() if x > 0 else abs(x.gamma()).log()


def _digamma(x: Ball) -> Ball:
    _require(x > 0 or not _whole(x))
    return x.digamma()


def _normal_cdf(x: Ball) -> Ball:
    """erfc(-x/sqrt(2))/2: without cancellation in the lower tail."""
    return (-x / type(x)(2).sqrt()).erfc() / 2


def _cyl_bessel_j(nu: Ball, x: Ball) -> Ball:
    _require(_whole(nu) or x > 0 or (x == 0 and nu > 0))
    return x.bessel_j(nu)


def _cyl_bessel_i(nu: Ball, x: Ball) -> Ball:
    _require(_whole(nu) or x > 0 or (x == 0 and nu > 0))
    return x.bessel_i(abs(nu) if _whole(nu) else nu)


def _cyl_neumann(nu: Ball, x: Ball) -> Ball:
    _require(x > 0)
    return x.bessel_y(nu)


def _cyl_bessel_k(nu: Ball, x: Ball) -> Ball:
    from flint import ctx

    _require(x > 0)
    nu = abs(nu)
    if _nearness(nu) <= _NEARLY_WHOLE or x > ctx.prec:
        return x.bessel_k(nu)
    # the definition itself: DLMF 10.27.4
    return (x.bessel_i(-nu) - x.bessel_i(nu)) * type(x).pi() / (2 * nu.sin_pi())


def _expint(x: Ball) -> Ball:
    _require(x != 0)
    return x.ei()


def _exp_integral_e1(x: Ball) -> Ball:
    _require(x > 0)
    return x.expint(1)


def _cos_integral(x: Ball) -> Ball:
    _require(x > 0)
    return x.ci()


DEFINITIONS: dict[str, Callable[..., Ball]] = {
    "erf": lambda x: x.erf(),
    "erfc": lambda x: x.erfc(),
    "tgamma": _tgamma,
    "lgamma": _lgamma,
    "digamma": _digamma,
    "normal_cdf": _normal_cdf,
    "cyl_bessel_j": _cyl_bessel_j,
    "cyl_neumann": _cyl_neumann,
    "cyl_bessel_i": _cyl_bessel_i,
    "cyl_bessel_k": _cyl_bessel_k,
    "expint": _expint,
    "exp_integral_e1": _exp_integral_e1,
    "cos_integral": _cos_integral,
    "sin_integral": lambda x: x.si(),
    "airy_ai": lambda x: x.airy_ai(),
    "airy_bi": lambda x: x.airy_bi(),
}
