"""Fortran statements -> steps."""

from __future__ import annotations

import re
from collections.abc import Iterator

from surefoot.equation.source_lines import Statement, fortran_statements
from surefoot.equation.source_steps import (
    Assign,
    Begin,
    Declare,
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
from surefoot.equation.source_tokens import Kind, SourceToken, is_single_kind

_UNIT = re.compile(
    r"^(?:[\w\s*()=]*\s)?(function|subroutine|program|module)\s+(\w+)\s*(?:\(([^()]*)\))?\s*(?:result\s*\(\s*(\w+)\s*\))?",
    re.IGNORECASE,
)
_END_UNIT = re.compile(r"^end(?:\s*(?:function|subroutine|program|module)\b\s*\w*)?\s*$", re.IGNORECASE)
_WITHOUT_EFFECT = re.compile(r"^(?:implicit\s+none|return|continue|contains|save|public|private)\s*$", re.IGNORECASE)
_OPENS = re.compile(
    r"^(?:\w+\s*:\s*)?(?:(if)\s*\(.*\)\s*then|(do)(?:\s+(?!\d)|\s*$)|(select)\s*case|(where)\s*\(.*\)\s*$|(interface)\b"
    r"|(type)\s*(?:,.*)?(?:::)?\s*\w+\s*$|(do)\s+(\d+)\b)",
    re.IGNORECASE,
)
_CLOSES = re.compile(r"^end\s*(?:if|do|select|where|interface|type)\b", re.IGNORECASE)
_TYPE = re.compile(
    r"^(real|integer|double\s*precision|logical|character|complex|double\s*complex|type\s*\(\s*\w+\s*\))"
    r"\s*(\*\s*\d+|\((?:[^()]|\([^()]*\))*\))?(?![\w])",
    re.IGNORECASE,
)
_OTHER = re.compile(
    r"^(?:call|write|print|read|open|close|stop|error\s+stop|goto|go\s+to|continue|exit|cycle|return|use|implicit|include"
    r"|dimension|common|data|save|external|intrinsic|contains|format|equivalence|allocate|deallocate|private|public|pause"
    r"|entry|import|procedure|block|if|else|elseif|case|end|parameter|where|forall|namelist|inquire|rewind|backspace"
    r"|module|subroutine|program|function)\b",
    re.IGNORECASE,
)
_LABEL = re.compile(r"^(\d{1,5})\s+(?=[A-Za-z])")
_KIND_FUNCTIONS = frozenset({"kind", "selected_real_kind", "selected_int_kind"})
_DIRECTIVE = "a line of the preprocessor"
_BLOCKS = {
    "if": "an if block: its branches are not read",
    "do": "a loop: to read the lines in it, paste them alone",
    "select": "a select block: its cases are not read",
    "where": "a where block",
    "interface": "an interface",
    "type": "a type",
}


def fortran_steps(text: str) -> Iterator[Step]:
    statements = list(fortran_statements(text))
    at = 0
    while at < len(statements):
        _, statement = _unlabelled(statements[at])
        opens = _OPENS.match(statement.text)
        if opens and not _is_assignment(statement):
            end = _block_end(statements, at, opens[8])
            yield _left_block(statements[at : end + 1], next(word for word in opens.groups() if word).lower())
            at = end
        else:
            yield from _steps(statement)
        at += 1


def _unlabelled(statement: Statement) -> tuple[str, Statement]:
    label = _LABEL.match(statement.text)
    if label is None:
        return "", statement
    text = statement.text[label.end() :]
    later = tuple((max(at - label.end(), 0), line, column) for at, line, column in statement.places if at > label.end())
    places = ((0, *statement.place(label.end())), *later)
    return label[1], Statement(text, places, beyond=statement.beyond)


def _is_assignment(statement: Statement) -> bool:
    return re.match(r"^[A-Za-z]\w*\s*=(?!=)", statement.text) is not None and not re.match(
        r"^do\s+\w+\s*=", statement.text, re.IGNORECASE
    )


def _block_end(statements: list[Statement], start: int, label: str | None) -> int:
    """The place of the statement that closes the block; the last one when nothing does."""
    depth = 0
    for at in range(start, len(statements)):
        own, statement = _unlabelled(statements[at])
        if label is not None:
            if own == label and at > start:
                return at
            continue
        if _CLOSES.match(statement.text):
            depth -= 1
        elif (opens := _OPENS.match(statement.text)) and not opens[8]:
            depth += 1
        if depth == 0:
            return at
    return len(statements) - 1


def _left_block(statements: list[Statement], word: str) -> Leave:
    names = frozenset().union(*(assigned_names(Line.of(statement, "fortran")) for statement in statements))
    inside = max(len(statements) - 2, 0)
    count = f" ({inside} statement{'s' if inside != 1 else ''})"
    return Leave(statements[0], _BLOCKS[word] + count, names)


def _steps(statement: Statement) -> Iterator[Step]:
    """The steps of a statement that opens no block."""
    line = Line.of(statement, "fortran")
    text = statement.text
    if text.startswith("#"):
        yield Leave(statement, _DIRECTIVE)
    elif _is_assignment(statement):
        yield from assignments(line)
    elif (unit := _UNIT.match(text)) and not re.match(r"^end\b", text, re.IGNORECASE):
        yield _unit(unit, line)
    elif _END_UNIT.match(text):
        yield End()
    elif _TYPE.match(text):
        yield from _declaration(line)
    elif _WITHOUT_EFFECT.match(text):
        return
    elif re.match(r"^parameter\s*\(", text, re.IGNORECASE):
        yield from _values(line, 2, len(line.tokens) - 2)
    elif _OTHER.match(text):
        yield Leave(statement, _why(text), _changed(line))
    elif (function := _statement_function(line)) is not None:
        yield from function
    elif any(token.is_symbol("=", "=>") for token in line.tokens):
        yield Leave(statement, "an element of an array, or a part of something, is given a value", assigned_names(line))
    elif line.tokens[0].kind in ("number", "name") or line.tokens[0].is_symbol("(", "-", "+"):
        yield Give(line.rest(0), returned=False)
    else:
        yield Leave(statement, "not an assignment")


def _changed(line: Line) -> frozenset[str]:
    """What a statement that is not read may change: what it assigns, and the arguments of a call."""
    if line.word(0) != "call" and not line.word(0).startswith("if"):
        return assigned_names(line)
    calls = any(token.is_word("call") for token in line.tokens)
    names = {token.text for token in line.tokens[2:] if token.kind == "name"} if calls else set()
    return assigned_names(line) | names


def _why(text: str) -> str:
    word = re.match(r"\w+", text)
    name = word[0].lower() if word else text
    return {"if": "a one-line if", "call": "a call"}.get(name, f"{name} is not an assignment")


def _unit(unit: re.Match[str], line: Line) -> Step:
    kind, name, parameters, result = unit.groups()
    if kind.lower() in ("program", "module"):
        return Leave(line.statement, f"a {kind.lower()} begins")
    wanted = {parameter.strip().lower() for parameter in (parameters or "").split(",")}
    opener = next((place for place, token in enumerate(line.tokens) if token.is_symbol("(")), len(line.tokens))
    opener = _opening_of(line, name) if parameters else opener
    tokens = [token for token in line.tokens[opener:] if token.kind == "name" and token.text.lower() in wanted]
    is_function = kind.lower() == "function"
    found = tuple((token, None) for token in tokens[: len(wanted)])
    return Begin(name, found, (result or name) if is_function else "", line.statement)


def _opening_of(line: Line, name: str) -> int:
    for place, token in enumerate(line.tokens):
        if token.text == name and line.word(place + 1) == "(":
            return place + 1
    return 0


def _declaration(line: Line) -> Iterator[Step]:
    """A type declaration: the kinds of its names, and the values that it gives."""
    type_ = _TYPE.match(line.statement.text)
    assert type_ is not None
    start = next((i + 1 for i, token in enumerate(line.tokens) if token.is_symbol("::")), None)
    if start is None:
        start = next(i for i, token in enumerate(line.tokens) if token.start >= type_.end())
    parts = [(start + a, start + b) for a, b in split_at(line.tokens[start:], ",")]
    names = tuple(line.tokens[a].text for a, _ in parts if line.tokens[a].kind == "name")
    yield Declare(names, _kind(type_[1].lower(), type_[2] or ""), line.tokens[0])
    yield from _values(line, start, len(line.tokens) - 1)


def _kind(type_: str, size: str) -> Kind | None:
    if type_ == "integer":
        return Kind.WHOLE
    if type_.startswith("double") and "complex" not in type_:
        return Kind.REAL
    if type_ != "real":
        return None
    inside = size.strip("*() \t").lower().removeprefix("kind").lstrip(" =")
    return Kind.SINGLE if not inside or is_single_kind(inside) else Kind.REAL


def _values(line: Line, start: int, stop: int) -> Iterator[Step]:
    """`a = 1, b = 2` between two places."""
    for a, b in split_at((*line.tokens[start:stop], line.tokens[-1]), ","):
        target, sign = line.tokens[start + a], line.tokens[start + a + 1]
        if target.kind == "name" and sign.is_symbol("=") and line.word(start + a + 2) not in _KIND_FUNCTIONS:
            yield Assign(target, line.cut(start + a + 2, start + b))


def _statement_function(line: Line) -> Iterator[Step] | None:
    """`F(X) = X**2 - 2`, the old way to state a function; an element of an array looks alike and uses no X."""
    names = [(i, token) for i, token in enumerate(line.tokens[:4])]
    if len(names) < 4 or [token.kind for _, token in names] != ["name", "symbol", "name", "symbol"]:
        return None
    if line.word(1) != "(" or line.word(3) != ")" or line.word(4) != "=":
        return None
    parameter: SourceToken = line.tokens[2]
    value: Slice = line.rest(5)
    if not any(token.is_word(parameter.text.lower()) for token in value.tokens):
        return None
    begin = Begin(line.tokens[0].text, ((parameter, None),), line.tokens[0].text, line.statement)
    return iter((begin, Give(value, returned=True), End()))
