"""binary64: the bits of plain Python arithmetic, named failures, and every function against mpmath."""

from __future__ import annotations

import math
import struct
from collections.abc import Callable
from fractions import Fraction
from functools import partial
from random import Random

import mpmath
import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.equation_trees import NAMES, computable_trees, plain
from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.compiling import compile_expression
from surefoot.equation.functions import CONSTANTS, FUNCTIONS
from surefoot.equation.parser import parse_expression
from surefoot.equation.results import EvaluationFailed, Failure, FailureKind, Stopped
from surefoot.equation.wording import to_text

SLOTS = {name: slot for slot, name in enumerate(NAMES)}


def bits(x: float) -> bytes:
    return struct.pack("<d", x)


def evaluated(text: str, **values: float) -> float:
    slots = {name: slot for slot, name in enumerate(values)}
    return compile_expression(parse_expression(text), BINARY64, slots)(list(values.values()))


# As written

finite = st.floats(allow_nan=False, allow_infinity=False)
moderate = st.floats(1e-12, 1e3) | st.floats(-1e3, -1e-12)


@given(finite)
def test_what_cancels_is_not_simplified_away(x: float) -> None:
    assert bits(evaluated("(x + 1e16) - 1e16", x=x)) == bits((x + 1e16) - 1e16)


@given(moderate)
def test_a_difference_keeps_its_rounding(x: float) -> None:
    assert bits(evaluated("(1 - cos(x))/x^2", x=x)) == bits((1.0 - math.cos(x)) / math.pow(x, 2.0))


@given(moderate)
def test_sums_are_taken_from_the_left(x: float) -> None:
    assert bits(evaluated("x - 0.1 - 0.2 + 0.3", x=x)) == bits(x - 0.1 - 0.2 + 0.3)


def test_the_examples_have_the_bits_that_simplifying_would_lose() -> None:
    assert evaluated("(x + 1e16) - 1e16", x=1.0) == 0.0
    assert evaluated("(1 - cos(x))/x^2", x=1e-9) == 0.0
    assert evaluated("x - 0.1 - 0.2 + 0.3", x=0.3) == 0.3 - 0.1 - 0.2 + 0.3 != 0.3
    assert bits(evaluated("-x", x=0.0)) == bits(-0.0)
    assert bits(evaluated("-0.0 + x", x=-0.0)) == bits(-0.0)


def _random_values(random: Random) -> list[float]:
    kinds: tuple[Callable[[], float], ...] = (
        lambda: random.uniform(-10.0, 10.0),
        lambda: random.uniform(0.0, 1.0),
        lambda: random.choice((0.0, -0.0, 1.0, -1.0, 2.0, 0.5)),
        lambda: math.ldexp(random.uniform(-1.0, 1.0), random.randrange(-1074, 1024)),
    )
    return [random.choice(kinds)() for _ in NAMES]


def test_random_trees_have_the_bits_of_plain_python() -> None:
    random = Random(64)
    trees = computable_trees(random)
    equal = failed = 0
    for _ in range(2500):
        tree = trees.expression()
        compiled, reference = compile_expression(tree, BINARY64, SLOTS), plain(tree)
        for _ in range(4):
            values = _random_values(random)
            named = dict(zip(NAMES, values, strict=True))
            try:
                ours = compiled(values)
            except EvaluationFailed as caught:
                failed += 1
                _assert_plain_fails_too(partial(reference, named), caught.result, to_text(tree))
                continue
            equal += 1
            assert bits(ours) == bits(reference(named)), to_text(tree)
    assert equal > 4000
    assert failed > 500


