"""Problems that are whole, and what is said of those that are not."""

from __future__ import annotations

import time
from dataclasses import replace

import pytest

from surefoot.equation.checking import check_problem, parse_known
from surefoot.equation.parser import parse_condition, parse_equation, parse_expression
from surefoot.equation.problem import Correlation, Definition, Input, Problem
from surefoot.equation.wording import to_text
from surefoot.errors import EquationError, ProblemError

DEPTH = Problem(
    unknown="y",
    equation="Q = Qd",
    range=("0.05", "6.0"),
    needed="0.005",
    admissible=("y > yc", "Q > 0"),
    prefer="nearest:1.2",
    derivative="b + 2*z*y",
    where=(
        Definition("A", "(b + z*y)*y"),
        Definition("P", "b + 2*y*sqrt(1 + z^2)"),
        Definition("Q", "A/n*(A/P)^(2/3)*sqrt(S)"),
        Definition("k", "1"),
        Definition("yc", "1.05*k"),
    ),
    inputs=(
        Input("b", "3.0"),
        Input("z", "1.5"),
        Input("S", "0x1.a36e2eb1c432dp-11"),
        Input("n", "0.025", uncertainty="0.002", distribution="normal"),
        Input("Qd", "12", low="4.0", high="18.0", interval=("11", "13"), dof="5"),
        Input("idle", "-1e-3", half_width="0"),
    ),
    correlation=(Correlation(("b", "n"), "-0.3"),),
)


def refusal(problem: Problem) -> ProblemError:
    with pytest.raises(ProblemError) as caught:
        check_problem(problem)
    return caught.value


def test_a_whole_problem() -> None:
    checked = check_problem(DEPTH)
    assert checked.problem is DEPTH
    assert checked.equation == parse_equation("Q = Qd")
    assert to_text(checked.residual) == "Q - Qd"
    assert [name for name, _ in checked.definitions] == ["A", "P", "Q", "k", "yc"]
    assert dict(checked.definitions)["P"] == parse_expression("b + 2*y*sqrt(1 + z^2)")
    assert checked.admissible == (parse_condition("y > yc"), parse_condition("Q > 0"))
    assert checked.host_derivative == parse_expression("b + 2*z*y")
    assert checked.names == {
        "y": "unknown",
        **dict.fromkeys(("b", "z", "S", "n", "Qd", "idle"), "input"),
        **dict.fromkeys(("A", "P", "Q", "k", "yc"), "definition"),
    }
    assert checked.moving == {"A", "P", "Q"}


def test_the_residual_of_one_side_is_that_side() -> None:
    checked = check_problem(Problem("x", "x^2 - pi"))
    assert checked.residual == parse_expression("x^2 - pi")
    assert checked.host_derivative is None


WHOLE = Problem("x", "x = a", inputs=(Input("a", "1"),))


