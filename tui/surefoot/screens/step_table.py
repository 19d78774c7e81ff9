"""The step log as lines of text: one row an iterate, aligned so that neighbours can be compared digit by digit."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from surefoot.equation.choice import arithmetic_of
from surefoot.equation.results import Failure
from surefoot.figures.columns import iterate_column
from surefoot.figures.numbers import order, ratio, short
from surefoot.methods.contract import Iterate
from surefoot.methods.measures import Measure, measures
from surefoot.session.state import Run

_NARROW, _WIDE = 19, 26  # cells of the column of iterates
_MEASURED_BEFORE = 3  # iterates that a measure looks back on


@dataclass(frozen=True, slots=True)
class Window:
    """The rows in sight: `iterates` oldest first, with their measures, and the one under the cursor."""

    iterates: tuple[Iterate, ...]
    measures: tuple[Measure, ...]
    at: int

    @property
    def current(self) -> Iterate:
        return self.iterates[self.at]

    @property
    def previous(self) -> Iterate | None:
        return self.iterates[self.at - 1] if self.at > 0 else None


def window_of(run: Run, behind: int, rows: int) -> Window:
    """The rows that show the iterate `behind` places before the last one, in `rows` lines.

    The rows before the first one shown are kept for its measures, so the window may hold a few more than `rows`.
    """
    rows = max(rows, 1)
    reach = behind + rows + _MEASURED_BEFORE
    tail = run.iterates.newest(reach)
    measured = measures(tail, arithmetic_of(run.plan.arithmetic))
    at = max(len(tail) - 1 - behind, 0)
    end = len(tail) if behind < rows else at + rows // 2 + 1
    return Window(tail[:end], measured[:end], at)


def table_lines(run: Run, window: Window, width: int, rows: int) -> list[tuple[str, bool]]:
    """Heading and rows as (text, is under the cursor), each at most `width` cells."""
    arithmetic = arithmetic_of(run.plan.arithmetic)
    problem = run.stated.problem
    unit = f" [{problem.unit}]" if problem.unit else ""
    wide = width >= 80
    size = _WIDE if wide else _NARROW
    first = max(len(window.iterates) - rows, 0)
    numbers = [arithmetic.encode(iterate.x) for iterate in window.iterates]
    x_texts = iterate_column(numbers[first:], size, numbers[first - 1] if first else None)
    heading = f"{'k':>4}  {(problem.unknown + unit)[:size]:<{size}} {'residual':<9} {'d' + problem.unknown:<9} order"
    if wide:
        heading += f" {'ratio':>8} {'d' + problem.unknown + '/' + problem.unknown:>10}"
    lines = [(heading[:width], False)]
    for index in range(first, len(window.iterates)):
        iterate, measure = window.iterates[index], window.measures[index]
        residual = "no value" if isinstance(iterate.f, Failure) else short(arithmetic.encode(iterate.f))
        step = short(arithmetic.encode(measure.dx), 2) if measure.dx is not None else ""
        row = f"{iterate.k:>4}  {x_texts[index - first]} {residual:<9} {step:<8}{_flag(iterate)}"
        row += f" {order(measure.order):>5}"
        if wide:
            relative = short(arithmetic.encode(measure.relative_dx), 2) if measure.relative_dx is not None else ""
            row += f" {ratio(measure.contraction):>8} {relative:>10}"
        lines.append((row[:width], index == window.at))
    return lines


def _flag(iterate: Iterate) -> str:
    """One sign beside dx: put by hand, or changed by step control."""
    return "p" if iterate.put else "L" if iterate.limited else " "


def landing_lines(rows: Sequence[tuple[str, str, str, str]], width: int) -> list[str]:
    """The table of trial steps from (method, x, |residual|, why it cannot step or there is no residual)."""
    lines = [f"   {'method':<26}{'would land at':<20}|residual| there"]
    for method, x, residual, words in rows:
        if words and not residual:
            lines.append(f"   {method:<26}{x + '  ' if x else ''}{words}")
        else:
            lines.append(f"   {method:<26}{x:<20}{residual}")
    return [line[:width] for line in lines]
