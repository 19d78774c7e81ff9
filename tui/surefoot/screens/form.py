"""The form of a problem: the texts of its fields, and the problem that they state. Pure.

A form shows a part of a problem. What it does not show (conditions, uncertainties, sources, ...) stays with the problem
it came from, and whatever was not edited is given back exactly as it was.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, fields, replace
from typing import TypeVar

from surefoot.equation.problem import Definition, Input, Job, Problem
from surefoot.equation.tokens import is_literal, is_name
from surefoot.screens.form_lines import Entry, entries_of, input_parts, number_hint, one_line, shown_text

_Part = TypeVar("_Part")

NOTHING = Problem(unknown="", equation="")
"""The problem that an empty form stands for."""


@dataclass(frozen=True, slots=True)
class Form:
    """The texts of the fields, as typed. `where` and `inputs` have one entry a line; an indented line goes on."""

    title: str = ""
    unknown: str = ""
    unit: str = ""
    low: str = ""
    high: str = ""
    needed: str = ""
    equation: str = ""
    where: str = ""
    inputs: str = ""

    @property
    def empty(self) -> bool:
        """Whether nothing but blanks is typed."""
        return not any(getattr(self, name).strip() for name in FIELDS)


INDENT = "    "
"""Stands before a line that goes on with the entry above it."""

FIELDS: tuple[str, ...] = tuple(field.name for field in fields(Form))

_LABELS = {"low": "range from", "high": "range to"}


def label_of(field: str) -> str:
    """The name of a field in messages."""
    return _LABELS.get(field, field)


@dataclass(frozen=True, slots=True)
class Fault:
    """What keeps a form from being a problem, and where it stands.

    Attributes:
        field: name of the field; empty for a key that the form does not show, which `message` then names.
        line, column: place in the text of the field, from 1; column 0 when the whole field is meant.
        hint: what would be accepted; empty when there is nothing to say.
        missing: the name that has no value yet, where that is all; empty otherwise.
    """

    field: str
    message: str
    line: int = 1
    column: int = 1
    hint: str = ""
    missing: str = ""

    def __str__(self) -> str:
        said = self.message + (f"; {self.hint}" if self.hint else "")
        return f"{self.place}: {said}" if self.field else said

    @property
    def place(self) -> str:
        """The place in words: `inputs, line 2, column 5`."""
        line = f", line {self.line}" if self.field in ("where", "inputs") or self.line > 1 else ""
        return label_of(self.field) + line + (f", column {self.column}" if self.column else "")


# -- from a problem to its form ---------------------------------------------------------------------------------------


def form_of(problem: Problem) -> Form:
    """The form that shows a problem."""
    low, high = problem.range or ("", "")
    return Form(
        title=one_line(problem.title),
        unknown=one_line(problem.unknown),
        unit=one_line(problem.unit),
        low=one_line(low),
        high=one_line(high),
        needed=one_line(problem.needed or ""),
        equation=shown_text(problem.equation),
        where="\n".join(shown_text(f"{each.name} = {each.text}", indent=INDENT) for each in problem.where),
        inputs="\n".join(input_line(each) for each in problem.inputs),
    )


def input_line(each: Input) -> str:
    """An input as its line of the form: `Qd = 12.0 m3/s [4.0, 18.0]`."""
    parts = [f"{each.name} = {each.value}", each.unit]
    if each.low is not None or each.high is not None:
        parts.append(f"[{each.low or ''}, {each.high or ''}]")
    return one_line(" ".join(part for part in parts if part))


def kept_words(problem: Problem) -> str:
    """What the form does not show of a problem, in a few words; empty when it shows everything."""
    kept = [name for name in ("admissible", "prefer", "derivative", "note", "correlation") if getattr(problem, name)]
    if problem.job != Job():
        kept.append("job")
    for each in problem.inputs:
        hidden = [
            name.replace("_", " ")
            for name in ("uncertainty", "half_width", "interval", "distribution", "dof", "source")
            if getattr(each, name)
        ]
        if hidden:
            kept.append(f"{', '.join(hidden)} of {each.name}")
    return "; ".join(kept)


# -- from a form to a problem -----------------------------------------------------------------------------------------


def problem_of(form: Form, base: Problem = NOTHING) -> Problem | Fault:
    """The problem that a form states, or the first thing that keeps it from stating one.

    Only the shape is looked at: names, numbers, one entry a line. The texts of expressions are left as they are.

    Args:
        base: the problem the form came from; keys that the form does not show are taken from it.
    """
    shown = form_of(base)
    for check in (_fault_of_unknown, _fault_of_numbers):
        if fault := check(form):
            return fault
    if not form.equation.strip():
        return Fault(
            "equation", "there is no equation yet", column=0, hint="write left = right, or an expression meant to be 0"
        )
    where = _definitions(form.where, shown.where, base)
    if isinstance(where, Fault):
        return where
    inputs = _inputs(form.inputs, shown.inputs, base)
    if isinstance(inputs, Fault):
        return inputs
    ends = (form.low.strip(), form.high.strip())
    return replace(
        base,
        title=base.title if form.title == shown.title else form.title.strip(),
        unknown=form.unknown.strip(),
        unit=base.unit if form.unit == shown.unit else form.unit.strip(),
        range=ends if all(ends) else None,
        needed=form.needed.strip() or None,
        equation=base.equation if form.equation == shown.equation else form.equation.strip(),
        where=where,
        inputs=inputs,
    )


def _fault_of_unknown(form: Form) -> Fault | None:
    name = form.unknown.strip()
    if not name:
        return Fault("unknown", "not named yet", column=0, hint="write the name that is solved for")
    return None if is_name(name) else Fault("unknown", f"{name} is not a name", hint=_NAME_HINT)


_NAME_HINT = "letters, digits and _, a letter first"


def _fault_of_numbers(form: Form) -> Fault | None:
    for field in ("low", "high", "needed"):
        text = getattr(form, field)
        if text.strip() and not is_literal(text.strip()):
            column = len(text) - len(text.lstrip()) + 1
            return Fault(field, f"{text.strip()} is not a number", column=column, hint=number_hint(text.strip()))
    if bool(form.low.strip()) != bool(form.high.strip()):
        empty = "high" if form.low.strip() else "low"
        return Fault(empty, "the range has one end only", column=0, hint="write both, or none")
    return None


def _unchanged(shown: Iterable[Entry], parts: Sequence[_Part]) -> dict[str, _Part]:
    """Text of an entry as it was shown -> the part of the problem that it showed."""
    entries = tuple(shown)
    return {entry.raw: part for entry, part in zip(entries, parts, strict=False)} if len(entries) == len(parts) else {}


def _definitions(text: str, shown: str, base: Problem) -> tuple[Definition, ...] | Fault:
    before = _unchanged(entries_of(shown), base.where)
    found = []
    for entry in entries_of(text):
        if fault := _fault_of_name(entry, "where", "name = expression"):
            return fault
        if not entry.text:
            return Fault("where", f"{entry.name} has no expression", entry.text_line, entry.text_column)
        found.append(before.get(entry.raw) or Definition(entry.name, entry.text))
    return tuple(found)


def _inputs(text: str, shown: str, base: Problem) -> tuple[Input, ...] | Fault:
    before = _unchanged(entries_of(shown, continued=False), base.inputs)
    by_name = {each.name: each for each in base.inputs}
    found = []
    for entry in entries_of(text, continued=False):
        if fault := _fault_of_name(entry, "inputs", "name = value unit [low, high]"):
            return fault
        read = before.get(entry.raw) or _input(entry, by_name.get(entry.name))
        if isinstance(read, Fault):
            return read
        found.append(read)
    return tuple(found)


def _fault_of_name(entry: Entry, field: str, wanted: str) -> Fault | None:
    if not entry.assigned:
        return Fault(field, "there is no =", entry.line, entry.column + len(entry.name), hint=f"write {wanted}")
    if not is_name(entry.name):
        said = f"{entry.name} is not a name" if entry.name else "there is no name before the ="
        return Fault(field, said, entry.line, entry.column, hint=_NAME_HINT)
    return None


def _input(entry: Entry, base: Input | None) -> Input | Fault:
    """The input of an entry; what the form does not show is taken from the input of that name before."""
    if not entry.text:
        place = (entry.text_line, entry.text_column)
        return Fault("inputs", f"{entry.name} has no value yet", *place, missing=entry.name)
    parts = input_parts(entry.text)
    for part in (parts.value, parts.low, parts.high):
        if part is not None and not is_literal(part[0]) and (part[0] or part is parts.value):
            line, column = entry.place(1, part[1] + 1)
            return Fault("inputs", f"{part[0] or 'nothing'} is not a number", line, column, hint=number_hint(part[0]))
    return replace(
        base or Input(entry.name, ""),
        value=parts.value[0],
        unit=one_line(parts.unit[0]),
        low=(parts.low[0] or None) if parts.low else None,
        high=(parts.high[0] or None) if parts.high else None,
    )
