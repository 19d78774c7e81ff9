"""Is a problem whole? Its texts parsed, its names known, its definitions in order, its values literals.

The unknown must enter the equation; an input that is never used is fine.
"""

from __future__ import annotations

import unicodedata
from collections.abc import Callable, Collection, Iterable, Iterator, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Literal, NoReturn, TypeAlias, TypeVar

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.functions import CONSTANTS, RESERVED, nearest
from surefoot.equation.parser import parse_condition, parse_equation, parse_expression
from surefoot.equation.problem import Input, Problem
from surefoot.equation.tokens import Token, is_literal, is_name, tokenize
from surefoot.equation.tree import Binary, Condition, Equation, Expression, Node
from surefoot.equation.wording import names_in
from surefoot.errors import EquationError, ProblemError

NameKind: TypeAlias = Literal["unknown", "input", "definition"]
Parsed = TypeVar("Parsed", bound=Node)

_LISTED = 12  # names that one message lists


@dataclass(frozen=True, slots=True)
class CheckedProblem:
    """A problem that can be evaluated.

    Attributes:
        equation: as written; `residual` is what is to be zero.
        definitions: name and tree of each line of `[where]`, in order; a line uses only lines above it.
        admissible: the conditions on a root, in order.
        host_derivative: df/dx as the host code has it, None where the problem states none.
        names: every name that texts may use, with what it is.
        moving: the definitions that the unknown enters, directly or through others.
    """

    problem: Problem
    equation: Equation
    definitions: tuple[tuple[str, Expression], ...]
    admissible: tuple[Condition, ...]
    host_derivative: Expression | None
    names: Mapping[str, NameKind]
    moving: frozenset[str]

    @property
    def residual(self) -> Expression:
        """Left minus right; the left side alone where there is no right one."""
        equation = self.equation
        if equation.right is None:
            return equation.left
        return Binary("-", equation.left, equation.right, equation.column)


def check_problem(problem: Problem) -> CheckedProblem:
    """The problem with its texts parsed.

    Raises:
        ProblemError: `place` is the key that is wrong (`where.A`, `inputs.n.value`); `equation_error` is set where the
            text at that place is the cause.
    """
    names = _checked_names(problem)
    equation = _parsed(problem.equation, parse_equation, "equation")
    definitions = tuple(
        (line.name, _parsed(line.text, parse_expression, f"where.{line.name}")) for line in problem.where
    )
    admissible = tuple(_parsed(text, parse_condition, place) for place, text in _admissible_texts(problem))
    host_derivative = _parsed(problem.derivative, parse_expression, "derivative") if problem.derivative else None
    _refuse_unknown(_texts(problem), names)
    _refuse_disorder(dict(definitions))
    _check_values(problem)
    moving = _moving(definitions, problem.unknown)
    if not names_in(equation) & (moving | {problem.unknown}):
        raise ProblemError(f"the unknown {problem.unknown} does not enter the equation", place="equation")
    return CheckedProblem(problem, equation, definitions, admissible, host_derivative, names, moving)


def parse_known(text: str, parse: Callable[[str], Parsed], known: Iterable[str]) -> Parsed:
    """The tree of a text that may use the known names only.

    Args:
        parse: `parse_expression`, `parse_condition` or `parse_equation`.

    Raises:
        EquationError: syntax, a literal beyond binary64, a table that is not defined, or unknown names, all of them
            listed, each with the nearest known one.
    """
    known = frozenset(known) | CONSTANTS.keys()
    tree = parse(text)
    _refuse_tokens(text)
    unknown = _unknown_tokens(text, known)
    if unknown:
        raise _unknown_error(unknown, known)
    return tree


# Names


