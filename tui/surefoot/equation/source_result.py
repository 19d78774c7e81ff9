"""What was read -> parts of a problem: which assignment is the residual, what is solved for, what is needed."""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.pasted import Pasted
from surefoot.equation.problem import Definition, Input
from surefoot.equation.source_program import Entry, Program
from surefoot.equation.source_steps import FUNCTION_NAMES, RESIDUAL_NAMES
from surefoot.equation.source_tokens import rounded_to_single
from surefoot.equation.tree import Binary, Expression, Name, Negate, Number
from surefoot.equation.wording import names_in, to_text

_LAST_NAME = "the last assignment, to the name of a residual: what is to be zero"
_USED_BEFORE = "given its value last, from lines that use it: the equation to solve"


@dataclass(frozen=True, slots=True)
class _Residual:
    """The text of the equation, the names that it uses, the unknown that it tells, and the entries without it."""

    text: str
    names: frozenset[str]
    unknown: str
    entries: list[Entry]


def result_of(program: Program, reason: str) -> Pasted:
    """What the lines are as parts of a problem."""
    residual = _residual(program)
    readings = program.readings
    for entry in residual.entries:
        if entry.says:
            readings.add(entry.token, entry.token.text, entry.name, entry.says)
    used = residual.names.union(*(names_in(entry.node) for entry in residual.entries))
    unknown = program.unknown or residual.unknown
    needed = [name for name in program.names.needed if name in used and name != unknown]
    if residual.text and not unknown and len(needed) == 1:
        unknown = needed.pop()
    literals = [(entry, _literal(entry.node)) for entry in residual.entries]
    return Pasted(
        language=program.language,
        language_reason=reason,
        definitions=tuple(Definition(entry.name, to_text(entry.node)) for entry, text in literals if text is None),
        equation=residual.text,
        unknown=unknown,
        inputs=tuple(Input(entry.name, text) for entry, text in literals if text is not None),
        names_needed=tuple(needed),
        readings=readings.all(),
        skipped=tuple(sorted(program.skipped, key=lambda skipped: skipped.line)),
    )


def _residual(program: Program) -> _Residual:
    """The residual or equation: what is returned, what stands alone, or the last assignment where it is one."""
    entries, given = program.entries, program.given
    last = entries[-1] if entries and _literal(entries[-1].node) is None else None
    if given is None:
        gives = {program.result} if program.result else program.outputs
        result = next((entry for entry in reversed(entries) if entry.key in gives), None)
        given = Name(result.name) if result else None
    own = next((entry for entry in entries if given == Name(entry.name)), None)
    if own is not None and not any(own.name in names_in(entry.node) for entry in entries):
        return _Residual(to_text(own.node), names_in(own.node), "", [entry for entry in entries if entry is not own])
    if given is not None:
        return _Residual(to_text(given), names_in(given), "", entries)
    if last is None or not names_in(last.node):
        return _Residual("", frozenset(), "", entries)
    text = to_text(last.node)
    if last.before:
        equation = f"{last.before} = {text}"
        program.readings.add(last.token, last.token.text, equation, _USED_BEFORE)
        return _Residual(equation, names_in(last.node) | {last.before}, last.before, entries[:-1])
    name = last.key.lower()
    is_sum = isinstance(last.node, Binary) and last.node.operator in "+-"
    if name in RESIDUAL_NAMES or (name in FUNCTION_NAMES and is_sum):
        program.readings.add(last.token, last.token.text, text, _LAST_NAME)
        return _Residual(text, names_in(last.node), "", entries[:-1])
    return _Residual("", frozenset(), "", entries)


def _literal(node: Expression) -> str | None:
    """The text of a plain number, as an input has it; one of single precision as the number that it is."""
    match node:
        case Negate(Number() as number):
            return f"-{_literal(number)}"
        case Number(text, single):
            return repr(rounded_to_single(float(text))) if single else text
    return None
