"""Statements of Python -> steps."""

from __future__ import annotations

from collections.abc import Iterator

from surefoot.equation.source_lines import Statement, python_statements
from surefoot.equation.source_steps import (
    Assign,
    Begin,
    End,
    Give,
    Leave,
    Line,
    Slice,
    Step,
    assigned_names,
    assignments,
    split_at,
)
from surefoot.equation.source_tokens import SourceToken

_BLOCKS = {
    "if": "an if: its branches are not read",
    "elif": "an elif: its branches are not read",
    "else": "an else: its branches are not read",
    "for": "a loop: to read the lines in it, paste them alone",
    "while": "a loop: to read the lines in it, paste them alone",
    "try": "a try block",
    "except": "an except block",
    "finally": "a finally block",
    "with": "a with block",
    "match": "a match block",
    "async": "an async block",
}
_WORDS = frozenset({"raise", "assert", "del", "global", "nonlocal", "break", "continue", "yield"})
_WITHOUT_EFFECT = frozenset({"import", "from", "pass"})


def python_steps(text: str) -> Iterator[Step]:
    statements = list(python_statements(text))
    at, body = 0, -1  # columns that a function's body is indented by more than; -1 outside
    while at < len(statements):
        statement = statements[at]
        line = Line.of(statement, "python")
        if body >= 0 and statement.indent <= body:
            body = -1
            yield End()
        if line.word(0) == "def" and body < 0:
            body = statement.indent
            yield from _function(line)
        elif line.word(0) in (*_BLOCKS, "def", "lambda") and any(token.is_symbol(":") for token in line.tokens):
            end = _block_end(statements, at)
            yield _left_block(statements[at : end + 1])
            at = end
        else:
            yield from _steps(line)
        at += 1
    if body >= 0:
        yield End()


def _block_end(statements: list[Statement], start: int) -> int:
    """The place of the last statement that is indented more than the one at `start`."""
    at = start
    while at + 1 < len(statements) and statements[at + 1].indent > statements[start].indent:
        at += 1
    return at


def _left_block(statements: list[Statement]) -> Leave:
    lines = [Line.of(statement, "python") for statement in statements]
    names = frozenset().union(*map(assigned_names, lines))
    inside = len(statements) - 1
    count = f" ({inside} statement{'s' if inside != 1 else ''})" if inside else ""
    return Leave(statements[0], _BLOCKS.get(lines[0].word(0), "a function in a function") + count, names)


def _steps(line: Line) -> Iterator[Step]:
    statement = line.statement
    first = line.tokens[0]
    if line.word(0) in _WITHOUT_EFFECT or first.kind == "end" or (first.kind == "string" and len(line.tokens) == 2):
        return
    if line.word(0) == "return":
        yield from _returned(line)
    elif line.word(0) == "class" and line.tokens[-2].is_symbol(":"):
        yield Leave(statement, "a class: what stands in it is read")
    elif line.word(0) in _WORDS or first.is_symbol("@"):
        yield Leave(statement, f"{first.text} is not an assignment", assigned_names(line))
    elif (annotated := _annotated(line)) is not None:
        yield annotated
    elif steps := assignments(line):
        yield from _lambda(line, steps[0]) or steps
    elif unpacked := _unpacked(line):
        yield from unpacked
    elif any(token.is_symbol("=") for token in line.tokens) and not _is_call(line):
        yield Leave(statement, "several names, or an element of something, are given a value", assigned_names(line))
    elif _is_call(line):
        yield Leave(statement, "a call")
    else:
        yield Give(line.rest(0), returned=False)


def _is_call(line: Line) -> bool:
    """Whether the statement is a call and nothing else: `print(f)`, `plt.plot(x, y)`."""
    place = 0
    while line.tokens[place].kind == "name" and line.word(place + 1) == ".":
        place += 2
    if line.tokens[place].kind != "name" or line.word(place + 1) != "(":
        return False
    depth = 0
    for at in range(place + 1, len(line.tokens)):
        depth += line.tokens[at].is_symbol("(", "[", "{") - line.tokens[at].is_symbol(")", "]", "}")
        if depth == 0:
            return at == len(line.tokens) - 2 and (place > 0 or line.word(0) in ("print", "exec", "eval", "exit"))
    return False


