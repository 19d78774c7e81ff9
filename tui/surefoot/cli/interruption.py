"""Signals that end a command: the work in hand is put on disk first, then the exit code tells which signal it was."""

from __future__ import annotations

import signal
from collections.abc import Iterator
from contextlib import contextmanager
from types import FrameType

_ENDING = (signal.SIGINT, signal.SIGTERM, signal.SIGHUP)


class Interrupted(BaseException):
    """A signal asked this process to end. Not an Exception: nothing but the end of the command may catch it."""

    def __init__(self, number: int) -> None:
        self.number = number
        super().__init__(number)


class Watch:
    """Knows whether a signal came. While work is deferred the first signal is kept; every other one raises."""

    def __init__(self) -> None:
        self.number: int | None = None
        self._deferring = False

    def stop(self) -> bool:
        """Whether the work in hand should come to its end now."""
        return self.number is not None

    @contextmanager
    def deferring(self) -> Iterator[None]:
        """Work that looks at `stop` by itself; when it ends, a signal that came meanwhile is raised.

        Raises Interrupted.
        """
        self._deferring = True
        try:
            yield
        finally:
            self._deferring = False
        if self.number is not None:
            raise Interrupted(self.number)

    def receive(self, number: int, _frame: FrameType | None) -> None:
        again = self.number is not None
        self.number = number
        if again or not self._deferring:
            raise Interrupted(number)


@contextmanager
def watching() -> Iterator[Watch]:
    """Take the ending signals over for the time of a command. One that was ignored from outside stays ignored."""
    watch = Watch()
    before = {number: signal.getsignal(number) or signal.SIG_DFL for number in _ENDING}
    for number, handler in before.items():
        if handler is not signal.SIG_IGN:
            signal.signal(number, watch.receive)
    try:
        yield watch
    finally:
        for number, handler in before.items():
            signal.signal(number, handler)
