"""Problem files: TOML text to a problem and back. Numbers are kept as typed; nothing of the text is executed.

An unknown key is an error that names the nearest key; what is known and not read by this version says so.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any, NoReturn

from surefoot.equation.functions import nearest
from surefoot.equation.problem import Correlation, Definition, Input, Job, Problem
from surefoot.equation.problem_file_writing import problem_file_text
from surefoot.equation.problem_keys import (
    FILE,
    FORMAT,
    LATER,
    UNIT_IN_VALUE,
    Either,
    Names,
    Node,
    Table,
    Tables,
    tables_with,
)
from surefoot.equation.problem_values import Leaf, Mismatch, TypedNumber, shown
from surefoot.equation.tokens import is_literal
from surefoot.equation.toml_places import line_of, too_deep
from surefoot.errors import ProblemError

__all__ = ["MAX_CHARACTERS", "ProblemFile", "problem_file_text", "read_problem_file"]

MAX_CHARACTERS = 1_000_000

Path = tuple[str, ...]


@dataclass(frozen=True, slots=True)
class ProblemFile:
    """What a problem file states.

    Attributes:
        plan: the table `[plan]` with numbers as text, for `methods.plan_table`; None where there is none.
        arithmetic: `arithmetic.kind`, not yet looked up.
        program: None: files with an outside program are refused by this version.
    """

    problem: Problem
    plan: Mapping[str, object] | None = None
    arithmetic: str = "binary64"
    program: None = None


def read_problem_file(text: str, name: str) -> ProblemFile:
    """Read the text of a problem file. The problem is well formed, not yet checked (`checking.check_problem`).

    Args:
        name: of the file, for messages.

    Raises:
        ProblemError: with the key or line at fault.
    """
    reader = _Reader(text, name)
    content = reader.content()
    return ProblemFile(
        problem=_problem(content),
        plan=content.get("plan"),
        arithmetic=content.get("arithmetic", {}).get("kind", "binary64"),
    )


class _Reader:
    """The text of one file; its errors name the file, the key and the line."""

    def __init__(self, text: str, name: str) -> None:
        self._text, self._name = text, name

    def content(self) -> dict[str, Any]:
        """The content by its keys, every value read by its kind."""
        raw = self._parsed()
        self._check_format(raw)
        content: dict[str, Any] = self._read(FILE, raw, ())
        for path, value in _entries(content):
            later = next((later for later in LATER if _fits(later.path, path)), None)
            if later is not None and value != later.accepted:
                self._refuse(later.says, path)
        for key in FILE.required:
            if key not in content:
                self._refuse(f"the key is missing; write {key} = {_EXAMPLES[key]}", (key,))
        for given, value in content.get("inputs", {}).items():
            if "value" not in value:
                self._refuse("has no value", ("inputs", given))
        return content

    def _parsed(self) -> dict[str, Any]:
        if len(self._text) > MAX_CHARACTERS:
            self._refuse(f"has {len(self._text)} characters; a problem file may have {MAX_CHARACTERS}", ())
        if line := too_deep(self._text):
            raise ProblemError("a key with so many parts is in no problem file", place=f"line {line}", file=self._name)
        try:
            return tomllib.loads(self._text.removeprefix("\ufeff"), parse_float=TypedNumber)
        except RecursionError:
            self._refuse("lists or tables are nested too deeply", ())
        except tomllib.TOMLDecodeError as error:
            message, place = _toml_message(str(error))
            raise ProblemError(f"is not TOML: {message}", place=place, file=self._name) from None
        except ValueError:  # a whole number too long for Python to read, a date that there is not
            self._refuse("holds a whole number of thousands of digits, or a date that there is not", ())

    def _check_format(self, raw: Mapping[str, object]) -> None:
        stated = raw.get("format")
        if stated is None:
            self._refuse(f"the key is missing; write format = {FORMAT} in the first line", ("format",))
        if isinstance(stated, int) and not isinstance(stated, bool) and stated > FORMAT:
            self._refuse(f"format {shown(stated)} is newer than this version, which reads format {FORMAT}", ("format",))
        if isinstance(stated, bool) or stated != FORMAT:
            self._refuse(f"format = {FORMAT} is expected, not {shown(stated)}", ("format",))

    def _read(self, node: Node, value: object, path: Path) -> Any:
        if isinstance(node, Either):
            value = value if isinstance(value, dict) else {"value": value}
            node = node.table
        if isinstance(node, Leaf):
            return self._read_leaf(node, value, path)
        if isinstance(node, Tables):
            if not isinstance(value, list):
                self._refuse(f"tables [[{'.'.join(path)}]] are expected, not {shown(value)}", path)
            return [self._read(node.table, each, path) for each in value]
        if not isinstance(value, dict):
            self._refuse(f"a table is expected, not {shown(value)}", path)
        if isinstance(node, Names):
            return {key: self._read(node.item, each, (*path, key)) for key, each in value.items()}
        for key in value:
            if key not in node.keys:
                self._refuse(_unknown_key(key, node, path), (*path, key))
        if path:
            for key in node.required:
                if key not in value:
                    self._refuse(f"the key {key} is missing", path)
        return {key: self._read(node.keys[key], each, (*path, key)) for key, each in value.items()}

    def _read_leaf(self, leaf: Leaf, value: object, path: Path) -> Any:
        try:
            return leaf.read(value)
        except Mismatch as mismatch:
            says = str(mismatch)
            if _fits(("inputs", "*", "value"), path):
                if _has_unit(value):
                    says = UNIT_IN_VALUE
                elif path[1] in FILE.keys:
                    says += f"; the key {path[1]} of the file itself stands above the first [table]"
            self._refuse(says, path)

    def _refuse(self, message: str, path: Path) -> NoReturn:
        line = line_of(self._text, path) if path else None
        place = ".".join(map(_shortened, path))
        raise ProblemError(f"{message} (line {line})" if line else message, place=place, file=self._name)


_SHOWN = 40
_EXAMPLES = {"unknown": '"y"', "equation": '"left = right"'}
_TOML_PLACE = re.compile(r"(.*) \(at (?:line (\d+), column (\d+)|end of document)\)", re.DOTALL)
_TWICE = ("Cannot overwrite a value", "Cannot declare", "Cannot mutate")


def _toml_message(message: str) -> tuple[str, str]:
    """The parser's message in our words, and the line as a place where it tells one."""
    match = _TOML_PLACE.fullmatch(message)
    what = match[1] if match else message
    if what.startswith(_TWICE):
        what = "a key or table is stated twice"
    what = what[:1].lower() + what[1:120]
    if match is None or match[2] is None:
        return f"{what} at the end of the file", ""
    return f"{what} in column {match[3]}", f"line {match[2]}"