def _annotated(line: Line) -> Step | None:
    """`x: float = 2.0`."""
    if line.tokens[0].kind != "name" or line.word(1) != ":":
        return None
    sign = next((i for i, token in enumerate(line.tokens) if token.is_symbol("=")), None)
    if sign is None:
        return Leave(line.statement, "a declaration")
    return Assign(line.tokens[0], line.rest(sign + 1))


def _returned(line: Line) -> Iterator[Step]:
    """The first value that is returned; a derivative beside it is not read."""
    parts = [(1 + a, 1 + b) for a, b in split_at(line.tokens[1:], ",")]
    if parts:
        yield Give(line.cut(*parts[0]), returned=True)
    if len(parts) > 1:
        yield Leave(line.statement, "of several values that are returned the first is read")


def _unpacked(line: Line) -> tuple[Step, ...]:
    """`a, b = 1.0, 2.0` one by one; empty for a statement that is none, or that uses one of its names."""
    sign = next((i for i, token in enumerate(line.tokens) if token.is_symbol("=")), 0)
    targets = list(split_at((*line.tokens[:sign], line.tokens[-1]), ","))
    values = [(sign + 1 + a, sign + 1 + b) for a, b in split_at(line.tokens[sign + 1 :], ",")]
    names = {line.tokens[a].text for a, _ in targets}
    used = {token.text for token in line.tokens[sign + 1 :] if token.kind == "name"}
    if not sign or len(targets) != len(values) or names & used:
        return ()
    if any(b - a != 1 or line.tokens[a].kind != "name" for a, b in targets):
        return ()
    return tuple(Assign(line.tokens[a], line.cut(*value)) for (a, _), value in zip(targets, values, strict=True))


def _lambda(line: Line, step: Assign) -> tuple[Step, ...] | None:
    """`f = lambda x, Re=1e5: expression` as a function."""
    if not step.value.tokens[0].is_word("lambda"):
        return None
    colon = next((i for i, token in enumerate(line.tokens) if token.is_symbol(":")), None)
    if colon is None:
        return None
    begin = Begin(step.target.text, _parameters(line, 3, colon), "", line.statement)
    return begin, Give(line.rest(colon + 1), returned=True), End()


def _function(line: Line) -> Iterator[Step]:
    """The header, and what stands behind its colon on the same line."""
    tokens = line.tokens
    opener = next((i for i, token in enumerate(tokens) if token.is_symbol("(")), 0)
    depth, close = 0, len(tokens) - 1
    for place in range(opener, len(tokens)):
        depth += tokens[place].is_symbol("(") - tokens[place].is_symbol(")")
        if depth == 0:
            close = place
            break
    yield Begin(tokens[1].text, _parameters(line, opener + 1, close), "", line.statement)
    colon = next((i for i in range(close, len(tokens)) if tokens[i].is_symbol(":")), len(tokens) - 1)
    if colon + 1 < len(tokens) - 1:
        rest = line.rest(colon + 1)
        yield from _steps(Line(line.statement, rest.tokens))


def _parameters(line: Line, start: int, stop: int) -> tuple[tuple[SourceToken, Slice | None], ...]:
    found: list[tuple[SourceToken, Slice | None]] = []
    for a, b in split_at((*line.tokens[start:stop], line.tokens[-1]), ","):
        name = line.tokens[start + a]
        if name.kind != "name" or name.text == "self":
            continue
        sign = next((i for i in range(start + a, start + b) if line.tokens[i].is_symbol("=")), None)
        found.append((name, None if sign is None else line.cut(sign + 1, start + b)))
    return tuple(found)
