"""Equations of the published data as plain Python functions, to hold the package against: floats, or 200-bit numbers.

The text is rewritten as a Python expression and evaluated by Python itself, with nothing of the package in between.
`Rounded` numbers carry, beside a 200-bit value, a bound of the error that binary64 makes on the way (running error
analysis: N. J. Higham, Accuracy and Stability of Numerical Algorithms, 2002, section 3.3).
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, NoReturn, cast

import mpmath

BITS = 200
UNIT = mpmath.mpf(2) ** -53  # unit roundoff of binary64
LIBRARY = 4  # units of roundoff granted to a function of the C library

_NUMBER = re.compile(r"(?<![\w.])((?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)")

MP: Any = mpmath.mp.clone()
MP.prec = BITS


def python_text(text: str) -> str:
    """The expression in Python's notation; every literal becomes `N("...")`."""
    while "piecewise(" in text:
        at = text.rindex("piecewise(")
        end = _closing(text, at + len("piecewise"))
        text = text[:at] + _conditional(text[at + len("piecewise(") : end]) + text[end + 1 :]
    return _NUMBER.sub(r'N("\1")', text.replace("^", "**"))


@dataclass(frozen=True, slots=True)
class Formula:
    """Text over an unknown and inputs, with lines (name, text) to go through before it."""

    text: str
    unknown: str
    inputs: Mapping[str, float]
    lines: tuple[tuple[str, str], ...] = ()

    def _evaluator(self, names: Mapping[str, Any]) -> Callable[[Any], Any]:
        steps = [(name, compile(python_text(text), text, "eval")) for name, text in self.lines]
        last = compile(python_text(self.text), self.text, "eval")

        def evaluated(x: Any) -> Any:
            known = {**names, self.unknown: x}
            for name, code in steps:
                known[name] = eval(code, known)
            return eval(last, known)

        return evaluated

    def plain(self) -> Callable[[float], float]:
        """In Python's floats. Raises ValueError, OverflowError, ZeroDivisionError or TypeError as Python does."""
        evaluated = self._evaluator({**_FLOAT_NAMES, **self.inputs})

        def f(x: float) -> float:
            value = evaluated(x)
            if not isinstance(value, float):
                raise TypeError("no real value")
            if not math.isfinite(value):
                raise OverflowError("not finite")
            return value

        return f

    def exact(self) -> Callable[[Any], Any]:
        """In 200 bits, over the same binary64 literals and inputs."""
        return self._evaluator({**_MP_NAMES, **{name: MP.mpf(value) for name, value in self.inputs.items()}})

    def decimal(self) -> Callable[[Any], Any]:
        """In 200 bits, over the literals as the decimals that they are."""
        inputs = {name: MP.mpf(value) for name, value in self.inputs.items()}
        return self._evaluator({**_MP_NAMES, "N": MP.mpf, "pi": MP.pi, **inputs})

    def rounded(self) -> Callable[[float], Rounded]:
        """In 200 bits, with a first-order bound of the error that binary64 makes from the same x."""
        inputs = {name: Rounded(MP.mpf(value)) for name, value in self.inputs.items()}
        evaluated = self._evaluator({**_ROUNDED_NAMES, **inputs})
        return lambda x: cast(Rounded, evaluated(Rounded(MP.mpf(x))))


def residual_of(row: Mapping[str, Any]) -> Formula:
    """The residual of a row of published.json or failures.json: left minus right."""
    left, equals, right = _split_equation(row["equation"])
    inputs = {name: float(text.split()[0]) for name, text in row["parameters"].items()}
    return Formula(f"({left}) - ({right})" if equals else left, row["unknown"], inputs)


class Rounded:
    """A 200-bit value, and how far binary64 may be from it after the operations that led here."""

    __slots__ = ("error", "value")

    def __init__(self, value: Any, error: Any = 0) -> None:
        self.value, self.error = value, MP.mpf(error)

    def _result(self, value: Any, error: Any, units: int = 1) -> Rounded:
        return Rounded(value, error + units * UNIT * abs(value))

    def __add__(self, other: Rounded) -> Rounded:
        return self._result(self.value + other.value, self.error + other.error)

    def __sub__(self, other: Rounded) -> Rounded:
        return self._result(self.value - other.value, self.error + other.error)

    def __mul__(self, other: Rounded) -> Rounded:
        error = abs(self.value) * other.error + abs(other.value) * self.error
        return self._result(self.value * other.value, error)

    def __truediv__(self, other: Rounded) -> Rounded:
        quotient = self.value / other.value
        return self._result(quotient, (self.error + abs(quotient) * other.error) / abs(other.value))

    def __pow__(self, other: Rounded) -> Rounded:
        value = self.value**other.value
        error = abs(other.value * value / self.value) * self.error if self.value else MP.mpf(0)
        if other.error:
            error += abs(value * MP.log(self.value)) * other.error
        return self._result(value, error, LIBRARY)

    def __neg__(self) -> Rounded:
        return Rounded(-self.value, self.error)

    def __lt__(self, other: Rounded) -> bool:
        return bool(self.value < other.value)

    def __gt__(self, other: Rounded) -> bool:
        return bool(self.value > other.value)

    def __le__(self, other: Rounded) -> bool:
        return bool(self.value <= other.value)

    def __ge__(self, other: Rounded) -> bool:
        return bool(self.value >= other.value)


