"""The method room: which method, its traits, and every key of the plan; a picture of f to choose a start on."""

from __future__ import annotations

from dataclasses import replace
from textwrap import wrap
from typing import ClassVar

from rich.text import Text
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.containers import Horizontal, Vertical

from surefoot.errors import PlanError
from surefoot.figures.numbers import significant
from surefoot.methods.contract import Traits
from surefoot.methods.plan import Plan
from surefoot.methods.table import METHODS
from surefoot.screens.commands import bindings_of
from surefoot.screens.dialogs import Ask, Choose
from surefoot.screens.picking import Picking
from surefoot.screens.pictures import start_picture, start_window
from surefoot.screens.plan_form import PlanForm, form_of_plan, form_of_table
from surefoot.screens.room import Room
from surefoot.screens.scrolling import first_in_sight, moving_keys
from surefoot.screens.widgets.lines import Lines
from surefoot.session.commands import BeginRun, BeginVariant
from surefoot.session.events import RunBegun

_LIST_ROWS = 7
_PLAN_CELLS = 46


class MethodRoom(Room):
    """Methods on the left above the plan; on the right f over the range above what the cursor's row means."""

    place = "method"
    BINDINGS: ClassVar[list[BindingType]] = [
        *bindings_of("method"),
        *moving_keys(8),
        Binding("left", "slide(-1)", show=False),
        Binding("right", "slide(1)", show=False),
        Binding("shift+left", "slide(-10)", show=False),
        Binding("shift+right", "slide(10)", show=False),
        Binding("tab", "other_list", show=False),
        Binding("escape", "leave_picking", show=False),
    ]

    def __init__(self) -> None:
        super().__init__()
        self.form = PlanForm("newton-raphson")
        self.in_methods = True
        self.at = 0
        self.zoomed = False
        self.started = False
        self.picking: Picking | None = None

    def compose_body(self) -> ComposeResult:
        with Horizontal():
            with Vertical(id="plan-side"):
                yield Lines(id="methods")
                yield Lines(id="plan")
            with Vertical(id="picture-side"):
                yield Lines(id="start-picture")
                yield Lines(id="meaning")

    def on_screen_resume(self) -> None:
        if not self.started and self.state is not None:
            self.started = True
            self._take_plan()
        self.redraw()

    def _take_plan(self) -> None:
        """Begin from the plan of the run in hand, of the problem file, of the run begun last, else from defaults."""
        state = self.state
        if state is not None and state.run is not None:
            self.form = form_of_plan(state.run.plan)
        elif self.surefoot.plan_table is not None:
            try:
                self.form = form_of_table(self.surefoot.plan_table, self.surefoot.arithmetic)
            except PlanError as error:
                self.say(str(error), "alert")
        else:
            last = self._plan_begun_last()
            self.form = form_of_plan(last) if last else PlanForm("newton-raphson", {"stop.x_relative": "1e-10"})
        self.at = list(METHODS).index(self.form.method)

    def _plan_begun_last(self) -> Plan | None:
        """The plan of the run that was begun last, though it was withdrawn."""
        session = self.surefoot.session
        events = reversed(session.events()) if session is not None else ()
        return next((event.what.plan for event in events if isinstance(event.what, RunBegun)), None)

    # -- drawing ----------------------------------------------------------------------------------------------------

    def context(self) -> tuple[str, str]:
        variant = self.surefoot.variant
        if variant is not None:
            run, k = variant
            return f"variant of run {run} from iterate {k}: its starts are taken from there", ""
        return "plan of the next run", ""

    def draw(self) -> None:
        methods = self.query_one("#methods", Lines)
        self.query_one("#plan-side").styles.width = _PLAN_CELLS
        methods.styles.height = min(len(METHODS) + 2, _LIST_ROWS)
        methods.show(self._method_lines(methods.size.width))
        plan = self.query_one("#plan", Lines)
        plan.show(self._plan_lines(plan.size.width, plan.size.height))
        meaning = self.query_one("#meaning", Lines)
        lines = self._meaning_lines(max(meaning.size.width - 1, 10))
        meaning.styles.height = 6
        meaning.show(lines)
        self._draw_picture()

    def _method_lines(self, width: int) -> list[Text]:
        head = self.styled(f" {'method':<24}{'starts':>7}{'order':>6}{'calls':>6}", "quiet")
        rows = _LIST_ROWS - 2
        codes = list(METHODS)
        here = self.at if self.in_methods else codes.index(self.form.method)
        first = first_in_sight(here, len(codes), rows)
        lines = [head]
        for index in range(first, min(first + rows, len(codes))):
            traits = METHODS[codes[index]].traits
            mark = ">" if codes[index] == self.form.method else " "
            text = f"{mark}{traits.code:<24}{traits.starts:>7}{_order(traits):>6}{sum(traits.evaluations):>6}"
            under_cursor = self.in_methods and index == self.at
            lines.append(self.styled(text[:width], "here") if under_cursor else Text(text[:width]))
        lines.append(self.styled(self.surefoot.rule(max(width - 1, 0)), "quiet"))
        return lines

    def _plan_lines(self, width: int, height: int) -> list[Text]:
        rows = self.form.rows()
        at = -1 if self.in_methods else self.at
        first = first_in_sight(at, len(rows), height)
        lines = []
        for index in range(first, min(first + max(height, 1), len(rows))):
            row = rows[index]
            value = row.value or (f"({row.default})" if row.default else "-")
            if row.key.startswith("start ") and self.surefoot.variant is not None:
                value = "(from the iterate)"
            text = f"{'*' if row.value else ' '}{row.key:<28}{value}"[: max(width - 1, 0)]
            lines.append(self.styled(text.ljust(width - 1), "here") if index == at else Text(text))
        return lines

    def _meaning_lines(self, width: int) -> list[Text]:
        if self.in_methods:
            traits = METHODS[list(METHODS)[self.at]].traits
            return [Text(line) for line in (*_wrapped(traits.idea, width, 3), *_wrapped(traits.source, width, 2))]
        row = self.form.rows()[self.at]
        lines = _wrapped(row.meaning, width, 3)
        if row.choices:
            lines += _wrapped("one of: " + ", ".join(row.choices), width, 2)
        if row.default:
            lines.append(f"default: {row.default}")
        return [Text(line) for line in lines[:6]]

    def _draw_picture(self) -> None:
        view = self.query_one("#start-picture", Lines)
        state = self.state
        if state is None or state.stated is None:
            view.show([])
            return
        sampler = self.surefoot.sampler(state.stated)
        starts = [value for value in map(_number, self._start_texts()) if value is not None]
        cursor = None if self.picking is None else self.picking.x
        size, characters = view.size, self.surefoot.characters
        view.show(start_picture(sampler, starts, cursor, self.zoomed, size.width, size.height, characters))

    def _start_texts(self) -> list[str]:
        return [row.value for row in self.form.rows() if row.key.startswith("start ")]

    def remark(self) -> Text:
        if self.picking is None or self.state is None or self.state.stated is None:
            return Text("")
        problem = self.state.stated.problem
        f = self.surefoot.sampler(self.state.stated).at(self.picking.x)
        value = "no value there" if f is None else significant(f, 4)
        return self.styled(
            f" start {self.picking.number}: {problem.unknown} = {self.picking.text}, residual {value}"
            "   left right move, enter takes, esc leaves",
            "value",
        )

    # -- keys -------------------------------------------------------------------------------------------------------

    def action_other_list(self) -> None:
        self.in_methods = not self.in_methods
        self.at = list(METHODS).index(self.form.method) if self.in_methods else 0
        self.redraw()

    def action_move(self, by: int) -> None:
        last = len(METHODS) - 1 if self.in_methods else len(self.form.rows()) - 1
        self.at = max(0, min(self.at + by, last))
        self.message = ""
        self.redraw()

    def action_slide(self, by: int) -> None:
        if self.picking is None:
            self.action_other_list()
        else:
            self.picking = self.picking.moved(by)
            self.redraw()

    def action_leave_picking(self) -> None:
        self.picking = None
        self.redraw()

    def do_change(self) -> None:
        if self.picking is not None:
            self._take_picked(self.picking)
            return
        if self.in_methods:
            self.form = self.form.with_method(list(METHODS)[self.at])
            self.action_other_list()
            return
        row = self.form.rows()[self.at]

        if row.choices:
            now = row.value or row.default
            at = row.choices.index(now) if now in row.choices else 0
            question = Choose(f"{row.key}: {row.meaning}", row.choices, at=at)
            self.ask(question, lambda index: self._set(row.key, row.choices[index]))
        else:
            self.ask(Ask(f"{row.key}: {row.meaning}", value=row.value), lambda text: self._set(row.key, text))

    def _set(self, key: str, text: str) -> None:
        self.form = self.form.with_value(key, text)

    def do_clear(self) -> None:
        if not self.in_methods:
            self._set(self.form.rows()[self.at].key, "")

    def do_zoom(self) -> None:
        self.zoomed = not self.zoomed

    def do_pick_start(self) -> None:
        """Choose the starts one after the other with a cursor on the picture."""
        state = self.state
        if state is None or state.stated is None or self.surefoot.variant is not None:
            self.say("the starts of a variant are taken from its iterate", "alert")
            return
        starts = [value for value in map(_number, self._start_texts()) if value is not None]
        window = start_window(self.surefoot.sampler(state.stated), starts, self.zoomed)
        if window is None:
            self.say("give the working range (1 function) or type a start first", "alert")
            return
        cells = max(self.query_one("#start-picture", Lines).size.width, 2)
        self.picking = Picking(1, *window, cells, cells // 2)

    def _take_picked(self, picked: Picking) -> None:
        self.form = self.form.with_value(f"start {picked.number}", picked.text)
        more = picked.number < len(self._start_texts())
        self.picking = replace(picked, number=picked.number + 1) if more else None

    def do_begin(self) -> None:
        try:
            plan = self.form.plan()
        except PlanError as error:
            self._to_key(error.key)
            self.say(str(error), "alert")
            return
        variant = self.surefoot.variant
        command = BeginVariant(*variant, plan) if variant is not None else BeginRun(plan)
        if self.surefoot.perform(command):
            self.surefoot.variant = None
            self.surefoot.go("steps")

    def _to_key(self, key: str) -> None:
        """Put the cursor on the row of a key of the plan (`plan.stop.residual`, `start`)."""
        wanted = key.removeprefix("plan.")
        for index, row in enumerate(self.form.rows()):
            if row.key == wanted or (wanted.startswith("start") and row.key.startswith("start ") and not row.value):
                self.in_methods, self.at = False, index
                self.redraw()
                return


def _order(traits: Traits) -> str:
    return f"{traits.order:.3g}" if traits.order is not None else "-"


def _number(text: str) -> float | None:
    try:
        return float.fromhex(text) if "0x" in text.lower() else float(text)
    except ValueError:
        return None


def _wrapped(text: str, width: int, most: int) -> list[str]:
    return wrap(text, width)[:most]
