"""Sessions in tests: problems and plans to work with, a clock, records taken apart and put together again."""

from __future__ import annotations

import json
from collections.abc import Callable, Iterator, Sequence
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

from surefoot.equation.problem import Definition, Input, Problem
from surefoot.methods.plan import Plan, Stop
from surefoot.session.canonical import canonical, sha256
from surefoot.session.commands import BeginRun, StateProblem
from surefoot.session.entry import NO_HASH, seal
from surefoot.session.events import Event
from surefoot.session.fold import EMPTY, apply
from surefoot.session.layout import document
from surefoot.session.session import Session
from surefoot.session.state import SessionState

# The larger root of x^2 = 2x + 3 is 3; the smaller one -1.
QUADRATIC = Problem("x", "x^2 = 2*x + 3", title="Two roots")
DEPTH = Problem(
    unknown="y",
    equation="Q = Qd",
    title="Tailrace depth",
    unit="m",
    range=("0.05", "6"),
    where=(
        Definition("A", "(b + z*y)*y"),
        Definition("P", "b + 2*y*sqrt(1 + z^2)"),
        Definition("Q", "A/n*(A/P)^(2/3)*sqrt(S)"),
    ),
    inputs=(
        Input("b", "3.0", unit="m"),
        Input("z", "1.5"),
        Input("S", "0x1.a36e2eb1c432dp-11"),
        Input("n", "0.025", unit="s/m^(1/3)"),
        Input("Qd", "12", unit="m3/s", low="4", high="18"),
    ),
)
TIGHT = Stop(x_absolute="1e-12")
SECANT = Plan("secant", ("0", "5"), stop=TIGHT)
NEWTON = Plan("newton-raphson", ("5",), stop=TIGHT)
BISECTION = Plan("bisection", ("0", "5"), max_steps=200, stop=Stop(x_absolute="1e-9"))


def wandering(max_steps: int) -> tuple[Problem, Plan]:
    """A fixed-point run that never settles (the logistic map at 3.9), for records of any length."""
    return Problem("x", "x = 3.9*x*(1 - x)"), Plan("fixed-point", ("0.3",), max_steps=max_steps)


def ticking(start: str = "2026-12-01T14:02:11.318") -> Callable[[], str]:
    """A clock that goes on by a millisecond whenever it is asked."""
    moment = datetime.fromisoformat(start).replace(tzinfo=UTC)
    ticks = iter(range(10**9))

    def now() -> str:
        return (moment + timedelta(milliseconds=next(ticks))).strftime("%Y-%m-%dT%H:%M:%S.%f")[:-3] + "Z"

    return now


def begun(path: Path, problem: Problem = QUADRATIC, plan: Plan = SECANT) -> Session:
    """A new session with a problem and the starts of a run."""
    session = Session.create(path, by="M. R.", now=ticking())
    session.do(StateProblem(problem))
    session.do(BeginRun(plan))
    return session


def prefixes(events: Sequence[Event]) -> Iterator[SessionState]:
    """The state after each event."""
    state = EMPTY
    for event in events:
        state = apply(state, event)
        yield state


def undo_chain(state: SessionState) -> list[tuple[str, SessionState]]:
    """What withdrawing again and again would take back, and the state after each; comparing states leaves this out."""
    chain = []
    while state.before is not None:
        chain.append((state.undo, state.before))
        state = state.before
    return chain


def members_of(path: Path) -> list[dict[str, Any]]:
    """The events of a file as JSON objects."""
    events: list[dict[str, Any]] = json.loads(path.read_text(encoding="utf-8"))["events"]
    return events


def chained(events: Sequence[dict[str, Any]]) -> bytes:
    """A file of these events, their numbers, `prev` and hashes made new: a forgery that no chain can tell."""
    lines, prev = [], NO_HASH
    for n, event in enumerate(events):
        body = {**event, "n": n, "prev": prev}
        body.pop("hash", None)
        prev = sha256(canonical(body))
        lines.append(canonical({**body, "hash": prev}))
    return document(tuple(lines))


def sealed(kind: str, content: dict[str, Any], after: Sequence[dict[str, Any]]) -> dict[str, Any]:
    """One more event behind those of a file, as a JSON object."""
    prev = after[-1]["hash"] if after else NO_HASH
    _, line = seal(len(after), "2026-12-01T15:00:00.000Z", "A. N.", kind, content, prev)
    event: dict[str, Any] = json.loads(line)
    return event
