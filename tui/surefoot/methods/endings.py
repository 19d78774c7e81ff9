"""How a run ends, each way with the one sentence that tells it. Figures first, every digit of them."""

from __future__ import annotations

from collections.abc import Iterable

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.results import Failure, Real
from surefoot.methods.contract import Breakdown, Ending, Iterate, Verdict
from surefoot.methods.rounding import told
from surefoot.methods.stopping import Side, inequality


class Endings:
    """The endings of one run: its arithmetic and the name of its unknown are in every sentence."""

    def __init__(self, arithmetic: Arithmetic, unknown: str) -> None:
        self._arithmetic, self._unknown = arithmetic, unknown

    def converged(self, verdict: Verdict, steps: int) -> Ending:
        """A test of the plan fired."""
        return Ending("converged", verdict, f"{verdict.test} holds after {_steps(steps)}: {self._sides(verdict.sides)}")

    def exact(self, verdict: Verdict, iterate: Iterate) -> Ending:
        """The residual is exactly zero."""
        return Ending("converged", verdict, f"the residual is exactly zero at {self._at(iterate.x)}")

    def step_limit(self, max_steps: int, unmet: Iterable[Side]) -> Ending:
        """The cap was reached; `unmet` are the inequalities of the tests as they stood."""
        figures = self._sides(tuple(unmet))
        says = f"{_steps(max_steps)} taken and no test fired" + (f": {figures}" if figures else "")
        return Ending("step_limit", self._cap(max_steps), says)

    def cap_as_success(self, max_steps: int) -> Ending:
        """The cap was reached, and the host code takes that for success."""
        says = f"{_steps(max_steps)} taken, which the plan counts as converged"
        return Ending("converged", self._cap(max_steps), says)

    def no_progress(self, iterate: Iterate) -> Ending:
        """The iterate repeats bit for bit."""
        return Ending("no_progress", None, f"{self._at(iterate.x)} repeats bit for bit and no test fired")

    def left_range(self, iterate: Iterate, ends: tuple[Real, Real]) -> Ending:
        """The iterate lies outside the working range, and the plan stops there."""
        low, high = (told(self._arithmetic, end) for end in ends)
        return Ending("left_range", None, f"{self._at(iterate.x)} lies outside the working range {low} to {high}")

    def no_value(self, what: str, x: Real, failure: Failure) -> Ending:
        """`what` ("the residual", "the derivative", "g", "the stopping test") has no finite value at x."""
        return Ending("failed_evaluation", None, f"{what} has no value at {self._at(x)}: {failure}")

    def broke_down(self, breakdown: Breakdown) -> Ending:
        """The rule has no step from here."""
        return Ending("broke_down", None, breakdown.reason, breakdown.account)

    def control_overflows(self, x: Real) -> Ending:
        """A stage of step control has no finite result."""
        return Ending("broke_down", None, f"step control overflows at {self._at(x)}")

    def _at(self, x: Real) -> str:
        return f"{self._unknown} = {told(self._arithmetic, x)}"

    def _cap(self, max_steps: int) -> Verdict:
        cap = self._arithmetic.integer(max_steps)
        return Verdict("max_steps", (("max_steps", cap, cap),))

    def _sides(self, sides: tuple[Side, ...]) -> str:
        return ", ".join(inequality(self._arithmetic, side) for side in sides)


def _steps(count: int) -> str:
    return f"{count} step{'' if count == 1 else 's'}"