@pytest.mark.parametrize(
    ("problem", "place", "message"),
    [
        # names
        (replace(WHOLE, unknown="sin"), "unknown", "sin is a word of the equation language"),
        (replace(WHOLE, unknown="log"), "unknown", "log is a word of the equation language"),
        (replace(WHOLE, unknown="2x"), "unknown", "'2x' is not a name"),
        (replace(WHOLE, unknown=""), "unknown", "'' is not a name"),
        (replace(WHOLE, inputs=(Input("pi", "3"),)), "inputs.pi", "pi is a word of the equation language"),
        (replace(WHOLE, inputs=(Input("and", "3"),)), "inputs.and", "and is a word of the equation language"),
        (replace(WHOLE, where=(Definition("table", "3"),)), "where.table", "table is a word"),
        (replace(WHOLE, inputs=(Input("a", "1"), Input("a", "2"))), "inputs.a", "a is stated twice (input)"),
        (replace(WHOLE, inputs=(Input("x", "1"),)), "inputs.x", "x is stated twice (unknown and input)"),
        (replace(WHOLE, where=(Definition("a", "2"),)), "where.a", "a is stated twice (input and definition)"),
        # texts
        (replace(WHOLE, equation="x = 2a"), "equation", "column 6: no operator between two values"),
        (replace(WHOLE, equation=""), "equation", "column 1: there is no text"),
        (replace(WHOLE, where=(Definition("B", "1\n + log(x)"),)), "where.B", "line 2, column 4: log is written"),
        (replace(WHOLE, admissible=("x > 0", "x")), "admissible 2", "column 1: a value stands where a condition"),
        (replace(WHOLE, derivative="1 +"), "derivative", "column 4: the text ends"),
        (replace(WHOLE, equation="x = a + 1e400"), "equation", "column 9: 1e400 is beyond the range of binary64"),
        (replace(WHOLE, equation="x = a + 1e39f"), "equation", "column 9: 1e39f is beyond the range of binary32"),
        (replace(WHOLE, equation='x = table("pump", a)'), "equation", 'column 11: the table "pump" is not defined'),
        # unknown names
        (replace(WHOLE, equation="x = a + Rey"), "equation", "column 9: unknown name Rey"),
        (
            replace(WHOLE, equation="x = A*aa*q"),
            "equation",
            "column 5: unknown names A (nearest: a), aa (nearest: a), q",
        ),
        (replace(WHOLE, equation="x = π*a"), "equation", "column 5: unknown name π (nearest: pi)"),
        (replace(WHOLE, admissible=("x > 0", "a > b")), "admissible 2", "column 5: unknown name b"),
        (replace(WHOLE, derivative="x\n*c"), "derivative", "line 2, column 2: unknown name c"),
        (
            replace(WHOLE, equation="x = a*p", where=(Definition("B", "q + p"),), derivative="r"),
            "equation",
            "column 7: unknown names p, q, r",
        ),
        (
            Problem("x", "x = \u00b5", inputs=(Input("\u03bc", "1"),)),
            "equation",
            "unknown name \u00b5 U+00B5 (nearest: \u03bc U+03BC, which only looks alike)",
        ),
        # order
        (replace(WHOLE, where=(Definition("B", "C"), Definition("C", "1"))), "where.B", "B uses C, defined below it"),
        (
            replace(WHOLE, where=(Definition("B", "D*C + a"), Definition("C", "1"), Definition("D", "C"))),
            "where.B",
            "B uses C, D, defined below it; move C, D above B",
        ),
        (
            replace(WHOLE, where=(Definition("A", "x + P"), Definition("P", "A*2"))),
            "where.A",
            "the definitions go round in a circle: A -> P -> A",
        ),
        (
            replace(
                WHOLE, where=(Definition("E", "x"), Definition("A", "B"), Definition("B", "C"), Definition("C", "B"))
            ),
            "where.B",
            "the definitions go round in a circle: B -> C -> B",
        ),
        (replace(WHOLE, where=(Definition("A", "A + 1"),)), "where.A", "in a circle: A -> A"),
        # the unknown
        (replace(WHOLE, equation="a = 1"), "equation", "the unknown x does not enter the equation"),
        (
            replace(WHOLE, equation="B = 1", where=(Definition("B", "a"), Definition("C", "x"))),
            "equation",
            "the unknown x does not enter the equation",
        ),
        # values
        (replace(WHOLE, inputs=(Input("a", "1,5"),)), "inputs.a.value", "'1,5' is not a number; write it as 0.025"),
        (replace(WHOLE, inputs=(Input("a", "inf"),)), "inputs.a.value", "'inf' is not a number"),
        (replace(WHOLE, inputs=(Input("a", "1e999"),)), "inputs.a.value", "1e999 is beyond the range of binary64"),
        (replace(WHOLE, inputs=(Input("a", "1", low="x"),)), "inputs.a.low", "'x' is not a number"),
        (replace(WHOLE, inputs=(Input("a", "1", high="x"),)), "inputs.a.high", "'x' is not a number"),
        (replace(WHOLE, inputs=(Input("a", "1", low="2", high="1"),)), "inputs.a.low", "lower end 2 is not below"),
        (
            replace(WHOLE, inputs=(Input("a", "1", interval=("2", "2")),)),
            "inputs.a.interval",
            "lower end 2 is not below",
        ),
        (replace(WHOLE, inputs=(Input("a", "1", uncertainty="-1"),)), "inputs.a.uncertainty", "-1 is below zero"),
        (replace(WHOLE, inputs=(Input("a", "1", half_width="w"),)), "inputs.a.half_width", "'w' is not a number"),
        (replace(WHOLE, inputs=(Input("a", "1", dof="-1"),)), "inputs.a.dof", "-1 is below zero"),
        (replace(WHOLE, range=("2", "1")), "range", "the lower end 2 is not below the upper end 1"),
        (replace(WHOLE, range=("1", "1.00000000000000000001")), "range", "is not below the upper end"),
        (replace(WHOLE, range=("a", "1")), "range", "'a' is not a number"),
        (replace(WHOLE, needed="0"), "needed", "must be above zero"),
        (replace(WHOLE, prefer="middle"), "prefer", "accepted: smallest, largest, nearest"),
        (replace(WHOLE, prefer="nearest:b"), "prefer", "'b' is not a number"),
        (replace(WHOLE, correlation=(Correlation(("a", "x"), "0.1"),)), "correlation", "x is not an input"),
        (replace(WHOLE, correlation=(Correlation(("a", "a"), "1.1"),)), "correlation.r", "between -1 and 1"),
    ],
)
def test_refused_problems(problem: Problem, place: str, message: str) -> None:
    error = refusal(problem)
    assert error.place == place
    assert message in error.message
    assert str(error) == f"{place}: {error.message}"
    of_a_text = place in ("equation", "derivative") or place.startswith(("admissible", "where"))
    told_by_the_text = message.startswith(("column", "line", "unknown name"))
    assert (error.equation_error is not None) == (of_a_text and told_by_the_text)


