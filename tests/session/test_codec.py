"""Events as content of the record and back, to the bit, and what is refused on the way."""

from __future__ import annotations

import json
import math
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.sessions import DEPTH, NEWTON, QUADRATIC, SECANT, begun, chained, members_of, sealed, ticking
from surefoot.equation.problem import Problem
from surefoot.errors import RecordError
from surefoot.methods.contract import Ending, Iterate, Spent
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.session.codec import content_of, event_of
from surefoot.session.commands import Abandon, AddNote, BeginVariant, PutIterate, TakeSteps, TakeUp, Withdraw
from surefoot.session.entry import NO_HASH, Entry
from surefoot.session.events import Event, Happening, StepTaken, summary_of
from surefoot.session.fold import fold
from surefoot.session.loading import load
from surefoot.session.session import Session
from surefoot.session.state import SessionState

FULL_PLAN = Plan(
    "newton-raphson",
    ("0x1.8p-1",),
    max_steps=7,
    settings=(("derivative", "exact"),),
    control=Control(damping="0.5", bounds=("0.1", "9"), at_bound="reflect", leave="stop", derivative_every=2),
    stop=Stop(x_absolute="1e-9", residual="1e-6", combine="all", before_step=True, exact_zero=False),
)


@pytest.fixture
def varied(tmp_path: Path) -> Session:
    """A session with an event of every kind."""
    session = begun(tmp_path / "a.json", DEPTH, replace(SECANT, start=("0.5", "3")))
    session.do(TakeSteps(2))
    session.do(PutIterate("1.5", "from the log"))
    session.do(BeginVariant(1, 2, FULL_PLAN))
    session.do(TakeSteps(2))
    session.do(Withdraw())
    session.do(AddNote("wanders"))
    session.do(TakeUp(1))
    session.do(Abandon("done"))
    session.close()
    resumed = Session.open(tmp_path / "a.json", by="A. N.", now=ticking())
    resumed.do(AddNote("looked"))
    return resumed


def test_every_kind_of_event_reads_back_as_it_was(varied: Session) -> None:
    events = list(varied.events())
    assert {event.kind for event in events} == {
        "session_opened",
        "session_resumed",
        "problem_stated",
        "run_begun",
        "step_taken",
        "iterate_put",
        "run_taken_up",
        "run_abandoned",
        "withdrawn",
        "note_made",
    }
    loaded = load(varied.path)
    assert loaded.events == events
    assert fold(events) == varied.state == loaded.state


def test_every_event_is_told_in_a_few_words(varied: Session) -> None:
    words = [f"{event.kind}: {summary_of(event)}" for event in varied.events()]
    assert words[1] == "problem_stated: problem 1: Q = Qd"
    assert words[2] == "run_begun: run 1: secant"
    assert words[3].startswith("step_taken: k = 2: x = ")
    assert words[5].startswith("iterate_put: k = 4: x = 1.5, residual ")
    assert words[5].endswith(" (from the log)")
    assert words[6].startswith("run_begun: run 2: newton-raphson, from run 1 at k = 2")
    assert words[-6:] == [
        "withdrawn: event 8",
        "note_made: wanders",
        "run_taken_up: run 1",
        "run_abandoned: done",
        "session_resumed: ",
        "note_made: looked",
    ]


def test_an_ending_and_a_failure_are_told_too(tmp_path: Path) -> None:
    with begun(tmp_path / "a.json", QUADRATIC, replace(SECANT, start=("0", "2"))) as session:
        session.do(TakeSteps())
        assert summary_of(session.events()[-1]) == "broke_down"
    with begun(tmp_path / "b.json", Problem("x", "ln(x) = 1"), replace(SECANT, start=("1", "2"))) as session:
        session.do(PutIterate("-1", "outside"))
        words = summary_of(session.events()[-1])
        assert words == "k = 2: x = -1, outside the domain: ln(x) at -1.0 (outside); failed_evaluation"


NUMBERS = st.floats(width=64)


def step(x: float, f: float, raw: float) -> StepTaken:
    return StepTaken(Iterate(2, x, f, raw), None, Spent(f=1), Ending("abandoned", None, "x"))


def hand_of(path: Path) -> SessionState:
    with begun(path, QUADRATIC, SECANT) as session:
        return session.state


def there_and_back(what: Happening, before: SessionState) -> Happening:
    """Through JSON text, as the file does it."""
    content = json.loads(json.dumps(content_of(what, before)))
    return event_of(Entry(3, "2026-12-01T14:02:11.318Z", "M. R.", what.kind, content, NO_HASH, NO_HASH), before).what


@given(NUMBERS, NUMBERS, NUMBERS)
def test_numbers_keep_their_bits(tmp_path_factory: pytest.TempPathFactory, x: float, f: float, raw: float) -> None:
    before = hand_of(tmp_path_factory.mktemp("bits") / "a.json")
    again = there_and_back(step(x, f, raw), before)
    assert isinstance(again, StepTaken)
    assert again.iterate is not None
    for number, read in ((x, again.iterate.x), (f, again.iterate.f), (raw, again.iterate.raw)):
        assert isinstance(read, float)
        assert read.hex() == number.hex()
        assert math.copysign(1.0, read) == math.copysign(1.0, number) or math.isnan(number)