def _unknown_key(key: str, table: Table, path: Path) -> str:
    """Says that a key is unknown in its table, and where it belongs or which was meant."""
    unknown = f"unknown key in {_table_words(path)}"
    elsewhere = next(tables_with(key), None)
    if elsewhere is not None:
        return f"{unknown}; it belongs in {_table_words(elsewhere)}"
    near = nearest(key, table.keys) if len(key) <= _SHOWN else ""
    return f"{unknown} (nearest: {near})" if near else f"{unknown}; known are {', '.join(table.keys)}"


def _table_words(path: Path) -> str:
    names = ("NAME" if part == "*" else _shortened(part) for part in path)
    return f"[{'.'.join(names)}]" if path else "the head of the file"


def _shortened(part: str) -> str:
    part = part if part.isprintable() else ascii(part)
    return part if len(part) <= _SHOWN else part[: _SHOWN - 3] + "..."


def _has_unit(value: object) -> bool:
    """Whether a value is a number with a unit behind it: `12000 L/s`."""
    if not isinstance(value, str) or isinstance(value, TypedNumber):
        return False
    number, _, unit = value.strip().partition(" ")
    return bool(unit.strip()) and is_literal(number)


def _entries(content: Mapping[str, Any], path: Path = ()) -> Iterator[tuple[Path, object]]:
    """Every table and key of the content with its path, a table before what is in it."""
    for key, value in content.items():
        yield (*path, key), value
        if isinstance(value, dict):
            yield from _entries(value, (*path, key))


def _fits(pattern: Path, path: Path) -> bool:
    """Whether a path is of a pattern, in which `*` stands for a name of one's own."""
    return len(pattern) == len(path) and all(a in ("*", b) for a, b in zip(pattern, path, strict=True))


def _problem(content: Mapping[str, Any]) -> Problem:
    head = {key: value for key, value in content.items() if isinstance(FILE.keys[key], Leaf) and key != "format"}
    return Problem(
        **_frozen(head),
        job=Job(**_frozen(content.get("job", {}))),
        where=tuple(Definition(name, text) for name, text in content.get("where", {}).items()),
        inputs=tuple(Input(name, **_frozen(given)) for name, given in content.get("inputs", {}).items()),
        correlation=tuple(Correlation(**_frozen(each)) for each in content.get("correlation", [])),
    )


def _frozen(content: Mapping[str, Any]) -> dict[str, Any]:
    return {key: tuple(value) if isinstance(value, list) else value for key, value in content.items()}
