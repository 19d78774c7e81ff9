"""The program on a terminal: the session in hand, the rooms around it, and how it begins and ends.

The screens ask; only `perform` and `perform_long` send a command to the session. Work that can take long runs in one
thread and is stopped by any key; what it has done is on disk before it is shown.
"""

from __future__ import annotations

import asyncio
import os
import signal
import sys
import threading
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import ClassVar

from textual.binding import Binding, BindingType

from surefoot.errors import Refused, SurefootError
from surefoot.figures.characters import ASCII, UNICODE, Characters
from surefoot.methods.plan import Plan
from surefoot.screens.commands import Key
from surefoot.screens.dialogs import Ask
from surefoot.screens.driver import AsciiDriver, environment_at_start, wants_ascii
from surefoot.screens.key_order import KeysInOrder
from surefoot.screens.leaving import leaving_line
from surefoot.screens.looks import DEFAULT_LOOK, LOOKS, Kind
from surefoot.screens.pictures import Sampler
from surefoot.screens.room import Room
from surefoot.screens.words import clock, run_words, title_words
from surefoot.session.commands import BeginRun, BeginVariant, Command, StateProblem
from surefoot.session.session import Session
from surefoot.session.state import StatedProblem


class SurefootApp(KeysInOrder, inherit_bindings=False):
    """The terminal program.

    Args:
        folder: where sessions are looked for and new ones are made.
        target: a session or problem file to open at once.
        by: who sits at the keyboard; asked once when it is not given.
        ascii_only: True where the terminal shows no Unicode.
        look: "plain", "dark" or "light".
    """

    ENABLE_COMMAND_PALETTE = False
    CSS_PATH = "surefoot.tcss"
    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("ctrl+q", "leave", show=False, priority=True),
        Binding("ctrl+c", "how_to_leave", show=False),
        Binding("ctrl+z", "suspend_process", show=False, priority=True),
    ]

    def __init__(
        self,
        *,
        folder: Path,
        target: Path | None = None,
        by: str | None = None,
        ascii_only: bool = False,
        look: str = DEFAULT_LOOK,
    ) -> None:
        super().__init__(driver_class=AsciiDriver if ascii_only else None)
        self.folder, self.target, self.by = folder, target, by or ""
        self.characters: Characters = ASCII if ascii_only else UNICODE
        self.look = LOOKS.get(look, LOOKS[DEFAULT_LOOK])
        self.session: Session | None = None
        self.rooms: dict[str, Room] = {}
        self.working = ""
        self.left_with = ""  # what stays in the scrollback
        self.variant: tuple[int, int] | None = None
        self.plan_table: Mapping[str, object] | None = None  # [plan] and [arithmetic] of the problem file in hand
        self.arithmetic = "binary64"
        self._sampler: Sampler | None = None
        self.fault: Exception | None = None
        self.hung_up = False
        self._stop = threading.Event()

    # -- beginning and ending ---------------------------------------------------------------------------------------

    def on_mount(self) -> None:
        self.register_theme(self.look.theme)
        self.theme = self.look.theme.name
        self.app_resume_signal.subscribe(self, lambda _: self.refresh(layout=True))
        loop = asyncio.get_running_loop()
        for number in (signal.SIGHUP, signal.SIGTERM):
            loop.add_signal_handler(number, self._ended_by, number)
        self.go("opening")
        if self.target is not None:
            self.open_file(self.target)

    def _ended_by(self, number: signal.Signals) -> None:
        self._keep_drafts()
        self.hung_up = number == signal.SIGHUP
        self.exit(128 + number)

    def on_unmount(self) -> None:
        self._stop.set()
        if self.session is not None:
            self.session.close()

    def _handle_exception(self, error: Exception) -> None:
        """A fault of ours ends the program without a page of code: whoever ran it reports the fault."""
        self.fault = error
        self.exit(3)

    def leave(self) -> None:
        """End the program. All that was done is on disk; half-typed text goes into the draft."""
        self._keep_drafts()
        self.left_with = leaving_line(self.session)
        self.exit(0)

    def action_leave(self) -> None:
        self.leave()

    def action_how_to_leave(self) -> None:
        if isinstance(self.screen, Room):
            self.screen.say("ctrl+q leaves; all that was done is on disk")

    def _keep_drafts(self) -> None:
        for room in self.rooms.values():
            room.keep_draft()

    # -- rooms ------------------------------------------------------------------------------------------------------

    def go(self, place: str) -> None:
        """Show a room; it is made when it is first asked for."""
        from surefoot.screens.rooms import make_room

        if place not in self.rooms:
            self.rooms[place] = make_room(place)
        if isinstance(self.screen, Room) and self.screen.place == place:
            self.screen.redraw()
        elif len(self.screen_stack) > 1:
            self.switch_screen(self.rooms[place])
        else:
            self.push_screen(self.rooms[place])

    def put_away(self) -> None:
        """Close the session in hand and show the sessions found."""
        self._keep_drafts()
        if self.session is not None:
            self.session.close()
            self.session = None
        self.variant = None
        self.take_plan_of_file(None)
        self._forget_rooms()
        self.go("opening")

    def take_plan_of_file(self, table: Mapping[str, object] | None, arithmetic: str = "binary64") -> None:
        """Remember the plan of a problem file, from which the method room begins; None: there is none."""
        self.plan_table, self.arithmetic = table, arithmetic

    def _forget_rooms(self) -> None:
        self.rooms = {place: room for place, room in self.rooms.items() if place == "opening"}

    def take_in(self, session: Session, place: str | None = None) -> None:
        """Make a session the one in hand and show the room where one would go on."""
        if self.session is not None and self.session is not session:
            self.session.close()
        self.session = session
        self._forget_rooms()
        if place is None:
            place = {"posing": "function", "planning": "method"}.get(session.state.phase, "steps")
        self.go(place)
        if session.notices and isinstance(self.screen, Room):
            self.screen.say(session.notices[-1])

    def open_file(self, path: Path) -> None:
        """Open a session or a problem file in the room that fits it."""
        if path.suffix == ".toml":
            from surefoot.screens.function import FunctionRoom

            self.go("function")
            room = self.rooms["function"]
            if isinstance(room, FunctionRoom):
                self.call_after_refresh(room.take_problem_file, path)
        else:
            self.with_name(lambda: self._resume(path))

    def _resume(self, path: Path) -> None:
        try:
            session = Session.open(path, by=self.by)
        except (SurefootError, OSError) as error:
            self.tell(str(error), "alert")
            return
        self.take_plan_of_file(None)
        self.take_in(session)

    def with_name(self, then: Callable[[], None]) -> None:
        """Go on once it is known who sits here; asked when it is not."""
        if self.by:
            then()
            return

        def named(answer: str | None) -> None:
            if answer and answer.strip():
                self.by = answer.strip()
                then()

        self.push_screen(Ask("Who is at the keyboard? (it goes into the record)", check=_name_fault), named)

    # -- commands ---------------------------------------------------------------------------------------------------

    def refusal(self, key: Key) -> Refused | None:
        """Why a key cannot act now, None when it can."""
        if key.needs is None:
            return None
        if self.session is None:
            return None if key.needs is StateProblem else Refused("no problem yet", "accept a function first")
        varied = key.needs is BeginRun and self.variant is not None
        return self.session.refusal(BeginVariant if varied else key.needs)

    def perform(self, command: Command) -> bool:
        """Do a command now. False, with the reason in the message line, when it was not done.

        The room that asked draws itself: once a key, and once an answer (`Room.ask`).
        """
        if self.session is None:
            self.tell("no problem yet; accept a function first", "alert")
            return False
        try:
            self.session.do(command)
        except SurefootError as error:
            self.tell(str(error), "alert")
            return False
        return True

    def perform_long(
        self, what: str, work: Callable[[Callable[[], bool]], str], then: Callable[[], None] | None = None
    ) -> None:
        """Do work in a thread. `work` is given the question whether to stop, and returns a line to show.

        Args:
            then: called when the work has ended, before the room is drawn again.
        """
        self.working = what
        self._stop.clear()
        self.tell(f"{what} ... any key stops it")

        def run() -> None:
            try:
                said, kind = work(self._stop.is_set), "quiet"
            except SurefootError as error:
                said, kind = str(error), "alert"
            self.call_from_thread(ended, said, kind)

        def ended(said: str, kind: Kind) -> None:
            self.working = ""
            if then is not None:
                then()
            self.redraw_room()
            self.tell(said, kind)

        self.run_worker(run, thread=True, exclusive=True)

    def stop_work(self) -> None:
        """Ask the work under way to stop; what it has done stays done."""
        self._stop.set()

    # -- what rooms show --------------------------------------------------------------------------------------------

    def redraw_room(self) -> None:
        if isinstance(self.screen, Room):
            self.screen.redraw()

    def tell(self, message: str, kind: Kind = "quiet") -> None:
        """Show a line in the room in front."""
        for screen in reversed(self.screen_stack):
            if isinstance(screen, Room):
                screen.say(message, kind)
                return

    def style_of(self, kind: Kind) -> str:
        return self.look.styles[kind]

    def sampler(self, stated: StatedProblem, plan: Plan | None = None) -> Sampler:
        """Values for the pictures of a problem, and of a run's plan."""
        if self._sampler is None or self._sampler.stated is not stated or self._sampler.plan != plan:
            self._sampler = Sampler(stated, plan)
        return self._sampler

    def rule(self, width: int) -> str:
        return self.characters.rule * width

    def title_line(self) -> tuple[str, str]:
        """First line of the heading: the session's title; when it was last saved, and by whom."""
        if self.session is None:
            return "surefoot", self.by
        state = self.session.state
        held = "read only  " if self.session.read_only else ""
        return title_words(state), f"{held}on disk {clock(state.changed_at)}  {state.by}"

    def run_line(self) -> str:
        return run_words(self.session.state) if self.session is not None else ""


