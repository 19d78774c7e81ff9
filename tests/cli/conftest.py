"""A home without settings for every test of the command line."""

from __future__ import annotations

from pathlib import Path

import pytest

from support.command import Home


@pytest.fixture
def home(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Home:
    """A fresh machine; the process of the tests sits in its folder with its environment."""
    home = Home(tmp_path)
    monkeypatch.chdir(tmp_path)
    for name in ("SUREFOOT_SESSIONS", "COLUMNS", "LINES"):
        monkeypatch.delenv(name, raising=False)
    for name, value in home.environment.items():
        if name.startswith("XDG_") or name == "HOME":
            monkeypatch.setenv(name, value)
    return home
