"""Tree -> text of the equation language, and the names that a tree uses. Nothing here recurses."""

from __future__ import annotations

from typing import TypeAlias

from surefoot.equation.functions import CONSTANTS
from surefoot.equation.tree import (
    Binary,
    Call,
    Comparison,
    Equation,
    Junction,
    Lookup,
    Name,
    Negate,
    Node,
    Not,
    Number,
    Piecewise,
)

_LOOSEST, _OR, _AND, _NOT, _COMPARE, _ADD, _MULTIPLY, _SIGN, _POWER, _WHOLE = range(10)
_BINARY = {
    "+": (_ADD, " + "),
    "-": (_ADD, " - "),
    "*": (_MULTIPLY, "*"),
    "/": (_MULTIPLY, "/"),
    "^": (_POWER, "^"),
}

# A piece of the text: written as it is, or a node with the loosest precedence that needs no parentheses there.
_Piece: TypeAlias = str | tuple[Node, int]


def to_text(node: Node) -> str:
    """Text that parses back to an equal tree, with the fewest parentheses."""
    done: list[str] = []
    waiting: list[_Piece] = [(node, _LOOSEST)]
    while waiting:
        piece = waiting.pop()
        if isinstance(piece, str):
            done.append(piece)
        else:
            node, floor = piece
            precedence, pieces = _pieces(node)
            waiting.extend(reversed(["(", *pieces, ")"] if precedence < floor else pieces))
    return "".join(done)


def names_in(node: Node) -> frozenset[str]:
    """The names that the tree uses, the constants left out."""
    names: set[str] = set()
    waiting = [node]
    while waiting:
        node = waiting.pop()
        if isinstance(node, Name):
            names.add(node.name)
        waiting.extend(children(node))
    return frozenset(names - CONSTANTS.keys())


def children(node: Node) -> tuple[Node, ...]:
    """The nodes right below, in the order of the text."""
    match node:
        case Number() | Name():
            return ()
        case Negate() | Not():
            return (node.operand,)
        case Binary():
            return (node.left, node.right)
        case Call():
            return node.arguments
        case Lookup():
            return (node.argument,)
        case Comparison() | Junction():
            return node.operands
        case Piecewise():
            pairs = tuple(part for branch in node.branches for part in branch)
            return pairs if node.otherwise is None else (*pairs, node.otherwise)
        case Equation():
            return (node.left,) if node.right is None else (node.left, node.right)


def _pieces(node: Node) -> tuple[int, list[_Piece]]:
    """How tightly the node's own text binds, and its pieces."""
    match node:
        case Number():
            return _WHOLE, [node.text + ("f" if node.single else "")]
        case Name():
            return _WHOLE, [node.name]
        case Negate():
            return _SIGN, ["-", (node.operand, _SIGN)]
        case Not():
            return _NOT, ["not ", (node.operand, _NOT)]
        case Binary():
            return _binary_pieces(node)
        case Call():
            return _WHOLE, [f"{node.function}(", *_joined(node.arguments, _LOOSEST, ", "), ")"]
        case Lookup():
            return _WHOLE, [f'table("{node.table}", ', (node.argument, _LOOSEST), ")"]
        case Comparison():
            relations = [f" {relation} " for relation in node.relations]
            pieces: list[_Piece] = [(node.operands[0], _ADD)]
            for relation, operand in zip(relations, node.operands[1:], strict=True):
                pieces += [relation, (operand, _ADD)]
            return _COMPARE, pieces
        case Junction():
            own = _OR if node.word == "or" else _AND
            return own, _joined(node.operands, own + 1, f" {node.word} ")
        case Piecewise():
            return _WHOLE, _piecewise_pieces(node)
        case Equation():
            sides: tuple[Node, ...] = (node.left,) if node.right is None else (node.left, node.right)
            return _LOOSEST, _joined(sides, _LOOSEST, " = ")


def _binary_pieces(node: Binary) -> tuple[int, list[_Piece]]:
    own, written = _BINARY[node.operator]
    # A power's left operand is whole and its right one may be a power or carry a sign; the others group from the left.
    left, right = (_WHOLE, _SIGN) if own == _POWER else (own, own + 1)
    return own, [(node.left, left), written, (node.right, right)]


def _piecewise_pieces(node: Piecewise) -> list[_Piece]:
    pieces: list[_Piece] = ["piecewise("]
    for condition, value in node.branches:
        pieces += [(condition, _LOOSEST), ": ", (value, _LOOSEST), "; "]
    pieces = pieces[:-1] if node.otherwise is None else [*pieces, "otherwise: ", (node.otherwise, _LOOSEST)]
    return [*pieces, ")"]


def _joined(nodes: tuple[Node, ...], floor: int, between: str) -> list[_Piece]:
    pieces: list[_Piece] = []
    for node in nodes:
        pieces += [between, (node, floor)]
    return pieces[1:]
