"""One number as text: to a number of significant digits, in short form, with its unit.

A number may come as a float, a binary32 of numpy, a whole number, or as text: record text (`0.1`, `f32:0.1`,
`mp50:...`), which is how multiprecision keeps its digits, or words where there is no number. A number of any other type
is taken as its nearest binary64. Not-a-number, infinities and words are shown as words. Every rounding is of the exact
value, half to even.
"""

from __future__ import annotations

import math
import re
import struct
from dataclasses import dataclass
from decimal import Decimal, InvalidOperation
from typing import Final, TypeAlias

Number: TypeAlias = float | str | None

BINARY64_DIGITS: Final = 17
"""Significant digits that tell a binary64 number from its neighbours."""

BINARY32_DIGITS: Final = 9

_RECORD_TEXT: Final = re.compile(
    r"(?:(?P<precision>f32|mp[0-9]{1,6}):)?"
    r"(?P<number>[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?|[+-]?inf|nan)"
)


@dataclass(frozen=True, slots=True)
class Exact:
    """A finite number: its exact value, and the significant digits that its arithmetic carries."""

    value: Decimal
    digits: int = BINARY64_DIGITS


def read(number: Number) -> Exact | str:
    """A number for writing, or the word that stands in its place; None gives the empty word. Never raises."""
    if number is None:
        return ""
    if isinstance(number, str):
        return _read_text(number)
    digits = BINARY32_DIGITS if type(number).__name__ == "float32" else BINARY64_DIGITS
    if isinstance(number, int):
        return Exact(Decimal(number), digits)
    try:
        nearest = float(number)
    except (TypeError, ValueError, OverflowError):
        return str(number)
    return Exact(Decimal(nearest), digits) if math.isfinite(nearest) else str(nearest)


def significant(number: Number, digits: int | None = None) -> str:
    """A number to so many significant digits, zeros at the end kept: `13.46`, `0.00222`, `2.11e-05`.

    Args:
        number: the number; words are given back as they are.
        digits: significant digits, at least 1; None for all that its arithmetic carries (17 in binary64).
    """
    exact = read(number)
    if isinstance(exact, str):
        return exact
    if exact.value.is_zero():
        return zero(exact.value)
    wanted = max(1, exact.digits if digits is None else digits)
    mantissa, exponent = scientific(exact.value, wanted)
    if -5 < exponent < wanted:
        # The rounded value is written, so that 9.996 to three digits is 10.0 and not 10.00.
        return fixed(Decimal(f"{mantissa}e{exponent}"), wanted - 1 - exponent)
    return f"{mantissa}e{exponent:+03d}"


def all_digits(number: Number) -> str:
    """Every digit that its arithmetic carries: 17 for binary64, enough to read back the same bits."""
    return significant(number)


def short(number: Number, digits: int = 3) -> str:
    """The short form of a residual or a step, always with its sign: `+2.11e-05`; exactly zero is `0`."""
    exact = read(number)
    if isinstance(exact, str):
        return exact
    if exact.value.is_zero():
        return zero(exact.value)
    mantissa, exponent = scientific(exact.value, max(1, digits))
    sign = "" if mantissa.startswith("-") else "+"
    return f"{sign}{mantissa}e{exponent:+03d}"


def order(number: float | None) -> str:
    """An observed order of convergence, `2.0`; empty where none was measured."""
    if number is None or math.isnan(number):
        return ""
    return f"{number:.1f}" if abs(number) < 100 else short(number, 1)


def ratio(number: float | None) -> str:
    """A contraction ratio to two significant digits, `0.41`; empty where none was measured."""
    return "" if number is None or math.isnan(number) else significant(number, 2)


def with_unit(number: str, unit: str) -> str:
    """A number and its unit as given, `13.46 m2/s`; no prefix is ever changed. A pure number has no unit or `1`."""
    return number if unit in ("", "1") or not number else f"{number} {unit}"


def scientific(value: Decimal, digits: int) -> tuple[str, int]:
    """The mantissa with its sign to so many digits, and the exponent of ten, of a value that is not zero."""
    mantissa, exponent = f"{value:.{digits - 1}e}".split("e")
    return mantissa, int(exponent)


def fixed(value: Decimal, decimals: int) -> str:
    """A value with so many decimals and no exponent."""
    return f"{value:.{max(0, decimals)}f}"


def zero(value: Decimal) -> str:
    """Exactly zero: told from a number that only rounds to it, its sign kept."""
    return "-0" if value.is_signed() else "0"


def _read_text(text: str) -> Exact | str:
    record = _RECORD_TEXT.fullmatch(text)
    if record is None:
        return text
    precision, number = record["precision"] or "", record["number"]
    if number.lstrip("+-") in ("inf", "nan"):
        return number
    if precision.startswith("mp"):
        try:
            return Exact(Decimal(number), max(1, int(precision[2:])))
        except InvalidOperation:  # an exponent beyond what any decimal can have
            return number
    if precision == "f32":
        return Exact(Decimal(_binary32(float(number))), BINARY32_DIGITS)
    return read(float(number))


def _binary32(number: float) -> float:
    """The nearest binary32. A record's text is the shortest that reads back, so going through binary64 is exact."""
    try:
        return float(struct.unpack("<f", struct.pack("<f", number))[0])
    except OverflowError:
        return number