def _checked_names(problem: Problem) -> Mapping[str, NameKind]:
    stated: list[tuple[str, NameKind, str]] = [(problem.unknown, "unknown", "unknown")]
    stated += [(given.name, "input", f"inputs.{given.name}") for given in problem.inputs]
    stated += [(line.name, "definition", f"where.{line.name}") for line in problem.where]
    names: dict[str, NameKind] = {}
    for name, kind, place in stated:
        if name in RESERVED:
            raise ProblemError(f"{name} is a word of the equation language; take another name", place=place)
        if not is_name(name):
            message = f"{name!r} is not a name; letters, digits and underscores make one, and no digit comes first"
            raise ProblemError(message, place=place)
        if name in names:
            both = kind if names[name] == kind else f"{names[name]} and {kind}"
            raise ProblemError(f"{name} is stated twice ({both}); rename one", place=place)
        names[name] = kind
    return MappingProxyType(names)


def _refuse_unknown(texts: Iterator[tuple[str, str]], names: Mapping[str, NameKind]) -> None:
    """Names that nothing defines, of all texts together, at the place of the first."""
    known = names.keys() | CONSTANTS.keys()
    unknown: dict[str, Token] = {}
    first: tuple[str, EquationError] | None = None
    for place, text in texts:
        here = _unknown_tokens(text, known)
        if here and first is None:
            first = place, _unknown_error(here, known)
        for token in here:
            unknown.setdefault(token.text, token)
    if first:
        place, error = first
        column = f"column {error.column}" if error.line == 1 else f"line {error.line}, column {error.column}"
        raise ProblemError(
            f"{column}: {_unknown_words(list(unknown.values()), known)}", place=place, equation_error=error
        )


def _unknown_tokens(text: str, known: Collection[str]) -> list[Token]:
    """The first token of each name that is not known."""
    found: dict[str, Token] = {}
    for token in tokenize(text):
        if token.kind == "name" and token.text not in known and token.text not in RESERVED:
            found.setdefault(token.text, token)
    return list(found.values())


def _unknown_error(unknown: list[Token], known: Collection[str]) -> EquationError:
    return EquationError(_unknown_words(unknown, known), line=unknown[0].line, column=unknown[0].column)


def _unknown_words(unknown: list[Token], known: Collection[str]) -> str:
    words = ", ".join(_with_nearest(token.text, known) for token in unknown[:_LISTED])
    further = f" and {len(unknown) - _LISTED} more" if len(unknown) > _LISTED else ""
    return f"unknown name{'s' if len(unknown) > 1 else ''} {words}{further}"


def _with_nearest(name: str, known: Collection[str]) -> str:
    near = nearest(name, known)
    if near and unicodedata.normalize("NFKC", name) == unicodedata.normalize("NFKC", near):
        return f"{name} {_code_points(name)} (nearest: {near} {_code_points(near)}, which only looks alike)"
    return f"{name} (nearest: {near})" if near else name


def _code_points(name: str) -> str:
    return " ".join(f"U+{ord(character):04X}" for character in name if not character.isascii())


# Texts


def _texts(problem: Problem) -> Iterator[tuple[str, str]]:
    """Every text of the problem with its place."""
    yield "equation", problem.equation
    for line in problem.where:
        yield f"where.{line.name}", line.text
    yield from _admissible_texts(problem)
    yield "derivative", problem.derivative


def _admissible_texts(problem: Problem) -> Iterator[tuple[str, str]]:
    for count, text in enumerate(problem.admissible, start=1):
        yield f"admissible {count}", text


def _parsed(text: str, parse: Callable[[str], Parsed], place: str) -> Parsed:
    try:
        tree = parse(text)
        _refuse_tokens(text)
    except EquationError as error:
        raise ProblemError(str(error), place=place, equation_error=error) from error
    return tree


def _refuse_tokens(text: str) -> None:
    """Refuses literals beyond the range of binary64 (or of binary32, with the suffix f), and tables."""
    for token in tokenize(text):
        if token.kind == "number":
            try:
                BINARY64.literal(token.text, token.single)
            except OperationFailed:
                kind, written = ("binary32", token.text + "f") if token.single else ("binary64", token.text)
                raise EquationError(
                    f"{written} is beyond the range of {kind}", line=token.line, column=token.column
                ) from None
        if token.kind == "string":
            message = f'the table "{token.text}" is not defined'
            raise EquationError(message, line=token.line, column=token.column)


# Order of the definitions


