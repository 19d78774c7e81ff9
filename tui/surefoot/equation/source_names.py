"""The names of the source, and what stands for each: new names for new values, kinds, names that get no value."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from surefoot.equation.functions import RESERVED
from surefoot.equation.source_operands import Known
from surefoot.equation.source_parts import Readings
from surefoot.equation.source_tokens import Kind, Language, SourceToken
from surefoot.equation.tokens import is_name

NEW_VALUE = "given a new value: a name of its own from here on"
USED_BEFORE = "used further up before it is given a value: a name of its own from here on"
_SINGLE_NAME = "declared single precision; the arithmetic binary32 computes so throughout"
_WORD = "not a name of the equation language: another one"
_CAPITALS = "Fortran does not tell capitals from small letters"
_CONSTANT = "given no value here: the constant"
_WHOLE_LETTERS = "ijklmn"


@dataclass(frozen=True, slots=True)
class Variable:
    """What stands for a name of the source at this point; `given`: it has a value in the lines."""

    name: str
    kind: Kind
    given: bool


class SourceNames:
    """The names met so far.

    Attributes:
        needed: names that are used without a value, in the order of their first use.
    """

    def __init__(self, language: Language, readings: Readings) -> None:
        self.needed: dict[str, None] = {}
        self._language, self._readings = language, readings
        self._variables: dict[str, Variable] = {}
        self._declared: dict[str, Kind | None] = {}
        self._stale: dict[str, int] = {}  # names that a line which was not read may have changed
        self._spellings: dict[str, dict[str, None]] = {}
        self._taken: set[str] = set()
        self._counts: dict[str, int] = {}

    def key(self, text: str) -> str:
        """What makes two spellings the same name."""
        return text.lower() if self._language == "fortran" else text

    def get(self, key: str) -> Variable | None:
        return self._variables.get(key)

    def declare(self, names: Iterable[str], kind: Kind | None, at: SourceToken) -> None:
        """Notes the kind of names; None is a type without numbers of its own."""
        for name in names:
            self._declared[self.key(name)] = kind
        listed = ", ".join(names)
        if kind is Kind.SINGLE and listed:
            self._readings.add(at, listed, listed, _SINGLE_NAME)

    def declared(self, key: str) -> Kind | None:
        return self._declared.get(key)

    def is_whole_by_its_letter(self, key: str) -> bool:
        """Whether Fortran takes the name for an integer as long as nothing declares it."""
        return self._language == "fortran" and key not in self._declared and key[:1] in _WHOLE_LETTERS

    def mark_stale(self, names: Iterable[str], line: int) -> None:
        for name in names:
            self._stale.setdefault(self.key(name), line)

    def look_up(self, token: SourceToken, text: str) -> Known:
        """What a name stands for where it is used."""
        key = self.key(text)
        self._note_spelling(key, token, text)
        variable = self._variables.get(key)
        if variable is None and (key == "pi" or text == "PI"):
            self._readings.add(token, text, "pi", _CONSTANT)
            return Known("pi", Kind.REAL)
        if variable is None:
            variable = self._variables[key] = Variable(self._free_name(token, text), Kind.REAL, False)
            self.needed[variable.name] = None
        if not variable.given:
            default = Kind.MAYBE_WHOLE if self.is_whole_by_its_letter(key) else Kind.REAL
            return Known(variable.name, self._declared.get(key) or default)
        if key in self._stale:
            why = f"line {self._stale.pop(key)} was not read and may change it"
            self._readings.add(token, text, variable.name, why)
        return Known(variable.name, variable.kind)

    def give(self, key: str, token: SourceToken, kind: Kind) -> tuple[str, str]:
        """A name for a new value of this kind, and the reading where it is not the name of the source."""
        self._stale.pop(key, None)
        self._note_spelling(key, token, token.text)
        before, first = self._variables.get(key), next(iter(self._spellings[key]))
        if before is None:
            name, says = self._free_name(token, first), ""
        else:
            name = self._numbered(first if self._is_free_of_words(first) else before.name)
            says = NEW_VALUE if before.given else USED_BEFORE
        self._variables[key] = Variable(name, self._kind_of(key, kind), True)
        return name, says

    def forget(self, key: str) -> None:
        """The name has a value from here on that the lines do not tell."""
        self._variables.pop(key, None)

    def release(self, key: str, name: str) -> None:
        """The name is free again."""
        self._variables.pop(key, None)
        self._taken.discard(name)

    def _kind_of(self, key: str, kind: Kind) -> Kind:
        """What arithmetic a name takes part in once it has a value of some kind."""
        if key in self._declared:
            return self._declared[key] or Kind.REAL
        if self._language == "c":
            return Kind.MAYBE_WHOLE if kind is Kind.WHOLE else Kind.REAL
        return kind if self.is_whole_by_its_letter(key) and kind is not Kind.SINGLE else Kind.REAL

    def _note_spelling(self, key: str, token: SourceToken, text: str) -> None:
        spellings = self._spellings.setdefault(key, {text: None})
        if text not in spellings:
            spellings[text] = None
            variable = self._variables.get(key)
            if variable is not None:
                self._readings.add(token, text, variable.name, _CAPITALS)

    def _is_free_of_words(self, text: str) -> bool:
        return is_name(text) and text not in RESERVED

    def _free_name(self, token: SourceToken, text: str) -> str:
        name = text
        if not self._is_free_of_words(text):
            letters = "".join(character if is_name(f"a{character}") else "_" for character in text)
            name = f"{letters}_" if is_name(letters) else f"a{letters}_"
            self._readings.add(token, text, name, _WORD)
        if name in self._taken:
            return self._numbered(name)
        self._taken.add(name)
        return name

    def _numbered(self, name: str) -> str:
        count = self._counts.get(name, 1) + 1
        while f"{name}_{count}" in self._taken:
            count += 1
        self._counts[name] = count
        self._taken.add(f"{name}_{count}")
        return f"{name}_{count}"
