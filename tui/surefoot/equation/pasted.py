"""What was read from source lines, and how."""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.problem import Definition, Input
from surefoot.equation.source_tokens import Language


@dataclass(frozen=True, slots=True)
class Reading:
    """A place where the text means something else here than it seems, or where the source computes otherwise.

    Attributes:
        line, column: the first place.
        as_written: the text of the source.
        read_as: what stands for it in the equation language.
        why: why, and how many such places there are.
    """

    line: int
    column: int
    as_written: str
    read_as: str
    why: str


@dataclass(frozen=True, slots=True)
class Skipped:
    """A statement that was not read, by its first line, and why."""

    line: int
    text: str
    why: str


@dataclass(frozen=True, slots=True)
class Pasted:
    """Source lines as parts of a problem.

    Attributes:
        language: `fortran`, `c` or `python`.
        language_reason: why it was taken for that language.
        definitions: assignments in their order, in the equation language.
        equation: the residual, or an equation, where the lines have one; else empty.
        unknown: the name to solve for, where the lines tell it; else empty.
        inputs: names that are given a plain number.
        names_needed: names that are used and given no value, without the unknown.
        readings: what to look at before it is taken over.
        skipped: statements that were not read.
    """

    language: Language
    language_reason: str
    definitions: tuple[Definition, ...] = ()
    equation: str = ""
    unknown: str = ""
    inputs: tuple[Input, ...] = ()
    names_needed: tuple[str, ...] = ()
    readings: tuple[Reading, ...] = ()
    skipped: tuple[Skipped, ...] = ()
