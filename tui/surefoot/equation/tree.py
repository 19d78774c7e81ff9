"""The expression tree, as written: nothing is folded, reordered or rounded here; literals keep their text.

Every node carries the 1-based `column` where it begins in its text; columns do not take part in comparisons, so two
texts that mean the same operations in the same order give equal trees.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal, TypeAlias

Operator: TypeAlias = Literal["+", "-", "*", "/", "^"]
Relation: TypeAlias = Literal["<", "<=", ">", ">=", "==", "!="]


def _column() -> int:
    return field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Number:
    """A literal. `text` is the decimal as typed, without the suffix; `single` is True for `3.7f`."""

    text: str
    single: bool = False
    column: int = _column()


@dataclass(frozen=True, slots=True)
class Name:
    """The unknown, an input, a definition of `[where]`, or the constant `pi`."""

    name: str
    column: int = _column()


@dataclass(frozen=True, slots=True)
class Negate:
    operand: Expression
    column: int = _column()


@dataclass(frozen=True, slots=True)
class Binary:
    """One operation with one rounding: left operator right. `column` is that of the operator."""

    operator: Operator
    left: Expression
    right: Expression
    column: int = _column()


@dataclass(frozen=True, slots=True)
class Call:
    """A function of `surefoot.equation.functions`, with as many arguments as it takes."""

    function: str
    arguments: tuple[Expression, ...]
    column: int = _column()


@dataclass(frozen=True, slots=True)
class Lookup:
    """`table("name", x)`."""

    table: str
    argument: Expression
    column: int = _column()


@dataclass(frozen=True, slots=True)
class Piecewise:
    """The value of the first branch whose condition holds; only that value is evaluated."""

    branches: tuple[tuple[Condition, Expression], ...]
    otherwise: Expression | None
    column: int = _column()


@dataclass(frozen=True, slots=True)
class Comparison:
    """`a < b <= c`: one more operand than relations; holds when every neighbouring pair does."""

    operands: tuple[Expression, ...]
    relations: tuple[Relation, ...]
    column: int = _column()


@dataclass(frozen=True, slots=True)
class Not:
    operand: Condition
    column: int = _column()


@dataclass(frozen=True, slots=True)
class Junction:
    """`and` or `or` of two or more conditions, evaluated from the left until decided."""

    word: Literal["and", "or"]
    operands: tuple[Condition, ...]
    column: int = _column()


@dataclass(frozen=True, slots=True)
class Equation:
    """`left = right`, or an expression meant to be zero (`right` is None). The residual is left minus right."""

    left: Expression
    right: Expression | None
    column: int = _column()


Expression: TypeAlias = Number | Name | Negate | Binary | Call | Lookup | Piecewise
Condition: TypeAlias = Comparison | Not | Junction
Node: TypeAlias = Expression | Condition | Equation
