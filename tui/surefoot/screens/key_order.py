"""Keys act one after the other, also when many arrive at once, as they do from a line that stalled.

The toolkit hands a key to what has the focus when the key arrives, and runs the action of a key later, behind those
that arrived in between: of a burst, what is typed after a tab would go into the field before it, and what is typed
after a key that opens a page would act on the page below.
"""

from __future__ import annotations

from collections import deque
from collections.abc import Sequence

from textual import events
from textual.app import App
from textual.driver import Driver
from textual.message_pump import MessagePump
from textual.timer import Timer

_LONGEST = 1.0
"""Seconds after which the next key is let in, whatever became of the one before."""


class KeysInOrder(App[int], inherit_bindings=False):
    """A program in which a key, or a paste, waits until the one before has done its work."""

    def __init__(self, *, driver_class: type[Driver] | None = None) -> None:
        super().__init__(driver_class=driver_class)
        self._keys_waiting: deque[events.Key | events.Paste] = deque()
        self._key_timer: Timer | None = None

    async def on_event(self, event: events.Event) -> None:
        if event.is_forwarded or not isinstance(event, events.Key | events.Paste):
            await super().on_event(event)
        elif self._key_timer is not None:
            self._keys_waiting.append(event)
        else:
            await self._let_in(event)

    async def _let_in(self, event: events.Key | events.Paste) -> None:
        self._key_timer = self.set_timer(_LONGEST, self._next_key)
        focused = self.focused
        target = focused or self.screen
        path = [target, *(node for node in target.ancestors if node is not self), self]
        typed = focused is not None and (isinstance(event, events.Paste) or event.is_printable)
        await super().on_event(event)
        self._follow(path, typed)

    def _follow(self, path: Sequence[MessagePump], typed: bool) -> None:
        """Go the way of a key that bubbles, and end behind it; each call stands in the queue behind the key itself."""
        for place, node in enumerate(path):
            if node.call_later(self._follow, path[place + 1 :], typed):
                return
        # What is typed into a field is done; any other key may have moved the focus or opened a page.
        if typed:
            self.call_later(self._next_key)
        else:
            self.call_after_refresh(self._next_key)

    async def _next_key(self) -> None:
        if self._key_timer is not None:
            self._key_timer.stop()
            self._key_timer = None
        if self._keys_waiting:
            await self._let_in(self._keys_waiting.popleft())
