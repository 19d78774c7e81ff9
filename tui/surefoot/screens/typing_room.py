"""What the function room shows and keeps while one types: the form, how it was read, and the draft."""

from __future__ import annotations

from dataclasses import replace
from typing import ClassVar

from rich.text import Text
from textual.app import ComposeResult
from textual.containers import Container
from textual.timer import Timer

from surefoot.errors import RecordError
from surefoot.screens.echo import GUTTER, Said, Space, short_echo
from surefoot.screens.form import Fault, Form, kept_words
from surefoot.screens.form_reading import read_form, tidied
from surefoot.screens.room import Room
from surefoot.screens.typed import Typed, draft_of, typed_from, typed_of
from surefoot.screens.widgets.form_view import FormView
from surefoot.screens.widgets.lines import Lines
from surefoot.session.commands import StateProblem
from surefoot.session.draft import Draft
from surefoot.session.state import StatedProblem

READ_AFTER = 0.2
DRAFT_AFTER = 1.0
"""Seconds after a change until the texts are read, and until they are in the draft."""

_WIDE = 132  # columns from which the echo stands beside the form
_FORM_WIDTH = 80

_WAYS = (
    " What is there of the solve that failed?",
    "",
    " o       its problem file (.toml) or session (.json): open it",
    " p       its source lines, Fortran, C or Python: paste them",
    " enter   its equation: type it",
)


