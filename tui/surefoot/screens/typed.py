"""What is typed and not accepted yet, and how it is kept in a draft. Pure."""

from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import dataclass, replace

from surefoot.equation.problem import Problem
from surefoot.equation.problem_content import problem_from_content, problem_to_content
from surefoot.errors import RecordError
from surefoot.screens.form import FIELDS, NOTHING, Form, form_of


@dataclass(frozen=True, slots=True)
class Typed:
    """The half-done work of the function room.

    Attributes:
        form: the texts of the fields.
        base: the problem they came from.
        readings: what was said about a paste whose lines are in the fields.
        editor_text: text of the own editor that could not be read; empty when there is none.
    """

    form: Form
    base: Problem = NOTHING
    readings: tuple[str, ...] = ()
    editor_text: str = ""

    @property
    def changed(self) -> bool:
        """Whether something would be lost if it were dropped."""
        return self.form != form_of(self.base) or bool(self.editor_text)


def typed_of(problem: Problem) -> Typed:
    """A problem as it stands, nothing typed yet."""
    return Typed(form_of(problem), problem)


def draft_of(typed: Typed) -> dict[str, str]:
    """The texts of a draft."""
    fields = {name: getattr(typed.form, name) for name in FIELDS}
    return {
        **fields,
        "editor_text": typed.editor_text,
        "base": json.dumps(problem_to_content(typed.base)),
        "readings": json.dumps(typed.readings),
    }


def typed_from(draft: Mapping[str, str]) -> Typed:
    """What a draft holds. A part of it that cannot be read is left out: the texts of the fields always come back."""
    typed = Typed(Form(**{name: draft.get(name, "") for name in FIELDS}), editor_text=draft.get("editor_text", ""))
    try:
        readings = json.loads(draft.get("readings", "[]"))
        base = problem_from_content(json.loads(draft.get("base", "null")))
    except (ValueError, RecursionError, RecordError):
        return typed
    words = tuple(readings) if isinstance(readings, list) and all(isinstance(each, str) for each in readings) else ()
    return replace(typed, base=base, readings=words)
