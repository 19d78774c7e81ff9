"""Where a key stands in the text of a TOML file, for messages; the parser of the standard library does not tell."""

from __future__ import annotations

import re
from collections.abc import Iterator

_PART = r"""(?:[A-Za-z0-9_-]+|"[^"\n]*"|'[^'\n]*')"""
_DOTTED = rf"{_PART}(?:[ \t]*\.[ \t]*{_PART})*"
_HEADER = re.compile(rf"[ \t]*\[\[?[ \t]*({_DOTTED})[ \t]*\]")
_KEY = re.compile(rf"[ \t]*({_DOTTED})[ \t]*=")
_PARTS = re.compile(_PART)
_LONG_STRING = re.compile('"""|' + "'''")
MOST_PARTS = 16
_TOO_DEEP = re.compile(rf"(?<![A-Za-z0-9_-])(?:{_PART}[ \t]*\.[ \t]*){{{MOST_PARTS}}}{_PART}[ \t.]*[=\]A-Za-z0-9_-]")


def line_of(text: str, path: tuple[str, ...]) -> int | None:
    """The line, from 1, of the key with that path or of the nearest table around it; None where it cannot be told.

    An array of tables is entered at its first element.
    """
    found: tuple[int, int] | None = None  # parts that agree, line
    for line, key in _keys(text):
        if key == path[: len(key)] and (found is None or len(key) > found[0]):
            found = len(key), line
    return found[1] if found else None


def too_deep(text: str) -> int | None:
    """The line of a dotted key of more than `MOST_PARTS` parts, which costs the parser quadratic time."""
    match = _TOO_DEEP.search(text)
    return text.count("\n", 0, match.start()) + 1 if match else None


def _keys(text: str) -> Iterator[tuple[int, tuple[str, ...]]]:
    """The line and path of every table and key that begins a line; lines inside long strings are passed over."""
    header: tuple[str, ...] = ()
    ending = ""
    for number, line in enumerate(text.split("\n"), start=1):
        begins_outside = not ending
        for mark in _LONG_STRING.findall(line):
            ending = mark if not ending else "" if mark == ending else ending
        if begins_outside and (match := _HEADER.match(line)):
            header = _path(match[1])
            yield number, header
        elif begins_outside and (match := _KEY.match(line)):
            yield number, (*header, *_path(match[1]))


def _path(dotted: str) -> tuple[str, ...]:
    return tuple(part.strip("\"'") for part in _PARTS.findall(dotted))
