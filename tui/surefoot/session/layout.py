"""The bytes of a session file: where its events stand, and what a write that was cut short has left.

    {"format":"surefoot-session","version":1,"events":[
    {event 0},
    {event 1}
    ]}

An append overwrites the closing in one write, so a crash leaves whole events, then a piece of what was being written.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

from surefoot.errors import RecordError
from surefoot.session.canonical import canonical
from surefoot.session.entry import parse_json

FORMAT = "surefoot-session"
VERSION = 1
HEADER = b'{"format":"surefoot-session","version":1,"events":[\n'
SEPARATOR = b",\n"
CLOSING = b"\n]}\n"

# Inside a JSON string the quotes would be escaped: this is the end of an event and nothing else.
_PREV = b'"prev":"'
_EVENT_END = re.compile(rb'"prev":"[0-9a-f]{64}"\}')
_REMAINS = re.compile(rb"[\s,\]}{]*")


@dataclass(frozen=True, slots=True)
class Layout:
    """Where things are in a file.

    Attributes:
        lines: one event each, whole by form; their hashes are still to be checked.
        end: offset behind the last of these lines, where the closing belongs.
        tail: what a write that was cut short has left behind them; empty when nothing was lost.
        ours: whether the bytes are laid out as this module says, up to `end`; a file that another program wrote
            again, with other spaces, is whole all the same but cannot be appended to as it is.
        closed: whether the closing stands at `end` and the file ends with it.
    """

    lines: tuple[bytes, ...]
    end: int
    tail: bytes = b""
    ours: bool = True
    closed: bool = True


def lay_out(data: bytes) -> Layout:
    """Find the events in the bytes of a file.

    Raises:
        RecordError: this is no session file, or one of a newer version.
    """
    if not data.startswith(HEADER):
        return _lay_out_again(data)
    layout = _lines(data) if data.endswith(CLOSING) else _torn(data)
    if _is_one_event_a_line(layout, data):
        return layout
    try:
        return _lay_out_again(data)
    except RecordError:  # then it is damaged, and its lines tell where
        return layout


def _lines(data: bytes) -> Layout:
    body = data[len(HEADER) : -len(CLOSING)]
    return Layout(tuple(body.split(SEPARATOR)), len(data) - len(CLOSING))


def _is_one_event_a_line(layout: Layout, data: bytes) -> bool:
    """False when another program may have written the file again, from its first event on."""
    breaks = data.count(b"\n", len(HEADER), layout.end)
    ends = data.count(_PREV, len(HEADER), layout.end)
    return breaks == len(layout.lines) - 1 and ends == len(layout.lines) and _EVENT_END.search(layout.tail) is None


def _lay_out_again(data: bytes) -> Layout:
    """The events of a session file that another program wrote again, with other spaces and line ends.

    Raises:
        RecordError: as `lay_out`.
    """
    try:
        if FORMAT.encode() not in data:  # before the time is taken that parsing a large file costs
            raise ValueError("another kind of file")
        whole: Any = parse_json(data, unique=True)
    except ValueError as error:
        raise RecordError("is no session file of surefoot") from error
    _check_document(whole)
    lines = []
    for n, event in enumerate(whole["events"]):
        try:
            lines.append(canonical(event))
        except RecordError as error:
            raise RecordError(f"is not an event: {error}", event=n) from error
    return Layout(tuple(lines), len(data), ours=False)


def cut_at(layout: Layout, index: int, data: bytes) -> Layout | None:
    """The layout without line `index` and all behind it, where blocks of a cut write explain that the line is bad.

    A crash can leave blocks of zero bytes where data was to be; no other damage is explained away (None).
    """
    if not layout.ours or index == 0:
        return None
    end = len(HEADER) + sum(len(line) for line in layout.lines[:index]) + len(SEPARATOR) * (index - 1)
    if b"\0" not in data[end:]:
        return None
    return Layout(layout.lines[:index], end, data[end:], closed=False)


def document(lines: tuple[bytes, ...]) -> bytes:
    """The whole file with these events."""
    return HEADER + SEPARATOR.join(lines) + CLOSING


def _torn(data: bytes) -> Layout:
    """A file that does not end as it should: its whole lines, and the tail."""
    *lines, last = data[len(HEADER) :].split(SEPARATOR)
    end = len(data) - len(last)
    match = _EVENT_END.search(last)
    if match is not None:
        lines.append(last[: match.end()])
        end += match.end()
    elif lines:
        end -= len(SEPARATOR)
    if not lines:
        raise RecordError("holds no whole event: the file was cut while it was being made; it can be deleted")
    tail = data[end:]
    return Layout(tuple(lines), end, b"" if _REMAINS.fullmatch(tail) else tail, closed=False)


def _check_document(whole: Any) -> None:
    if not isinstance(whole, dict) or whole.get("format") != FORMAT:
        raise RecordError("is no session file of surefoot")
    version = whole.get("version")
    if type(version) is int and version > VERSION:
        raise RecordError(f"was written by a newer surefoot (record version {version}; this one reads {VERSION})")
    if whole.keys() != {"format", "version", "events"} or type(version) is not int or version != VERSION:
        raise RecordError("does not have the members of a session file")
    if not isinstance(whole["events"], list) or not whole["events"]:
        raise RecordError("holds no events")
