"""Source lines in the form: does a text look like source, and how lines that were read go into the fields. Pure."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import replace

from surefoot.equation.pasting import Pasted
from surefoot.screens.form import Form, input_line
from surefoot.screens.form_lines import entries_of

# What source has and neither an equation nor definitions as one writes them have.
_CERTAIN = re.compile(
    r";[ \t]*$"  # a statement's end in C
    r"|&[ \t]*$"  # a Fortran line that goes on
    r"|\b(?:math|np|numpy|std)(?:\.|::)[a-z]"
    r"|\b(?:[0-9]+\.?[0-9]*|\.[0-9]+)[dD][+-]?[0-9]+\b"
    r"|\bD(?:LOG10|LOG|EXP|SQRT|SIN|COS|TAN|ABS|BLE)\b|\bALOG10?\b"
    r"|\b(?:pow|fabs|powf|sqrtf|logf|expf)\s*\("
    r"|^[ \t]*(?:double|float|real|integer|const|static|def|return|import|#include)\b"
    r"|//|/\*|[-+*/]=",
    re.MULTILINE | re.IGNORECASE,
)
_NAMES = {"fortran": "Fortran", "c": "C", "python": "Python"}
_ASSIGNMENT = re.compile(r"^[ \t]*[^\W\d]\w*[ \t]*=[^=]", re.MULTILINE)


def looks_like_source(text: str) -> bool:
    """Whether a pasted text should be offered to be read as source.

    One sign that only source has is enough; `**`, which the equation language reads too, counts where there are
    several assignments.
    """
    if _CERTAIN.search(text):
        return True
    return "**" in text and len(_ASSIGNMENT.findall(text)) > 1


def with_source(form: Form, pasted: Pasted) -> Form:
    """The form with what was read; a definition or input takes the place of one of the same name."""
    definitions = {each.name: f"{each.name} = {each.text}" for each in pasted.definitions}
    inputs = {each.name: input_line(each) for each in pasted.inputs}
    return replace(
        form,
        unknown=form.unknown or pasted.unknown,
        equation=pasted.equation or form.equation,
        where=_with_entries(form.where, definitions, continued=True),
        inputs=_with_entries(form.inputs, inputs, continued=False),
    )


def _with_entries(text: str, fresh: Mapping[str, str], *, continued: bool) -> str:
    kept = [entry.raw for entry in entries_of(text, continued=continued) if entry.name not in fresh]
    return "\n".join((*kept, *fresh.values()))


def pasted_lines(pasted: Pasted) -> list[str]:
    """What was read and how, for the person to see before it is taken over."""
    lines = [f"read as {_NAMES[pasted.language]}: {pasted.language_reason}", ""]
    lines += [f"{each.name} = {each.text}" for each in pasted.definitions]
    lines += [f"{input_line(each)}   (input)" for each in pasted.inputs]
    lines.append(
        f"equation: {pasted.equation}" if pasted.equation else "no equation in these lines; type it afterwards"
    )
    if pasted.unknown:
        lines.append(f"unknown: {pasted.unknown}")
    if pasted.names_needed:
        lines.append(f"no value: {', '.join(pasted.names_needed)}")
    lines += ["", "What changes a value, to be looked at:" if pasted.readings else "No reading changes a value."]
    lines += reading_words(pasted)
    if pasted.skipped:
        lines += ["", "Not read:", *(f"line {each.line}: {each.text}: {each.why}" for each in pasted.skipped)]
    return lines


def reading_words(pasted: Pasted) -> tuple[str, ...]:
    """The readings as sentences, as the record keeps them."""
    return tuple(
        f"line {each.line}, column {each.column}: {each.as_written} is read as {each.read_as}: {each.why}"
        for each in pasted.readings
    )
