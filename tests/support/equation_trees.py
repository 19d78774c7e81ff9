"""Random trees of the equation language, a tree as plain Python functions, and Python's own tree as one of ours."""

from __future__ import annotations

import ast
import math
import operator
from collections.abc import Callable, Mapping, Sequence
from random import Random
from typing import Any

from surefoot.equation.functions import FUNCTIONS
from surefoot.equation.tree import (
    Binary,
    Call,
    Comparison,
    Condition,
    Equation,
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

NAMES = ("x", "y", "Re", "ε_1", "θ")
OPERATORS = ("+", "-", "*", "/", "^")
RELATIONS = ("<", "<=", ">", ">=", "==", "!=")


class Trees:
    """Random trees; the same seed gives the same trees.

    Args:
        names: what names are drawn from.
        functions: what functions are drawn from.
        singles: literals with the suffix `f` occur.
        piecewise: `piecewise` occurs.
        tables: `table` occurs.
    """

    def __init__(
        self,
        random: Random,
        names: Sequence[str] = (*NAMES, "pi"),
        functions: Sequence[str] = tuple(FUNCTIONS),
        singles: bool = True,
        piecewise: bool = True,
        tables: bool = True,
    ) -> None:
        self.random, self.names, self.functions = random, names, functions
        self.singles, self.piecewise, self.tables = singles, piecewise, tables

    def expression(self, depth: int = 6) -> Expression:
        """An expression at most so many operations high."""
        if depth == 0 or self.random.random() < 0.2:
            return self.leaf()
        makers = [self._negate, *[self._binary] * 4, *[self._call] * 2]
        makers += [self._piecewise] * self.piecewise + [self._lookup] * self.tables
        return self.random.choice(makers)(depth - 1)

    def condition(self, depth: int = 4) -> Condition:
        """A condition at most so many operations high."""
        if depth == 0 or self.random.random() < 0.5:
            relations = self.random.choices(RELATIONS, k=self.random.choice((1, 1, 1, 2, 3)))
            return Comparison(self._several(len(relations) + 1, max(depth - 1, 0)), tuple(relations))
        if self.random.random() < 0.3:
            return Not(self.condition(depth - 1))
        parts = tuple(self.condition(depth - 1) for _ in range(self.random.choice((2, 2, 3))))
        return Junction(self.random.choice(("and", "or")), parts)

    def equation(self, depth: int = 5) -> Equation:
        return Equation(self.expression(depth), self.random.choice((None, self.expression(depth))))

    def leaf(self) -> Expression:
        if self.random.random() < 0.5:
            return Name(self.random.choice(self.names))
        if self.singles and self.random.random() < 0.2:
            return Number(self.random.choice(("3.7", "0.1", "1e-3", "2.", ".3")), single=True)
        return Number(self._literal())

    def _literal(self) -> str:
        random = self.random
        kinds = (
            lambda: str(random.randrange(1000)),
            lambda: repr(random.uniform(0.0, 10.0)),
            lambda: f"{random.randrange(100)}e{random.randrange(-40, 40)}",
            lambda: random.choice(("1.", ".5", "1e16", "0.1", "0.2", "0.3", "2.5E-3", "00.50", "1e-308")),
        )
        return random.choice(kinds)()

    def _several(self, count: int, depth: int) -> tuple[Expression, ...]:
        return tuple(self.expression(depth) for _ in range(count))

    def _negate(self, depth: int) -> Expression:
        return Negate(self.expression(depth))

    def _binary(self, depth: int) -> Expression:
        return Binary(self.random.choice(OPERATORS), self.expression(depth), self.expression(depth))

    def _call(self, depth: int) -> Expression:
        row = FUNCTIONS[self.random.choice(self.functions)]
        count = row.arity + (self.random.randrange(3) if row.more else 0)
        return Call(row.name, self._several(count, depth))

    def _piecewise(self, depth: int) -> Expression:
        count = self.random.randrange(1, 4)
        branches = tuple((self.condition(min(depth, 2)), self.expression(depth)) for _ in range(count))
        return Piecewise(branches, self.random.choice((None, self.expression(depth))))

    def _lookup(self, depth: int) -> Expression:
        return Lookup(self.random.choice(("pump", "mean head 2")), self.expression(depth))


# Plain Python arithmetic

_PLAIN_BINARY: Mapping[str, Callable[[float, float], float]] = {
    "+": operator.add,
    "-": operator.sub,
    "*": operator.mul,
    "/": operator.truediv,
    "^": math.pow,
}
PLAIN_FUNCTIONS: Mapping[str, Callable[..., float]] = {
    "sin": math.sin,
    "cos": math.cos,
    "atan": math.atan,
    "exp": math.exp,
    "ln": math.log,
    "sqrt": math.sqrt,
    "tanh": math.tanh,
    "abs": abs,
    "hypot": math.hypot,
    "min": min,
    "max": max,
}
_PLAIN_RELATIONS: Mapping[str, Callable[[float, float], bool]] = {
    "<": operator.lt,
    "<=": operator.le,
    ">": operator.gt,
    ">=": operator.ge,
    "==": operator.eq,
    "!=": operator.ne,
}


def computable_trees(random: Random) -> Trees:
    """Trees that `plain` can turn into Python: double literals, and functions that Python's `math` has."""
    return Trees(random, NAMES, tuple(PLAIN_FUNCTIONS), singles=False, tables=False)


def plain(node: Node) -> Callable[[Mapping[str, float]], float]:
    """The tree as nested Python functions on floats: `+`, `math.pow`, `math.sin`, and a conditional for piecewise."""
    match node:
        case Number():
            number = float(node.text)
            return lambda values: number
        case Name():
            name = node.name
            return lambda values: values[name]
        case Negate():
            inner = plain(node.operand)
            return lambda values: -inner(values)
        case Binary():
            apply, left, right = _PLAIN_BINARY[node.operator], plain(node.left), plain(node.right)
            return lambda values: apply(left(values), right(values))
        case Call():
            function, arguments = PLAIN_FUNCTIONS[node.function], [plain(argument) for argument in node.arguments]
            return lambda values: function(*[argument(values) for argument in arguments])
        case Piecewise():
            first, value = plain(node.branches[0][0]), plain(node.branches[0][1])
            rest = _plain_rest(node)
            return lambda values: value(values) if first(values) else rest(values)
        case Comparison() | Not() | Junction():
            return _plain_condition(node)
    raise TypeError(f"no plain Python for {node}")


def _plain_rest(node: Piecewise) -> Callable[[Mapping[str, float]], float]:
    if len(node.branches) > 1:
        return plain(Piecewise(node.branches[1:], node.otherwise))
    if node.otherwise is not None:
        return plain(node.otherwise)

    def none_holds(values: Mapping[str, float]) -> float:
        raise LookupError("no condition holds")

    return none_holds


def _plain_condition(node: Condition) -> Callable[[Mapping[str, float]], bool]:
    if isinstance(node, Not):
        inner = _plain_condition(node.operand)
        return lambda values: not inner(values)
    if isinstance(node, Junction):
        parts, decide = [_plain_condition(part) for part in node.operands], {"and": all, "or": any}[node.word]
        return lambda values: decide(part(values) for part in parts)
    relations = [_PLAIN_RELATIONS[relation] for relation in node.relations]
    operands = [plain(operand) for operand in node.operands]

    def chained(values: Mapping[str, float]) -> bool:
        left = operands[0](values)
        for relation, operand in zip(relations, operands[1:], strict=True):
            right = operand(values)
            if not relation(left, right):
                return False
            left = right
        return True

    return chained


# Python's own parser: the same precedence of operators and conditions, once ^ is written **

_PYTHON_BINARY = {ast.Add: "+", ast.Sub: "-", ast.Mult: "*", ast.Div: "/", ast.Pow: "^"}
_PYTHON_RELATIONS = {ast.Lt: "<", ast.LtE: "<=", ast.Gt: ">", ast.GtE: ">=", ast.Eq: "==", ast.NotEq: "!="}


def python_tree(text: str) -> Node:
    """What Python's own parser makes of a text without piecewise, tables and suffixes, as a tree of ours.

    Raises:
        SyntaxError, TypeError: Python does not accept the text, or it holds what our language does not have.
    """
    source = text.replace("^", "**")
    parsed = ast.parse(source, mode="eval")
    return _ours(parsed.body, source)


def _ours(node: ast.expr, source: str) -> Node:
    def over(*parts: ast.expr) -> list[Any]:
        return [_ours(part, source) for part in parts]

    match node:
        case ast.Constant():
            return Number(ast.get_source_segment(source, node) or "")
        case ast.Name():
            return Name(node.id)
        case ast.UnaryOp(op=ast.UAdd()):
            return over(node.operand)[0]
        case ast.UnaryOp(op=ast.USub()):
            return Negate(*over(node.operand))
        case ast.UnaryOp(op=ast.Not()):
            return Not(*over(node.operand))
        case ast.BinOp():
            return Binary(_PYTHON_BINARY[type(node.op)], *over(node.left, node.right))
        case ast.BoolOp():
            return Junction("and" if isinstance(node.op, ast.And) else "or", tuple(over(*node.values)))
        case ast.Compare():
            relations = tuple(_PYTHON_RELATIONS[type(op)] for op in node.ops)
            return Comparison(tuple(over(node.left, *node.comparators)), relations)
        case ast.Call(func=ast.Name(id=name)) if name in FUNCTIONS and FUNCTIONS[name].accepts(len(node.args)):
            return Call(name, tuple(over(*node.args)))
    raise TypeError(ast.dump(node))
