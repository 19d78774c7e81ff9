"""The terminal at its plainest: an output driver that never sends anything but ASCII, and what to ask of a terminal.

The toolkit writes box drawing and braille whatever the locale says. Where the locale is not UTF-8 every such glyph is
sent as one ASCII cell, so that columns stay where they are.
"""

from __future__ import annotations

import os
from collections.abc import Mapping

from rich.cells import get_character_cell_size
from textual.drivers.linux_driver import LinuxDriver

_SAME_MEANING = {"█": "#", "░": ".", "▒": ":", "▓": "%", "▀": '"', "▄": "_", "•": "*", "…": ".", "→": ">", "←": "<"} | {
    "↑": "^",
    "↓": "v",
    "▼": "v",
    "▶": ">",
    "✓": "x",
    "×": "x",
    "−": "-",
    "·": ".",
    "≈": "~",
    "≤": "<",
    "≥": ">",
    "²": "2",
    "³": "3",
    "√": "v",
}


class _Translation(dict[int, str]):
    """Fills itself: code point -> ASCII text of the same width."""

    def __missing__(self, point: int) -> str:
        self[point] = replaced = _ascii(point)
        return replaced


def _ascii(point: int) -> str:
    character = chr(point)
    if point < 128:
        return character
    if 0x2500 <= point <= 0x257F:
        return "|" if character in "│┃║┆┇┊┋╎╏╽╿" else "-" if character in "─━═┄┅┈┉╌╍╼╾" else "+"
    if 0x2800 <= point <= 0x28FF:
        return "*" if point > 0x2800 else " "
    if 0x2580 <= point <= 0x259F and character not in _SAME_MEANING:
        return "#"
    return _SAME_MEANING.get(character) or "?" * max(1, get_character_cell_size(character))


class AsciiDriver(LinuxDriver):
    """Writes ASCII only; widths are preserved."""

    _translation = _Translation()

    def write(self, data: str) -> None:
        super().write(data if data.isascii() else data.translate(self._translation))


def wants_ascii(environment: Mapping[str, str]) -> bool:
    """Whether the locale of the environment promises no UTF-8. An unset locale promises nothing."""
    locale = environment.get("LC_ALL") or environment.get("LC_CTYPE") or environment.get("LANG") or ""
    return "utf-8" not in locale.lower() and "utf8" not in locale.lower()


def environment_at_start() -> Mapping[str, str]:
    """The environment this process was started with.

    Python itself sets LC_CTYPE when it runs under a C locale, so `os.environ` cannot be asked where /proc can.
    """
    try:
        with open("/proc/self/environ", "rb") as file:
            pairs = file.read().decode("utf-8", "replace").split("\0")
    except OSError:
        return os.environ
    return dict(pair.split("=", 1) for pair in pairs if "=" in pair)
