"""The form of a problem: round trips, every place of an error, what the form keeps though it does not show it."""

from __future__ import annotations

import unicodedata
from dataclasses import replace

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from support.problems import problems
from surefoot.equation.problem import Correlation, Definition, Input, Job, Problem
from surefoot.equation.tokens import is_name
from surefoot.screens.form import FIELDS, NOTHING, Fault, Form, form_of, input_line, kept_words, problem_of
from surefoot.screens.form_lines import entries_of, input_parts, shown_text

PIPE = Problem(
    unknown="f",
    equation="1/sqrt(f) = -2*log10(eps/(3.7*D) + 2.51/(Re*sqrt(f)))",
    title="Friction in the penstock",
    range=("0.005", "0.1"),
    needed="1e-5",
    admissible=("f > 0",),
    prefer="smallest",
    derivative="-1",
    note="as coded",
    job=Job(reference="QW-12"),
    where=(Definition("Re", "v*D/nu"),),
    inputs=(
        Input("v", "2.4", "m/s", low="0.5", high="4.0"),
        Input("D", "0.9", "m", uncertainty="0.002", distribution="normal", source="drawing 7"),
        Input("nu", "0x1.5fda2f0f0f0f1p-20", "m2/s"),
        Input("eps", "2.6e-4", "m", low="1e-4"),
    ),
    correlation=(Correlation(("D", "eps"), "0.1"),),
)


def whole(form: Form, base: Problem = NOTHING) -> Problem:
    stated = problem_of(form, base)
    assert isinstance(stated, Problem), stated
    return stated


def fault(form: Form, base: Problem = NOTHING) -> Fault:
    stated = problem_of(form, base)
    assert isinstance(stated, Fault), stated
    return stated


# -- from a problem to its form and back ----------------------------------------------------------------------------


def test_a_form_shows_the_problem_as_one_would_write_it() -> None:
    assert form_of(PIPE) == Form(
        title="Friction in the penstock",
        unknown="f",
        low="0.005",
        high="0.1",
        needed="1e-5",
        equation="1/sqrt(f) = -2*log10(eps/(3.7*D) + 2.51/(Re*sqrt(f)))",
        where="Re = v*D/nu",
        inputs="v = 2.4 m/s [0.5, 4.0]\nD = 0.9 m\nnu = 0x1.5fda2f0f0f0f1p-20 m2/s\neps = 2.6e-4 m [1e-4, ]",
    )


def test_an_unedited_form_gives_the_same_problem() -> None:
    assert whole(form_of(PIPE), PIPE) == PIPE


@given(problems())
def test_every_problem_survives_its_form(problem: Problem) -> None:
    """Texts that hold nothing but blanks are the exception: the form cannot tell them from texts that are not there."""
    assume(all(map(is_name, (problem.unknown, *(each.name for each in (*problem.inputs, *problem.where))))))
    stated = problem_of(form_of(problem), problem)
    blank = not problem.equation.strip() or not all(each.text.strip() for each in problem.where)
    assert isinstance(stated, Fault) if blank else stated == problem


@given(problems(), st.sampled_from(FIELDS), st.text(max_size=12))
def test_editing_one_field_leaves_what_the_form_does_not_show(problem: Problem, field: str, text: str) -> None:
    stated = problem_of(replace(form_of(problem), **{field: text}), problem)
    if isinstance(stated, Problem):
        hidden = ("admissible", "prefer", "derivative", "note", "job", "correlation")
        assert [getattr(stated, name) for name in hidden] == [getattr(problem, name) for name in hidden]


@given(problems())
def test_a_form_holds_nothing_that_steers_a_terminal(problem: Problem) -> None:
    form = form_of(problem)
    for name in FIELDS:
        kept = getattr(form, name).replace("\n", "")
        assert not {unicodedata.category(character) for character in kept} & {"Cc", "Cf", "Cs", "Zl", "Zp"}


def test_an_edited_input_keeps_its_uncertainty_and_source() -> None:
    form = form_of(PIPE)
    edited = whole(replace(form, inputs=form.inputs.replace("D = 0.9 m", "D = 1.1 m [0.8, 1.2]")), PIPE)
    assert edited.inputs[1] == replace(PIPE.inputs[1], value="1.1", low="0.8", high="1.2")
    assert [edited.inputs[at] for at in (0, 2, 3)] == [PIPE.inputs[at] for at in (0, 2, 3)]


def test_a_renamed_input_takes_nothing_along() -> None:
    form = form_of(PIPE)
    edited = whole(replace(form, inputs=form.inputs.replace("D = 0.9 m", "d = 0.9 m")), PIPE)
    assert edited.inputs[1] == Input("d", "0.9", "m")


def test_texts_of_a_form_are_taken_without_the_blanks_around_them() -> None:
    form = Form(
        title=" T ", unknown=" x ", unit=" m ", low=" 0 ", high=" 1 ", needed=" 1e-3 ", equation="\n x^2 = 2 \n"
    )
    assert whole(form) == Problem(unknown="x", equation="x^2 = 2", title="T", unit="m", range=("0", "1"), needed="1e-3")


def test_an_input_without_unit_and_range() -> None:
    assert whole(Form(unknown="x", equation="x = a", inputs="a = -.5")).inputs == (Input("a", "-.5"),)


