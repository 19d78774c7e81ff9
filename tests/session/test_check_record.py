"""The independent checker and the JSON Schema of docs/: both take what is written, and neither takes what is not."""

from __future__ import annotations

import importlib.util
import json
import random
import re
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from types import ModuleType
from typing import Any

import jsonschema
import pytest

from support.session_fuzz import changed_bytes, changed_lines, varied_session
from support.sessions import DEPTH, begun, chained, members_of
from surefoot.errors import RecordError
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.session.commands import Command, PutIterate, TakeSteps
from surefoot.session.events import Happening
from surefoot.session.layout import document, lay_out
from surefoot.session.loading import load

DOCS = Path(__file__).parents[2] / "docs"


def _checker() -> ModuleType:
    spec = importlib.util.spec_from_file_location("check_record", DOCS / "check_record.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


CHECKER = _checker()
SCHEMA = json.loads((DOCS / "session.schema.json").read_text(encoding="utf-8"))
VALIDATOR = jsonschema.Draft202012Validator(SCHEMA)


def fault(data: bytes) -> str:
    """What the checker finds wrong, empty when it finds nothing."""
    try:
        CHECKER.check(data)
    except CHECKER.Fault as found:
        return str(found)
    return ""


def fits(data: bytes) -> bool:
    return bool(VALIDATOR.is_valid(json.loads(data)))


@pytest.fixture
def written(tmp_path: Path) -> bytes:
    return varied_session(tmp_path / "a.json")


def test_the_schema_is_one() -> None:
    jsonschema.Draft202012Validator.check_schema(SCHEMA)


def test_what_is_written_is_taken(written: bytes) -> None:
    assert fault(written) == ""
    VALIDATOR.validate(json.loads(written))


LIMITED = Plan(
    "finite-difference-newton",
    ("0.5",),
    max_steps=30,
    settings=(("h", "1e-6"), ("h_mode", "relative")),
    control=Control(damping="0.9", step_limit="0.5", bounds=("0.1", "6"), at_bound="reflect"),
    stop=Stop(x_relative="1e-9", residual="1e-6", combine="all", min_steps=2, exact_zero=False),
)


@pytest.mark.parametrize(
    ("plan", "commands"),
    [
        (LIMITED, []),
        (Plan("secant", ("0.5", "3"), arithmetic="binary32"), []),
        (Plan("newton-raphson", ("0.5",), max_steps=3, arithmetic="multiprecision:40"), []),
        (Plan("newton-raphson", ("0.5",), control=Control(derivative_every=3), stop=Stop(residual="1e-9")), []),
        (Plan("bisection", ("0.05", "6"), stop=Stop(test="abs(dx) < 0.01")), []),
        (Plan("secant", ("-3", "1")), []),
        (Plan("secant", ("0.5", "3")), [PutIterate("-3", "below the bed")]),
        (Plan("secant", ("1", "1")), []),
    ],
)
def test_runs_of_every_kind_are_taken(tmp_path: Path, plan: Plan, commands: list[Command]) -> None:
    with begun(tmp_path / "a.json", DEPTH, plan) as session:
        for command in commands:
            session.do(command)
        if session.state.phase == "stepping":
            session.do(TakeSteps(None))
        assert session.state.phase == "ended"
    data = session.path.read_bytes()
    assert fault(data) == ""
    VALIDATOR.validate(json.loads(data))


def test_schema_checker_and_program_know_the_same_kinds() -> None:
    kinds = {kind.kind for kind in Happening.__args__}
    assert set(SCHEMA["$defs"]["event"]["properties"]["kind"]["enum"]) == kinds == set(CHECKER.CONTENT)
    for kind, (required, optional) in CHECKER.CONTENT.items():
        content = SCHEMA["$defs"][kind]
        assert set(content["required"]) == required
        assert set(content["properties"]) == required | optional


@pytest.mark.parametrize("change", [changed_bytes, changed_lines])
def test_the_checker_and_the_program_agree_on_changed_files(
    tmp_path: Path, written: bytes, change: Callable[[bytes, random.Random], bytes]
) -> None:
    """Either both take a file, or the checker says at which event it fails and the program refuses that event.

    A torn tail is the exception: the program recovers what is whole, the checker finds no JSON document.
    """
    chance = random.Random(11)
    path, agreed = tmp_path / "b.json", 0
    for _ in range(300):
        data = change(written, chance)
        path.write_bytes(data)
        found, error, notices = fault(data), None, ("",)
        try:
            notices = load(path).notices or ("",)
        except RecordError as raised:
            error = raised
        if error is None:
            assert found == "" or "cut short" in notices[0], found
            continue
        assert found, error
        place = re.match(r"event (\d+):", found)
        if place is not None and error.event is not None:
            assert int(place[1]) == error.event
            agreed += 1
    assert agreed > (200 if change is changed_lines else 5)


@pytest.mark.parametrize(
    ("old", "new"),
    [(b'"by":"', b'"by":"x'), (b'"at":"2', b'"at":"3'), (b'"content":{', b'"content":{"x":"y",')],
    ids=["author", "time", "content"],
)
def test_every_change_of_a_value_is_found(written: bytes, old: bytes, new: bytes) -> None:
    lines = lay_out(written).lines
    for n, line in enumerate(lines):
        changed = (*lines[:n], line.replace(old, new, 1), *lines[n + 1 :])
        assert fault(document(changed)).startswith(f"event {n}: ")


HARM: list[tuple[str, Callable[[dict[str, Any]], object]]] = [
    ("session_opened", lambda content: content.pop("environment")),
    ("session_opened", lambda content: content["environment"].update(libm=2)),
    ("problem_stated", lambda content: content["problem"].update(unknown=1)),
    ("problem_stated", lambda content: content["problem"].update(colour="red")),
    ("problem_stated", lambda content: content.update(number=0)),
    ("run_begun", lambda content: content.update(parent=[1])),
    ("run_begun", lambda content: content["plan"].update(max_steps="50")),
    ("run_begun", lambda content: content["plan"].pop("method")),
    ("run_begun", lambda content: content.pop("state")),
    ("run_begun", lambda content: content["iterates"].clear()),
    ("step_taken", lambda content: content["iterate"].update(x="1.5.2")),
    ("step_taken", lambda content: content["iterate"].update(x=1)),
    ("step_taken", lambda content: content["iterate"].pop("f")),
    ("step_taken", lambda content: content["iterate"].update(failure={})),
    ("step_taken", lambda content: content["iterate"]["account"].update(points=["1.0"])),
    ("step_taken", lambda content: content.update(state=["1.0"])),
    ("step_taken", lambda content: content.pop("iterate")),
    ("step_taken", lambda content: content.update(spent={"f": -1})),
    ("step_taken", lambda content: content.update(more="x")),
    ("iterate_put", lambda content: content["iterate"].pop("put")),
    ("withdrawn", lambda content: content.update(of=0)),
    ("withdrawn", lambda content: content.pop("of")),
    ("run_taken_up", lambda content: content.update(run=[])),
    ("run_abandoned", lambda content: content.update(reason=" ")),
    ("note_made", lambda content: content.update(text=None)),
]


@pytest.mark.parametrize(("kind", "harm"), HARM)
def test_the_schema_and_the_program_refuse_content_of_the_wrong_form(
    tmp_path: Path, written: bytes, kind: str, harm: Callable[[dict[str, Any]], object]
) -> None:
    path = tmp_path / "b.json"
    path.write_bytes(written)
    events = members_of(path)
    harm(next(event["content"] for event in events if event["kind"] == kind))
    data = chained(events)
    path.write_bytes(data)
    assert not fits(data)
    with pytest.raises(RecordError):
        load(path)


@pytest.mark.parametrize(
    ("harm", "says"),
    [
        (lambda events: events[3]["content"].pop("spent"), "event 3: the content of step_taken"),
        (lambda events: events[3]["content"].update(more=1), "event 3: the content of step_taken"),
        (lambda events: events[3]["content"].pop("iterate"), "event 3: a step has neither"),
        (lambda events: events[3]["content"]["iterate"].update(x="1.5.2"), "event 3: x of iterate 2 is no number"),
        (lambda events: events[3]["content"]["iterate"].pop("f"), "event 3: an iterate has k, x, and either"),
        (lambda events: events[2]["content"]["iterates"].reverse(), "event 2: iterate 1 stands where iterate 0"),
        (lambda events: events[3].update(kind="step_undone"), "event 3: the kind 'step_undone' is not known"),
        (lambda events: events[3].update(kind="session_opened"), "event 3: session_opened is event 0"),
        (lambda events: events[3].update(by=" "), "event 3: it does not say by whom"),
        (lambda events: events[3].update(at="yesterday"), "event 3: 'yesterday' is no time"),
        (lambda events: events[3].update(at="2026-13-01T00:00:00.000Z"), "is no time"),
        (lambda events: events[3].update({"content": {"iterate": {"ä": 1}}}), "event 3: a key is not ASCII"),
        (lambda events: events[9].update(kind="withdrawn", content={"of": 9}), "event 9: it withdraws no event"),
    ],
)
def test_the_checker_says_what_is_wrong_in_a_chain_that_was_made_new(
    written: bytes, harm: Callable[[list[dict[str, Any]]], object], says: str
) -> None:
    events = json.loads(written)["events"]
    harm(events)
    try:
        data = chained(events)
    except RecordError:  # what the program cannot even hash
        data = json.dumps({"format": "surefoot-session", "version": 1, "events": events}).encode()
    assert says in fault(data)


@pytest.mark.parametrize(
    ("data", "says"),
    [
        (b"", "not the JSON of a record"),
        (b"\xff", "not the JSON of a record"),
        (b"[" * 100_000, "not the JSON of a record"),
        (b'{"format":"surefoot-session","version":1.0,"events":[]}', "no whole number"),
        (b'{"format":"surefoot-session","version":1,"version":1,"events":[]}', "a key stands twice"),
        (b'{"format":"surefoot-session","version":2,"events":[]}', "version 2 is not known"),
        (b'{"format":"surefoot-session","version":true,"events":[]}', "version True is not known"),
        (b'{"format":"surefoot-session","version":1,"events":[]}', "there are no events"),
        (b'{"format":"surefoot-session","version":1,"events":[9007199254740992]}', "beyond 2^53"),
        (b'{"format":"surefoot-session","version":1,"events":[' + b"9" * 9000 + b"]}", "beyond 2^53"),
        (b'{"format":"surefoot-session","version":1,"events":[{}]}', "event 0: the members are not"),
        (b"{}", "the members are not format"),
    ],
    ids=lambda value: value[:60].decode("latin-1") if isinstance(value, bytes) else "",
)
def test_the_checker_refuses_what_is_no_record(data: bytes, says: str) -> None:
    assert says in fault(data)


def test_the_checker_is_a_program_of_its_own(tmp_path: Path, written: bytes) -> None:
    good, bad = tmp_path / "good.json", tmp_path / "bad.json"
    good.write_bytes(written)
    bad.write_bytes(written.replace(b'"k":3', b'"k":4', 1))

    def checked(*names: str) -> subprocess.CompletedProcess[str]:
        # -I: nothing but the standard library can be imported.
        command = [sys.executable, "-I", "-S", str(DOCS / "check_record.py"), *names]
        return subprocess.run(command, cwd=tmp_path, capture_output=True, text=True, check=False)

    count, last = len(lay_out(written).lines), json.loads(written)["events"][-1]["hash"]
    done = checked("good.json")
    assert (done.returncode, done.stdout) == (0, f"good.json: whole: {count} events, the last one {last}\n")
    done = checked("good.json", "bad.json")
    assert done.returncode == 1
    assert done.stdout.splitlines()[1] == "bad.json: event 4: its hash is not that of what it says"
    assert checked("none.json").returncode == 2
    assert checked().returncode == 2


def test_the_checker_shares_nothing_with_the_package() -> None:
    text = (DOCS / "check_record.py").read_text(encoding="utf-8")
    imports = set(re.findall(r"^(?:import|from) (\w+)", text, re.MULTILINE))
    assert imports == {"hashlib", "json", "re", "sys"}
    assert len(text.splitlines()) < 250


def test_other_spaces_make_no_difference(written: bytes) -> None:
    assert fault(json.dumps(json.loads(written), indent=2).encode()) == ""
