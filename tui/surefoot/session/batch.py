"""Events in the making: what was computed and is not on disk yet."""

from __future__ import annotations

from surefoot.session.clock import Clock
from surefoot.session.codec import content_of
from surefoot.session.entry import seal
from surefoot.session.events import Event, Happening
from surefoot.session.fold import apply
from surefoot.session.state import SessionState


class Batch:
    """Events on top of a state.

    Attributes:
        state: what the session will be when they are recorded.
        prev: hash of the last of them.
        lines: the events as they are written, one each.
    """

    def __init__(self, state: SessionState, prev: str, by: str, now: Clock) -> None:
        self.state, self.prev = state, prev
        self.events: list[Event] = []
        self.lines: list[bytes] = []
        self._by, self._now = by, now

    def add(self, what: Happening) -> None:
        """One more event. Raises RecordError when it holds what a record cannot hold; nothing is added then."""
        content = content_of(what, self.state)
        entry, line = seal(self.state.events, self._now(), self._by, what.kind, content, self.prev)
        event = Event(entry.n, entry.at, entry.by, what, entry.prev, entry.hash)
        self.state = apply(self.state, event)
        self.prev = entry.hash
        self.events.append(event)
        self.lines.append(line)
