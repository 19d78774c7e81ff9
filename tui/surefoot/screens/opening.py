"""The opening room: the sessions found, newest first; Enter resumes one."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import ClassVar

from rich.text import Text
from textual.app import ComposeResult
from textual.binding import BindingType

from surefoot.screens.commands import bindings_of
from surefoot.screens.dialogs import Ask
from surefoot.screens.room import Room
from surefoot.screens.scrolling import first_in_sight, moving_keys
from surefoot.screens.widgets.lines import Lines
from surefoot.screens.words import OUTCOME_WORDS, clock
from surefoot.session.library import Summary, find_sessions

# Columns after the title: state, outcome, last change, steps.
_COLUMNS = ((9, "state"), (14, "outcome"), (17, "last change"), (6, "steps"))
_FIXED = sum(width for width, _ in _COLUMNS)


class OpeningRoom(Room):
    place = "opening"
    BINDINGS: ClassVar[list[BindingType]] = [
        *bindings_of("opening"),
        *moving_keys(10),
    ]

    def __init__(self) -> None:
        super().__init__()
        self.found: tuple[Summary, ...] = ()
        self.wanted, self.at = "", 0

    def compose_body(self) -> ComposeResult:
        yield Lines(id="sessions")

    def on_mount(self) -> None:
        self.look_again()

    def on_screen_resume(self) -> None:
        self.look_again()

    def look_again(self) -> None:
        """Read the folder again."""
        self.found = find_sessions((self.surefoot.folder,))
        self.redraw()

    @property
    def shown(self) -> tuple[Summary, ...]:
        """The sessions that pass the filter."""
        return tuple(summary for summary in self.found if _passes(summary, self.wanted))

    def context(self) -> tuple[str, str]:
        left = f"sessions in {self.surefoot.folder}"
        if self.wanted:
            return left, f"{len(self.shown)} of {len(self.found)} with '{self.wanted}'"
        return left, f"{len(self.found)} found" if self.found else ""

    def draw(self) -> None:
        body = self.query_one("#sessions", Lines)
        self.at = max(0, min(self.at, len(self.shown) - 1))
        if self.shown:
            lines = session_lines(self.shown, self.at, body.size.width, body.size.height)
            body.show([self.styled(text, "here") if here else Text(text) for text, here in lines])
        else:
            body.show(self._nothing_here())

    def _nothing_here(self) -> list[Text]:
        if self.found:
            return [Text(f" No session has '{self.wanted}' in it. Press / and enter to see all.")]
        return [
            Text(" No sessions here yet."),
            Text(""),
            Text(" o   opens the problem file (.toml) or the session (.json) of the solve that failed"),
            Text(" n   begins a new one: paste the source lines of the solve, or type its equation"),
        ]

    # -- keys -------------------------------------------------------------------------------------------------------

    def action_move(self, by: int) -> None:
        self.at += by
        self.redraw()

    def do_resume(self) -> None:
        if not self.shown:
            self.say("there is no session to resume; n begins a new one")
            return
        summary = self.shown[self.at]
        if summary.fault:
            self.say(summary.fault, "alert")
        else:
            self.surefoot.open_file(summary.path)

    def do_new(self) -> None:
        self.surefoot.go("function")

    def do_open(self) -> None:
        question = Ask("File to open (.json session, .toml problem):", check=file_fault)
        self.ask(question, lambda answer: self.surefoot.open_file(Path(answer.strip()).expanduser()))

    def do_filter(self) -> None:
        def wanted(answer: str) -> None:
            self.wanted = answer.strip()

        self.ask(Ask("Show sessions with (empty shows all):", value=self.wanted), wanted)


def file_fault(answer: str) -> str:
    """What is wrong with the name of a file to open, empty when nothing is."""
    path = Path(answer.strip()).expanduser()
    if not answer.strip():
        return "a file name is needed"
    if path.is_dir():
        return f"{path} is a folder"
    return "" if path.exists() else f"{path} does not exist"


def session_lines(summaries: Sequence[Summary], at: int, width: int, height: int) -> list[tuple[str, bool]]:
    """The list as (line, is under the cursor), its heading first, scrolled so that the cursor is in sight."""
    room = max(width - _FIXED - 4, 8)
    lines = [("   " + "title".ljust(room) + " " + "".join(name.ljust(size) for size, name in _COLUMNS), False)]
    rows = max(height - 1, 1)
    first = first_in_sight(at, len(summaries), rows)
    for index in range(first, min(first + rows, len(summaries))):
        summary = summaries[index]
        mark = " > " if index == at else "   "
        lines.append((mark + _fit(summary.title or summary.path.name, room) + " " + _cells(summary), index == at))
    return lines


def _cells(summary: Summary) -> str:
    if summary.fault:
        return _fit("cannot be read: " + summary.fault, _FIXED)
    outcome = OUTCOME_WORDS[summary.outcome] if summary.outcome else "-"
    values = (summary.phase, outcome, clock(summary.changed_at, date=True), str(summary.steps))
    return "".join(_fit(value, size - 1) + " " for value, (size, _) in zip(values, _COLUMNS, strict=True))


def _fit(text: str, width: int) -> str:
    return text.ljust(width) if len(text) <= width else text[: width - 3] + "..."


def _passes(summary: Summary, wanted: str) -> bool:
    text = f"{summary.title} {summary.path.name} {summary.phase} {summary.outcome or ''}"
    return wanted.casefold() in text.casefold()