def _through(function: Callable[..., Any]) -> Callable[..., Rounded]:
    """A function whose last argument carries an error; the ones before it are exact parameters."""

    def applied(*arguments: Rounded) -> Rounded:
        *parameters, last = arguments
        numbers = [parameter.value for parameter in parameters]
        value = function(*numbers, last.value)
        slope = MP.diff(lambda v: function(*numbers, v), last.value) if last.error else MP.mpf(0)
        return Rounded(value, abs(slope) * last.error + LIBRARY * UNIT * abs(value))

    return applied


def _absolute(x: Rounded) -> Rounded:
    return Rounded(abs(x.value), x.error)


def _sign(x: Any) -> Any:
    return (x > 0) - (x < 0)


_MP_FUNCTIONS: Mapping[str, Callable[..., Any]] = {
    "sin": MP.sin,
    "cos": MP.cos,
    "tan": MP.tan,
    "atan": MP.atan,
    "sinh": MP.sinh,
    "cosh": MP.cosh,
    "tanh": MP.tanh,
    "exp": MP.exp,
    "ln": MP.log,
    "log10": MP.log10,
    "sqrt": MP.sqrt,
    "cyl_bessel_j": MP.besselj,
    "cyl_bessel_i": MP.besseli,
    "airy_ai": MP.airyai,
    "airy_bi": MP.airybi,
    "expint": MP.ei,
    "exp_integral_e1": MP.e1,
    "normal_cdf": lambda x: MP.erfc(-x / MP.sqrt(2)) / 2,
}


def _no_branch() -> NoReturn:
    raise ValueError("no condition holds")


def _correctly_rounded(function: Callable[..., Any]) -> Callable[..., float]:
    return lambda *arguments: float(function(*(MP.mpf(argument) for argument in arguments)))


_FLOAT_NAMES: Mapping[str, Any] = {
    "N": float,
    "pi": math.pi,
    "no_branch": _no_branch,
    **{name: getattr(math, name) for name in ("sin", "cos", "tan", "atan", "sinh", "cosh", "tanh", "exp", "log10")},
    "ln": math.log,
    "sqrt": math.sqrt,
    "abs": abs,
    "sign": lambda x: float(_sign(x)),
    **{
        name: _correctly_rounded(_MP_FUNCTIONS[name])
        for name in ("cyl_bessel_j", "cyl_bessel_i", "airy_ai", "expint", "exp_integral_e1", "normal_cdf")
    },
}
_MP_NAMES: Mapping[str, Any] = {
    "N": lambda text: MP.mpf(float(text)),
    "pi": MP.mpf(math.pi),
    "no_branch": _no_branch,
    "abs": abs,
    "sign": lambda x: MP.mpf(_sign(x)),
    **_MP_FUNCTIONS,
}
_ROUNDED_NAMES: Mapping[str, Any] = {
    "N": lambda text: Rounded(MP.mpf(float(text))),
    "pi": Rounded(MP.mpf(math.pi)),
    "no_branch": _no_branch,
    "abs": _absolute,
    "sign": lambda x: Rounded(MP.mpf(_sign(x.value))),
    **{name: _through(function) for name, function in _MP_FUNCTIONS.items()},
}


def _closing(text: str, opening: int) -> int:
    depth = 0
    for at in range(opening, len(text)):
        depth += (text[at] == "(") - (text[at] == ")")
        if depth == 0:
            return at
    raise ValueError(f"no closing parenthesis in {text}")


def _conditional(branches: str) -> str:
    """`c1: v1; otherwise: v` as a conditional expression of Python."""
    parts = [branch.split(":", 1) for branch in branches.split(";")]
    text = ""
    for condition, value in parts:
        if condition.strip() == "otherwise":
            return f"({text}({value}))"
        text += f"({value}) if ({condition}) else "
    return f"({text}no_branch())"


def _split_equation(equation: str) -> tuple[str, str, str]:
    match = re.search(r"(?<![<>=!])=(?!=)", equation)
    if match is None:
        return equation, "", ""
    return equation[: match.start()], "=", equation[match.end() :]
