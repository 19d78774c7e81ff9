"""An expression laid out in two dimensions, as one would write it by hand: fractions as fractions, nothing reordered.

The layout shows how a text was read: what stands below a fraction bar, what a function is applied to. Powers stay on
the line (`x^2`), since a small raised figure is easily overlooked. What does not fit is given as text, broken into
lines. Pure; the result is the same for every terminal with the same character set.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

from surefoot.equation.tree import Binary, Call, Equation, Expression, Lookup, Negate, Node
from surefoot.equation.wording import children, to_text
from surefoot.figures.characters import Characters

_MOST_LEVELS = 40  # deeper trees are given as text: they would not be readable, and the layout recurses
_MOST_NODES = 600

_BEFORE_OPERATOR = re.compile(r"(?= [-+=<>] )|(?=[*/])|(?<=[,;:] )")

_ADD, _MULTIPLY, _SIGN, _POWER, _WHOLE = range(5)


@dataclass(frozen=True, slots=True)
class Box:
    """Lines with `base` as the index of the one on which its neighbours stand; of equal length within a row."""

    lines: tuple[str, ...]
    base: int = 0

    @property
    def width(self) -> int:
        return len(self.lines[0])

    @property
    def height(self) -> int:
        return len(self.lines)


def typeset(node: Equation | Expression, width: int, height: int, characters: Characters) -> Box:
    """An expression, or the residual of an equation, in a space of `width` x `height` cells.

    A layout that does not fit gives way to text of as many lines as it needs, which may be more than `height`.
    """
    shown = residual(node) if isinstance(node, Equation) else node
    if _is_small(shown):
        setter = _Setter(characters)
        rows = _filled([setter.signed(sign, term) for sign, term in _terms(shown)], width)
        if sum(row.height for row in rows) <= height and all(row.width <= width for row in rows):
            return Box(tuple(line for row in rows for line in row.lines), rows[0].base)
    return Box(tuple(broken(characters.text(to_text(shown)), width)))


def residual(equation: Equation) -> Expression:
    """What is zero at a root: left minus right."""
    if equation.right is None:
        return equation.left
    return Binary("-", equation.left, equation.right, equation.column)


def broken(text: str, width: int) -> list[str]:
    """Text of the equation language in lines of at most `width`, broken where a reader would break it."""
    lines = [""]
    for piece in _BEFORE_OPERATOR.split(text):
        if lines[-1] and len(lines[-1] + piece.rstrip()) > width:
            lines.append("")
        lines[-1] += piece if lines[-1] else piece.lstrip()
        while len(lines[-1].rstrip()) > max(width, 1):
            lines[-1:] = [lines[-1][: max(width, 1)], lines[-1][max(width, 1) :]]
    return [line.rstrip() for line in lines]


def _is_small(node: Node) -> bool:
    """Whether a tree is low and small enough to be laid out."""
    count, level = 0, [node]
    for _ in range(_MOST_LEVELS):
        count += len(level)
        if count > _MOST_NODES:
            return False
        level = [child for each in level for child in children(each)]
        if not level:
            return True
    return False


def _terms(node: Expression) -> list[tuple[str, Expression]]:
    """The terms of a sum from the left, each with the operator before it, which is empty for the first."""
    terms: list[tuple[str, Expression]] = []
    while isinstance(node, Binary) and node.operator in "+-":
        terms.append((node.operator, node.right))
        node = node.left
    return [("", node), *reversed(terms)]


def _filled(boxes: Sequence[Box], width: int) -> list[Box]:
    """Boxes side by side in rows of at most `width`; a row goes on below, indented."""
    rows: list[Box] = []
    for box in boxes:
        joined = _beside([rows[-1], box]) if rows else box
        if rows and joined.width <= width:
            rows[-1] = joined
        else:
            rows.append(_beside([_text("  "), box]) if rows else box)
    return rows


def _text(text: str) -> Box:
    return Box((text,))


def _beside(boxes: Sequence[Box]) -> Box:
    """Boxes in one row, their base lines level."""
    above = max(box.base for box in boxes)
    below = max(box.height - box.base for box in boxes)
    lines = []
    for offset in range(-above, below):
        rows = (
            box.lines[box.base + offset] if 0 <= box.base + offset < box.height else " " * box.width for box in boxes
        )
        lines.append("".join(rows))
    return Box(tuple(lines), above)


def _level(node: Expression) -> int:
    """How tightly an expression holds together in this layout; a fraction bar holds like a product."""
    match node:
        case Binary("+" | "-"):
            return _ADD
        case Binary("*" | "/"):
            return _MULTIPLY
        case Negate():
            return _SIGN
        case Binary("^"):
            return _POWER
    return _WHOLE


def _begins_with_minus(node: Expression) -> bool:
    while isinstance(node, Binary) and node.operator != "/":
        node = node.left
    return isinstance(node, Negate)


@dataclass(frozen=True, slots=True)
class _Setter:
    characters: Characters

    def signed(self, sign: str, term: Expression) -> Box:
        """A term of a sum with the operator before it."""
        if not sign:
            return self.box(term, _ADD)
        enclosed = _level(term) <= _ADD or _begins_with_minus(term)
        return _beside([_text(f" {sign} "), self.enclosed(term) if enclosed else self.box(term, _MULTIPLY)])

    def box(self, node: Expression, floor: int) -> Box:
        """The layout of an expression, in parentheses where it holds less tightly than `floor`."""
        if _level(node) < floor:
            return self.enclosed(node)
        match node:
            case Negate():
                return _beside([_text("-"), self.box(node.operand, _SIGN)])
            case Binary("/"):
                return self._fraction(node)
            case Binary("*"):
                return self._product(node)
            case Binary("^"):
                return _beside([self.box(node.left, _WHOLE), _text("^" + self._exponent(node.right))])
            case Binary():
                return _beside([self.signed(sign, term) for sign, term in _terms(node)])
            case Call():
                return self._applied(node.function, node.arguments)
            case Lookup():
                return self._applied(f"{node.table} ", (node.argument,))
        return _text(self.characters.text(to_text(node)))

    def enclosed(self, node: Expression) -> Box:
        return self._in_parentheses(self.box(node, _ADD))

    def _fraction(self, node: Binary) -> Box:
        top, bottom = self.box(node.left, _ADD), self.box(node.right, _ADD)
        width = max(top.width, bottom.width) + (2 if top.height > 1 or bottom.height > 1 else 0)
        lines = [line.center(width) for line in top.lines]
        lines.append(self.characters.rule * width)
        lines += [line.center(width) for line in bottom.lines]
        return Box(tuple(lines), top.height)

    def _product(self, node: Binary) -> Box:
        left, right = self.box(node.left, _MULTIPLY), self.box(node.right, _SIGN)
        if isinstance(node.right, Binary) and node.right.operator == "/":
            right = self.enclosed(node.right)
        return _beside([left, _text("*" if left.height == right.height == 1 else " * "), right])

    def _exponent(self, node: Expression) -> str:
        text = self.characters.text(to_text(node))
        inner = node.operand if isinstance(node, Negate) else node
        return text if _level(inner) == _WHOLE else f"({text})"

    def _applied(self, name: str, arguments: Sequence[Expression]) -> Box:
        pieces: list[Box] = []
        for argument in arguments:
            pieces += [_text(", "), self.box(argument, _ADD)]
        return _beside([_text(self.characters.text(name)), self._in_parentheses(_beside(pieces[1:]))])

    def _in_parentheses(self, box: Box) -> Box:
        left, right = ("⎛⎜⎝", "⎞⎟⎠") if self.characters.unicode else ("/|\\", "\\|/")
        if box.height == 1:
            return Box((f"({box.lines[0]})",))
        last = box.height - 1
        sides = [0 if row == 0 else 2 if row == last else 1 for row in range(box.height)]
        lines = tuple(left[side] + line + right[side] for side, line in zip(sides, box.lines, strict=True))
        return Box(lines, box.base)
