"""binary32 against exact fractions rounded once, and against numpy's own single-precision operations."""

from __future__ import annotations

import math
import operator
import struct
from collections.abc import Callable
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.binary32 import BINARY32
from surefoot.equation.compiling import compile_expression
from surefoot.equation.functions import CONSTANTS, FUNCTIONS
from surefoot.equation.parser import parse_expression

ARITHMETIC: Arithmetic = BINARY32
LARGEST = float(np.finfo(np.float32).max)
LEAST = math.ldexp(1.0, -149)

singles = st.floats(width=32, allow_nan=False, allow_infinity=False).map(np.float32)
OPERATIONS: list[tuple[Callable[..., np.float32], Callable[[Fraction, Fraction], Fraction]]] = [
    (BINARY32.add, operator.add),
    (BINARY32.subtract, operator.sub),
    (BINARY32.multiply, operator.mul),
    (BINARY32.divide, operator.truediv),
]


def nearest_single(exact: Fraction) -> float:
    """The binary32 nearest to a fraction, ties to even, with whole numbers only; infinite beyond the largest."""
    if exact == 0:
        return 0.0
    size = abs(exact)
    exponent = max(size.numerator.bit_length() - size.denominator.bit_length() - 24, -149)
    while exponent > -149 and size / Fraction(2) ** exponent < 2**23:
        exponent -= 1
    while size / Fraction(2) ** exponent >= 2**24:
        exponent += 1
    whole = round(size / Fraction(2) ** exponent)  # rounds ties to even
    value = Fraction(whole) * Fraction(2) ** exponent
    return math.copysign(math.inf if value >= 2**128 else float(value), exact)


def bits(x: object) -> bytes:
    return struct.pack("<f", x)


@pytest.mark.parametrize(("operation", "exact"), OPERATIONS)
@given(a=singles, b=singles)
@example(a=np.float32(1.0), b=np.float32(LEAST))
@example(a=np.float32(LEAST), b=np.float32(3.0))
@example(a=np.float32(LARGEST), b=np.float32(LARGEST))
def test_the_four_operations_round_once(
    operation: Callable[..., np.float32],
    exact: Callable[[Fraction, Fraction], Fraction],
    a: np.float32,
    b: np.float32,
) -> None:
    if operation == BINARY32.divide and b == 0:
        return
    expected = nearest_single(exact(Fraction(float(a)), Fraction(float(b))))
    if math.isinf(expected):
        with pytest.raises(OperationFailed) as caught:
            operation(a, b)
        assert caught.value.kind == "overflow"
    else:
        found = operation(a, b)
        assert type(found) is np.float32
        assert float(found) == expected


@given(a=singles, b=singles)
def test_the_four_operations_are_those_of_numpy(a: np.float32, b: np.float32) -> None:
    with np.errstate(all="ignore"):
        pairs = [(BINARY32.add, a + b), (BINARY32.subtract, a - b), (BINARY32.multiply, a * b)]
        pairs += [(BINARY32.divide, a / b)] if b else []
    for operation, expected in pairs:
        if np.isfinite(expected):
            assert bits(operation(a, b)) == bits(expected)


@given(singles)
def test_the_square_root_rounds_once(x: np.float32) -> None:
    if x < 0:
        with pytest.raises(OperationFailed) as caught:
            BINARY32.functions["sqrt"](x)
        assert caught.value.kind == "domain"
    else:
        assert bits(BINARY32.functions["sqrt"](x)) == bits(np.sqrt(x))


@pytest.mark.parametrize(
    ("function", "x", "value"),
    [
        ("exp", 1.0, 2.718281828459045),
        ("ln", 10.0, 2.302585092994046),
        ("sin", 0.5, 0.479425538604203),
        ("erf", 0.5, 0.5204998778130465),
        ("cbrt", -8.0, -2.0),
        ("tgamma", 5.0, 24.0),
    ],
)
def test_functions_are_those_of_binary64_rounded(function: str, x: float, value: float) -> None:
    """Values of Abramowitz and Stegun, Tables 4.4, 4.2, 4.6, 7.1 and 6.1, from memory."""
    found = BINARY32.functions[function](np.float32(x))
    assert type(found) is np.float32
    assert float(found) == nearest_single(Fraction(value))


def test_every_function_and_constant_of_the_language_is_there() -> None:
    assert BINARY32.functions.keys() == FUNCTIONS.keys() | CONSTANTS.keys()
    assert BINARY32.functions["pi"]() == np.float32(3.1415927)


