"""The words of the command line: one table of commands and options, read by the parser, the help and the tests."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Literal, TypeAlias

from surefoot.cli.exits import RequestError


@dataclass(frozen=True, slots=True)
class Option:
    """An option of a command. `value` is the word that stands for its value in the help, empty for a flag."""

    name: str
    value: str
    meaning: str
    choices: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Command:
    """A command with what it takes: at least `least` and at most `most` (None: any number of) operands."""

    name: str
    operands: str
    least: int
    most: int | None
    summary: str
    good: str
    options: tuple[Option, ...]

    def option(self, name: str) -> Option | None:
        return next((option for option in self.options if option.name == name), None)


_SESSIONS = Option("--sessions", "DIR", "folder in which sessions are kept")
_BY = Option("--by", "NAME", "who sits here; the record names this person")
_JSON = Option("--json", "", "one JSON object, and nothing else, on standard output")

OPEN = Command(
    name="",
    operands="[FILE]",
    least=0,
    most=1,
    summary="open the program, on a session (.json) or a problem (.toml) if named",
    good="left in good order",
    options=(
        _SESSIONS,
        _BY,
        Option("--ascii", "", "draw with ASCII characters alone"),
        Option("--look", "LOOK", "plain, dark or light", ("plain", "dark", "light")),
    ),
)

RUN = Command(
    name="run",
    operands="PROBLEM.toml",
    least=1,
    most=1,
    summary="run the plan of a problem to its stop, save the session, print the steps",
    good="converged, in the working range and not inadmissible",
    options=(
        Option("--save", "FILE", "save the session as FILE, which must not exist yet"),
        Option("--no-save", "", "keep no session"),
        _JSON,
        _BY,
        _SESSIONS,
    ),
)

RECOMPUTE = Command(
    name="recompute",
    operands="SESSION.json...",
    least=1,
    most=None,
    summary="do every step again, compare the bits, check the chain of hashes",
    good="all reproduced, every chain whole",
    options=(
        Option("--deep", "", "findings and assessments too (this version records none)"),
        _JSON,
    ),
)

TABLE = Command(
    name="table",
    operands="SESSION.json",
    least=1,
    most=1,
    summary="print the iterates of a run as CSV",
    good="printed",
    options=(Option("--run", "N", "the run with this number; without it the run in hand"), _JSON),
)

COMMANDS: Mapping[str, Command] = {command.name: command for command in (OPEN, RUN, RECOMPUTE, TABLE)}
"""Every command of this version by its name; the empty name opens the screens."""

ABSENT_COMMANDS = ("allow", "adapter", "assess", "compare", "diagnose", "report", "sign", "traverse")
ABSENT_OPTIONS = {"run": ("--cases",), "recompute": ("--require", "--allowed-signers")}
"""Words that have a meaning, but not in this version."""

_FILE_ENDINGS = (".json", ".toml")

Asks: TypeAlias = Literal["", "help", "version"]


@dataclass(frozen=True, slots=True)
class Request:
    """What was asked: a command with its operands and options, or a word about it (`asks`)."""

    command: Command
    operands: tuple[str, ...] = ()
    options: Mapping[str, str] = field(default_factory=dict)
    asks: Asks = ""

    def flag(self, name: str) -> bool:
        return name in self.options

    def value(self, name: str) -> str | None:
        return self.options.get(name)


def parse(words: Sequence[str]) -> Request:
    """What the words ask for. Raises RequestError that names the word and what to write instead."""
    command, rest = _command(words)
    operands: list[str] = []
    options: dict[str, str] = {}
    queue = list(rest)
    while queue:
        word = queue.pop(0)
        if word == "--":
            operands += queue
            break
        if word in ("-h", "--help"):
            return Request(command, asks="help")
        if word == "--version":
            return Request(command, asks="version")
        if not word.startswith("-") or word == "-":
            operands.append(word)
            continue
        option, value = _option(command, word, queue)
        if option.name in options:
            raise RequestError("is given twice; give it once", place=option.name)
        options[option.name] = value
    _check_count(command, operands)
    return Request(command, tuple(operands), options)


def _command(words: Sequence[str]) -> tuple[Command, list[str]]:
    """The command, which is the first word, and the words after it."""
    first = words[0] if words else ""
    if not first or first.startswith("-"):
        return OPEN, list(words)
    if first in COMMANDS:
        return COMMANDS[first], list(words[1:])
    known = ", ".join(name for name in COMMANDS if name)
    if first in ABSENT_COMMANDS:
        raise RequestError(f"this version does not have this command; it has {known}", place=first)
    if not _names_a_file(first):
        near = nearest(first, [*COMMANDS, *ABSENT_COMMANDS])
        meant = f"did you mean {near}?" if near else f"the commands are {known}"
        raise RequestError(f"is neither a command nor a file; {meant}", place=shown(first))
    return OPEN, list(words)


def _names_a_file(word: str) -> bool:
    """Whether the first word is meant as a file: it looks like a path, or there is something of that name."""
    if "/" in word or word.lower().endswith(_FILE_ENDINGS):
        return True
    try:
        return Path(word).exists()
    except (OSError, ValueError):
        return False


def _option(command: Command, word: str, queue: list[str]) -> tuple[Option, str]:
    """The option that the word names, with its value, which may be taken from the queue."""
    name, equals, value = word.partition("=")
    option = command.option(name)
    if option is None:
        raise RequestError(_unknown(command, name), place=shown(name))
    if not option.value:
        if equals:
            raise RequestError("takes no value; leave out what follows it", place=name)
        return option, ""
    if not equals:
        if not queue or queue[0].startswith("--"):
            raise RequestError(f"needs a value; write {name} {option.value}", place=name)
        value = queue.pop(0)
    if not value:
        raise RequestError(f"has an empty value; write {name} {option.value}", place=name)
    if option.choices and value not in option.choices:
        raise RequestError(f"cannot be {shown(value)}; choose {' or '.join(option.choices)}", place=name)
    return option, value


def _unknown(command: Command, name: str) -> str:
    if name in ABSENT_OPTIONS.get(command.name, ()):
        return "this version does not have this option; leave it out"
    near = nearest(name, [option.name for option in command.options])
    known = ", ".join(option.name for option in command.options)
    return f"is no option here; {f'did you mean {near}?' if near else f'there are {known}'}"


def _check_count(command: Command, operands: Sequence[str]) -> None:
    called = f"surefoot {command.name}".strip()
    if command is OPEN and operands and operands[0] in (*COMMANDS, *ABSENT_COMMANDS):
        raise RequestError(f"the command comes first; write surefoot {operands[0]} ...", place=operands[0])
    if len(operands) < command.least:
        raise RequestError(f"needs a file; write {called} {command.operands}", place=called)
    if command.most is not None and len(operands) > command.most:
        extra = operands[command.most]
        raise RequestError(f"is one word too many; write {called} {command.operands}", place=shown(extra))
    if "" in operands:
        raise RequestError(f"an empty word names no file; write {called} {command.operands}", place=called)


def nearest(word: str, known: Sequence[str]) -> str:
    """The known word that was most likely meant; empty when none is near."""
    from difflib import get_close_matches

    return next(iter(get_close_matches(word[:40], [name for name in known if name], n=1, cutoff=0.5)), "")


def shown(word: str) -> str:
    """A word as an error shows it: a very long one is cut."""
    return word if len(word) <= 200 else word[:200] + "..."
