"""Source text -> statements: comments gone, continued lines joined, every character still knowing its place.

Three dialects: Fortran (free and fixed form), C and C++, Python. Strings are kept, so that what stands in them is not
taken for a comment or an operator.
"""

from __future__ import annotations

import re
from bisect import bisect_right
from collections.abc import Iterator
from dataclasses import dataclass, field

_TAB = 8
_FIXED_END = 72
_FIXED_COMMENT = "cC*!dD"


@dataclass(frozen=True, slots=True)
class Statement:
    """One statement.

    Attributes:
        places: (offset in the text, line, column) wherever the text stops being contiguous in the source.
        indent: columns before it (Python).
        end: what ended it: `;`, `{` or `}` in C, `#` for a line of the preprocessor, else empty.
        beyond: text behind column 72 of a fixed-form line, with its line; empty when there is none.
    """

    text: str
    places: tuple[tuple[int, int, int], ...]
    indent: int = 0
    end: str = ""
    beyond: tuple[tuple[int, str], ...] = ()

    def place(self, offset: int) -> tuple[int, int]:
        """Line and column of a character of the text."""
        start, line, column = self.places[max(bisect_right(self.places, offset, key=_offset) - 1, 0)]
        return line, column + offset - start

    @property
    def line(self) -> int:
        return self.place(0)[0]


def _offset(place: tuple[int, int, int]) -> int:
    return place[0]


@dataclass(slots=True)
class _Collected:
    """A statement in the making."""

    parts: list[str] = field(default_factory=list)
    places: list[tuple[int, int, int]] = field(default_factory=list)
    length: int = 0
    beyond: list[tuple[int, str]] = field(default_factory=list)

    def add(self, text: str, line: int, column: int) -> None:
        if text:
            self.places.append((self.length, line, column))
            self.parts.append(text)
            self.length += len(text)

    def taken(self, indent: int = 0, end: str = "") -> Iterator[Statement]:
        """The statement, when there is one, and an empty start for the next."""
        text = "".join(self.parts)
        kept = text.strip()
        if kept or end == "{":
            skipped = len(text) - len(text.lstrip()) if kept else 0
            first = bisect_right(self.places, skipped, key=_offset) - 1
            offset, line, column = self.places[first] if self.places else (0, 1, 1)
            later = tuple((offset - skipped, line, column) for offset, line, column in self.places[first + 1 :])
            yield Statement(kept, ((0, line, column + skipped - offset), *later), indent, end, tuple(self.beyond))
        self.parts, self.places, self.length, self.beyond = [], [], 0, []


# Python


def python_statements(text: str) -> Iterator[Statement]:
    """Statements end at a line break outside parentheses, or at a semicolon."""
    collected, depth, indent, fresh = _Collected(), 0, 0, True
    for piece in _pieces(text, _PYTHON_PIECE):
        if piece.kind == "newline":
            if depth == 0:
                yield from collected.taken(indent)
                indent, fresh = 0, True
            else:
                collected.add(" ", piece.line, piece.column)
        elif piece.kind == "comment":
            continue
        elif piece.kind == "joined":
            collected.add(" ", piece.line, piece.column)
        elif piece.text == ";" and depth == 0:
            yield from collected.taken(indent)
        else:
            if fresh and piece.kind == "blank":
                indent = len(piece.text.expandtabs(_TAB))
            fresh = fresh and piece.kind == "blank"
            depth = max(0, depth + (piece.text in "([{") - (piece.text in ")]}")) if len(piece.text) == 1 else depth
            collected.add('""' if piece.kind == "string" else piece.text, piece.line, piece.column)
    yield from collected.taken(indent)


# C


def c_statements(text: str) -> Iterator[Statement]:
    """Statements end at a semicolon outside parentheses, or at a brace; a line of the preprocessor is one."""
    collected, depth = _Collected(), 0
    directive = False
    line_is_blank = True
    for piece in _pieces(text, _C_PIECE):
        if piece.kind == "newline":
            line_is_blank = True
            if directive:
                yield from collected.taken(end="#")
                directive = False
            collected.add(" ", piece.line, piece.column)
            continue
        if piece.kind in ("comment", "joined"):
            collected.add(" ", piece.line, piece.column)
            continue
        if piece.text == "#" and line_is_blank and not "".join(collected.parts).strip():
            directive = True
        line_is_blank = line_is_blank and not piece.text.strip()
        if piece.text in ("{", "}") and not directive:
            yield from collected.taken(end=piece.text) if piece.text == "{" else _closed(collected, piece)
            depth = 0
        elif piece.text == ";" and depth == 0 and not directive:
            yield from collected.taken(end=";")
        else:
            depth = max(0, depth + (piece.text == "(") - (piece.text == ")"))
            collected.add('""' if piece.kind == "string" else piece.text, piece.line, piece.column)
    yield from collected.taken(end="#" if directive else "")


def _closed(collected: _Collected, brace: _Piece) -> Iterator[Statement]:
    """What stands before a closing brace without a semicolon, and the brace."""
    yield from collected.taken()
    yield Statement("", ((0, brace.line, brace.column),), end="}")


# Pieces of Python and C


@dataclass(frozen=True, slots=True)
class _Piece:
    kind: str
    text: str
    line: int
    column: int


