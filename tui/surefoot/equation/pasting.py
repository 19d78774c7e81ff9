"""Lines of Fortran, C or Python -> definitions, inputs and the residual, with every reading that changes a value.

Assignments are read in their order as the source computes them: integer division, single precision, the natural
logarithm behind `log`. Blocks, calls and elements of arrays are not read; they are listed. Nothing is ever run.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import replace
from types import MappingProxyType

from surefoot.equation.pasted import Pasted, Reading, Skipped
from surefoot.equation.source_c import c_steps
from surefoot.equation.source_fortran import fortran_steps
from surefoot.equation.source_language import guessed_language
from surefoot.equation.source_program import Program, chosen_function
from surefoot.equation.source_python import python_steps
from surefoot.equation.source_result import result_of
from surefoot.equation.source_steps import Assign, Begin, End, Give, Leave, Step
from surefoot.equation.source_tokens import LANGUAGES, Language
from surefoot.errors import EquationError

__all__ = ["LANGUAGES", "MAX_SOURCE", "Language", "Pasted", "Reading", "Skipped", "read_source"]

MAX_SOURCE = 200_000
"""Characters of source that are read at once."""

_STEPS: Mapping[Language, Callable[[str], Iterator[Step]]] = MappingProxyType(
    {"fortran": fortran_steps, "c": c_steps, "python": python_steps}
)


def read_source(text: str, language: str | None = None) -> Pasted:
    """Reads source lines.

    Args:
        language: `fortran`, `c` or `python`; guessed when it is None.

    Raises:
        EquationError: with line and column, for what is not an expression of the language, for operators that the
            equation language does not have (`%`, `+=`), for text that is empty or too long.
        ValueError: for another language.
    """
    asked = next((known for known in LANGUAGES if known == language), None)
    if language is not None and asked is None:
        raise ValueError(f"there is no language {language}; accepted: {', '.join(LANGUAGES)}")
    if len(text) > MAX_SOURCE:
        line = text.count("\n", 0, MAX_SOURCE) + 1
        message = f"the source has {len(text)} characters, {MAX_SOURCE} are accepted"
        raise EquationError(message, line=line, column=1, hint="paste the lines that define the residual")
    if not text.strip():
        raise EquationError("there is nothing to read", column=1, hint="paste assignments of Fortran, C or Python")
    chosen, reason = (asked, "as chosen") if asked else guessed_language(text)
    program = Program(chosen)
    program.read(_in_reach(list(_STEPS[chosen](text))))
    return result_of(program, reason)


def _in_reach(steps: list[Step]) -> Iterator[Step]:
    """The steps before the one function that is read, and its own; the others are left."""
    functions = _functions(steps)
    chosen = chosen_function(functions)
    inside: Begin | None = None
    read = False
    for place, step in enumerate(steps):
        if isinstance(step, Begin):
            inside = step
            read = read or place == chosen
            if place == chosen:
                yield step
            else:
                yield Leave(step.statement, f"{step.name} is another function")
        elif isinstance(step, End):
            inside = None
        elif inside is not None:
            if chosen is not None and inside is steps[chosen]:
                yield step
        elif not read:
            yield step
        elif isinstance(step, Leave):
            yield replace(step, assigned=frozenset())
        elif isinstance(step, Assign | Give):
            yield Leave(step.value.statement, "behind the function that is read")


def _functions(steps: list[Step]) -> dict[int, tuple[Begin, list[Step]]]:
    """The functions by the place where they begin, with their steps."""
    found: dict[int, tuple[Begin, list[Step]]] = {}
    current: list[Step] | None = None
    for place, step in enumerate(steps):
        if isinstance(step, Begin):
            current = []
            found[place] = step, current
        elif isinstance(step, End):
            current = None
        elif current is not None:
            current.append(step)
    return found
