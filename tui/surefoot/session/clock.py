"""The time of an event."""

from __future__ import annotations

from datetime import UTC, datetime


def utc_now() -> str:
    """Now, in UTC, to the millisecond: `2026-12-01T14:02:11.318Z`."""
    return datetime.now(UTC).strftime("%Y-%m-%dT%H:%M:%S.%f")[:-3] + "Z"
