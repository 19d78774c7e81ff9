"""The record room: the events of the session, as saved, and recomputing them."""

from __future__ import annotations

from collections.abc import Callable
from typing import ClassVar

from rich.text import Text
from textual.app import ComposeResult
from textual.binding import Binding, BindingType

from surefoot.screens.commands import bindings_of
from surefoot.screens.room import Room
from surefoot.screens.widgets.lines import Lines
from surefoot.screens.words import clock
from surefoot.session.events import Event, summary_of
from surefoot.session.recompute import recompute, recomputed_words


class RecordRoom(Room):
    place = "record"
    BINDINGS: ClassVar[list[BindingType]] = [
        *bindings_of("record"),
        Binding("pageup", "move(-15)", show=False),
        Binding("pagedown", "move(15)", show=False),
    ]

    def __init__(self) -> None:
        super().__init__()
        self.behind = 0

    def compose_body(self) -> ComposeResult:
        yield Lines(id="events")

    def context(self) -> tuple[str, str]:
        session = self.surefoot.session
        if session is None:
            return "no record yet", ""
        return f"{session.path}", f"{session.state.events} events"

    def draw(self) -> None:
        view = self.query_one("#events", Lines)
        session = self.surefoot.session
        if session is None:
            view.show([Text(" Nothing is recorded yet: accept a function first (1).")])
            return
        events = session.events()
        self.behind = max(0, min(self.behind, len(events) - view.size.height))
        end = len(events) - self.behind
        view.show([self._event_line(event, view.size.width) for event in events[max(0, end - view.size.height) : end]])

    def _event_line(self, event: Event, width: int) -> Text:
        text = f" {event.n:>6}  {clock(event.at)}  {event.kind.replace('_', ' '):<16} {summary_of(event)}"
        return Text(text[:width])

    def action_move(self, by: int) -> None:
        self.behind -= by
        self.redraw()

    def do_earlier(self) -> None:
        self.behind += 1

    def do_later(self) -> None:
        self.behind -= 1

    def do_recompute(self) -> None:
        session = self.surefoot.session
        if session is None:
            self.say("nothing to recompute yet")
            return
        path = session.path

        def work(stop: Callable[[], bool]) -> str:
            return recomputed_words(recompute(path, stop=stop))

        self.surefoot.perform_long("recomputing", work)
