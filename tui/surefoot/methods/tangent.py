"""What the rules that follow a straight line share: its zero, when there is none, and a slope that is held."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Real
from surefoot.methods.contract import Account, Breakdown, Point, Proposal, Settings, Shape
from surefoot.methods.rounding import told
from surefoot.methods.settings import DERIVATIVE_EVERY


@dataclass(frozen=True, slots=True)
class SlopeState:
    """The iterate, and the slope that is held with the steps since it was taken; None where a new one is due."""

    point: Point
    slope: Real | None = None
    age: int = 0


@dataclass(frozen=True, slots=True)
class Slope:
    """A slope as it was found: its value, the points beside the iterate, further figures of the account."""

    value: Real
    points: tuple[Point, ...] = ()
    figures: tuple[tuple[str, Real], ...] = ()


def propose_along_slope(
    state: SlopeState, settings: Settings, arithmetic: Arithmetic, find: Callable[[], Slope | Breakdown]
) -> Proposal | Breakdown:
    """The zero of the line through the iterate; `find` gives its slope when the one held is too old or absent."""
    every = settings[DERIVATIVE_EVERY]
    held = state.slope is not None and state.age < every
    age = state.age if held else 0
    slope = Slope(state.slope) if held and state.slope is not None else find()
    if isinstance(slope, Breakdown):
        return slope
    figures = slope.figures if every == 1 else (*slope.figures, ("age", arithmetic.integer(age)))
    shape: Shape = "chord" if slope.points else "tangent"
    landing = _line_landing(arithmetic, Account(shape, (state.point, *slope.points), slope.value, figures))
    if isinstance(landing, Breakdown) or every == 1:
        return landing
    return Proposal(landing.x, landing.account, memo=(slope.value, age + 1))


def accept_with_slope(proposal: Proposal, point: Point) -> SlopeState:
    """The next state: the slope of the proposal stays where it is held, and is dropped after an iterate put by hand."""
    return SlopeState(point) if proposal.memo is None else SlopeState(point, *proposal.memo)


def _line_landing(arithmetic: Arithmetic, account: Account) -> Proposal | Breakdown:
    """x - f/slope: a quotient and a difference, each rounded once; the step of the account is -(f/slope)."""
    here, slope = account.points[0], account.slope
    place = f"at x = {told(arithmetic, here.x)}, f = {told(arithmetic, here.f)}"
    if slope is None or slope == 0:
        return Breakdown(f"the slope is exactly zero {place}", account)
    try:
        quotient = arithmetic.divide(here.f, slope)
        x = arithmetic.subtract(here.x, quotient)
    except OperationFailed:
        return Breakdown(f"the step overflows {place}, slope = {told(arithmetic, slope)}", account)
    step = arithmetic.negate(quotient)
    return Proposal(x, Account(account.shape, account.points, slope, account.figures, step))
