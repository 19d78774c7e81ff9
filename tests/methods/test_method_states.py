"""Codec of what the record holds of a run: exact to the bit, closed to what it does not know."""

from __future__ import annotations

import json
import math
import struct
from dataclasses import dataclass

import pytest
from hypothesis import given
from hypothesis import strategies as st

from surefoot.equation.choice import arithmetic_of
from surefoot.equation.results import Failure, FailureKind, Real
from surefoot.errors import RecordError
from surefoot.methods.bracket import BracketState
from surefoot.methods.brent_dekker import BrentState
from surefoot.methods.chandrupatla import ThreePointState
from surefoot.methods.contract import Account, Ending, Iterate, Limited, Point, Spent, Verdict
from surefoot.methods.false_position import KeptState
from surefoot.methods.fixed_point import IterateState
from surefoot.methods.itp import ItpState
from surefoot.methods.safeguarded_newton import SafeguardedState
from surefoot.methods.secant import ChordState
from surefoot.methods.states import (
    decode_ending,
    decode_iterate,
    decode_spent,
    decode_state,
    encode_ending,
    encode_iterate,
    encode_spent,
    encode_state,
)
from surefoot.methods.table import METHODS, method_of
from surefoot.methods.tangent import SlopeState
from surefoot.methods.toms_748 import Toms748State

BINARY64 = arithmetic_of("binary64")

reals = st.floats(allow_nan=False, allow_infinity=False)
points = st.builds(Point, reals, reals)
STATES = {
    "bisection": st.builds(BracketState, points, points),
    "regula-falsi": st.builds(BracketState, points, points),
    "illinois": st.builds(KeptState, points, points, reals),
    "anderson-bjorck": st.builds(KeptState, points, points, reals),
    "ridders": st.builds(BracketState, points, points),
    "brent-dekker": st.builds(BrentState, points, points, points, reals, reals),
    "chandrupatla": st.builds(ThreePointState, points, points, st.none() | points),
    "toms-748": st.builds(
        Toms748State, points, points, reals, st.integers(0, 4), st.none() | points, st.none() | points
    ),
    "itp": st.builds(ItpState, points, points, reals, reals),
    "safeguarded-newton": st.builds(SafeguardedState, points, points, reals, reals, st.none() | points),
    "secant": st.builds(ChordState, points, points),
    "finite-difference-newton": st.builds(SlopeState, points, st.none() | reals, st.integers(0, 2**53 - 1)),
    "fixed-point": st.builds(IterateState, points),
    "newton-raphson": st.builds(SlopeState, points, st.none() | reals, st.integers(0, 2**53 - 1)),
}
texts = st.text(st.characters(exclude_categories=["Cs"]), max_size=12)
accounts = st.builds(
    Account,
    st.sampled_from(["tangent", "chord", "bracket", "cobweb", "parabola"]),
    st.lists(points, max_size=3).map(tuple),
    st.none() | reals,
    st.lists(st.tuples(st.sampled_from(["h", "width", "age"]), reals), max_size=2).map(tuple),
    st.none() | reals,
)
failures = st.builds(Failure, st.sampled_from(FailureKind), texts, st.lists(texts, max_size=2).map(tuple), texts)
iterates = st.builds(
    Iterate,
    st.integers(0, 10**6),
    reals,
    reals | failures,
    st.none() | reals,
    st.none() | accounts,
    st.lists(st.builds(Limited, texts, reals, reals), max_size=2).map(tuple),
    texts,
)
verdicts = st.builds(Verdict, texts, st.lists(st.tuples(texts, reals, reals), max_size=2).map(tuple))
outcomes = st.sampled_from(
    ["converged", "step_limit", "failed_evaluation", "broke_down", "left_range", "no_progress", "abandoned"]
)
endings = st.builds(Ending, outcomes, st.none() | verdicts, texts, st.none() | accounts)