def _assert_plain_fails_too(work: Callable[[], float], failure: Failure | Stopped, text: str) -> None:
    """Python raises the exception that belongs to the failure; only infinities it lets pass."""
    assert isinstance(failure, Failure)
    expected: dict[FailureKind, tuple[type[Exception], ...]] = {
        FailureKind.DOMAIN: (ValueError,),
        FailureKind.DIVISION_BY_ZERO: (ZeroDivisionError, ValueError),  # ValueError is that of pow(0, -1)
        FailureKind.OVERFLOW: (OverflowError,),
        FailureKind.NO_BRANCH: (LookupError,),
    }
    try:
        value = work()
    except expected[failure.kind]:
        return
    except (ArithmeticError, ValueError, LookupError):
        assert failure.kind == FailureKind.OVERFLOW, text  # Python failed later, on an infinity that we had refused
        return
    assert failure.kind == FailureKind.OVERFLOW, (text, value)


# Failures

HUGE, TINY = 1e308, 5e-324


@pytest.mark.parametrize(
    ("text", "x", "kind", "subexpression", "arguments"),
    [
        ("1 + ln(x - 2)", 1.0, FailureKind.DOMAIN, "ln(x - 2)", ("-1.0",)),
        ("ln(x)", 0.0, FailureKind.DOMAIN, "ln(x)", ("0.0",)),
        ("log10(x)", -1.0, FailureKind.DOMAIN, "log10(x)", ("-1.0",)),
        ("log2(x)", -0.0, FailureKind.DOMAIN, "log2(x)", ("-0.0",)),
        ("log1p(x)", -1.0, FailureKind.DOMAIN, "log1p(x)", ("-1.0",)),
        ("2*sqrt(x)", -0.1, FailureKind.DOMAIN, "sqrt(x)", ("-0.1",)),
        ("asin(2*x)", 1.0, FailureKind.DOMAIN, "asin(2*x)", ("2.0",)),
        ("acos(x)", -1.5, FailureKind.DOMAIN, "acos(x)", ("-1.5",)),
        ("acosh(x)", 0.5, FailureKind.DOMAIN, "acosh(x)", ("0.5",)),
        ("atanh(x)", 1.0, FailureKind.DOMAIN, "atanh(x)", ("1.0",)),
        ("x^0.5 + 1", -4.0, FailureKind.DOMAIN, "x^0.5", ("-4.0", "0.5")),
        ("tgamma(x)", -2.0, FailureKind.DOMAIN, "tgamma(x)", ("-2.0",)),
        ("exp_integral_e1(x)", -1.0, FailureKind.DOMAIN, "exp_integral_e1(x)", ("-1.0",)),
        ("1/(x - 1)", 1.0, FailureKind.DIVISION_BY_ZERO, "1/(x - 1)", ("1.0", "0.0")),
        ("x/x", 0.0, FailureKind.DIVISION_BY_ZERO, "x/x", ("0.0", "0.0")),
        ("3 + x^-1", 0.0, FailureKind.DIVISION_BY_ZERO, "x^-1", ("0.0", "-1.0")),
        ("exp(x)", 710.0, FailureKind.OVERFLOW, "exp(x)", ("710.0",)),
        ("expm1(x)", 710.0, FailureKind.OVERFLOW, "expm1(x)", ("710.0",)),
        ("sinh(x)", 711.0, FailureKind.OVERFLOW, "sinh(x)", ("711.0",)),
        ("cosh(x)", -711.0, FailureKind.OVERFLOW, "cosh(x)", ("-711.0",)),
        ("x^200 - 1", -1e3, FailureKind.OVERFLOW, "x^200", ("-1000.0", "200.0")),
        ("9^9^x^9", 9.0, FailureKind.OVERFLOW, "9^x^9", ("9.0", "387420489.0")),
        ("x + x", HUGE, FailureKind.OVERFLOW, "x + x", ("1e+308", "1e+308")),
        ("0 - x - x", HUGE, FailureKind.OVERFLOW, "0 - x - x", ("-1e+308", "1e+308")),
        ("x*10", HUGE, FailureKind.OVERFLOW, "x*10", ("1e+308", "10.0")),
        ("1/x", TINY, FailureKind.OVERFLOW, "1/x", ("1.0", "5e-324")),
        ("hypot(x, x)", 1.7e308, FailureKind.OVERFLOW, "hypot(x, x)", ("1.7e+308", "1.7e+308")),
        ("tgamma(x)", 172.0, FailureKind.OVERFLOW, "tgamma(x)", ("172.0",)),
        ("cyl_bessel_j(x, 1)", 1e6, FailureKind.NOT_A_NUMBER, "cyl_bessel_j(x, 1)", ("1000000.0", "1.0")),
        ("piecewise(x > 0: 1; x < 0: 2)", 0.0, FailureKind.NO_BRANCH, "piecewise(x > 0: 1; x < 0: 2)", ()),
        ("1e400*x", 1.0, FailureKind.OVERFLOW, "1e400", ()),
    ],
)
def test_a_failure_names_the_operation_and_its_arguments(
    text: str, x: float, kind: FailureKind, subexpression: str, arguments: tuple[str, ...]
) -> None:
    with pytest.raises(EvaluationFailed) as caught:
        evaluated(text, x=x)
    assert caught.value.result == Failure(kind, subexpression, arguments)


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
@pytest.mark.parametrize("operation", [BINARY64.add, BINARY64.subtract, BINARY64.multiply])
def test_an_operation_gives_no_infinity_and_no_nan(operation: Callable[[float, float], float], value: float) -> None:
    with pytest.raises(OperationFailed) as caught:
        operation(value, 1.0)
    assert caught.value.kind == (FailureKind.NOT_A_NUMBER if math.isnan(value) else FailureKind.OVERFLOW)


