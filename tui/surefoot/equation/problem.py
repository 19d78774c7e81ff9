"""A problem: the equation, its unknown, definitions, inputs and working range. Plain data; texts are kept as typed."""

from __future__ import annotations

from dataclasses import dataclass, field


@dataclass(frozen=True, slots=True)
class Input:
    """A named value of the problem.

    `value` is the literal as typed (`0.025`, `0x1.a36e2eb1c432dp-11`); other texts are literals too, None if absent.
    """

    name: str
    value: str
    unit: str = ""
    low: str | None = None
    high: str | None = None
    uncertainty: str | None = None
    half_width: str | None = None
    interval: tuple[str, str] | None = None
    distribution: str | None = None
    dof: str | None = None
    source: str = ""


@dataclass(frozen=True, slots=True)
class Definition:
    """A line of `[where]`: name = expression over the unknown, the inputs and the lines above it."""

    name: str
    text: str


@dataclass(frozen=True, slots=True)
class Correlation:
    between: tuple[str, str]
    r: str


@dataclass(frozen=True, slots=True)
class Job:
    """What the calculation is for, as the note of a calculation names it."""

    reference: str = ""
    revision: str = ""
    purpose: str = ""
    assumptions: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Problem:
    """What is to be solved.

    Attributes:
        range: working range (low, high) as typed, where an admissible root is looked for.
        needed: accuracy that the work needs, in the unknown's unit, or None.
        admissible: conditions over the unknown, inputs and definitions, all of which must hold.
        prefer: "smallest", "largest", "nearest:1.2" or empty.
        derivative: df/dx as the host code has it, or empty.
    """

    unknown: str
    equation: str
    title: str = ""
    unit: str = ""
    range: tuple[str, str] | None = None
    needed: str | None = None
    admissible: tuple[str, ...] = ()
    prefer: str = ""
    derivative: str = ""
    note: str = ""
    job: Job = field(default_factory=Job)
    where: tuple[Definition, ...] = ()
    inputs: tuple[Input, ...] = ()
    correlation: tuple[Correlation, ...] = ()


@dataclass(frozen=True, slots=True)
class Derivative:
    """A derivative of f by the unknown, in the equation language, as it was recorded.

    Attributes:
        order: 1, 2 or 3.
        where: further definitions it needs, after the problem's own, in order.
        text: the derivative, over the problem's names and `where`.
        gaps: plain sentences for the places where there is no derivative (`no derivative where x = 0: abs(x)`).
    """

    order: int
    where: tuple[Definition, ...]
    text: str
    gaps: tuple[str, ...] = ()
