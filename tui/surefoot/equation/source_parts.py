"""Parts of an expression of the source while it is read, and the arithmetic that the source does with them."""

from __future__ import annotations

from dataclasses import dataclass, replace
from decimal import Decimal
from typing import NoReturn

from surefoot.equation.parser import MAX_DEPTH
from surefoot.equation.pasted import Reading
from surefoot.equation.source_functions import ROUNDED_TO_WHOLE, dropped_fraction
from surefoot.equation.source_tokens import Kind, Language, SourceToken, number_of, rounded_to_single, single_text
from surefoot.equation.tree import Binary, Condition, Expression, Negate, Number, Operator
from surefoot.equation.wording import to_text
from surefoot.errors import EquationError

MAX_NODES = 5000
_LARGEST_WHOLE = 2**31 - 1
_LARGEST_EXPONENT = 64
IN_SINGLE = "computed in single precision in the source"
_WHOLE_QUOTIENT = "a quotient of integers drops its fraction"
_MAYBE_WHOLE = "read as an exact quotient; if both are integers in the source, it drops its fraction"
_OVERFLOWS = "beyond an integer of 32 bits in the source"
_ON_LINES = "write it on several lines"


class NotRead(Exception):  # carries the reason past the expression to the line, which is left out
    """An expression with something that the equation language does not have."""

    def __init__(self, why: str) -> None:
        self.why = why
        super().__init__(why)


@dataclass(frozen=True, slots=True)
class Part:
    """A finished subexpression.

    Attributes:
        node: its tree.
        kind: the arithmetic that it takes part in.
        first: its first token; `stop` is the end of its text in the statement.
        whole: its value, if it is made of whole literals alone.
        single: its value in binary32, if it is made of literals alone.
        height, nodes: of the tree.
    """

    node: Expression
    kind: Kind
    first: SourceToken
    stop: int
    whole: int | None = None
    single: float | None = None
    height: int = 1
    nodes: int = 1


@dataclass(frozen=True, slots=True)
class Truth:
    """A finished condition."""

    node: Condition
    first: SourceToken
    stop: int
    height: int
    nodes: int


class Readings:
    """The readings so far; equal ones at several places are one with a count."""

    def __init__(self) -> None:
        self._places: dict[tuple[str, str, str], list[tuple[int, int]]] = {}

    def add(self, token: SourceToken, as_written: str, read_as: str, why: str) -> None:
        self._places.setdefault((" ".join(as_written.split()), read_as, why), []).append((token.line, token.column))

    def all(self) -> tuple[Reading, ...]:
        """In the order of their first places."""
        found = []
        for (as_written, read_as, why), places in self._places.items():
            count = f" ({len(places)} places)" if len(places) > 1 else ""
            found.append(Reading(*places[0], as_written, read_as, why + count))
        return tuple(sorted(found, key=lambda reading: (reading.line, reading.column)))


def fail(token: SourceToken, message: str, hint: str = "") -> NoReturn:
    raise EquationError(message, line=token.line, column=token.column, hint=hint)