def test_signs_of_zero_and_of_numbers() -> None:
    assert bits(evaluated("floor(x)", x=-0.0)) == bits(-0.0)
    assert bits(evaluated("ceil(x)", x=-0.5)) == bits(-0.0)
    assert evaluated("floor(x)", x=-1.5) == -2.0
    assert evaluated("ceil(x)", x=1e300) == 1e300
    assert [evaluated("sign(x)", x=x) for x in (-TINY, -0.0, 0.0, 3.0)] == [-1.0, 0.0, 0.0, 1.0]
    assert evaluated("min(x, 2, -1, 0)", x=1.0) == -1.0
    assert evaluated("max(x, 2, -1, 0)", x=1.0) == 2.0
    assert evaluated("0^0 + x", x=0.0) == 1.0


# Functions against mpmath

ANY, POSITIVE, SMALL, UNIT, ABOVE_ONE = (-30.0, 30.0), (1e-6, 50.0), (-5.0, 5.0), (-1.0, 1.0), (1.0, 40.0)
TRUE: dict[str, tuple[Callable[..., object], tuple[tuple[float, float], ...]]] = {
    "sin": (mpmath.sin, (ANY,)),
    "cos": (mpmath.cos, (ANY,)),
    "tan": (mpmath.tan, (ANY,)),
    "asin": (mpmath.asin, (UNIT,)),
    "acos": (mpmath.acos, (UNIT,)),
    "atan": (mpmath.atan, (ANY,)),
    "atan2": (mpmath.atan2, (ANY, ANY)),
    "sinh": (mpmath.sinh, (ANY,)),
    "cosh": (mpmath.cosh, (ANY,)),
    "tanh": (mpmath.tanh, (SMALL,)),
    "asinh": (mpmath.asinh, (ANY,)),
    "acosh": (mpmath.acosh, (ABOVE_ONE,)),
    "atanh": (mpmath.atanh, (UNIT,)),
    "exp": (mpmath.exp, (ANY,)),
    "expm1": (mpmath.expm1, (SMALL,)),
    "ln": (mpmath.ln, (POSITIVE,)),
    "log1p": (mpmath.log1p, ((-0.99, 5.0),)),
    "log10": (mpmath.log10, (POSITIVE,)),
    "log2": (lambda x: mpmath.log(x, 2), (POSITIVE,)),
    "sqrt": (mpmath.sqrt, (POSITIVE,)),
    "cbrt": (lambda x: mpmath.sign(x) * mpmath.cbrt(abs(x)), (ANY,)),
    "hypot": (mpmath.hypot, (ANY, ANY)),
    "abs": (abs, (ANY,)),
    "sign": (mpmath.sign, (ANY,)),
    "floor": (mpmath.floor, (ANY,)),
    "ceil": (mpmath.ceil, (ANY,)),
    "min": (min, (ANY, ANY)),
    "max": (max, (ANY, ANY)),
    "erf": (mpmath.erf, (SMALL,)),
    "erfc": (mpmath.erfc, (SMALL,)),
    "normal_cdf": (mpmath.ncdf, (SMALL,)),
    "tgamma": (mpmath.gamma, ((-10.0, 60.0),)),
    "lgamma": (lambda x: mpmath.ln(abs(mpmath.gamma(x))), ((-10.0, 60.0),)),
    "digamma": (mpmath.digamma, ((-10.0, 60.0),)),
    "cyl_bessel_j": (mpmath.besselj, ((0.0, 8.0), POSITIVE)),
    "cyl_neumann": (mpmath.bessely, ((0.0, 8.0), POSITIVE)),
    "cyl_bessel_i": (mpmath.besseli, ((0.0, 8.0), POSITIVE)),
    "cyl_bessel_k": (mpmath.besselk, ((0.0, 8.0), POSITIVE)),
    "airy_ai": (mpmath.airyai, (SMALL,)),
    "airy_bi": (mpmath.airybi, (SMALL,)),
    "expint": (mpmath.ei, (ANY,)),
    "exp_integral_e1": (mpmath.e1, (POSITIVE,)),
    "cos_integral": (mpmath.ci, (POSITIVE,)),
    "sin_integral": (mpmath.si, (ANY,)),
}
CORRECTLY_ROUNDED = frozenset(TRUE) & {
    *("sqrt", "abs", "sign", "floor", "ceil", "min", "max", "erf", "erfc", "normal_cdf", "tgamma", "lgamma"),
    *("digamma", "cyl_bessel_j", "cyl_neumann", "cyl_bessel_i", "cyl_bessel_k", "airy_ai", "airy_bi", "expint"),
    *("exp_integral_e1", "cos_integral", "sin_integral"),
}


