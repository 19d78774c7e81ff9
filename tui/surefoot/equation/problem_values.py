"""The values of a problem file: how each kind is read and how it is written.

Numbers keep their text: a reader gives the literal as typed, a writer writes it bare where TOML can hold it without
changing it, and in quotes otherwise.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from surefoot.equation.functions import nearest
from surefoot.equation.tokens import is_literal

MAX_NUMBER = 4000
"""Characters that a number may have."""


class TypedNumber(str):
    """The text of a number as it stands in the file, as distinct from a text in quotes."""

    __slots__ = ()


class Mismatch(Exception):
    """What would be accepted, or what is wrong, in one line."""


@dataclass(frozen=True, slots=True)
class Leaf:
    """A kind of value.

    Attributes:
        read: the value of the file to the value that the program keeps; raises Mismatch.
        write: the value that the program keeps to TOML on one line.
    """

    read: Callable[[object], Any]
    write: Callable[[Any], str]


def shown(value: object) -> str:
    """A value of the file, short enough for one line."""
    if isinstance(value, dict):
        return "a table"
    if isinstance(value, list):
        return "a list"
    if isinstance(value, bool):
        return str(value).lower()
    if _has_no_text(value):
        return "a whole number of thousands of digits"
    text = str(value)
    text = text if len(text) <= 40 else text[:37] + "..."
    plain = isinstance(value, TypedNumber | int)
    return text if plain else repr(text) if isinstance(value, str) else f"the date or time {text}"


def _has_no_text(value: object) -> bool:
    """Whether it is a whole number that Python does not turn into decimal digits (written in hexadecimal)."""
    return isinstance(value, int) and value.bit_length() > MAX_NUMBER


# Reading


def _read_text(value: object) -> str:
    if not isinstance(value, str) or isinstance(value, TypedNumber):
        raise Mismatch(f"a text in quotes is expected, not {shown(value)}")
    return value


def read_number(value: object) -> str:
    """The literal as typed, without the underscores that TOML allows between digits. Raises Mismatch."""
    wrong = isinstance(value, bool) or not isinstance(value, str | int) or _has_no_text(value)
    text = "" if wrong else str(value)
    text = text.replace("_", "") if isinstance(value, TypedNumber) else text.strip()
    if wrong or not is_literal(text):
        raise Mismatch(f'a number is expected (0.025, 1e-3 or "0x1.8p-3"), not {shown(value)}')
    if len(text) > MAX_NUMBER:
        raise Mismatch(f"a number may have {MAX_NUMBER} characters; this one has {len(text)}")
    return text


def _read_count(value: object) -> int:
    if isinstance(value, bool) or not isinstance(value, int):
        raise Mismatch(f"a whole number is expected, not {shown(value)}")
    return value


def _read_flag(value: object) -> bool:
    if not isinstance(value, bool):
        raise Mismatch(f"true or false is expected, not {shown(value)}")
    return value


def _read_setting(value: object) -> str | bool:
    """What a method takes: a text, a number (as text) or a flag."""
    if isinstance(value, bool):
        return value
    if isinstance(value, TypedNumber | int):
        return read_number(value)
    if not isinstance(value, str):
        raise Mismatch(f"a text, a number, true or false is expected, not {shown(value)}")
    return value


def _read_preference(value: object) -> str:
    if isinstance(value, dict) and value.keys() == {"nearest"}:
        return f"nearest:{read_number(value['nearest'])}"
    if value not in ("smallest", "largest"):
        raise Mismatch(f'"smallest", "largest" or {{ nearest = 1.2 }} is expected, not {shown(value)}')
    return str(value)


def list_of(item: Leaf, what: str, count: int | None = None) -> Leaf:
    """A list of items, of exactly `count` where that is given."""

    def read(value: object) -> list[Any]:
        if not isinstance(value, list):
            raise Mismatch(f"a list of {what} is expected, not {shown(value)}")
        if count is not None and len(value) != count:
            raise Mismatch(f"a list of {what} is expected, not of {len(value)}")
        return [item.read(each) for each in value]

    return Leaf(read, lambda values: f"[{', '.join(map(item.write, values))}]")


def choice(*choices: str) -> Leaf:
    """One of a few words."""

    def read(value: object) -> str:
        text = _read_text(value)
        if text not in choices:
            near = nearest(text, choices)
            hint = f"nearest: {near}" if near else f"accepted: {', '.join(choices)}"
            raise Mismatch(f"{shown(text)} is not accepted here ({hint})")
        return text

    return Leaf(read, quoted)


# Writing

_BARE_NUMBER = re.compile(r"-?(?:0|[1-9][0-9]*)(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?")
_ESCAPES = {"\\": "\\\\", '"': '\\"', "\n": "\\n", "\r": "\\r", "\t": "\\t"}


def escaped(text: str, keep: str = "") -> str:
    """The text between the quotes of a TOML string; the characters of `keep` stay as they are."""
    return "".join(character if character in keep else _escape(character) for character in text)


def _escape(character: str) -> str:
    control = ord(character) < 32 or ord(character) == 127
    return _ESCAPES.get(character, f"\\u{ord(character):04x}" if control else character)


def quoted(text: str) -> str:
    """A text as a TOML string on one line."""
    return f'"{escaped(text)}"'


def written_number(text: str) -> str:
    """A literal bare, or in quotes where TOML would not keep its text."""
    bare = _BARE_NUMBER.fullmatch(text) and text != "-0" and len(text) <= MAX_NUMBER
    return text if bare else quoted(text)


def _written_flag(value: bool) -> str:
    return "true" if value else "false"


def _written_setting(value: str | bool) -> str:
    return _written_flag(value) if isinstance(value, bool) else written_number(value)


def _written_preference(text: str) -> str:
    number = text.removeprefix("nearest:")
    return quoted(text) if number == text else f"{{ nearest = {written_number(number)} }}"


TEXT = Leaf(_read_text, quoted)
NUMBER = Leaf(read_number, written_number)
COUNT = Leaf(_read_count, str)
FLAG = Leaf(_read_flag, _written_flag)
SETTING = Leaf(_read_setting, _written_setting)
TEXTS = list_of(TEXT, "texts")
NUMBERS = list_of(NUMBER, "numbers")
PREFERENCE = Leaf(_read_preference, _written_preference)
PAIR = list_of(NUMBER, "two numbers", 2)
