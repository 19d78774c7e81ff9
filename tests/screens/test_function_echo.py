"""What the function room says back, as lines: errors at their place, what was read, what is cut and how one sees it."""

from __future__ import annotations

from dataclasses import replace

import pytest

from surefoot.equation.problem import Definition, Derivative, Problem
from surefoot.figures.characters import ASCII
from surefoot.screens.echo import Place, Space, full_echo, marked, short_echo
from surefoot.screens.form import Form, form_of
from surefoot.screens.form_reading import read_form
from surefoot.session.state import StatedProblem

SPACE = Space(80, 12, ASCII)
PROBLEM = Problem("x", "A = 2", where=(Definition("A", "x^2/B"), Definition("B", "3")))
STATED = StatedProblem(
    1, PROBLEM, (Derivative(1, (Definition("t1", "x/B"),), "2*t1", ("no derivative where x = 0: abs(x)",)),)
)
CIRCLE = replace(PROBLEM, where=(Definition("B", "3"), Definition("A", "x^2/B")))


def short(form: Form, place: Place = None, stated: StatedProblem | None = None, space: Space = SPACE) -> list[str]:
    return [said.text for said in short_echo(read_form(form), form, place, stated, space)]


def test_an_empty_form_is_told_the_language() -> None:
    lines = short(Form())
    assert lines[0] == " language left = right, or an expression that is to be zero:  + - * / ^ ( )"
    assert "log10" in " ".join(lines)


def test_an_equation_is_shown_with_its_label_on_its_base_line() -> None:
    assert short(Form(unknown="x", equation="1/x = 2")) == ["          1", " read as  - - 2", "          x"]


def test_names_without_a_value_stand_first() -> None:
    lines = short(Form(unknown="x", equation="x = a*b"))
    assert lines[0] == " open     equation, column 5: unknown names a, b"
    assert lines[3] == " no value a, b"


def test_lines_that_wait_for_a_value_are_no_error() -> None:
    lines = short(Form(unknown="x", equation="x = a*b", inputs="a = \nb = "))
    assert lines == [" no value a, b", " read as  x - a*b"]


def test_the_name_that_must_be_the_unknown_is_said() -> None:
    lines = short(Form(equation="x = 2"))
    assert lines[0] == " no value x: must be the unknown, since it alone has no value"


def test_an_error_is_marked_under_its_place() -> None:
    lines = short(Form(unknown="x", equation="x = 2", where="A = 1\nB = 2 + * 3"))
    assert lines[0].startswith(" open     where, line 2, column 9: a value is expected")
    at = next(index for index, line in enumerate(lines) if line.strip() == "^")
    assert lines[at - 1][10:] == "B = 2 + * 3"
    assert lines[at - 1][lines[at].index("^")] == "*"


def test_the_definition_under_the_cursor_stands_first() -> None:
    form = form_of(CIRCLE)
    assert short(form)[0] == " read as  A - 2"
    assert short(form, ("where", 1, 1))[:2] == ["   B      3", " read as  A - 2"]
    assert short(form, ("where", 2, 5))[1] == "   A      ---"


def test_an_accepted_problem_has_its_derivative_with_what_it_needs_and_its_gaps() -> None:
    form = form_of(CIRCLE)
    lines = short(form, stated=replace(STATED, problem=CIRCLE))
    assert lines[0] == " read as  A - 2"
    assert lines[1] == " df/dx    2*t1"
    assert lines[2:5] == ["          x", "   t1     -", "          B"]
    assert lines[5] == "          no derivative where x = 0: abs(x)"


def test_a_derivative_by_f_has_no_second_f_in_its_name() -> None:
    problem = Problem("f", "f = 2")
    stated = StatedProblem(1, problem, (Derivative(1, (), "1"),))
    assert short(form_of(problem), stated=stated)[1] == " d/df     1"


def test_a_long_name_has_a_line_of_its_own() -> None:
    lines = short(Form(unknown="x", equation="velocity_head = x", where="velocity_head = 2/x"))
    assert lines[1:] == ["   velocity_head", "          2", "          -", "          x"]


def test_what_is_too_much_is_cut_with_the_key_that_shows_it() -> None:
    form = Form(unknown="x", equation="+".join(["sqrt(x + 1)"] * 40))
    lines = short(form, space=replace(SPACE, height=4))
    assert len(lines) == 4
    assert lines[-1].strip() == "r shows all of it"
    assert short(form, space=replace(SPACE, height=0)) == []
    everything = [said.text for said in full_echo(read_form(form), form, None, (), SPACE)]
    assert "".join(everything).count("sqrt(x + 1)") == 40


def test_everything_is_on_the_page() -> None:
    form = form_of(CIRCLE)
    stated = replace(STATED, problem=CIRCLE, derivatives=(*STATED.derivatives, Derivative(2, (), "2/B")))
    said = full_echo(read_form(form), form, stated, ("line 3: 1/3 is 0",), SPACE)
    text = "\n".join(line.text for line in said)
    for words in (" read as  A - 2", "   B      3", " df/dx    2*t1", " d2f/dx2  -", " paste    line 3: 1/3 is 0"):
        assert words in text


def test_a_derivative_that_is_no_text_of_this_language_is_shown_as_it_is() -> None:
    stated = StatedProblem(1, PROBLEM, (Derivative(1, (), "2 x"),))
    assert " df/dx    2 x" in short(form_of(PROBLEM), stated=stated)


@pytest.mark.parametrize("column", [1, 40, 69, 70, 150, 199, 200, 201])
def test_of_a_long_line_the_part_around_the_place_is_shown(column: int) -> None:
    line = "".join(chr(ord("a") + at % 26) for at in range(200))
    shown, caret = marked(line, column, SPACE)
    at = caret.index("^")
    assert len(shown) <= SPACE.room
    assert at <= SPACE.room
    if column <= 200 and shown[at] != ".":
        assert shown[at] == line[column - 1]
    assert shown.startswith("...") == (column > 69 // 2 + 1)
