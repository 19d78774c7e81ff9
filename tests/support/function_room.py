"""The function room in front of a pilot, and how tests type and paste into it."""

from __future__ import annotations

from collections.abc import AsyncIterator
from contextlib import asynccontextmanager
from pathlib import Path
from typing import Any

from textual import events

from support.screens import program, wait_until
from surefoot.screens.app import SurefootApp
from surefoot.screens.form import Form
from surefoot.screens.function import FunctionRoom
from surefoot.screens.typed import Typed

SIZE = (80, 24)


@asynccontextmanager
async def function_room(
    folder: Path, *, size: tuple[int, int] = SIZE, session: Path | None = None, **options: Any
) -> AsyncIterator[tuple[SurefootApp, Any, FunctionRoom]]:
    """The program with the function room in front, its pilot, and the room."""
    app = program(folder, target=session, **options)
    async with app.run_test(size=size) as pilot:
        if session is not None:
            await wait_until(pilot, lambda: app.session is not None)
        app.go("function")
        await wait_until(pilot, lambda: isinstance(app.screen, FunctionRoom) and app.screen.composed)
        await pilot.pause()
        yield app, pilot, room_of(app)


def room_of(app: SurefootApp) -> FunctionRoom:
    room = app.rooms["function"]
    assert isinstance(room, FunctionRoom)
    return room


async def fill(pilot: Any, room: FunctionRoom, typed: Form | Typed) -> None:
    """Have texts in the fields as if they had been typed."""
    room.begun = True
    room.take(typed if isinstance(typed, Typed) else Typed(typed))
    room.redraw()
    await pilot.pause()


async def settle(pilot: Any, app: SurefootApp) -> None:
    """Let work in a thread end."""
    await wait_until(pilot, lambda: not app.working)
    await pilot.pause()


def paste(app: SurefootApp, text: str) -> None:
    """Paste as a terminal does: one event, to the field that has the focus."""
    focused = app.screen.focused
    assert focused is not None
    focused.post_message(events.Paste(text))
