"""Multiprecision against ball arithmetic (elementary functions), mpmath (special functions) and exact fractions."""

from __future__ import annotations

import contextlib
import math
import operator
import random
import time
from collections.abc import Callable
from fractions import Fraction
from typing import Any

import mpmath
import pytest
from flint import arb
from hypothesis import example, given
from hypothesis import strategies as st
from mpmath import libmp

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.compiling import compile_expression
from surefoot.equation.functions import CONSTANTS, FUNCTIONS
from surefoot.equation.multiprecision import Multiprecision
from surefoot.equation.multiprecision_functions import EXPONENT_LIMIT
from surefoot.equation.parser import parse_expression
from surefoot.equation.results import EvaluationFailed, Failure
from surefoot.equation.special import arb_precision

MP50 = Multiprecision(50)
ARITHMETICS = [Multiprecision(15), MP50, Multiprecision(200)]
CONFORMS: Arithmetic = MP50
LEAST = Fraction(2) ** -EXPONENT_LIMIT


def exact(x: Any) -> Fraction:
    sign, mantissa, exponent, _ = x._mpf_
    return (-1) ** sign * Fraction(int(mantissa)) * Fraction(2) ** int(exponent)


def nearest(value: Fraction, bits: int) -> Fraction:
    """The number of so many bits nearest to a fraction, ties to even."""
    if value == 0:
        return value
    exponent = abs(value).numerator.bit_length() - abs(value).denominator.bit_length() - bits
    exponent += abs(value) / Fraction(2) ** exponent >= 2**bits
    exponent -= abs(value) / Fraction(2) ** exponent < 2 ** (bits - 1)
    return Fraction(round(value / Fraction(2) ** exponent)) * Fraction(2) ** exponent


def number(arithmetic: Multiprecision, text: str) -> Any:
    return arithmetic.literal(text, single=False)


@st.composite
def numbers(draw: st.DrawFn, arithmetic: Multiprecision = MP50, most: int = 300) -> Any:
    mantissa = draw(st.integers(-(2**arithmetic.bits) + 1, 2**arithmetic.bits - 1))
    exponent = draw(st.integers(-most, most) | st.integers(-arithmetic.bits - 3, -arithmetic.bits + 3))
    return arithmetic._made(libmp.from_man_exp(mantissa, exponent))


def test_fifty_digits_have_175_bits() -> None:
    """50 log2(10) = 166.1: 167 bits and 8 more."""
    assert MP50.bits == 175
    assert MP50.kind == "multiprecision:50"


@given(numbers(), numbers())
def test_the_four_operations_round_once(a: Any, b: Any) -> None:
    operations: list[tuple[Callable[..., Any], Callable[..., Fraction]]] = [
        (MP50.add, operator.add),
        (MP50.subtract, operator.sub),
        (MP50.multiply, operator.mul),
    ]
    operations += [(MP50.divide, operator.truediv)] if b else []
    for operation, of_fractions in operations:
        assert exact(operation(a, b)) == nearest(of_fractions(exact(a), exact(b)), MP50.bits)


@given(numbers(), numbers())
def test_plain_operators_of_step_rules_round_to_the_same_bits(f: Any, slope: Any) -> None:
    x = number(MP50, "0.1")
    assert MP50.add(x, f) == x + f
    assert exact(2 * x) == 2 * exact(x)
    for value in (x - f, x + 1, 0.5 * (x + f), (x + f) / 2, -x, abs(f), max(x, f)):
        assert exact(value) == nearest(exact(value), MP50.bits)
    if slope:
        assert x - f / slope == MP50.subtract(x, MP50.divide(f, slope))


