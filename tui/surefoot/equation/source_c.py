"""Statements of C and C++ -> steps."""

from __future__ import annotations

from collections.abc import Iterator

from surefoot.equation.source_lines import Statement, c_statements
from surefoot.equation.source_steps import (
    Assign,
    Begin,
    Declare,
    End,
    Give,
    Leave,
    Line,
    Step,
    assigned_names,
    assignments,
    split_at,
)
from surefoot.equation.source_tokens import Kind, SourceToken

C_TYPES = frozenset(
    {
        "double",
        "float",
        "int",
        "long",
        "short",
        "unsigned",
        "signed",
        "size_t",
        "char",
        "bool",
        "auto",
        "void",
        "real_t",
    }
)
_QUALIFIERS = frozenset(
    {"const", "static", "constexpr", "register", "volatile", "extern", "inline", "struct", "std", "::", "restrict"}
)
_BLOCKS = {
    "if": "an if: its branches are not read",
    "else": "an else: its branches are not read",
    "for": "a loop: to read the lines in it, paste them alone",
    "while": "a loop: to read the lines in it, paste them alone",
    "do": "a loop: to read the lines in it, paste them alone",
    "switch": "a switch: its cases are not read",
}
_AROUND = frozenset({"namespace", "extern"})
_WORDS = frozenset({"break", "continue", "goto", "case", "default", "typedef", "using", "namespace", "throw"})


def c_steps(text: str) -> Iterator[Step]:
    statements = list(c_statements(text))
    at, open_braces = 0, 0
    while at < len(statements):
        statement = statements[at]
        line = Line.of(statement, "c")
        begin = _function(line) if statement.end == "{" else None
        if begin is not None and open_braces == 0:
            open_braces = 1
            yield from begin
        elif statement.end == "}" and not statement.text:
            open_braces = max(0, open_braces - 1)
            if open_braces == 0:
                yield End()
        elif line.word(0) in _AROUND and statement.end == "{":
            yield Leave(statement, f"{line.word(0)}: what stands in it is read")
        elif line.word(0) in _BLOCKS or (statement.end == "{" and statement.text):
            end = _block_end(statements, at)
            yield _left_block(statements[at : end + 1])
            at = end
        elif statement.end == "{":
            open_braces += 1
        else:
            yield from _steps(line)
        at += 1


def _block_end(statements: list[Statement], start: int) -> int:
    """The place of the statement that ends a block: its closing brace, or itself where it opens none."""
    depth = 0
    for at in range(start, len(statements)):
        depth += statements[at].end == "{"
        depth -= statements[at].end == "}" and not statements[at].text
        if depth <= 0:
            return at
    return len(statements) - 1


def _left_block(statements: list[Statement]) -> Leave:
    lines = [Line.of(statement, "c") for statement in statements]
    names = frozenset().union(*map(assigned_names, lines))
    inside = max(len(statements) - 2, 0)
    count = f" ({inside} statement{'s' if inside != 1 else ''})" if inside else ""
    return Leave(statements[0], _BLOCKS.get(lines[0].word(0), "a block that is not a function") + count, names)


def _steps(line: Line) -> Iterator[Step]:
    statement = line.statement
    if statement.end == "#":
        yield from _directive(line)
    elif line.word(0) == "return":
        if len(line.tokens) > 2:
            yield Give(line.rest(1), returned=True)
    elif (start := _type_words(line)) and line.tokens[start].kind == "name" and line.word(start + 1) != "(":
        yield from _declaration(line, start)
    elif start:
        yield Leave(statement, "a declaration")
    elif steps := assignments(line):
        yield from steps
    elif line.word(0) in _WORDS:
        yield Leave(statement, f"{line.word(0)} is not an assignment", assigned_names(line))
    elif any(token.is_symbol("=", "++", "--") for token in line.tokens):
        yield Leave(statement, "an element or a member of something is given a value", assigned_names(line))
    elif line.tokens[0].kind == "name" and line.word(1) == "(" and statement.end == ";" and _is_call(line):
        yield Leave(statement, "a call")
    elif len(line.tokens) > 1:
        yield Give(line.rest(0), returned=False)


def _is_call(line: Line) -> bool:
    """Whether the parenthesis that opens behind the first name closes at the end of the statement."""
    depth = 0
    for place, token in enumerate(line.tokens[1:], 1):
        depth += token.is_symbol("(") - token.is_symbol(")")
        if depth == 0:
            return place == len(line.tokens) - 2
    return False


def _type_words(line: Line) -> int:
    """How many tokens name a type; 0 when the statement begins with none."""
    place, found = 0, False
    while place < len(line.tokens) - 1 and line.tokens[place].text in C_TYPES | _QUALIFIERS:
        found = found or line.tokens[place].text in C_TYPES
        place += 1
    return place if found else 0


def _kind(words: tuple[SourceToken, ...]) -> Kind | None:
    texts = {word.text for word in words}
    if "double" in texts:
        return Kind.REAL
    if "float" in texts:
        return Kind.SINGLE
    return None if texts & {"auto", "void", "real_t", "struct"} else Kind.WHOLE


def _declaration(line: Line, start: int) -> Iterator[Step]:
    """`double a = 1.0, b = a*2;`"""
    parts = [(start + a, start + b) for a, b in split_at(line.tokens[start:], ",")]
    names = tuple(line.tokens[a].text for a, _ in parts if line.tokens[a].kind == "name")
    yield Declare(names, _kind(line.tokens[:start]), line.tokens[0])
    for a, b in parts:
        if line.tokens[a].kind == "name" and line.tokens[a + 1].is_symbol("="):
            yield Assign(line.tokens[a], line.cut(a + 2, b))
        elif b - a > 1:
            yield Leave(line.statement, "an array or a pointer is declared", frozenset({line.tokens[a].text}))


def _directive(line: Line) -> Iterator[Step]:
    """`#define NAME value` is an assignment; the other lines of the preprocessor give no value."""
    if line.word(1) == "define" and len(line.tokens) > 4:
        name, follows = line.tokens[2], line.tokens[3]
        if name.kind == "name" and not (follows.is_symbol("(") and follows.start == name.stop):
            yield Assign(name, line.rest(3))
        else:
            yield Leave(line.statement, "a macro with arguments")
    elif line.word(1) in ("if", "ifdef", "ifndef", "else", "elif"):
        yield Leave(line.statement, "a condition of the preprocessor: what stands under it is read in any case")


def _function(line: Line) -> list[Step] | None:
    """`double f(double x, double Re)`: the header of a function without its brace, and the kinds of its parameters."""
    start = _type_words(line)
    while start and line.tokens[start].kind == "name" and line.word(start + 1) == "::":
        start += 2
    if not start or line.tokens[start].kind != "name" or line.word(start + 1) != "(":
        return None
    inside = line.tokens[start + 2 :]
    close = next((i for i, token in enumerate(inside) if token.is_symbol(")")), None)
    if close is None:
        return None
    found: list[tuple[SourceToken, None]] = []
    kinds: list[Step] = []
    for a, b in split_at((*inside[:close], inside[-1]), ","):
        names = [token for token in inside[a:b] if token.kind == "name" and token.text not in C_TYPES | _QUALIFIERS]
        plain = not any(token.is_symbol("*", "[") for token in inside[a:b])
        if names and plain:
            found.append((names[-1], None))
            kinds.append(Declare((names[-1].text,), _kind(inside[a:b]), names[-1]))
    return [Begin(line.tokens[start].text, tuple(found), "", line.statement), *kinds]
