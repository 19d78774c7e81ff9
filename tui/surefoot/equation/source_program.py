"""Steps -> what names are given, and the residual."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace

from surefoot.equation.pasted import Skipped
from surefoot.equation.source_expressions import ExpressionReader
from surefoot.equation.source_names import SourceNames
from surefoot.equation.source_parts import NotRead, Part, Readings, SourceArithmetic, fail
from surefoot.equation.source_steps import FUNCTION_NAMES, Assign, Begin, Declare, Give, Leave, Slice, Step
from surefoot.equation.source_tokens import Kind, Language, SourceToken, rounded_to_single
from surefoot.equation.tokens import MAX_TEXT
from surefoot.equation.tree import Expression, Number
from surefoot.equation.wording import names_in, to_text

_SHOWN = 200  # characters of a statement that is not read
_ROUNDED = "a name of single precision holds the rounded number"
_WHOLE_NAME = "an integer by its name unless it is declared: then the source drops the fraction"
_BEHIND = "behind column 72, where fixed form ends"


@dataclass(frozen=True, slots=True)
class Entry:
    """A name that was given a value.

    Attributes:
        key: of the name in the source.
        name: what it is called here.
        before: what it was called where it was used without a value; empty when it was not.
        says: the reading of its new name; empty when it is that of the source.
    """

    key: str
    name: str
    node: Expression
    token: SourceToken
    before: str
    says: str


class Program:
    """Reads steps.

    Attributes:
        entries: names that were given a value, in order.
        unknown: the first parameter of the function that was read.
        given: the expression that was returned, or stands alone; None when there is none.
        result: key of the name that the function gives its result by.
        outputs: keys of the other parameters; a subroutine gives its result by one of them.
    """

    def __init__(self, language: Language) -> None:
        self.language = language
        self.readings = Readings()
        self.names = SourceNames(language, self.readings)
        self.skipped: list[Skipped] = []
        self.entries: list[Entry] = []
        self.unknown = ""
        self.given: Expression | None = None
        self.result = ""
        self.outputs: set[str] = set()
        self._returned = False

    def read(self, steps: Iterable[Step]) -> None:
        for step in steps:
            match step:
                case Assign():
                    self._assign(step)
                case Declare():
                    self.names.declare(step.names, step.kind, step.at)
                case Begin():
                    self._begin(step)
                case Give():
                    self._give(step)
                case Leave():
                    self._leave(step)

    def _leave(self, step: Leave) -> None:
        self._skip(step.statement.line, step.statement.text, step.why)
        self.names.mark_stale(step.assigned, step.statement.line)

    def _skip(self, line: int, text: str, why: str) -> None:
        shown = " ".join(text[:_SHOWN].split())
        self.skipped.append(Skipped(line, f"{shown} ..." if len(text) > _SHOWN else shown, why))

    def _begin(self, step: Begin) -> None:
        self.result = self.names.key(step.result)
        for place, (token, default) in enumerate(step.parameters):
            key = self.names.key(token.text)
            self._hide(key)
            if default is not None:
                self._assign(Assign(token, default))
            elif place == 0:
                self.unknown = self.names.look_up(token, token.text).name
            else:
                self.outputs.add(key)

    def _hide(self, key: str) -> None:
        """A parameter hides what has its name outside the function."""
        self.names.forget(key)
        used = frozenset().union(*(names_in(entry.node) for entry in self.entries))
        for entry in [entry for entry in self.entries if entry.key == key and entry.name not in used]:
            self.entries.remove(entry)
            self.names.release(key, entry.name)

    def _assign(self, step: Assign) -> None:
        key = self.names.key(step.target.text)
        part = self._part(step.value, step.target)
        if part is None:
            self.names.forget(key)
            return
        part = self._as_declared(key, step, part)
        self._refuse_length(step.target, part.node)
        variable = self.names.get(key)
        before = variable.name if variable is not None and not variable.given else ""
        name, says = self.names.give(key, step.target, part.kind)
        self.entries.append(Entry(key, name, part.node, step.target, before, says))

    def _give(self, step: Give) -> None:
        if self._returned:
            return
        part = self._part(step.value, None)
        if part is not None:
            self._refuse_length(step.value.tokens[0], part.node)
            self.given, self._returned = part.node, step.returned

    def _part(self, value: Slice, target: SourceToken | None) -> Part | None:
        """The expression; None when it cannot be read, which is noted."""
        first, text = target or value.tokens[0], value.statement.text
        for line, beyond in value.statement.beyond:
            self.readings.add(replace(first, line=line, column=73), beyond, "", _BEHIND)
        try:
            return ExpressionReader(value.tokens, text, self.language, self.names.look_up, self.readings).value()
        except NotRead as not_read:
            self._skip(first.line, text, not_read.why)
            return None

    def _refuse_length(self, token: SourceToken, node: Expression) -> None:
        if len(to_text(node)) > MAX_TEXT:
            fail(token, f"the expression gets longer than {MAX_TEXT} characters", "write it on several lines")

    def _as_declared(self, key: str, step: Assign, part: Part) -> Part:
        """The value as its name can hold it."""
        declared, target = self.names.declared(key), step.target
        if declared is Kind.WHOLE and part.kind in (Kind.REAL, Kind.SINGLE):
            arithmetic = SourceArithmetic(step.value.statement.text, self.language, self.readings)
            return arithmetic.whole_towards_zero(part)
        if declared is Kind.SINGLE and part.kind is Kind.REAL and isinstance(part.node, Number):
            return self._rounded_literal(target, part, part.node.text)
        if self.names.is_whole_by_its_letter(key) and part.kind in (Kind.REAL, Kind.SINGLE):
            self.readings.add(target, target.text, target.text, _WHOLE_NAME)
        return part

    def _rounded_literal(self, target: SourceToken, part: Part, text: str) -> Part:
        value = rounded_to_single(float(text))
        if value is None:
            fail(target, f"{text} is beyond the range of single precision")
        if value == float(text):
            return part
        self.readings.add(target, text, repr(value), _ROUNDED)
        return replace(part, node=Number(repr(value)))


def chosen_function(functions: Mapping[int, tuple[Begin, list[Step]]]) -> int | None:
    """Which of several functions is read: the last one that is named like a residual, else the last with a result."""
    with_parameters = [place for place, (begin, _) in functions.items() if begin.parameters]
    named = [place for place in with_parameters if functions[place][0].name.lower() in FUNCTION_NAMES]
    giving = [place for place in with_parameters if _gives(*functions[place])]
    return next((places[-1] for places in (named, giving, with_parameters, list(functions)) if places), None)


def _gives(begin: Begin, steps: list[Step]) -> bool:
    return bool(begin.result) or any(isinstance(step, Give) for step in steps)
