"""The contract of an arithmetic: what numbers are, how each operation rounds, how they are written in a record.

One file an arithmetic: `binary64`, `binary32`, `multiprecision`; `vector` (numpy arrays), complex and interval
arithmetics satisfy the `Operations` part, since no run is recorded in them.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Protocol

from surefoot.equation.results import Real


class OperationFailed(Exception):  # a value in exception's clothes, caught where the subexpression is known
    """Raised by an operation that has no finite result; `kind` is a `FailureKind`."""

    def __init__(self, kind: str) -> None:
        self.kind = kind
        super().__init__(kind)


class Operations(Protocol):
    """The operations that evaluating a tree needs. Each rounds once, to the numbers of the arithmetic.

    An operation whose result is not finite raises OperationFailed; the evaluator adds which subexpression it was.
    """

    @property
    def functions(self) -> Mapping[str, Callable[..., Real]]:
        """Name in the equation language -> implementation; a missing name is `unavailable`.

        A constant (`pi`) is a function without arguments; `min` and `max` take two or more.
        """

    def literal(self, text: str, single: bool) -> Real:
        """The number nearest to a literal: of the arithmetic, or of binary32 first when `single`."""

    def add(self, a: Real, b: Real) -> Real: ...
    def subtract(self, a: Real, b: Real) -> Real: ...
    def multiply(self, a: Real, b: Real) -> Real: ...
    def divide(self, a: Real, b: Real) -> Real: ...
    def power(self, a: Real, b: Real) -> Real: ...
    def negate(self, a: Real) -> Real: ...


class Arithmetic(Operations, Protocol):
    """An arithmetic that runs are made in."""

    @property
    def kind(self) -> str:
        """The text of `arithmetic.kind` in the problem file: `binary64`, `binary32`, `multiprecision:50`."""

    def integer(self, value: int) -> Real:
        """A small whole number, exactly."""

    def encode(self, x: Real) -> str:
        """Record text from which `decode` gives the same bits back (`0.1`, `-0.0`, `f32:0.1`, `mp50:...`)."""

    def decode(self, text: str) -> Real:
        """The inverse of encode. Raises ValueError for text of another arithmetic."""

    def spacing(self, x: Real) -> Real:
        """Distance from |x| to the next larger number of the arithmetic (one unit in the last place)."""

    def approximate(self, x: Real) -> float:
        """The nearest binary64, for pictures; infinite when x is beyond its range."""
