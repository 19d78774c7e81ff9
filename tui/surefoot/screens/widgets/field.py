"""Fields to type in: one line or many. No frame, no blinking cursor; a paste comes as one piece and can be refused."""

from __future__ import annotations

from typing import ClassVar

from textual import events
from textual.binding import Binding, BindingType
from textual.message import Message
from textual.widgets import Input, TextArea

from surefoot.screens.form_lines import shown_text

MAX_PASTE = 50_000
"""Characters that a field takes in one paste; more is no equation, and would make every further key slow."""


class OneLine(Input):
    """A field of one line; the first line of what is pasted goes into it."""

    DEFAULT_CSS = "OneLine > .input--placeholder { text-style: dim; }"

    def __init__(self, *, id: str, placeholder: str = "") -> None:  # noqa: A002 - the toolkit's name
        super().__init__(id=id, compact=True, placeholder=placeholder, select_on_focus=False)
        self.cursor_blink = False

    def on_paste(self, event: events.Paste) -> None:
        event.prevent_default()
        event.stop()
        lines = shown_text(event.text[:MAX_PASTE]).split("\n")
        self.insert_text_at_cursor(lines[0].strip())


class ManyLines(TextArea):
    """A field of many lines that wraps what is too long.

    Args:
        enter_goes_on: enter leaves the field for the next one, since what it holds is one text.
    """

    DEFAULT_CSS = "ManyLines > .text-area--placeholder { text-style: dim; }"
    BINDINGS: ClassVar[list[BindingType]] = [Binding("ctrl+underscore,alt+z", "undo", show=False)]

    class Pasted(Message):
        """Text was pasted and waits to be put in: `put` puts it at the cursor."""

        def __init__(self, field: ManyLines, text: str) -> None:
            super().__init__()
            self.field, self.text = field, text

    class GoneOn(Message):
        """Enter was pressed in a field that it leaves."""

    def __init__(self, *, id: str, placeholder: str = "", enter_goes_on: bool = False) -> None:  # noqa: A002
        super().__init__(
            id=id,
            soft_wrap=True,
            compact=True,
            show_line_numbers=False,
            highlight_cursor_line=False,
            placeholder=placeholder,
        )
        self.cursor_blink = False
        self.enter_goes_on = enter_goes_on

    def on_key(self, event: events.Key) -> None:
        if self.enter_goes_on and event.key == "enter":
            event.prevent_default()
            event.stop()
            self.post_message(self.GoneOn())

    def on_paste(self, event: events.Paste) -> None:
        event.prevent_default()
        event.stop()
        self.post_message(self.Pasted(self, event.text))

    def put(self, text: str) -> None:
        """Put text at the cursor, in place of what is selected. What would steer the terminal is made visible."""
        ending = "\n" if text.endswith(("\n", "\r")) else ""
        result = self.replace(shown_text(text) + ending, *self.selection)
        self.move_cursor(result.end_location)

    def go_to(self, line: int, column: int) -> None:
        """Put the cursor on a place of the text, both from 1."""
        row = min(max(line - 1, 0), self.document.line_count - 1)
        self.move_cursor((row, min(max(column - 1, 0), len(self.document[row]))))
