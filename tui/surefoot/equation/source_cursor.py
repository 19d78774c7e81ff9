"""Walks along the tokens of an expression of the source, and says what is wrong where they end or do not fit."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from types import MappingProxyType

from surefoot.equation.source_parts import fail
from surefoot.equation.source_tokens import Language, SourceToken
from surefoot.errors import EquationError

_REFUSED: Mapping[Language, Mapping[str, tuple[str, str]]] = MappingProxyType(
    {
        "fortran": {"//": ("// joins texts in Fortran", "")},
        "c": {
            "%": ("the remainder % is not part of the equation language", "write it out with floor"),
            "^": ("^ is an exclusive or in C, not a power", "write pow(a, b)"),
        },
        "python": {
            "%": ("the remainder % is not part of the equation language", "write it out with floor"),
            "^": ("^ is an exclusive or in Python, not a power", "write a**b"),
            "@": ("@ multiplies matrices", ""),
        },
    }
)


class Cursor:
    """The place in the tokens, the last of which is of kind `end`."""

    def __init__(self, tokens: Sequence[SourceToken], language: Language) -> None:
        self._tokens, self._language, self._at = tokens, language, 0

    @property
    def _token(self) -> SourceToken:
        return self._tokens[self._at]

    @property
    def _stop(self) -> int:
        """The end of the text of the token before."""
        return self._tokens[self._at - 1].stop

    def _next(self) -> SourceToken:
        token = self._token
        self._at += token.kind != "end"
        return token

    def _takes(self, *symbols: str) -> bool:
        found = self._token.is_symbol(*symbols)
        self._at += found
        return found

    def _expects(self, symbol: str, opener: SourceToken) -> None:
        if not self._takes(symbol):
            if self._token.kind == "end":
                fail(opener, f"{opener.text} has no matching {symbol}")
            raise self._unexpected()

    def _unexpected(self) -> EquationError:
        """The error for a token that cannot stand where it stands."""
        token = self._token
        message, hint = f"{token.text} is not expected here", "accepted: an operator, or the end"
        if token.kind == "end":
            message, hint = "the expression ends too early", "accepted: a number, a name, a function, - or ("
        elif token.kind == "symbol" and token.text in _REFUSED[self._language]:
            message, hint = _REFUSED[self._language][token.text]
        return EquationError(message, line=token.line, column=token.column, hint=hint)
