"""From the text of `arithmetic.kind` to the arithmetic. Modules that need numpy or mpmath are loaded when chosen."""

from __future__ import annotations

import re

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.functions import nearest
from surefoot.errors import ProblemError

_PLACE = "arithmetic.kind"
_MULTIPRECISION = re.compile(r"multiprecision:([0-9]{1,6})")


def arithmetic_of(kind: str) -> Arithmetic:
    """The arithmetic of that kind: `binary64`, `binary32` or `multiprecision:N`, N decimal digits from 15 to 1000.

    Raises:
        ProblemError: there is none; the message names the nearest, or what is accepted.
    """
    if kind == "binary64":
        return BINARY64
    if kind == "binary32":
        from surefoot.equation.binary32 import BINARY32

        return BINARY32
    if match := _MULTIPRECISION.fullmatch(kind):
        from surefoot.equation.multiprecision import Multiprecision

        try:
            return Multiprecision(int(match[1]))
        except ValueError as error:
            raise ProblemError(str(error), place=_PLACE) from None
    raise ProblemError(_unknown(kind), place=_PLACE)


def _unknown(kind: str) -> str:
    stem = kind.partition(":")[0]
    if stem == "multiprecision":
        return "state the decimal digits: multiprecision:50"
    near = nearest(stem, ("binary64", "binary32", "multiprecision"))
    near = "multiprecision:50" if near == "multiprecision" else near
    shown = repr(kind[:40])
    if near:
        return f"unknown arithmetic {shown} (nearest: {near})"
    return f"unknown arithmetic {shown}; accepted: binary64, binary32, multiprecision:50 (decimal digits)"
