"""Compiled trees: which operations are done, in which order, how often, and how failures are told."""

from __future__ import annotations

from collections.abc import Callable, Mapping

import pytest

from support.stack import below
from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.binary64 import BINARY64, Binary64
from surefoot.equation.compiling import compile_condition, compile_expression
from surefoot.equation.parser import MAX_DEPTH, parse_condition, parse_equation, parse_expression
from surefoot.equation.results import EvaluationFailed, Failure, FailureKind
from surefoot.equation.tree import Binary, Call, Expression, Name, Negate, Number, Piecewise


class Traced(Binary64):
    """binary64 that writes down each operation, and has no Bessel functions."""

    def __init__(self) -> None:
        self.done: list[str] = []
        self.literals: list[str] = []

    @property
    def functions(self) -> Mapping[str, Callable[..., float]]:
        names = [name for name in super().functions if not name.startswith("cyl_")]
        return {name: self._traced(name) for name in names}

    def _traced(self, name: str) -> Callable[..., float]:
        def traced(*arguments: float) -> float:
            self.done.append(f"{name}{arguments}")
            return super(Traced, self).functions[name](*arguments)

        return traced

    def literal(self, text: str, single: bool) -> float:
        self.literals.append(text)
        return super().literal(text, single)

    def add(self, a: float, b: float) -> float:
        self.done.append(f"{a} + {b}")
        return super().add(a, b)

    def divide(self, a: float, b: float) -> float:
        self.done.append(f"{a} / {b}")
        return super().divide(a, b)


SLOTS = {"x": 1, "y": 0}


def run(text: str, x: float, y: float = 0.0) -> tuple[float, list[str]]:
    """The value, and the operations that were done for it."""
    traced = Traced()
    compiled = compile_expression(parse_expression(text), traced, SLOTS)
    assert traced.done in ([], ["pi()"])  # a constant is taken when compiling
    traced.done.clear()
    return compiled([y, x]), traced.done


def decide(text: str, x: float, y: float = 0.0) -> tuple[bool, list[str]]:
    traced = Traced()
    return compile_condition(parse_condition(text), traced, SLOTS)([y, x]), traced.done


def failure(text: str, x: float) -> Failure:
    with pytest.raises(EvaluationFailed) as caught:
        compile_expression(parse_expression(text), Traced(), SLOTS)([0.0, x])
    assert isinstance(caught.value.result, Failure)
    return caught.value.result


def test_operations_are_done_once_in_the_order_of_the_text() -> None:
    value, done = run("abs(x) + y/2 + sin(x + 1)*0 + pi", x=1.0, y=4.0)
    assert value == 1.0 + 2.0 + 3.141592653589793
    sine = "sin(2.0,)"
    assert done[:5] == ["abs(1.0,)", "4.0 / 2.0", "1.0 + 2.0", "1.0 + 1.0", sine]
    assert len(done) == 7


def test_literals_are_converted_once() -> None:
    traced = Traced()
    compiled = compile_expression(parse_expression("0.1*x + 0.1"), traced, SLOTS)
    assert [compiled([0.0, x]) for x in (1.0, 2.0)] == [0.2, 0.1 * 2.0 + 0.1]
    assert traced.literals == ["0.1", "0.1"]


@pytest.mark.parametrize(
    ("x", "value", "done"),
    [(1.0, 1.0, ["1.0 / 1.0"]), (0.0, 5.0, ["2.0 + 3.0"]), (-1.0, 1.0, ["abs(-1.0,)"])],
)
def test_only_the_branch_that_is_taken_is_evaluated(x: float, value: float, done: list[str]) -> None:
    assert run("piecewise(x > 0: 1/x; x == 0: 2 + 3; otherwise: abs(x))", x) == (value, done)


@pytest.mark.parametrize(
    ("text", "holds", "operations"),
    [
        ("x < 0 and 1/x > 0", False, 0),
        ("x > 0 and 1/x > 0", True, 1),
        ("x > 0 or 1/x > 0", True, 0),
        ("x < 0 or 1/x > 2", False, 1),
        ("not x < 0", True, 0),
        ("not (x > 0 and abs(x) > 0)", False, 1),
        ("x < 0 or x > 0 and not 1/x > 2", True, 1),
    ],
)
def test_conditions_stop_when_they_are_decided(text: str, holds: bool, operations: int) -> None:
    found, done = decide(text, x=1.0)
    assert (found, len(done)) == (holds, operations)


@pytest.mark.parametrize(
    ("text", "holds", "operations"),
    [
        ("0 < x + 1 < 3", True, 1),  # the operand in the middle is evaluated once
        ("2 < x + 1 < 1/y", False, 1),  # and the last one not at all
        ("0 <= x <= 1 != 2 == 2 >= 2 > 1", True, 0),
        ("1 == 1 != 1", False, 0),
    ],
)
def test_chained_comparisons(text: str, holds: bool, operations: int) -> None:
    found, done = decide(text, x=1.0)
    assert (found, len(done)) == (holds, operations)


