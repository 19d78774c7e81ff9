"""The state of a session: what folding its events gives. Frozen and shared; screens draw it and own no truth."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Generic, Literal, TypeAlias, TypeVar

from surefoot.equation.problem import Derivative, Problem
from surefoot.methods.contract import Ending, Iterate, Progress, Spent, State
from surefoot.methods.plan import Plan
from surefoot.session.environment import Environment

Phase: TypeAlias = Literal["posing", "planning", "stepping", "ended", "assessed", "signed"]

T = TypeVar("T")


@dataclass(frozen=True, slots=True)
class Chain(Generic[T]):
    """A list that grows at its end in constant time and shares all that came before.

    `length` counts the items; `last` is None only in the empty chain.
    """

    length: int = 0
    last: T | None = None
    before: Chain[T] | None = field(default=None, repr=False)

    def append(self, item: T) -> Chain[T]:
        return Chain(self.length + 1, item, self)

    def __len__(self) -> int:
        return self.length

    def __iter__(self) -> Iterator[T]:
        return iter(self.newest(self.length))

    def newest(self, count: int) -> tuple[T, ...]:
        """The last `count` items (all, when there are fewer), oldest first."""
        found: list[T] = []
        link: Chain[T] | None = self
        while link is not None and link.last is not None and len(found) < count:
            found.append(link.last)
            link = link.before
        found.reverse()
        return tuple(found)

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Chain) and self.length == other.length and tuple(self) == tuple(other)

    def __hash__(self) -> int:
        return hash((self.length, self.last))


@dataclass(frozen=True, slots=True)
class StatedProblem:
    """A problem with the derivatives that were made for it. `number` counts the problems of the session from 1."""

    number: int
    problem: Problem
    derivatives: tuple[Derivative, ...]
    readings: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Run:
    """One sequence of iterates under one plan.

    Attributes:
        number: counts the runs of the session from 1; withdrawn runs keep their number to themselves.
        stated: the problem it runs under.
        origin: iterate 0.
        iterates: starts first.
        state: the method's state after the last iterate, None when the starts failed.
        steps: step rules applied.
        spent: evaluations made for steps.
        ending: None while it is stepping.
        parent: (run, k) for a variant, None otherwise.
        readings: plain sentences on what the plan left open and how it was read.
    """

    number: int
    plan: Plan
    stated: StatedProblem
    origin: Iterate
    iterates: Chain[Iterate]
    state: State | None
    steps: int
    spent: Spent
    ending: Ending | None
    parent: tuple[int, int] | None = None
    readings: tuple[str, ...] = ()

    @property
    def current(self) -> Iterate:
        """The iterate in hand."""
        return self.iterates.last or self.origin

    def progress(self) -> Progress:
        """What the next step is made from. Raises ValueError when the run has no state to step from."""
        if self.state is None:
            raise ValueError("the run has no state to step from")
        pair = self.iterates.newest(2)
        return Progress(self.state, pair[-1], pair[0] if len(pair) == 2 else None, self.origin, self.steps)


@dataclass(frozen=True, slots=True)
class Note:
    """A remark by a person, at the iterate that was in hand."""

    at: str
    by: str
    text: str
    run: int | None
    k: int | None


@dataclass(frozen=True, slots=True)
class SessionState:
    """Everything that screens, reports and the command line show of a session.

    Attributes:
        phase: state of the run in hand (of the session, before there is a run).
        problems: all problems that were stated and not withdrawn; the last is the one in force.
        runs: all runs that were not withdrawn, in order of their number.
        hand: number of the run in hand, None before there is one.
        before: the state that withdrawing would return to, None when there is nothing to withdraw. Its `events` is the
            number of the event that would be withdrawn.
        undo: what withdrawing would take back, in words ("step 6"); empty when there is nothing.
        events: number of events folded.
        changed_at: time of the last event (UTC, ISO 8601).
        by: who last sat at the session.
        run_numbers, problem_numbers: numbers given out so far, to withdrawn ones too.
        environment: what the last sitting computed in, None before event 0.
    """

    phase: Phase = "posing"
    title: str = ""
    problems: tuple[StatedProblem, ...] = ()
    runs: tuple[Run, ...] = ()
    hand: int | None = None
    notes: tuple[Note, ...] = ()
    before: SessionState | None = field(default=None, compare=False, repr=False)  # as deep as the record is long
    undo: str = ""
    events: int = 0
    changed_at: str = ""
    by: str = ""
    run_numbers: int = 0
    problem_numbers: int = 0
    environment: Environment | None = None

    @property
    def stated(self) -> StatedProblem | None:
        """The problem in force."""
        return self.problems[-1] if self.problems else None

    @property
    def run(self) -> Run | None:
        """The run in hand."""
        for run in self.runs:
            if run.number == self.hand:
                return run
        return None
