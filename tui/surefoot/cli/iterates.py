"""The iterates of a run with their measures, as the rows that tables and JSON objects are made of."""

from __future__ import annotations

from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.results import Failure, Real
from surefoot.figures.numbers import all_digits
from surefoot.methods.contract import Iterate
from surefoot.methods.measures import Measure, measures
from surefoot.session.state import Run


@dataclass(frozen=True, slots=True)
class Row:
    """One iterate with what was measured at it."""

    iterate: Iterate
    measure: Measure

    @property
    def limits(self) -> tuple[str, ...]:
        """The stages of step control that changed the step, in order; an iterate put by hand says so."""
        put = ("put by hand",) if self.iterate.put else ()
        return put + tuple(flag.stage for flag in self.iterate.limited)


def rows_of(run: Run) -> tuple[Arithmetic, tuple[Row, ...]]:
    """The arithmetic of a run and its iterates, starts first."""
    arithmetic = arithmetic_of(run.plan.arithmetic)
    iterates = tuple(run.iterates)
    measured = measures(iterates, arithmetic)
    return arithmetic, tuple(Row(iterate, measure) for iterate, measure in zip(iterates, measured, strict=True))


def digits(x: Real | Failure | None, arithmetic: Arithmetic) -> str:
    """All digits that the arithmetic carries (17 for binary64); empty where there is no number."""
    return "" if x is None or isinstance(x, Failure) else all_digits(arithmetic.encode(x))
