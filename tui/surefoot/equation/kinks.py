"""Places where an expression has no derivative, as conditions beside them and as sentences.

At such a place the derivative is a piecewise of which no branch holds, so that evaluating it there fails instead of
giving a made-up number. Whether the two sides of a piecewise meet smoothly is not looked into: its derivative is not
taken at the place where it switches.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from itertools import combinations
from typing import Literal, TypeAlias

from surefoot.equation.tree import (
    Binary,
    Call,
    Comparison,
    Condition,
    Expression,
    Junction,
    Negate,
    Not,
    Number,
    Piecewise,
    Relation,
)
from surefoot.equation.wording import to_text

Pair: TypeAlias = tuple[Expression, Expression]

_ZERO = Number("0")
_OPEN = frozenset({"<", ">", "!="})
_SIDES: dict[str, tuple[Relation, Relation]] = {"<": ("<", ">"), "<=": ("<", ">"), ">": (">", "<"), ">=": (">", "<")}


def compared(left: Expression, relation: Relation, right: Expression) -> Comparison:
    return Comparison((left, right), (relation,))


def joined(word: Literal["and", "or"], conditions: Sequence[Condition]) -> Condition:
    """The junction of the conditions, without doubles; the condition itself when there is one."""
    single = tuple(dict.fromkeys(conditions))
    return single[0] if len(single) == 1 else Junction(word, single)


def conditions_of_call(node: Call) -> tuple[Condition, ...]:
    """Conditions of the branches of the derivative of a kinked function."""
    argument = node.arguments[0]
    match node.function:
        case "abs":
            return compared(argument, ">", _ZERO), compared(argument, "<", _ZERO)
        case "sign":
            return (compared(argument, "!=", _ZERO),)
        case "floor" | "ceil":
            return (compared(argument, "!=", node),)
    relation: Relation = "<" if node.function == "min" else ">"
    if len(node.arguments) == 2:
        return tuple(compared(argument, side, node.arguments[1]) for side in _SIDES[relation])
    return tuple(
        joined("and", [compared(own, relation, other) for j, other in enumerate(node.arguments) if j != i])
        for i, own in enumerate(node.arguments)
    )


def gap_of_call(node: Call) -> str:
    """The sentence for a kinked function."""
    text, argument = to_text(node), node.arguments[0]
    match node.function:
        case "floor" | "ceil":
            return f"no derivative where {to_text(argument)} is a whole number: {text}"
        case "min" | "max" if len(node.arguments) == 2:
            return f"no derivative where {to_text(argument)} = {to_text(node.arguments[1])}: {text}"
        case "min" | "max":
            extreme = "smallest" if node.function == "min" else "largest"
            return f"no derivative where two of the arguments are equal and the {extreme}: {text}"
    return f"no derivative where {_zero_of(argument)}: {text}"


def gap_of_switch(pair: Pair) -> str:
    """The sentence for the place where a piecewise switches."""
    left, right = pair
    return f"no derivative taken where {to_text(left)} = {to_text(right)}: the piecewise switches there"


def _zero_of(node: Expression) -> str:
    """Where an expression is zero, in the simplest words: `x = 2` for x - 2."""
    match node:
        case Binary("-", left, right) if not isinstance(left, Number):
            return f"{to_text(left)} = {to_text(right)}"
        case Binary("-", left, right):
            return f"{to_text(right)} = {to_text(left)}"
        case Binary("+", left, right) if isinstance(right, Number) or not isinstance(left, Number | Binary):
            return f"{to_text(left)} = {to_text(Negate(right))}"
    return f"{to_text(node)} = 0"


def switching_pairs(node: Piecewise, depends: Callable[[Expression], bool]) -> list[Pair]:
    """The pairs of operands at whose equality a condition switches, of those that depend on the unknown."""
    pairs: list[Pair] = []
    waiting: list[Condition] = [condition for condition, _ in reversed(node.branches)]
    while waiting:
        condition = waiting.pop()
        match condition:
            case Comparison():
                neighbours = zip(condition.operands, condition.operands[1:], strict=False)
                pairs += [(a, b) for a, b in neighbours if depends(a) or depends(b)]
            case Not():
                waiting.append(condition.operand)
            case Junction():
                waiting.extend(reversed(condition.operands))
    distinct: dict[frozenset[Expression], Pair] = {}
    for pair in pairs:
        distinct.setdefault(frozenset(pair), pair)
    return list(distinct.values())


def kept_apart(condition: Condition) -> frozenset[Pair]:
    """The pairs of operands that cannot be equal where the condition holds."""
    match condition:
        case Comparison() if len(condition.relations) == 1 and condition.relations[0] in _OPEN:
            return frozenset({(condition.operands[0], condition.operands[1])})
        case Junction("and", operands):
            return frozenset().union(*map(kept_apart, operands))
    return frozenset()


def leaves_its_switches_out(node: Piecewise) -> bool:
    """Whether no branch holds where the piecewise switches, as in a derivative that was made here.

    So it is when the conditions exclude each other and each, where it holds, holds around the place too.
    """
    conditions = [condition for condition, _ in node.branches]
    if node.otherwise is not None or not all(map(_is_open, conditions)):
        return False
    return all(_exclude(first, second) for first, second in combinations(conditions, 2))


def _exclude(first: Condition, second: Condition) -> bool:
    """Whether two conditions ask for the opposite order of the same pair."""
    return any((b, a) in _ordered(second) for a, b in _ordered(first))


def _ordered(condition: Condition) -> frozenset[Pair]:
    """The pairs whose first operand is below the second where the condition holds."""
    match condition:
        case Comparison((a, b), ("<",)):
            return frozenset({(a, b)})
        case Comparison((a, b), (">",)):
            return frozenset({(b, a)})
        case Junction("and", operands):
            return frozenset().union(*map(_ordered, operands))
    return frozenset()


def two_sides(node: Piecewise) -> tuple[Condition, Condition] | None:
    """Conditions for both sides of a piecewise of one comparison and otherwise; None for any other piecewise."""
    condition = node.branches[0][0]
    if len(node.branches) != 1 or node.otherwise is None or not isinstance(condition, Comparison):
        return None
    if len(condition.relations) != 1 or condition.relations[0] not in _SIDES:
        return None
    left, right = condition.operands
    first, second = _SIDES[condition.relations[0]]
    return compared(left, first, right), compared(left, second, right)


def guard(pairs: Sequence[Pair]) -> Condition:
    """Beside all the places where the pairs are equal."""
    return joined("and", [compared(a, "!=", b) for a, b in pairs])


def any_holds(conditions: Sequence[Condition]) -> Condition:
    """That one of the conditions holds, in short where they are the two sides of one place."""
    match conditions:
        case [Comparison((a, b)) as first, Comparison(operands) as last] if operands == (a, b) and _exclude(
            first, last
        ):
            return compared(a, "!=", b)
    return joined("or", conditions)


def _is_open(condition: Condition) -> bool:
    """Whether a condition that holds at a point holds around it (of continuous operands)."""
    match condition:
        case Comparison():
            return all(relation in _OPEN for relation in condition.relations)
        case Junction():
            return all(_is_open(operand) for operand in condition.operands)
        case Not():
            return False
