"""A terminal for tests: a pseudo-terminal with a program on it, and the screen that a person would see.

Nothing here sleeps: every wait reads what the program writes until a condition holds or its limit is over.
"""

from __future__ import annotations

import fcntl
import os
import pty
import re
import select
import signal
import struct
import subprocess
import sys
import termios
import time
from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from types import TracebackType

import pyte

KEYS: Mapping[str, str] = {
    "space": " ",
    "enter": "\r",
    "tab": "\t",
    "shift+tab": "\x1b[Z",
    "backspace": "\x7f",
    "escape": "\x1b",
    "up": "\x1b[A",
    "down": "\x1b[B",
    "right": "\x1b[C",
    "left": "\x1b[D",
    "home": "\x1b[H",
    "end": "\x1b[F",
    "delete": "\x1b[3~",
    "ctrl+c": "\x03",
    "ctrl+q": "\x11",
    "ctrl+s": "\x13",
    "ctrl+z": "\x1a",
}
"""What a terminal sends for the keys that have no character of their own."""

# The emulator prints the last letter of keyboard protocol and mode queries, which it does not know.
_UNKNOWN_TO_EMULATOR = re.compile(rb"\x1b\[[<>=][0-9;]*[a-zA-Z]|\x1b\[\?[0-9;]*\$p")
_UNFINISHED = re.compile(rb"\x1b(?:\[[0-9;<>=?$ ]*)?\Z")

# The program gets the pseudo-terminal as its controlling terminal, so that closing it hangs it up.
_TAKE_TERMINAL = (
    "import fcntl, os, sys, termios; fcntl.ioctl(0, termios.TIOCSCTTY, 0); os.execvp(sys.argv[1], sys.argv[1:])"
)


class Terminal:
    """A program on a pseudo-terminal of `columns` x `rows` cells.

    Attributes:
        received: every byte that the program wrote.
    """

    def __init__(
        self,
        words: Sequence[str],
        *,
        environment: Mapping[str, str],
        folder: Path,
        columns: int = 80,
        rows: int = 24,
    ) -> None:
        self.received = bytearray()
        self._screen = pyte.Screen(columns, rows)
        self._stream = pyte.ByteStream(self._screen)
        self._held = b""
        self._master, slave = pty.openpty()
        self._open = True
        self.resize(columns, rows)
        self.process = subprocess.Popen(
            [sys.executable, "-c", _TAKE_TERMINAL, *words],
            stdin=slave,
            stdout=slave,
            stderr=slave,
            cwd=folder,
            env=dict(environment),
            start_new_session=True,
            close_fds=True,
        )
        os.close(slave)

    def __enter__(self) -> Terminal:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.hang_up()
        if self.process.poll() is None:
            self.process.kill()
        self.process.wait()

    @property
    def lines(self) -> list[str]:
        """The rows of the screen, without the blanks at their ends."""
        return [line.rstrip() for line in self._screen.display]

    @property
    def text(self) -> str:
        """The screen as text."""
        return "\n".join(self.lines)

    @property
    def after_the_screens(self) -> str:
        """What was written after the alternate screen was left: what stays in the scrollback."""
        return bytes(self.received).rpartition(b"\x1b[?1049l")[2].decode("utf-8", "replace")

    def send(self, text: str) -> None:
        """Type text as it is."""
        data = text.encode("utf-8")
        while data:
            data = data[os.write(self._master, data) :]

    def press(self, *names: str) -> None:
        """Press keys by name (`KEYS`); a single character stands for itself."""
        for name in names:
            self.send(KEYS.get(name, name))

    def paste(self, text: str) -> None:
        """Paste text as a terminal with bracketed paste does."""
        self.send(f"\x1b[200~{text}\x1b[201~")

    def resize(self, columns: int, rows: int) -> None:
        self._screen.resize(rows, columns)
        fcntl.ioctl(self._master, termios.TIOCSWINSZ, struct.pack("HHHH", rows, columns, 0, 0))

    def wait_until(self, holds: Callable[[Terminal], bool], *, limit: float = 20.0, what: str = "") -> None:
        """Read until the condition holds. Fails with the screen when the limit (s) is over or the program ended."""
        deadline = time.monotonic() + limit
        while not holds(self):
            if not self._read(deadline - time.monotonic()):
                state = "still runs" if self.process.poll() is None else f"ended with {self.process.returncode}"
                raise AssertionError(f"waited for {what or 'a condition'}; the program {state}; screen:\n{self.text}")

    def wait_for(self, *texts: str, limit: float = 20.0) -> None:
        """Read until all the texts are on the screen."""
        self.wait_until(lambda seen: all(text in seen.text for text in texts), limit=limit, what=" and ".join(texts))

    def wait_end(self, *, limit: float = 20.0) -> int:
        """Read until the program ends; its exit code."""
        deadline = time.monotonic() + limit
        while self._read(deadline - time.monotonic()):
            pass
        return self.process.wait(max(0.0, deadline - time.monotonic()))

    def kill(self) -> None:
        """End the program at once, as nothing can be caught."""
        self.process.send_signal(signal.SIGKILL)
        self.process.wait()

    def hang_up(self) -> None:
        """Close the terminal: the line is gone, the program gets SIGHUP."""
        if self._open:
            self._open = False
            os.close(self._master)

    def _read(self, limit: float) -> bool:
        """Take in what the program wrote next; False when nothing came within the limit or nothing can come."""
        if not self._open or limit <= 0 or not select.select([self._master], [], [], limit)[0]:
            return False
        try:
            data = os.read(self._master, 65536)
        except OSError:  # Linux: every holder of the other side has closed it
            return False
        if not data:
            return False
        self.received += data
        data = _UNKNOWN_TO_EMULATOR.sub(b"", self._held + data)
        unfinished = _UNFINISHED.search(data)
        cut = unfinished.start() if unfinished else len(data)
        self._held = data[cut:]
        self._stream.feed(data[:cut])
        return True
