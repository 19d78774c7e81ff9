"""Work done far down the stack."""

from __future__ import annotations

import sys
from collections.abc import Callable
from typing import TypeVar

Given = TypeVar("Given")


def below(frames: int, work: Callable[[], Given]) -> Given:
    """What the work gives with so many more frames on the stack, 60 being left to it at the least."""
    room = sys.getrecursionlimit() - _frames_in_use() - 60
    return _deeper(min(frames, room), work)


def _deeper(frames: int, work: Callable[[], Given]) -> Given:
    return work() if frames <= 0 else _deeper(frames - 1, work)


def _frames_in_use() -> int:
    frame, count = sys._getframe(), 0
    while frame.f_back is not None:
        frame, count = frame.f_back, count + 1
    return count