@pytest.mark.parametrize(
    ("call", "kind"),
    [
        (lambda: BINARY32.multiply(np.float32(1e30), np.float32(1e30)), "overflow"),
        (lambda: BINARY32.divide(np.float32(1.0), np.float32(0.0)), "division_by_zero"),
        (lambda: BINARY32.power(np.float32(0.0), np.float32(-1.0)), "division_by_zero"),
        (lambda: BINARY32.power(np.float32(-8.0), np.float32(1 / 3)), "domain"),
        (lambda: BINARY32.power(np.float32(10.0), np.float32(39.0)), "overflow"),
        (lambda: BINARY32.functions["exp"](np.float32(89.0)), "overflow"),
        (lambda: BINARY32.functions["ln"](np.float32(0.0)), "domain"),
        (lambda: BINARY32.functions["tgamma"](np.float32(40.0)), "overflow"),
        (lambda: BINARY32.literal("1e39", single=False), "overflow"),
    ],
)
def test_results_that_are_not_finite_are_named(call: Callable[[], object], kind: str) -> None:
    with pytest.raises(OperationFailed) as caught:
        call()
    assert caught.value.kind == kind


def test_results_below_the_least_number_are_zero() -> None:
    assert BINARY32.multiply(np.float32(1e-30), np.float32(1e-30)) == 0
    assert BINARY32.power(np.float32(10.0), np.float32(-60.0)) == 0


@given(singles)
def test_step_rules_with_plain_operators_stay_in_binary32(x: np.float32) -> None:
    slope, f = np.float32(3.0), np.float32(0.1)
    with np.errstate(all="ignore"):
        rules = [x - f / slope, x + 1, 2 * x, x - 0.5, 0.5 * (x + slope), (x + slope) / 2, -x, abs(x), x * x, x - 1e-12]
        rules += [1 / (1 + abs(x)), max(x, slope), min(x, 2 * slope)]
    assert all(type(value) is np.float32 for value in rules)


@given(singles)
def test_record_text_reads_back_to_the_same_bits(x: np.float32) -> None:
    text = BINARY32.encode(x)
    assert text.startswith("f32:")
    assert bits(BINARY32.decode(text)) == bits(x)


@pytest.mark.parametrize(
    ("x", "text"),
    [
        (0.1, "f32:0.1"),
        (-0.0, "f32:-0.0"),
        (LEAST, "f32:1e-45"),
        (LARGEST, "f32:3.4028235e+38"),
        (math.inf, "f32:inf"),
        (-math.inf, "f32:-inf"),
        (math.nan, "f32:nan"),
    ],
)
def test_record_text_is_the_shortest(x: float, text: str) -> None:
    assert BINARY32.encode(np.float32(x)) == text
    assert bits(BINARY32.decode(text)) == bits(x)


@pytest.mark.parametrize(
    "text", ["0.1", "f32:", "f32:0.10", "f32:0.1f", "f32:1e39", "f32:x", "f64:0.1", "f32:f32:0.1", ""]
)
def test_other_texts_are_refused(text: str) -> None:
    with pytest.raises(ValueError, match="not the record text of a binary32"):
        BINARY32.decode(text)


def test_literals_are_rounded_once_from_their_text() -> None:
    """1 + 2**-24 + 2**-60 lies above the midpoint of two binary32, its nearest binary64 on it."""
    above = "1.0000000596046447753906251"
    assert float(above) == 1.0 + 2.0**-24
    assert float(BINARY32.literal(above, single=False)) == 1.0 + 2.0**-23
    assert float(BINARY32.literal("1.000000059604644775390625", single=True)) == 1.0
    assert float(BINARY32.literal("-0x1.8p-3", single=False)) == -0.1875
    with pytest.raises(ValueError, match="not a literal"):
        BINARY32.literal("1,5", single=False)


@given(singles)
def test_spacing_is_that_of_numpy(x: np.float32) -> None:
    assert bits(BINARY32.spacing(x)) == bits(np.spacing(abs(x)) if abs(x) < LARGEST else 2.0**104)
    assert type(BINARY32.spacing(x)) is np.float32


def test_an_expression_is_evaluated_as_written() -> None:
    """With eight digits the one is lost: 1e8 + 1 is 1e8."""
    evaluate = compile_expression(parse_expression("(x + 1e8) - 1e8"), BINARY32, {"x": 0}, encode=BINARY32.encode)
    assert evaluate([np.float32(1.0)]) == 0
    assert evaluate([np.float32(5.0)]) == 8
    assert BINARY32.approximate(np.float32(0.1)) == 0.10000000149011612
    assert float(BINARY32.integer(7)) == 7.0
    assert float(BINARY32.negate(np.float32(2.5))) == -2.5
