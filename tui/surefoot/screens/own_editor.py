"""Hand-over of a text to the person's own editor, and back."""

from __future__ import annotations

import os
import shlex
import shutil
import signal
import subprocess
import tempfile
from collections.abc import Callable, Iterator, Mapping, Sequence
from contextlib import contextmanager
from pathlib import Path

from surefoot.errors import SurefootError

_FALLBACKS = ("vi", "nano")


class EditorError(SurefootError):
    """The editor gave no text to take over.

    Attributes:
        text: what it had saved until it failed, worth going on with; empty when there is nothing.
    """

    def __init__(self, message: str, *, text: str = "") -> None:
        self.text = text
        super().__init__(message)


def editor_command(environ: Mapping[str, str], which: Callable[[str], str | None] = shutil.which) -> list[str]:
    """The words that start the editor: $VISUAL, else $EDITOR, else what is installed.

    Raises:
        EditorError: none is named and none is found, or the one that is named cannot be read as a command.
    """
    for name in ("VISUAL", "EDITOR"):
        named = environ.get(name, "").strip()
        if named:
            try:
                return shlex.split(named)
            except ValueError as error:
                raise EditorError(f"${name} is no command ({named}); set it to the editor's name") from error
    for program in _FALLBACKS:
        if which(program):
            return [program]
    raise EditorError(f"no editor: set $VISUAL or $EDITOR ({' and '.join(_FALLBACKS)} are not installed)")


def edit(text: str, command: Sequence[str]) -> str:
    """Let a person edit text; what was saved. The terminal must have been given up before.

    Raises:
        EditorError: the editor did not start, failed, or left no text behind.
    """
    try:
        with tempfile.TemporaryDirectory(prefix="surefoot-") as folder:
            path = Path(folder) / "problem.toml"
            path.write_text(text, encoding="utf-8")
            status = _run([*command, str(path)])
            return _saved(path, text, command[0], status)
    except OSError as error:
        raise EditorError(f"the text cannot be handed to {command[0]}: {error.strerror}") from error


def _run(words: Sequence[str]) -> int:
    # The screens draw on standard error, so standard output may lead elsewhere; an editor needs the terminal.
    output = None if os.isatty(1) else 2
    with _interrupts_left_to_the_editor():
        return subprocess.run(words, stdout=output, check=False).returncode  # noqa: S603 - the person's own command


@contextmanager
def _interrupts_left_to_the_editor() -> Iterator[None]:
    """An interrupt from the keyboard reaches both programs; only the editor is meant.

    A handler that does nothing is not passed on to the editor, as ignoring the signal would be.
    """
    before = signal.signal(signal.SIGINT, lambda *_: None)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)


def _saved(path: Path, given: str, editor: str, status: int) -> str:
    try:
        saved = path.read_text(encoding="utf-8")
    except FileNotFoundError as error:
        raise EditorError(f"{editor} left no file; nothing was taken over") from error
    except UnicodeDecodeError as error:
        raise EditorError(f"{editor} saved text that is not UTF-8; nothing was taken over") from error
    kept = saved if saved != given else ""
    if status < 0:
        raise EditorError(f"{editor} was ended by signal {-status}; nothing was taken over", text=kept)
    if status > 0:
        raise EditorError(f"{editor} ended with status {status}; nothing was taken over", text=kept)
    return saved
