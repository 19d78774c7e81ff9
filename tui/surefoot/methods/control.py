"""Step control: what a host code does to a step before it takes it. Pure stages, each with a flag of its own.

A stage sees the iterate, and the move that the stages before it left; it gives that move back untouched, or another
one. Damping and limits act on the step, and x = x_k + dx is rounded once after; factor limit, edge and bounds act on x.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import TypeAlias

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.results import Real
from surefoot.methods.contract import Limited
from surefoot.methods.plan import Control
from surefoot.methods.settings import read_number

_MAX_HALVINGS = 1100  # enough to bring the longest step of binary64 below its smallest number


@dataclass(frozen=True, slots=True)
class Limits:
    """The numbers of `Control` in an arithmetic, and the stages that are on, in their order.

    Attributes:
        numbers: by stage; `edge_fraction` and `bounds` share the bounds.
        bounds: (lo, hi) with lo < hi, or None.
        at_bound: what happens beyond a bound.
    """

    order: tuple[str, ...]
    numbers: Mapping[str, Real]
    bounds: tuple[Real, Real] | None
    at_bound: str


@dataclass(frozen=True, slots=True)
class Move:
    """A step and where it leads; x may be a bound to the bit, so it is not always x_k + step as rounded."""

    step: Real
    x: Real


@dataclass(frozen=True, slots=True)
class Here:
    """What a stage may look at: the arithmetic, the limits, the iterate, and whether this is the run's first step."""

    arithmetic: Arithmetic
    limits: Limits
    x: Real
    first: bool


Stage: TypeAlias = Callable[[Here, Move], Move]


def read_limits(control: Control, arithmetic: Arithmetic) -> Limits:
    """The limits in numbers. Raises PlanError when a literal cannot be read."""
    numbers = {
        stage: read_number(text, arithmetic, f"plan.control.{stage}")
        for stage in STAGES
        if stage != "bounds" and (text := getattr(control, stage)) is not None
    }
    bounds = None
    if control.bounds is not None:
        low, high = (read_number(text, arithmetic, "plan.control.bounds") for text in control.bounds)
        bounds = low, high
    bounded = ("edge_fraction", "bounds")
    active = tuple(
        stage
        for stage in control.order
        if (stage in numbers or stage == "bounds") and (stage not in bounded or bounds is not None)
    )
    return Limits(active, MappingProxyType(numbers), bounds, control.at_bound)


def controlled(
    arithmetic: Arithmetic, limits: Limits, x_k: Real, x_proposed: Real, step: Real | None, first: bool
) -> tuple[Real, tuple[Limited, ...]]:
    """The iterate to take, and the flags of the stages that changed it.

    Args:
        step: the step as the rule computed it; None where the rule gave x_proposed itself.

    Raises:
        OperationFailed: an operation of a stage overflows.
    """
    if not limits.order:
        return x_proposed, ()
    here = Here(arithmetic, limits, x_k, first)
    move = Move(arithmetic.subtract(x_proposed, x_k) if step is None else step, x_proposed)
    flags: list[Limited] = []
    for stage in limits.order:
        changed = STAGES[stage](here, move)
        if changed.x != move.x:
            flags.append(Limited(stage, move.x, changed.x))
        move = changed
    return move.x, tuple(flags)


def damping(here: Here, move: Move) -> Move:
    """dx := damping * dx. A factor of one still rounds x_k + dx, as a host code does that always multiplies."""
    return _by(here, here.arithmetic.multiply(here.limits.numbers["damping"], move.step))


def first_step_limit(here: Here, move: Move) -> Move:
    """|dx| <= first_step_limit in the first step of the run."""
    return _shortened(here, move, here.limits.numbers["first_step_limit"]) if here.first else move


def step_limit(here: Here, move: Move) -> Move:
    """|dx| <= step_limit."""
    return _shortened(here, move, here.limits.numbers["step_limit"])


