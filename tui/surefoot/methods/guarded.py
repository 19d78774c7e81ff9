"""Numbers with operators, for rules whose formulas are long enough to be read as such.

Each operator is one operation of the run's arithmetic: it rounds once, and raises OperationFailed where it has no
finite result. Comparisons are exact. Whole numbers of Python may stand beside them; other Python floats may not.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import TypeAlias

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.results import Real

Operand: TypeAlias = "Guarded | int"


class Guarded:
    """A number of an arithmetic. `value` is the number itself."""

    __slots__ = ("arithmetic", "value")

    def __init__(self, arithmetic: Arithmetic, value: Real) -> None:
        self.arithmetic, self.value = arithmetic, value

    def __add__(self, other: Operand) -> Guarded:
        return Guarded(self.arithmetic, self.arithmetic.add(self.value, self._other(other)))

    def __sub__(self, other: Operand) -> Guarded:
        return Guarded(self.arithmetic, self.arithmetic.subtract(self.value, self._other(other)))

    def __mul__(self, other: Operand) -> Guarded:
        return Guarded(self.arithmetic, self.arithmetic.multiply(self.value, self._other(other)))

    def __truediv__(self, other: Operand) -> Guarded:
        return Guarded(self.arithmetic, self.arithmetic.divide(self.value, self._other(other)))

    def __rsub__(self, other: int) -> Guarded:
        return Guarded(self.arithmetic, self.arithmetic.subtract(self.arithmetic.integer(other), self.value))

    def __rmul__(self, other: int) -> Guarded:
        return Guarded(self.arithmetic, self.arithmetic.multiply(self.arithmetic.integer(other), self.value))

    def __neg__(self) -> Guarded:
        return Guarded(self.arithmetic, self.arithmetic.negate(self.value))

    def __abs__(self) -> Guarded:
        return Guarded(self.arithmetic, abs(self.value))

    def __lt__(self, other: Operand) -> bool:
        return bool(self.value < self._other(other))

    def __le__(self, other: Operand) -> bool:
        return bool(self.value <= self._other(other))

    def __gt__(self, other: Operand) -> bool:
        return bool(self.value > self._other(other))

    def __ge__(self, other: Operand) -> bool:
        return bool(self.value >= self._other(other))

    def sqrt(self) -> Guarded:
        """The square root. Raises OperationFailed below zero."""
        return Guarded(self.arithmetic, self.arithmetic.functions["sqrt"](self.value))

    def power(self, exponent: Guarded) -> Guarded:
        """This number to a power."""
        return Guarded(self.arithmetic, self.arithmetic.power(self.value, exponent.value))

    def _other(self, other: Operand) -> Real:
        return other.value if isinstance(other, Guarded) else self.arithmetic.integer(other)


def guarded(arithmetic: Arithmetic, numbers: Iterable[Real]) -> tuple[Guarded, ...]:
    """The numbers, each with operators."""
    return tuple([Guarded(arithmetic, number) for number in numbers])


def rounding_unit(arithmetic: Arithmetic) -> Guarded:
    """eps: the distance from 1 to the next larger number."""
    return Guarded(arithmetic, arithmetic.spacing(arithmetic.integer(1)))
