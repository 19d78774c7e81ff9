"""Multiprecision: `multiprecision:50` has the bits of 50 decimal digits and 8 more, ceil(N log2 10) + 8.

Numbers are those of a mpmath context of its own for each instance, so plain operators of step rules round to its
bits, and nothing global is set. Sums, products, quotients and square roots are correctly rounded; so are special
functions, through `arb` (`surefoot.equation.special`). Elementary functions are computed with 32 further bits, with
more where these do not decide, and rounded once. Inputs and literals are rounded once from their text (a literal with
the suffix `f` to binary32 first).

The range of exponents is bounded, so that no text can ask for endless work: beyond 2**65536 is `overflow`, below
2**-65536 is zero.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import Any, cast

from mpmath import libmp
from mpmath.ctx_mp import MPContext

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.multiprecision_functions import ELEMENTARY, EXPONENT_LIMIT, Raw, magnitude, power
from surefoot.equation.results import FailureKind, Real
from surefoot.equation.special import DEFINITIONS, MAX_BITS, settle, to_binary64
from surefoot.equation.tokens import is_hexadecimal, is_literal

LEAST_DIGITS = 15
MOST_DIGITS = 1000

_GUARD_BITS = 32
_DECIDING_BITS = 24
_NEAREST = "n"
# Beyond this power of ten a literal is out of range whatever its digits (2**65536 is about 10**19728).
_DECIMAL_LIMIT = 20_000
_CHUNK = 4000  # digits that Python turns into a whole number at once
_NOT_FINITE = {"inf": libmp.finf, "-inf": libmp.fninf, "nan": libmp.fnan}


class Multiprecision:
    """The arithmetic `multiprecision:N`. Public attribute `bits`: the precision."""

    def __init__(self, digits: int) -> None:
        """Args: digits: decimal digits, 15 to 1000. Raises ValueError outside that."""
        if not LEAST_DIGITS <= digits <= MOST_DIGITS:
            raise ValueError(f"{digits} digits are not between {LEAST_DIGITS} and {MOST_DIGITS}")
        self.kind = f"multiprecision:{digits}"
        self.bits = math.ceil(digits * math.log2(10)) + 8
        self._digits = digits
        self._prefix = f"mp{digits}:"
        self._context = MPContext()
        self._context.prec = self.bits
        elementary = {name: self._elementary(function) for name, function in ELEMENTARY.items()}
        special = {name: self._special(name) for name in DEFINITIONS}
        self.functions: Mapping[str, Callable[..., Real]] = MappingProxyType(elementary | special)

    def literal(self, text: str, single: bool) -> Real:
        """The number nearest to a literal; to its binary32 when `single`.

        Raises:
            OperationFailed: overflow.
            ValueError: the text is no literal.
        """
        if single:
            return self._number(libmp.from_float(BINARY64.literal(text, single=True)))
        if not is_literal(text):
            raise ValueError(f"{text!r} is not a literal")
        read = _hexadecimal if is_hexadecimal(text) else _decimal
        return self._number(read(text, self.bits))

    def integer(self, value: int) -> Real:
        return self._number(libmp.from_int(value))

    def add(self, a: Real, b: Real) -> Real:
        return self._number(libmp.mpf_add(_raw(a), _raw(b), self.bits, _NEAREST))

    def subtract(self, a: Real, b: Real) -> Real:
        return self._number(libmp.mpf_sub(_raw(a), _raw(b), self.bits, _NEAREST))

    def multiply(self, a: Real, b: Real) -> Real:
        return self._number(libmp.mpf_mul(_raw(a), _raw(b), self.bits, _NEAREST))

    def divide(self, a: Real, b: Real) -> Real:
        if b == 0:
            raise OperationFailed(FailureKind.DIVISION_BY_ZERO)
        return self._number(libmp.mpf_div(_raw(a), _raw(b), self.bits, _NEAREST))

    def power(self, a: Real, b: Real) -> Real:
        return self._once(power, _raw(a), _raw(b))

    def negate(self, a: Real) -> Real:
        return self._number(libmp.mpf_neg(_raw(a)))

    def encode(self, x: Real) -> str:
        raw = _raw(x)
        for text, special in _NOT_FINITE.items():
            if raw == special:
                return self._prefix + text
        text = ""
        for digits in range(self._digits, libmp.repr_dps(self.bits) + 2):
            text = libmp.to_str(raw, digits)
            if _decimal(text, self.bits) == raw:
                break
        return self._prefix + text

    def decode(self, text: str) -> Real:
        """The inverse of encode. Raises ValueError for any text that encode does not give."""
        digits = text.removeprefix(self._prefix)
        raw = _NOT_FINITE.get(digits, libmp.fnan)
        if is_literal(digits) and not is_hexadecimal(digits):
            raw = _decimal(digits, self.bits)
        value = self._made(raw)
        if self.encode(value) != text:
            raise ValueError(f"{text!r} is not the record text of {self.kind}")
        return value

    def spacing(self, x: Real) -> Real:
        exponent = magnitude(_raw(x)) - self.bits if x else -EXPONENT_LIMIT
        return self._made(libmp.from_man_exp(1, exponent))

    def approximate(self, x: Real) -> float:
        sign, mantissa, exponent, _ = _raw(x)
        if not mantissa:
            return float(x)
        return to_binary64(-int(mantissa) if sign else int(mantissa), int(exponent))

    def _made(self, raw: Raw) -> Real:
        return cast(Real, self._context.make_mpf(raw))

    def _number(self, raw: Raw) -> Real:
        """The number, rounded to the bits of the arithmetic. Raises OperationFailed when it is beyond the range."""
        if not raw[1]:
            if raw == libmp.fzero:
                return self._made(raw)
            raise OperationFailed(FailureKind.NOT_A_NUMBER if raw == libmp.fnan else FailureKind.OVERFLOW)
        rounded = libmp.mpf_pos(raw, self.bits, _NEAREST)
        if magnitude(rounded) > EXPONENT_LIMIT:
            raise OperationFailed(FailureKind.OVERFLOW)
        return self._made(libmp.fzero if magnitude(rounded) <= -EXPONENT_LIMIT else rounded)

    def _elementary(self, function: Callable[..., Raw]) -> Callable[..., Real]:
        return lambda *arguments: self._once(function, *map(_raw, arguments))

    def _once(self, function: Callable[..., Raw], *arguments: Raw) -> Real:
        """The value of an elementary function, rounded once; with more bits where the guard bits leave that open."""
        value = function(*arguments, self.bits + _GUARD_BITS)
        if _beside_midpoint(value, self.bits):
            value = function(*arguments, 3 * self.bits + _GUARD_BITS)
        return self._number(value)

    def _special(self, name: str) -> Callable[..., Real]:
        first_bits = self.bits + _GUARD_BITS
        return lambda *arguments: self._number(
            settle(name, [_exact(x) for x in arguments], self._from_exact, first_bits, 4 * first_bits + MAX_BITS)
        )

    def _from_exact(self, mantissa: int, exponent: int) -> Raw:
        """mantissa * 2**exponent rounded; infinite or zero beyond the range."""
        raw = libmp.from_man_exp(mantissa, exponent, self.bits, _NEAREST)
        if not mantissa or magnitude(raw) <= -EXPONENT_LIMIT:
            return libmp.fzero
        if magnitude(raw) > EXPONENT_LIMIT:
            return libmp.fninf if mantissa < 0 else libmp.finf
        return raw


def _beside_midpoint(raw: Raw, bits: int) -> bool:
    """Whether a value lies so near the middle of two numbers of so many bits that its last digits decide."""
    surplus = raw[3] - bits
    if surplus <= 0:
        return False
    rest = int(raw[1]) & ((1 << surplus) - 1)
    return bool(abs(rest - (1 << (surplus - 1))) << _DECIDING_BITS <= 1 << surplus)


def _raw(x: Any) -> Raw:
    return x._mpf_


def _exact(x: Any) -> tuple[int, int]:
    sign, mantissa, exponent, _ = x._mpf_
    return (-int(mantissa) if sign else int(mantissa)), int(exponent)


def _decimal(text: str, bits: int) -> Raw:
    """A decimal literal, rounded once. Infinite or zero when it is far beyond the range."""
    digits, _, exponent_text = text.lower().partition("e")
    whole, _, fraction = digits.lstrip("+-").partition(".")
    significant = (whole + fraction).lstrip("0")
    if not significant:
        return libmp.fzero
    exponent = _bounded(exponent_text) - len(fraction)
    if len(significant) + exponent < -_DECIMAL_LIMIT:
        return libmp.fzero
    if len(significant) + exponent > _DECIMAL_LIMIT:
        return libmp.fninf if text.startswith("-") else libmp.finf
    mantissa = 0
    for start in range(0, len(significant), _CHUNK):
        chunk = significant[start : start + _CHUNK]
        mantissa = mantissa * 10 ** len(chunk) + int(chunk)
    mantissa = -mantissa if text.startswith("-") else mantissa
    return libmp.from_rational(mantissa * 10 ** max(exponent, 0), 10 ** max(-exponent, 0), bits, _NEAREST)


def _hexadecimal(text: str, bits: int) -> Raw:
    """A hexadecimal literal, rounded once."""
    digits, _, exponent_text = text.lower().lstrip("+-").removeprefix("0x").partition("p")
    whole, _, fraction = digits.partition(".")
    mantissa = int(whole + fraction, 16)
    mantissa = -mantissa if text.startswith("-") else mantissa
    return libmp.from_man_exp(mantissa, _bounded(exponent_text) - 4 * len(fraction), bits, _NEAREST)


def _bounded(exponent_text: str) -> int:
    """The exponent of a literal, cut to nine digits: beyond that the literal is out of range anyway."""
    digits = exponent_text.lstrip("+-").lstrip("0")
    exponent = int(digits or "0") if len(digits) <= 9 else 10**9
    return -exponent if exponent_text.startswith("-") else exponent
