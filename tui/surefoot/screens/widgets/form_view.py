"""The form on the screen: its fields, their labels, how one goes from field to field, and how high each part is."""

from __future__ import annotations

from textual import events
from textual.app import ComposeResult
from textual.containers import Container, Horizontal, Vertical
from textual.message import Message
from textual.widgets import Input, Static, TextArea

from surefoot.screens.form import FIELDS, Fault, Form
from surefoot.screens.form_lines import entries_of
from surefoot.screens.widgets.field import ManyLines, OneLine

_LABEL_ROWS = 3  # title, unknown with range, and the labels over the lists


class FormView(Container):
    """All fields of the form."""

    DEFAULT_CSS = """
    FormView { height: auto; }
    FormView .row { height: 1; }
    FormView #equation-row, FormView #lists, FormView #lists Vertical { height: auto; }
    FormView Static { width: auto; height: 1; text-style: dim; }
    FormView .head { width: 10; }
    FormView OneLine { width: 4fr; text-style: underline; }
    FormView #unknown, FormView #unit { width: 3fr; }
    FormView #lists Vertical { width: 1fr; }
    FormView #lists #where-side { width: 3fr; margin-right: 1; }
    FormView #lists #inputs-side { width: 2fr; }
    FormView #title { margin-right: 1; }
    FormView ManyLines { width: 1fr; scrollbar-size: 0 0; }
    FormView #where, FormView #inputs { margin-left: 1; }
    """

    class Changed(Message):
        """The text of a field changed."""

    class Moved(Message):
        """The cursor went to another place or another field."""

    class Left(Message):
        """A field was left."""

        def __init__(self, field: str) -> None:
            super().__init__()
            self.field = field

    def __init__(self) -> None:
        super().__init__()
        self.last_field = "equation"
        self._heights: dict[str, int] = {}
        self._labels: dict[str, str] = {}

    def compose(self) -> ComposeResult:
        with Horizontal(classes="row"):
            yield Static(" title", classes="head")
            yield OneLine(id="title")
        with Horizontal(classes="row"):
            yield Static(" unknown", classes="head")
            yield OneLine(id="unknown")
            yield Static(" unit ")
            yield OneLine(id="unit")
            yield Static(" range ")
            yield OneLine(id="low")
            yield Static(" to ")
            yield OneLine(id="high")
            yield Static(" needed ")
            yield OneLine(id="needed")
            yield Static(" ")
        with Horizontal(id="equation-row"):
            yield Static(" equation", classes="head")
            yield ManyLines(id="equation", placeholder="left = right", enter_goes_on=True)
        with Horizontal(id="lists"):
            with Vertical(id="where-side"):
                yield Static(" where", id="where-label")
                yield ManyLines(id="where", placeholder="name = expression")
            with Vertical(id="inputs-side"):
                yield Static(" inputs", id="inputs-label")
                yield ManyLines(id="inputs", placeholder="name = value unit [low, high]")

    # -- texts ------------------------------------------------------------------------------------------------------

    @property
    def form(self) -> Form:
        """The texts as they stand in the fields."""
        return Form(**{name: self._text(name) for name in FIELDS})

    def show(self, form: Form) -> None:
        """Put texts into the fields; a field that has its text already keeps its cursor."""
        for name in FIELDS:
            text = getattr(form, name)
            if self._text(name) == text:
                continue
            field = self.field(name)
            if isinstance(field, Input):
                field.value = text
            else:
                field.load_text(text)
                if isinstance(field, ManyLines) and name == "inputs":
                    _to_first_gap(field)

    def field(self, name: str) -> Input | TextArea:
        widget = self.query_one(f"#{name}")
        if not isinstance(widget, Input | TextArea):
            raise TypeError(name)
        return widget

    def _text(self, name: str) -> str:
        field = self.field(name)
        return field.value if isinstance(field, Input) else field.text

    # -- going about ------------------------------------------------------------------------------------------------

    @property
    def place(self) -> tuple[str, int, int] | None:
        """Field, line and column of the cursor, from 1; None while no field has it."""
        focused = self.screen.focused
        if focused is None or focused.id not in FIELDS:
            return None
        if isinstance(focused, Input):
            return focused.id, 1, focused.cursor_position + 1
        if isinstance(focused, TextArea):
            row, column = focused.cursor_location
            return focused.id, row + 1, column + 1
        return None

    def enter_field(self, name: str = "") -> None:
        """Go into a field, the one that was last in hand when none is named."""
        self.field(name or self.last_field).focus()

    def go_to(self, fault: Fault) -> None:
        """Put the cursor at the place of a fault. A fault of what the form does not show moves nothing."""
        if not fault.field:
            return
        field = self.field(fault.field)
        if isinstance(field, Input):
            field.cursor_position = max(fault.column - 1, 0)
        elif isinstance(field, ManyLines):
            field.go_to(fault.line, fault.column)
        field.focus()

    def allow_typing(self, allowed: bool) -> None:
        """Whether the fields can be entered."""
        for name in FIELDS:
            self.field(name).can_focus = allowed

    def on_input_submitted(self, event: Input.Submitted) -> None:
        event.stop()
        self.screen.focus_next()

    def on_many_lines_gone_on(self, event: ManyLines.GoneOn) -> None:
        """From the equation one goes on to naming the unknown, where it is not named, else to the next field."""
        event.stop()
        if self._text("unknown").strip():
            self.screen.focus_next()
        else:
            self.enter_field("unknown")

    def on_input_changed(self, event: Input.Changed) -> None:
        event.stop()
        self.post_message(self.Changed())

    def on_text_area_changed(self, event: TextArea.Changed) -> None:
        event.stop()
        self.post_message(self.Changed())

    def on_text_area_selection_changed(self, event: TextArea.SelectionChanged) -> None:
        event.stop()
        self.post_message(self.Moved())

    def on_descendant_focus(self, event: events.DescendantFocus) -> None:
        if event.widget.id in FIELDS:
            self.last_field = event.widget.id
            self.post_message(self.Moved())

    def on_descendant_blur(self, event: events.DescendantBlur) -> None:
        if event.widget.id in FIELDS:
            self.post_message(self.Left(event.widget.id))

    # -- heights ----------------------------------------------------------------------------------------------------

    def fit(self, height: int) -> int:
        """Share out the height of the body; the rows that are left for the echo."""
        equation = _between(self._lines("equation"), 1, max(height // 5, 1))
        wanted = max(self._lines("where"), self._lines("inputs")) + 1
        lists = _between(wanted, min(4, max(height - 8, 1)), max(height * 2 // 5 - 1, 1))
        heights = {"equation": equation, "where": lists, "inputs": lists}
        for name, rows in heights.items():
            if self._heights.get(name) != rows:  # asked for only then, since it lays out the whole screen
                self.field(name).styles.height = rows
        self._heights = heights
        for name in ("where", "inputs"):
            lines = self._lines(name)
            label = f" {name}, {lines} lines" if lines > lists else f" {name}"
            if self._labels.get(name) != label:
                self._labels[name] = label
                self.query_one(f"#{name}-label", Static).update(label)
        return max(height - _LABEL_ROWS - equation - lists, 0)

    def _lines(self, name: str) -> int:
        """Lines that a field needs with what is too long wrapped."""
        field = self.field(name)
        return field.wrapped_document.height if isinstance(field, TextArea) else 1


def _to_first_gap(field: ManyLines) -> None:
    """Put the cursor where the first value is still to be typed."""
    for entry in entries_of(field.text, continued=False):
        if entry.assigned and not entry.text:
            field.go_to(entry.text_line, len(field.document[entry.text_line - 1]) + 1)
            return


def _between(wanted: int, least: int, most: int) -> int:
    return min(max(wanted, least), max(most, least))
