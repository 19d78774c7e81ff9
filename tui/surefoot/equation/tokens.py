"""Tokens of the equation language, with the line and column where each stands; and the syntax of names and literals."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal, TypeAlias

from surefoot.errors import EquationError

MAX_TEXT = 20_000
"""Characters that one text may have."""

Kind: TypeAlias = Literal["number", "name", "string", "symbol", "end"]


@dataclass(frozen=True, slots=True)
class Token:
    """A token of the text.

    Attributes:
        text: as typed, but `**` is `^`, a number stands without its suffix and a string without its quotes.
        line, column: where it begins, from 1; `end` is the column behind it.
        single: a number with the suffix `f`.
    """

    kind: Kind
    text: str
    line: int
    column: int
    end: int
    single: bool = False

    def is_symbol(self, *symbols: str) -> bool:
        return self.kind == "symbol" and self.text in symbols

    def touches(self, other: Token) -> bool:
        """Whether `other` begins right behind this token."""
        return self.line == other.line and self.end == other.column


_NUMBER = re.compile(r"(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?")
_D_EXPONENT = re.compile(r"[dD]([+-]?[0-9]+)(?![A-Za-z0-9_])")
_SINGLE = re.compile(r"[fF](?![A-Za-z0-9_])")
_SYMBOL = re.compile(r"\*\*|<=|>=|==|!=|[-+*/^()=<>,:;]")
_STRING = re.compile(r'"([^"\n\r]*)"')
_LITERAL = re.compile(
    r"[+-]?(?:(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?"
    r"|0[xX](?:[0-9a-fA-F]+(?:\.[0-9a-fA-F]*)?|\.[0-9a-fA-F]+)(?:[pP][+-]?[0-9]+)?)"
)

# Two characters that are not ours, looked for before the symbols that they begin with.
_FOREIGN_PAIRS = {
    "//": "write / (there is no whole-number division; floor(a/b) rounds down)",
    "&&": "write and",
    "||": "write or",
    "<>": "write !=",
    "=<": "write <=",
    "=>": "write >=",
    "~=": "write !=",
    "/=": "write !=",
}
_FOREIGN = {
    **dict.fromkeys("×∗⋅·∙•⨯✕✖", "write *"),
    **dict.fromkeys("÷∕⁄", "write /"),
    **dict.fromkeys("−–—‐‑‒﹣－", "write - (the hyphen of the keyboard)"),
    **dict.fromkeys("[]{}（）", "write ( and )"),
    **dict.fromkeys("“”„‟«»'‘’", 'write " around the name of a table'),
    "≤": "write <=",
    "≥": "write >=",
    "≠": "write !=",
    "√": "write sqrt(...)",
    "∛": "write cbrt(...)",
    "∞": "there is no infinity here; write a large number",
    "°": "angles are in radians; write *pi/180",
    "%": "write /100",
    "&": "write and",
    "|": "write abs(...) for an absolute value, or between conditions",
    "!": "write not before a condition, tgamma(n + 1) for a factorial",
    "~": "write not before a condition",
}
_SUPERSCRIPTS = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺", "0123456789-+")
_SUBSCRIPTS = str.maketrans("₀₁₂₃₄₅₆₇₈₉", "0123456789")
_SUPERSCRIPT_RUN = re.compile("[⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺]+")
_SUBSCRIPT_RUN = re.compile("[₀₁₂₃₄₅₆₇₈₉]+")


def is_name(text: str) -> bool:
    """Whether the text can name an unknown, input or definition: letters, digits, underscore, no digit first."""
    return bool(text) and _starts_name(text[0]) and all(_continues_name(character) for character in text)


def is_literal(text: str) -> bool:
    """Whether the text is a signed decimal or C99 hexadecimal literal (`-0.5`, `1e-3`, `0x1.8p-3`)."""
    return _LITERAL.fullmatch(text) is not None


def is_hexadecimal(text: str) -> bool:
    """Whether a literal is a hexadecimal one."""
    return text.lstrip("+-")[:2] in ("0x", "0X")


def tokenize(text: str) -> Iterator[Token]:
    """Yields the tokens of a text in order, the last one of kind `end`. Line breaks count as spaces.

    Raises:
        EquationError: when it comes to characters that begin no token, or the text is longer than MAX_TEXT.
    """
    _refuse_length(text)
    line, line_start, at = 1, 0, 0
    while at < len(text):
        character = text[at]
        if character == "\n" or (character == "\r" and text[at + 1 : at + 2] != "\n"):
            line, line_start, at = line + 1, at + 1, at + 1
        elif character in "\t\r" or unicodedata.category(character) == "Zs":
            at += 1
        else:
            token, at = _token(text, at, line, at - line_start + 1)
            yield token
    column = len(text) - line_start + 1
    yield Token("end", "", line, column, column)


def _refuse_length(text: str) -> None:
    if len(text) > MAX_TEXT:
        line_start = text.rfind("\n", 0, MAX_TEXT) + 1
        raise EquationError(
            f"the text has {len(text)} characters, {MAX_TEXT} are accepted",
            line=text.count("\n", 0, MAX_TEXT) + 1,
            column=MAX_TEXT - line_start + 1,
            hint="put parts of it on lines of [where]",
        )


def _token(text: str, at: int, line: int, column: int) -> tuple[Token, int]:
    """The token that begins at `at`, and the place behind it."""
    if number := _NUMBER.match(text, at):
        return _number(text, number, line, column)
    if _starts_name(text[at]):
        end = at + 1
        while end < len(text) and _continues_name(text[end]):
            end += 1
        return Token("name", text[at:end], line, column, column + end - at), end
    if (pair := text[at : at + 2]) in _FOREIGN_PAIRS:
        raise EquationError(f"{pair} is not an operator here", line=line, column=column, hint=_FOREIGN_PAIRS[pair])
    if symbol := _SYMBOL.match(text, at):
        written = "^" if symbol[0] == "**" else symbol[0]
        return Token("symbol", written, line, column, column + len(symbol[0])), symbol.end()
    if text[at] == '"':
        return _string(text, at, line, column)
    raise _foreign(text, at, line, column)


def _number(text: str, number: re.Match[str], line: int, column: int) -> tuple[Token, int]:
    """A literal. The suffix `f` needs a point or an exponent before it, as in C: `2f` is more likely 2*f."""
    written, end = number[0], number.end()
    if exponent := _D_EXPONENT.match(text, end):
        raise EquationError(
            f"the exponent of {written}{exponent[0]} is written with a D",
            line=line,
            column=column,
            hint=f"write {re.split('[eE]', written)[0]}e{exponent[1]}",
        )
    if text[end : end + 1] == "." and (text[end + 1 : end + 2].isdigit() or "." in written):
        raise EquationError(f"{written} is followed by a second point", line=line, column=column + len(written))
    single = not written.isdigit() and _SINGLE.match(text, end) is not None
    length = len(written) + single
    return Token("number", written, line, column, column + length, single), end + single


def _string(text: str, at: int, line: int, column: int) -> tuple[Token, int]:
    string = _STRING.match(text, at)
    if string is None:
        raise EquationError("the name in quotes has no end", line=line, column=column, hint='close it with "')
    if not string[1].isprintable():
        raise EquationError("the name in quotes holds a character that cannot be shown", line=line, column=column)
    return Token("string", string[1], line, column, column + len(string[0])), string.end()


def _foreign(text: str, at: int, line: int, column: int) -> EquationError:
    """The error for a character that begins no token."""
    character = text[at]
    hint = _FOREIGN.get(character, "")
    if run := _SUPERSCRIPT_RUN.match(text, at):
        character, hint = run[0], f"write ^{run[0].translate(_SUPERSCRIPTS)}"
    elif run := _SUBSCRIPT_RUN.match(text, at):
        character, hint = run[0], f"write {run[0].translate(_SUBSCRIPTS)} as plain digits of the name"
    elif character == ".":
        hint = "write digits before or behind the point"
    elif not character.isprintable():
        character, hint = f"the invisible character U+{ord(character):04X}", "delete it"
    return EquationError(
        f"{character} is not part of the language", line=line, column=column, hint=hint or "accepted: + - * / ^ ( ) ="
    )


def _starts_name(character: str) -> bool:
    return character.isalpha() or character == "_"


def _continues_name(character: str) -> bool:
    return _starts_name(character) or character in "0123456789"
