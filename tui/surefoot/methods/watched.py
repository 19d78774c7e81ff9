"""The functions of a rule, with a memory of what was asked last: so that a failure can be told with its place."""

from __future__ import annotations

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.results import Real
from surefoot.methods.contract import Functions


class Watched:
    """Passes every call on. `what` and `x` are those of the last one; before the first there are none to read."""

    __slots__ = ("_functions", "arithmetic", "what", "x")

    arithmetic: Arithmetic
    what: str
    x: Real

    def __init__(self, functions: Functions) -> None:
        self._functions = functions
        self.arithmetic = functions.arithmetic

    def f(self, x: Real) -> Real:
        """The residual at x."""
        self.what, self.x = "the residual", x
        return self._functions.f(x)

    def derivative(self, x: Real, order: int = 1) -> Real:
        """The derivative of the residual at x."""
        self.what, self.x = "the derivative", x
        return self._functions.derivative(x, order)

    def g(self, x: Real) -> Real:
        """The iteration function at x."""
        self.what, self.x = "g", x
        return self._functions.g(x)