def _let_the_terminal_go() -> None:
    """Lead all output to nowhere: the terminal is gone, and what is still buffered must not fail at the end."""
    nowhere = os.open(os.devnull, os.O_RDWR)
    for number in (0, 1, 2):
        os.dup2(nowhere, number)


def _name_fault(answer: str) -> str:
    return "" if answer.strip() else "a name is needed: every event of the record carries it"


def run_app(
    target: Path | None, *, folder: Path, by: str | None, ascii_only: bool | None = None, look: str | None = None
) -> int:
    """Run the program on this terminal; the exit status.

    Raises:
        SurefootError: there is no terminal to run on.
        Exception: a fault of the program itself, after the terminal was given back.
    """
    if not (os.isatty(0) and os.isatty(2)):
        raise SurefootError("the screens need a terminal on standard input and standard error; see surefoot --help")
    if os.environ.get("TERM", "") == "dumb":
        raise SurefootError("TERM=dumb cannot place text; set TERM to what the terminal is, or use surefoot run")
    for name in ("COLUMNS", "LINES"):
        os.environ.pop(name, None)
    if ascii_only is None:
        ascii_only = wants_ascii(environment_at_start())
    app = SurefootApp(folder=folder, target=target, by=by, ascii_only=ascii_only, look=look or DEFAULT_LOOK)
    for stream in (sys.__stderr__, sys.__stdout__):
        if stream is not None and hasattr(stream, "reconfigure"):
            stream.reconfigure(encoding="utf-8", errors="replace")
    result = app.run(mouse=False)
    if app.hung_up:
        _let_the_terminal_go()
    if app.fault is not None:
        raise app.fault
    if app.left_with and sys.stderr is not None:
        # Not through the toolkit, which would break the line at the width of the terminal.
        sys.stderr.write(f"{app.left_with}\n")
    return result if result is not None else int(app.return_code or 0)