def test_every_function_of_the_language_is_there_and_checked() -> None:
    assert set(BINARY64.functions) == set(FUNCTIONS) | set(CONSTANTS)
    assert set(TRUE) == set(FUNCTIONS)


@pytest.mark.parametrize("name", sorted(TRUE))
def test_functions_against_mpmath(name: str) -> None:
    """Within two last places, or half of one where correct rounding is promised (and a hair for mpmath)."""
    true, ranges = TRUE[name]
    random = Random(name)
    letters = "abc"[: len(ranges)]
    bound = 0.5 + 1e-9 if name in CORRECTLY_ROUNDED else 2.0
    for _ in range(25):
        arguments = [random.uniform(*ends) for ends in ranges]
        value = evaluated(f"{name}({', '.join(letters)})", **dict(zip(letters, arguments, strict=True)))
        with mpmath.workdps(60):
            reference = mpmath.mpf(true(*(mpmath.mpf(argument) for argument in arguments)))
            assert abs(value - reference) <= bound * mpmath.mpf(math.ulp(value)), (name, arguments)


def test_pi() -> None:
    assert evaluated("pi") == math.pi


# Literals and record text


def test_literals_are_the_nearest_numbers() -> None:
    assert BINARY64.literal("0.1", single=False) == 0.1
    assert BINARY64.literal("1.", single=False) == 1.0
    assert BINARY64.literal("-1.5e-3", single=False) == -0.0015
    assert BINARY64.literal("0x1.8p-3", single=False) == 0.1875
    assert BINARY64.literal("-0X1.a36e2eb1c432dp-11", single=False) == float.fromhex("-0x1.a36e2eb1c432dp-11")
    assert BINARY64.literal("1e-400", single=False) == 0.0
    assert BINARY64.literal("0.1", single=True) == 0.10000000149011612
    assert BINARY64.literal("0x1.000001p0", single=True) == 1.0
    assert evaluated("3.7f*x", x=1.0) == 3.700000047683716