BALLS: dict[str, Callable[[Any], Any]] = {
    "sin": arb.sin,
    "cos": arb.cos,
    "tan": arb.tan,
    "asin": arb.asin,
    "acos": arb.acos,
    "atan": arb.atan,
    "sinh": arb.sinh,
    "cosh": arb.cosh,
    "tanh": arb.tanh,
    "asinh": arb.asinh,
    "acosh": arb.acosh,
    "atanh": arb.atanh,
    "exp": arb.exp,
    "expm1": arb.expm1,
    "ln": arb.log,
    "log1p": arb.log1p,
    "log10": lambda x: x.log() / arb(10).log(),
    "log2": lambda x: x.log() / arb(2).log(),
    "sqrt": arb.sqrt,
    "cbrt": lambda x: x.sgn() * abs(x).root(3),
    "floor": arb.floor,
    "ceil": arb.ceil,
    "abs": abs,
    "sign": arb.sgn,
}
BALLS_OF_TWO: dict[str, Callable[[Any, Any], Any]] = {
    "atan2": arb.atan2,
    "hypot": lambda x, y: (x * x + y * y).sqrt(),
    "power": lambda x, y: x**y,
}


def value_by_balls(arithmetic: Multiprecision, function: Callable[..., Any], *arguments: Any) -> Fraction | None:
    """The correctly rounded value, zero below the range; None where there is no real one."""
    parts = [(int(x._mpf_[1]) * (-1) ** x._mpf_[0], int(x._mpf_[2])) for x in arguments]
    with arb_precision(8 * arithmetic.bits + 1000):
        ball = function(*map(arb, parts))
        if not ball.is_finite():
            return None
        mantissa, exponent = ball.mid().man_exp()
    middle = Fraction(int(mantissa)) * Fraction(2) ** int(exponent)
    return nearest(middle, arithmetic.bits) if abs(middle) >= LEAST else Fraction(0)


