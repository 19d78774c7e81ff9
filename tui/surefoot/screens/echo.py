"""What the function room says back about the text in its fields, as lines. Pure."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from textwrap import wrap
from typing import TypeAlias

from surefoot.equation.functions import CONSTANTS, FUNCTIONS
from surefoot.equation.parser import parse_expression
from surefoot.equation.problem import Derivative
from surefoot.equation.tree import Equation, Expression
from surefoot.errors import EquationError
from surefoot.figures.characters import Characters
from surefoot.screens.form import Form
from surefoot.screens.form_reading import Reading
from surefoot.screens.looks import Kind
from surefoot.screens.scrolling import first_in_sight
from surefoot.screens.typeset import broken, typeset
from surefoot.session.state import StatedProblem

GUTTER = 10
"""Cells at the left, where the name of what stands beside is written."""


_NO_LIMIT = 10_000


@dataclass(frozen=True, slots=True)
class Said:
    """A line of the echo, and what kind of text it is; None for plain text."""

    text: str
    kind: Kind | None = None


@dataclass(frozen=True, slots=True)
class Space:
    """Where lines are written."""

    width: int
    height: int
    characters: Characters

    @property
    def room(self) -> int:
        """Cells right of the gutter."""
        return max(self.width - GUTTER - 1, 10)


Place: TypeAlias = tuple[str, int, int] | None
"""Field, line and column of the cursor, from 1; None while it is in no field."""


def short_echo(reading: Reading, form: Form, place: Place, accepted: StatedProblem | None, space: Space) -> list[Said]:
    """What is wrong or missing first, then what stands under the cursor as it was read, then the rest while it fits.

    Args:
        accepted: the problem in force, when the form shows it unchanged.
    """
    if form.empty:
        return _language_lines(space)[: space.height]
    blocks = [_fault_block(reading, form, space), _name_lines(reading, space)]
    left = space.height - sum(map(len, blocks))
    trees = _trees(reading, place)
    blocks += [_tree_lines(label, tree, space, left) for label, tree in trees[:1]]
    left -= len(blocks[-1])
    if accepted is not None and accepted.derivatives:
        blocks.append(_derivative_lines(accepted, accepted.derivatives[0], space, left))
    for label, tree in trees[1:]:
        left = space.height - sum(map(len, blocks))
        block = _tree_lines(label, tree, space, left)
        blocks += [block] if len(block) <= left else []
    return _fitted([line for block in blocks for line in block], space.height)


def full_echo(
    reading: Reading, form: Form, accepted: StatedProblem | None, readings: Sequence[str], space: Space
) -> list[Said]:
    """Everything: errors, all texts as they were read, derivatives, the readings of a paste, what the form hides."""
    blocks = [_fault_block(reading, form, space), _name_lines(reading, space)]
    blocks += [_tree_lines(label, tree, space, _NO_LIMIT) for label, tree in _trees(reading, None)]
    if accepted is not None:
        blocks += [_derivative_lines(accepted, each, space, _NO_LIMIT) for each in accepted.derivatives]
    words = [line for each in readings for line in wrap(space.characters.text(each), space.room)]
    blocks.append([Said(line) for line in _labelled("paste", words)])
    return [line for block in blocks if block for line in (*block, Said(""))]


def _trees(reading: Reading, place: Place) -> list[tuple[str, Equation | Expression]]:
    """What can be shown as read, with its name; first what stands under the cursor, else the equation."""
    definitions = [(f"  {name}", tree) for _, name, tree in reading.definitions]
    equation = [("read as", reading.equation)] if reading.equation is not None else []
    if place is not None and place[0] == "where":
        at = sum(line <= place[1] for line, _, _ in reading.definitions) - 1
        if at >= 0:
            return [definitions[at], *equation, *definitions[:at], *definitions[at + 1 :]]
    return [*equation, *definitions]


def _language_lines(space: Space) -> list[Said]:
    """What the language accepts, for an empty form."""
    words = f"{' '.join(FUNCTIONS)} {' '.join(CONSTANTS)} piecewise(condition: value; otherwise: value)"
    lines = ["left = right, or an expression that is to be zero:  + - * / ^ ( )", *wrap(words, space.room)]
    return [Said(line, "quiet") for line in _labelled("language", lines)]


def _fault_block(reading: Reading, form: Form, space: Space) -> list[Said]:
    """The first error: in words, then the line it stands in with a mark under its place."""
    fault = reading.fault
    if fault is None or fault.missing in reading.nameless or (fault.field == "unknown" and reading.proposed):
        return []  # the names without a value say it all
    lines = [Said(line) for line in _labelled("open", wrap(space.characters.text(str(fault)), space.room))]
    text = getattr(form, fault.field).split("\n")[fault.line - 1 :] if fault.field else []
    if text and text[0].strip() and fault.column:
        lines += [Said(" " * GUTTER + line) for line in marked(text[0], fault.column, space)]
    return lines


def marked(line: str, column: int, space: Space) -> list[str]:
    """A line of text with a caret under a column; of a long line, the part around that column."""
    shown = "".join(space.characters.text(character)[:1] or "?" for character in line)
    cut, room = "...", space.room
    first = 0
    if len(shown) > room:
        first = first_in_sight(column - 1, len(shown), room)
        shown = shown[first : first + room]
        if first > 0:
            shown = cut + shown[len(cut) :]
        if first + room < len(line):
            shown = shown[: -len(cut)] + cut
    return [shown, " " * (column - 1 - first) + "^"]


def _name_lines(reading: Reading, space: Space) -> list[Said]:
    """The names that have neither a value nor a definition."""
    if not reading.nameless:
        return []
    names = ", ".join(reading.nameless)
    if reading.proposed:
        names += ": must be the unknown, since it alone has no value"
    return [Said(line) for line in _labelled("no value", wrap(space.characters.text(names), space.room))]


def _tree_lines(label: str, tree: Equation | Expression, space: Space, height: int) -> list[Said]:
    """An equation or expression as it was read; its name stands beside the line on which it is based."""
    box = typeset(tree, space.room, height, space.characters)
    return [Said(line.rstrip()) for line in _labelled(label, box.lines, at=box.base)]


def _derivative_lines(stated: StatedProblem, derivative: Derivative, space: Space, height: int) -> list[Said]:
    """A derivative as it was recorded, with the definitions that it brings along and its gaps."""
    order, unknown = "" if derivative.order == 1 else str(derivative.order), stated.problem.unknown
    label = f"d{order}{'' if unknown == 'f' else 'f'}/d{unknown}{order}"
    said = _recorded(label, derivative.text, space, height)
    for definition in derivative.where:
        said += _recorded(f"  {definition.name}", definition.text, space, height)
    for gap in derivative.gaps:
        said += [Said(" " * GUTTER + line) for line in wrap(space.characters.text(gap), space.room)]
    return said


def _recorded(label: str, text: str, space: Space, height: int) -> list[Said]:
    try:
        return _tree_lines(label, parse_expression(text), space, height)
    except EquationError:  # the record holds what was accepted then; the language of now may be another
        return [Said(line) for line in _labelled(label, broken(space.characters.text(text), space.room))]


def _fitted(lines: list[Said], height: int) -> list[Said]:
    """As many lines as there is room for; the last one says how to see the rest."""
    if len(lines) <= height:
        return lines
    return [*lines[: max(height - 1, 0)], Said(" " * GUTTER + "r shows all of it", "quiet")][: max(height, 0)]


def _labelled(label: str, lines: Sequence[str], at: int = 0) -> list[str]:
    """Lines with a label beside the one at `at`; a label that is too long for the gutter has a line of its own."""
    if len(label) > GUTTER - 2:
        return [f" {label}", *(" " * GUTTER + line for line in lines)]
    return [f" {label if index == at else '':<{GUTTER - 1}}{line}" for index, line in enumerate(lines)]
