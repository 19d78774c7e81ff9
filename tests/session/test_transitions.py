"""The table of transitions, cell by cell, against section 4 of the states spelt out."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path
from typing import get_args

import pytest

from support.sessions import NEWTON, QUADRATIC, SECANT
from surefoot.session.commands import (
    Abandon,
    AddNote,
    BeginRun,
    BeginVariant,
    Command,
    PutIterate,
    StateProblem,
    TakeSteps,
    TakeUp,
    Withdraw,
)
from surefoot.session.session import Session
from surefoot.session.state import Phase, SessionState
from surefoot.session.transitions import TABLE, refusal

PHASES = get_args(Phase)
COMMANDS = get_args(Command)

# Phases in which a command is allowed, as far as the phase decides.
ALLOWED = {
    StateProblem: {"posing", "planning", "ended", "assessed"},
    BeginRun: {"planning", "ended", "assessed"},
    TakeSteps: {"stepping"},
    PutIterate: {"stepping"},
    Abandon: {"stepping"},
    BeginVariant: {"planning", "stepping", "ended", "assessed"},
    TakeUp: {"planning", "stepping", "ended", "assessed"},
    Withdraw: {"posing", "planning", "stepping", "ended", "assessed"},
    AddNote: {"posing", "planning", "stepping", "ended", "assessed"},
}


@pytest.fixture
def state(tmp_path: Path) -> SessionState:
    """Two runs, and something to withdraw: only the phase is left to decide."""
    with Session.create(tmp_path / "a.json", by="M. R.") as session:
        for command in (StateProblem(QUADRATIC), BeginRun(SECANT), BeginVariant(1, 1, NEWTON)):
            session.do(command)
        return session.state


def test_the_table_is_whole() -> None:
    assert TABLE.keys() == set(PHASES)
    assert all(row.keys() == set(COMMANDS) for row in TABLE.values())
    assert ALLOWED.keys() == set(COMMANDS)


@pytest.mark.parametrize("phase", PHASES)
@pytest.mark.parametrize("command", COMMANDS)
def test_every_cell(state: SessionState, phase: Phase, command: type[Command]) -> None:
    refused = refusal(replace(state, phase=phase), command)
    assert (refused is None) == (phase in ALLOWED[command])
    if refused is not None:
        # One clause of plain words for the reason, one for what to do instead.
        assert re.fullmatch(r"[a-z][a-z ]+", refused.reason)
        assert re.fullmatch(r"[a-z][a-z, ]+", refused.hint)


def test_what_the_runs_and_the_past_decide(state: SessionState) -> None:
    fresh = SessionState(phase="planning")
    assert str(refusal(fresh, Withdraw)) == "nothing to withdraw"
    assert str(refusal(fresh, BeginVariant)) == "no run yet; begin one first"
    assert str(refusal(fresh, TakeUp)) == "there is no other run; begin a new run or a variant first"
    alone = replace(state, runs=state.runs[-1:])
    assert refusal(alone, TakeUp) is not None
    assert refusal(replace(alone, hand=None, phase="planning"), TakeUp) is None
    assert refusal(state, TakeUp) is None


def test_the_words_of_the_common_cases() -> None:
    assert str(refusal(SessionState(), BeginRun)) == "no problem yet; state the equation first"
    assert str(refusal(SessionState(phase="planning"), TakeSteps)) == (
        "no plan yet; choose a method and its starts first"
    )
