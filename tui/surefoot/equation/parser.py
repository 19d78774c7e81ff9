"""Text of the equation language -> tree, as written.

Operator precedence on two explicit stacks (operands and operators) a context, and an explicit stack of contexts (a
parenthesis, a call, a piecewise): nothing here recurses, so no text can exhaust the interpreter's stack.

Precedence, loosest first: or, and, not, comparisons, + and -, * and /, sign, ^ (right-associative).
"""

from __future__ import annotations

from collections.abc import Callable
from contextlib import suppress
from dataclasses import dataclass, field, replace
from typing import Any, cast

from surefoot.equation.functions import FUNCTIONS, WORDS
from surefoot.equation.refusals import (
    ON_LINES,
    Context,
    Place,
    Wanted,
    fail,
    refuse_arity,
    refuse_behind_value,
    refuse_call,
    refuse_condition,
    refuse_instead_of_value,
    refuse_log,
    refuse_table,
    refuse_value,
    refuse_word,
)
from surefoot.equation.tokens import Token, tokenize
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
    Not,
    Number,
    Piecewise,
)
from surefoot.errors import EquationError

MAX_DEPTH = 200
"""Height that a tree may have, and levels of parentheses that a text may have."""

_OR, _AND, _NOT, _COMPARE, _ADD, _MULTIPLY, _SIGN, _POWER = range(1, 9)
_PRECEDENCE = {
    "or": _OR,
    "and": _AND,
    **dict.fromkeys(("<", "<=", ">", ">=", "==", "!="), _COMPARE),
    **dict.fromkeys("+-", _ADD),
    **dict.fromkeys("*/", _MULTIPLY),
    "^": _POWER,
}


def parse_equation(text: str) -> Equation:
    """The tree of `left = right`, or of an expression meant to be zero.

    Raises:
        EquationError: with the line and column, and what would be accepted.
    """
    parser = _Parser(text, "equation")
    last = parser.parse()
    left = last if parser.left is None else parser.left
    right = None if parser.left is None else parser.value(last)
    return Equation(parser.value(left), right, left.start.column)


def parse_expression(text: str) -> Expression:
    """The tree of an expression. Raises EquationError as `parse_equation` does; `=` is refused."""
    parser = _Parser(text, "expression")
    return parser.value(parser.parse())


def parse_condition(text: str) -> Condition:
    """The tree of a condition. Raises EquationError as `parse_equation` does; `=` is refused."""
    parser = _Parser(text, "condition")
    return parser.condition(parser.parse())


@dataclass(frozen=True, slots=True)
class _Part:
    """A finished subtree, its height, and the token where it begins."""

    node: Expression | Condition
    height: int
    start: Token


@dataclass(slots=True)
class _Operator:
    """An operator waiting for its right operand. Chains (a < b < c, a and b and c) gather several tokens."""

    precedence: int
    tokens: list[Token]
    prefix: bool = False


@dataclass(slots=True)
class _Context:
    """What is open: the text itself, or a parenthesis with what it belongs to.

    Attributes:
        opener: the token of the parenthesis, the function's name, or `piecewise`.
        finished: arguments of a call; conditions and values in turn of a piecewise.
        table: name of the table.
        otherwise: the branch in hand is the last one.
    """

    kind: Context
    opener: Token
    operands: list[_Part] = field(default_factory=list)
    operators: list[_Operator] = field(default_factory=list)
    finished: list[_Part] = field(default_factory=list)
    table: str = ""
    otherwise: bool = False


