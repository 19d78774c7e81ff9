"""Short texts that several rooms show: titles, times, outcomes."""

from __future__ import annotations

from datetime import datetime

from surefoot.equation.choice import arithmetic_of
from surefoot.equation.results import Real
from surefoot.methods.contract import Outcome
from surefoot.session.state import Run, SessionState

OUTCOME_WORDS: dict[Outcome, str] = {
    "converged": "converged",
    "step_limit": "step limit",
    "failed_evaluation": "no value of f",
    "broke_down": "broke down",
    "left_range": "left the range",
    "no_progress": "no progress",
    "abandoned": "abandoned",
}


def title_words(state: SessionState) -> str:
    """The title of the session, or of its problem, or what it has instead."""
    if state.title:
        return state.title
    if state.stated is not None:
        return state.stated.problem.title or state.stated.problem.equation
    return "no problem yet"


def clock(at: str, *, date: bool = False) -> str:
    """A recorded UTC time in the time of this machine: `14:02:11`, with `2026-12-01 ` before it on request."""
    if not at:
        return "--:--:--"
    try:
        local = datetime.fromisoformat(at).astimezone()
    except ValueError:
        return at
    return local.strftime("%Y-%m-%d %H:%M" if date else "%H:%M:%S")


def run_words(state: SessionState) -> str:
    """`run 2 of 3`, empty before there is a run. Runs that were withdrawn keep their numbers."""
    if state.run is None:
        return ""
    return f"run {state.run.number} of {max(run.number for run in state.runs)}"


def ending_words(run: Run) -> str:
    """The outcome of a run in a word or two, `stepping` before it has one."""
    return OUTCOME_WORDS[run.ending.outcome] if run.ending is not None else "stepping"


def record_text(run: Run, number: Real) -> str:
    """A number of a run as record text: every digit it has, in any arithmetic."""
    return arithmetic_of(run.plan.arithmetic).encode(number)
