"""Source lines in the form: does a text look like source, and how lines that were read go into the fields. Pure."""

from __future__ import annotations

import re
from dataclasses import replace

from surefoot.equation.pasting import Pasted
from surefoot.screens.form import Form, entries_of

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
    """The form with definitions and equation from source; a definition takes the place of one of the same name."""
    fresh = {definition.name: f"{definition.name} = {definition.text}" for definition in pasted.definitions}
    kept = [entry.raw for entry in entries_of(form.where) if entry.name not in fresh]
    return replace(form, where="\n".join((*kept, *fresh.values())), equation=pasted.equation or form.equation)


def pasted_lines(pasted: Pasted) -> list[str]:
    return []


def reading_words(pasted: Pasted) -> tuple[str, ...]:
    return ()
