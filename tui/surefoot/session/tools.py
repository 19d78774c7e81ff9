"""What the numbers of a run are written into the record and read from it with."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from typing import cast

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.results import Real
from surefoot.methods.contract import Method
from surefoot.methods.table import method_of
from surefoot.session.state import Run


@dataclass(frozen=True, slots=True)
class Tools:
    """A method and an arithmetic.

    Attributes:
        reading: the arithmetic as far as decoding goes. For binary64 it is `float`, to the same bits and three times
            as fast; that a text is also the one that would be written is for recomputing to find.
    """

    method: Method
    arithmetic: Arithmetic
    reading: Arithmetic


@dataclass(frozen=True, slots=True)
class _Reading:
    kind: str
    decode: Callable[[str], Real]


def _binary64(text: str) -> float:
    if type(text) is not str:
        raise TypeError(f"{text!r} is no text")
    return float(text)


@cache
def tools_for(method: str, arithmetic: str) -> Tools:
    """The method and the arithmetic of these codes. Raises PlanError or ProblemError when there are none."""
    chosen = arithmetic_of(arithmetic)
    decode = _binary64 if chosen is BINARY64 else chosen.decode
    return Tools(method_of(method), chosen, cast(Arithmetic, _Reading(chosen.kind, decode)))


def tools_of(run: Run) -> Tools:
    return tools_for(run.plan.method, run.plan.arithmetic)