def relative_step_limit(here: Here, move: Move) -> Move:
    """|dx| <= relative_step_limit * |x_k|; at x_k = 0 there is no step at all."""
    limit = here.arithmetic.multiply(here.limits.numbers["relative_step_limit"], abs(here.x))
    return _shortened(here, move, limit)


def factor_limit(here: Here, move: Move) -> Move:
    """x within [x_k/r, x_k*r]; for a negative iterate within [x_k*r, x_k/r]."""
    factor = here.limits.numbers["factor_limit"]
    low, high = sorted((here.arithmetic.divide(here.x, factor), here.arithmetic.multiply(here.x, factor)))
    return _clipped(here, move, low, high)


def edge_fraction(here: Here, move: Move) -> Move:
    """At most this fraction of the way from x_k to the bound ahead; nothing where x_k is beyond that bound."""
    low, high = _bounds(here)
    bound, ahead = (high, here.x < high) if move.step > 0 else (low, here.x > low)
    if not ahead:
        return move
    arithmetic = here.arithmetic
    way = arithmetic.multiply(here.limits.numbers["edge_fraction"], arithmetic.subtract(bound, here.x))
    edge = arithmetic.add(here.x, way)
    beyond = move.x > edge if move.step > 0 else move.x < edge
    return Move(way, edge) if beyond else move


def bounds(here: Here, move: Move) -> Move:
    """Beyond a bound: clip to it, reject the step, halve it until it ends inside, or reflect it."""
    low, high = _bounds(here)
    if low <= move.x <= high:
        return move
    return _AT_BOUND[here.limits.at_bound](here, move, low, high)


def _bounds(here: Here) -> tuple[Real, Real]:
    assert here.limits.bounds is not None, "without bounds the stages that look at them are off"
    return here.limits.bounds


def _by(here: Here, step: Real) -> Move:
    return Move(step, here.arithmetic.add(here.x, step))


def _to(here: Here, x: Real) -> Move:
    return Move(here.arithmetic.subtract(x, here.x), x)


def _shortened(here: Here, move: Move, limit: Real) -> Move:
    if abs(move.step) <= limit:
        return move
    return _by(here, limit if move.step > 0 else here.arithmetic.negate(limit))


def _clipped(here: Here, move: Move, low: Real, high: Real) -> Move:
    return _to(here, low) if move.x < low else _to(here, high) if move.x > high else move


def _rejected(here: Here, _move: Move, _low: Real, _high: Real) -> Move:
    return Move(here.arithmetic.integer(0), here.x)


def _halved(here: Here, move: Move, low: Real, high: Real) -> Move:
    """Half the step until it ends inside; no step at all where x_k lies outside and no half of it ends inside."""
    two = here.arithmetic.integer(2)
    for _ in range(_MAX_HALVINGS):
        move = _by(here, here.arithmetic.divide(move.step, two))
        if low <= move.x <= high:
            return move
    return _rejected(here, move, low, high)


def _reflected(here: Here, move: Move, low: Real, high: Real) -> Move:
    """The mirror image at the bound that was crossed; where that lies beyond the other bound, that bound."""
    arithmetic = here.arithmetic
    if move.x < low:
        mirrored = _to(here, arithmetic.add(low, arithmetic.subtract(low, move.x)))
    else:
        mirrored = _to(here, arithmetic.subtract(high, arithmetic.subtract(move.x, high)))
    return _clipped(here, mirrored, low, high)


_AT_BOUND: Mapping[str, Callable[[Here, Move, Real, Real], Move]] = MappingProxyType(
    {"clip": _clipped, "reject": _rejected, "halve": _halved, "reflect": _reflected}
)

STAGES: Mapping[str, Stage] = MappingProxyType(
    {
        "damping": damping,
        "first_step_limit": first_step_limit,
        "step_limit": step_limit,
        "relative_step_limit": relative_step_limit,
        "factor_limit": factor_limit,
        "edge_fraction": edge_fraction,
        "bounds": bounds,
    }
)
"""The stages by their key in `[plan.control]`."""
