"""Problems and derivatives as content of the record: equal after the round trip, and closed to anything else."""

from __future__ import annotations

import json
from dataclasses import fields

import pytest
from hypothesis import given

from support.problems import derivatives, problems
from surefoot.equation.problem import Correlation, Definition, Derivative, Input, Job, Problem
from surefoot.equation.problem_content import (
    derivative_from_content,
    derivative_to_content,
    problem_from_content,
    problem_to_content,
)
from surefoot.errors import RecordError

TAILRACE = Problem(
    unknown="y",
    equation="Q = Qd",
    range=("0.05", "6.0"),
    prefer="nearest:1.2",
    job=Job(assumptions=("uniform flow",)),
    where=(Definition("A", "(b + z*y)*y"),),
    inputs=(Input("b", "3.0", unit="m", interval=("2.9", "3.1")), Input("S", "0x1.a36e2eb1c432dp-11")),
)


@given(problems())
def test_a_problem_comes_back_equal_through_json(problem: Problem) -> None:
    assert problem_from_content(json.loads(json.dumps(problem_to_content(problem)))) == problem


@given(derivatives())
def test_a_derivative_comes_back_equal_through_json(derivative: Derivative) -> None:
    assert derivative_from_content(json.loads(json.dumps(derivative_to_content(derivative)))) == derivative


@given(problems())
def test_content_holds_texts_lists_and_objects_with_ascii_keys_only(problem: Problem) -> None:
    def check(content: object) -> None:
        if isinstance(content, dict):
            for key, part in content.items():
                assert key.isascii()
                check(part)
        elif isinstance(content, list):
            for part in content:
                check(part)
        else:
            assert isinstance(content, str)

    check(problem_to_content(problem))


def test_fields_at_their_default_are_left_out() -> None:
    assert problem_to_content(TAILRACE) == {
        "unknown": "y",
        "equation": "Q = Qd",
        "range": ["0.05", "6.0"],
        "prefer": "nearest:1.2",
        "job": {"assumptions": ["uniform flow"]},
        "where": [{"name": "A", "text": "(b + z*y)*y"}],
        "inputs": [
            {"name": "b", "value": "3.0", "unit": "m", "interval": ["2.9", "3.1"]},
            {"name": "S", "value": "0x1.a36e2eb1c432dp-11"},
        ],
    }


def test_every_field_has_a_place_in_the_content() -> None:
    everything = Problem(
        unknown="x",
        equation="x = a",
        title="t",
        unit="m",
        range=("0", "1"),
        needed="0.1",
        admissible=("x > 0",),
        prefer="largest",
        derivative="1",
        note="n",
        job=Job("reference", "revision", "purpose", ("assumption",)),
        where=(Definition("A", "x"),),
        inputs=(Input("a", "1", "m", "0", "2", "0.1", "0.1", ("0", "1"), "t", "4", "source"),),
        correlation=(Correlation(("a", "b"), "0.3"),),
    )
    content = problem_to_content(everything)
    assert content.keys() == {field.name for field in fields(Problem)}
    assert content["job"].keys() == {field.name for field in fields(Job)}
    assert content["inputs"][0].keys() == {field.name for field in fields(Input)}
    assert problem_from_content(content) == everything


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"unknown": None}, "problem.unknown must be a text"),
        ({"range": ["1"]}, "problem.range must have 2 items, not 1"),
        ({"range": "1"}, "problem.range must be a list"),
        ({"admissible": [1]}, "problem.admissible[0] must be a text"),
        ({"job": []}, "problem.job must be an object"),
        ({"inputs": [{"name": "a"}]}, "problem.inputs[0] has no member 'value'"),
        ({"inputs": [{"name": "a", "value": "1", "unti": "m"}]}, "problem.inputs[0] has an unknown member 'unti'"),
        ({"where": [{"name": "A", "text": 1.5}]}, "problem.where[0].text must be a text"),
        ({"colour": "red"}, "problem has an unknown member 'colour'"),
        (
            {"correlation": [{"between": ["a", "b", "c"], "r": "0"}]},
            "problem.correlation[0].between must have 2 items, not 3",
        ),
    ],
)
def test_malformed_content_is_refused_with_its_place(change: dict[str, object], message: str) -> None:
    with pytest.raises(RecordError) as caught:
        problem_from_content({"unknown": "x", "equation": "x"} | change)
    assert str(caught.value) == message


@pytest.mark.parametrize("content", [None, [], "x", 1, {}, {"unknown": "x"}])
def test_what_is_no_problem_is_refused(content: object) -> None:
    with pytest.raises(RecordError):
        problem_from_content(content)


@pytest.mark.parametrize("order", ["0", "4", 1, "first", None])
def test_the_order_of_a_derivative_is_one_two_or_three(order: object) -> None:
    with pytest.raises(RecordError, match=r'derivative\.order must be "1", "2" or "3"'):
        derivative_from_content({"order": order, "where": [], "text": "1"})
