"""What happened in a session: the kinds of events, in past tense.

A new kind is one dataclass here, one row in `surefoot.session.codec`, one function in `surefoot.session.fold`, one
definition in docs/session.schema.json.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar, TypeAlias

from surefoot.equation.problem import Derivative, Problem
from surefoot.equation.results import Failure
from surefoot.methods.contract import Ending, Iterate, Spent, State
from surefoot.methods.plan import Plan
from surefoot.session.environment import Environment


@dataclass(frozen=True, slots=True)
class SessionOpened:
    """Event 0. Account and host stand beside the name that was given, never instead of it."""

    kind: ClassVar[str] = "session_opened"

    title: str
    account: str
    host: str
    environment: Environment


@dataclass(frozen=True, slots=True)
class SessionResumed:
    """The first event of a later sitting that adds to the record. `environment` is None when it has not changed."""

    kind: ClassVar[str] = "session_resumed"

    account: str
    host: str
    environment: Environment | None


@dataclass(frozen=True, slots=True)
class ProblemStated:
    """A problem was accepted, with the derivatives that were made for it. `number` counts the session's problems."""

    kind: ClassVar[str] = "problem_stated"

    number: int
    problem: Problem
    derivatives: tuple[Derivative, ...]
    readings: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class RunBegun:
    """The starts of a run were evaluated.

    Attributes:
        number: counts the runs of the session, withdrawn ones included.
        problem: number of the problem it runs under.
        revision: of the method's rule.
        iterates, state, spent, ending, readings: as `methods.contract.Begun` has them.
        parent: (run, k) for a variant.
    """

    kind: ClassVar[str] = "run_begun"

    number: int
    problem: int
    plan: Plan
    revision: int
    iterates: tuple[Iterate, ...]
    state: State | None
    spent: Spent
    ending: Ending | None
    parent: tuple[int, int] | None = None
    readings: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class StepTaken:
    """One step of the run in hand. `iterate` and `state` are None when the run ended without a new one."""

    kind: ClassVar[str] = "step_taken"

    iterate: Iterate | None
    state: State | None
    spent: Spent
    ending: Ending | None


@dataclass(frozen=True, slots=True)
class IteratePut:
    """The run in hand goes on from an x put by hand; the reason stands in the iterate."""

    kind: ClassVar[str] = "iterate_put"

    iterate: Iterate
    state: State | None
    spent: Spent
    ending: Ending | None


@dataclass(frozen=True, slots=True)
class RunTakenUp:
    kind: ClassVar[str] = "run_taken_up"

    run: int


@dataclass(frozen=True, slots=True)
class RunAbandoned:
    """The run in hand was ended by a person, who said why."""

    kind: ClassVar[str] = "run_abandoned"

    reason: str


@dataclass(frozen=True, slots=True)
class Withdrawn:
    """What event `of` did was taken back."""

    kind: ClassVar[str] = "withdrawn"

    of: int


@dataclass(frozen=True, slots=True)
class NoteMade:
    kind: ClassVar[str] = "note_made"

    text: str


Happening: TypeAlias = (
    SessionOpened
    | SessionResumed
    | ProblemStated
    | RunBegun
    | StepTaken
    | IteratePut
    | RunTakenUp
    | RunAbandoned
    | Withdrawn
    | NoteMade
)


@dataclass(frozen=True, slots=True)
class Event:
    """One event of the record: what happened, its number, when (UTC), by whom, and its place in the chain."""

    n: int
    at: str
    by: str
    what: Happening
    prev: str
    hash: str

    @property
    def kind(self) -> str:
        return self.what.kind


def summary_of(event: Event) -> str:
    """The event in a few words, for a list of events."""
    match event.what:
        case SessionOpened(title=title):
            return title
        case SessionResumed(environment=environment):
            return "" if environment is None else "in another environment"
        case ProblemStated(number=number, problem=problem):
            return f"problem {number}: {problem.equation}"
        case RunBegun() as begun:
            return _begun_words(begun)
        case StepTaken(iterate=iterate, ending=ending) | IteratePut(iterate=iterate, ending=ending):
            return "; ".join(part for part in (_iterate_words(iterate), ending.outcome if ending else "") if part)
        case RunTakenUp(run=run):
            return f"run {run}"
        case RunAbandoned(reason=text) | NoteMade(text=text):
            return text
        case Withdrawn(of=of):
            return f"event {of}"


def _begun_words(begun: RunBegun) -> str:
    variant = f", from run {begun.parent[0]} at k = {begun.parent[1]}" if begun.parent else ""
    ending = f"; {begun.ending.outcome}" if begun.ending else ""
    return f"run {begun.number}: {begun.plan.method}{variant}{ending}"


def _iterate_words(iterate: Iterate | None) -> str:
    if iterate is None:
        return ""
    value = str(iterate.f) if isinstance(iterate.f, Failure) else f"residual {float(iterate.f):.4g}"
    by_hand = f" ({iterate.put})" if iterate.put else ""
    return f"k = {iterate.k}: x = {float(iterate.x):.12g}, {value}{by_hand}"
