"""The functions and constants of the equation language: the one table that parser, evaluators and documents read.

Names follow ISO C and ISO C++ where these have one. An arithmetic implements them in `Operations.functions`, under the
same names; a constant is there as a function without arguments.
"""

from __future__ import annotations

import unicodedata
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from types import MappingProxyType


@dataclass(frozen=True, slots=True)
class FunctionRow:
    """A function of the equation language.

    Attributes:
        arity: number of arguments; the least number where `more` holds.
        meaning: one line; the arguments as they are named there, angles in radians.
        more: takes any further number of arguments.
    """

    name: str
    arity: int
    meaning: str
    more: bool = False

    def accepts(self, count: int) -> bool:
        """Whether so many arguments may be given."""
        return count == self.arity or (self.more and count > self.arity)


_ROWS = (
    FunctionRow("sin", 1, "sine of an angle in radians"),
    FunctionRow("cos", 1, "cosine of an angle in radians"),
    FunctionRow("tan", 1, "tangent of an angle in radians"),
    FunctionRow("asin", 1, "arc sine, -pi/2 to pi/2"),
    FunctionRow("acos", 1, "arc cosine, 0 to pi"),
    FunctionRow("atan", 1, "arc tangent, -pi/2 to pi/2"),
    FunctionRow("atan2", 2, "angle of the point (x, y) as atan2(y, x), -pi to pi"),
    FunctionRow("sinh", 1, "hyperbolic sine"),
    FunctionRow("cosh", 1, "hyperbolic cosine"),
    FunctionRow("tanh", 1, "hyperbolic tangent"),
    FunctionRow("asinh", 1, "inverse hyperbolic sine"),
    FunctionRow("acosh", 1, "inverse hyperbolic cosine, for x >= 1"),
    FunctionRow("atanh", 1, "inverse hyperbolic tangent, for -1 < x < 1"),
    FunctionRow("exp", 1, "exponential"),
    FunctionRow("expm1", 1, "exp(x) - 1, accurate near 0"),
    FunctionRow("ln", 1, "natural logarithm"),
    FunctionRow("log1p", 1, "ln(1 + x), accurate near 0"),
    FunctionRow("log10", 1, "logarithm to base 10"),
    FunctionRow("log2", 1, "logarithm to base 2"),
    FunctionRow("sqrt", 1, "square root"),
    FunctionRow("cbrt", 1, "cube root, of negative numbers too"),
    FunctionRow("hypot", 2, "sqrt(x^2 + y^2) without overflow on the way"),
    FunctionRow("abs", 1, "absolute value"),
    FunctionRow("sign", 1, "-1, 0 or 1"),
    FunctionRow("floor", 1, "largest whole number not above x"),
    FunctionRow("ceil", 1, "smallest whole number not below x"),
    FunctionRow("min", 2, "smallest of its arguments", more=True),
    FunctionRow("max", 2, "largest of its arguments", more=True),
    FunctionRow("erf", 1, "error function"),
    FunctionRow("erfc", 1, "1 - erf(x), accurate for large x"),
    FunctionRow("normal_cdf", 1, "distribution function of the standard normal law"),
    FunctionRow("tgamma", 1, "gamma function"),
    FunctionRow("lgamma", 1, "ln of the absolute value of the gamma function"),
    FunctionRow("digamma", 1, "logarithmic derivative of the gamma function"),
    FunctionRow("cyl_bessel_j", 2, "Bessel function of the first kind J as cyl_bessel_j(nu, x)"),
    FunctionRow("cyl_neumann", 2, "Bessel function of the second kind Y as cyl_neumann(nu, x)"),
    FunctionRow("cyl_bessel_i", 2, "modified Bessel function of the first kind I as cyl_bessel_i(nu, x)"),
    FunctionRow("cyl_bessel_k", 2, "modified Bessel function of the second kind K as cyl_bessel_k(nu, x)"),
    FunctionRow("airy_ai", 1, "Airy function Ai"),
    FunctionRow("airy_bi", 1, "Airy function Bi"),
    FunctionRow("expint", 1, "exponential integral Ei"),
    FunctionRow("exp_integral_e1", 1, "exponential integral E1, the well function, for x > 0"),
    FunctionRow("cos_integral", 1, "cosine integral Ci, for x > 0"),
    FunctionRow("sin_integral", 1, "sine integral Si"),
)

FUNCTIONS: Mapping[str, FunctionRow] = MappingProxyType({row.name: row for row in _ROWS})

CONSTANTS: Mapping[str, str] = MappingProxyType({"pi": "ratio of a circle's circumference to its diameter"})

WORDS = frozenset({"piecewise", "otherwise", "and", "or", "not", "table"})
"""Words of the language itself."""

RESERVED = frozenset(FUNCTIONS) | frozenset(CONSTANTS) | WORDS | {"log"}
"""Names that no unknown, input or definition may take. `log` is among them because the trade uses it for both."""

# What people write for a name of this language, where spelling alone would not lead there.
_ALSO_WRITTEN = MappingProxyType(
    {
        "arcsin": "asin",
        "arccos": "acos",
        "arctan": "atan",
        "arctan2": "atan2",
        "arsinh": "asinh",
        "arcosh": "acosh",
        "artanh": "atanh",
        "fabs": "abs",
        "fmin": "min",
        "fmax": "max",
        "amin1": "min",
        "amax1": "max",
        "sgn": "sign",
        "alog": "ln",
        "alog10": "log10",
        "lg": "log10",
        "ld": "log2",
        "lb": "log2",
        "gamma": "tgamma",
        "loggamma": "lgamma",
        "psi": "digamma",
        "ceiling": "ceil",
        "ei": "expint",
        "e1": "exp_integral_e1",
        "si": "sin_integral",
        "ci": "cos_integral",
        "phi": "normal_cdf",
        "ncdf": "normal_cdf",
        "airy": "airy_ai",
        "π": "pi",
    }
)


_LONGEST_COMPARED = 60  # comparing costs the product of the lengths


def nearest(name: str, known: Iterable[str]) -> str:
    """The known name that was most likely meant by `name`; empty when none is near."""
    if len(name) > _LONGEST_COMPARED:
        return ""
    candidates = sorted(candidate for candidate in known if len(candidate) <= _LONGEST_COMPARED)
    folded = _folded(name)
    same = [candidate for candidate in candidates if _folded(candidate) == folded]
    if same:
        return same[0]
    other = _ALSO_WRITTEN.get(folded, "")
    if other in candidates:
        return other
    close = get_close_matches(name, candidates, n=1, cutoff=0.6) if len(name) > 1 else []
    return close[0] if close else ""


def _folded(name: str) -> str:
    """Case and compatibility forms (the micro sign and the letter mu) made alike."""
    return unicodedata.normalize("NFKC", name).casefold()
