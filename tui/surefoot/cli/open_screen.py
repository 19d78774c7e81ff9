"""`surefoot` and `surefoot FILE`: what must hold before the screens open, and the hand-over to them."""

from __future__ import annotations

import os
from pathlib import Path

from surefoot.cli.arguments import Request
from surefoot.cli.configuration import read_configuration
from surefoot.cli.exits import RequestError
from surefoot.cli.folders import sessions_folder


def open_screen(request: Request) -> int:
    """Open the program; its exit code. Raises RequestError where it cannot be opened."""
    settings = read_configuration()
    target = _target(request.operands)
    _require_terminal()
    folder = sessions_folder(request, settings)

    from surefoot.screens.app import run_app

    return run_app(
        target,
        folder=folder,
        by=request.value("--by") or settings.by,
        ascii_only=True if request.flag("--ascii") else settings.ascii_only,
        look=request.value("--look") or settings.look,
    )


def _target(operands: tuple[str, ...]) -> Path | None:
    if not operands:
        return None
    path = Path(operands[0])
    if not path.exists():
        raise RequestError("there is no such file; check the path", place=operands[0])
    if path.is_dir():
        raise RequestError("is a folder; write surefoot --sessions with it", place=operands[0])
    return path


def _require_terminal() -> None:
    """The screens read keys from standard input and draw on standard error; neither works on anything else."""
    for number, name in ((0, "standard input"), (2, "standard error")):
        if not os.isatty(number):
            raise RequestError("is no terminal; the screens need one, surefoot run does not", place=name)
    if os.environ.get("TERM") == "dumb":
        raise RequestError("is a terminal without cursor movement; set TERM to what it really is", place="TERM=dumb")
