"""The console script as a person runs it: a process of its own, in folders of its own."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path

SUREFOOT = (sys.executable, "-m", "surefoot.cli")
"""The words that start the program with the interpreter of the tests."""


@dataclass(frozen=True, slots=True)
class Home:
    """A person's machine: a home without settings, and a folder to work in."""

    folder: Path
    extra: Mapping[str, str] = field(default_factory=dict)

    @property
    def environment(self) -> dict[str, str]:
        """The environment of a fresh login; nothing of the developer's own is in it but where programs are."""
        return {
            "PATH": os.environ["PATH"],
            "HOME": str(self.folder),
            "LANG": "C.UTF-8",
            "TERM": "xterm-256color",
            "PYTHONWARNINGS": "error",
            "XDG_CONFIG_HOME": str(self.folder / "config"),
            "XDG_DATA_HOME": str(self.folder / "data"),
            "XDG_STATE_HOME": str(self.folder / "state"),
            **self.extra,
        }

    def run(
        self, *words: str, environment: Mapping[str, str] | None = None, limit: float = 60.0
    ) -> subprocess.CompletedProcess[bytes]:
        """Run surefoot to its end in the folder; standard input is empty."""
        return self.python("-m", "surefoot.cli", *words, environment=environment, limit=limit)

    def python(
        self, *words: str, environment: Mapping[str, str] | None = None, limit: float = 60.0
    ) -> subprocess.CompletedProcess[bytes]:
        """Run the interpreter of the tests with these words."""
        return subprocess.run(
            [sys.executable, *words],
            cwd=self.folder,
            env={**self.environment, **(environment or {})},
            stdin=subprocess.DEVNULL,
            capture_output=True,
            timeout=limit,
            check=False,
        )


def complaint(standard_error: bytes | str) -> str:
    """The one line on standard error, without the program's name. Fails when there is not exactly one line."""
    text = standard_error if isinstance(standard_error, str) else standard_error.decode()
    assert text.startswith("surefoot: "), text
    assert text.endswith("\n"), text
    assert text.count("\n") == 1, text
    return text[len("surefoot: ") : -1]
