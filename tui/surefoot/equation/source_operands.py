"""The operands of an expression of the source: numbers, names, parentheses, casts, calls."""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import reduce

from surefoot.equation.source_cursor import Cursor
from surefoot.equation.source_functions import CONSTANTS_OF, FUNCTIONS_OF, MODULES, REFUSED, WITH_KIND, KnownFunction
from surefoot.equation.source_parts import (
    IN_SINGLE,
    NotRead,
    Part,
    Readings,
    SourceArithmetic,
    Truth,
    fail,
    joined_kind,
    refuse_size,
)
from surefoot.equation.source_tokens import Kind, Language, SourceToken, is_single_kind
from surefoot.equation.tree import Call, Condition, Name, Not, Piecewise
from surefoot.equation.wording import to_text

ANY, OR, AND, NOT, COMPARE, ADD, MULTIPLY, TIGHT = range(1, 9)
"""How tightly operators bind: a conditional value, or, and, not, comparisons, sums, products, powers and signs."""

_NOTS = ("not", "!", ".not.")
_NOT_VALUES = frozenset(
    {"lambda", "yield", "await", "None", "True", "False", "nullptr", "NULL", "true", "false", "new"}
)
_C_TYPES = frozenset(
    {"double", "float", "int", "long", "short", "unsigned", "signed", "const", "size_t", "char", "bool", "auto"}
)


@dataclass(frozen=True, slots=True)
class Known:
    """A name of the source as the equation language has it."""

    name: str
    kind: Kind