@pytest.mark.parametrize("arithmetic", ["binary32", "multiprecision:50"])
def test_other_arithmetics_keep_their_numbers(tmp_path: Path, arithmetic: str) -> None:
    session = begun(tmp_path / "a.json", DEPTH, replace(SECANT, start=("0.5", "3"), arithmetic=arithmetic))
    session.do(TakeSteps(None))
    assert session.state.run is not None
    loaded = load(session.path).state.run
    assert loaded is not None
    for read, live in zip(loaded.iterates, session.state.run.iterates, strict=True):
        assert type(read.x).__name__ == type(live.x).__name__
        assert (read.x, read.f, read.account) == (live.x, live.f, live.account)
    prefix = {"binary32": "f32:", "multiprecision:50": "mp50:"}[arithmetic]
    assert members_of(session.path)[3]["content"]["iterate"]["x"].startswith(prefix)


# -- what is refused --------------------------------------------------------------------------------------------------


def refused(path: Path, events: list[dict[str, Any]]) -> RecordError:
    path.write_bytes(chained(events))
    with pytest.raises(RecordError) as caught:
        load(path)
    assert "\n" not in str(caught.value)
    assert caught.value.file == str(path)
    return caught.value


def test_an_unknown_kind_was_written_by_a_newer_surefoot(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    begun(path).close()
    events = members_of(path)
    error = refused(path, [*events, sealed("finding_made", {"mechanism": "cycle"}, events)])
    assert error.event == 3
    assert "newer surefoot" in str(error)


@pytest.mark.parametrize(
    ("at", "harm"),
    [
        (0, lambda content: content.pop("environment")),
        (0, lambda content: content.update(more="x")),
        (0, lambda content: content["environment"].pop("libm")),
        (0, lambda content: content["environment"].update(libm=3)),
        (0, lambda content: content.update(title=["x"])),
        (1, lambda content: content.update(number=0)),
        (1, lambda content: content.update(number=True)),
        (1, lambda content: content.update(number=2)),
        (1, lambda content: content.update(derivatives={})),
        (1, lambda content: content.update(readings=[1])),
        (1, lambda content: content["problem"].pop("equation")),
        (1, lambda content: content["derivatives"][0].update(order="9")),
        (2, lambda content: content.update(problem=2)),
        (2, lambda content: content.update(number=3)),
        (2, lambda content: content.update(revision="1")),
        (2, lambda content: content.update(iterates=[])),
        (2, lambda content: content["iterates"].reverse()),
        (2, lambda content: content["iterates"][0].update(x="f32:0.0")),
        (2, lambda content: content["iterates"][0].pop("f")),
        (2, lambda content: content["iterates"][0].update(put="by hand")),
        (2, lambda content: content.update(iterates=["x"])),
        (2, lambda content: content.update(state=[])),
        (2, lambda content: content["state"].update(more="x")),
        (2, lambda content: content.pop("state")),
        (2, lambda content: content["plan"].update(method="secnat")),
        (2, lambda content: content["plan"].update(arithmetic="binary16")),
        (2, lambda content: content["plan"].update(damping="1")),
        (2, lambda content: content.update(plan="secant")),
        (2, lambda content: content.update(parent=[1])),
        (2, lambda content: content.update(parent=[1, 0])),
        (2, lambda content: content.update(parent="1")),
        (3, lambda content: content.pop("iterate")),
        (3, lambda content: content["iterate"].update(k=3)),
        (3, lambda content: content["iterate"].update(k="2")),
        (3, lambda content: content.update(spent={"f": -1})),
        (3, lambda content: content.update(spent={"h": 1})),
        (3, lambda content: content.update(spent=[])),
        (3, lambda content: content.update(ending={"outcome": "won", "says": ""})),
        (3, lambda content: content.update(ending=[])),
        (4, lambda content: content["iterate"].pop("put")),
        (5, lambda content: content.update(of=1)),
        (5, lambda content: content.update(of="4")),
        (6, lambda content: content.update(text=1)),
        (7, lambda content: content.update(reason=" ")),
        (9, lambda content: content.update(run=2)),
        (9, lambda content: content.update(run=7)),
        (10, lambda content: content.update(environment={})),
        (10, lambda content: content.pop("host")),
    ],
)
def test_content_that_is_not_that_of_its_kind_is_refused_with_its_event(tmp_path: Path, at: int, harm: Any) -> None:
    path = tmp_path / "a.json"
    session = begun(path)
    for command in (TakeSteps(), PutIterate("2.5", "a guess"), Withdraw(), AddNote("x"), Abandon("y")):
        session.do(command)
    session.do(BeginVariant(1, 1, NEWTON))
    session.do(TakeUp(1))
    session.close()
    with Session.open(path, by="A. N.", now=ticking()) as resumed:
        resumed.do(AddNote("looked"))
    events = members_of(path)
    harm(events[at]["content"])
    assert refused(path, events).event == at


def test_the_kind_of_an_event_is_that_of_what_happened() -> None:
    event = Event(3, "2026-12-01T14:02:11.318Z", "M. R.", step(1.0, 2.0, 1.0), NO_HASH, NO_HASH)
    assert event.kind == "step_taken"