_PYTHON_PIECE = re.compile(
    r"(?P<newline>\r\n|\r|\n)|(?P<joined>\\[ \t]*(?:\r\n|\r|\n))|(?P<comment>#[^\r\n]*)"
    r"|(?P<string>[rRbBuUfF]{0,2}(?:\"\"\"(?:[^\\]|\\.)*?(?:\"\"\"|\Z)|'''(?:[^\\]|\\.)*?(?:'''|\Z)"
    r"|\"(?:[^\"\\\r\n]|\\.)*(?:\"|(?=[\r\n])|\Z)|'(?:[^'\\\r\n]|\\.)*(?:'|(?=[\r\n])|\Z)))"
    r"|(?P<word>\w+)|(?P<blank>[ \t]+)|(?P<other>.)",
    re.DOTALL,
)
_C_PIECE = re.compile(
    r"(?P<newline>\r\n|\r|\n)|(?P<joined>\\[ \t]*(?:\r\n|\r|\n))|(?P<comment>//[^\r\n]*|/\*.*?(?:\*/|\Z))"
    r"|(?P<string>\"(?:[^\"\\\r\n]|\\.)*(?:\"|(?=[\r\n])|\Z)|(?<![0-9a-fA-F])'(?:[^'\\\r\n]|\\.)*(?:'|(?=[\r\n])|\Z))"
    r"|(?P<word>\w+)|(?P<blank>[ \t]+)|(?P<other>.)",
    re.DOTALL,
)


def _pieces(text: str, pattern: re.Pattern[str]) -> Iterator[_Piece]:
    """Every character of the text in one piece or another, with its line and column."""
    line, line_start = 1, 0
    for match in pattern.finditer(text):
        piece = match[0]
        yield _Piece(match.lastgroup or "other", piece, line, match.start() - line_start + 1)
        breaks = list(re.finditer(r"\r\n|\r|\n", piece))
        if breaks:
            line, line_start = line + len(breaks), match.start() + breaks[-1].end()


# Fortran


def fortran_statements(text: str) -> Iterator[Statement]:
    """Statements of free or fixed form, whichever the text has."""
    lines = re.split(r"\r\n|\r|\n", text)
    return _fixed_statements(lines) if is_fixed_form(lines) else _free_statements(lines)


def is_fixed_form(lines: list[str]) -> bool:
    """Fixed form: columns 1 to 5 hold labels or comments only, and a comment or continuation shows it."""
    shown = False
    for line in lines:
        if not line.strip():
            continue
        if re.match(r"[cC](?![A-Za-z0-9_]|\s*[=(%])|\*", line) or re.match(r" {5}[^ 0]|\t[1-9]", line):
            shown = True
        elif line.lstrip().startswith(("!", "#")):
            continue
        elif not re.match(r"(?:[ 0-9]{5}[ 0]|[ 0-9]{0,5}\t)", line) or _without_comment(line).rstrip().endswith("&"):
            return False
    return shown


def _fixed_statements(lines: list[str]) -> Iterator[Statement]:
    collected = _Collected()
    for number, line in enumerate(lines, 1):
        if not line.strip() or line[0] in _FIXED_COMMENT or line.lstrip().startswith("!"):
            continue
        head, body, column = _fixed_parts(line)
        if line.startswith("#") or not (head[5:6].strip("0 ")):
            yield from _split(collected)
        if head[:5].strip().isdigit():
            collected.add(f"{head[:5].strip()} ", number, 1)
        code = _without_comment(body[: max(_FIXED_END + 1 - column, 0)])
        collected.add(code, number, column)
        beyond = body[_FIXED_END + 1 - column :] if "!" not in body[: _FIXED_END + 1 - column] else ""
        if beyond.strip() and not beyond.lstrip().startswith("!"):
            collected.beyond.append((number, beyond.strip()))
    yield from _split(collected)


def _fixed_parts(line: str) -> tuple[str, str, int]:
    """Columns 1 to 6, the rest, and the column where the rest begins; a tab leads to column 7."""
    tab = line[:6].find("\t")
    if tab < 0:
        return line[:6], line[6:], 7
    follows = line[tab + 1 : tab + 2]
    if follows.isdigit() and follows != "0":
        return "     " + follows, line[tab + 2 :], tab + 3
    return line[:tab].ljust(6), line[tab + 1 :], tab + 2


def _free_statements(lines: list[str]) -> Iterator[Statement]:
    collected, continued = _Collected(), False
    for number, line in enumerate(lines, 1):
        code = _without_comment(line)
        if not code.strip():
            continue
        start = 0
        if continued and code.lstrip().startswith("&"):
            start = code.index("&") + 1
        elif continued:
            collected.add(" ", number, 1)
        else:
            yield from _split(collected)
        continued = code.rstrip().endswith("&")
        end = code.rstrip().rfind("&") if continued else len(code)
        collected.add(code[start : max(end, start)], number, start + 1)
    yield from _split(collected)


def _split(collected: _Collected) -> Iterator[Statement]:
    """The statements of a finished line of Fortran, parted by semicolons outside strings."""
    for statement in collected.taken():
        starts = [0, *(at + 1 for at in _semicolons(statement.text))]
        ends = [*_semicolons(statement.text), len(statement.text)]
        for start, end in zip(starts, ends, strict=True):
            part = statement.text[start:end]
            begin = start + len(part) - len(part.lstrip())
            if part.strip():
                later = tuple((at - begin, line, column) for at, line, column in statement.places if at > begin)
                places = ((0, *statement.place(begin)), *later)
                yield Statement(part.strip(), places, beyond=statement.beyond)


def _semicolons(text: str) -> list[int]:
    return [match.start() for match in _FORTRAN_PIECE.finditer(text) if match[0] == ";"]


_FORTRAN_PIECE = re.compile(r"'(?:[^']|'')*(?:'|\Z)|\"(?:[^\"]|\"\")*(?:\"|\Z)|!|;|[^'\"!;]+")


def _without_comment(line: str) -> str:
    """A line of Fortran up to a `!` outside strings."""
    for match in _FORTRAN_PIECE.finditer(line):
        if match[0] == "!":
            return line[: match.start()]
    return line
