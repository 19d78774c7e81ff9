"""Problem file texts of the function room: read from a file or an editor, and written for an editor."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from pathlib import Path

from surefoot.equation.problem_file import problem_file_text, read_problem_file
from surefoot.errors import ProblemError
from surefoot.screens.form import Fault, Form, label_of, problem_of
from surefoot.screens.form_lines import entries_of
from surefoot.screens.typed import Typed, typed_of

MAX_BYTES = 4 * 1024 * 1024

# What stands for a text that is not there, until the problem file text is written.
_STAND_INS = {"unknown": "name_of_the_unknown", "equation": "left = right"}
_TO_WRITE = {
    "unknown": "# the name that is solved for",
    "equation": "# left = right, or an expression that is to be zero",
}


@dataclass(frozen=True, slots=True)
class TextRead:
    """What a problem file states.

    Attributes:
        plan: its table `[plan]`, None where it has none.
        arithmetic: its kind of arithmetic.
    """

    typed: Typed
    plan: Mapping[str, object] | None
    arithmetic: str


def read_file(path: Path) -> TextRead:
    """Read a problem file.

    Raises:
        ProblemError: it cannot be read, or is no problem file.
    """
    try:
        with path.open("rb") as file:
            data = file.read(MAX_BYTES + 1)
    except OSError as error:
        raise ProblemError(f"cannot be read: {error.strerror}", file=path.name) from error
    if len(data) > MAX_BYTES:
        raise ProblemError(f"is larger than a problem file may be ({MAX_BYTES} bytes)", file=path.name)
    try:
        return read_text(data.decode("utf-8"), path.name)
    except UnicodeDecodeError as error:
        raise ProblemError("is not UTF-8 text; save it as UTF-8", file=path.name) from error


def read_text(text: str, name: str) -> TextRead:
    """Read the text of a problem file. Raises ProblemError at its place."""
    file = read_problem_file(text, name)
    return TextRead(typed_of(file.problem), file.plan, file.arithmetic)


def text_of(typed: Typed, plan: Mapping[str, object] | None) -> str:
    """The problem file text of what is typed, for an editor.

    Texts that cannot be taken yet stand above it as comments; an equation or unknown that is not there yet has a
    comment that says what to write.
    """
    form = typed.form
    missing = [key for key in _STAND_INS if not getattr(form, key).strip()]
    form = replace(form, **{key: _STAND_INS[key] for key in missing})
    left_out = []
    problem = problem_of(form, typed.base)
    while isinstance(problem, Fault):
        form, text = _without(form, problem)
        left_out += [f"# {label_of(problem.field)}: {line}\n" for line in text.split("\n")]
        problem = problem_of(form, typed.base)
    head = ["# Not accepted yet, and so not taken over below:\n", *left_out, "\n"] if left_out else []
    written = problem_file_text(problem, plan)
    for key in missing:
        written = written.replace(f'{key} = "{_STAND_INS[key]}"', f'{key} = "" {_TO_WRITE[key]}', 1)
    return "".join(head) + written


def _without(form: Form, fault: Fault) -> tuple[Form, str]:
    """The form without the text at a fault, and that text."""
    if fault.field in ("low", "high"):
        return replace(form, low="", high=""), f"{form.low} to {form.high}"
    if fault.field in ("where", "inputs"):
        entries = list(entries_of(getattr(form, fault.field), continued=fault.field == "where"))
        wrong = [entry for entry in entries if entry.line <= fault.line][-1]
        return replace(form, **{fault.field: "\n".join(each.raw for each in entries if each is not wrong)}), wrong.raw
    return replace(form, **{fault.field: _STAND_INS.get(fault.field, "")}), getattr(form, fault.field)
