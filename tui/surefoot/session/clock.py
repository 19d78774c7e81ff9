"""The times of the record."""

from __future__ import annotations

from collections.abc import Callable
from datetime import UTC, datetime
from typing import TypeAlias

Clock: TypeAlias = Callable[[], str]
"""Gives the time in the form of `utc_now`."""


def utc_now() -> str:
    """Now, in UTC, to the millisecond: `2026-12-01T14:02:11.318Z`."""
    return time_of(datetime.now(UTC))


def time_of(moment: datetime) -> str:
    """A moment as the record writes it. Naive times are taken for UTC."""
    return moment.strftime("%Y-%m-%dT%H:%M:%S.%f")[:-3] + "Z"