class SourceArithmetic:
    """Builds parts as the source computes them, and says where that differs from what the text seems to say."""

    def __init__(self, text: str, language: Language, readings: Readings) -> None:
        self._text, self._language, self._readings = text, language, readings

    def written(self, first: SourceToken, stop: int) -> str:
        return self._text[first.start : stop]

    def literal(self, token: SourceToken) -> Part:
        number = number_of(token.text, self._language)
        if number is None:
            fail(token, f"{token.text} is not a number that can be read")
        if float(number.text) == float("inf"):
            fail(token, f"{token.text} is beyond the range of binary64")
        if number.kind is Kind.SINGLE:
            return self._single_literal(token, number.text, number.why)
        if number.why:
            self._readings.add(token, token.text, number.text, number.why)
        whole = int(number.text) if number.kind is Kind.WHOLE else None
        kind = Kind.REAL if self._language == "python" else number.kind
        single = rounded_to_single(float(number.text)) if kind is Kind.WHOLE else None
        return Part(Number(number.text), kind, token, token.stop, whole, single)

    def _single_literal(self, token: SourceToken, text: str, why: str) -> Part:
        value = rounded_to_single(float(text))
        if value is None:
            fail(token, f"{token.text} is beyond the range of single precision")
        exact = Decimal(text) == Decimal(value) if value else not set(text.partition("e")[0]) & set("123456789")
        if not exact:
            self._readings.add(token, token.text, f"{text}f", why)
        return Part(Number(text, single=not exact), Kind.SINGLE, token, token.stop, single=value)

    def negated(self, sign: SourceToken, part: Part) -> Part:
        made = self.built(Negate(part.node), (part,), sign, part.stop, part.kind)
        return replace(
            made,
            whole=None if part.whole is None else -part.whole,
            single=None if part.single is None else -part.single,
        )

    def binary(self, operator: Operator, left: Part, right: Part) -> Part:
        """The operation as the source does it, in whole numbers or in single precision where it does."""
        kind = joined_kind(left.kind, right.kind)
        plain = self.built(Binary(operator, left.node, right.node), (left, right), left.first, right.stop, kind)
        if kind is Kind.WHOLE:
            return self._whole(operator, left, right, plain)
        if operator == "/" and kind is Kind.MAYBE_WHOLE:
            self._say(plain, plain.node, _MAYBE_WHOLE)
            return replace(plain, kind=Kind.REAL)
        if kind is Kind.SINGLE and left.single is not None and right.single is not None:
            return self._single(operator, left.single, right.single, plain)
        return plain

    def _whole(self, operator: Operator, left: Part, right: Part, plain: Part) -> Part:
        if left.whole is None or right.whole is None:
            needs_words = operator == "/" or (operator == "^" and right.whole is not None and right.whole < 0)
            return self.whole_towards_zero(plain, _WHOLE_QUOTIENT) if needs_words else plain
        value = _whole_value(operator, left.whole, right.whole)
        if value is None or abs(value) > _LARGEST_WHOLE:
            if operator == "/":
                fail(right.first, "division by zero")
            self._say(plain, plain.node, _OVERFLOWS)
            return plain
        result = replace(plain, whole=value, single=rounded_to_single(float(value)))
        divides = operator == "/" or (operator == "^" and right.whole < 0)
        if not divides:
            return result
        number: Expression = Number(str(abs(value)))
        node = Negate(number) if value < 0 else number
        self._say(plain, node, _WHOLE_QUOTIENT)
        return replace(result, node=node, height=2, nodes=2)

    def whole_towards_zero(self, part: Part, why: str = ROUNDED_TO_WHOLE) -> Part:
        """The part without its fraction."""
        if isinstance(part.node, Number):
            whole = Number(str(int(float(part.node.text))))
            self._say(part, whole, why)
            return replace(part, node=whole, kind=Kind.WHOLE, whole=int(whole.text), single=None)
        node = dropped_fraction(part.node)
        made = self.built(node, (part, part), part.first, part.stop, Kind.WHOLE)
        self._say(part, node, why)
        return replace(made, height=made.height + 2)

    def _single(self, operator: Operator, left: float, right: float, plain: Part) -> Part:
        """An operation on literals of single precision, which the source rounds to single precision."""
        exact = _float_value(operator, left, right)
        return plain if exact is None else self.single_constant(exact, plain)

    def single_constant(self, exact: float, plain: Part) -> Part:
        """A value of literals of single precision; `exact` is its correctly rounded binary64."""
        value = rounded_to_single(exact)
        if value is None:
            return plain
        if value == exact:
            return replace(plain, single=value)
        number: Expression = Number(single_text(abs(value)), single=True)
        node = Negate(number) if value < 0 else number
        self._say(plain, node, IN_SINGLE)
        return replace(plain, node=node, single=value, height=2, nodes=2)

    def built(
        self, node: Expression, parts: tuple[Part | Truth, ...], first: SourceToken, stop: int, kind: Kind
    ) -> Part:
        """A part over others. Raises EquationError when it gets too high or too large."""
        height = 1 + max(part.height for part in parts)
        nodes = 1 + sum(part.nodes for part in parts)
        refuse_size(first, height, nodes)
        return Part(node, kind, first, stop, height=height, nodes=nodes)

    def _say(self, part: Part, node: Expression, why: str) -> None:
        self._readings.add(part.first, self.written(part.first, part.stop), to_text(node), why)


def refuse_size(token: SourceToken, height: int, nodes: int) -> None:
    if height + 4 > MAX_DEPTH or nodes > MAX_NODES:
        fail(token, "too many operations build upon each other", _ON_LINES)


def joined_kind(left: Kind, right: Kind) -> Kind:
    """The arithmetic of an operation between two kinds."""
    kinds = {left, right}
    if Kind.REAL in kinds or kinds == {Kind.MAYBE_WHOLE, Kind.SINGLE}:
        return Kind.REAL
    if Kind.SINGLE in kinds:
        return Kind.SINGLE
    return Kind.MAYBE_WHOLE if Kind.MAYBE_WHOLE in kinds else Kind.WHOLE


def _whole_value(operator: Operator, left: int, right: int) -> int | None:
    """The value in whole numbers towards zero; None when there is none, or a very large one."""
    match operator:
        case "+":
            return left + right
        case "-":
            return left - right
        case "*":
            return left * right
        case "/":
            return None if right == 0 else (abs(left) // abs(right)) * (1 if (left < 0) == (right < 0) else -1)
    if right < 0:
        powers = {0: None, 1: 1, -1: -1 if right % 2 else 1}
        return powers.get(left, 0)
    return left**right if right <= _LARGEST_EXPONENT or left in (-1, 0, 1) else None


def _float_value(operator: Operator, left: float, right: float) -> float | None:
    """The value in binary64, which is the exact one rounded once more than binary32 needs; None for powers and x/0."""
    match operator:
        case "+":
            return left + right
        case "-":
            return left - right
        case "*":
            return left * right
        case "/" if right != 0:
            return left / right
    return None
