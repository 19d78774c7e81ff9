"""Reading the files that a person names, with one clear line for everything that a path can turn out to be."""

from __future__ import annotations

from pathlib import Path

from surefoot.cli.exits import RequestError

MAX_BYTES = 16 * 1024 * 1024
"""The largest problem file that is read."""


def read_text(path: str) -> str:
    """The text of a problem file. Raises RequestError when it is no readable UTF-8 file of a sensible size."""
    try:
        with Path(path).open("rb") as file:
            data = file.read(MAX_BYTES + 1)
    except FileNotFoundError as error:
        raise RequestError("there is no such file; check the path", place=path) from error
    except IsADirectoryError as error:
        raise RequestError("this is a folder; name a file in it", place=path) from error
    except OSError as error:
        raise RequestError(f"cannot be read ({error.strerror}); check its permissions", place=path) from error
    except ValueError as error:
        raise RequestError("this is no path; check the word", place=path) from error
    if len(data) > MAX_BYTES:
        raise RequestError(f"is larger than {MAX_BYTES // 1024**2} MB, which no problem file is", place=path)
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise RequestError("is not UTF-8 text here; save the file as UTF-8", place=f"{path}: line {line}") from error