class _Parser:
    """One parse of one text."""

    def __init__(self, text: str, wanted: Wanted) -> None:
        self._tokens = tokenize(text)
        self._before: Token | None = None
        self._token = next(self._tokens)
        self._wanted = wanted
        self._contexts = [_Context("text", self._token)]
        self.left: _Part | None = None

    def parse(self) -> _Part:
        """Reads the whole text; what stands left of `=` goes to `left`."""
        while True:
            self._read_operand()
            while self._token.is_symbol(")"):
                self._close()
            if self._token.kind == "end" and len(self._contexts) == 1:
                return self._finish()
            self._read_operator()

    # Tokens

    def _advance(self) -> Token:
        token = self._token
        self._before = token
        if token.kind != "end":
            self._token = next(self._tokens)
        return token

    def _open(self, kind: Context, opener: Token) -> _Context:
        """Goes one level deeper; the parenthesis is the token in hand."""
        parenthesis = self._advance()
        if len(self._contexts) > MAX_DEPTH:
            fail(parenthesis, f"nested deeper than {MAX_DEPTH} levels", ON_LINES)
        context = _Context(kind, opener)
        self._contexts.append(context)
        return context

    # Operands

    def _read_operand(self) -> None:
        """Reads one operand or everything up to the first operand inside a parenthesis: signs, `not` and openings."""
        while True:
            context, token = self._contexts[-1], self._token
            if token.kind == "number":
                self._advance()
                context.operands.append(_Part(Number(token.text, token.single, token.column), 1, token))
                return
            if token.is_symbol("("):
                self._open("parenthesis", token)
            elif token.is_symbol("-", "+"):
                context.operators.append(_Operator(_SIGN, [self._advance()], prefix=True))
            elif token.kind == "name" and token.text == "not":
                context.operators.append(_Operator(_NOT, [self._advance()], prefix=True))
            elif token.kind == "name" and self._read_name(context):
                return
            elif token.kind != "name":
                refuse_instead_of_value(self._place())

    def _read_name(self, context: _Context) -> bool:
        """Reads a name; whether it was a whole operand (a function leaves its first argument to be read)."""
        token = self._advance()
        word, opened = token.text, self._token.is_symbol("(")
        if word == "log":
            refuse_log(token)
        if word == "otherwise" and _at_branch(context) and not (context.operands or context.operators):
            self._begin_otherwise(context, token)
        elif word == "piecewise" and opened:
            self._open("piecewise", token)
        elif word == "table" and opened:
            self._open_table(token)
        elif word in FUNCTIONS and opened:
            self._open("call", token)
        elif word in FUNCTIONS or word in WORDS:
            refuse_word(token)
        elif opened:
            refuse_call(token)
        else:
            context.operands.append(_Part(Name(word, token.column), 1, token))
            return True
        return False

    def _begin_otherwise(self, context: _Context, token: Token) -> None:
        if not context.finished:
            fail(token, "otherwise stands first", "write a condition and its value before it")
        if not self._token.is_symbol(":"):
            fail(self._token, "otherwise needs a colon", "write otherwise: value")
        self._advance()
        context.otherwise = True

    def _open_table(self, token: Token) -> None:
        context = self._open("table", token)
        if self._token.kind != "string":
            refuse_table(self._token, "name")
        context.table = self._advance().text
        if not self._token.is_symbol(","):
            refuse_table(self._token, "comma")
        self._advance()

    # Operators

    def _read_operator(self) -> None:
        """Reads what stands behind a whole operand and asks for another one."""
        context, token = self._contexts[-1], self._token
        if token.kind in ("symbol", "name") and token.text in _PRECEDENCE:
            self._push(context, self._advance())
        elif token.is_symbol("=") and self._wanted == "equation" and context.kind == "text" and self.left is None:
            self._advance()
            self.left = self._finish()
        elif _parts_end(context, token):
            context.finished.append(self._finish())
            self._advance()
        else:
            refuse_behind_value(self._place())

    def _push(self, context: _Context, token: Token) -> None:
        precedence = _PRECEDENCE[token.text]
        right_associative = precedence == _POWER
        operators = context.operators
        while operators and operators[-1].precedence > precedence:
            self._reduce(context)
        if operators and operators[-1].precedence == precedence and not right_associative:
            if precedence in (_OR, _AND, _COMPARE):
                operators[-1].tokens.append(token)
                return
            self._reduce(context)
        operators.append(_Operator(precedence, [token]))

    def _reduce(self, context: _Context) -> None:
        """Applies the operator on top of the stack to its operands."""
        operator = context.operators.pop()
        if operator.prefix:
            parts = [context.operands.pop()]
        else:
            count = len(operator.tokens) + 1
            parts = context.operands[-count:]
            del context.operands[-count:]
        start = operator.tokens[0] if operator.prefix else parts[0].start
        if operator.prefix and operator.tokens[0].text == "+":
            self.value(parts[0])
            context.operands.append(replace(parts[0], start=start))
        else:
            context.operands.append(_built(self._node(operator, parts, start), parts, start))

    def _node(self, operator: _Operator, parts: list[_Part], start: Token) -> Expression | Condition:
        first = operator.tokens[0]
        if operator.precedence == _NOT:
            return Not(self.condition(parts[0]), first.column)
        if operator.precedence in (_OR, _AND):
            conditions = tuple(self.condition(part) for part in parts)
            return Junction(cast(Any, first.text), conditions, start.column)
        values = tuple(self.value(part) for part in parts)
        if operator.precedence == _COMPARE:
            relations = tuple(cast(Any, token.text) for token in operator.tokens)
            return Comparison(values, relations, start.column)
        if operator.prefix:
            return Negate(values[0], first.column)
        return Binary(cast(Any, first.text), values[0], values[1], first.column)

    def _finish(self) -> _Part:
        """The one operand that the innermost context comes to."""
        context = self._contexts[-1]
        while context.operators:
            self._reduce(context)
        return context.operands.pop()

    # Closing

    def _close(self) -> None:
        """Takes `)`: the innermost context becomes an operand of the one around it."""
        context = self._contexts[-1]
        if context.kind == "text":
            refuse_behind_value(self._place())
        if _at_branch(context) and not context.otherwise:
            fail(self._token, "the last branch has no value", "write condition: value, or otherwise: value")
        context.finished.append(self._finish())
        self._contexts.pop()
        build: dict[str, Callable[[_Context], _Part]] = {
            "parenthesis": lambda context: replace(context.finished[0], start=context.opener),
            "call": self._call,
            "table": self._lookup,
            "piecewise": self._piecewise,
        }
        part = build[context.kind](context)
        self._advance()
        self._contexts[-1].operands.append(part)

    def _call(self, context: _Context) -> _Part:
        opener, count = context.opener, len(context.finished)
        row = FUNCTIONS[opener.text]
        if not row.accepts(count):
            pairs = zip(context.finished, context.finished[1:], strict=False)
            refuse_arity(opener, row, count, any(_looks_decimal(left, right) for left, right in pairs))
        arguments = tuple(self.value(part) for part in context.finished)
        return _built(Call(row.name, arguments, opener.column), context.finished, opener)

    def _lookup(self, context: _Context) -> _Part:
        node = Lookup(context.table, self.value(context.finished[0]), context.opener.column)
        return _built(node, context.finished, context.opener)

    def _piecewise(self, context: _Context) -> _Part:
        parts = context.finished
        last = self.value(parts[-1]) if context.otherwise else None
        pairs = zip(parts[: len(parts) // 2 * 2 : 2], parts[1::2], strict=True)
        branches = tuple((self.condition(condition), self.value(value)) for condition, value in pairs)
        return _built(Piecewise(branches, last, context.opener.column), parts, context.opener)

    # Sorts

    def value(self, part: _Part) -> Expression:
        """The part as an expression. Raises EquationError for a condition."""
        if isinstance(part.node, Comparison | Not | Junction):
            refuse_condition(part.start, isinstance(part.node, Comparison) and part.node.relations == ("==",))
        return part.node

    def condition(self, part: _Part) -> Condition:
        """The part as a condition. Raises EquationError for an expression."""
        if not isinstance(part.node, Comparison | Not | Junction):
            refuse_value(part.start)
        return part.node

    # Refusals

    def _place(self) -> Place:
        context = self._contexts[-1]
        after: Token | None = None
        if self._token.is_symbol(","):
            with suppress(EquationError):  # what is wrong further on can wait
                after = next(self._tokens)
        return Place(
            self._token, self._before, after, self._wanted, context.kind, context.opener, last_branch=context.otherwise
        )


def _built(node: Expression | Condition, parts: list[_Part], start: Token) -> _Part:
    """A new subtree over `parts`. Raises EquationError when it is too high."""
    height = 1 + max(part.height for part in parts)
    if height > MAX_DEPTH:
        fail(start, f"more than {MAX_DEPTH} operations build upon each other", ON_LINES)
    return _Part(node, height, start)


def _at_branch(context: _Context) -> bool:
    """Whether the context is a piecewise that expects a condition (or `otherwise`)."""
    return context.kind == "piecewise" and len(context.finished) % 2 == 0


def _parts_end(context: _Context, token: Token) -> bool:
    """Whether the token ends an argument, or the condition or value of a branch that is not the last."""
    if context.kind == "piecewise":
        return not context.otherwise and token.is_symbol(":" if _at_branch(context) else ";")
    return context.kind == "call" and token.is_symbol(",")


def _looks_decimal(left: _Part, right: _Part) -> bool:
    """Whether two arguments look like one number with a decimal comma: `0,5`."""
    a, b = left.node, right.node
    return isinstance(a, Number) and isinstance(b, Number) and b.text.isdigit() and left.start.end + 1 == b.column
