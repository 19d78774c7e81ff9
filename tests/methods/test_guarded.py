"""Numbers with operators: the bits of the arithmetic, and its failures."""

from __future__ import annotations

import pytest

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.results import FailureKind
from surefoot.methods.guarded import Guarded, guarded, rounding_unit

KINDS = ["binary64", "binary32", "multiprecision:30"]


@pytest.mark.parametrize("kind", KINDS)
def test_each_operator_is_one_operation_of_the_arithmetic(kind: str) -> None:
    numbers = arithmetic_of(kind)
    a, b = (numbers.literal(text, False) for text in ("0.1", "0.7"))
    x, y = guarded(numbers, (a, b))
    assert (x + y).value == numbers.add(a, b)
    assert (x - y).value == numbers.subtract(a, b)
    assert (x * y).value == numbers.multiply(a, b)
    assert (x / y).value == numbers.divide(a, b)
    assert (x + 2).value == numbers.add(a, numbers.integer(2))
    assert (1 - x).value == numbers.subtract(numbers.integer(1), a)
    assert (3 * x / 2).value == numbers.divide(numbers.multiply(numbers.integer(3), a), numbers.integer(2))
    assert (-x).value == numbers.negate(a)
    assert abs(-x).value == a
    assert x.sqrt().value == numbers.functions["sqrt"](a)
    assert x.power(y).value == numbers.power(a, b)
    assert {type(each.value) for each in (x + y, 2 * x, 1 - x, x / 2)} == {type(a)}


@pytest.mark.parametrize("kind", KINDS)
def test_comparisons(kind: str) -> None:
    numbers = arithmetic_of(kind)
    x, y = (Guarded(numbers, numbers.literal(text, False)) for text in ("0.25", "0.5"))
    assert (x < y, x <= y, x > y, x >= y) == (True, True, False, False)
    assert (x < 1, y >= 1, 2 * x <= y, x > 0) == (True, False, True, True)


def test_what_has_no_finite_value_raises() -> None:
    numbers = arithmetic_of("binary64")
    huge, zero, minus = guarded(numbers, (1.7e308, 0.0, -1.0))
    for operation, kind in (
        (lambda: huge + huge, FailureKind.OVERFLOW),
        (lambda: 2 * huge, FailureKind.OVERFLOW),
        (lambda: huge / zero, FailureKind.DIVISION_BY_ZERO),
        (lambda: minus.sqrt(), FailureKind.DOMAIN),
    ):
        with pytest.raises(OperationFailed) as failed:
            operation()
        assert failed.value.kind == kind


def test_the_rounding_unit_is_the_spacing_at_one() -> None:
    assert rounding_unit(arithmetic_of("binary64")).value == 2.0**-52
    assert float(rounding_unit(arithmetic_of("binary32")).value) == 2.0**-23