def near_edges(arithmetic: Multiprecision, draw: random.Random) -> Any:
    """An argument of any size below 100, often one that lies within a few units of 0, 1 or -1."""
    bits = arithmetic.bits
    whole = draw.choice([0, 1, -1, 2, 8, 100]) << bits
    offset = draw.choice([0, 1, -1, draw.getrandbits(bits // 2), -draw.getrandbits(bits - 3), draw.getrandbits(bits)])
    shift = draw.choice([0, 0, bits, 3 * bits]) if whole == 0 else 0
    return arithmetic._made(libmp.from_man_exp(whole + offset, -bits - shift, bits, "n"))


@pytest.mark.parametrize("arithmetic", ARITHMETICS, ids=lambda arithmetic: arithmetic.kind)
@pytest.mark.parametrize("name", BALLS)
def test_elementary_functions_are_correctly_rounded(arithmetic: Multiprecision, name: str) -> None:
    draw = random.Random(f"{name} {arithmetic.kind}")
    compared = 0
    for _ in range(60):
        x = near_edges(arithmetic, draw)
        expected = value_by_balls(arithmetic, BALLS[name], x)
        if expected is None:
            with pytest.raises(OperationFailed) as caught:
                arithmetic.functions[name](x)
            assert caught.value.kind == "domain"
        else:
            compared += 1
            assert exact(arithmetic.functions[name](x)) == expected, f"{name}({arithmetic.encode(x)})"
    assert compared > 10


@pytest.mark.parametrize("arithmetic", ARITHMETICS, ids=lambda arithmetic: arithmetic.kind)
@pytest.mark.parametrize("name", BALLS_OF_TWO)
def test_functions_of_two_arguments_are_correctly_rounded(arithmetic: Multiprecision, name: str) -> None:
    draw = random.Random(f"{name} {arithmetic.kind}")
    function = arithmetic.power if name == "power" else arithmetic.functions[name]
    compared = 0
    for _ in range(80):
        x, y = near_edges(arithmetic, draw), near_edges(arithmetic, draw)
        if x == 0 or (name == "power" and x < 0):
            continue
        expected = value_by_balls(arithmetic, BALLS_OF_TWO[name], x, y)
        assert expected is not None
        compared += 1
        assert exact(function(x, y)) == expected, f"{name}({arithmetic.encode(x)}, {arithmetic.encode(y)})"
    assert compared > 10


SPECIAL: dict[str, tuple[Callable[..., Any], list[tuple[str, ...]]]] = {
    "erf": (mpmath.erf, [("0.3",), ("-5",), ("1e-40",)]),
    "erfc": (mpmath.erfc, [("0.3",), ("-5",), ("30",)]),
    "tgamma": (mpmath.gamma, [("0.3",), ("-5.5",), ("24",), ("171.5",)]),
    "lgamma": (lambda x: mpmath.log(abs(mpmath.gamma(x))), [("0.3",), ("-2.457",), ("2.0001",), ("1e3",)]),
    "digamma": (lambda x: mpmath.psi(0, x), [("0.3",), ("1.4616321449683623",), ("-7.25",)]),
    "normal_cdf": (mpmath.ncdf, [("0.3",), ("-20",), ("3",)]),
    "cyl_bessel_j": (mpmath.besselj, [("0", "2.404825557695773"), ("1.5", "10"), ("3", "-2")]),
    "cyl_neumann": (mpmath.bessely, [("0", "0.9"), ("1.5", "10")]),
    "cyl_bessel_i": (mpmath.besseli, [("0", "0.9"), ("1.5", "10")]),
    "cyl_bessel_k": (mpmath.besselk, [("0", "0.9"), ("2.00001", "7"), (f"1.{29 * '0'}1", "30")]),
    "expint": (mpmath.ei, [("0.37250741078136663",), ("-3",), ("20",)]),
    "exp_integral_e1": (mpmath.e1, [("0.1",), ("20",)]),
    "cos_integral": (mpmath.ci, [("0.6165054856207162",), ("20",)]),
    "sin_integral": (mpmath.si, [("0.1",), ("-20",)]),
    "airy_ai": (mpmath.airyai, [("-2.338107410459767",), ("3",)]),
    "airy_bi": (mpmath.airybi, [("-1.173713222709128",), ("3",)]),
}


@pytest.mark.parametrize("name", SPECIAL)
def test_special_functions_are_correctly_rounded(name: str) -> None:
    reference, cases = SPECIAL[name]
    for texts in cases:
        arguments = [number(MP50, text) for text in texts]
        with mpmath.workdps(130):
            expected = nearest(exact(mpmath.re(reference(*map(mpmath.mpf, arguments)))), MP50.bits)
        assert exact(MP50.functions[name](*arguments)) == expected, f"{name}{texts}"


def test_every_function_and_constant_of_the_language_is_there() -> None:
    assert MP50.functions.keys() == FUNCTIONS.keys() | CONSTANTS.keys()
    assert MP50.encode(MP50.functions["pi"]()) == "mp50:3.1415926535897932384626433832795028841971693993751058"


def test_exact_results_are_exact() -> None:
    three = number(MP50, "3")
    assert MP50.power(three, number(MP50, "-1")) == MP50.divide(number(MP50, "1"), three)
    assert MP50.power(number(MP50, "-3"), three) == -27
    assert MP50.power(number(MP50, "0"), number(MP50, "0")) == 1
    assert MP50.power(number(MP50, "9"), number(MP50, "0.5")) == 3
    assert MP50.functions["log10"](number(MP50, "1e7")) == 7
    assert MP50.functions["log2"](number(MP50, "0.125")) == -3
    assert MP50.functions["cbrt"](number(MP50, "-27")) == -3
    assert MP50.functions["min"](three, number(MP50, "2"), number(MP50, "5")) == 2
    assert MP50.functions["max"](three, number(MP50, "2"), number(MP50, "5")) == 5
    assert MP50.functions["hypot"](three, number(MP50, "-4")) == 5
    assert MP50.functions["floor"](number(MP50, "-2.5")) == -3
    assert MP50.functions["sign"](number(MP50, "-2.5")) == -1


@pytest.mark.parametrize(
    ("text", "kind"),
    [
        ("sqrt(-x)", "domain"),
        ("ln(-x)", "domain"),
        ("ln(x - 2)", "domain"),
        ("(-x)^0.5", "domain"),
        ("asin(x)", "domain"),
        ("acos(-x)", "domain"),
        ("acosh(0.5)", "domain"),
        ("atanh(1)", "domain"),
        ("log1p(-1)", "domain"),
        ("log10(0)", "domain"),
        ("log2(-1)", "domain"),
        ("tgamma(-x)", "domain"),
        ("exp_integral_e1(-x)", "domain"),
        ("1/(x - 2)", "division_by_zero"),
        ("(x - 2)^(-1)", "division_by_zero"),
        ("exp(x*1e5)", "overflow"),
        ("expm1(x*1e5)", "overflow"),
        ("sinh(-x*1e5)", "overflow"),
        ("cosh(x*1e5)", "overflow"),
        ("tgamma(1e30)", "overflow"),
        ("tgamma(1e19000)", "overflow"),
        ("cyl_bessel_i(0, 1e9)", "overflow"),
        ("1e19000*1e19000", "overflow"),
        ("1e19000/1e-19000", "overflow"),
        ("-1e19728 - 1.5e19728", "overflow"),
        ("1e30000", "overflow"),
        ("-1e999999999999999999999", "overflow"),
        ("cyl_bessel_j(1e30, x)", "not_a_number"),
    ],
)
def test_results_that_are_not_finite_are_named(text: str, kind: str) -> None:
    with pytest.raises(EvaluationFailed) as caught:
        _evaluate(text)
    assert isinstance(caught.value.result, Failure)
    assert caught.value.result.kind == kind


def _evaluate(text: str, x: str = "2") -> Any:
    return compile_expression(parse_expression(text), MP50, {"x": 0}, encode=MP50.encode)([number(MP50, x)])


@pytest.mark.parametrize("text", ["exp(-x*1e5)", "1e-19000*1e-19000", "0.5^1e9", "erfc(1e9)", "1e-30000", "2^(-1e30)"])
def test_results_below_the_range_are_zero(text: str) -> None:
    assert _evaluate(text) == 0


@pytest.mark.parametrize(
    "text",
    [
        "9^9^9^9",
        "tgamma(1e30)",
        "exp(exp(exp(9)))",
        "-exp(-exp(exp(9)))",
        "lgamma(-1e30 - 0.5)",
        "sin(1e19000)",
        "tan(-1e19000)",
        "(1 + 1e-50)^1e50",
        "(1 + 1e-50)^1e19000",
        "1e-999999999",
        "cyl_bessel_k(1 + 1e-50, 30)",
        "airy_ai(-1e19000)",
        "erf(1e19000)",
        "digamma(1e19000)",
    ],
)
@pytest.mark.parametrize("digits", [15, 50, 1000])
def test_no_text_takes_long(text: str, digits: int) -> None:
    arithmetic = Multiprecision(digits)
    began = time.perf_counter()
    evaluate = compile_expression(parse_expression(text), arithmetic, {"x": 0}, encode=arithmetic.encode)
    with contextlib.suppress(EvaluationFailed):
        assert mpmath.isfinite(evaluate([arithmetic.integer(2)]))
    assert time.perf_counter() - began < 1.0


@given(numbers(most=60_000))
@example(number(MP50, "0.1"))
@example(number(MP50, "-1e19700"))
def test_record_text_reads_back_to_the_same_bits(x: Any) -> None:
    text = MP50.encode(x)
    assert text.startswith("mp50:")
    assert MP50.decode(text)._mpf_ == x._mpf_


@pytest.mark.parametrize("arithmetic", [Multiprecision(15), Multiprecision(37), Multiprecision(1000)])
def test_record_text_of_other_precisions_reads_back(arithmetic: Multiprecision) -> None:
    draw = random.Random(arithmetic.bits)
    for _ in range(40):
        raw = libmp.from_man_exp(draw.getrandbits(arithmetic.bits), draw.randint(-4000, 4000))
        text = arithmetic.encode(arithmetic._made(raw))
        assert arithmetic.decode(text)._mpf_ == raw


@pytest.mark.parametrize(
    ("text", "record"),
    [
        ("0.1", "mp50:0.1"),
        ("0", "mp50:0.0"),
        ("-2.50", "mp50:-2.5"),
        ("1e-30", "mp50:1.0e-30"),
        ("0x1.8p1", "mp50:3.0"),
    ],
)
def test_record_text_is_short_where_it_can_be(text: str, record: str) -> None:
    assert MP50.encode(number(MP50, text)) == record


@pytest.mark.parametrize("text", ["inf", "-inf", "nan"])
def test_what_a_step_rule_made_beyond_all_numbers_can_be_recorded(text: str) -> None:
    value = MP50.decode(f"mp50:{text}")
    assert MP50.encode(value) == f"mp50:{text}"


@pytest.mark.parametrize(
    "text", ["0.1", "mp50:0.10", "mp40:0.1", "mp50:", "mp50:1e99999", "mp50:0x1p0", "mp50:x", "f32:0.1"]
)
def test_other_texts_are_refused(text: str) -> None:
    with pytest.raises(ValueError, match="not the record text of multiprecision:50"):
        MP50.decode(text)


@given(st.from_regex(r"-?[0-9]{1,60}(\.[0-9]{0,60})?(e[+-]?[0-9]{1,2})?", fullmatch=True))
def test_decimal_literals_are_rounded_once_from_their_text(text: str) -> None:
    assert exact(number(MP50, text)) == nearest(Fraction(text), MP50.bits)


def test_literals_of_any_length_are_read() -> None:
    third = number(MP50, "0." + "3" * 15_000)
    assert third == MP50.divide(number(MP50, "1"), number(MP50, "3"))
    assert number(MP50, "1" + "0" * 9000) == number(MP50, "1e9000")
    assert number(MP50, "0.0e999999999999") == 0
    assert exact(number(MP50, "-0x1.a36e2eb1c432dp-11")) == Fraction(float.fromhex("-0x1.a36e2eb1c432dp-11"))
    with pytest.raises(ValueError, match="not a literal"):
        number(MP50, "1,5")


def test_single_literals_are_rounded_to_binary32_first() -> None:
    """3.7 in binary32 is 3.7000000476837158203125 (bits 0x406ccccd)."""
    assert exact(MP50.literal("3.7", single=True)) == Fraction("3.7000000476837158203125")
    assert MP50.encode(MP50.literal("3.7", single=False)) == "mp50:3.7"


@given(numbers())
def test_spacing_is_one_unit_in_the_last_place(x: Any) -> None:
    spacing = exact(MP50.spacing(x))
    if x:
        next_larger = abs(exact(x)) + spacing
        assert nearest(next_larger, MP50.bits) == next_larger
        middle = abs(exact(x)) + spacing / 2
        assert nearest(middle, MP50.bits) != middle
    else:
        assert spacing == LEAST


def test_the_nearest_binary64_is_given_for_pictures() -> None:
    assert MP50.approximate(number(MP50, "0.1")) == 0.1
    assert MP50.approximate(number(MP50, "-1e400")) == -math.inf
    assert MP50.approximate(number(MP50, "1e-400")) == 0.0
    assert MP50.approximate(MP50.decode("mp50:inf")) == math.inf
    assert MP50.approximate(MP50.integer(0)) == 0.0


def test_no_global_precision_is_touched() -> None:
    before = mpmath.mp.prec
    MP50.functions["exp"](number(MP50, "0.1"))
    Multiprecision(300).functions["erf"](Multiprecision(300).integer(1))
    assert mpmath.mp.prec == before
    assert MP50.divide(MP50.integer(1), MP50.integer(3)) != Multiprecision(60).divide(MP50.integer(1), MP50.integer(3))


@pytest.mark.parametrize("digits", [14, 1001, 0, -3])
def test_the_number_of_digits_is_bounded(digits: int) -> None:
    with pytest.raises(ValueError, match="not between 15 and 1000"):
        Multiprecision(digits)


def test_an_expression_is_evaluated_as_written() -> None:
    """With 175 bits (x + 1e60) - 1e60 loses the one, with 1e16 it does not."""
    assert _evaluate("(x + 1e60) - 1e60", "1") == 0
    assert _evaluate("(x + 1e16) - 1e16", "1") == 1
