"""Folding: pure, and total over what is allowed."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest

from support.sessions import NEWTON, SECANT, begun, prefixes, undo_chain, wandering
from surefoot.errors import RecordError
from surefoot.session.commands import AddNote, BeginVariant, TakeSteps, Withdraw
from surefoot.session.entry import NO_HASH
from surefoot.session.events import Event, NoteMade, RunAbandoned, RunBegun, RunTakenUp, SessionOpened, Withdrawn
from surefoot.session.fold import EMPTY, apply, fold


@pytest.fixture
def events(tmp_path: Path) -> list[Event]:
    with begun(tmp_path / "a.json") as session:
        session.do(TakeSteps(2))
        session.do(AddNote("far off"))
        session.do(Withdraw())
        return list(session.events())


def renumbered(event: Event, n: int) -> Event:
    return replace(event, n=n)


def test_folding_again_gives_equal_states_and_changes_none(events: list[Event]) -> None:
    states = list(prefixes(events))
    kept = [(state, undo_chain(state)) for state in states]
    assert fold(events) == states[-1]
    assert [(state, undo_chain(state)) for state in prefixes(events)] == kept
    assert [state.events for state in states] == list(range(1, len(events) + 1))


def test_events_in_the_wrong_place_are_refused_with_their_number(events: list[Event]) -> None:
    state = fold(events)
    opened = events[0]
    assert isinstance(opened.what, SessionOpened)
    for wrong in (events[3], renumbered(opened, len(events)), renumbered(events[1], len(events))):
        with pytest.raises(RecordError) as caught:
            apply(state, wrong)
        assert caught.value.event == wrong.n
    with pytest.raises(RecordError, match="event 0 opens the session"):
        apply(EMPTY, renumbered(events[1], 0))


@pytest.mark.parametrize(
    ("what", "says"),
    [
        (Withdrawn(2), "event 2 is withdrawn where event 3 can be"),
        (Withdrawn(4), "event 4 is withdrawn where event 3 can be"),
        (RunTakenUp(1), "run_taken_up is not allowed here: there is no other run"),
        (RunAbandoned(""), "abandoned without a reason"),
    ],
)
def test_what_does_not_fit_the_state_is_refused(events: list[Event], what: object, says: str) -> None:
    state = fold(events)
    event = Event(state.events, "2026-12-01T15:00:00.000Z", "A. N.", what, NO_HASH, NO_HASH)  # type: ignore[arg-type]
    with pytest.raises(RecordError, match=says):
        apply(state, event)


def test_a_note_is_at_the_iterate_that_was_in_hand(events: list[Event]) -> None:
    state = fold(events)
    (note,) = state.notes
    assert (note.text, note.by, note.run, note.k, note.at) == ("far off", "M. R.", 1, 3, events[5].at)
    first = apply(fold(events[:1]), Event(1, events[1].at, "A. N.", NoteMade("x"), NO_HASH, NO_HASH))
    assert (first.notes[0].run, first.notes[0].k) == (None, None)


def test_withdrawing_and_stepping_cost_the_same_far_down(tmp_path: Path) -> None:
    """A state shares all that came before: nothing is copied that grows with the run."""
    with begun(tmp_path / "a.json", *wandering(3000)) as session:
        session.do(TakeSteps(3000))
        state = session.state
        assert state.run is not None
        assert state.before is not None
        assert state.before.run is not None
        assert state.run.iterates.before is state.before.run.iterates
        session.do(Withdraw())
        assert session.state.run is state.before.run
        assert session.state.before is state.before.before


def test_long_chains_are_compared_and_shown_without_exhausting_the_stack(tmp_path: Path) -> None:
    with begun(tmp_path / "a.json", *wandering(5000)) as session:
        session.do(TakeSteps(5000))
        again = fold(session.events())
        assert again == session.state
        assert hash(again.runs[0].iterates) == hash(session.state.runs[0].iterates)
        assert len(repr(session.state)) < 5000
        session.do(Withdraw())
        assert again != session.state


def test_the_problem_of_a_title_of_its_own_gives_the_session_its_title(events: list[Event]) -> None:
    assert fold(events[:1]).title == ""
    assert fold(events[:2]).title == "Two roots"
    assert fold(events).runs[0].plan == SECANT


def test_a_variant_of_an_iterate_that_is_not_there_is_refused(tmp_path: Path) -> None:
    with begun(tmp_path / "a.json") as session:
        session.do(BeginVariant(1, 1, NEWTON))
        events = list(session.events())
    begun_event = events[-1]
    assert isinstance(begun_event.what, RunBegun)
    for parent, says in (((1, 2), "run 1 has no iterate 2"), ((3, 0), "there is no run 3")):
        wrong = replace(begun_event, what=replace(begun_event.what, parent=parent))
        with pytest.raises(RecordError, match=says):
            apply(fold(events[:-1]), wrong)
