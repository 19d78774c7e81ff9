"""What the functions of Fortran, C and Python are in the equation language."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import TypeAlias

from surefoot.equation.source_tokens import Kind, Language
from surefoot.equation.tree import Binary, Call, Comparison, Expression, Name, Negate, Number, Piecewise

Made: TypeAlias = Callable[..., Expression]

DEGREES = "degrees in the source: written out with pi/180"
ROUNDED_TO_WHOLE = "a whole number in the source: the fraction is dropped"
NATURAL = "log is the natural logarithm"
_TO_SINGLE = "the source rounds to single precision here; that rounding is left out"
_NO_ROUNDING = "the source rounds once, here twice"


@dataclass(frozen=True, slots=True)
class KnownFunction:
    """A function of the source.

    Attributes:
        make: the tree over the trees of the arguments.
        least, most: number of arguments; `most` None for any number.
        why: the reading that the person should see; empty when the function is the same by another name.
        gives: what arithmetic the result takes part in; None: that of the arguments.
    """

    make: Made
    least: int = 1
    most: int | None = 1
    why: str = ""
    gives: Kind | None = Kind.REAL


def dropped_fraction(value: Expression) -> Expression:
    """The whole number towards zero."""
    return Binary("*", Call("sign", (value,)), Call("floor", (Call("abs", (value,)),)))


def _nearest_whole(value: Expression) -> Expression:
    above = Binary("+", Call("abs", (value,)), Number("0.5"))
    return Binary("*", Call("sign", (value,)), Call("floor", (above,)))


def _named(function: str) -> Made:
    return lambda *arguments: Call(function, arguments)


def _itself(value: Expression, *_: Expression) -> Expression:
    return value


def _to_radians(angle: Expression) -> Expression:
    return Binary("*", angle, Binary("/", Name("pi"), Number("180")))


def _to_degrees(angle: Expression) -> Expression:
    return Binary("*", angle, Binary("/", Number("180"), Name("pi")))


def _of_degrees(function: str) -> Made:
    return lambda angle: Call(function, (_to_radians(angle),))


def _in_degrees(function: str) -> Made:
    return lambda *arguments: _to_degrees(Call(function, arguments))


def _bessel(function: str, order: str) -> Made:
    return lambda x: Call(function, (Number(order), x))


def _signed(size: Expression, sign: Expression) -> Expression:
    positive = Call("abs", (size,))
    return Piecewise(((Comparison((sign, Number("0")), (">=",)), positive),), Negate(positive))


def _quotient_of_logarithms(x: Expression, base: Expression) -> Expression:
    return Binary("/", Call("ln", (x,)), Call("ln", (base,)))


def _logarithm(*arguments: Expression) -> Expression:
    return Call("ln", arguments) if len(arguments) == 1 else _quotient_of_logarithms(*arguments)


def _power(base: Expression, exponent: Expression) -> Expression:
    return Binary("^", base, exponent)


def _same(*names: str, most: int | None = 1) -> dict[str, KnownFunction]:
    return {name: KnownFunction(_named(name), least=min(most or 2, 2), most=most) for name in names}


_SAME = _same(
    *("sin", "cos", "tan", "asin", "acos", "atan", "sinh", "cosh", "tanh", "asinh", "acosh", "atanh", "exp", "sqrt"),
    *("erf", "erfc", "log10"),
) | _same("atan2", "hypot", most=2)  # fmt: skip
_LN = KnownFunction(_named("ln"), why=NATURAL)
_ABS = KnownFunction(_named("abs"), gives=None)
_SMALLEST = KnownFunction(_named("min"), 2, None, gives=None)
_LARGEST = KnownFunction(_named("max"), 2, None, gives=None)
_FLOOR, _CEIL = KnownFunction(_named("floor")), KnownFunction(_named("ceil"))
_GAMMA, _LGAMMA = KnownFunction(_named("tgamma")), KnownFunction(_named("lgamma"))
_RADIANS, _DEGREES = KnownFunction(_to_radians, why=DEGREES), KnownFunction(_to_degrees, why=DEGREES)
_WHOLE = KnownFunction(dropped_fraction, why=ROUNDED_TO_WHOLE, gives=Kind.WHOLE)
_NEAREST = KnownFunction(_nearest_whole, why="the nearest whole number in the source", gives=Kind.WHOLE)
_REAL_WHOLE = KnownFunction(dropped_fraction, why=ROUNDED_TO_WHOLE)
_REAL_NEAREST = KnownFunction(_nearest_whole, why="the nearest whole number in the source")
_ASIDE = KnownFunction(_itself)
_ROUND_TO_SINGLE = KnownFunction(_itself, why=_TO_SINGLE, gives=Kind.SINGLE)
_POW = KnownFunction(_power, 2, 2)
_TWO_TO = KnownFunction(lambda x: _power(Number("2"), x))

_FORTRAN: dict[str, KnownFunction] = {
    **_SAME,
    **{f"d{name}": known for name, known in _SAME.items()},
    **{f"{name}d": KnownFunction(_of_degrees(name), why=DEGREES) for name in ("sin", "cos", "tan")},
    **{f"{name}d": KnownFunction(_in_degrees(name), why=DEGREES) for name in ("asin", "acos", "atan")},
    "atan2d": KnownFunction(_in_degrees("atan2"), 2, 2, why=DEGREES),
    **dict.fromkeys(("log", "alog", "dlog"), _LN),
    "alog10": _SAME["log10"],
    **dict.fromkeys(("abs", "dabs", "iabs"), _ABS),
    **dict.fromkeys(("min", "dmin1", "amin1", "min0"), _SMALLEST),
    **dict.fromkeys(("max", "dmax1", "amax1", "max0"), _LARGEST),
    **dict.fromkeys(("gamma", "dgamma"), _GAMMA),
    **dict.fromkeys(("log_gamma", "dlgama", "algama"), _LGAMMA),
    **dict.fromkeys(("dble", "dfloat"), _ASIDE),
    **dict.fromkeys(("float", "sngl"), _ROUND_TO_SINGLE),
    **dict.fromkeys(("int", "ifix", "idint"), _WHOLE),
    **dict.fromkeys(("nint", "idnint"), _NEAREST),
    **dict.fromkeys(("aint", "dint"), _REAL_WHOLE),
    **dict.fromkeys(("anint", "dnint"), _REAL_NEAREST),
    "floor": KnownFunction(_named("floor"), gives=Kind.WHOLE),
    "ceiling": KnownFunction(_named("ceil"), gives=Kind.WHOLE),
    **dict.fromkeys(("sign", "dsign"), KnownFunction(_signed, 2, 2)),
    **{f"bessel_{letter}{order}": KnownFunction(_bessel(function, order)) for letter, function in
       (("j", "cyl_bessel_j"), ("y", "cyl_neumann")) for order in ("0", "1")},
    "bessel_jn": KnownFunction(_named("cyl_bessel_j"), 2, 2),
    "bessel_yn": KnownFunction(_named("cyl_neumann"), 2, 2),
}  # fmt: skip

_C_DOUBLE: dict[str, KnownFunction] = {
    **_SAME,
    **_same("expm1", "log1p", "log2", "cbrt", "tgamma", "lgamma"),
    "floor": _FLOOR,
    "ceil": _CEIL,
    "log": _LN,
    "fabs": _ABS,
    "fmin": KnownFunction(_named("min"), 2, 2),
    "fmax": KnownFunction(_named("max"), 2, 2),
    "pow": _POW,
    "exp2": _TWO_TO,
    "exp10": KnownFunction(lambda x: _power(Number("10"), x)),
    "trunc": _REAL_WHOLE,
    "round": _REAL_NEAREST,
    "fma": KnownFunction(lambda a, b, c: Binary("+", Binary("*", a, b), c), 3, 3, _NO_ROUNDING),
    "copysign": KnownFunction(_signed, 2, 2),
}
_C: dict[str, KnownFunction] = {
    **_C_DOUBLE,
    **{f"{name}l": known for name, known in _C_DOUBLE.items()},
    **{
        f"{name}f": KnownFunction(known.make, known.least, known.most, known.why or _TO_SINGLE, Kind.SINGLE)
        for name, known in _C_DOUBLE.items()
    },
    "min": _SMALLEST,
    "max": _LARGEST,
    "abs": KnownFunction(
        _named("abs"), why="read for real numbers; abs of C, unlike std::abs and fabs, takes an int", gives=None
    ),
    **{f"{letter}{order}": KnownFunction(_bessel(function, order)) for letter, function in
       (("j", "cyl_bessel_j"), ("y", "cyl_neumann")) for order in ("0", "1")},
    "jn": KnownFunction(_named("cyl_bessel_j"), 2, 2),
    "yn": KnownFunction(_named("cyl_neumann"), 2, 2),
    **_same("cyl_bessel_j", "cyl_neumann", "cyl_bessel_i", "cyl_bessel_k", most=2),
    "expint": KnownFunction(_named("expint")),
}  # fmt: skip

_PYTHON: dict[str, KnownFunction] = {
    **_SAME,
    **_same("expm1", "log1p", "log2", "cbrt", "floor", "ceil"),
    **{f"arc{name[1:]}": known for name, known in _SAME.items() if name[0] == "a"},
    "log": KnownFunction(_logarithm, 1, 2, NATURAL),
    **dict.fromkeys(("abs", "fabs", "absolute"), _ABS),
    **dict.fromkeys(("min", "minimum", "fmin"), _SMALLEST),
    **dict.fromkeys(("max", "maximum", "fmax"), _LARGEST),
    **dict.fromkeys(("pow", "power", "float_power"), _POW),
    **dict.fromkeys(("radians", "deg2rad"), _RADIANS),
    **dict.fromkeys(("degrees", "rad2deg"), _DEGREES),
    **dict.fromkeys(("float", "float64", "asarray", "array"), _ASIDE),
    "float32": _ROUND_TO_SINGLE,
    **dict.fromkeys(("int", "trunc", "fix"), _WHOLE),
    "sign": KnownFunction(_named("sign")),
    "square": KnownFunction(lambda x: _power(x, Number("2"))),
    "reciprocal": KnownFunction(lambda x: Binary("/", Number("1"), x)),
    "exp2": _TWO_TO,
    "gamma": _GAMMA,
    **dict.fromkeys(("lgamma", "gammaln", "loggamma"), _LGAMMA),
    **dict.fromkeys(("psi", "digamma"), KnownFunction(_named("digamma"))),
    **dict.fromkeys(("cdf", "ndtr"), KnownFunction(_named("normal_cdf"))),
    "jv": KnownFunction(_named("cyl_bessel_j"), 2, 2),
    "yv": KnownFunction(_named("cyl_neumann"), 2, 2),
    "iv": KnownFunction(_named("cyl_bessel_i"), 2, 2),
    "kv": KnownFunction(_named("cyl_bessel_k"), 2, 2),
    **{f"{letter}{order}": KnownFunction(_bessel(function, order)) for letter, function in
       (("j", "cyl_bessel_j"), ("y", "cyl_neumann"), ("i", "cyl_bessel_i"), ("k", "cyl_bessel_k"))
       for order in ("0", "1")},
    "expi": KnownFunction(_named("expint")),
    "exp1": KnownFunction(_named("exp_integral_e1")),
}  # fmt: skip

FUNCTIONS_OF: Mapping[Language, Mapping[str, KnownFunction]] = MappingProxyType(
    {"fortran": _FORTRAN, "c": _C, "python": _PYTHON}
)
"""By language; those of Fortran in lower case."""

REFUSED = frozenset({"mod", "modulo", "amod", "dmod", "fmod", "fmodf", "remainder"})
"""Functions that give a remainder, which the equation language does not have."""

WITH_KIND = frozenset({"real", "int", "nint", "aint", "anint", "floor", "ceiling"})
"""Conversions of Fortran that take a kind as a second argument."""

CONSTANTS_OF: Mapping[Language, Mapping[str, Expression]] = MappingProxyType(
    {
        "fortran": {},
        "c": {
            "M_PI": Name("pi"),
            "M_E": Call("exp", (Number("1"),)),
            "M_PI_2": Binary("/", Name("pi"), Number("2")),
            "M_PI_4": Binary("/", Name("pi"), Number("4")),
            "M_LN10": Call("ln", (Number("10"),)),
            "M_LN2": Call("ln", (Number("2"),)),
            "M_SQRT2": Call("sqrt", (Number("2"),)),
        },
        "python": {"pi": Name("pi"), "e": Call("exp", (Number("1"),)), "tau": Binary("*", Number("2"), Name("pi"))},
    }
)
"""Constants of the libraries; those of Python only behind the name of a module (`math.pi`)."""

MODULES = frozenset({"math", "np", "numpy", "sp", "scipy", "special", "sc", "stats", "norm", "jnp", "std"})
"""First names of dotted ones that stand for a library."""
