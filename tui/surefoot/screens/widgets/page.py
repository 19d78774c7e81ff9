"""A page of lines over a room, scrolled with the arrows; esc goes back."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import ClassVar

from rich.text import Text
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.screen import ModalScreen

from surefoot.screens.widgets.lines import Lines

KEYS = "esc goes back   up, down, page up, page down move"


class Page(ModalScreen[None]):
    """Shows what `lines` gives for a width; asked again when the size changes."""

    DEFAULT_CSS = "Page { background: $background; padding: 0 1; }"
    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("escape,enter,q", "leave", show=False),
        Binding("up", "move(-1)", show=False),
        Binding("down", "move(1)", show=False),
        Binding("pageup", "move(-15)", show=False),
        Binding("pagedown,space", "move(15)", show=False),
    ]

    def __init__(self, lines: Callable[[int], Sequence[Text | str]]) -> None:
        super().__init__()
        self._lines, self._top = lines, 0

    def compose(self) -> ComposeResult:
        yield Lines(id="page")

    def on_mount(self) -> None:
        self._draw()

    def on_resize(self) -> None:
        self._draw()

    def _draw(self) -> None:
        lines = self._lines(max(self.size.width - 2, 1))
        height = max(self.size.height - 1, 1)
        self._top = max(0, min(self._top, len(lines) - height))
        shown = list(lines[self._top : self._top + height])
        more = f"   {self._top + len(shown)} of {len(lines)} lines" if len(lines) > height else ""
        self.query_one("#page", Lines).show([*shown, *[""] * (height - len(shown)), KEYS + more])

    def action_move(self, by: int) -> None:
        self._top += by
        self._draw()

    def action_leave(self) -> None:
        self.dismiss(None)
