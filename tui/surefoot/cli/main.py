"""The console script: words in, exit code out. What a command needs is imported when it is asked for."""

from __future__ import annotations

import sys
from collections.abc import Sequence

from surefoot import __version__
from surefoot.cli import streams
from surefoot.cli.arguments import Request, parse
from surefoot.cli.exits import Exit
from surefoot.cli.faults import Guard


def main(argv: Sequence[str] | None = None) -> int:
    """Do what the words ask for; the exit code (`surefoot.cli.exits`). Raises nothing.

    Args:
        argv: the words after the name of the program; those of this process when None.
    """
    words = list(sys.argv[1:] if argv is None else argv)
    streams.prepare()
    with Guard(words) as guard:
        guard.code = _answer(parse(words))
    return int(guard.code)


def _answer(request: Request) -> int:
    if request.asks == "version":
        streams.say(f"surefoot {__version__}\n")
        return Exit.GOOD
    if request.asks == "help":
        from surefoot.cli.help_text import of_command

        streams.say(of_command(request.command))
        return Exit.GOOD
    match request.command.name:
        case "run":
            from surefoot.cli.run import run

            return run(request)
        case "recompute":
            from surefoot.cli.recompute import recompute

            return recompute(request)
        case "table":
            from surefoot.cli.table import table

            return table(request)
        case _:
            from surefoot.cli.open_screen import open_screen

            return open_screen(request)
