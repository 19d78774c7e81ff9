"""Finished subtrees while a text is parsed: their sort (value or condition), their height, and where they begin."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Any, cast

from surefoot.equation.functions import FUNCTIONS
from surefoot.equation.refusals import ON_LINES, fail, refuse_arity, refuse_condition, refuse_value
from surefoot.equation.tokens import Token
from surefoot.equation.tree import (
    Binary,
    Call,
    Comparison,
    Condition,
    Expression,
    Junction,
    Lookup,
    Negate,
    Not,
    Number,
    Piecewise,
)

MAX_DEPTH = 200
"""Height that a tree may have, and levels of parentheses that a text may have."""


@dataclass(frozen=True, slots=True)
class Part:
    """A finished subtree, its height, and the token where it begins."""

    node: Expression | Condition
    height: int
    start: Token


def value_of(part: Part) -> Expression:
    """The part as an expression. Raises EquationError for a condition."""
    if isinstance(part.node, Comparison | Not | Junction):
        refuse_condition(part.start, isinstance(part.node, Comparison) and part.node.relations == ("==",))
    return part.node


def condition_of(part: Part) -> Condition:
    """The part as a condition. Raises EquationError for an expression."""
    if not isinstance(part.node, Comparison | Not | Junction):
        refuse_value(part.start)
    return part.node


def signed(sign: Token, operand: Part) -> Part:
    """`-operand`; a plus sign leaves the operand as it is."""
    value = value_of(operand)
    if sign.text == "+":
        return Part(value, operand.height, sign)
    return _part(Negate(value, sign.column), [operand], sign)


def negated(word: Token, operand: Part) -> Part:
    """`not operand`."""
    return _part(Not(condition_of(operand), word.column), [operand], word)


def binary(operator: Token, left: Part, right: Part) -> Part:
    """`left operator right`."""
    node = Binary(cast(Any, operator.text), value_of(left), value_of(right), operator.column)
    return _part(node, [left, right], left.start)


def chain(operators: Sequence[Token], operands: Sequence[Part]) -> Part:
    """`a < b <= c`, `a and b and c`: one more operand than operators."""
    start, word = operands[0].start, operators[0].text
    if word in ("and", "or"):
        conditions = tuple(condition_of(operand) for operand in operands)
        return _part(Junction(cast(Any, word), conditions, start.column), operands, start)
    values = tuple(value_of(operand) for operand in operands)
    relations = tuple(cast(Any, operator.text) for operator in operators)
    return _part(Comparison(values, relations, start.column), operands, start)


def call(name: Token, arguments: Sequence[Part]) -> Part:
    """`name(arguments)`. Raises EquationError when their number is not the function's."""
    row = FUNCTIONS[name.text]
    if not row.accepts(len(arguments)):
        pairs = pairwise(arguments)
        refuse_arity(name, row, len(arguments), any(_looks_decimal(left, right) for left, right in pairs))
    values = tuple(value_of(argument) for argument in arguments)
    return _part(Call(row.name, values, name.column), arguments, name)


def lookup(word: Token, table: str, argument: Part) -> Part:
    """`table("name", argument)`."""
    return _part(Lookup(table, value_of(argument), word.column), [argument], word)


def piecewise(word: Token, parts: Sequence[Part], otherwise: bool) -> Part:
    """Conditions and values in turn; with `otherwise` a last value without a condition."""
    last = value_of(parts[-1]) if otherwise else None
    branched = parts[:-1] if otherwise else parts
    pairs = zip(branched[::2], branched[1::2], strict=True)
    branches = tuple((condition_of(condition), value_of(value)) for condition, value in pairs)
    return _part(Piecewise(branches, last, word.column), parts, word)


def _part(node: Expression | Condition, parts: Sequence[Part], start: Token) -> Part:
    """A new subtree over `parts`. Raises EquationError when it is too high."""
    height = 1 + max(part.height for part in parts)
    if height > MAX_DEPTH:
        fail(start, f"more than {MAX_DEPTH} operations build upon each other", ON_LINES)
    return Part(node, height, start)


def _looks_decimal(left: Part, right: Part) -> bool:
    """Whether two arguments look like one number with a decimal comma: `0,5`."""
    a, b = left.node, right.node
    return isinstance(a, Number) and isinstance(b, Number) and b.text.isdigit() and left.start.end + 1 == b.column
