"""The sessions that lie in folders: which there are, where new ones go, and under which names."""

from __future__ import annotations

import os
import re
import sys
import unicodedata
from collections.abc import Iterable, Mapping
from pathlib import Path

from surefoot.session.summary import Summary, summarise

__all__ = ["Summary", "default_folder", "find_sessions", "new_name", "summarise"]

_MAX_SLUG = 48


def find_sessions(folders: Iterable[Path]) -> tuple[Summary, ...]:
    """All session files in these folders (not below them), the one that changed last first.

    A file that cannot be read is listed with its fault. A folder that is not there has no sessions.
    """
    summaries = (summarise(path) for folder in folders for path in _files(folder))
    return tuple(sorted(summaries, key=lambda summary: (summary.changed_at, summary.path.name), reverse=True))


def default_folder(
    given: str | Path | None = None, environ: Mapping[str, str] | None = None, here: Path | None = None
) -> Path:
    """Where sessions are looked for and new ones are made; the folder need not exist yet.

    Args:
        given: folder named on the command line or in the configuration.
        environ: the environment, that of this process when it is None.
        here: the working folder, that of this process when it is None.
    """
    environ = os.environ if environ is None else environ
    if given is not None:
        return Path(given).expanduser()
    if environ.get("SUREFOOT_SESSIONS"):
        return Path(environ["SUREFOOT_SESSIONS"]).expanduser()
    beside = (here or Path.cwd()) / "sessions"
    return beside if beside.is_dir() else _data_folder(environ) / "surefoot" / "sessions"


def new_name(date: str, title: str, folder: Path) -> str:
    """A file name that no file of the folder has: `2026-12-01-tailrace-depth.json`, `...-2.json` for the second.

    Args:
        date: a date or a time in ISO 8601.
    """
    stem = f"{date[:10]}-{_slug(title)}"
    name, count = f"{stem}.json", 1
    while os.path.lexists(folder / name):
        count += 1
        name = f"{stem}-{count}.json"
    return name


def _slug(title: str) -> str:
    """The first words of a title in the letters and digits that every file system takes."""
    plain = unicodedata.normalize("NFKD", title).encode("ascii", "ignore").decode().lower()
    slug = ""
    for word in re.findall(r"[a-z0-9]+", plain):
        longer = f"{slug}-{word}" if slug else word[:_MAX_SLUG]
        if len(longer) > _MAX_SLUG:
            break
        slug = longer
    return slug or "session"


def _data_folder(environ: Mapping[str, str]) -> Path:
    """The user's data folder: of the XDG base directory specification, or what the system has in its place."""
    named = environ.get("XDG_DATA_HOME", "")
    if os.path.isabs(named):
        return Path(named)
    home = Path(environ.get("HOME") or Path.home())
    return home / "Library" / "Application Support" if sys.platform == "darwin" else home / ".local" / "share"


def _files(folder: Path) -> list[Path]:
    try:
        return sorted(path for path in folder.iterdir() if path.suffix == ".json")
    except OSError:
        return []
