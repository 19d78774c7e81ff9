"""Tree -> sympy, node by node: nothing is parsed by sympy. What survives unchanged is known again on the way back.

Literals that every binary arithmetic holds exactly (2, 0.5) become rationals, which sympy multiplies out; any other
literal, and every power or call without the unknown, stays a symbol under its own text, so that a derivative rounds
the numbers of the equation as the equation does.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Set

from surefoot.equation.exact_numbers import exact_number, rational_of
from surefoot.equation.kinks import (
    Pair,
    conditions_of_call,
    gap_of_call,
    gap_of_switch,
    guard,
    kept_apart,
    leaves_its_switches_out,
    switching_pairs,
    two_sides,
)
from surefoot.equation.partial_derivatives import KINKED, Symbolic, without_order
from surefoot.equation.sharing import from_the_leaves
from surefoot.equation.sympy_heads import HEADS
from surefoot.equation.tree import (
    Binary,
    Call,
    Condition,
    Expression,
    Name,
    Negate,
    Node,
    Number,
    Piecewise,
)
from surefoot.equation.wording import children, to_text

_GROW_FAST = frozenset({"exp", "expm1", "sinh", "cosh", "tgamma", "cyl_bessel_i", "expint"})


class Undifferentiable(Exception):  # carries the reason to where the error for a person is made
    """A function without a derivative: its text, and why."""

    def __init__(self, text: str, reason: str) -> None:
        self.text, self.reason = text, reason
        super().__init__(f"{text}: {reason}")


class Bridge:
    """One expression, or one line of a problem, on its way to sympy.

    Attributes:
        known: what each expression of sympy was as a tree, in the order of the text.
        place: where each of them stood in the text.
        slopes: derivatives of definitions.
        gaps: sentences for the places without a derivative.
        unknown: the symbol to differentiate by.
    """

    def __init__(self, unknown: str, slopes: Mapping[str, Expression], growing: Set[str], typed: Set[str]) -> None:
        """Sets out for one tree.

        Args:
            slopes: for each definition that depends on the unknown, its derivative as a tree.
            growing: definitions that grow fast, as an exponential does.
            typed: the literals of the problem; any other literal came out of a derivative and is exact.
        """
        self.unknown = HEADS.constant(unknown)
        self.known: dict[Symbolic, Expression] = {}
        self.place: dict[Symbolic, int] = {}
        self.slopes: set[Symbolic] = set()
        self.gaps: dict[str, None] = {}
        self._name, self._slopes, self._growing, self._typed = unknown, slopes, growing, typed
        self._dependent: set[int] = set()

    def to_sympy(self, root: Expression) -> Symbolic:
        """Raises Undifferentiable when a function of the unknown has no derivative in the language."""
        self._dependent = dependents(root, {self._name, *self._slopes})
        return self._converted(root, frozenset())

    def _depends(self, node: Node) -> bool:
        return id(node) in self._dependent

    def _converted(self, node: Expression, guarded: frozenset[Pair]) -> Symbolic:
        """`guarded` holds the pairs that an enclosing condition keeps apart."""
        place = len(self.place)
        result = self._varying(node, guarded) if self._depends(node) else self._constant(node, guarded)
        self.known.setdefault(result, node)
        self.place.setdefault(result, place)
        return result

    def _constant(self, node: Expression, guarded: frozenset[Pair]) -> Symbolic:
        match node:
            case Number(text, single):
                exact = exact_number(node) if single or text in self._typed else rational_of(node)
                return HEADS.constant(to_text(node)) if exact is None else HEADS.rational(*exact.as_integer_ratio())
            case Negate() | Binary("+" | "-" | "*" | "/"):
                return self._arithmetic(node, guarded)
            case Binary("^", base, exponent) if rational_of(exponent) and rational_of(base) is None:
                return self._arithmetic(node, guarded)
        return HEADS.constant(to_text(node))

    def _varying(self, node: Expression, guarded: frozenset[Pair]) -> Symbolic:
        match node:
            case Name(name) if name == self._name:
                return self.unknown
            case Name(name):
                return self._line(name)
            case Negate() | Binary():
                return self._arithmetic(node, guarded)
            case Call():
                return self._call(node, guarded)
            case Piecewise():
                return self._piecewise(node, guarded)
        raise Undifferentiable(to_text(node), "a table has no derivative in the language")

    def _line(self, name: str) -> Symbolic:
        """A definition, whose derivative is a number, or a line that may have a derivative itself."""
        slope = self._slopes[name]
        if isinstance(slope, Name) and slope.name in self._slopes:
            symbol = self._line(slope.name)
        else:
            symbol = self._constant(slope, frozenset())
        self.slopes.add(symbol)
        self.place.setdefault(symbol, len(self.place))
        return HEADS.line(name, symbol, self.unknown)

    def _arithmetic(self, node: Negate | Binary, guarded: frozenset[Pair]) -> Symbolic:
        if isinstance(node, Negate):
            return -self._converted(node.operand, guarded)
        if node.operator in "+-":
            return self._sum(node, guarded)
        left = self._converted(node.left, guarded)
        if node.operator == "^":
            return self._power(left, node, guarded)
        right = self._converted(node.right, guarded)
        if node.operator == "*":
            return left * right
        grows = grows_fast(node.right, self._dependent, self._growing)
        return HEADS.quotient(left, right) if grows else left / right

    def _power(self, base: Symbolic, node: Binary, guarded: frozenset[Pair]) -> Symbolic:
        exponent = rational_of(node.right)
        if exponent is not None:
            return HEADS.power(base, HEADS.rational(*exponent.as_integer_ratio()))
        if not self._depends(node.left):
            return HEADS.exponential(base, self._converted(node.right, guarded), to_text(Call("ln", (node.left,))))
        return HEADS.power(base, self._converted(node.right, guarded))

    def _sum(self, node: Expression, guarded: frozenset[Pair]) -> Symbolic:
        """A chain of sums in one go: adding term by term would sort the terms anew each time."""
        import sympy

        terms: list[tuple[int, Expression]] = []
        while isinstance(node, Binary) and node.operator in "+-":
            terms.append((1 if node.operator == "+" else -1, node.right))
            node = node.left
        terms.append((1, node))
        converted = [(sign, self._converted(term, guarded)) for sign, term in reversed(terms)]
        return sympy.Add(*(term if sign == 1 else -term for sign, term in converted))

    def _call(self, node: Call, guarded: frozenset[Pair]) -> Symbolic:
        for place, argument in enumerate(node.arguments):
            if self._depends(argument) and (reason := without_order(node.function, place)):
                raise Undifferentiable(to_text(node), reason)
        arguments = [self._converted(argument, guarded) for argument in node.arguments]
        if node.function not in KINKED:
            return HEADS.call(node.function, *arguments)
        self.gaps[gap_of_call(node)] = None
        conditions = [HEADS.condition(to_text(condition)) for condition in conditions_of_call(node)]
        return HEADS.call(node.function, *arguments, *conditions)

    def _piecewise(self, node: Piecewise, guarded: frozenset[Pair]) -> Symbolic:
        pairs = switching_pairs(node, self._depends)
        branches = [
            (HEADS.condition(to_text(condition)), self._converted(value, guarded | kept_apart(condition)))
            for condition, value in node.branches
        ]
        otherwise = None if node.otherwise is None else self._converted(node.otherwise, guarded)
        open_pairs = [] if leaves_its_switches_out(node) else [pair for pair in pairs if pair not in guarded]
        self.gaps.update(dict.fromkeys(map(gap_of_switch, open_pairs)))
        derived: Iterable[Condition] = ()
        if open_pairs:
            derived = two_sides(node) or (guard(open_pairs),)
        symbols = [HEADS.condition(to_text(condition)) for condition in derived]
        return HEADS.branches(branches, otherwise, symbols, switched_by=self.unknown if pairs else 0)


def dependents(root: Node, names: Set[str]) -> set[int]:
    """Identities of the subtrees that use one of the names."""
    found: set[int] = set()
    for node in from_the_leaves(root):
        if (isinstance(node, Name) and node.name in names) or any(id(child) in found for child in children(node)):
            found.add(id(node))
    return found


def grows_fast(root: Node, dependent: Set[int], growing: Set[str]) -> bool:
    """Whether a denominator grows so fast with the unknown that its square overflows long before it does.

    Args:
        dependent: identities of the subtrees that depend on the unknown.
        growing: definitions that grow fast.
    """
    waiting: list[Node] = [root]
    while waiting:
        node = waiting.pop()
        if id(node) not in dependent:
            continue
        match node:
            case Call(function) if function in _GROW_FAST:
                return True
            case Binary("^", _, exponent) if id(exponent) in dependent:
                return True
            case Name(name) if name in growing:
                return True
        waiting.extend(children(node))
    return False


def derivative_nodes(root: Expression, dependent: Set[int]) -> int:
    """About how many nodes the derivative of a tree has before anything is shared."""
    sizes: dict[int, tuple[int, int]] = {}  # of a subtree and of its derivative
    for node in from_the_leaves(root):
        parts = [sizes[id(child)] for child in children(node)]
        size = 1 + sum(own for own, _ in parts)
        slope = 0
        if id(node) in dependent:
            sums = isinstance(node, Negate | Piecewise) or (isinstance(node, Binary) and node.operator in "+-")
            varying = [below for below in parts if below[1]]
            slope = 1 + sum(below for _, below in varying) + (0 if sums else size * max(len(varying), 1))
        sizes[id(node)] = (size, slope)
    return sizes[id(root)][1]
