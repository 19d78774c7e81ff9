"""What a pilot sees of the screens, and the session that screen tests begin from."""

from __future__ import annotations

import asyncio
from collections.abc import Callable
from pathlib import Path
from typing import Any

from surefoot.equation.problem import Definition, Input, Problem
from surefoot.methods.plan import Plan, Stop
from surefoot.screens.app import SurefootApp
from surefoot.session.commands import BeginRun, StateProblem
from surefoot.session.session import Session

BY = "M. R., duty"

# The demonstration case: a channel of trapezoidal section, Manning's formula; the figures are invented.
TAILRACE = Problem(
    title="Depth in the tailrace at 12 m3/s",
    unknown="y",
    unit="m",
    range=("0.05", "6.0"),
    equation="Q = Qd",
    where=(
        Definition("A", "(b + z*y)*y"),
        Definition("P", "b + 2*y*sqrt(1 + z^2)"),
        Definition("Q", "A/n*(A/P)^(2/3)*sqrt(S)"),
    ),
    inputs=(
        Input("b", "3.0", "m"),
        Input("z", "1.5"),
        Input("S", "0.0008"),
        Input("n", "0.025"),
        Input("Qd", "12.0", "m3/s"),
    ),
)
NEWTON = Plan("newton-raphson", ("0.2",), stop=Stop(x_relative="1e-10"))


def screen_text(app: Any) -> str:
    """The screen in front as text, a line a row."""
    strips = app.screen._compositor.render_strips()
    return "\n".join("".join(segment.text for segment in strip).rstrip() for strip in strips)


async def wait_until(pilot: Any, holds: Callable[[], bool], seconds: float = 10.0) -> None:
    """Let the program work until a condition holds; fails when it does not within the time."""
    for _ in range(int(seconds / 0.02)):
        if pilot.app.fault is not None:
            raise pilot.app.fault
        await pilot.pause()
        if holds():
            return
        await asyncio.sleep(0.02)
    raise AssertionError(f"did not happen within {seconds} s; the screen:\n{screen_text(pilot.app)}")


def tailrace_session(folder: Path, plan: Plan | None = NEWTON) -> Path:
    """A session of the demonstration case with its problem stated and, with a plan, a run begun; its file."""
    session = Session.create(folder, by=BY, title=TAILRACE.title)
    session.do(StateProblem(TAILRACE))
    if plan is not None:
        session.do(BeginRun(plan))
    session.close()
    return session.path


def program(folder: Path, **options: Any) -> SurefootApp:
    """The program on a folder of sessions, with a person at the keyboard."""
    return SurefootApp(folder=folder, by=BY, **options)


def message_of(app: Any) -> str:
    """What stands in the message lines of the room in front, between its last rule and the key line, as one line."""
    return " ".join(line.strip() for line in screen_text(app).splitlines()[-3:-1]).strip()
