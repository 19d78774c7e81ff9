"""Tree -> callable, for any arithmetic: the operations of the text, in its order, and no others.

A callable takes the values of the names, in slots. It is built from the leaves up out of small closures, one a node, so
that nothing here recurses; a call goes as deep as the tree is high. Text of a failing subexpression is made only when
it fails.
"""

from __future__ import annotations

import operator
from collections.abc import Callable, Iterator, Mapping, Sequence
from typing import Any, NoReturn, TypeAlias, cast

from surefoot.equation.arithmetic import OperationFailed, Operations
from surefoot.equation.functions import CONSTANTS
from surefoot.equation.results import EvaluationFailed, Failure, FailureKind, Real
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
from surefoot.equation.wording import children, to_text

Values: TypeAlias = Sequence[Real]
Evaluator: TypeAlias = Callable[[Values], Real]
Decider: TypeAlias = Callable[[Values], bool]

_RELATIONS: Mapping[str, Callable[[Real, Real], bool]] = {
    "<": operator.lt,
    "<=": operator.le,
    ">": operator.gt,
    ">=": operator.ge,
    "==": operator.eq,
    "!=": operator.ne,
}


def compile_expression(
    node: Expression,
    operations: Operations,
    slots: Mapping[str, int],
    *,
    encode: Callable[[Real], str] = str,
    definition: str = "",
) -> Evaluator:
    """A callable that evaluates the tree.

    Args:
        operations: the arithmetic.
        slots: place of each name's value in the sequence that the callable takes.
        encode: record text of a number, for the arguments of a failure.
        definition: the line that the tree stands in, for a failure.

    Returns:
        A callable that raises EvaluationFailed with the subexpression that failed and its arguments. Literals are
        converted now, once.
    """
    return cast(Evaluator, _Compiler(operations, slots, encode, definition).compiled(node))


def compile_condition(
    node: Condition,
    operations: Operations,
    slots: Mapping[str, int],
    *,
    encode: Callable[[Real], str] = str,
    definition: str = "",
) -> Decider:
    """A callable that decides the condition; it raises EvaluationFailed when an operand that it needs fails."""
    return cast(Decider, _Compiler(operations, slots, encode, definition).compiled(node))


class _Compiler:
    def __init__(
        self, operations: Operations, slots: Mapping[str, int], encode: Callable[[Real], str], definition: str
    ) -> None:
        self._operations, self._slots, self._encode, self._definition = operations, slots, encode, definition
        self._binary = {
            "+": operations.add,
            "-": operations.subtract,
            "*": operations.multiply,
            "/": operations.divide,
            "^": operations.power,
        }

    def compiled(self, root: Node) -> Callable[[Values], Any]:
        done: dict[int, Callable[[Values], Any]] = {}
        for node in _from_the_leaves(root):
            done[id(node)] = self._build(node, [done[id(child)] for child in children(node)])
        return done[id(root)]

    def _build(self, node: Node, parts: list[Any]) -> Callable[[Values], Any]:
        """The closure of a node, over the closures of its children."""
        match node:
            case Number():
                return self._constant(node, lambda: self._operations.literal(node.text, node.single))
            case Name() if node.name in CONSTANTS:
                return self._constant(node, self._implementation(node.name))
            case Name():
                return operator.itemgetter(self._slots[node.name])
            case Negate():
                return self._applied(node, self._operations.negate, parts)
            case Binary():
                return self._applied(node, self._binary[node.operator], parts)
            case Call():
                return self._applied(node, self._implementation(node.function), parts)
            case Lookup():
                return self._applied(node, _unavailable, parts)
            case Piecewise():
                return self._piecewise(node, parts)
            case Comparison():
                return _comparison(node, parts)
            case Not():
                return lambda values, part=parts[0]: not part(values)  # type: ignore[misc]
            case Junction():
                return _all_hold(parts) if node.word == "and" else _one_holds(parts)
            case Equation():
                raise TypeError("an equation has no value; its residual is left minus right")

    def _constant(self, node: Number | Name, number: Callable[[], Real]) -> Evaluator:
        try:
            value = number()
        except OperationFailed as failed:
            kind = failed.kind  # such as a literal beyond the range of binary32: known now, told when evaluated
            return lambda _values: self._fail(node, kind, ())
        return lambda _values: value

    def _implementation(self, name: str) -> Callable[..., Real]:
        return self._operations.functions.get(name, _unavailable)

    def _applied(self, node: Expression, operation: Callable[..., Real], parts: list[Evaluator]) -> Evaluator:
        """The operation on its operands, each evaluated once, from the left."""
        if len(parts) == 1:
            only = parts[0]

            def one(values: Values) -> Real:
                a = only(values)
                try:
                    return operation(a)
                except OperationFailed as failed:
                    self._fail(node, failed.kind, (a,))

            return one
        if len(parts) == 2:
            left, right = parts

            def two(values: Values) -> Real:
                a = left(values)
                b = right(values)
                try:
                    return operation(a, b)
                except OperationFailed as failed:
                    self._fail(node, failed.kind, (a, b))

            return two

        def several(values: Values) -> Real:
            arguments: list[Real] = []
            for part in parts:  # a comprehension would double the depth of the call
                arguments.append(part(values))
            try:
                return operation(*arguments)
            except OperationFailed as failed:
                self._fail(node, failed.kind, tuple(arguments))

        return several

    def _piecewise(self, node: Piecewise, parts: list[Any]) -> Evaluator:
        count = len(node.branches)
        branches = [(parts[2 * i], parts[2 * i + 1]) for i in range(count)]
        otherwise: Evaluator | None = parts[2 * count] if node.otherwise is not None else None

        def chosen(values: Values) -> Real:
            for holds, value in branches:
                if holds(values):
                    return cast(Real, value(values))
            if otherwise is None:
                self._fail(node, FailureKind.NO_BRANCH, ())
            return otherwise(values)

        return chosen

    def _fail(self, node: Expression, kind: str, arguments: tuple[Real, ...]) -> NoReturn:
        texts = tuple(self._encode(argument) for argument in arguments)
        failure = Failure(FailureKind(kind), to_text(node), texts, self._definition)
        raise EvaluationFailed(failure) from None


def _from_the_leaves(root: Node) -> Iterator[Node]:
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


def _unavailable(*_: Real) -> NoReturn:
    raise OperationFailed(FailureKind.UNAVAILABLE)


def _comparison(node: Comparison, parts: list[Evaluator]) -> Decider:
    """Every neighbouring pair compared from the left, each operand evaluated once, until one does not hold."""
    relations = [_RELATIONS[relation] for relation in node.relations]
    if len(parts) == 2:
        left, right, relation = parts[0], parts[1], relations[0]
        return lambda values: bool(relation(left(values), right(values)))

    def holds(values: Values) -> bool:
        a = parts[0](values)
        for relation, part in zip(relations, parts[1:], strict=True):
            b = part(values)
            if not relation(a, b):
                return False
            a = b
        return True

    return holds


def _all_hold(parts: list[Decider]) -> Decider:
    def holds(values: Values) -> bool:
        for part in parts:  # noqa: SIM110 - a generator would double the depth of the call
            if not part(values):
                return False
        return True

    return holds


def _one_holds(parts: list[Decider]) -> Decider:
    def holds(values: Values) -> bool:
        for part in parts:  # noqa: SIM110 - as above
            if part(values):
                return True
        return False

    return holds
