"""Derivatives of the residual by the unknown, as text of the equation language that is recorded once and evaluated.

Definitions that depend on the unknown keep their names: the chain rule goes from line to line, `dA_dy` is the
derivative of the definition A by y. A subexpression that the equation repeats gets a line first, so nothing is
differentiated or evaluated twice, and derivatives of higher order are made the same way over all lines so far. sympy
differentiates single lines, over functions that it can neither evaluate nor rewrite; it is imported when it is needed.
"""

from __future__ import annotations

from surefoot.equation.checking import CheckedProblem
from surefoot.equation.exact_numbers import rational_of
from surefoot.equation.functions import RESERVED
from surefoot.equation.parser import parse_expression
from surefoot.equation.problem import Definition, Derivative
from surefoot.equation.sharing import Line, always_used, count_nodes, from_the_leaves, share, with_names
from surefoot.equation.sympy_bridge import Bridge, Undifferentiable, dependents, derivative_nodes, grows_fast
from surefoot.equation.sympy_return import differentiated
from surefoot.equation.tree import Expression, Name, Number
from surefoot.equation.wording import names_in, to_text
from surefoot.errors import EquationError, SurefootError

HIGHEST_ORDER = 3
MOST_NODES = 20_000
"""Nodes that the derivatives of all lines may have together, as estimated before sympy is asked for each."""

# Heights of the trees that are differentiated at once (chain rule and sharing take care of more, and sympy recurses
# several calls a level), and of the trees that are recorded.
_SYMPY_HEIGHT = 24
_RECORDED_HEIGHT = 100

_LARGEST_INLINED = 500


class NoDerivative(SurefootError):
    """The residual has no derivative that the equation language can write; the message names the function."""


def derive(checked: CheckedProblem, order: int) -> Derivative:
    """The derivative of order 1, 2 or 3 of the residual by the unknown.

    Raises:
        NoDerivative: naming the function that has no derivative in the language, or saying that the text is too long.
        ValueError: for any other order.
    """
    if not 1 <= order <= HIGHEST_ORDER:
        raise ValueError(f"the order of a derivative is 1 to {HIGHEST_ORDER}, not {order}")
    lines = _Lines(checked)
    value = lines.divided(checked.residual)
    for _ in range(order):
        value = lines.derivative(value)
    return lines.recorded(order, value)


