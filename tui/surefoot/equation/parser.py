"""Text of the equation language -> tree, as written.

Operator precedence on two explicit stacks (operands and operators) a context, and an explicit stack of contexts (a
parenthesis, a call, a piecewise): nothing here recurses, so no text can exhaust the interpreter's stack.

Precedence, loosest first: or, and, not, comparisons, + and -, * and /, sign, ^ (right-associative).
"""

from __future__ import annotations

from contextlib import suppress
from dataclasses import dataclass, field, replace

from surefoot.equation.functions import FUNCTIONS, WORDS
from surefoot.equation.parts import (
    MAX_DEPTH,
    Part,
    binary,
    call,
    chain,
    condition_of,
    lookup,
    negated,
    piecewise,
    signed,
    value_of,
)
from surefoot.equation.refusals import (
    ON_LINES,
    Context,
    Place,
    Wanted,
    fail,
    refuse_behind_value,
    refuse_call,
    refuse_instead_of_value,
    refuse_log,
    refuse_table,
    refuse_word,
)
from surefoot.equation.tokens import MAX_TEXT, Token, tokenize
from surefoot.equation.tree import Condition, Equation, Expression, Name, Number
from surefoot.errors import EquationError

__all__ = ["MAX_DEPTH", "MAX_TEXT", "parse_condition", "parse_equation", "parse_expression"]

_OR, _AND, _NOT, _COMPARE, _ADD, _MULTIPLY, _SIGN, _POWER = range(1, 9)
_PRECEDENCE = {
    "or": _OR,
    "and": _AND,
    **dict.fromkeys(("<", "<=", ">", ">=", "==", "!="), _COMPARE),
    **dict.fromkeys("+-", _ADD),
    **dict.fromkeys("*/", _MULTIPLY),
    "^": _POWER,
}
_CHAINED = frozenset({_OR, _AND, _COMPARE})


def parse_equation(text: str) -> Equation:
    """The tree of `left = right`, or of an expression meant to be zero.

    Raises:
        EquationError: with the line and column, and what would be accepted.
    """
    parser = _Parser(text, "equation")
    last = parser.parse()
    left = last if parser.left is None else parser.left
    right = None if parser.left is None else value_of(last)
    return Equation(value_of(left), right, left.start.column)


def parse_expression(text: str) -> Expression:
    """The tree of an expression. Raises EquationError as `parse_equation` does; `=` is refused."""
    parser = _Parser(text, "expression")
    return value_of(parser.parse())


def parse_condition(text: str) -> Condition:
    """The tree of a condition. Raises EquationError as `parse_equation` does; `=` is refused."""
    parser = _Parser(text, "condition")
    return condition_of(parser.parse())


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
    operands: list[Part] = field(default_factory=list)
    operators: list[_Operator] = field(default_factory=list)
    finished: list[Part] = field(default_factory=list)
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
        self.left: Part | None = None

    def parse(self) -> Part:
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
                context.operands.append(Part(Number(token.text, token.single, token.column), 1, token))
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
            if context.otherwise:
                fail(token, "a second otherwise", "write the value of the last branch")
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
            context.operands.append(Part(Name(word, token.column), 1, token))
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
            if precedence in _CHAINED:
                operators[-1].tokens.append(token)
                return
            self._reduce(context)
        operators.append(_Operator(precedence, [token]))

    def _reduce(self, context: _Context) -> None:
        """Applies the operator on top of the stack to its operands."""
        operator, operands = context.operators.pop(), context.operands
        first, last = operator.tokens[0], operands.pop()
        if operator.prefix:
            part = negated(first, last) if operator.precedence == _NOT else signed(first, last)
        elif operator.precedence in _CHAINED:
            count = len(operator.tokens)
            part = chain(operator.tokens, [*operands[-count:], last])
            del operands[-count:]
        else:
            part = binary(first, operands.pop(), last)
        operands.append(part)

    def _finish(self) -> Part:
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
        part = _closed(context)
        self._advance()
        self._contexts[-1].operands.append(part)

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


def _closed(context: _Context) -> Part:
    """What a context comes to when its parenthesis closes."""
    opener, finished = context.opener, context.finished
    if context.kind == "call":
        return call(opener, finished)
    if context.kind == "table":
        return lookup(opener, context.table, finished[0])
    if context.kind == "piecewise":
        return piecewise(opener, finished, context.otherwise)
    return replace(finished[0], start=opener)


def _at_branch(context: _Context) -> bool:
    """Whether the context is a piecewise that expects a condition (or `otherwise`)."""
    return context.kind == "piecewise" and len(context.finished) % 2 == 0


def _parts_end(context: _Context, token: Token) -> bool:
    """Whether the token ends an argument, or the condition or value of a branch that is not the last."""
    if context.kind == "piecewise":
        return not context.otherwise and token.is_symbol(":" if _at_branch(context) else ";")
    return context.kind == "call" and token.is_symbol(",")
