"""What a session file is, in one line, without resuming it.

A listing must not cost what resuming costs. It hashes every line, so that a changed record is found out, but it parses
only the few that tell the title and the state; a session that these do not tell is folded.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

from surefoot.errors import RecordError
from surefoot.methods.contract import Outcome
from surefoot.session.canonical import Json
from surefoot.session.clock import time_of
from surefoot.session.entry import NO_HASH, parse_json, quick_check
from surefoot.session.events import (
    IteratePut,
    NoteMade,
    ProblemStated,
    RunAbandoned,
    RunBegun,
    SessionOpened,
    SessionResumed,
    StepTaken,
    Withdrawn,
)
from surefoot.session.layout import lay_out
from surefoot.session.loading import load
from surefoot.session.record import read_bytes
from surefoot.session.state import Phase

_WITHDRAWABLE = frozenset(each.kind for each in (ProblemStated, RunBegun, StepTaken, IteratePut, RunAbandoned))
_LASTING = frozenset(each.kind for each in (SessionOpened, SessionResumed, NoteMade))


@dataclass(frozen=True, slots=True)
class Summary:
    """One session of a listing.

    Attributes:
        phase, outcome: of the run in hand; `outcome` is None while it has not ended.
        changed_at: time of the last event (UTC); of the file, when that cannot be read.
        by: who made the last event.
        runs: runs that were not withdrawn.
        steps: step rules applied in the run in hand.
        fault: why the file cannot be resumed, one line; empty when it can.
    """

    path: Path
    title: str = ""
    phase: Phase = "posing"
    outcome: Outcome | None = None
    changed_at: str = ""
    by: str = ""
    runs: int = 0
    steps: int = 0
    fault: str = ""


def summarise(path: Path) -> Summary:
    """What a session file is; one that cannot be read is told with its fault."""
    try:
        return _skim(path) or _fold(path)
    except RecordError as error:
        place = f"event {error.event}: " if error.event is not None else ""
        return Summary(path, changed_at=_modified(path), fault=place + error.message)


def _modified(path: Path) -> str:
    try:
        return time_of(datetime.fromtimestamp(path.stat().st_mtime, UTC))
    except (OSError, ValueError):
        return ""


def _fold(path: Path) -> Summary:
    state = load(path).state
    run = state.run
    outcome = run.ending.outcome if run is not None and run.ending is not None else None
    steps = run.steps if run is not None else 0
    return Summary(path, state.title, state.phase, outcome, state.changed_at, state.by, len(state.runs), steps)


def _skim(path: Path) -> Summary | None:
    """The summary by the kinds of the events and the content of a few; None when these do not tell."""
    layout = lay_out(read_bytes(path))
    kinds = _kinds(layout.lines) if layout.ours else None
    standing = _standing(kinds) if kinds is not None else None
    if kinds is None or standing is None:
        return None
    try:
        return _tell(path, layout.lines, [(n, kinds[n]) for n in standing])
    except (LookupError, TypeError, AttributeError):  # content of a form that only folding can name
        return None


def _kinds(lines: Sequence[bytes]) -> list[str] | None:
    """The kind of every event; None when the chain does not hold as it stands."""
    kinds, prev = [], NO_HASH
    for n, line in enumerate(lines):
        found = quick_check(line, n, prev)
        if found is None:
            return None
        kinds.append(found[0])
        prev = found[1]
    return kinds


def _standing(kinds: Sequence[str]) -> list[int] | None:
    """The numbers of the events that can be withdrawn and were not; None when folding must say."""
    standing: list[int] = []
    for n, kind in enumerate(kinds):
        if kind in _WITHDRAWABLE:
            standing.append(n)
        elif kind == Withdrawn.kind and standing:
            standing.pop()
        elif kind not in _LASTING:  # a run that was taken up, or what is not allowed
            return None
    return standing


def _tell(path: Path, lines: Sequence[bytes], standing: Sequence[tuple[int, str]]) -> Summary:
    def members(n: int) -> dict[str, Json]:
        whole: dict[str, Json] = parse_json(lines[n], unique=False)
        return whole

    title = members(0)["content"]["title"]
    for n, kind in standing:
        if kind == ProblemStated.kind:
            title = members(n)["content"]["problem"].get("title") or title
    begun = [place for place, (_, kind) in enumerate(standing) if kind == RunBegun.kind]
    phase: Phase = "posing"
    outcome: Outcome | None = None
    steps = 0
    if standing:
        n, kind = standing[-1]
        content = members(n)["content"]
        if kind == ProblemStated.kind:
            phase = "planning"
        else:
            outcome = "abandoned" if kind == RunAbandoned.kind else content.get("ending", {}).get("outcome")
            phase = "ended" if outcome else "stepping"
            steps = sum(kind == StepTaken.kind for _, kind in standing[begun[-1] :])
            steps -= kind == StepTaken.kind and "iterate" not in content
    last = members(len(lines) - 1)
    return Summary(path, title, phase, outcome, last["at"], last["by"], len(begun), steps)
