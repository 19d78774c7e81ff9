"""What a form says so far: the trees of its texts, what is missing, and the first thing that is wrong. Pure."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from surefoot.equation.checking import check_problem
from surefoot.equation.functions import CONSTANTS
from surefoot.equation.parser import parse_equation, parse_expression
from surefoot.equation.problem import Problem
from surefoot.equation.tokens import is_name
from surefoot.equation.tree import Equation, Expression, Name, Node
from surefoot.equation.wording import children
from surefoot.errors import EquationError, ProblemError
from surefoot.screens.form import INDENT, NOTHING, Fault, Form, problem_of
from surefoot.screens.form_lines import Entry, entries_of, input_parts


@dataclass(frozen=True, slots=True)
class Reading:
    """How a form was read.

    Attributes:
        problem: the problem, once nothing is wrong with it.
        fault: the first thing that keeps it from being accepted.
        equation: tree of the equation, None while it cannot be read.
        definitions: trees of the lines of `where` that can be read, with the line where each begins.
        nameless: names that are used and have neither a value nor a definition, in order of appearance.
        proposed: the one of them that must be the unknown, where no unknown is named; empty otherwise.
        readable: whether there is an equation and every text could be read, so that no name is overlooked.
    """

    problem: Problem | None
    fault: Fault | None
    equation: Equation | None
    definitions: tuple[tuple[int, str, Expression], ...]
    nameless: tuple[str, ...]
    proposed: str
    readable: bool


def read_form(form: Form, base: Problem = NOTHING) -> Reading:
    """Read a form; `base` is the problem it came from."""
    equation = _equation(form.equation)
    definitions = [(entry, _expression(entry)) for entry in entries_of(form.where) if entry.text]
    faults = [tree for tree in (equation, *(tree for _, tree in definitions)) if isinstance(tree, Fault)]
    readable = equation is not None and not faults
    problem = problem_of(form, base)
    if isinstance(problem, Fault):
        faults.append(problem)
    elif not faults:
        try:
            check_problem(problem)
        except ProblemError as error:
            faults.append(fault_of(error, form, problem))
    read = tuple((entry.line, entry.name, tree) for entry, tree in definitions if not isinstance(tree, Fault))
    whole = equation if not isinstance(equation, Fault) else None
    nameless = _nameless(form, [*([whole] if whole is not None else []), *(tree for _, _, tree in read)])
    return Reading(
        problem=problem if isinstance(problem, Problem) and not faults else None,
        fault=faults[0] if faults else None,
        equation=whole,
        definitions=read,
        nameless=nameless,
        proposed=nameless[0] if not form.unknown.strip() and len(nameless) == 1 else "",
        readable=readable,
    )


def _equation(text: str) -> Equation | Fault | None:
    """The tree of the equation, None while there is no text."""
    try:
        return parse_equation(text) if text.strip() else None
    except EquationError as error:
        return Fault("equation", error.message, error.line, error.column, error.hint)


def _expression(entry: Entry) -> Expression | Fault:
    try:
        return parse_expression(entry.text)
    except EquationError as error:
        return Fault("where", error.message, *entry.place(error.line, error.column), error.hint)


def _nameless(form: Form, trees: Sequence[Node]) -> tuple[str, ...]:
    known = {form.unknown.strip(), *CONSTANTS}
    known.update(entry.name for entry in entries_of(form.where))
    known.update(entry.name for entry in entries_of(form.inputs, continued=False) if entry.text)
    found = dict.fromkeys(name for tree in trees for name in _names(tree))
    return tuple(name for name in found if name not in known)


def _names(tree: Node) -> Iterator[str]:
    """Names in the order of the text."""
    waiting = [tree]
    while waiting:
        node = waiting.pop()
        if isinstance(node, Name):
            yield node.name
        waiting.extend(reversed(children(node)))


# -- lines for names without a value ----------------------------------------------------------------------------------


def tidied(form: Form, reading: Reading) -> Form:
    """The form with what follows from its texts: the unknown, and a line `name =` in the inputs for each name to come.

    Lines without a value whose name is not used were left over from an earlier text and are dropped. While a text
    cannot be read, or it is open which of several names is the unknown, nothing is added.
    """
    if not reading.readable:
        return form
    unknown = form.unknown.strip() or reading.proposed
    wanted = [name for name in reading.nameless if name != unknown] if unknown else []
    lines, kept, present = form.inputs.split("\n"), [], set()
    for entry in entries_of(form.inputs, continued=False):
        left_over = entry.assigned and not entry.text and is_name(entry.name)
        if not (left_over and (entry.name == unknown or entry.name not in reading.nameless)):
            present.add(entry.name)
            kept.append(lines[entry.line - 1])
    added = [f"{name} = " for name in wanted if name not in present]
    same = len(kept) == sum(1 for _ in entries_of(form.inputs, continued=False)) and not added
    return replace(form, unknown=form.unknown or unknown, inputs=form.inputs if same else "\n".join(kept + added))


# -- the place of an error --------------------------------------------------------------------------------------------


def fault_of(error: ProblemError, form: Form, problem: Problem) -> Fault:
    """The error of a problem at its place in the form that states it.

    A place that the form does not show leads the message instead.
    """
    key, _, rest = error.place.partition(".")
    key = key.partition("[")[0]
    cause = error.equation_error
    said = cause.message if cause is not None else error.message
    hint = cause.hint if cause is not None else ""
    if key == "equation":
        line, column = _in_text(cause, problem.equation)
        start = len(form.equation) - len(form.equation.lstrip())
        skipped = form.equation[:start]
        return Fault(key, said, *_behind(skipped, line, column), hint)
    if key in ("where", "inputs"):
        return _fault_of_entry(error, form, problem, key, rest.split(".")) or Fault("", str(error))
    if key == "range":
        return Fault("low", said, hint=hint)
    if key in ("title", "unknown", "unit", "needed"):
        return Fault(key, said, hint=hint)
    return Fault("", str(error))


def _fault_of_entry(error: ProblemError, form: Form, problem: Problem, field: str, path: list[str]) -> Fault | None:
    entries = entries_of(getattr(form, field), continued=field == "where")
    named = [each for each in entries if each.name == path[0]]
    if not named:
        return None
    entry = named[-1]  # of a name that is stated twice, the repetition
    cause = error.equation_error
    if cause is None:
        key = path[1] if len(path) > 1 else ""
        shown = key in ("", "value", "unit", "low", "high")
        return Fault(field, error.message if shown else f"{key}: {error.message}", *_place_of_key(entry, key))
    text = next((each.text for each in problem.where if each.name == entry.name), entry.text)
    line, column = _in_text(cause, text)
    if line > 1 and text != entry.text:
        column += len(INDENT)
    return Fault(field, cause.message, *entry.place(line, column), cause.hint)


def _place_of_key(entry: Entry, key: str) -> tuple[int, int]:
    parts = input_parts(entry.text)
    part = {"value": parts.value, "unit": parts.unit, "low": parts.low, "high": parts.high}.get(key)
    return entry.place(1, part[1] + 1) if part is not None else (entry.line, entry.column)


def _in_text(cause: EquationError | None, text: str) -> tuple[int, int]:
    """Place of an error in a text whose leading blanks are cut off."""
    if cause is None:
        return 1, 1
    blanks = text[: len(text) - len(text.lstrip())]
    lines = blanks.count("\n")
    first = cause.line == lines + 1
    return max(cause.line - lines, 1), max(cause.column - (len(blanks) - blanks.rfind("\n") - 1 if first else 0), 1)


def _behind(skipped: str, line: int, column: int) -> tuple[int, int]:
    """Place in a field of a place in its text behind `skipped` blanks."""
    lines = skipped.count("\n")
    return line + lines, column + (len(skipped) - skipped.rfind("\n") - 1 if line == 1 else 0)
