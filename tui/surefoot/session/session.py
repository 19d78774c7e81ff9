"""A session on disk: commands are checked, done, recorded, and only then become the state that is shown."""

from __future__ import annotations

import time
from collections.abc import Callable, Sequence
from pathlib import Path
from types import TracebackType
from typing import TypeAlias

from surefoot.errors import RecordError, Refused
from surefoot.methods.trial import Landing
from surefoot.session.batch import Batch
from surefoot.session.clock import Clock, utc_now
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
from surefoot.session.entry import NO_HASH
from surefoot.session.environment import account, environment, host
from surefoot.session.events import (
    Event,
    Happening,
    NoteMade,
    RunAbandoned,
    RunTakenUp,
    SessionOpened,
    SessionResumed,
    Withdrawn,
)
from surefoot.session.fold import EMPTY
from surefoot.session.library import new_name
from surefoot.session.loading import load
from surefoot.session.lock import Held, Holder, Lock, acquire, myself
from surefoot.session.record import Record, reason, torn_path
from surefoot.session.solver import Solver, Stop
from surefoot.session.state import Run, SessionState
from surefoot.session.transitions import refusal

GROUP_SECONDS = 0.1
GROUP_STEPS = 500
"""Steps that follow one another are written and synced together: when one of these is reached."""

OnStep: TypeAlias = Callable[[SessionState], None]
_Single: TypeAlias = StateProblem | BeginRun | BeginVariant | PutIterate | TakeUp | Abandon | AddNote | Withdraw