class OperandReader(Cursor, ABC):
    """Reads operands; what stands between them is read by `_expression`."""

    def __init__(
        self,
        tokens: Sequence[SourceToken],
        text: str,
        language: Language,
        look_up: Callable[[SourceToken, str], Known],
        readings: Readings,
    ) -> None:
        """Sets out at the first token.

        Args:
            text: of the statement that the tokens were cut from.
            look_up: what a name stands for, from its first token and its whole text.
        """
        super().__init__(tokens, language)
        self._look_up, self._readings = look_up, readings
        self._arithmetic = SourceArithmetic(text, language, readings)

    @abstractmethod
    def _expression(self, floor: int) -> Part | Truth:
        """An expression of operators that bind at least as tightly as `floor`."""

    def _value(self, floor: int) -> Part:
        part = self._expression(floor)
        if isinstance(part, Truth):
            raise NotRead("a condition is used as a number")
        return part

    def _truth(self, floor: int) -> Truth:
        part = self._expression(floor)
        if isinstance(part, Part):
            raise NotRead("a number is used as a condition")
        return part

    def _condition(self, node: Condition, parts: Sequence[Part | Truth], first: SourceToken) -> Truth:
        height, nodes = 1 + max(part.height for part in parts), 1 + sum(part.nodes for part in parts)
        refuse_size(first, height, nodes)
        return Truth(node, first, self._stop, height, nodes)

    def _chosen(self, condition: Truth, value: Part, other: Part, first: SourceToken) -> Part:
        branches, otherwise = ((condition.node, value.node),), other.node
        node = Piecewise(branches, otherwise)
        if isinstance(otherwise, Piecewise):
            node = Piecewise((*branches, *otherwise.branches), otherwise.otherwise)
        kind = value.kind if value.kind == other.kind else Kind.REAL
        return self._arithmetic.built(node, (condition, value, other), first, self._stop, kind)

    def _prefix(self) -> Part | Truth:
        token = self._next()
        word = token.text.lower() if self._language == "fortran" else token.text
        if token.kind == "number":
            return self._arithmetic.literal(token)
        if word in _NOTS and token.kind in ("name", "symbol"):
            part = self._truth(TIGHT if word == "!" else NOT)
            return self._condition(Not(part.node), [part], token)
        if token.kind == "name":
            return self._name(token)
        if token.is_symbol("-"):
            return self._arithmetic.negated(token, self._value(TIGHT))
        if token.is_symbol("+"):
            return self._value(TIGHT)
        if token.is_symbol("("):
            return self._parenthesis(token)
        if token.kind == "string":
            raise NotRead("a text stands in it")
        if token.is_symbol("[", "{", "&", "*", "~", "++", "--", ".true.", ".false."):
            raise NotRead(f"{token.text} is not part of the equation language")
        self._at -= token.kind != "end"
        raise self._unexpected()

    def _parenthesis(self, opener: SourceToken) -> Part | Truth:
        if self._language == "c" and self._token.kind == "name" and self._token.text in _C_TYPES:
            return self._cast(opener)
        part = self._expression(ANY)
        if self._token.is_symbol(","):
            raise NotRead("a list of values stands in it")
        self._expects(")", opener)
        return replace(part, first=opener, stop=self._stop)

    def _cast(self, opener: SourceToken) -> Part:
        words: list[str] = []
        while self._token.kind == "name":
            words.append(self._next().text)
        self._expects(")", opener)
        part = self._value(TIGHT)
        if set(words) & {"float"}:
            return self._applied(opener, FUNCTIONS_OF["python"]["float32"], [part])
        if set(words) & {"double", "auto"}:
            return replace(part, kind=Kind.REAL, whole=None, single=None, first=opener)
        if part.kind is Kind.WHOLE:
            return replace(part, first=opener)
        return self._arithmetic.whole_towards_zero(replace(part, first=opener))

    def _name(self, first: SourceToken) -> Part | Truth:
        """A name, a member of something (`p.D`, `p->D`, `p%D`), a constant of a library, or a call."""
        names = [first.text]
        while self._token.is_symbol(".", "->", "::", "%") and self._joins_names():
            self._next()
            names.append(self._next().text)
        if self._token.is_symbol("("):
            return self._call(first, names)
        if self._token.is_symbol("["):
            raise NotRead(f"{'.'.join(names)}[...] is an element of an array; give it a name of its own")
        if len(names) == 1 and first.text in _NOT_VALUES:
            raise NotRead(f"{first.text} is not part of the equation language")
        constants = CONSTANTS_OF[self._language]
        if names[-1] in constants and (names[0] in MODULES if len(names) > 1 else self._language == "c"):
            return Part(constants[names[-1]], Kind.REAL, first, self._stop, height=3, nodes=3)
        if names[0] in MODULES and len(names) > 1:
            raise NotRead(f"{'.'.join(names)} is not part of the equation language")
        name = "_".join(names[1:] if names[0] == "self" and len(names) > 1 else names)
        known = self._look_up(first, name)
        if len(names) > 1:
            self._readings.add(first, self._written(first), known.name, "a member is read as a name")
        return Part(Name(known.name), known.kind, first, self._stop)

    def _joins_names(self) -> bool:
        """Whether the symbol in hand stands between a name and a name; `%` does so in Fortran only."""
        if self._token.text == "%" and self._language != "fortran":
            return False
        return self._at + 1 < len(self._tokens) and self._tokens[self._at + 1].kind == "name"

    # Calls

    def _call(self, first: SourceToken, names: list[str]) -> Part | Truth:
        opener = self._next()
        word = names[-1].lower() if self._language == "fortran" else names[-1]
        if word in REFUSED:
            fail(first, f"the remainder {names[-1]} is not part of the equation language", "write it out with floor")
        if self._language == "fortran" and word in WITH_KIND:
            return self._with_kind(first, opener, word)
        if word in ("merge", "where") and self._language != "c":
            return self._merged(first, opener, word)
        known = FUNCTIONS_OF[self._language].get(word)
        if self._language == "c" and word in _C_TYPES:
            known = FUNCTIONS_OF["python"]["float64"]
        own = len(names) > 1 and names[0] not in MODULES
        if known is None or own:
            raise NotRead(f"{'.'.join(names)}(...) is not a function of the equation language")
        arguments = self._arguments(opener)
        count = len(arguments)
        if count < known.least or (known.most is not None and count > known.most):
            fail(first, f"{names[-1]} takes another number of arguments than {count}")
        return self._applied(first, known, arguments, word)

    def _arguments(self, opener: SourceToken) -> list[Part]:
        arguments: list[Part] = []
        if self._takes(")"):
            return arguments
        while True:
            if self._token.kind == "name" and self._tokens[self._at + 1].is_symbol("="):
                raise NotRead("a named argument stands in it")
            arguments.append(self._value(ANY))
            if not self._takes(","):
                break
        self._expects(")", opener)
        return arguments

    def _applied(self, first: SourceToken, known: KnownFunction, arguments: list[Part], word: str = "") -> Part:
        node = known.make(*[argument.node for argument in arguments])
        kind = known.gives or reduce(joined_kind, [argument.kind for argument in arguments])
        singles = all(argument.kind is Kind.SINGLE for argument in arguments)
        if self._language == "fortran" and kind is Kind.REAL and singles and not word.startswith("d"):
            kind = Kind.SINGLE
        if self._language == "python":
            kind = Kind.REAL
        # An argument may stand twice in what the function is made of, three levels down.
        made = self._arithmetic.built(node, (*arguments, *arguments), first, self._stop, kind)
        made = replace(made, height=made.height + 3, nodes=made.nodes + 4)
        if known.why:
            natural = isinstance(node, Call) and node.function == "ln"
            name, _, _ = self._written(first).partition("(")
            written, read_as = (name, "ln") if natural else (self._written(first), to_text(node))
            self._readings.add(first, written, read_as, known.why)
        return self._in_single(made, arguments, word) if known.gives is Kind.REAL else made

    def _in_single(self, made: Part, arguments: list[Part], word: str) -> Part:
        """A function of literals of single precision; its square root is rounded as the source rounds it."""
        value = arguments[0].single
        if made.kind is not Kind.SINGLE or any(argument.single is None for argument in arguments):
            return made
        if word == "sqrt" and value is not None and value >= 0:
            return self._arithmetic.single_constant(math.sqrt(value), made)
        self._readings.add(made.first, self._written(made.first), to_text(made.node), IN_SINGLE)
        return made

    def _written(self, first: SourceToken) -> str:
        return self._arithmetic.written(first, self._stop)

    def _with_kind(self, first: SourceToken, opener: SourceToken, word: str) -> Part:
        """A conversion of Fortran: REAL(x) rounds to single precision, REAL(x, kind) only where the kind is single."""
        value = self._value(ANY)
        kind = ""
        if self._takes(","):
            start = self._at
            while not self._token.is_symbol(")") and self._token.kind != "end":
                self._next()
            kind = "".join(token.text for token in self._tokens[start : self._at]).lower().removeprefix("kind=")
        self._expects(")", opener)
        if word != "real":
            return self._applied(first, FUNCTIONS_OF["fortran"][word], [value], word)
        to_single = not kind or is_single_kind(kind)
        if to_single and value.kind is Kind.WHOLE:
            return replace(value, kind=Kind.SINGLE, first=first, stop=self._stop, whole=None)
        return self._applied(first, FUNCTIONS_OF["fortran"]["sngl" if to_single else "dble"], [value], word)

    def _merged(self, first: SourceToken, opener: SourceToken, word: str) -> Part:
        """merge(value, other, condition) of Fortran, where(condition, value, other) of Python."""
        condition: Truth | None = None
        values: list[Part] = []
        for place in range(3):
            if place == (2 if word == "merge" else 0):
                condition = self._truth(ANY)
            else:
                values.append(self._value(ANY))
            if place < 2 and not self._takes(","):
                fail(first, f"{word} takes three arguments")
        self._expects(")", opener)
        assert condition is not None
        return self._chosen(condition, values[0], values[1], first)
