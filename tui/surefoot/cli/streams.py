"""Standard output and standard error: results on the one, notices on the other, one line each.

Whatever the locale, nothing here fails for a character: what an encoding lacks is written as an escape.
"""

from __future__ import annotations

import io
import os
import sys
from typing import TextIO

from surefoot.cli.exits import RequestError


def prepare() -> None:
    """Make the three streams safe to use, whatever this process was given.

    A stream that was closed leaves its number free, and the next file opened would take it: a session file that is
    number 2 would receive whatever a library writes to standard error. So free numbers are taken here.
    """
    for number in range(3):
        try:
            os.fstat(number)
        except OSError:
            os.open(os.devnull, os.O_RDWR)
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")


def say(text: str) -> None:
    """Write a result, as it is, to standard output. Raises RequestError when it cannot be written."""
    _write(sys.stdout, text)


def complain(message: str) -> None:
    """Write one line to standard error; it is lost when there is no standard error to write to."""
    try:
        _write(sys.stderr, f"surefoot: {one_line(message)}\n")
    except (RequestError, BrokenPipeError):
        silence(sys.stderr)


def one_line(text: str) -> str:
    """The text with line ends and control characters written as escapes: names of files may hold any of them."""
    return "".join(
        character if character.isprintable() else character.encode("unicode_escape").decode("ascii")
        for character in text
    )


def silence(stream: TextIO | None) -> None:
    """Send the stream to nowhere, so that the flush at the end of the process cannot fail again."""
    if isinstance(stream, io.TextIOWrapper):
        nowhere = os.open(os.devnull, os.O_WRONLY)
        os.dup2(nowhere, stream.fileno())
        os.close(nowhere)


def _write(stream: TextIO | None, text: str) -> None:
    if stream is None:
        return
    try:
        stream.write(text)
        stream.flush()
    except BrokenPipeError:
        raise
    except OSError as error:
        silence(stream)
        name = "standard output" if stream is sys.stdout else "standard error"
        raise RequestError(f"cannot be written ({error.strerror}); give it another place", place=name) from error
