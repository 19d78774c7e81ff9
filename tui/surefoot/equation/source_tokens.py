"""Tokens of a statement of Fortran, C or Python, and what their numbers are."""

from __future__ import annotations

import re
import struct
from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum
from types import MappingProxyType
from typing import Literal, TypeAlias

from surefoot.equation.source_lines import Statement

Language: TypeAlias = Literal["fortran", "c", "python"]
LANGUAGES: tuple[Language, ...] = ("fortran", "c", "python")

TokenKind: TypeAlias = Literal["number", "name", "string", "symbol", "other", "end"]


class Kind(StrEnum):
    """What arithmetic the source does with a value."""

    WHOLE = "whole"  # integer arithmetic: a quotient drops its fraction
    MAYBE_WHOLE = "maybe whole"  # an integer of Fortran by its name, if it is not declared elsewhere
    SINGLE = "single"
    REAL = "real"


@dataclass(frozen=True, slots=True)
class SourceToken:
    """A token and its place in the statement (`start`, `stop`) and in the source (`line`, `column`)."""

    kind: TokenKind
    text: str
    start: int
    stop: int
    line: int
    column: int

    def is_symbol(self, *symbols: str) -> bool:
        return self.kind == "symbol" and self.text in symbols

    def is_word(self, *words: str) -> bool:
        """Whether it is one of these words, given in lower case."""
        return self.kind == "name" and self.text.lower() in words


@dataclass(frozen=True, slots=True)
class SourceNumber:
    """A literal of the source.

    Attributes:
        text: the decimal without suffix, as the equation language accepts it.
        kind: WHOLE, SINGLE or REAL.
        why: the reading that changes its value, when there is one.
    """

    text: str
    kind: Kind
    why: str = ""


_NAME = r"(?P<name>[^\W\d]\w*)"
_STRING = r"(?P<string>\"(?:[^\"\\]|\\.)*\"?|'(?:[^'\\]|\\.)*'?)"
_PATTERNS: Mapping[Language, re.Pattern[str]] = MappingProxyType(
    {
        "fortran": re.compile(
            r"(?P<blank>\s+)|(?P<number>(?:\d+(?:\.(?![A-Za-z]+\.)\d*)?|\.\d+)(?:[eEdDqQ][+-]?\d+)?(?:_\w+)?)|"
            r"(?P<symbol>\.[A-Za-z]+\.|\*\*|//|==|/=|<=|>=|=>|::|[-+*/()=<>,:%\[\]])|" + _NAME + "|" + _STRING,
        ),
        "c": re.compile(
            r"(?P<blank>\s+)|(?P<number>0[xX][0-9a-fA-F']+(?:\.[0-9a-fA-F]*)?(?:[pP][+-]?\d+)?\w*"
            r"|(?:\d[\d']*(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?\w*)|"
            r"(?P<symbol><<=|>>=|->|::|\+\+|--|<<|>>|<=|>=|==|!=|&&|\|\||[-+*/%&|^]=|[-+*/%^&|!~?:=<>,.()\[\]#;{}])|"
            + _NAME
            + "|"
            + _STRING,
        ),
        "python": re.compile(
            r"(?P<blank>\s+)|(?P<number>0[xXbBoO][0-9a-fA-F_]+|(?:\d[\d_]*(?:\.[\d_]*)?|\.\d[\d_]*)(?:[eE][+-]?\d+)?[jJ]?)|"
            r"(?P<symbol>\*\*=|//=|<<=|>>=|\*\*|//|:=|->|<<|>>|<=|>=|==|!=|[-+*/%@&|^]=|[-+*/%@&|^~:=<>,.()\[\]{}])|"
            + _NAME
            + "|"
            + _STRING,
        ),
    }
)


def tokens_of(statement: Statement, language: Language) -> tuple[SourceToken, ...]:
    """The tokens, the last one of kind `end`. What begins no token is one of kind `other`."""
    found: list[SourceToken] = []
    at, text = 0, statement.text
    while at < len(text):
        match = _PATTERNS[language].match(text, at)
        kind: str = match.lastgroup or "other" if match else "other"
        stop = match.end() if match else at + 1
        if kind != "blank":
            found.append(SourceToken(_KINDS[kind], text[at:stop], at, stop, *statement.place(at)))
        at = stop
    found.append(SourceToken("end", "", at, at, *statement.place(at)))
    return tuple(found)


_KINDS: Mapping[str, TokenKind] = MappingProxyType(
    {"number": "number", "name": "name", "symbol": "symbol", "string": "string", "other": "other"}
)


# Numbers


