"""Statements -> steps: what each statement of a language is, without a word about its values.

Blocks that are not read (if, do, for, while) come as one step with what they assign, so that a name that changes in
one of them is not taken for what it was before.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import TypeAlias

from surefoot.equation.source_lines import Statement
from surefoot.equation.source_parts import fail
from surefoot.equation.source_tokens import Kind, Language, SourceToken, tokens_of

COMPOUND = frozenset({"+=", "-=", "*=", "/=", "%=", "**=", "//=", "^=", "|=", "&=", "<<=", ">>=", "@=", "++", "--"})
RESIDUAL_NAMES = frozenset({"res", "resid", "residual", "residuum", "eq", "eqn", "zero"})
"""Names, in small letters, that say that what they hold is to be zero."""

FUNCTION_NAMES = RESIDUAL_NAMES | {"f", "fx", "f_x", "fval", "func", "fun", "fcn", "err"}
"""Names that a residual often has, and other things too."""


@dataclass(frozen=True, slots=True)
class Line:
    """A statement with its tokens; the last one is of kind `end`."""

    statement: Statement
    tokens: tuple[SourceToken, ...]

    @classmethod
    def of(cls, statement: Statement, language: Language) -> Line:
        return cls(statement, tokens_of(statement, language))

    def word(self, place: int) -> str:
        """The text of a token in lower case; empty behind the end."""
        return self.tokens[place].text.lower() if place < len(self.tokens) else ""

    def cut(self, start: int, stop: int) -> Slice:
        """The tokens from one place to another."""
        at = self.tokens[stop]
        end = SourceToken("end", "", at.start, at.start, at.line, at.column)
        return Slice(self.statement, (*self.tokens[start:stop], end))

    def rest(self, start: int) -> Slice:
        return self.cut(start, len(self.tokens) - 1)


@dataclass(frozen=True, slots=True)
class Slice:
    """An expression: tokens that were cut from a statement, with an `end`."""

    statement: Statement
    tokens: tuple[SourceToken, ...]


@dataclass(frozen=True, slots=True)
class Assign:
    target: SourceToken
    value: Slice


@dataclass(frozen=True, slots=True)
class Declare:
    """Names of a kind; those with a value are assigned by steps of their own behind it."""

    names: tuple[str, ...]
    kind: Kind | None
    at: SourceToken


@dataclass(frozen=True, slots=True)
class Begin:
    """A function begins: its name, its parameters with defaults, the name of its result."""

    name: str
    parameters: tuple[tuple[SourceToken, Slice | None], ...]
    result: str
    statement: Statement


@dataclass(frozen=True, slots=True)
class End:
    """A function ends."""


@dataclass(frozen=True, slots=True)
class Give:
    """`return value`, or an expression that stands alone."""

    value: Slice
    returned: bool


@dataclass(frozen=True, slots=True)
class Leave:
    """A statement, or a block of them, that is not read."""

    statement: Statement
    why: str
    assigned: frozenset[str] = frozenset()


Step: TypeAlias = Assign | Declare | Begin | End | Give | Leave


def assigned_names(line: Line) -> frozenset[str]:
    """Names that a statement which is not read may give a value: those before `=`, outside parentheses."""
    names: set[str] = set()
    before: list[str] = []
    depth = 0
    for token, follows in zip(line.tokens, line.tokens[1:], strict=False):
        depth += token.is_symbol("(", "[", "{") - token.is_symbol(")", "]", "}")
        if token.kind == "name" and (follows.is_symbol("=") or follows.text in COMPOUND):
            names.add(token.text)
        if token.kind == "name" and depth == 0:
            before.append(token.text)
        elif token.is_symbol("=") and depth == 0:
            names.update(before)
            before.clear()
    return frozenset(names)


def assignments(line: Line) -> tuple[Assign, ...]:
    """The statement as `name = value`, the innermost first where it is a chain; empty when it is none.

    Raises:
        EquationError: for a compound assignment.
    """
    start, targets = 0, list[SourceToken]()
    while line.tokens[start].kind == "name":
        target, sign = line.tokens[start], line.tokens[start + 1]
        if sign.kind == "symbol" and sign.text in COMPOUND:
            operator = sign.text.rstrip("=") if "=" in sign.text else sign.text[0]
            fail(sign, f"{sign.text} is not read", f"write {target.text} = {target.text} {operator} ...")
        if not sign.is_symbol("="):
            break
        targets.append(target)
        start += 2
    values = [line.cut(2 * i, 2 * i + 1) for i in range(1, len(targets))]
    values += [line.rest(start)] if targets else []
    return tuple(map(Assign, targets, values))[::-1]


def split_at(tokens: Sequence[SourceToken], symbol: str) -> Iterator[tuple[int, int]]:
    """The places (start, stop) of the parts of tokens between a symbol that stands outside parentheses."""
    depth = start = 0
    last = len(tokens) - 1
    for place in range(last):
        token = tokens[place]
        depth += token.is_symbol("(", "[", "{") - token.is_symbol(")", "]", "}")
        if depth == 0 and token.is_symbol(symbol):
            yield start, place
            start = place + 1
    if start < last:
        yield start, last
