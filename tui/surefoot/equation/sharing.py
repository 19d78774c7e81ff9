"""Subexpressions that occur more than once, and parts of what is too high or too large, put on lines of their own.

Only what is evaluated in any case is put on a line: a value of one branch of a piecewise, evaluated in another branch,
could fail where the text that it came from does not. Equal subtrees are found by numbering them from the leaves up, so
the work grows with the size of the tree alone.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field, replace
from typing import TypeAlias, TypeVar, cast

from surefoot.equation.tree import (
    Binary,
    Call,
    Comparison,
    Condition,
    Expression,
    Junction,
    Lookup,
    Name,
    Negate,
    Node,
    Not,
    Number,
    Piecewise,
)
from surefoot.equation.wording import children

WORTHWHILE = 16
"""Work, in additions, that a line of its own must save, at least half of it at one place: exp(x) stays where it is."""

MOST_NODES = 1000
"""Nodes of a tree before a part of it gets a line of its own: its text stays well below what the parser accepts."""

_COST = {"+": 1, "-": 1, "*": 1, "/": 2, "^": 4}
_CALL_COST = 5

Line: TypeAlias = tuple[str, Expression]
_N = TypeVar("_N", bound=Node)


def share(
    root: Expression,
    new_name: Callable[[], str],
    wanted: Callable[[Expression], bool],
    most_height: int,
    *,
    flat_sums: bool = False,
) -> tuple[list[Line], Expression]:
    """Puts repeated subexpressions on lines, and parts of a tree that would be too high or too large.

    Args:
        new_name: gives a name that is free, at each call another.
        wanted: whether a repeated subexpression may be put on a line.
        most_height: height of a tree before a part of it gets a line.
        flat_sums: a chain of sums counts as one level of that height.

    Returns:
        The lines in order, and the expression over their names.
    """
    table = _Numbered()
    top = table.number(root)
    always = table.always_from(top)
    shared = {index for index in table.repeated(top, always) if wanted(cast(Expression, table.nodes[index]))}
    lines: list[Line] = []
    built: dict[int, _Built] = {}
    for index in table.from_the_leaves(top):
        parts = [built[part] for part in table.parts[index]]
        node = rebuilt(table.nodes[index], [part.node for part in parts])
        made = _Built(node, _height(node, parts, flat_sums), 1 + sum(part.nodes for part in parts))
        too_much = index in always and (made.height >= most_height or made.nodes >= MOST_NODES)
        if index != top and (index in shared or too_much) and not isinstance(node, Comparison | Not | Junction):
            name = new_name()
            lines.append((name, cast(Expression, node)))
            made = _Built(Name(name), 1, 1)
        built[index] = made
    return lines, cast(Expression, built[top].node)


@dataclass(frozen=True, slots=True)
class _Built:
    node: Node
    height: int
    nodes: int


def _height(node: Node, parts: list[_Built], flat_sums: bool) -> int:
    heights = [1 + part.height for part in parts]
    if flat_sums and _is_sum(node) and _is_sum(parts[0].node):
        heights[0] -= 1
    return max(heights, default=1)


def _is_sum(node: Node) -> bool:
    return isinstance(node, Binary) and node.operator in "+-"


def with_names(root: Expression, meant: Mapping[str, Expression]) -> Expression:
    """The tree with expressions in the place of names."""
    built: dict[int, Node] = {}
    for node in from_the_leaves(root):
        parts = [built[id(child)] for child in children(node)]
        built[id(node)] = meant[node.name] if isinstance(node, Name) and node.name in meant else rebuilt(node, parts)
    return cast(Expression, built[id(root)])


def from_the_leaves(root: Node) -> Iterator[Node]:
    """Every node after its children."""
    waiting: list[tuple[Node, bool]] = [(root, False)]
    while waiting:
        node, opened = waiting.pop()
        below = () if opened else children(node)
        if below:
            waiting.append((node, True))
            waiting.extend((child, False) for child in reversed(below))
        else:
            yield node


def count_nodes(root: Node) -> int:
    return sum(1 for _ in from_the_leaves(root))


def always_used(root: Node) -> frozenset[str]:
    """The names that evaluating a tree evaluates in any case."""
    names: set[str] = set()
    waiting = [root]
    while waiting:
        node = waiting.pop()
        if isinstance(node, Name):
            names.add(node.name)
        waiting.extend(children(node)[: _always_evaluated(node)])
    return frozenset(names)


def rebuilt(node: _N, parts: list[Node]) -> _N:
    """The node over other children, given in the order of `children`."""
    made: Node
    match node:
        case Number() | Name():
            made = node
        case Negate():
            made = replace(node, operand=cast(Expression, parts[0]))
        case Not():
            made = replace(node, operand=cast(Condition, parts[0]))
        case Binary():
            made = replace(node, left=cast(Expression, parts[0]), right=cast(Expression, parts[1]))
        case Call():
            made = replace(node, arguments=cast("tuple[Expression, ...]", tuple(parts)))
        case Lookup():
            made = replace(node, argument=cast(Expression, parts[0]))
        case Comparison():
            made = replace(node, operands=cast("tuple[Expression, ...]", tuple(parts)))
        case Junction():
            made = replace(node, operands=cast("tuple[Condition, ...]", tuple(parts)))
        case Piecewise():
            made = _rebuilt_piecewise(node, parts)
        case _:
            raise TypeError("an equation is not part of an expression")
    return cast(_N, made)


def _rebuilt_piecewise(node: Piecewise, parts: list[Node]) -> Piecewise:
    count = len(node.branches)
    pairs = cast(
        "tuple[tuple[Condition, Expression], ...]", tuple((parts[2 * i], parts[2 * i + 1]) for i in range(count))
    )
    return replace(
        node, branches=pairs, otherwise=None if node.otherwise is None else cast(Expression, parts[2 * count])
    )


@dataclass(slots=True)
class _Numbered:
    """Every distinct subtree once: its node, the numbers of its children, and the work of evaluating it."""

    nodes: list[Node] = field(default_factory=list)
    parts: list[tuple[int, ...]] = field(default_factory=list)
    _of: dict[tuple[object, ...], int] = field(default_factory=dict)

    def number(self, root: Node) -> int:
        done: dict[int, int] = {}
        for node in from_the_leaves(root):
            done[id(node)] = self._one(node, tuple(done[id(child)] for child in children(node)))
        return done[id(root)]

    def _one(self, node: Node, parts: tuple[int, ...]) -> int:
        key = (type(node), _own(node), parts)
        if key not in self._of:
            self._of[key] = len(self.nodes)
            self.nodes.append(node)
            self.parts.append(parts)
        return self._of[key]

    def from_the_leaves(self, top: int) -> Iterator[int]:
        """Every subtree after its children; numbers are given in that order."""
        reached = {top}
        for index in range(top, -1, -1):
            if index in reached:
                reached.update(self.parts[index])
        return (index for index in range(top + 1) if index in reached)

    def always_from(self, top: int) -> set[int]:
        """The subtrees that evaluating the whole evaluates in any case."""
        always = {top}
        for index in range(top, -1, -1):
            if index in always:
                always.update(self.parts[index][: _always_evaluated(self.nodes[index])])
        return always

    def repeated(self, top: int, always: set[int]) -> list[int]:
        """Subtrees that are evaluated in any case, stand in several places and cost enough."""
        uses = dict.fromkeys(range(top + 1), 0)
        for index in self.from_the_leaves(top):
            for part in self.parts[index]:
                uses[part] += 1
        chosen: list[int] = []
        work: dict[int, int] = {}
        for index in self.from_the_leaves(top):
            work[index] = _cost(self.nodes[index]) + sum(work[part] for part in self.parts[index])
            worth = 2 * work[index] >= WORTHWHILE and (uses[index] - 1) * work[index] >= WORTHWHILE
            if index in always and worth:
                chosen.append(index)
                work[index] = 0
        return chosen


def _always_evaluated(node: Node) -> int | None:
    """How many of its first children evaluating a node evaluates in any case; None for all of them."""
    match node:
        case Piecewise() | Junction():
            return 1
        case Comparison():
            return 2
    return None


def _own(node: Node) -> object:
    """What tells a node from another one over the same children."""
    match node:
        case Number():
            return node.text, node.single
        case Name():
            return node.name
        case Binary():
            return node.operator
        case Call():
            return node.function
        case Lookup():
            return node.table
        case Comparison():
            return node.relations
        case Junction():
            return node.word
        case Piecewise():
            return node.otherwise is None
    return None


def _cost(node: Node) -> int:
    match node:
        case Binary():
            return _COST[node.operator]
        case Call() | Lookup():
            return _CALL_COST
    return 0
