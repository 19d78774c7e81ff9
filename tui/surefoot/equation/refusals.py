"""Words for what the parser does not accept: what is wrong at this column, and what would be accepted there."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, NoReturn, TypeAlias

from surefoot.equation.functions import CONSTANTS, FUNCTIONS, FunctionRow, nearest
from surefoot.equation.tokens import Token
from surefoot.errors import EquationError

Wanted: TypeAlias = Literal["equation", "expression", "condition"]
Context: TypeAlias = Literal["text", "parenthesis", "call", "table", "piecewise"]

VALUE_WANTED = "accepted: a number, a name, a function, - or ("
ON_LINES = "put parts of it on lines of [where]"
_BRANCHES = "write piecewise(condition: value; otherwise: value)"
_TABLE = 'write table("name", x)'
_WITHOUT_PARENTHESIS = {"piecewise": _BRANCHES, "table": _TABLE}
_LONGEST_SHOWN = 40


@dataclass(frozen=True, slots=True)
class Place:
    """Where the parser stands.

    Attributes:
        token: what is refused; `before` stands in front of it and `after` behind it, as far as these are known.
        wanted: what the whole text is to be.
        context: what is open, and `opener` the token that opened it.
        last_branch: the branch of `otherwise` is being read.
    """

    token: Token
    before: Token | None
    after: Token | None
    wanted: Wanted
    context: Context
    opener: Token
    last_branch: bool


def fail(token: Token, message: str, hint: str = "") -> NoReturn:
    """Raises EquationError at a token."""
    raise EquationError(message, line=token.line, column=token.column, hint=hint)


def refuse_instead_of_value(place: Place) -> NoReturn:
    """Something else where a number, a name, a function, a sign or a parenthesis is expected."""
    token, before = place.token, place.before
    behind = f" behind {_shown(before)}" if before is not None else ""
    if token.kind == "end":
        fail(token, f"the text ends{behind}" if before is not None else "there is no text", VALUE_WANTED)
    if token.kind == "string":
        fail(token, "a name in quotes stands alone", _TABLE)
    if token.is_symbol("=") and before is not None and before.is_symbol(*"<>=+-*/^"):
        hint = "write <= >= == in one piece; there are no assignments such as +="
        fail(token, f"a value is expected{behind}, not '='", hint)
    fail(token, f"a value is expected{behind}, not {_shown(token)}", VALUE_WANTED)


def refuse_behind_value(place: Place) -> NoReturn:
    """Something that cannot follow a whole value here."""
    token, opener = place.token, place.opener
    if token.kind == "end":
        where = f"column {opener.column}" if opener.line == token.line else f"line {opener.line}"
        fail(token, f"the parenthesis of {where} is not closed", "write )")
    if place.before is not None and (token.kind in ("number", "string", "name") or token.is_symbol("(")):
        _refuse_side_by_side(token, place.before)
    if token.is_symbol(")"):
        fail(token, "no parenthesis is open for this )", "delete it, or write ( before")
    if token.is_symbol("="):
        _refuse_equals(place)
    if token.is_symbol(","):
        _refuse_comma(place)
    if place.context == "piecewise":
        fail(token, f"{_shown(token)} is not accepted here", "write )" if place.last_branch else _BRANCHES)
    end = "the end" if place.context == "text" else ")"
    fail(token, f"{_shown(token)} is not accepted here", f"accepted: an operator, or {end}")


def refuse_call(token: Token) -> NoReturn:
    """A name with a parenthesis behind it that is no function."""
    name = _cut(token.text)
    if name in CONSTANTS:
        fail(token, f"{name} is a constant, not a function", f"write {name}*(...")
    if name in ("pow", "power"):
        fail(token, f"{name} is not a function here", "write a^b")
    near = nearest(name, FUNCTIONS)
    multiply = f"{name}*(... to multiply"
    fail(token, f"there is no function {name}", f"write {near}, or {multiply}" if near else f"write {multiply}")


def refuse_word(token: Token) -> NoReturn:
    """A function without its parenthesis, or a word of the language, where a value is expected."""
    word = token.text
    if word in FUNCTIONS or word in _WITHOUT_PARENTHESIS:
        fail(token, f"{word} stands without its parenthesis", _WITHOUT_PARENTHESIS.get(word, f"write {word}(...)"))
    fail(token, f"{word} stands where a value is expected", VALUE_WANTED)


def refuse_log(token: Token) -> NoReturn:
    """`log` is the natural logarithm to some and the decimal one to others."""
    fail(token, "log is written for two logarithms", "write ln for the natural one, log10 for base 10")


def refuse_table(token: Token, wanted: Literal["name", "comma"]) -> NoReturn:
    """A table without its name in quotes, or without the comma behind it."""
    words = {"name": "the name of a table stands in quotes", "comma": "a comma follows the name of the table"}
    fail(token, words[wanted], _TABLE)


def refuse_arity(token: Token, row: FunctionRow, given: int, decimal_comma: bool) -> NoReturn:
    """As many arguments as the function does not take."""
    wanted = f"{row.arity} argument{'s' if row.arity > 1 else ''}{' or more' if row.more else ''}"
    hint = "write decimals with a point, not a comma" if decimal_comma else row.meaning
    fail(token, f"{row.name} takes {wanted}, {given} given", hint)


def refuse_condition(start: Token, equality: bool) -> NoReturn:
    """A condition where a value is expected."""
    hint = "write the equation with one =" if equality else "write piecewise(condition: value; ...)"
    fail(start, "a condition stands where a value is expected", hint)


def refuse_value(start: Token) -> NoReturn:
    """A value where a condition is expected."""
    fail(start, "a value stands where a condition is expected", "write a comparison such as x > 0")


def _refuse_side_by_side(token: Token, before: Token) -> NoReturn:
    """Two values without an operator between them; `before` is the end of the first."""
    if token.kind == "string":
        fail(token, "a name in quotes stands alone", _TABLE)
    if token.text == "not":
        fail(token, "not stands behind a value", "write and not, or or not")
    if token.text == "otherwise":
        fail(token, "otherwise begins a branch of its own", "write ; before it")
    left, right = _cut(before.text), _cut(token.text)
    if before.kind == "number" and token.kind == "number":
        fail(token, f"two numbers side by side, {left} and {right}", "write an operator between them")
    if before.kind == "number" and token.kind == "name" and before.touches(token):
        if right[0] == "_":
            fail(token, "a number has no underscores", "write its digits together")
        if right[0] in "eE":
            fail(token, f"{left}{right} is not a number", f"write {left}*{right}, or digits of the exponent")
        if right in ("f", "F"):
            hint = f"write {left}*{right}, or {left}.0{right} for a single-precision literal"
            fail(token, "no operator between two values", hint)
    left = "...)" if before.is_symbol(")") else left
    right = "(..." if token.is_symbol("(") else right
    fail(token, "no operator between two values", f"write {left}*{right} to multiply")


def _refuse_equals(place: Place) -> NoReturn:
    if place.wanted == "equation" and place.context == "text":
        fail(place.token, "a second =", "an equation has one = at most")
    compare = place.context == "piecewise" or place.wanted == "condition"
    hint = "write == to compare" if compare else "= stands once in an equation, outside parentheses"
    fail(place.token, "= is not accepted here", hint)


def _refuse_comma(place: Place) -> NoReturn:
    comma, before, after = place.token, place.before, place.after
    if before is not None and after is not None and _one_number(before, comma, after):
        fail(comma, "a comma in a number", f"write {_cut(before.text)}.{_cut(after.text)} with a point")
    if place.context == "piecewise":
        fail(comma, "branches are parted by semicolons", _BRANCHES)
    if place.context == "table":
        fail(comma, "a table takes its name and one value", _TABLE)
    fail(comma, "a comma outside the arguments of a function", "accepted: an operator, or the end")


def _one_number(before: Token, comma: Token, after: Token) -> bool:
    """Whether two numbers and the comma between them are one number to who wrote them: `0,5`."""
    return before.kind == after.kind == "number" and before.touches(comma) and comma.touches(after)


def _shown(token: Token) -> str:
    """A token in a sentence: symbols in quotes, long names cut."""
    return f"'{token.text}'" if token.kind == "symbol" else _cut(token.text)


def _cut(text: str) -> str:
    return text if len(text) <= _LONGEST_SHOWN else text[: _LONGEST_SHOWN - 3] + "..."
