"""From the bytes of a session file to its events and its state."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from surefoot.errors import RecordError
from surefoot.session.codec import event_of
from surefoot.session.entries import Entries
from surefoot.session.events import Event
from surefoot.session.fold import EMPTY, apply
from surefoot.session.layout import Layout
from surefoot.session.record import read_bytes, torn_path
from surefoot.session.state import SessionState


@dataclass(frozen=True, slots=True)
class Loaded:
    """A session as read.

    Attributes:
        events: all whole events, oldest first.
        layout: of the file, up to the last whole event.
        notices: what the person who opens the file must know about it.
    """

    state: SessionState
    events: list[Event]
    layout: Layout
    notices: tuple[str, ...]


def load(path: Path) -> Loaded:
    """Read a session file, check its chain and fold its events. The file is not changed.

    Raises:
        RecordError: the file cannot be read or is not whole; it names the file, and the event where one is meant.
    """
    data = read_bytes(path)
    state = EMPTY
    events: list[Event] = []
    try:
        entries = Entries(data)
        for entry in entries:
            event = event_of(entry, state)
            state = apply(state, event)
            events.append(event)
    except RecordError as error:
        raise RecordError(error.message, file=str(path), event=error.event) from error
    return Loaded(state, events, entries.layout, notices_of(entries.layout, path))


def notices_of(layout: Layout, path: Path) -> tuple[str, ...]:
    """What must be said about the layout of a file, one line each."""
    if not layout.ours:
        return ("another program has laid the file out anew; its events are unchanged",)
    if layout.closed:
        return ()
    last = len(layout.lines) - 1
    cut = f"a write was cut short: events up to {last} are whole"
    if layout.tail:
        return (f"{cut}, the {len(layout.tail)} bytes behind them are no event and are kept in {torn_path(path).name}",)
    return (f"{cut}, nothing was lost",)
