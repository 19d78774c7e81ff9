"""What every room has: heading, body, message line and key line; and the one gate that every key goes through.

Rooms are thin. They read the session's frozen state, draw it, and send commands; they own no truth.
"""

from __future__ import annotations

from collections.abc import Callable
from textwrap import wrap
from typing import TYPE_CHECKING, Any, ClassVar, TypeVar, cast

from rich.text import Text
from textual import events
from textual.app import ComposeResult
from textual.containers import Container
from textual.screen import ModalScreen, Screen
from textual.widgets import Input, TextArea

from surefoot.screens.commands import EVERYWHERE, FIELD, PLACES, ROOMS, Key, key_of
from surefoot.screens.dialogs import Ask, KeysPage
from surefoot.screens.looks import Kind
from surefoot.screens.widgets.lines import Lines
from surefoot.session.commands import AddNote, Withdraw

if TYPE_CHECKING:
    from surefoot.screens.app import SurefootApp
    from surefoot.session.state import SessionState


Answer = TypeVar("Answer")


class Room(Screen[None]):
    """A screen with our frame. Subclasses give `place`, `compose_body` and `draw`."""

    place: ClassVar[str]
    foot_lines: ClassVar[int] = 2

    def __init__(self) -> None:
        super().__init__()
        self.message = ""
        self.message_kind: Kind = "quiet"

    # -- what a room is made of -------------------------------------------------------------------------------------

    def compose(self) -> ComposeResult:
        yield Lines(id="heading")
        with Container(id="body"):
            yield from self.compose_body()
        foot = Lines(id="foot")
        foot.styles.height = self.foot_lines + 2
        yield foot

    def compose_body(self) -> ComposeResult:
        """The widgets between heading and foot."""
        yield from ()

    def draw(self) -> None:
        """Draw the body from the session's state. Called on every change and every resize."""

    def context(self) -> tuple[str, str]:
        """The third line of the heading: left and right part."""
        return "", ""

    def foot(self) -> list[Text]:
        """Lines above the message; those that its own lines leave room for are shown."""
        return []

    def keep_draft(self) -> None:
        """Write down half-typed text, before the program may end. A room without any has nothing to do."""

    # -- drawing ----------------------------------------------------------------------------------------------------

    @property
    def surefoot(self) -> SurefootApp:
        return cast("SurefootApp", self.app)

    @property
    def state(self) -> SessionState | None:
        """The session's state, None before there is a session."""
        session = self.surefoot.session
        return session.state if session is not None else None

    def styled(self, text: str, kind: Kind) -> Text:
        return Text(text, self.surefoot.style_of(kind))

    @property
    def composed(self) -> bool:
        """Whether the widgets are there: a room that was left loses them, and gets new ones when it is shown again."""
        return any(child.id == "foot" for child in self.children)

    def redraw(self) -> None:
        """Draw everything again; only changed cells are sent."""
        if not self.composed or self.size.width == 0:
            return
        self.draw()  # first: a body that follows the session settles what the heading says
        self.query_one("#heading", Lines).show(self._heading())
        self.redraw_foot()

    def redraw_foot(self) -> None:
        width = max(self.size.width - 2, 10)
        said = [self.styled(" " + line, self.message_kind) for line in wrap(self.message, width)]
        below = said[: self.foot_lines] or [self.remark()]
        above = self.foot()[: self.foot_lines - len(below)]
        blank = [Text("")] * (self.foot_lines - len(above) - len(below))
        rule = self.styled(self.surefoot.rule(self.size.width), "quiet")
        self.query_one("#foot", Lines).show([rule, *above, *blank, *below, self._key_line()])

    def remark(self) -> Text:
        """What stands in the message line while there is no message."""
        return Text("")

    def say(self, message: str, kind: Kind = "quiet") -> None:
        """Show one line in the message line until the next key."""
        self.message, self.message_kind = message, kind
        if self.composed:
            self.redraw_foot()

    def _heading(self) -> list[Text]:
        width = self.size.width - 1
        title, right = self.surefoot.title_line()
        left, here = self.context()
        tabs = self._tabs()
        return [
            _both(self.styled(" " + title, "heading"), self.styled(right, "quiet"), width),
            _both(tabs, self.styled(self.surefoot.run_line(), "quiet"), width),
            _both(self.styled(" " + left, "quiet"), self.styled(here, "quiet"), width),
            self.styled(self.surefoot.rule(self.size.width), "quiet"),
        ]

    def _tabs(self) -> Text:
        tabs = Text("")
        for number, name in enumerate(ROOMS, 1):
            if name == self.place:
                tabs.append_text(self.styled(f" [{number} {name}] ", "heading"))
            else:
                tabs.append_text(self.styled(f"  {number} {name}  ", "quiet"))
        return tabs if self.place in ROOMS else Text("")

    def _key_line(self) -> Text:
        keys = FIELD if self.in_field() else PLACES[self.place] + (EVERYWHERE if self.place in ROOMS else ())
        shown = [key for key in keys if key.line]
        line = Text("")
        last = shown[-1]
        for key in shown:
            piece = self._key_text(key)
            spare = 0 if key is last else len(self._key_text(last))
            if len(line) + len(piece) + spare <= self.size.width:
                line.append_text(piece)
        return line

    def _key_text(self, key: Key) -> Text:
        if self.surefoot.refusal(key) is not None:
            return self.styled(f" ({key.shown} {key.label}) ", "quiet")
        return Text.assemble(" ", self.styled(key.shown, "key"), f" {key.label}  ")

    def in_field(self) -> bool:
        """Whether typing goes into a field now."""
        return isinstance(self.focused, Input | TextArea)

    # -- events -----------------------------------------------------------------------------------------------------

    def on_mount(self) -> None:
        self.redraw()

    def on_resize(self) -> None:
        self.redraw()

    def on_screen_resume(self) -> None:
        self.redraw()

    def on_descendant_focus(self) -> None:
        self.redraw_foot()

    def on_descendant_blur(self) -> None:
        self.redraw_foot()

    def on_key(self, event: events.Key) -> None:
        """While work is under way, any key asks it to stop and does nothing else."""
        if self.surefoot.working:
            event.stop()
            event.prevent_default()
            self.surefoot.stop_work()

    def ask(self, page: ModalScreen[Answer | None], then: Callable[[Answer], None]) -> None:
        """Show a small question; `then` gets the answer, unless the person left it. The room is drawn again."""

        def answered(answer: Answer | None) -> None:
            if answer is not None:
                then(answer)
                if self.is_current:
                    self.redraw()

        self.app.push_screen(page, answered)

    def action_press(self, action: str) -> None:
        """The gate: a key whose command is not allowed now says why; any other is done."""
        if self.surefoot.working:
            return
        self.message = ""
        refusal = self.surefoot.refusal(key_of(self.place, action))
        if refusal is not None:
            self.say(str(refusal), "alert")
            return
        handler: Any = getattr(self, f"do_{action}")
        handler()
        if self.is_current:
            self.redraw()

    # -- keys that act in every room --------------------------------------------------------------------------------

    def do_go_function(self) -> None:
        self.surefoot.go("function")

    def do_go_method(self) -> None:
        self.surefoot.variant = None
        self.surefoot.go("method")

    def do_go_steps(self) -> None:
        self.surefoot.go("steps")

    def do_go_record(self) -> None:
        self.surefoot.go("record")

    def do_opening(self) -> None:
        self.surefoot.put_away()

    def do_leave(self) -> None:
        self.surefoot.leave()

    def do_keys(self) -> None:
        self.app.push_screen(KeysPage(self.place))

    def do_withdraw(self) -> None:
        state = self.state
        undone = state.undo if state else ""
        if self.surefoot.perform(Withdraw()):
            self.say(f"withdrawn: {undone}")

    def do_note(self) -> None:
        def noted(text: str) -> None:
            if self.surefoot.perform(AddNote(text)):
                self.say("noted")

        self.ask(Ask("Note for the record:", check=_required), noted)


def _required(answer: str) -> str:
    return "" if answer.strip() else "a text is needed"


def _both(left: Text, right: Text, width: int) -> Text:
    """Left and right part of one line; the left one is cut when they do not fit together."""
    room = max(width - len(right) - 1, 0)
    if len(left) > room:
        left = left[:room]
    return Text.assemble(left, " " * max(width - len(left) - len(right), 1), right)
