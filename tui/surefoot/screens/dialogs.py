"""Small questions asked over a room: one line of text, a choice from a list, and the page of keys."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import ClassVar

from rich.text import Text
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.containers import Vertical
from textual.screen import ModalScreen
from textual.widgets import Input

from surefoot.screens.commands import FIELD, Key, keys_of
from surefoot.screens.scrolling import first_in_sight
from surefoot.screens.widgets.lines import Lines


class Ask(ModalScreen[str | None]):
    """Asks for one line of text; gives it back, or None when the person left with esc.

    Args:
        question: what is asked, in one line.
        value: what stands in the field at first.
        check: gives a sentence about what is wrong with an answer, or an empty text.
    """

    BINDINGS: ClassVar[list[BindingType]] = [Binding("escape", "leave", show=False)]

    def __init__(self, question: str, *, value: str = "", check: Callable[[str], str] | None = None) -> None:
        super().__init__()
        self.question, self.value, self.check = question, value, check

    def compose(self) -> ComposeResult:
        with Vertical(id="ask"):
            yield Lines(id="ask-question")
            field = Input(self.value, id="ask-field", compact=True)
            field.cursor_blink = False
            yield field
            yield Lines(id="ask-help")

    def on_mount(self) -> None:
        self.query_one("#ask-question", Lines).show([self.question])
        self.query_one("#ask-help", Lines).show(["enter takes it   esc leaves it"])

    def on_input_submitted(self, event: Input.Submitted) -> None:
        fault = self.check(event.value) if self.check else ""
        if fault:
            self.query_one("#ask-help", Lines).show([fault])
        else:
            self.dismiss(event.value)

    def action_leave(self) -> None:
        self.dismiss(None)


class Choose(ModalScreen[int | None]):
    """A choice of one line among several; gives back its index, or None."""

    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("escape", "leave", show=False),
        Binding("up", "move(-1)", show=False),
        Binding("down", "move(1)", show=False),
        Binding("enter", "take", show=False),
    ]

    def __init__(self, question: str, options: Sequence[str], *, at: int = 0) -> None:
        super().__init__()
        self.question, self.options, self.at = question, tuple(options), at

    def compose(self) -> ComposeResult:
        with Vertical(id="choose"):
            yield Lines(id="choose-list")

    def on_mount(self) -> None:
        self.query_one("#choose").styles.height = min(len(self.options) + 3, self.app.size.height - 2)
        self._draw()

    def _draw(self) -> None:
        room = max(self.app.size.height - 5, 1)
        first = first_in_sight(self.at, len(self.options), room)
        lines: list[Text | str] = [Text(self.question, "bold")]
        for index in range(first, min(first + room, len(self.options))):
            chosen = index == self.at
            lines.append(Text(("> " if chosen else "  ") + self.options[index], "reverse" if chosen else ""))
        lines.append("enter takes it   up, down move   esc leaves it")
        self.query_one("#choose-list", Lines).show(lines)

    def action_move(self, by: int) -> None:
        self.at = max(0, min(self.at + by, len(self.options) - 1))
        self._draw()

    def action_take(self) -> None:
        self.dismiss(self.at)

    def action_leave(self) -> None:
        self.dismiss(None)


class KeysPage(ModalScreen[None]):
    """All keys of a place with what they do."""

    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("escape,question_mark,enter,q,f1", "leave", show=False),
        Binding("up", "move(-1)", show=False),
        Binding("down", "move(1)", show=False),
    ]

    def __init__(self, place: str) -> None:
        super().__init__()
        self.place, self.top = place, 0

    def compose(self) -> ComposeResult:
        with Vertical(id="keys-page"):
            yield Lines(id="keys-list")

    def on_mount(self) -> None:
        self._draw()

    def lines(self) -> list[Text]:
        """The page, one key a line."""
        page = [Text(f"Keys of {self.place}", "bold")] + [_key_line(key) for key in keys_of(self.place)]
        if self.place == "function":
            page += [Text(""), Text("While typing in a field", "bold")] + [_key_line(key) for key in FIELD]
        return [*page, Text(""), Text("esc goes back   up, down move")]

    def _draw(self) -> None:
        lines, height = self.lines(), max(self.app.size.height - 2, 1)
        self.top = max(0, min(self.top, len(lines) - height))
        self.query_one("#keys-list", Lines).show(lines[self.top : self.top + height])

    def on_resize(self) -> None:
        self._draw()

    def action_move(self, by: int) -> None:
        self.top += by
        self._draw()

    def action_leave(self) -> None:
        self.dismiss(None)


def _key_line(key: Key) -> Text:
    return Text.assemble(("  " + key.shown.ljust(11), "bold"), key.meaning)
