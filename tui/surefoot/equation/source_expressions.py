"""An expression of Fortran, C or Python -> tree of the equation language. Nothing of it is ever run.

Precedence climbing. Levels of nesting are counted, so that no text can exhaust the interpreter's stack.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from types import MappingProxyType
from typing import cast

from surefoot.equation.source_operands import ADD, AND, ANY, COMPARE, MULTIPLY, OR, TIGHT, OperandReader
from surefoot.equation.source_parts import NotRead, Part, Truth, fail
from surefoot.equation.source_tokens import Kind, SourceToken
from surefoot.equation.tree import Binary, Call, Comparison, Junction, Operator, Relation
from surefoot.equation.wording import to_text

_DEEPEST = 150

_RELATIONS: Mapping[str, Relation] = MappingProxyType(
    {
        **{relation: relation for relation in ("<", "<=", ">", ">=", "==", "!=")},
        "/=": "!=",
        ".lt.": "<",
        ".le.": "<=",
        ".gt.": ">",
        ".ge.": ">=",
        ".eq.": "==",
        ".ne.": "!=",
    }
)
_OPERATORS: Mapping[str, int] = MappingProxyType(
    {
        "?": ANY,
        **dict.fromkeys(("||", ".or."), OR),
        **dict.fromkeys(("&&", ".and."), AND),
        **dict.fromkeys("+-", ADD),
        **dict.fromkeys("*/", MULTIPLY),
        "**": TIGHT,
    }
)
_PYTHON_OPERATORS: Mapping[str, int] = MappingProxyType({"if": ANY, "or": OR, "and": AND, "//": MULTIPLY})
_WHOLE_POWER = 'Fortran multiplies for a whole power; so does integer_power = "multiply"'


class ExpressionReader(OperandReader):
    """Reads the expression that the tokens hold."""

    _depth = 0

    def value(self) -> Part:
        """The expression. Raises EquationError where it is not one, NotRead where this language has nothing for it."""
        part = self._value(ANY)
        if self._token.kind != "end":
            raise self._unexpected()
        return part

    def _expression(self, floor: int) -> Part | Truth:
        """An expression of operators that bind at least as tightly as `floor`."""
        self._depth += 1
        if self._depth > _DEEPEST:
            fail(self._token, f"more than {_DEEPEST} levels of nesting", "write it on several lines")
        left = self._prefix()
        while (precedence := self._precedence()) >= floor:
            left = self._continued(left, precedence)
        self._depth -= 1
        return left

    def _precedence(self) -> int:
        """How tightly the operator in hand binds; 0 when it is none."""
        token = self._token
        if token.kind not in ("symbol", "name"):
            return 0
        word = token.text.lower() if self._language == "fortran" else token.text
        if self._language == "python" and word in _PYTHON_OPERATORS:
            return _PYTHON_OPERATORS[word]
        if token.kind == "name":
            return 0
        if word in _RELATIONS and not (word == "/=" and self._language != "fortran"):
            return COMPARE
        return _OPERATORS.get(word, 0)

    def _continued(self, left: Part | Truth, precedence: int) -> Part | Truth:
        token = self._next()
        if precedence == ANY:
            return self._choice(left, token)
        if precedence in (OR, AND):
            return self._junction(left, precedence)
        if isinstance(left, Truth):
            raise NotRead("a condition is used as a number")
        if precedence == COMPARE:
            return self._comparison(left, token)
        right = self._value(precedence + (precedence != TIGHT))
        if token.text == "//":
            return self._floor_division(left, right)
        operator = cast(Operator, {"**": "^"}.get(token.text, token.text))
        if operator == "^":
            self._note_whole_power(left, right)
        return self._arithmetic.binary(operator, left, right)

    def _floor_division(self, left: Part, right: Part) -> Part:
        node = Call("floor", (Binary("/", left.node, right.node),))
        made = self._arithmetic.built(node, (left, right), left.first, right.stop, Kind.REAL)
        self._readings.add(left.first, self._written(left.first), to_text(node), "// rounds the quotient down")
        return replace(made, height=made.height + 1)

    def _note_whole_power(self, left: Part, right: Part) -> None:
        if self._language == "fortran" and left.whole is None and right.whole is not None and abs(right.whole) > 2:
            node = Binary("^", left.node, right.node)
            self._readings.add(left.first, self._written(left.first), to_text(node), _WHOLE_POWER)

    def _comparison(self, left: Part, token: SourceToken) -> Truth:
        parts, relations = [left], []
        while True:
            relations.append(_RELATIONS[token.text.lower()])
            parts.append(self._value(ADD))
            if self._precedence() != COMPARE:
                break
            token = self._next()
            if self._language != "python":
                fail(token, "a chain of comparisons means something else in this language", "join two with and")
        node = Comparison(tuple(part.node for part in parts), tuple(relations))
        return self._condition(node, parts, left.first)

    def _junction(self, left: Part | Truth, precedence: int) -> Truth:
        if isinstance(left, Part):
            raise NotRead("a number is used as a condition")
        parts = [left, self._truth(precedence + 1)]
        while self._precedence() == precedence:
            self._next()
            parts.append(self._truth(precedence + 1))
        node = Junction("or" if precedence == OR else "and", tuple(part.node for part in parts))
        return self._condition(node, parts, left.first)

    def _choice(self, left: Part | Truth, token: SourceToken) -> Part:
        """`condition ? value : other` of C, `value if condition else other` of Python."""
        if token.text == "?":
            if isinstance(left, Part):
                raise NotRead("a number is used as a condition")
            condition, value = left, self._value(ANY)
            self._expects(":", token)
        else:
            if isinstance(left, Truth):
                raise NotRead("a condition is used as a number")
            condition, value = self._truth(OR), left
            if not self._token.is_word("else"):
                raise self._unexpected()
            self._next()
        return self._chosen(condition, value, self._value(ANY), left.first)