def test_an_operand_of_a_comparison_that_fails_fails_the_whole() -> None:
    with pytest.raises(EvaluationFailed, match=r"division by zero: 1/x at 1\.0, 0\.0"):
        decide("1/x > 2", x=0.0)
    expected = Failure(FailureKind.DIVISION_BY_ZERO, "1/x", ("1.0", "0.0"))
    assert failure("piecewise(1/x > 2: 1; otherwise: 2)", x=0.0) == expected


def test_the_innermost_failure_is_told() -> None:
    assert failure("exp(ln(x) + 1)^2", x=-1.0) == Failure(FailureKind.DOMAIN, "ln(x)", ("-1.0",))


def test_functions_and_tables_that_the_arithmetic_lacks() -> None:
    expected = Failure(FailureKind.UNAVAILABLE, "cyl_bessel_j(0, x)", ("0.0", "1.5"))
    assert failure("2*cyl_bessel_j(0, x)", x=1.5) == expected
    assert failure('table("pump", x)', x=1.5) == Failure(FailureKind.UNAVAILABLE, 'table("pump", x)', ("1.5",))
    assert run("piecewise(x > 0: x; otherwise: cyl_bessel_j(0, x))", x=1.5)[0] == 1.5


def test_functions_of_several_arguments_fail_with_all_of_them() -> None:
    class Refusing(Binary64):
        @property
        def functions(self) -> Mapping[str, Callable[..., float]]:
            def refuse(*_: float) -> float:
                raise OperationFailed(FailureKind.NOT_A_NUMBER)

            return {"max": refuse}

    compiled = compile_expression(parse_expression("max(1, x, 3)"), Refusing(), SLOTS)
    with pytest.raises(EvaluationFailed) as caught:
        compiled([0.0, 2.0])
    assert caught.value.result == Failure(FailureKind.NOT_A_NUMBER, "max(1, x, 3)", ("1.0", "2.0", "3.0"))


def test_a_failure_carries_the_definition_and_record_text() -> None:
    compiled = compile_expression(
        parse_expression("sqrt(x)"), BINARY64, SLOTS, encode=lambda number: f"<{number}>", definition="Q"
    )
    with pytest.raises(EvaluationFailed) as caught:
        compiled([0.0, -4.0])
    assert caught.value.result == Failure(FailureKind.DOMAIN, "sqrt(x)", ("<-4.0>",), "Q")
    assert str(caught.value) == "outside the domain: sqrt(x) at <-4.0> in Q"
    holds = compile_condition(parse_condition("1/x > 0"), BINARY64, SLOTS, definition="admissible")
    with pytest.raises(EvaluationFailed, match="in admissible"):
        holds([0.0, 0.0])


def test_an_equation_has_no_value() -> None:
    equation = parse_equation("x = y")
    with pytest.raises(TypeError, match="left minus right"):
        compile_expression(equation, BINARY64, SLOTS)  # type: ignore[arg-type]


# Depth


def _towers() -> dict[str, Expression]:
    """The highest trees that a text may have, by what they are made of."""
    x, half = Name("x"), Number("0.5")
    towers: dict[str, Expression] = dict.fromkeys(("signs", "sums", "powers", "calls", "branches", "conditions"), x)
    for _ in range(MAX_DEPTH - 1):
        towers["signs"] = Negate(towers["signs"])
        towers["sums"] = Binary("+", towers["sums"], half)
        towers["powers"] = Binary("^", x, towers["powers"])
        towers["calls"] = Call("max", (half, half, towers["calls"]))
        branch = parse_condition("x > 2")
        towers["branches"] = Piecewise(((branch, x),), towers["branches"])
    condition = "x > 0"
    for _ in range(MAX_DEPTH // 2 - 3):
        condition = f"not ({condition} and x > 0)"
    towers["conditions"] = parse_expression(f"piecewise({condition}: 1; otherwise: x)")
    return towers


@pytest.mark.parametrize("kind", sorted(_towers()))
@pytest.mark.parametrize("frames", [0, 100, 600])
def test_the_highest_trees_are_evaluated_far_down_the_stack(kind: str, frames: int) -> None:
    tree = _towers()[kind]
    compiled = below(frames, lambda: compile_expression(tree, BINARY64, SLOTS))
    expected = {"sums": 0.5 + 0.5 * (MAX_DEPTH - 1), "signs": -0.5, "conditions": 0.5}
    value = below(frames, lambda: compiled([0.0, 0.5]))
    assert value == pytest.approx(expected.get(kind, 0.5 if kind != "powers" else 0.641185744504986), rel=1e-14)
