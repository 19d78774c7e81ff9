"""What an evaluation gives: a finite value, a named failure, or the word that the user stopped it."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import TypeAlias

# A real number of the run's arithmetic: float (binary64), numpy.float32 (binary32) or a mpmath number. It is written
# as float for the type checker, since all three take part in the same operators and comparisons.
Real: TypeAlias = float


class FailureKind(StrEnum):
    DOMAIN = "domain"  # log, root or power of a negative, asin(2), ...
    DIVISION_BY_ZERO = "division_by_zero"
    OVERFLOW = "overflow"
    NOT_A_NUMBER = "not_a_number"
    NO_BRANCH = "no_branch"  # no condition of a piecewise holds, and there is no otherwise
    NO_DERIVATIVE = "no_derivative"  # a derivative asked for where there is none
    UNAVAILABLE = "unavailable"  # the function does not exist in this arithmetic


class Purpose(StrEnum):
    """Why f was evaluated. Only `step` is the solve's own cost."""

    STEP = "step"
    PROBE = "probe"
    PICTURE = "picture"


@dataclass(frozen=True, slots=True)
class Failure:
    """An evaluation that has no finite value.

    Attributes:
        kind: what went wrong.
        subexpression: the operation that failed, as text of the equation language: `ln(y - yc)`.
        arguments: the values of its operands, in order, as record text.
        definition: name of the `[where]` line it stands in; empty for the equation itself, `d1` for a derivative.
    """

    kind: FailureKind
    subexpression: str
    arguments: tuple[str, ...] = ()
    definition: str = ""

    def __str__(self) -> str:
        where = f" in {self.definition}" if self.definition else ""
        values = f" at {', '.join(self.arguments)}" if self.arguments else ""
        return f"{_WORDS[self.kind]}: {self.subexpression}{values}{where}"


@dataclass(frozen=True, slots=True)
class Stopped:
    """The user stopped the evaluation or the work it belongs to."""


Result: TypeAlias = Real | Failure | Stopped

_WORDS = {
    FailureKind.DOMAIN: "outside the domain",
    FailureKind.DIVISION_BY_ZERO: "division by zero",
    FailureKind.OVERFLOW: "overflow",
    FailureKind.NOT_A_NUMBER: "not a number",
    FailureKind.NO_BRANCH: "no condition holds",
    FailureKind.NO_DERIVATIVE: "no derivative here",
    FailureKind.UNAVAILABLE: "not available in this arithmetic",
}


class EvaluationFailed(Exception):  # not an error: it carries a result past the step rule
    """Carries a Failure or Stopped through a step rule to the stepper, which turns it into a value again."""

    def __init__(self, result: Failure | Stopped) -> None:
        self.result = result
        super().__init__(str(result))