def bits(value: object) -> str:
    """A text that differs wherever two values differ by a bit; == takes -0.0 for 0.0."""
    return repr(value)


def recorded(content: object) -> object:
    """The content after a way through the record, which holds no JSON numbers but whole ones."""
    return json.loads(json.dumps(content, allow_nan=False), parse_float=pytest.fail)


def test_every_method_has_states_here() -> None:
    assert set(STATES) == set(METHODS)


@pytest.mark.parametrize("code", METHODS)
@given(data=st.data())
def test_a_state_survives_the_record_to_the_bit(code: str, data: st.DataObject) -> None:
    state = data.draw(STATES[code])
    content = recorded(encode_state(state, BINARY64))
    assert bits(decode_state(method_of(code), content, BINARY64)) == bits(state)


@given(iterates)
def test_an_iterate_survives_the_record_to_the_bit(iterate: Iterate) -> None:
    assert bits(decode_iterate(recorded(encode_iterate(iterate, BINARY64)), BINARY64)) == bits(iterate)


@given(endings)
def test_an_ending_survives_the_record_to_the_bit(ending: Ending) -> None:
    assert bits(decode_ending(recorded(encode_ending(ending, BINARY64)), BINARY64)) == bits(ending)


@given(st.builds(Spent, *[st.integers(0, 2**53 - 1)] * 3))
def test_costs_survive_the_record(spent: Spent) -> None:
    assert decode_spent(recorded(encode_spent(spent))) == spent


@pytest.mark.parametrize("number", [-0.0, 5e-324, -2.2250738585072014e-308, 1.7976931348623157e308, 0.1])
def test_the_far_corners_of_binary64(number: float) -> None:
    state = SlopeState(Point(number, -number), number, 3)
    back = decode_state(method_of("newton-raphson"), encode_state(state, BINARY64), BINARY64)
    packed = [struct.pack("<d", x) for x in (back.point.x, back.point.f, back.slope)]
    assert packed == [struct.pack("<d", x) for x in (number, -number, number)]
    assert math.copysign(1, back.point.f) == -math.copysign(1, number)


@pytest.mark.parametrize("kind", ["binary32", "multiprecision:50"])
def test_other_arithmetics_write_their_own_texts(kind: str) -> None:
    arithmetic = arithmetic_of(kind)
    x, f = arithmetic.literal("0.1", False), arithmetic.literal("-1e-30", False)
    iterate = Iterate(4, x, f, x, Account("tangent", (Point(x, f),), f, (("h", x),), x), (Limited("damping", x, f),))
    back = decode_iterate(recorded(encode_iterate(iterate, arithmetic)), arithmetic)
    assert back == iterate
    assert type(back.x) is type(x)
    state = ChordState(Point(x, f), Point(f, x))
    content = encode_state(state, arithmetic)
    assert decode_state(method_of("secant"), content, arithmetic) == state
    with pytest.raises(RecordError, match="not a state of secant"):
        decode_state(method_of("secant"), content, BINARY64)


def test_content_is_readable() -> None:
    state = SlopeState(Point(1.5, -0.25), None, 0)
    assert encode_state(state, BINARY64) == {"point": ["1.5", "-0.25"], "age": 0}
    iterate = Iterate(2, 1.5, Failure(FailureKind.DOMAIN, "ln(x)", ("-1.0",)))
    failure = {"kind": "domain", "subexpression": "ln(x)", "arguments": ["-1.0"], "definition": ""}
    assert encode_iterate(iterate, BINARY64) == {"k": 2, "x": "1.5", "failure": failure}
    assert encode_spent(Spent(2, 1)) == {"f": 2, "derivative": 1}


@dataclass(frozen=True, slots=True)
class EveryKind:
    """A state with a field of every kind that the contract allows."""

    real: Real
    whole: int
    flag: bool
    text: str
    absent: Point | None
    pair: tuple[Real, int]
    many: tuple[Point, ...]