def _refuse_disorder(trees: Mapping[str, Expression]) -> None:
    """Refuses a line that uses itself or a line below it: names the circle, or the line that must move up."""
    place_of = {name: count for count, name in enumerate(trees)}
    uses = {name: sorted(names_in(tree) & trees.keys(), key=place_of.__getitem__) for name, tree in trees.items()}
    circle = _circle(uses)
    if circle:
        shown = circle if len(circle) <= _LISTED else [*circle[: _LISTED - 1], "...", circle[-1]]
        raise ProblemError(f"the definitions go round in a circle: {' -> '.join(shown)}", place=f"where.{circle[0]}")
    for name, used in uses.items():
        below = [other for other in used if place_of[other] > place_of[name]]
        if below:
            message = f"{name} uses {', '.join(below)}, defined below it; move {', '.join(below)} above {name}"
            raise ProblemError(message, place=f"where.{name}")


def _circle(uses: Mapping[str, list[str]]) -> list[str]:
    """The first circle (`A -> P -> A`), empty when there is none. Depth first, on its own stack."""
    finished: set[str] = set()
    for start in uses:
        path, branches = [start], [iter(uses[start])]
        while path:
            following = next(branches[-1], None)
            if following is None:
                finished.add(path.pop())
                branches.pop()
            elif following in path:
                return [*path[path.index(following) :], following]
            elif following not in finished:
                path.append(following)
                branches.append(iter(uses[following]))
    return []


def _moving(definitions: tuple[tuple[str, Expression], ...], unknown: str) -> frozenset[str]:
    moving: set[str] = set()
    for name, tree in definitions:
        if names_in(tree) & (moving | {unknown}):
            moving.add(name)
    return frozenset(moving)


# Values


def _check_values(problem: Problem) -> None:
    for given in problem.inputs:
        _check_input(given)
    if problem.range is not None:
        _check_ends(problem.range, "range")
    if problem.needed is not None and not _number(problem.needed, "needed") > 0.0:
        _refuse("the accuracy that is needed must be above zero", "needed")
    nearest_to = problem.prefer.removeprefix("nearest:")
    if nearest_to != problem.prefer:
        _number(nearest_to, "prefer")
    elif problem.prefer not in ("", "smallest", "largest"):
        _refuse(f"{problem.prefer} is not a preference; accepted: smallest, largest, nearest", "prefer")
    inputs = {given.name for given in problem.inputs}
    for correlation in problem.correlation:
        for name in correlation.between:
            if name not in inputs:
                _refuse(f"{_with_nearest(name, inputs)} is not an input", "correlation")
        if not abs(_number(correlation.r, "correlation.r")) <= 1.0:
            _refuse("a correlation lies between -1 and 1", "correlation.r")


def _check_input(given: Input) -> None:
    place = f"inputs.{given.name}"
    _number(given.value, f"{place}.value")
    ends = given.low, given.high
    if ends[0] is not None and ends[1] is not None:
        _check_ends((ends[0], ends[1]), f"{place}.low")
    for key, text in (("low", given.low), ("high", given.high)):
        if text is not None:
            _number(text, f"{place}.{key}")
    if given.interval is not None:
        _check_ends(given.interval, f"{place}.interval")
    for key, text in (("uncertainty", given.uncertainty), ("half_width", given.half_width), ("dof", given.dof)):
        if text is not None and _number(text, f"{place}.{key}") < 0.0:
            _refuse(f"{text} is below zero", f"{place}.{key}")


def _check_ends(ends: tuple[str, str], place: str) -> None:
    low, high = (_number(end, place) for end in ends)
    if not low < high:
        _refuse(f"the lower end {ends[0]} is not below the upper end {ends[1]}", place)


def _number(text: str, place: str) -> float:
    """The value of a literal, for comparisons. Raises ProblemError for any other text."""
    if not is_literal(text):
        _refuse(f"{text!r} is not a number; write it as 0.025, 1e-3 or 0x1.8p-3", place)
    try:
        return BINARY64.literal(text, single=False)
    except OperationFailed:
        _refuse(f"{text} is beyond the range of binary64", place)


def _refuse(message: str, place: str) -> NoReturn:
    raise ProblemError(message, place=place)
