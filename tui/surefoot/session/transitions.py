"""Which command is allowed in which phase, and why not where it is not: the one table of transitions."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import TypeAlias

from surefoot.errors import Refused
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
from surefoot.session.state import Phase, SessionState

_No: TypeAlias = tuple[str, str]  # reason, hint

_NO_PROBLEM: _No = ("no problem yet", "state the equation first")
_NO_PLAN: _No = ("no plan yet", "choose a method and its starts first")
_NO_RUN: _No = ("no run yet", "begin one first")
_NO_OTHER_RUN: _No = ("there is no other run", "begin a new run or a variant first")
_UNDER_WAY: _No = ("the run in hand is under way", "go on to its stop, abandon it or withdraw it first")
_ENDED: _No = ("the run in hand has ended", "withdraw its last step, begin a variant or plan a new run")
_ASSESSED: _No = ("the root is assessed", "withdraw the assessment first, or plan a new run")
_SIGNED: _No = ("the session is signed and closed", "go on in a new session that names this one")

# None: allowed, as far as the phase decides; `refusal` adds what depends on the runs and on what can be withdrawn.
TABLE: Mapping[Phase, Mapping[type[Command], _No | None]] = {
    "posing": {
        StateProblem: None,
        BeginRun: _NO_PROBLEM,
        TakeSteps: _NO_PROBLEM,
        PutIterate: _NO_PROBLEM,
        BeginVariant: _NO_PROBLEM,
        TakeUp: _NO_PROBLEM,
        Abandon: _NO_PROBLEM,
        Withdraw: None,
        AddNote: None,
    },
    "planning": {
        StateProblem: None,
        BeginRun: None,
        TakeSteps: _NO_PLAN,
        PutIterate: _NO_PLAN,
        BeginVariant: None,
        TakeUp: None,
        Abandon: _NO_PLAN,
        Withdraw: None,
        AddNote: None,
    },
    "stepping": {
        StateProblem: _UNDER_WAY,
        BeginRun: _UNDER_WAY,
        TakeSteps: None,
        PutIterate: None,
        BeginVariant: None,
        TakeUp: None,
        Abandon: None,
        Withdraw: None,
        AddNote: None,
    },
    "ended": {
        StateProblem: None,
        BeginRun: None,
        TakeSteps: _ENDED,
        PutIterate: _ENDED,
        BeginVariant: None,
        TakeUp: None,
        Abandon: _ENDED,
        Withdraw: None,
        AddNote: None,
    },
    "assessed": {
        StateProblem: None,
        BeginRun: None,
        TakeSteps: _ASSESSED,
        PutIterate: _ASSESSED,
        BeginVariant: None,
        TakeUp: None,
        Abandon: _ASSESSED,
        Withdraw: None,
        AddNote: None,
    },
    "signed": dict.fromkeys(
        (StateProblem, BeginRun, TakeSteps, PutIterate, BeginVariant, TakeUp, Abandon, Withdraw, AddNote), _SIGNED
    ),
}


def refusal(state: SessionState, command: type[Command]) -> Refused | None:
    """Why a command is not allowed in this state, None when it is."""
    no = TABLE[state.phase][command]
    if no is None and command in _BESIDE_THE_PHASE:
        no = _BESIDE_THE_PHASE[command](state)
    return Refused(*no) if no else None


_BESIDE_THE_PHASE: Mapping[type[Command], Callable[[SessionState], _No | None]] = {
    Withdraw: lambda state: ("nothing to withdraw", "") if state.before is None else None,
    BeginVariant: lambda state: None if state.runs else _NO_RUN,
    TakeUp: lambda state: None if any(run.number != state.hand for run in state.runs) else _NO_OTHER_RUN,
}
