"""The function room: what is solved. Opened from a file, read from source, typed, or edited in the own editor."""

from __future__ import annotations

import os
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import ClassVar

from rich.text import Text
from textual.app import SuspendNotSupported
from textual.binding import Binding, BindingType

from surefoot.equation.pasting import Pasted
from surefoot.equation.problem import Problem
from surefoot.errors import SurefootError
from surefoot.screens.commands import bindings_of, key_of
from surefoot.screens.dialogs import Ask, Choose
from surefoot.screens.echo import Space, full_echo
from surefoot.screens.form import Form
from surefoot.screens.opening import file_fault
from surefoot.screens.own_editor import EditorError, edit, editor_command
from surefoot.screens.problem_text import TextRead, read_file, read_text, text_of
from surefoot.screens.source import looks_like_source, reading_words, with_source
from surefoot.screens.source_page import SourcePage
from surefoot.screens.typed import Typed, typed_of
from surefoot.screens.typing_room import TypingRoom
from surefoot.screens.widgets.field import MAX_PASTE, ManyLines
from surefoot.screens.widgets.page import Page
from surefoot.session.commands import StateProblem
from surefoot.session.session import Session


class FunctionRoom(TypingRoom):
    """States the problem of the session."""

    BINDINGS: ClassVar[list[BindingType]] = [
        *bindings_of("function"),
        Binding("escape", "out_of_field", show=False),
    ]

    def __init__(self) -> None:
        super().__init__()
        self._form_at_editor = Form()  # the form when the editor's text could not be read

    # -- typing and looking -----------------------------------------------------------------------------------------

    def do_edit(self) -> None:
        self.begun = True
        self.redraw()
        self.view.enter_field()

    def action_out_of_field(self) -> None:
        self.set_focus(None)
        self.message = ""
        self.redraw()

    def do_read(self) -> None:
        def lines(width: int) -> list[Text]:
            space = Space(width, 0, self.surefoot.characters)
            said = full_echo(self.reading, self.typed.form, self.accepted, self.typed.readings, space)
            return [self.line(each) for each in said]

        self.read_now()
        self.app.push_screen(Page(lines))

    def do_discard(self) -> None:
        before = typed_of(self.shown.problem) if self.shown is not None else Typed(Form())

        def chosen(index: int | None) -> None:
            if index == 1:
                self.begun = False
                self.take(before)
                self.drop_draft()
                self.redraw()

        if self.typed.form == before.form and not self.typed.editor_text:
            self.say("nothing is typed that was not accepted")
        else:
            self.app.push_screen(Choose("Throw away what is typed?", ("keep it", "throw it away")), chosen)

    # -- a file -----------------------------------------------------------------------------------------------------

    def do_open(self) -> None:
        def chosen(answer: str | None) -> None:
            if answer:
                self._open(Path(answer.strip()).expanduser())

        self.app.push_screen(Ask("File to open (.toml problem, .json session):", check=file_fault), chosen)

    def _open(self, path: Path) -> None:
        if path.suffix == ".json":
            self.keep_draft()
            self.surefoot.open_file(path)
        elif path.suffix == ".toml":
            self.take_problem_file(path)
        else:
            self.say(f"{path.name} is neither .toml nor .json; source lines go in with p", "alert")

    def take_problem_file(self, path: Path) -> None:
        """Fill the form from a problem file; what is typed and not accepted is replaced only after a yes."""
        refusal = self.surefoot.refusal(key_of("function", "accept"))
        if refusal is not None:
            self.say(str(refusal), "alert")
            return
        try:
            read = read_file(path)
        except SurefootError as error:
            self.say(str(error), "alert")
            return

        def chosen(index: int | None) -> None:
            if index == 1:
                self._take_text(read, f"{path.name} is read; a accepts it", loose=False)

        if self.unsaved:
            question = "There is half-typed text:"
            self.app.push_screen(Choose(question, ("keep it", f"replace it by {path.name}")), chosen)
        else:
            chosen(1)

    def _take_text(self, read: TextRead, said: str, *, loose: bool) -> None:
        """Take over the text of a problem file, `loose` when no file holds it."""
        self.take(read.typed, loose=loose)
        self.surefoot.take_plan_of_file(read.plan, read.arithmetic)
        self.keep_draft()
        self.redraw()
        if self.reading.fault is not None:
            self.view.go_to(self.reading.fault)
            self.say(str(self.reading.fault), "alert")
        else:
            self.say(said)

    # -- source lines -----------------------------------------------------------------------------------------------

    def do_paste(self) -> None:
        self._offer_source("")

    def on_many_lines_pasted(self, event: ManyLines.Pasted) -> None:
        if len(event.text) > MAX_PASTE:
            said = f"{len(event.text)} characters are more than a field takes ({MAX_PASTE}); nothing was put in"
            self.say(said, "alert")
        elif event.field.id != "inputs" and looks_like_source(event.text):
            self._ask_how(event)
        else:
            event.field.put(event.text)

    def _ask_how(self, event: ManyLines.Pasted) -> None:
        def chosen(index: int | None) -> None:
            if index == 0:
                self._offer_source(event.text)
            elif index == 1:
                event.field.put(event.text)

        ways = ("read it as source lines", "put it in as it stands")
        self.app.push_screen(Choose("This looks like source:", ways), chosen)

    def _offer_source(self, text: str) -> None:
        """Let source lines be read, and take them over once their readings were seen."""

        def taken(pasted: Pasted | None) -> None:
            if pasted is not None:
                self.begun = True
                form = with_source(self.typed.form, pasted)
                words = (*self.typed.readings, *reading_words(pasted))
                self.take(replace(self.typed, form=form, readings=words))
                self.tidy()
                self.keep_draft()
                self.view.enter_field("inputs" if form.equation.strip() else "equation")

        self.app.push_screen(SourcePage(text), taken)

    # -- the own editor ---------------------------------------------------------------------------------------------

    def do_editor(self) -> None:
        self.read_now()
        kept, form = self.typed.editor_text, text_of(self.typed, self.surefoot.plan_table)

        def chosen(index: int | None) -> None:
            if index is not None:
                self._edit((kept, form)[index])

        if kept and self.typed.form != self._form_at_editor:
            ways = ("the editor's text that could not be read", "the form as it stands now")
            self.app.push_screen(Choose("Edit which of the two?", ways), chosen)
        else:
            self._edit(kept or form)

    def _edit(self, given: str) -> None:
        fault: EditorError | None = None
        saved = given
        try:
            command = editor_command(os.environ)
            with self.app.suspend():
                # Nothing may leave this block by an exception: the terminal would not be taken back.
                try:
                    saved = edit(given, command)
                except EditorError as error:
                    fault = error
        except EditorError as error:
            fault = error
        except SuspendNotSupported:
            fault = EditorError("this terminal cannot be handed to an editor")
        if fault is not None:
            self._edit_again(fault.text or self.typed.editor_text, str(fault))
        else:
            self._take_edited(given, saved)

    def _take_edited(self, given: str, saved: str) -> None:
        if saved == given and not self.typed.editor_text:
            self.say("nothing changed in the editor")
            return
        try:
            read = read_text(saved, "")
        except SurefootError as error:
            self._edit_again(saved, f"{error}; e goes on with the text")
            return
        self.begun = True
        typed = replace(read.typed, readings=self.typed.readings)
        self._take_text(replace(read, typed=typed), "taken from the editor", loose=True)

    def _edit_again(self, text: str, why: str) -> None:
        """Keep the editor's text for the next time, and say why it was not taken over."""
        self.typed = replace(self.typed, editor_text=text)
        self._form_at_editor = self.typed.form
        self.keep_draft()
        self.say(why, "alert")

    # -- accepting --------------------------------------------------------------------------------------------------

    def do_accept(self) -> None:
        self.tidy()
        problem, fault = self.reading.problem, self.reading.fault
        if problem is None:
            if fault is not None:
                self.begun = True
                self.redraw()
                self.view.go_to(fault)
                self.say(str(fault), "alert")
        elif self.shown is not None and self.shown.problem == problem:
            self.take(typed_of(problem))
            self.drop_draft()
            self.surefoot.go("method")
            self.surefoot.tell(f"problem {self.shown.number} is in force as it was; nothing changed")
        else:
            self.surefoot.with_name(lambda: self._state(problem))

    def _state(self, problem: Problem) -> None:
        """Record the problem with its derivatives; the session is made when there is none yet."""
        session = self.surefoot.session
        try:
            session = session or Session.create(self.surefoot.folder, by=self.surefoot.by, title=problem.title)
        except SurefootError as error:
            self.say(str(error), "alert")
            return
        if self.surefoot.session is None:
            self.drop_draft()  # the one of the folder; from now on it lies beside the session
            self.surefoot.session = session
            self.keep_draft()
        command = StateProblem(problem, self.typed.readings)
        done: list[bool] = []

        def work(stop: Callable[[], bool]) -> str:
            done.extend(True for _ in session.do(command, stop))
            return "accepted, with the derivatives of f" if done else "stopped; nothing was accepted"

        def ended() -> None:
            if done:
                self._accepted(session, problem)

        self.set_focus(None)
        self.surefoot.perform_long("making the derivatives of f", work, ended)

    def _accepted(self, session: Session, problem: Problem) -> None:
        """The problem is on disk; what was typed since then is not accepted and stays in the draft."""
        self.message = ""
        self.shown = session.state.stated
        if self.view.form == self.typed.form:
            self.take(typed_of(problem))
            self.drop_draft()
        else:
            self.typed = replace(self.typed, base=problem, readings=())
            self.read_now()
        self.surefoot.go("method")
