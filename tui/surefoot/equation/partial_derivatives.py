"""Partial derivatives of the functions of the equation language, over the symbols of a bridge to sympy.

Each rule is written in the form that loses least in floating point: (1 - u)*(1 + u) for 1 - u^2, a recurrence of Bessel
functions that needs no negative order, 1 + tan(u)^2 for a tangent. Source of the formulas: NIST Handbook of
Mathematical Functions (2010), chapters 4-7 and 10; from memory.
"""
# ruff: noqa: ARG005 - every rule of the table takes the same three arguments

from __future__ import annotations

from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import Any, Protocol, TypeAlias

Symbolic: TypeAlias = Any  # an expression of sympy


class Maker(Protocol):
    """Makes what the rules are written in."""

    def call(self, function: str, *arguments: Symbolic) -> Symbolic:
        """A function of the language, left as it is."""

    def power(self, base: Symbolic, exponent: Symbolic) -> Symbolic:
        """base^exponent, left as it is."""

    def constant(self, text: str) -> Symbolic:
        """An expression of the language that does not depend on the unknown."""


Rule: TypeAlias = Callable[[Symbolic, Symbolic, Maker], Symbolic]

# The argument u, the function v at u, and the maker.
_OF_ONE: Mapping[str, Rule] = MappingProxyType(
    {
        "sin": lambda u, v, make: make.call("cos", u),
        "cos": lambda u, v, make: -make.call("sin", u),
        "tan": lambda u, v, make: 1 + v**2,
        "asin": lambda u, v, make: 1 / make.call("sqrt", (1 - u) * (1 + u)),
        "acos": lambda u, v, make: -1 / make.call("sqrt", (1 - u) * (1 + u)),
        "atan": lambda u, v, make: 1 / (1 + make.power(u, 2)),
        "sinh": lambda u, v, make: make.call("cosh", u),
        "cosh": lambda u, v, make: make.call("sinh", u),
        "tanh": lambda u, v, make: 1 - v**2,
        "asinh": lambda u, v, make: 1 / make.call("hypot", 1, u),
        "acosh": lambda u, v, make: 1 / make.call("sqrt", (u - 1) * (u + 1)),
        "atanh": lambda u, v, make: 1 / ((1 - u) * (1 + u)),
        "exp": lambda u, v, make: v,
        "expm1": lambda u, v, make: make.call("exp", u),
        "ln": lambda u, v, make: 1 / u,
        "log1p": lambda u, v, make: 1 / (1 + u),
        "log10": lambda u, v, make: 1 / (u * make.constant("ln(10)")),
        "log2": lambda u, v, make: 1 / (u * make.constant("ln(2)")),
        "cbrt": lambda u, v, make: 1 / (3 * v**2),
        "erf": lambda u, v, make: 2 * make.call("exp", -make.power(u, 2)) / make.constant("sqrt(pi)"),
        "erfc": lambda u, v, make: -2 * make.call("exp", -make.power(u, 2)) / make.constant("sqrt(pi)"),
        "normal_cdf": lambda u, v, make: make.call("exp", -make.power(u, 2) / 2) / make.constant("sqrt(2*pi)"),
        "tgamma": lambda u, v, make: v * make.call("digamma", u),
        "lgamma": lambda u, v, make: make.call("digamma", u),
        "expint": lambda u, v, make: make.call("exp", u) / u,
        "exp_integral_e1": lambda u, v, make: -make.call("exp", -u) / u,
        "cos_integral": lambda u, v, make: make.call("cos", u) / u,
        "sin_integral": lambda u, v, make: make.call("sin", u) / u,
    }
)

# By order: (sign of the term of lower order, sign of the term of higher order) in f' = (f_below +- f_above)/2.
_BESSEL: Mapping[str, tuple[int, int]] = MappingProxyType(
    {"cyl_bessel_j": (1, -1), "cyl_neumann": (1, -1), "cyl_bessel_i": (1, 1), "cyl_bessel_k": (-1, -1)}
)

WITHOUT_DERIVATIVE: Mapping[str, str] = MappingProxyType(
    {
        "digamma": "its derivative, the trigamma function, is not in the language",
        "airy_ai": "the derivative of an Airy function is not in the language",
        "airy_bi": "the derivative of an Airy function is not in the language",
    }
)
"""Functions whose derivative cannot be written in the language, and why."""

KINKED = frozenset({"abs", "sign", "floor", "ceil", "min", "max"})
"""Functions whose derivative is made by branch."""

SMOOTH = frozenset(_OF_ONE) | frozenset(_BESSEL) | {"atan2", "hypot"}
"""Functions with a rule here. The square root is a power."""


def without_order(function: str, place: int) -> str:
    """Why a function has no derivative by the argument at `place` (from 0); empty when it has one."""
    if function in _BESSEL and place == 0:
        return "the derivative by its order is not in the language"
    return WITHOUT_DERIVATIVE.get(function, "")


def partial(function: str, place: int, arguments: tuple[Symbolic, ...], value: Symbolic, make: Maker) -> Symbolic:
    """The derivative of a function of SMOOTH by its argument at `place` (from 0); `value` is the function itself."""
    if function in _OF_ONE:
        return _OF_ONE[function](arguments[0], value, make)
    if function in _BESSEL:
        return _bessel(function, arguments[0], arguments[1], value, make)
    if function == "hypot":
        return arguments[place] / value
    if function != "atan2":
        raise ValueError(f"no rule for the derivative of {function}")
    y, x = arguments
    squares = make.power(x, 2) + make.power(y, 2)
    return x / squares if place == 0 else -y / squares


def _bessel(function: str, order: Symbolic, x: Symbolic, value: Symbolic, make: Maker) -> Symbolic:
    """By recurrence; at orders below 1 (and unknown ones) by the form that needs no negative order."""
    below, above = _BESSEL[function]
    higher = make.call(function, order + 1, x)
    if order == 0:
        return above * higher
    if order.is_Rational and order >= 1:
        return (below * make.call(function, order - 1, x) + above * higher) / 2
    return order * value / x + above * higher
