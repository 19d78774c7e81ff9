"""From the bytes of a session file to its events and its state."""

from __future__ import annotations

import gc
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

from surefoot.errors import RecordError
from surefoot.session.codec import event_of
from surefoot.session.entries import Entries
from surefoot.session.events import Event
from surefoot.session.fold import EMPTY, apply
from surefoot.session.layout import Layout
from surefoot.session.record import read_bytes
from surefoot.session.state import SessionState

_MANY_OBJECTS = 100_000


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
        with _without_collecting():
            for entry in entries:
                event = event_of(entry, state)
                state = apply(state, event)
                events.append(event)
    except RecordError as error:
        raise RecordError(error.message, file=str(path), event=error.event) from error
    return Loaded(state, events, entries.layout, notices_of(entries.layout))


@contextmanager
def _without_collecting() -> Iterator[None]:
    """Fold without looking for garbage cycles: there are none to come, and the search would double the time.

    What was made then stays out of later searches too; it goes when the session goes, by its counts of references.
    """
    collecting = gc.isenabled()
    gc.disable()
    try:
        yield
        if gc.get_count()[0] > _MANY_OBJECTS:
            gc.freeze()
    finally:
        if collecting:
            gc.enable()


def notices_of(layout: Layout) -> tuple[str, ...]:
    """What must be said about the layout of a file, one line each."""
    if not layout.ours:
        return ("another program has laid the file out anew; its events are unchanged",)
    if layout.closed:
        return ()
    lost = f"the {len(layout.tail)} bytes behind them are no event" if layout.tail else "nothing was lost"
    return (f"a write was cut short: events up to {len(layout.lines) - 1} are whole, {lost}",)