class TypingRoom(Room):
    """The form with its echo. Keys that bring text in or accept it are the function room's."""

    place: ClassVar[str] = "function"
    AUTO_FOCUS = ""
    DEFAULT_CSS = f"""
    TypingRoom #ways {{ display: none; }}
    TypingRoom.empty #ways {{ display: block; }}
    TypingRoom.empty #form-and-echo {{ display: none; }}
    TypingRoom #form-and-echo {{ layout: vertical; }}
    TypingRoom.wide #form-and-echo {{ layout: horizontal; }}
    TypingRoom.wide FormView {{ width: {_FORM_WIDTH}; }}
    """

    def __init__(self) -> None:
        super().__init__()
        self.typed = Typed(Form())
        self.reading = read_form(Form())
        self.begun = False  # whether the form was asked for, though nothing is typed yet
        self.shown: StatedProblem | None = None
        self._read_later: Timer | None = None
        self._draft_later: Timer | None = None
        self._asked_for_draft = False
        self._drafted = False  # whether the draft on disk is ours to remove
        self._loose = False  # whether the fields hold an unedited problem that stands nowhere else

    def compose_body(self) -> ComposeResult:
        yield Lines(id="ways")
        with Container(id="form-and-echo"):
            yield FormView()
            yield Lines(id="echo")

    @property
    def view(self) -> FormView:
        return self.query_one(FormView)

    def on_mount(self) -> None:
        """Fill the fields, which are new whenever the room is shown again; the first time, take up a draft."""
        self._read_later = self._draft_later = None
        self.take(self.typed, loose=self._loose)
        self._follow_session()
        if not self._asked_for_draft and not self.locked:
            self._asked_for_draft = True
            self._take_up_draft()
        self.redraw()

    def _take_up_draft(self) -> None:
        draft = self._draft()
        kept = draft.load() if draft is not None else None
        if kept is not None and typed_from(kept) != self.typed:
            self._drafted = True
            self.take(typed_from(kept), loose=True)
            self.say("half-typed text was taken up again; x throws it away")

    @property
    def unsaved(self) -> bool:
        """Whether the fields hold something that only the draft would keep."""
        return self.typed.changed or self._loose

    def take(self, typed: Typed, *, loose: bool = False) -> None:
        """Put texts into the fields.

        Args:
            loose: they stand nowhere else, neither in the record nor in a file.
        """
        self.typed, self._loose = typed, loose
        self.view.show(typed.form)
        self.read_now()

    @property
    def locked(self) -> bool:
        """Whether the session takes no problem now."""
        session = self.surefoot.session
        return session is not None and session.refusal(StateProblem) is not None

    def _follow_session(self) -> None:
        """Show the problem in force when it is another one than before and nothing is typed over it."""
        stated = self.state.stated if self.state is not None else None
        if stated is self.shown:
            return
        if stated is None:
            self._loose = True  # what was withdrawn stays in the fields
        elif not self.unsaved:
            self.take(typed_of(stated.problem))
        self.shown = stated

    # -- drawing ----------------------------------------------------------------------------------------------------

    @property
    def accepted(self) -> StatedProblem | None:
        """The problem in force, when it is what the fields show."""
        same = self.shown is not None and self.typed.form == typed_of(self.shown.problem).form
        return self.shown if same else None

    def context(self) -> tuple[str, str]:
        place = self.view.place if self.composed else None
        right = Fault(place[0], "", place[1], place[2]).place if place else ""
        if self.shown is None:
            return "no problem yet" if self.typed.form.empty else "not accepted yet", right
        changed = "" if self.accepted else ", changed and not accepted yet"
        return f"problem {self.shown.number}{changed}", right

    def remark(self) -> Text:
        kept = kept_words(self.typed.base)
        line = self.surefoot.characters.fit(f" kept too: {kept}", self.size.width).rstrip() if kept else ""
        return self.styled(line, "quiet")

    def draw(self) -> None:
        self._follow_session()
        empty = self.typed.form.empty and self.shown is None and not self.begun
        self.set_class(empty, "empty")
        self.set_class(self.size.width >= _WIDE, "wide")
        self.view.allow_typing(not self.locked and not empty)
        self.query_one("#ways", Lines).show([Text(line) for line in _WAYS])
        self._draw_echo()

    def _draw_echo(self) -> None:
        wide = self.has_class("wide")
        height = self.query_one("#body").size.height
        left = self.view.fit(height)
        rule = [] if wide else [self.styled(self.surefoot.rule(self.size.width), "quiet")]
        space = Space(
            width=self.size.width - (_FORM_WIDTH if wide else 0),
            height=(height if wide else left) - len(rule),
            characters=self.surefoot.characters,
        )
        said = short_echo(self.reading, self.typed.form, self.view.place, self.accepted, space)
        self.query_one("#echo", Lines).show([*rule, *map(self.line, said)])

    def line(self, said: Said) -> Text:
        """A line of the echo in its style."""
        if said.kind:
            return self.styled(said.text, said.kind)
        return Text.assemble(self.styled(said.text[:GUTTER], "quiet"), said.text[GUTTER:])

    # -- typing -----------------------------------------------------------------------------------------------------

    def on_form_view_changed(self) -> None:
        form = self.view.form
        if form == self.typed.form:
            return
        self.typed = replace(self.typed, form=form)
        if self._read_later is not None:
            self._read_later.stop()
        self._read_later = self.set_timer(READ_AFTER, self._read_and_draw)
        if self._draft_later is None:
            self._draft_later = self.set_timer(DRAFT_AFTER, self.keep_draft)

    def on_screen_suspend(self) -> None:
        if self._draft_later is not None:
            self.keep_draft()

    def on_form_view_moved(self) -> None:
        self.redraw()

    def on_form_view_left(self) -> None:
        self.tidy()

    def tidy(self) -> None:
        """Bring in what follows from the texts: the unknown, and lines for the names that have no value yet."""
        self.read_now()
        form = tidied(self.typed.form, self.reading)
        if form != self.typed.form:
            if form.unknown != self.typed.form.unknown:
                self.say(f"{form.unknown} is taken as the unknown: it alone has no value")
            self.take(replace(self.typed, form=form), loose=self._loose)
        self.redraw()

    def read_now(self) -> None:
        """Read the fields without waiting for a pause in typing."""
        if self._read_later is not None:
            self._read_later.stop()
            self._read_later = None
        self.typed = replace(self.typed, form=self.view.form)
        self.reading = read_form(self.typed.form, self.typed.base)

    def _read_and_draw(self) -> None:
        self.read_now()
        self.redraw()

    # -- the draft --------------------------------------------------------------------------------------------------

    def _draft(self) -> Draft | None:
        """The draft beside the session, or of the folder while there is none; None where there is no folder yet."""
        session = self.surefoot.session
        if session is not None:
            return Draft(session.path)
        return Draft(self.surefoot.folder) if self.surefoot.folder.is_dir() else None

    def keep_draft(self) -> None:
        self._draft_later = None
        if self.surefoot.rooms.get(self.place) is not self or self.locked:
            return
        try:
            if self.unsaved:
                self.surefoot.folder.mkdir(parents=True, exist_ok=True)
            draft = self._draft()
            if draft is not None and self.unsaved:
                draft.save(draft_of(self.typed))
                self._drafted = True
            else:
                self.drop_draft()
        except (RecordError, OSError) as error:
            self.say(f"half-typed text is not kept: {error}", "alert")

    def drop_draft(self) -> None:
        """What is typed was accepted, or thrown away."""
        draft = self._draft()
        if draft is not None and self._drafted:
            draft.remove()
            self._drafted = False
