"""The lines of the fields of a form: text that a field can hold, the entries of lists, the parts of an input. Pure."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterator
from dataclasses import dataclass

from surefoot.equation.tokens import is_literal


def shown_text(text: str, indent: str = "") -> str:
    """Text as a field can hold it: one kind of line break, nothing that would steer the terminal.

    Args:
        indent: stands before every line after the first, so that it goes on with the entry.
    """
    lines = text.replace("\t", " ").splitlines()
    return f"\n{indent}".join("".join(map(_visible, line)) for line in lines)


def _visible(character: str) -> str:
    return "\N{REPLACEMENT CHARACTER}" if unicodedata.category(character) in ("Cc", "Cf", "Cs") else character


def one_line(text: str) -> str:
    """Text as a field of one line can hold it."""
    return shown_text(" ".join(text.split()))


@dataclass(frozen=True, slots=True)
class Entry:
    """One entry of `where` or `inputs`.

    Attributes:
        raw: all of its text.
        name: what stands before the `=`.
        text: what stands behind it, without surrounding blanks.
        line, column: place of the name.
        text_line, text_column: place of the text; behind the `=` when there is none.
        assigned: whether there is an `=`.
    """

    raw: str
    name: str
    text: str
    line: int
    column: int
    text_line: int
    text_column: int
    assigned: bool

    def place(self, line: int, column: int) -> tuple[int, int]:
        """Place in the field of a place in `text`."""
        return (self.text_line, self.text_column + column - 1) if line == 1 else (self.text_line + line - 1, column)


def entries_of(text: str, *, continued: bool = True) -> Iterator[Entry]:
    """The entries of `where` or, not `continued`, of `inputs`; blank lines are passed over.

    Args:
        continued: an indented line goes on with the entry above it.
    """
    block: list[str] = []
    start = 1
    for number, line in enumerate(text.split("\n"), 1):
        if continued and block and (not line.strip() or line[0].isspace()):
            block.append(line)
        elif line.strip():
            if block:
                yield _entry(block, start)
            block, start = [line], number
    if block:
        yield _entry(block, start)


def _entry(block: list[str], line: int) -> Entry:
    raw = "\n".join(block).rstrip()
    before, equals, after = raw.partition("=")
    text = after.strip()
    blanks = after[: len(after) - len(after.lstrip())] if text else after
    skipped = before + equals + blanks
    return Entry(
        raw=raw,
        name=before.strip(),
        text=text,
        line=line,
        column=len(before) - len(before.lstrip()) + 1,
        text_line=line + skipped.count("\n"),
        text_column=len(skipped) - (skipped.rfind("\n") + 1) + 1,
        assigned=bool(equals),
    )


_OPERATING_RANGE = re.compile(r"\[([^\[\],]*),([^\[\],]*)\]\Z")


@dataclass(frozen=True, slots=True)
class InputParts:
    """The parts of an input's text, each with its offset in it: value, unit, ends of the operating range."""

    value: tuple[str, int]
    unit: tuple[str, int]
    low: tuple[str, int] | None
    high: tuple[str, int] | None


def input_parts(text: str) -> InputParts:
    """The parts of what stands behind `name =`; nothing is checked."""
    ends = _OPERATING_RANGE.search(text)
    low, high = (
        (_part(text, ends.start(1), ends.end(1)), _part(text, ends.start(2), ends.end(2))) if ends else (None, None)
    )
    end = ends.start() if ends else len(text)
    value_end = next((at for at in range(end) if text[at].isspace()), end)
    return InputParts(_part(text, 0, value_end), _part(text, value_end, end), low, high)


def _part(text: str, start: int, end: int) -> tuple[str, int]:
    piece = text[start:end]
    return piece.strip(), start + len(piece) - len(piece.lstrip())


def number_hint(text: str) -> str:
    """What would be accepted for a text that is no number."""
    if is_literal(text.replace(",", ".", 1)):
        return f"write {text.replace(',', '.', 1)} with a point"
    if re.fullmatch(r"[+-]?[0-9.]+[dD][+-]?[0-9]+(_\w+)?", text):
        return f"write {re.split('[dD]', text)[0]}e{re.split('[dD_]', text)[1]}"
    glued = re.match(r"[+-]?[0-9.]+(?:[eE][+-]?[0-9]+)?(?=[^0-9.\s])", text)
    if glued and is_literal(glued[0]) and text[glued.end()] not in ",'_":
        return f"write a space before a unit: {glued[0]} {text[glued.end() :]}"
    return "a number such as 0.3, 1.5e-6 or 0x1.8p-3"
