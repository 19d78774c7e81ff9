"""The help of the command line, written from the table of commands."""

from __future__ import annotations

from collections.abc import Sequence

from surefoot.cli.arguments import COMMANDS, OPEN, Command, Option

_VERSION = Option("--version", "", "tell the version")
_ENDS = """\
surefoot COMMAND --help tells the options of a command.

Exit codes: 0 the good answer; 1 a true answer that is not the good one;
2 the request was bad, with one line on standard error that says what to do;
3 a fault of surefoot, with a saved report; 128 + n ended by signal n.
"""


def general() -> str:
    """What `surefoot --help` prints."""
    lines = ["surefoot walks the solve of one implicit equation step by step, and records it.", ""]
    for command in COMMANDS.values():
        lines += [_call(command), f"    {command.summary}"]
    return "\n".join([*lines, "", *_option_lines((*OPEN.options, _VERSION)), "", _ENDS])


def of_command(command: Command) -> str:
    """What `surefoot COMMAND --help` prints."""
    if command is OPEN:
        return general()
    lines = [
        _call(command),
        f"    {command.summary}",
        f"    exit 0: {command.good}",
        "",
        *_option_lines(command.options),
        "",
    ]
    return "\n".join(lines)


def _call(command: Command) -> str:
    return " ".join(word for word in ("surefoot", command.name, command.operands) if word)


def _option_lines(options: Sequence[Option]) -> list[str]:
    rows = [(f"{option.name} {option.value}".strip(), option.meaning) for option in options]
    width = max(len(call) for call, _ in rows)
    return [f"  {call:<{width}}  {meaning}" for call, meaning in rows]