class _Lines:
    """The lines of a problem, and those that its derivatives add; every line uses only lines above it."""

    def __init__(self, checked: CheckedProblem) -> None:
        self._unknown = checked.problem.unknown
        self._own = frozenset(name for name, _ in checked.definitions)
        self._trees: dict[str, Expression] = dict(checked.definitions)  # what is differentiated
        self._slopes: dict[str, Expression] = {}  # of each moving line: the name of its derivative, or a number
        self._moving = set(checked.moving)
        self._growing: set[str] = set()
        self._taken = RESERVED | checked.names.keys()
        self._nodes = 0  # about how many were made so far
        self._numbered = 0  # of the last line that holds a shared part
        self._origin: dict[str, tuple[str, int]] = {}  # of each derivative line: the line it began with, and its order
        self._gaps: dict[str, None] = {}
        texts = [checked.residual, *self._trees.values()]
        self._typed = {node.text for tree in texts for node in from_the_leaves(tree) if isinstance(node, Number)}
        for name, tree in checked.definitions:
            self._note(name, tree)

    def divided(self, tree: Expression) -> Expression:
        """The tree with lines for what it repeats of the unknown."""
        moving = dependents(tree, self._moving | {self._unknown})
        lines, rest = share(tree, self._line_name, lambda node: id(node) in moving, _SYMPY_HEIGHT, flat_sums=True)
        return self._added(lines, rest)

    def derivative(self, tree: Expression) -> Expression:
        """The derivative of a tree, over the lines and their derivatives."""
        for name in self._needed(tree):
            if name not in self._slopes:
                self._slopes[name] = self._slope(name)
        return self._differentiated(tree, "")

    def recorded(self, order: int, value: Expression) -> Derivative:
        """What the value needs of the lines that were added, as text."""
        added = {name: tree for name, tree in self._trees.items() if name not in self._own}
        lines, value = _inlined(added, value)
        where = tuple(Definition(name, _text(tree)) for name, tree in lines.items())
        return Derivative(order, where, _text(value), tuple(self._gaps))

    def _needed(self, tree: Expression) -> list[str]:
        """The moving lines that a tree uses, directly or through others, each after those that it uses itself."""
        needed: dict[str, None] = {}
        waiting = [(name, False) for name in self._used(tree)]
        while waiting:
            name, opened = waiting.pop()
            if opened:
                needed[name] = None
            elif name not in needed:
                if name in self._own and name not in self._slopes:
                    self._trees[name] = self.divided(self._trees[name])
                waiting.append((name, True))
                waiting.extend((used, False) for used in self._used(self._trees[name]))
        return list(needed)

    def _used(self, tree: Expression) -> list[str]:
        return sorted(names_in(tree) & self._moving)

    def _slope(self, name: str) -> Expression:
        tree = self._differentiated(self._trees[name], name)
        if isinstance(tree, Name) or rational_of(tree) is not None:
            return tree
        line, below = self._origin.get(name, (name, 0))
        slope = self._free_name(_slope_name(line, self._unknown, below + 1))
        self._origin[slope] = (line, below + 1)
        self._add(slope, tree)
        return Name(slope)

    def _differentiated(self, tree: Expression, line: str) -> Expression:
        """The derivative of one line, whose lines above have theirs; the residual is the line without a name."""
        where = f" in {line}" if line in self._own else ""
        moving = dependents(tree, self._moving | {self._unknown})
        if id(tree) not in moving:
            return Number("0")
        self._nodes += derivative_nodes(tree, moving)
        if self._nodes > MOST_NODES:
            raise NoDerivative(f"the derivative{where} gets too long; put parts of the text on lines of [where]")
        bridge = Bridge(self._unknown, self._slopes, self._growing, self._typed)
        try:
            result = differentiated(tree, bridge)
        except Undifferentiable as without:
            raise NoDerivative(f"no derivative of {without.text}{where}: {without.reason}") from without
        except RecursionError:
            message = f"no derivative{where}: its functions are nested too deeply; put parts on lines of [where]"
            raise NoDerivative(message) from None
        self._gaps.update(dict.fromkeys(gap + where for gap in bridge.gaps))
        return self._added(*share(result, self._line_name, lambda _: True, _RECORDED_HEIGHT))

    def _added(self, lines: list[Line], rest: Expression) -> Expression:
        for name, part in lines:
            self._add(name, part)
        return rest

    def _add(self, name: str, tree: Expression) -> None:
        self._trees[name] = tree
        if names_in(tree) & (self._moving | {self._unknown}):
            self._moving.add(name)
        self._note(name, tree)

    def _note(self, name: str, tree: Expression) -> None:
        if grows_fast(tree, dependents(tree, self._moving | {self._unknown}), self._growing):
            self._growing.add(name)

    def _line_name(self) -> str:
        self._numbered += 1
        while f"t{self._numbered}" in self._taken:
            self._numbered += 1
        return f"t{self._numbered}"

    def _free_name(self, name: str) -> str:
        while name in self._taken or name in self._trees:
            name += "_"
        return name


def _text(tree: Expression) -> str:
    """The text of a tree. Raises NoDerivative when the parser would refuse it for its length or depth."""
    text = to_text(tree)
    try:
        parse_expression(text)
    except EquationError as error:
        raise NoDerivative(f"the derivative gets too long; {error.hint}") from error
    return text


def _slope_name(line: str, unknown: str, order: int) -> str:
    """`dA_dy`, `d2A_dy2`."""
    power = str(order) if order > 1 else ""
    return f"d{power}{line}_d{unknown}{power}"


def _inlined(added: dict[str, Expression], value: Expression) -> tuple[dict[str, Expression], Expression]:
    """The added lines that the value needs, and the value.

    Lines are evaluated in any case. So a line that only a branch of a piecewise uses goes back into that branch, where
    it cannot fail while the branch does not hold; unless it is too large for that.
    """
    always, anywhere = set(always_used(value)), set(names_in(value))
    for name in reversed(added):
        if name in always:
            always |= always_used(added[name])
        if name in anywhere:
            anywhere |= names_in(added[name])
    lines: dict[str, Expression] = {}
    meant: dict[str, Expression] = {}
    for name, tree in added.items():
        if name in anywhere:
            tree = with_names(tree, meant)
            inlined = name not in always and count_nodes(tree) <= _LARGEST_INLINED
            (meant if inlined else lines)[name] = tree
    return lines, with_names(value, meant)
