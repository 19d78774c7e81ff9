"""How a form is read: trees, names without a value, the unknown that is proposed, errors at their place."""

from __future__ import annotations

from dataclasses import replace

import pytest

from surefoot.equation.problem import Definition, Input, Problem
from surefoot.equation.wording import to_text
from surefoot.errors import ProblemError
from surefoot.screens.form import Fault, Form, form_of
from surefoot.screens.form_reading import fault_of, read_form, tidied

COLEBROOK = Form(
    unknown="f",
    low="0.005",
    high="0.1",
    equation="1/sqrt(f) = -2*log10(eps/(3.7*D) + 2.51/(Re*sqrt(f)))",
    inputs="Re = 1e5\neps = 1e-4 m\nD = 1.0 m",
)
MANNING = Form(
    unknown="y",
    equation="Q = Qd",
    where="A = (b + z*y)*y\nP = b + 2*y*sqrt(1 + z^2)\nQ = A/n*(A/P)^(2/3)*sqrt(S)",
    inputs="b = 3.0 m\nz = 1.5\nS = 0.0002\nn = 0.025\nQd = 12 m3/s [4, 18]",
)


def tidy(form: Form) -> Form:
    return tidied(form, read_form(form))


@pytest.mark.parametrize("form", [COLEBROOK, MANNING])
def test_a_whole_form_is_a_problem(form: Form) -> None:
    reading = read_form(form)
    assert reading.fault is None
    assert reading.problem is not None
    assert form_of(reading.problem) == form
    assert reading.nameless == ()


def test_the_trees_are_those_of_the_texts() -> None:
    reading = read_form(MANNING)
    assert reading.equation is not None
    assert to_text(reading.equation) == "Q = Qd"
    assert [(line, name) for line, name, _ in reading.definitions] == [(1, "A"), (2, "P"), (3, "Q")]
    assert to_text(reading.definitions[2][2]) == "A/n*(A/P)^(2/3)*sqrt(S)"


def test_names_without_a_value_come_in_the_order_of_the_text() -> None:
    reading = read_form(replace(COLEBROOK, unknown="", inputs="Re = 1e5"))
    assert reading.nameless == ("f", "eps", "D")
    assert reading.proposed == ""


def test_constants_and_definitions_need_no_value() -> None:
    assert read_form(Form(unknown="x", equation="x = A", where="A = pi*B\nB = 2")).nameless == ()


def test_the_one_name_that_is_left_is_proposed_as_the_unknown() -> None:
    reading = read_form(replace(COLEBROOK, unknown=""))
    assert reading.proposed == "f"
    assert tidied(replace(COLEBROOK, unknown=""), reading) == COLEBROOK


def test_lines_are_added_for_names_once_the_unknown_is_named() -> None:
    bare = replace(COLEBROOK, inputs="")
    assert tidy(bare).inputs == "eps = \nD = \nRe = "
    assert tidy(replace(bare, unknown="")).inputs == ""
    assert tidy(tidy(bare)) == tidy(bare)


def test_lines_with_a_value_stay_and_left_over_lines_go() -> None:
    form = replace(COLEBROOK, inputs="Re = 1e5\nepss = \nspare = 4\nD = ")
    assert tidy(form).inputs == "Re = 1e5\nspare = 4\nD = \neps = "


def test_the_empty_line_of_the_unknown_goes_when_it_is_named() -> None:
    form = Form(unknown="x", equation="x = a", inputs="x = \na = ")
    assert tidy(form).inputs == "a = "


def test_nothing_is_added_while_a_text_cannot_be_read() -> None:
    form = Form(unknown="x", equation="x = a*(", inputs="b = ")
    assert tidy(form) == form
    assert tidy(Form(inputs="b = ")) == Form(inputs="b = ")


