"""Exit codes, and the error of a request that the command line cannot take."""

from __future__ import annotations

from enum import IntEnum

from surefoot.errors import SurefootError


class Exit(IntEnum):
    """What a command tells the shell. With several files the largest wins; a signal n gives 128 + n."""

    GOOD = 0  # the answer, and it is the good one
    OTHER = 1  # a true answer that is not the good one
    REQUEST = 2  # the request was bad: one line on standard error
    FAULT = 3  # a fault of surefoot, with a saved report


SIGNALLED = 128


class RequestError(SurefootError):
    """A request that cannot be done as it was put. `place` is the file or the word of the command line."""

    def __init__(self, message: str, *, place: str = "") -> None:
        self.message, self.place = message, place
        super().__init__(f"{place}: {message}" if place else message)
