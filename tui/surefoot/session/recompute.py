"""Every start and every step of a record done again, by the recorded plan, problem and derivative text.

Each step is made again from the recorded iterate before it, so a difference stands where it arose and does not spread.
Numbers are compared as the texts of the record, hence to the bit. Withdrawn steps are done again like any other.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field, replace
from pathlib import Path

from surefoot.errors import RecordError, SurefootError
from surefoot.session.codec import content_of, event_of
from surefoot.session.comparison import Difference, compare, places_words
from surefoot.session.entry import NO_HASH, Entry, read_entry, read_unchecked
from surefoot.session.environment import Environment, differences, environment
from surefoot.session.events import Event, Happening, IteratePut, RunBegun, StepTaken
from surefoot.session.fold import EMPTY, apply
from surefoot.session.layout import Layout, cut_at, lay_out
from surefoot.session.loading import notices_of
from surefoot.session.record import read_bytes
from surefoot.session.solver import Solver, Stop, iterate_put, run_begun, starts_from, step_taken
from surefoot.session.state import SessionState, StatedProblem
from surefoot.session.tools import tools_for


@dataclass(frozen=True, slots=True)
class Recomputed:
    """What came of doing a record again.

    Attributes:
        path: the session file.
        events: events read.
        steps: steps done again, withdrawn ones too; those of `differing` gave something else.
        chain: `whole`, or `broken at N`, the first event that is not what was written in its place.
        first: the first value that came out otherwise, of a step, a start or an iterate put by hand; None without one.
        most_places: the largest distance of two numbers, in last places; None where not only numbers differ.
        elsewhere: what differs between the environment in which the first difference was recorded and this one, as
            (name, recorded, here).
        notices: what must be known about the file.
        finished: False when it was stopped, or the record could not be read to its end.
    """

    path: Path
    events: int
    steps: int
    differing: int
    chain: str
    first: Difference | None
    most_places: float | None
    elsewhere: tuple[tuple[str, str, str], ...]
    notices: tuple[str, ...]
    finished: bool

    @property
    def reproduced(self) -> bool:
        """Whether every start and every step was done again and came out the same to the bit."""
        return self.first is None and self.finished

    @property
    def first_difference(self) -> str | None:
        """The first difference in one sentence, with both environments where they are not the same."""
        if self.first is None:
            return None
        parts = [str(self.first)]
        if self.differing > 1 and self.most_places is not None:
            parts.append(f"{self.differing} of {self.steps} steps differ, by at most {places_words(self.most_places)}")
        elif self.differing > 1:
            parts.append(f"{self.differing} of {self.steps} steps differ")
        if self.elsewhere:
            recorded = ", ".join(f"{name} {old}" for name, old, _ in self.elsewhere)
            here = ", ".join(f"{name} {new}" for name, _, new in self.elsewhere)
            parts.append(f"recorded with {recorded}; recomputed with {here}")
        return "; ".join(parts)


def recomputed_words(recomputed: Recomputed) -> str:
    """The answer in one line."""
    same = recomputed.steps - recomputed.differing
    count = f"all {same}" if recomputed.reproduced else f"{same} of {recomputed.steps}"
    parts = [f"{count} steps reproduced to the bit", f"chain {recomputed.chain}, {recomputed.events} events"]
    if not recomputed.finished:
        parts.append("not done to the end")
    if recomputed.first_difference:
        parts.append(recomputed.first_difference)
    return "; ".join(parts)


def recompute(path: Path, *, stop: Stop | None = None) -> Recomputed:
    """Do a record again. The file is not changed, and a damaged chain is told, not raised.

    Raises:
        RecordError: the file cannot be read, or is no session file.
    """
    data = read_bytes(path)
    try:
        layout = lay_out(data)
    except RecordError as error:
        raise RecordError(error.message, file=str(path), event=error.event) from error
    work = _Work()
    work.go_through(_Reading(layout, data), stop)
    return work.result(path)


class _Reading:
    """The entries of a file, also where the chain is broken; `broken` is the first event that is not as written."""

    def __init__(self, layout: Layout, data: bytes) -> None:
        self.layout = layout
        self.broken: int | None = None
        self._data = data

    def __iter__(self) -> Iterator[Entry]:
        prev = NO_HASH
        for n, line in enumerate(self.layout.lines):
            try:
                entry = read_entry(line, n, prev, strict=True)
            except RecordError:
                cut = cut_at(self.layout, n, self._data) if self.broken is None else None
                if cut is not None:
                    self.layout = cut
                    return
                self.break_at(n)
                entry = read_unchecked(line, n)
            yield entry
            prev = entry.hash

    def break_at(self, n: int) -> None:
        self.broken = n if self.broken is None else self.broken


@dataclass(slots=True)
class _Work:
    """Recomputing, as far as it has come."""

    state: SessionState = EMPTY
    steps: int = 0
    differing: int = 0
    first: Difference | None = None
    recorded_in: Environment | None = None
    places: list[float | None] = field(default_factory=list)
    chain: str = "whole"
    notices: tuple[str, ...] = ()
    finished: bool = True
    solver: Solver = field(default_factory=Solver)

    def go_through(self, reading: _Reading, stop: Stop | None) -> None:
        try:
            for entry in reading:
                if stop is not None and stop():
                    self.finished = False
                    break
                event = event_of(entry, self.state)
                after = apply(self.state, event)
                self._again(entry, event, after)
                self.state = after
        except RecordError as error:
            reading.break_at(error.event if error.event is not None else self.state.events)
            self.finished = False
        self.chain = "whole" if reading.broken is None else f"broken at {reading.broken}"
        self.notices = notices_of(reading.layout)

    def result(self, path: Path) -> Recomputed:
        elsewhere = differences(self.recorded_in, environment()) if self.recorded_in is not None else ()
        numbers = [places for places in self.places if places is not None]
        only_numbers = bool(numbers) and len(numbers) == len(self.places)
        return Recomputed(
            path,
            self.state.events,
            self.steps,
            self.differing,
            self.chain,
            self.first,
            max(numbers) if only_numbers else None,
            elsewhere,
            self.notices,
            self.finished,
        )

    def _again(self, entry: Entry, event: Event, after: SessionState) -> None:
        """Do again what the event says was done, and keep what differs."""
        what = event.what
        if not isinstance(what, (RunBegun, StepTaken, IteratePut)):
            return
        run = after.run
        assert run is not None, "each of these leaves a run in hand"
        self.steps += isinstance(what, StepTaken)
        try:
            again = _done_again(self.solver, what, self.state)
            content = content_of(again, self.state) if again is not None else {}
            tools = tools_for(run.plan.method, run.plan.arithmetic)
            found = compare(entry.n, run.number, entry.content, content, tools.arithmetic)
        except SurefootError as error:
            found = [Difference(entry.n, run.number, entry.kind, "done", f"cannot be done: {error}")]
        if found:
            self.differing += isinstance(what, StepTaken)
            self.places += [difference.places for difference in found]
            if self.first is None:
                self.first, self.recorded_in = found[0], self.state.environment


def _done_again(solver: Solver, what: RunBegun | StepTaken | IteratePut, before: SessionState) -> Happening | None:
    """What the event says was done, done again. Raises SurefootError when it cannot be."""
    if isinstance(what, RunBegun):
        stated = next(stated for stated in before.problems if stated.number == what.problem)
        return _begun_again(solver, what, stated, before)
    run = before.run
    assert run is not None, "the fold has checked it"
    stepper = solver.stepper(run.plan, run.number, run.stated)
    if isinstance(what, StepTaken):
        return step_taken(stepper.advance(run.progress()))
    return iterate_put(stepper.put(run.progress(), what.iterate.x, what.iterate.put))


def _begun_again(solver: Solver, what: RunBegun, stated: StatedProblem, before: SessionState) -> Happening | None:
    begun = solver.stepper(what.plan, what.number, stated).begin()
    again = run_begun(begun, what.number, what.problem, what.plan, what.parent)
    if again is None or what.parent is None:
        return again
    number, k = what.parent
    parent = next(run for run in before.runs if run.number == number)
    # The starts of a variant are those of its parent: they are taken from there, not believed.
    return replace(again, plan=replace(again.plan, start=starts_from(parent, k, what.plan)))
