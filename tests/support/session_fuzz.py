"""Session files changed at random, and what must hold of every one of them."""

from __future__ import annotations

import json
import random
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

from support.sessions import DEPTH, NEWTON, SECANT, begun, chained
from surefoot.errors import RecordError
from surefoot.session.commands import (
    Abandon,
    AddNote,
    BeginVariant,
    PutIterate,
    StateProblem,
    TakeSteps,
    TakeUp,
    Withdraw,
)
from surefoot.session.layout import document, lay_out
from surefoot.session.library import summarise
from surefoot.session.loading import load
from surefoot.session.recompute import recompute
from surefoot.session.session import Session

LIMIT_SECONDS = 1.0


def varied_session(path: Path) -> bytes:
    """The bytes of a session with an event of every kind."""
    with begun(path) as session:
        for command in (
            TakeSteps(2),
            PutIterate("2.5", "a guess"),
            BeginVariant(1, 1, NEWTON),
            TakeSteps(3),
            Withdraw(),
            AddNote("ä far\noff"),
            TakeUp(1),
            Abandon("done"),
            StateProblem(DEPTH),
            BeginVariant(1, 1, SECANT),
        ):
            session.do(command)
    with Session.open(path, by="A. N.") as session:
        session.do(TakeSteps(1))
    return path.read_bytes()


def changed_bytes(data: bytes, chance: random.Random) -> bytes:
    """The file with something flipped, cut out, doubled, put in or moved."""
    at, end = sorted(chance.randrange(len(data)) for _ in range(2))
    end = min(end, at + chance.choice((1, 5, 80, 5000)))
    piece = chance.choice((b"\0", b"\n", b'"', b"}", b"[" * 3000, b"9" * 5000, b"1e999", b"\xff", b"NaN", bytes(4096)))
    return chance.choice(
        (
            data[:at] + bytes([data[at] ^ (1 << chance.randrange(8))]) + data[at + 1 :],
            data[:at] + data[end:],
            data[:end] + data[at:],
            data[:at] + piece + data[at:],
            data[:at] + piece + data[end:],
            data[:at],
        )
    )


def changed_lines(data: bytes, chance: random.Random) -> bytes:
    """The file with events removed, swapped or doubled, the file around them well formed."""
    lines = [*lay_out(data).lines]
    a, b = chance.randrange(len(lines)), chance.randrange(len(lines))
    how = chance.randrange(3)
    if how == 0:
        del lines[a]
    elif how == 1:
        lines[a], lines[b] = lines[b], lines[a]
    else:
        lines.insert(a, lines[b])
    return document(tuple(lines))


def changed_values(data: bytes, chance: random.Random) -> bytes:
    """The file with a value replaced somewhere inside an event, and all hashes made new."""
    events = json.loads(data)["events"]
    holder, key = chance.choice([*_places(events)])
    events_before = json.dumps(events)
    holder[key] = chance.choice(
        ("", "x", "nan", "1e999", "f32:1.0", 0, -1, 2**53 - 1, None, True, [], {}, [[]], {"k": 1}, "0.1", _nested(60))
    )
    if json.dumps(events) == events_before or not all(isinstance(event, dict) for event in events):
        return data
    return chained(events)


def _nested(depth: int) -> Any:
    value: Any = "x"
    for _ in range(depth):
        value = [value]
    return value


def _places(value: Any) -> list[tuple[Any, Any]]:
    keys = range(len(value)) if isinstance(value, list) else list(value) if isinstance(value, dict) else ()
    found: list[tuple[Any, Any]] = []
    for key in keys:
        found.append((value, key))
        found += _places(value[key])
    return found


CHANGES: tuple[Callable[[bytes, random.Random], bytes], ...] = (changed_bytes, changed_lines, changed_values)


def run(folder: Path, seed: int, count: int) -> tuple[int, int]:
    """Look at `count` changed files; how many were refused, and how many read."""
    sys.stdout.write(f"seed {seed}\n")
    chance = random.Random(seed)
    original = varied_session(folder / "a.json")
    read = sum(check_changed(folder / "b.json", original, chance) for _ in range(count))
    return count - read, read


def check_changed(path: Path, original: bytes, chance: random.Random) -> bool:
    """Write one changed file and look at it in every way: an error in one line or a result, and no hang.

    True when it could be read.

    A change that leaves the hashes as they were must never give other events than the original has.
    """
    change = chance.choice(CHANGES)
    data = change(original, chance)
    path.write_bytes(data)
    started = time.monotonic()
    events = _events(path)
    summary = summarise(path)
    try:
        recompute(path)
    except RecordError as error:
        _check_line(error)
    assert time.monotonic() - started < LIMIT_SECONDS
    assert (summary.fault == "") == (events is not None), summary.fault
    if events is not None and change is not changed_values:
        path.write_bytes(original)
        assert repr(events) == repr(load(path).events[: len(events)])
    return events is not None


def _events(path: Path) -> list[Any] | None:
    try:
        events = load(path).events
    except RecordError as error:
        _check_line(error)
        return None
    with Session.open(path, by="A. N.", read_only=True) as session:
        assert repr(session.events()) == repr(events)  # as texts: a number may be nan
    return events


def _check_line(error: RecordError) -> None:
    assert str(error)
    assert "\n" not in str(error)
    assert error.file