# -- errors at their place ------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("form", "field", "line", "column", "words"),
    [
        (replace(COLEBROOK, equation="1/sqrt(f = 2"), "equation", 1, 10, "= is not accepted here"),
        (replace(COLEBROOK, equation="  f +\n * 2"), "equation", 2, 2, "a value is expected behind"),
        (replace(COLEBROOK, equation=" f = epss"), "equation", 1, 6, "unknown name epss (nearest: eps)"),
        (replace(COLEBROOK, equation="eps = D"), "equation", 1, 1, "f does not enter the equation"),
        (replace(COLEBROOK, equation="f = log(2)"), "equation", 1, 5, "write ln for the natural one"),
        (replace(MANNING, where="A = b\nP = 2 +\n   * 3"), "where", 3, 4, "a value is expected"),
        (replace(MANNING, where=MANNING.where + "\nB = Qf"), "where", 4, 5, "unknown name Qf"),
        (replace(MANNING, where="A = P\nP = A\nQ = A*n*S*z*b"), "where", 1, 1, "circle: A -> P -> A"),
        (replace(MANNING, where="A = 1\nQ = A*n\nQ = A"), "where", 3, 1, "Q is stated twice"),
        (replace(COLEBROOK, unknown="pi"), "unknown", 1, 1, "pi is a word of the equation language"),
        (replace(COLEBROOK, low="2", high="1"), "low", 1, 1, "not below the upper end"),
        (replace(COLEBROOK, needed="-1"), "needed", 1, 1, "above zero"),
        (replace(COLEBROOK, inputs=COLEBROOK.inputs + "\nsqrt = 2"), "inputs", 4, 1, "sqrt is a word"),
        (replace(COLEBROOK, inputs="Re = 1e999\neps = 1\nD = 1"), "inputs", 1, 6, "beyond the range"),
        (replace(COLEBROOK, inputs="Re = 1 [5, 4]\neps = 1\nD = 1"), "inputs", 1, 9, "not below the upper end"),
    ],
)
def test_an_error_stands_at_its_place(form: Form, field: str, line: int, column: int, words: str) -> None:
    reading = read_form(form)
    assert reading.problem is None
    assert reading.fault is not None
    assert (reading.fault.field, reading.fault.line, reading.fault.column) == (field, line, column)
    assert words in str(reading.fault)


def test_what_can_be_read_is_read_beside_an_error() -> None:
    reading = read_form(replace(MANNING, where="A = (b + z*y)*y\nP = b +\nQ = A"))
    assert reading.equation is not None
    assert [name for _, name, _ in reading.definitions] == ["A", "Q"]
    assert not reading.readable


def test_an_error_that_the_form_does_not_show_names_its_key() -> None:
    problem = Problem("x", "x = a", admissible=("x > q",), inputs=(Input("a", "1"),))
    reading = read_form(form_of(problem), problem)
    assert reading.fault is not None
    assert reading.fault.field == ""
    assert str(reading.fault).startswith("admissible 1")
    assert "unknown name q" in str(reading.fault)


def test_an_error_in_a_hidden_key_of_an_input_is_at_its_line() -> None:
    problem = Problem("x", "x = a + b", inputs=(Input("b", "1"), Input("a", "1", uncertainty="-2")))
    reading = read_form(form_of(problem), problem)
    assert reading.fault == Fault("inputs", "uncertainty: -2 is below zero", 2, 1)


def test_a_text_of_a_file_that_begins_with_blanks_has_its_errors_where_they_are_seen() -> None:
    problem = Problem("x", "\n  x = q", where=(Definition("A", "  x +\n q"),))
    form = form_of(problem)
    reading = read_form(form, problem)
    assert reading.fault is not None
    assert (reading.fault.field, reading.fault.line, reading.fault.column) == ("equation", 2, 7)
    again = replace(problem, equation="x = 1")
    found = read_form(form_of(again), again).fault
    assert found is not None
    assert form_of(again).where.split("\n")[found.line - 1][found.column - 1] == "q"


def test_an_error_without_a_place_is_said_as_it_is() -> None:
    assert fault_of(ProblemError("said", place="tables.pump"), COLEBROOK, Problem("x", "x")) == Fault(
        "", "tables.pump: said"
    )
