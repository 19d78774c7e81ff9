"""What a person set once for this machine: `surefoot/config.toml` in the user's configuration folder.

by = "M. R., duty"        who sits here
look = "plain"            plain, dark or light
ascii = true              draw with ASCII characters alone
sessions = "/srv/solves"  where sessions are kept
"""

from __future__ import annotations

import os
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

from surefoot.cli.arguments import OPEN, nearest
from surefoot.cli.exits import RequestError
from surefoot.cli.files import read_text

_KEYS: Mapping[str, type] = {"by": str, "look": str, "ascii": bool, "sessions": str}


@dataclass(frozen=True, slots=True)
class Configuration:
    """The settings of the file; None where it is silent."""

    by: str | None = None
    look: str | None = None
    ascii_only: bool | None = None
    sessions: Path | None = None


def configuration_file() -> Path:
    """Where the settings are looked for."""
    base = os.environ.get("XDG_CONFIG_HOME") or ""
    return Path(base if Path(base).is_absolute() else os.path.expanduser("~/.config")) / "surefoot" / "config.toml"


def read_configuration() -> Configuration:
    """The settings of this machine; all silent when there is no file. Raises RequestError naming file and key."""
    path = configuration_file()
    if not path.exists():
        return Configuration()
    return _settings(read_text(str(path)), str(path))


def sessions_folder(given: str | None, settings: Configuration) -> Path:
    """Where sessions are kept: as given, else as the environment says, else as set, else by default."""
    from surefoot.session.library import default_folder

    set_here = None if os.environ.get("SUREFOOT_SESSIONS") else settings.sessions
    return default_folder(given or set_here)


def _settings(text: str, file: str) -> Configuration:
    import tomllib

    try:
        table = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise RequestError(f"is not TOML: {error}", place=file) from error
    for key, value in table.items():
        place = f"{file}: {key}"
        if key not in _KEYS:
            near = nearest(key, list(_KEYS))
            meant = f"did you mean {near}?" if near else f"there are {', '.join(_KEYS)}"
            raise RequestError(f"is no setting; {meant}", place=place)
        if not isinstance(value, _KEYS[key]) or value == "":
            wanted = "true or false" if _KEYS[key] is bool else "a text in quotes"
            raise RequestError(f"must be {wanted}", place=place)
    look = table.get("look")
    looks = next(option.choices for option in OPEN.options if option.name == "--look")
    if look is not None and look not in looks:
        raise RequestError(f"cannot be {look}; choose {' or '.join(looks)}", place=f"{file}: look")
    sessions = None
    if "sessions" in table:
        sessions = Path(os.path.expanduser(table["sessions"]))
        if not sessions.is_absolute():
            raise RequestError("must be a whole path, from / or ~ on", place=f"{file}: sessions")
    return Configuration(table.get("by"), look, table.get("ascii"), sessions)
