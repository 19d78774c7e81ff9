"""`surefoot` and `surefoot FILE`: from the words and the settings to the screens."""

from __future__ import annotations

from pathlib import Path

from surefoot.cli.arguments import Request
from surefoot.cli.configuration import read_configuration, sessions_folder
from surefoot.cli.exits import RequestError


def open_screen(request: Request) -> int:
    """Open the program; its exit code. Raises RequestError where it cannot be opened."""
    settings = read_configuration()
    target = _target(request.operands)
    folder = sessions_folder(request.value("--sessions"), settings)

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
