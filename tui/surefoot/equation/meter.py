"""The one counter of evaluations: by what was evaluated, and why."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal, TypeAlias

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.function import Function
from surefoot.equation.results import EvaluationFailed, Purpose, Real, Result, Stopped

What: TypeAlias = Literal["f", "derivative", "g"]


@dataclass(frozen=True, slots=True)
class Counts:
    """Evaluations made for one purpose. A failed one counts, one that was stopped before it began does not."""

    f: int = 0
    derivative: int = 0
    g: int = 0

    @property
    def total(self) -> int:
        return self.f + self.derivative + self.g


class Meter:
    """Evaluates a function and counts; every evaluation of a run goes through here."""

    def __init__(self, function: Function, stop: Callable[[], bool] | None = None) -> None:
        """`stop` is asked before each evaluation; once it says True the evaluation is Stopped."""
        self.function = function
        self._stop = stop
        self._counts: dict[tuple[Purpose, What], int] = {}

    def evaluate(self, x: Real, purpose: Purpose, what: What = "f", order: int = 1) -> Result:
        """The value at x, or why there is none. `order` is that of the derivative. Numeric trouble does not raise."""
        try:
            return self._value(x, purpose, what, order)
        except EvaluationFailed as failed:
            return failed.result

    def calls(self, purpose: Purpose) -> Calls:
        """What a step rule may call, counted under one purpose."""
        return Calls(self, purpose)

    def spent(self, purpose: Purpose) -> Counts:
        """The evaluations made for a purpose so far."""
        return Counts(*(self._counts.get((purpose, what), 0) for what in ("f", "derivative", "g")))

    def _value(self, x: Real, purpose: Purpose, what: What, order: int = 1) -> Real:
        """The value at x, counted. Raises EvaluationFailed."""
        if self._stop is not None and self._stop():
            raise EvaluationFailed(Stopped())
        self._counts[purpose, what] = self._counts.get((purpose, what), 0) + 1
        if what == "derivative":
            return self.function.derivative(x, order)
        return self.function.value(x) if what == "f" else self.function.g(x)


@dataclass(frozen=True, slots=True)
class Calls:
    """The functions of a meter under one purpose; each call raises EvaluationFailed when there is no finite value."""

    _meter: Meter
    _purpose: Purpose

    @property
    def arithmetic(self) -> Arithmetic:
        return self._meter.function.arithmetic

    def f(self, x: Real) -> Real:
        """The residual at x."""
        return self._meter._value(x, self._purpose, "f")

    def derivative(self, x: Real, order: int = 1) -> Real:
        """The derivative of the residual at x."""
        return self._meter._value(x, self._purpose, "derivative", order)

    def g(self, x: Real) -> Real:
        """The iteration function at x."""
        return self._meter._value(x, self._purpose, "g")
