"""The page for source lines: paste, see how they were read, take them over."""

from __future__ import annotations

from textwrap import wrap
from typing import ClassVar

from rich.text import Text
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.screen import ModalScreen

from surefoot.equation.pasting import LANGUAGES, Pasted, read_source
from surefoot.errors import EquationError
from surefoot.screens.form_lines import shown_text
from surefoot.screens.scrolling import moving_keys
from surefoot.screens.source import pasted_lines
from surefoot.screens.widgets.field import MAX_PASTE, ManyLines
from surefoot.screens.widgets.lines import Lines

_TYPING_KEYS = "ctrl+s read the lines   esc leave them"
_READ_KEYS = "enter take over   l another language   esc back to the lines   up, down move"


class SourcePage(ModalScreen[Pasted | None]):
    """Gives back what was read, once its readings were seen; None when it was left.

    Args:
        text: source lines that are there already; they are read at once.
    """

    DEFAULT_CSS = """
    SourcePage { background: $background; }
    SourcePage #source-head, SourcePage #source-foot { height: 1; }
    SourcePage #source { height: 1fr; margin: 0 1; scrollbar-size: 0 0; }
    SourcePage #source-read { height: 1fr; display: none; }
    SourcePage.read #source { display: none; }
    SourcePage.read #source-read { display: block; }
    """
    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("ctrl+s", "read", show=False),
        Binding("escape", "back", show=False),
        Binding("enter", "take", show=False),
        Binding("l", "language", show=False),
        *moving_keys(15),
    ]

    def __init__(self, text: str) -> None:
        super().__init__()
        self._given = text
        self._pasted: Pasted | None = None
        self._lines: list[str] = []
        self._top = 0

    def compose(self) -> ComposeResult:
        yield Lines(id="source-head")
        yield ManyLines(id="source", placeholder="paste here")
        yield Lines(id="source-read")
        yield Lines(id="source-foot")

    @property
    def field(self) -> ManyLines:
        return self.query_one("#source", ManyLines)

    def on_mount(self) -> None:
        self.field.load_text(shown_text(self._given))
        self.field.focus()
        self._say("Fortran, C or Python lines: assignments in the order of the code.")
        self._keys(_TYPING_KEYS)
        if self._given:
            self.action_read()

    def _say(self, text: str) -> None:
        self.query_one("#source-head", Lines).show([Text(" " + text, "bold")])

    def _keys(self, text: str) -> None:
        self.query_one("#source-foot", Lines).show([" " + text])

    # -- keys ---------------------------------------------------------------------------------------------------------

    def on_many_lines_pasted(self, event: ManyLines.Pasted) -> None:
        event.stop()
        if len(event.text) > MAX_PASTE:
            self._say(f"{len(event.text)} characters are more than can be read at once ({MAX_PASTE})")
        else:
            event.field.put(event.text)

    def action_read(self) -> None:
        self._read(None)

    def action_language(self) -> None:
        """Read the lines as the next language."""
        if self._pasted is not None:
            at = LANGUAGES.index(self._pasted.language)
            self._read(LANGUAGES[(at + 1) % len(LANGUAGES)])

    def _read(self, language: str | None) -> None:
        try:
            self._pasted = read_source(self.field.text, language)
        except EquationError as error:
            self._say(str(error))
            self.field.go_to(error.line, error.column)
            self._show_read(False)
            return
        self._lines = pasted_lines(self._pasted)
        self._top = 0
        self._show_read(True)

    def _show_read(self, read: bool) -> None:
        self.set_class(read, "read")
        self._keys(_READ_KEYS if read else _TYPING_KEYS)
        if read:
            self.set_focus(None)
            self._draw()
        else:
            self.field.focus()

    def _draw(self) -> None:
        view = self.query_one("#source-read", Lines)
        width, height = max(self.size.width - 2, 1), max(self.size.height - 2, 1)
        lines = [line for each in self._lines for line in (wrap(each, width, subsequent_indent="    ") or [""])]
        self._top = max(0, min(self._top, len(lines) - height))
        view.show([" " + line for line in lines[self._top : self._top + height]])

    def on_resize(self) -> None:
        self._draw()

    def action_move(self, by: int) -> None:
        self._top += by
        self._draw()

    def action_take(self) -> None:
        if self.has_class("read"):
            self.dismiss(self._pasted)

    def action_back(self) -> None:
        if self.has_class("read"):
            self._show_read(False)
        else:
            self.dismiss(None)