def test_the_error_of_a_text_keeps_its_place() -> None:
    error = refusal(replace(WHOLE, equation="x\n = a + Rey")).equation_error
    assert error is not None
    assert (error.line, error.column, error.message) == (2, 8, "unknown name Rey")


def test_many_unknown_names_are_counted() -> None:
    names = [f"q{count}" for count in range(190)]
    began = time.perf_counter()
    error = refusal(replace(WHOLE, equation="x = a" + "".join(f"*{name}" for name in names)))
    assert error.message.endswith("q11 and 178 more")
    assert time.perf_counter() - began < 1.0


def test_thousands_of_definitions_are_checked_without_recursion() -> None:
    where = tuple(Definition(f"v{count}", f"v{count - 1} + 1" if count else "x") for count in range(3000))
    checked = check_problem(replace(WHOLE, equation="v2999 = a", where=where))
    assert len(checked.moving) == 3000
    closed = (Definition("v0", "v2999"), *where[1:])
    assert refusal(replace(WHOLE, where=closed)).message.endswith(
        "v0 -> v2999 -> v2998 -> v2997 -> v2996 -> v2995 -> v2994 -> v2993 -> v2992 -> v2991 -> v2990 -> ... -> v0"
    )


@pytest.mark.parametrize(
    ("text", "column", "message"),
    [
        ("x + y", 5, "unknown name y"),
        ("xy + zz*pi", 1, "unknown names xy (nearest: x), zz"),
        ("1e400*x", 1, "1e400 is beyond the range of binary64"),
        ('table("t", x)', 7, 'the table "t" is not defined'),
        ("x +", 4, "the text ends behind '+'"),
    ],
)
def test_parse_known_refuses(text: str, column: int, message: str) -> None:
    with pytest.raises(EquationError) as caught:
        parse_known(text, parse_expression, ["x"])
    assert (caught.value.column, caught.value.message) == (column, message)


def test_parse_known_accepts() -> None:
    assert parse_known("x_k > pi", parse_condition, ["x_k"]) == parse_condition("x_k > pi")