@pytest.mark.parametrize(("text", "single"), [("1e309", False), ("1e39", True), ("0x1p1024", False)])
def test_literals_beyond_the_range(text: str, single: bool) -> None:
    with pytest.raises(OperationFailed) as caught:
        BINARY64.literal(text, single)
    assert caught.value.kind == FailureKind.OVERFLOW


@pytest.mark.parametrize("text", ["nan", "inf", "1_0", "", "1f", "x"])
def test_other_texts_are_no_literals(text: str) -> None:
    with pytest.raises(ValueError, match="is not a literal"):
        BINARY64.literal(text, single=False)


def _nearest_single(text: str) -> float:
    """The binary32 nearest to a decimal, found with exact fractions among the neighbours of the twice-rounded one."""
    exact = Fraction(text)
    (pattern,) = struct.unpack("<i", struct.pack("<f", float(text)))
    near = [struct.unpack("<f", struct.pack("<i", pattern + shift))[0] for shift in (-1, 0, 1) if pattern + shift >= 0]
    return min(near, key=lambda value: (abs(Fraction(value) - exact), struct.pack("<f", value)[0] & 1))


def test_single_precision_literals_are_rounded_once() -> None:
    halfway = Fraction(1) + Fraction(1, 2**24)  # between two neighbours of binary32
    above, below = "1.000000059604644775390625000000000001", "1.000000059604644775390624999999999999"
    assert float(above) == float(below) == float(halfway)
    assert BINARY64.literal(above, single=True) == 1.0 + 2.0**-23
    assert BINARY64.literal(below, single=True) == 1.0
    assert BINARY64.literal("1.000000059604644775390625", single=True) == 1.0
    assert BINARY64.literal("1.000000178813934326171875", single=True) == 1.0 + 2.0**-22


def test_single_precision_literals_near_a_tie() -> None:
    random = Random(32)
    for _ in range(2000):
        (value,) = struct.unpack("<f", struct.pack("<i", random.randrange(0x00800000, 0x7F000000)))
        tie = Fraction(value) + Fraction(math.ulp(value)) * 2**28  # half a last place of binary32
        power = round(math.log10(value)) - random.choice((16, 20, 40))
        text = f"{math.floor(tie / Fraction(10) ** power) + random.choice((0, 1))}e{power}"
        assert BINARY64.literal(text, single=True) == _nearest_single(text), text


@given(st.floats())
def test_record_text_gives_the_same_bits_back(x: float) -> None:
    text = BINARY64.encode(x)
    back = BINARY64.decode(text)
    assert bits(back) == bits(x) or (math.isnan(x) and math.isnan(back))
    assert BINARY64.encode(back) == text


def test_record_text() -> None:
    assert [BINARY64.encode(x) for x in (0.1, -0.0, math.nan, math.inf, 1e16)] == ["0.1", "-0.0", "nan", "inf", "1e+16"]


@pytest.mark.parametrize("text", ["1", "0.10", " 0.1", "1e16", "f32:0.1", "mp50:0.1", "", "0x1p0", "NaN", "1_0.0"])
def test_record_text_of_something_else_is_refused(text: str) -> None:
    with pytest.raises(ValueError, match=r"record text|could not convert"):
        BINARY64.decode(text)


def test_the_numbers_themselves() -> None:
    assert BINARY64.kind == "binary64"
    assert BINARY64.integer(3) == 3.0
    assert BINARY64.spacing(-1.0) == 2.0**-52
    assert BINARY64.approximate(0.1) == 0.1
