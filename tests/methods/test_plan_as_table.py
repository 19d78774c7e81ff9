"""The `[plan]` table both ways, and every key of it that is refused: by name, with the nearest one."""

from __future__ import annotations

import json
import tomllib
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from surefoot.errors import PlanError
from surefoot.methods.control import STAGES
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.methods.plan_table import plan_from_table, plan_to_table

EVERY_KEY = """
method = "secant"
start = [1.0, 1.10]
max_steps = 25
[settings]
form = "slope"
h = 1e-7
complex = false
[control]
damping = 0.5
step_limit = 0.25
relative_step_limit = 1_0.5
factor_limit = 2
first_step_limit = 1e-1
edge_fraction = 0.995
bounds = [0.0, "0x1.8p+1"]
at_bound = "halve"
leave = "stop"
derivative_every = 3
order = ["bounds", "damping"]
[stop]
x_absolute = 1.0e-10
x_relative = 1e-9
relative_to = "larger"
residual = 1e-6
exact_zero = false
combine = "sum"
min_steps = 2
before_step = true
step_tested = "raw"
test = "abs(dx) < 1e-3"
cap_is_success = true
"""

literals = st.floats(allow_nan=False, allow_infinity=False).map(repr) | st.integers(-(10**9), 10**9).map(str)
maybe = st.none() | literals
controls = st.builds(
    Control,
    damping=maybe,
    step_limit=maybe,
    relative_step_limit=maybe,
    factor_limit=maybe,
    first_step_limit=maybe,
    edge_fraction=maybe,
    bounds=st.none() | st.tuples(literals, literals),
    at_bound=st.sampled_from(["clip", "reject", "halve", "reflect"]),
    leave=st.sampled_from(["allow", "stop"]),
    derivative_every=st.integers(1, 9),
    order=st.permutations(list(STAGES)).map(tuple),
)
stops = st.builds(
    Stop,
    x_absolute=maybe,
    x_relative=maybe,
    relative_to=st.sampled_from(["new", "old", "larger", "start"]),
    residual=maybe,
    exact_zero=st.booleans(),
    combine=st.sampled_from(["any", "all", "sum"]),
    min_steps=st.integers(0, 9),
    before_step=st.booleans(),
    step_tested=st.sampled_from(["taken", "raw"]),
    test=st.text(max_size=12),
    cap_is_success=st.booleans(),
)
settings = st.dictionaries(st.sampled_from(["h", "form", "g", "derivative"]), st.text(max_size=9)).map(
    lambda table: tuple(table.items())
)
plans = st.builds(
    Plan,
    method=st.sampled_from(["secant", "bisection", "halley"]),
    start=st.lists(literals, max_size=3).map(tuple),
    max_steps=st.integers(1, 10**6),
    settings=settings,
    control=controls,
    stop=stops,
    arithmetic=st.sampled_from(["binary64", "binary32", "multiprecision:50"]),
)


def read(text: str, **more: Any) -> Plan:
    return plan_from_table({**tomllib.loads(text, parse_float=str), **more})


def test_every_key() -> None:
    assert read(EVERY_KEY) == Plan(
        method="secant",
        start=("1.0", "1.10"),
        max_steps=25,
        settings=(("form", "slope"), ("h", "1e-7"), ("complex", "false")),
        control=Control(
            "0.5", "0.25", "10.5", "2", "1e-1", "0.995", ("0.0", "0x1.8p+1"), "halve", "stop", 3, ("bounds", "damping")
        ),
        stop=Stop(
            "1.0e-10", "1e-9", "larger", "1e-6", False, "sum", 2, True, "raw", "abs(dx) < 1e-3", True
        ),
    )  # fmt: skip


def test_defaults() -> None:
    assert plan_from_table({"method": "secant", "start": ["1", "2"]}) == Plan("secant", ("1", "2"))
    assert plan_from_table({"method": "secant", "start": 1.5}, "binary32") == Plan(
        "secant", ("1.5",), arithmetic="binary32"
    )


def test_numbers_keep_their_text() -> None:
    plan = plan_from_table({"method": "secant", "start": [1, 0.1, " 1.10 "]})
    assert plan.start == ("1", "0.1", "1.10")


@given(plans)
def test_a_plan_survives_its_table(plan: Plan) -> None:
    table = plan_to_table(plan)
    assert plan_from_table(table) == plan
    assert plan_from_table(json.loads(json.dumps(table))) == plan


def test_what_stands_at_its_default_is_left_out() -> None:
    assert plan_to_table(Plan("secant", ("1", "2"))) == {"method": "secant", "start": ["1", "2"], "max_steps": 50}
    table = plan_to_table(Plan("secant", ("1", "2"), stop=Stop(exact_zero=False), arithmetic="binary32"))
    assert table["stop"] == {"exact_zero": False}
    assert table["arithmetic"] == "binary32"


@pytest.mark.parametrize(
    ("more", "message"),
    [
        ({"starts": [1.0]}, r"plan\.starts: unknown key; nearest: start"),
        ({"colour": "red"}, r"plan\.colour: unknown key; known are method, start, max_steps, settings, memory"),
        ({"control": {"dampin": 1}}, r"plan\.control\.dampin: unknown key; nearest: damping"),
        ({"control": {"xyz": 1}}, r"plan\.control\.xyz: unknown key; known are damping, step_limit"),
        ({"stop": {"x_abs": 1}}, r"plan\.stop\.x_abs: unknown key; nearest: x_absolute"),
        ({"memory": {}}, r"plan\.memory: rules of one's own are not in this version"),
        ({"max_steps": "50"}, r"plan\.max_steps: a whole number is wanted here, not '50'"),
        ({"max_steps": True}, r"plan\.max_steps: a whole number is wanted here, not True"),
        ({"method": 3}, r"plan\.method: a text is wanted here, not 3"),
        ({"start": [[1.0]]}, r"plan\.start: a number is wanted here, not \[1\.0\]"),
        ({"start": [True]}, r"plan\.start: a number is wanted here, not True"),
        ({"settings": "h"}, r"plan\.settings: a table is wanted here, not 'h'"),
        ({"settings": {"h": [1]}}, r"plan\.settings\.h: a number is wanted here, not \[1\]"),
        ({"control": {"bounds": 1.0}}, r"plan\.control\.bounds: a list of two numbers is wanted here"),
        ({"control": {"bounds": [1.0]}}, r"plan\.control\.bounds: a list of two numbers is wanted here"),
        ({"control": {"order": "damping"}}, r"plan\.control\.order: a list of stages is wanted here"),
        ({"control": {"at_bound": "clop"}}, r"plan\.control\.at_bound: there is no 'clop'; nearest: clip"),
        ({"control": {"leave": "x"}}, r"plan\.control\.leave: there is no 'x'; it can be allow, stop"),
        ({"stop": {"combine": "some"}}, r"plan\.stop\.combine: there is no 'some'"),
        ({"stop": {"exact_zero": "yes"}}, r"plan\.stop\.exact_zero: true or false is wanted here, not 'yes'"),
        ({"stop": {"test": 1}}, r"plan\.stop\.test: a text is wanted here, not 1"),
    ],
)
def test_refused(more: dict[str, Any], message: str) -> None:
    with pytest.raises(PlanError, match=message):
        plan_from_table({"method": "secant", "start": ["1", "2"], **more})


@pytest.mark.parametrize("missing", ["method", "start"])
def test_what_every_plan_states(missing: str) -> None:
    table = {"method": "secant", "start": ["1", "2"]}
    del table[missing]
    with pytest.raises(PlanError, match=rf"plan\.{missing}: missing"):
        plan_from_table(table)