class Session:
    """One investigation and its file. Used by one thread at a time.

    Attributes:
        path: the file.
        state: what is on disk, folded.
        notices: what the person who opened it must know, one line each.
        holder: who else holds the session, when it is open for reading only for that reason.
    """

    def __init__(
        self,
        path: Path,
        state: SessionState,
        events: list[Event],
        *,
        by: str,
        now: Clock,
        record: Record | None,
        lock: Lock | None,
        notices: tuple[str, ...] = (),
        holder: Holder | None = None,
    ) -> None:
        self.path, self.state, self.notices, self.holder = path, state, notices, holder
        self._events = events
        self._by, self._now = by, now
        self._record, self._lock = record, lock
        self._resumed = False
        self._writing = False
        self._solver = Solver()

    @classmethod
    def create(cls, place: Path, *, by: str, title: str = "", now: Clock = utc_now) -> Session:
        """Begin a session in a new file.

        Args:
            place: the file (`.json`), or a folder, made when it is missing, in which date and title name the file.
            by: the name of the person for this sitting.

        Raises:
            RecordError: the file exists or cannot be made.
        """
        batch = Batch(EMPTY, NO_HASH, by, now)
        batch.add(SessionOpened(title, account(), host(), environment()))
        path = place
        if place.suffix != ".json":
            _make_folder(place)
            path = place / new_name(batch.state.changed_at, title, place)
        record = Record.create(path, batch.lines)
        try:
            # The file is new, so whoever a sidecar of this name speaks of holds a file that is gone.
            lock = acquire(path, myself(by, batch.state.changed_at), take_over=True)
        except RecordError:
            record.close()
            path.unlink(missing_ok=True)
            raise
        session = cls(path, batch.state, batch.events, by=by, now=now, record=record, lock=lock)
        session._resumed = True
        return session

    @classmethod
    def open(
        cls, path: Path, *, by: str, read_only: bool = False, take_over: bool = False, now: Clock = utc_now
    ) -> Session:
        """Resume a session. When another holds it, or it cannot be written, it is open for reading only.

        Nothing is written before the first command is done.

        Args:
            take_over: take it from whoever holds it; that session then refuses to write.

        Raises:
            RecordError: the file cannot be read, or is not whole.
        """
        lock: Lock | None = None
        record: Record | None = None
        holder: Holder | None = None
        notices: list[str] = []
        if not read_only:
            try:
                lock = acquire(path, myself(by, now()), take_over=take_over)
                notices += [lock.notice] if lock.notice else []
            except RecordError as error:
                holder = error.holder if isinstance(error, Held) else None
                notices.append(f"open for reading only: {error.message}")
        try:
            loaded = load(path)
            if lock is not None:
                record = Record.open(path, loaded.layout)
        except RecordError:
            if lock is not None:
                lock.release()
            raise
        if holder is None:  # while another writes, a file that is cut at its end is no accident
            notices += loaded.notices
        if record is not None and loaded.layout.tail:
            notices.append(f"what a cut write left is kept in {torn_path(path).name}")
        return cls(
            path,
            loaded.state,
            loaded.events,
            by=by,
            now=now,
            record=record,
            lock=lock,
            notices=tuple(notices),
            holder=holder,
        )

    def close(self) -> None:
        """Let the file and its lock go. All that was done is on disk already."""
        if self._record is not None:
            self._record.close()
        if self._lock is not None:
            self._lock.release()
        self._record = self._lock = None

    def __enter__(self) -> Session:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.close()

    @property
    def read_only(self) -> bool:
        return self._record is None

    def events(self) -> Sequence[Event]:
        """All events, oldest first."""
        return self._events

    def refusal(self, command: type[Command]) -> Refused | None:
        """Why a command cannot be done now, None when it can."""
        if self.holder is not None:
            return Refused(f"the session is held by {self.holder}", "close it there and open it again, or take it over")
        if self._record is None:
            return Refused("the session is open for reading only", "open it again where and when it can be written")
        return refusal(self.state, command)

    def do(self, command: Command, stop: Stop | None = None, on_step: OnStep | None = None) -> tuple[Event, ...]:
        """Do a command: what it did is on disk when this returns.

        Args:
            stop: asked during long work whether to stop; what was done until then stays done.
            on_step: told the state whenever further steps are on disk, for TakeSteps.

        Returns:
            The events that it made, without the one by which a sitting resumes; none when it was stopped before
            anything was done.

        Raises:
            Refused: not allowed now.
            ProblemError, PlanError: the problem or the plan is not acceptable.
            RecordError: it could not be recorded; the state is that of the record.
        """
        refused = self.refusal(type(command))
        if refused is not None:
            raise refused
        if isinstance(command, TakeSteps):
            return self._take_steps(command, stop, on_step)
        what = self._what(command, stop)
        if what is None:
            return ()
        batch = self._batch()
        batch.add(what)
        self._commit(batch)
        return (batch.events[-1],)

    def trial(self, codes: Sequence[str] | None = None, stop: Stop | None = None) -> tuple[Landing, ...]:
        """Where methods (all, or those of `codes`) would land from the iterate in hand; nothing is recorded.

        Raises:
            Refused: there is no run under way.
            PlanError: a code that there is not.
        """
        refused = refusal(self.state, TakeSteps)
        if refused is not None:
            raise refused
        return self._solver.landings(self._run_in_hand(), codes, stop)

    def _what(self, command: _Single, stop: Stop | None) -> Happening | None:
        """What a command of one event does; None when it was stopped before it did anything."""
        state = self.state
        match command:
            case StateProblem():
                return self._solver.state_problem(state, command)
            case BeginRun():
                return self._solver.begin_run(state, command, stop)
            case BeginVariant():
                return self._solver.begin_variant(state, command, stop)
            case PutIterate():
                return self._solver.put_iterate(self._run_in_hand(), command, stop)
            case TakeUp(run=number):
                return _taking_up(state, number)
            case Abandon(reason=why):
                return RunAbandoned(_given(why, "a reason is needed to abandon a run"))
            case AddNote(text=text):
                return NoteMade(_given(text, "a note needs a text"))
            case Withdraw():
                assert state.before is not None, "the table of transitions asks for it"
                return Withdrawn(state.before.events)

    def _take_steps(self, command: TakeSteps, stop: Stop | None, on_step: OnStep | None) -> tuple[Event, ...]:
        """Steps in groups; each group is on disk before it is shown."""
        if command.count is not None and command.count < 1:
            raise Refused("the number of steps must be 1 or more")
        taken: list[Event] = []
        more = True
        while more:
            group = self._batch()
            already = len(group.events)
            left = GROUP_STEPS if command.count is None else min(GROUP_STEPS, command.count - len(taken))
            try:
                more = self._fill(group, left, stop)
            finally:  # also when the work is broken off: what was computed is kept
                if len(group.events) > already:
                    self._commit(group)
                    taken += group.events[already:]
                    if on_step is not None:
                        on_step(self.state)
            more = more and len(taken) != command.count
        return tuple(taken)

    def _fill(self, group: Batch, most: int, stop: Stop | None) -> bool:
        """Take up to `most` steps, for as long as a group may last. False when there are no more to take."""
        until = time.monotonic() + GROUP_SECONDS
        for _ in range(most):
            run = group.state.run
            assert run is not None, "the table of transitions asks for it"
            what = self._solver.step(run, stop)
            if what is None:
                return False
            group.add(what)
            if what.ending is not None or (stop is not None and stop()):
                return False
            if time.monotonic() >= until:
                break
        return True

    def _batch(self) -> Batch:
        """Events to come, behind that by which this sitting resumes, if it has not been recorded yet."""
        prev = self._events[-1].hash
        batch = Batch(self.state, prev, self._by, self._now)
        if not self._resumed:
            here = environment()
            batch.add(SessionResumed(account(), host(), None if here == self.state.environment else here))
        return batch

    def _commit(self, batch: Batch) -> None:
        """To disk, and only then into the state. Raises RecordError; nothing of the batch is kept then."""
        assert self._record is not None, "a session that is open for reading only refuses every command"
        assert self._lock is not None, "what can be written is locked"
        if self._writing:  # broken off by a signal: whether the events are on disk, only the file knows
            raise RecordError("a write was broken off before; open the session again", file=str(self.path))
        self._writing = True
        try:
            self._lock.check()
            self._record.append(batch.lines)
        except RecordError:
            self._writing = False
            raise
        self.state = batch.state
        self._events += batch.events
        self._resumed = True
        self._writing = False

    def _run_in_hand(self) -> Run:
        run = self.state.run
        assert run is not None, "the table of transitions asks for it"
        return run


def _given(text: str, needed: str) -> str:
    if not text.strip():
        raise Refused(needed)
    return text.strip()


def _taking_up(state: SessionState, number: int) -> RunTakenUp:
    if number == state.hand:
        raise Refused(f"run {number} is in hand already")
    if not any(run.number == number for run in state.runs):
        numbers = ", ".join(str(run.number) for run in state.runs)
        raise Refused(f"there is no run {number}", f"there are {numbers}")
    return RunTakenUp(number)


def _make_folder(folder: Path) -> None:
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise RecordError(f"the folder cannot be made: {reason(error)}", file=str(folder)) from error
