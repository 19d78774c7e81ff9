"""What the function room says back about the text in its fields, as lines. Pure."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from textwrap import wrap

from surefoot.equation.parser import parse_expression
from surefoot.equation.problem import Derivative
from surefoot.equation.tree import Equation, Expression
from surefoot.errors import EquationError
from surefoot.figures.characters import Characters
from surefoot.screens.form import Fault, Form
from surefoot.screens.form_reading import Reading
from surefoot.screens.looks import Kind
from surefoot.screens.typeset import broken, typeset

GUTTER = 10
"""Cells at the left, where the name of what stands beside is written."""


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


def fault_lines(fault: Fault, form: Form, space: Space) -> list[Said]:
    """The first error: in words, then the line it stands in with a mark under its place."""
    lines = [Said(line, "alert") for line in _labelled("open", wrap(space.characters.text(str(fault)), space.room))]
    text = getattr(form, fault.field).split("\n")[fault.line - 1 :] if fault.field else []
    if text and text[0].strip():
        lines += [Said(" " * GUTTER + line) for line in marked(text[0], fault.column, space)]
    return lines


def marked(line: str, column: int, space: Space) -> list[str]:
    """A line of text with a caret under a column; of a long line, the part around that column."""
    shown = "".join(space.characters.text(character)[:1] or "?" for character in line)
    cut, room = "...", space.room
    first = 0
    if len(shown) > room:
        first = max(0, min(column - 1 - room // 2, len(shown) - room))
        shown = shown[first : first + room]
        if first > 0:
            shown = cut + shown[len(cut) :]
        if first + room < len(line):
            shown = shown[: -len(cut)] + cut
    return [shown, " " * (column - 1 - first) + "^"]


def name_lines(reading: Reading, space: Space) -> list[Said]:
    """The names that have neither a value nor a definition."""
    if not reading.nameless:
        return []
    names = ", ".join(reading.nameless)
    if reading.proposed:
        names += ": must be the unknown, since it alone has no value"
    return [Said(line) for line in _labelled("no value", wrap(space.characters.text(names), space.room))]


def tree_lines(label: str, tree: Equation | Expression, space: Space, height: int) -> list[Said]:
    """An equation or expression as it was read; its name stands beside the line on which it is based."""
    box = typeset(tree, space.room, height, space.characters)
    return [Said(line.rstrip()) for line in _labelled(label, box.lines, at=box.base)]


def derivative_lines(unknown: str, derivative: Derivative, space: Space, height: int) -> list[Said]:
    """A derivative as it was recorded, with the definitions that it brings along and its gaps."""
    order = "" if derivative.order == 1 else f"^{derivative.order}"
    said = _recorded(f"d{order}f/d{unknown}{order}", derivative.text, space, height)
    for definition in derivative.where:
        said += _recorded(f"  {definition.name}", definition.text, space, height)
    for gap in derivative.gaps:
        said += [Said(" " * GUTTER + line) for line in wrap(space.characters.text(gap), space.room)]
    return said


def _recorded(label: str, text: str, space: Space, height: int) -> list[Said]:
    try:
        return tree_lines(label, parse_expression(text), space, height)
    except EquationError:  # the record holds what was accepted then; the language of now may be another
        return [Said(line) for line in _labelled(label, broken(space.characters.text(text), space.room))]


def fitted(blocks: Sequence[Sequence[Said]], height: int, more: str) -> list[Said]:
    """Blocks below each other as far as they fit; the last line says how to see the rest."""
    lines = [line for block in blocks for line in block]
    if len(lines) <= height:
        return lines
    return [*lines[: max(height - 1, 0)], Said(" " * GUTTER + more, "quiet")][: max(height, 0)]


def _labelled(label: str, lines: Sequence[str], at: int = 0) -> list[str]:
    return [f" {label if index == at else '':<{GUTTER - 1}}{line}" for index, line in enumerate(lines)]
