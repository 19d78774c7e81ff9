"""The settings of a machine: read whole or refused with the place."""

from __future__ import annotations

from pathlib import Path

import pytest

from support.command import Home
from surefoot.cli.configuration import Configuration, configuration_file, read_configuration
from surefoot.cli.exits import RequestError


def write(text: str | bytes) -> Path:
    path = configuration_file()
    path.parent.mkdir(parents=True)
    path.write_bytes(text if isinstance(text, bytes) else text.encode())
    return path


def test_without_a_file_everything_is_silent(home: Home) -> None:
    assert read_configuration() == Configuration()


def test_every_setting_is_read(home: Home) -> None:
    write('by = "M. R., duty"\nlook = "dark"\nascii = true\nsessions = "~/solves"\n')
    assert read_configuration() == Configuration("M. R., duty", "dark", True, home.folder / "solves")


def test_false_is_not_silence(home: Home) -> None:
    write("ascii = false\n")
    assert read_configuration().ascii_only is False


def test_a_folder_of_configuration_that_is_no_whole_path_is_not_used(home: Home, monkeypatch) -> None:
    monkeypatch.setenv("XDG_CONFIG_HOME", "config")
    assert configuration_file() == home.folder / ".config" / "surefoot" / "config.toml"


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ('lok = "dark"', ": lok: is no setting; did you mean look?"),
        ("zzz = 1", ": zzz: is no setting; there are by, look, ascii, sessions"),
        ('look = "blue"', ": look: cannot be blue; choose plain or dark or light"),
        ("by = 3", ": by: must be a text in quotes"),
        ('by = ""', ": by: must be a text in quotes"),
        ('ascii = "yes"', ": ascii: must be true or false"),
        ('sessions = "solves"', ": sessions: must be a whole path, from / or ~ on"),
        ("by = ", ": is not TOML: Invalid value (at end of document)"),
        (b'\n\nby = "\xff"', ": line 3: is not UTF-8 text here; save the file as UTF-8"),
    ],
)
def test_a_mistake_names_file_and_key(home: Home, text: str | bytes, says: str) -> None:
    path = write(text)
    with pytest.raises(RequestError) as refused:
        read_configuration()
    assert str(refused.value) == f"{path}{says}"