class _EveryKindMethod:
    state_type = EveryKind
    traits = METHODS["secant"].traits


def test_every_kind_of_field() -> None:
    state = EveryKind(0.1, 7, True, "side", None, (-0.0, 2), (Point(1.0, 2.0),))
    content = encode_state(state, BINARY64)
    assert content == {
        "real": "0.1", "whole": 7, "flag": "yes", "text": "side", "pair": ["-0.0", 2], "many": [["1.0", "2.0"]],
    }  # fmt: skip
    assert bits(decode_state(_EveryKindMethod(), content, BINARY64)) == bits(state)  # type: ignore[arg-type]


@pytest.mark.parametrize(
    "changed", [{"flag": "maybe"}, {"text": 3}, {"whole": "7"}, {"pair": ["0.5"]}, {"many": [["1.0"]]}]
)
def test_a_field_of_the_wrong_kind_is_refused(changed: dict[str, object]) -> None:
    content = encode_state(EveryKind(0.1, 7, False, "", None, (1.0, 2), ()), BINARY64)
    with pytest.raises(RecordError, match="not a state of secant"):
        decode_state(_EveryKindMethod(), {**content, **changed}, BINARY64)  # type: ignore[arg-type]


@dataclass(frozen=True, slots=True)
class _Foreign:
    mapping: dict[str, float]


def test_a_field_of_another_kind_is_refused() -> None:
    with pytest.raises(TypeError, match="a state cannot hold"):
        encode_state(_Foreign({}), BINARY64)


@pytest.mark.parametrize(
    "content",
    [
        {},
        {"point": ["1.0"], "age": 0},
        {"point": ["1.0", "nonsense"], "age": 0},
        {"point": "1.0", "age": 0},
        {"point": ["1.0", "2.0"], "age": "0"},
        {"point": ["1.0", "2.0"], "age": 0, "colour": "red"},
        {"point": ["1.0", 2.0], "age": 0},
        {"point": ["1.0", None], "age": 0},
    ],
)
def test_content_that_is_no_state_is_refused(content: dict[str, object]) -> None:
    with pytest.raises(RecordError, match="not a state of newton-raphson"):
        decode_state(method_of("newton-raphson"), content, BINARY64)


@pytest.mark.parametrize(
    "content",
    [
        {},
        {"k": 0, "x": "1.0"},
        {"k": "0", "x": "1.0", "f": "0.0"},
        {"k": 0, "x": "1.0", "failure": {"kind": "boredom", "subexpression": "", "arguments": [], "definition": ""}},
        {"k": 0, "x": "1.0", "f": "0.0", "account": {"shape": "chord"}},
        {"k": 0, "x": "1.0", "f": "0.0", "limited": [["damping", "1.0"]]},
        {"k": 0, "x": "1.0", "f": "0.0", "put": 3},
        {"k": 0, "x": "1.0", "f": "0.0", "account": []},
    ],
)
def test_content_that_is_no_iterate_is_refused(content: dict[str, object]) -> None:
    with pytest.raises(RecordError, match="not an iterate"):
        decode_iterate(content, BINARY64)


@pytest.mark.parametrize("content", [{"f": -1}, {"f": "2"}, {"h": 1}, {"f": True}])
def test_content_that_is_no_count_is_refused(content: dict[str, object]) -> None:
    with pytest.raises(RecordError, match="not a count of evaluations"):
        decode_spent(content)


@pytest.mark.parametrize(
    "content",
    [
        {"outcome": "won", "says": ""},
        {"outcome": "converged"},
        {"outcome": "converged", "says": "", "verdict": {"test": "x_absolute", "sides": [["x_absolute", "1.0"]]}},
    ],
)
def test_content_that_is_no_ending_is_refused(content: dict[str, object]) -> None:
    with pytest.raises(RecordError, match="not an ending"):
        decode_ending(content, BINARY64)