_FORTRAN_NUMBER = re.compile(r"([0-9.]+)(?:([eEdDqQ])([+-]?\d+))?(?:_(\w+))?")
_C_NUMBER = re.compile(r"([0-9]+(?:\.[0-9]*)?|\.[0-9]+)((?:[eE][+-]?\d+)?)(\w*)")
_SINGLE_KIND = re.compile(r"4|sp|r4|s|single|real32|c_float|float|kind_?4|realk?4|rsp|wps", re.IGNORECASE)
_WHOLE_SUFFIX = re.compile(r"[uU]?[lL]{0,2}[uU]?")
_LARGEST_LITERAL = 400  # characters


def is_single_kind(kind: str) -> bool:
    """Whether a kind of Fortran (`4`, `sp`, `real32`) is single precision."""
    return _SINGLE_KIND.fullmatch(kind.strip()) is not None


def number_of(text: str, language: Language) -> SourceNumber | None:
    """What a literal is; None when the language of equations has nothing for it (`2j`, `0778`)."""
    if len(text) > _LARGEST_LITERAL:
        return None
    return {"fortran": _fortran_number, "c": _c_number, "python": _python_number}[language](text)


def _fortran_number(text: str) -> SourceNumber | None:
    match = _FORTRAN_NUMBER.fullmatch(text)
    if match is None:
        return None
    digits, letter, exponent, kind = match.groups()
    written = digits if exponent is None or int(exponent) == 0 else f"{digits}e{exponent.lstrip('+')}"
    if digits.count(".") > 1:
        return None
    if letter is None and "." not in digits:
        return SourceNumber(digits, Kind.WHOLE)
    if kind is not None and is_single_kind(kind):
        return SourceNumber(written, Kind.SINGLE, f"the kind _{kind} is single precision")
    if letter in ("q", "Q"):
        return SourceNumber(written, Kind.REAL, "a quadruple precision literal is rounded to the run's arithmetic")
    if letter in ("d", "D") or kind is not None:
        return SourceNumber(written, Kind.REAL)
    return SourceNumber(written, Kind.SINGLE, "a real literal without D or kind is single precision in Fortran")


def _c_number(text: str) -> SourceNumber | None:
    if text[:2] in ("0x", "0X"):
        return _hexadecimal(text.replace("'", ""))
    match = _C_NUMBER.fullmatch(text.replace("'", ""))
    if match is None:
        return None
    digits, exponent, suffix = match.groups()
    if "." not in digits and not exponent:
        if not _WHOLE_SUFFIX.fullmatch(suffix):
            return None
        if len(digits) > 1 and digits[0] == "0":
            return _octal(digits)
        return SourceNumber(digits, Kind.WHOLE)
    written = digits + exponent.lower().replace("e+", "e")
    if suffix in ("f", "F"):
        return SourceNumber(written, Kind.SINGLE, "the suffix f is single precision in C")
    if suffix in ("l", "L"):
        return SourceNumber(written, Kind.REAL, "a long double literal is rounded to the run's arithmetic")
    return SourceNumber(written, Kind.REAL) if not suffix else None


def _octal(digits: str) -> SourceNumber | None:
    if set(digits) - set("01234567"):
        return None
    return SourceNumber(str(int(digits, 8)), Kind.WHOLE, f"a leading 0 makes an octal number in C: {int(digits, 8)}")


def _hexadecimal(text: str) -> SourceNumber | None:
    body = text.rstrip("uUlL")
    try:
        if re.fullmatch(r"0[xX][0-9a-fA-F]+", body):
            return SourceNumber(str(int(body, 16)), Kind.WHOLE)
        return SourceNumber(repr(float.fromhex(body)), Kind.REAL)
    except (ValueError, OverflowError):
        return None


def _python_number(text: str) -> SourceNumber | None:
    plain = text.replace("_", "")
    if plain[:2].lower() in ("0x", "0o", "0b"):
        try:
            return SourceNumber(str(int(plain, 0)), Kind.WHOLE)
        except ValueError:
            return None
    if plain[-1:] in "jJ":
        return None
    return SourceNumber(plain.replace("E", "e").replace("e+", "e"), Kind.REAL if set(plain) & set(".e") else Kind.WHOLE)


# Single precision


def rounded_to_single(value: float) -> float | None:
    """The nearest number of binary32; None beyond its range."""
    try:
        return float(struct.unpack("<f", struct.pack("<f", value))[0])
    except OverflowError:
        return None


def single_text(value: float) -> str:
    """The shortest decimal that binary32 rounds to a value of its own, with a point or exponent for the suffix `f`."""
    for digits in range(1, 10):
        text = f"{value:.{digits}g}"
        if rounded_to_single(float(text)) == value:
            break
    return text if set(text) & set(".e") else f"{text}."