@pytest.mark.parametrize(
    ("given_input", "line"),
    [
        (Input("a", "1"), "a = 1"),
        (Input("a", "1", "m3/s"), "a = 1 m3/s"),
        (Input("a", "1", "", low="0", high="2"), "a = 1 [0, 2]"),
        (Input("a", "1", "W/(m2 K)", high="2"), "a = 1 W/(m2 K) [, 2]"),
    ],
)
def test_line_of_an_input(given_input: Input, line: str) -> None:
    assert input_line(given_input) == line
    assert whole(Form(unknown="x", equation="x = a", inputs=line)).inputs == (given_input,)


def test_a_definition_goes_on_in_indented_lines() -> None:
    base = Problem(unknown="y", equation="y = A", where=(Definition("A", "b +\n y"), Definition("B", "2")))
    form = form_of(base)
    assert form.where == "A = b +\n     y\nB = 2"
    assert whole(form, base) == base
    assert whole(form).where == (Definition("A", "b +\n     y"), Definition("B", "2"))


def test_what_the_form_keeps_is_said_in_a_few_words() -> None:
    assert kept_words(PIPE) == (
        "admissible; prefer; derivative; note; correlation; job; uncertainty, distribution, source of D"
    )
    assert kept_words(replace(NOTHING, title="T", unit="m", needed="1")) == ""


# -- places ---------------------------------------------------------------------------------------------------------

WHOLE = Form(unknown="x", equation="x^2 = a", inputs="a = 2")


@pytest.mark.parametrize(
    ("change", "field", "line", "column", "words"),
    [
        ({"unknown": ""}, "unknown", 1, 0, "not named yet"),
        ({"unknown": "2x"}, "unknown", 1, 1, "2x is not a name"),
        ({"low": " 1,5", "high": "2"}, "low", 1, 2, "write 1.5 with a point"),
        ({"low": "1", "high": "two"}, "high", 1, 1, "two is not a number"),
        ({"low": "1"}, "high", 1, 0, "one end only"),
        ({"high": "1"}, "low", 1, 0, "one end only"),
        ({"needed": "1d-3"}, "needed", 1, 1, "write 1e-3"),
        ({"equation": " "}, "equation", 1, 0, "no equation yet"),
        ({"where": "A = x\nB"}, "where", 2, 2, "there is no ="),
        ({"where": "A = x\n\n2B = x"}, "where", 3, 1, "2B is not a name"),
        ({"where": "A ="}, "where", 1, 4, "A has no expression"),
        ({"where": " = x"}, "where", 1, 2, "no name before the ="),
        ({"inputs": "a = 2\nb ="}, "inputs", 2, 4, "b has no value yet"),
        ({"inputs": "a 2"}, "inputs", 1, 4, "there is no ="),
        ({"inputs": "a = 2m"}, "inputs", 1, 5, "write a space before a unit: 2 m"),
        ({"inputs": "a = 0x1.8p1m"}, "inputs", 1, 5, "is not a number"),
        ({"inputs": "a = 1.D0"}, "inputs", 1, 5, "write 1.e0"),
        ({"inputs": "a = 2 m [1, x]"}, "inputs", 1, 13, "x is not a number"),
        ({"inputs": "  a = 2 m [ 1;0 , 2]"}, "inputs", 1, 13, "1;0 is not a number"),
        ({"inputs": "a = [1, 2]"}, "inputs", 1, 5, "nothing is not a number"),
    ],
)
def test_a_fault_stands_at_its_place(change: dict[str, str], field: str, line: int, column: int, words: str) -> None:
    found = fault(replace(WHOLE, **change))
    assert (found.field, found.line, found.column) == (field, line, column)
    assert words in str(found)


def test_the_place_of_a_fault_in_words() -> None:
    assert str(Fault("inputs", "said", 2, 5, "hint")) == "inputs, line 2, column 5: said; hint"
    assert str(Fault("unknown", "said", column=0)) == "unknown: said"
    assert str(Fault("low", "said", 1, 3)) == "range from, column 3: said"
    assert str(Fault("equation", "said", 2, 3)) == "equation, line 2, column 3: said"
    assert str(Fault("", "admissible: said")) == "admissible: said"


def test_entries_know_where_they_stand() -> None:
    first, second = entries_of("A  =  1 +\n   2\n\n   3\n\nB = \n  x\n")
    assert (first.name, first.text, first.line, first.column) == ("A", "1 +\n   2\n\n   3", 1, 1)
    assert (first.text_line, first.text_column) == (1, 7)
    assert first.place(1, 3) == (1, 9)
    assert first.place(2, 4) == (2, 4)
    assert (second.name, second.text, second.line) == ("B", "x", 6)
    assert (second.text_line, second.text_column) == (7, 3)


def test_each_line_of_the_inputs_is_an_entry() -> None:
    assert [entry.name for entry in entries_of("a = 1\n  b = 2", continued=False)] == ["a", "b"]


def test_parts_of_an_input_know_their_offsets() -> None:
    parts = input_parts("12.5  kg/(m s)  [ 1 ,2]")
    assert parts.value == ("12.5", 0)
    assert parts.unit == ("kg/(m s)", 6)
    assert parts.low == ("1", 18)
    assert parts.high == ("2", 21)


def test_text_that_would_steer_the_terminal_is_made_visible() -> None:
    assert shown_text("a\tb\x1b[2J\r\nc\u200b") == "a b\ufffd[2J\nc\ufffd"
