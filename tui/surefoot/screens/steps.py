"""The steps room: the log of the run in hand, f with the last step drawn into it, and the account of a step."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from textwrap import wrap
from typing import ClassVar

from rich.text import Text
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.containers import Horizontal

from surefoot.equation.results import Failure, Real
from surefoot.errors import Refused, SurefootError
from surefoot.figures.numbers import short, significant
from surefoot.methods.trial import Landing
from surefoot.screens.account import account_words, ending_sentence
from surefoot.screens.commands import bindings_of
from surefoot.screens.dialogs import Ask, Choose
from surefoot.screens.pictures import convergence_lines, step_lines
from surefoot.screens.room import Room
from surefoot.screens.step_table import Window, landing_lines, table_lines, window_of
from surefoot.screens.widgets.lines import Lines
from surefoot.screens.words import ending_words, record_text
from surefoot.session.commands import Abandon, PutIterate, TakeSteps, TakeUp
from surefoot.session.state import Run

_TABLE_CELLS = 54  # narrow table with a space at either side
_WIDE_TABLE_CELLS = 84
_NARROW_SCREEN = 120


class StepsRoom(Room):
    place = "steps"
    foot_lines = 3
    BINDINGS: ClassVar[list[BindingType]] = [
        *bindings_of("steps"),
        Binding("pageup", "move(10)", show=False),
        Binding("pagedown", "move(-10)", show=False),
        Binding("home", "move(1000000000)", show=False),
    ]

    def __init__(self) -> None:
        super().__init__()
        self.behind = 0
        self.convergence, self.zoomed = False, False
        self.landings: list[str] | None = None
        self.top = 0

    def compose_body(self) -> ComposeResult:
        with Horizontal():
            yield Lines(id="log")
            yield Lines(id="step-picture")

    @property
    def run(self) -> Run | None:
        return self.state.run if self.state is not None else None

    def context(self) -> tuple[str, str]:
        run = self.run
        if run is None:
            return "no run yet", ""
        starts = ", ".join(_start_words(text) for text in run.plan.start)
        arithmetic = "" if run.plan.arithmetic == "binary64" else f", {run.plan.arithmetic}"
        left = f"{run.plan.method} from {run.stated.problem.unknown} = {starts}{arithmetic}"
        if run.parent is not None:
            left += f" (variant of run {run.parent[0]} at {run.parent[1]})"
        counts = f"{run.steps} step{'' if run.steps == 1 else 's'}, {run.spent.total} evaluations"
        return left, f"{counts}   {ending_words(run)}"

    # -- drawing ----------------------------------------------------------------------------------------------------

    def draw(self) -> None:
        log, picture = self.query_one("#log", Lines), self.query_one("#step-picture", Lines)
        run = self.run
        if run is None:
            log.styles.width = self.size.width
            log.show([Text(" No run yet: 2 goes to the method; give it its starts, and b begins the run.")])
            picture.show([])
            return
        wide = self.size.width >= _NARROW_SCREEN
        log.styles.width = _WIDE_TABLE_CELLS if wide else min(_TABLE_CELLS, self.size.width)
        if self.landings is not None:
            log.styles.width = self.size.width
            self.top = max(0, min(self.top, len(self.landings) - self._rows))
            rest = self.landings[1 + self.top :]
            log.show([self.styled(self.landings[0], "quiet"), *(Text(line) for line in rest)])
            picture.show([])
            return
        self.behind = max(0, min(self.behind, len(run.iterates) - 1))
        height = self._rows
        window = window_of(run, self.behind, height - 1)
        width = (_WIDE_TABLE_CELLS if wide else _TABLE_CELLS) - 1
        rows = table_lines(run, window, width - 2, height - 1)
        lines = [self._row(text, at, width - 2) for text, at in rows]
        log.show(lines + [self._row("", False, width - 2)] * (height - len(lines)))
        self._draw_picture(picture, run, window, self.size.width - width - 1, height)

    @property
    def _rows(self) -> int:
        """Lines of the body."""
        return max(self.size.height - 4 - self.foot_lines - 2, 1)

    def _row(self, text: str, at: bool, width: int) -> Text:
        """One line of the table, and the light line that parts it from the picture."""
        row = self.styled(text, "here") if at else Text(text)
        parting = self.styled(self.surefoot.characters.separator, "quiet")
        return Text.assemble(row, " " * (width - len(text) + 1), parting)

    def _draw_picture(self, view: Lines, run: Run, window: Window, width: int, height: int) -> None:
        if self.convergence:
            view.show(convergence_lines(run, width, height, self.surefoot.characters))
            return
        sampler = self.surefoot.sampler(run.stated, run.plan)
        view.show(step_lines(sampler, run, window, self.zoomed, width, height, self.surefoot.characters))

    def foot(self) -> list[Text]:
        run = self.run
        if run is None or self.landings is not None:
            return []
        window = window_of(run, self.behind, 1)
        order = window.measures[window.at].order
        words = account_words(run, window.current, window.previous, order)
        return [Text(" " + line) for line in wrap(words, max(self.size.width - 2, 20))]

    def remark(self) -> Text:
        run = self.run
        if self.landings is not None:
            return self.styled(" trial steps: none of them is taken   up, down move   t goes back", "quiet")
        if run is None or run.ending is None:
            return Text("")
        return self.styled(f" {ending_sentence(run)}"[: self.size.width], "heading")

    # -- keys -------------------------------------------------------------------------------------------------------

    def action_move(self, by: int) -> None:
        self._move(by)
        self.message = ""
        self.redraw()

    def _move(self, by: int) -> None:
        """Go back `by` iterates in the log, or up as many trial steps."""
        if self.landings is not None:
            self.top -= by
        else:
            self.behind += by

    def do_earlier(self) -> None:
        self._move(1)

    def do_later(self) -> None:
        self._move(-1)

    def do_step(self) -> None:
        self._stepping()
        self.surefoot.perform(TakeSteps(1))

    def do_to_the_stop(self) -> None:
        self._many(None, "going on to the stop")

    def do_several(self) -> None:
        def counted(answer: str) -> None:
            self._many(int(answer), f"taking {int(answer)} steps")

        self.ask(Ask("How many steps?", value="10", check=_count_fault), counted)

    def _stepping(self) -> None:
        self.behind, self.landings = 0, None

    def _many(self, count: int | None, what: str) -> None:
        session = self.surefoot.session
        if session is None:
            return
        self._stepping()

        def work(stop: Callable[[], bool]) -> str:
            session.do(TakeSteps(count), stop=stop, on_step=lambda _: self.app.call_from_thread(self.redraw))
            return "stopped; what was computed is on disk" if stop() else ""

        self.surefoot.perform_long(what, work)

    def do_trial(self) -> None:
        run, session = self.run, self.surefoot.session
        if self.landings is not None or run is None or session is None:
            self.landings = None
            return
        try:
            landings = session.trial()
        except SurefootError as error:
            self.say(str(error), "alert")
            return
        self.landings, self.top = landing_lines(self._landing_rows(run, landings), self.size.width - 1), 0

    def _landing_rows(self, run: Run, landings: Sequence[Landing]) -> list[tuple[str, str, str, str]]:
        rows = []
        for landing in landings:
            x = significant(record_text(run, landing.x), 12) if landing.x is not None else ""
            residual = ""
            if landing.f is not None and not isinstance(landing.f, Failure):
                residual = short(record_text(run, abs(landing.f))).lstrip("+")
            rows.append((landing.code, x, residual, landing.why or _no_value(landing.f)))
        return rows

    def do_picture(self) -> None:
        self.convergence = not self.convergence

    def do_zoom(self) -> None:
        self.zoomed = not self.zoomed

    def do_put(self) -> None:
        def reasoned(x: str, reason: str) -> None:
            self._stepping()
            self.surefoot.perform(PutIterate(x, reason))

        def typed(x: str) -> None:
            why = Ask("Reason (it goes into the record):", check=_reason_fault)
            self.ask(why, lambda reason: reasoned(x.strip(), reason))

        name = self.run.stated.problem.unknown if self.run is not None else "x"
        self.ask(Ask(f"Go on from {name} ="), typed)

    def do_variant(self) -> None:
        run = self.run
        if run is None:
            self.say("no run to vary yet", "alert")
            return
        window = window_of(run, self.behind, 1)
        self.surefoot.variant = (run.number, window.current.k)
        self.surefoot.go("method")

    def do_other_run(self) -> None:
        state = self.state
        if state is None or len(state.runs) < 2:
            self.say(str(Refused("there is no other run", "v begins a variant")), "alert")
            return
        options = [f"run {run.number}: {run.plan.method}, {ending_words(run)}, {run.steps} steps" for run in state.runs]

        def chosen(index: int) -> None:
            if state.runs[index].number != state.hand:
                self._stepping()
                self.surefoot.perform(TakeUp(state.runs[index].number))

        at = next((index for index, run in enumerate(state.runs) if run.number == state.hand), 0)
        self.ask(Choose("Take up", options, at=at), chosen)

    def do_abandon(self) -> None:
        def reasoned(reason: str) -> None:
            self.surefoot.perform(Abandon(reason))

        self.ask(Ask("Why is this run abandoned?", check=_reason_fault), reasoned)


def _start_words(text: str) -> str:
    """A start as typed; the exact bits of a variant's start as a short decimal."""
    return significant(float.fromhex(text), 9) if "0x" in text else text


def _no_value(f: Real | Failure | None) -> str:
    return str(f) if isinstance(f, Failure) else ""


def _count_fault(answer: str) -> str:
    fits = answer.strip().isascii() and answer.strip().isdigit() and 1 <= int(answer) <= 1_000_000
    return "" if fits else "a whole number from 1 to 1000000"


def _reason_fault(answer: str) -> str:
    return "" if answer.strip() else "a reason is needed: a second engineer must be able to follow"
