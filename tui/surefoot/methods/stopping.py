"""Stopping tests: pure comparisons in the run's arithmetic, each told with both sides of its inequality.

dx is x_new - x_old as rounded, or with `step_tested = "raw"` the step as the rule proposed it; comparisons are <=. A
side that overflows does not hold. Own tests are conditions over names (`surefoot.methods.own_test`).
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import TypeAlias

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.results import Failure, Real
from surefoot.methods.contract import Iterate, Verdict
from surefoot.methods.plan import Stop
from surefoot.methods.rounding import told
from surefoot.methods.settings import read_number

Side: TypeAlias = tuple[str, Real, Real]


@dataclass(frozen=True, slots=True)
class Tolerances:
    """The tolerances of `Stop` in an arithmetic; None where a test is off."""

    x_absolute: Real | None
    x_relative: Real | None
    residual: Real | None
    relative_to: str
    combine: str
    raw: bool


@dataclass(frozen=True, slots=True)
class Stride:
    """What is tested: an iterate, the one before it (None where there is none), and iterate 0 of the run."""

    new: Iterate
    old: Iterate | None
    origin: Iterate


def read_tolerances(stop: Stop, arithmetic: Arithmetic) -> Tolerances:
    """The tests in numbers; an own condition switches them off. Raises PlanError when a literal cannot be read."""
    numbers = {
        key: None if text is None or stop.test else read_number(text, arithmetic, f"plan.stop.{key}")
        for key, text in (
            ("x_absolute", stop.x_absolute),
            ("x_relative", stop.x_relative),
            ("residual", stop.residual),
        )
    }
    return Tolerances(**numbers, relative_to=stop.relative_to, combine=stop.combine, raw=stop.step_tested == "raw")


def exact_zero(arithmetic: Arithmetic, iterate: Iterate) -> Verdict | None:
    """The verdict of f being exactly zero, of either sign."""
    if isinstance(iterate.f, Failure) or iterate.f != 0:
        return None
    return Verdict("exact_zero", (("exact_zero", abs(iterate.f), arithmetic.integer(0)),))


def verdict(arithmetic: Arithmetic, tolerances: Tolerances, stride: Stride) -> Verdict | None:
    """The verdict of the tests, None where they go on. "any": the first that holds, in the order of `sides`."""
    pairs = sides(arithmetic, tolerances, stride)
    holding = [side for side in pairs if side[1] <= side[2]]
    if tolerances.combine == "all":
        return Verdict("all", pairs) if pairs and len(holding) == len(wanted(tolerances)) else None
    return Verdict(holding[0][0], (holding[0],)) if holding else None


def wanted(tolerances: Tolerances) -> tuple[str, ...]:
    """The tests that are on, in their order; with combine = "sum" the two of x are one, `sum`."""
    on = [key for key in ("x_absolute", "x_relative", "residual") if getattr(tolerances, key) is not None]
    if tolerances.combine == "sum" and on and on[0] != "residual":
        return ("sum", *(["residual"] if "residual" in on else []))
    return tuple(on)


def sides(arithmetic: Arithmetic, tolerances: Tolerances, stride: Stride) -> tuple[Side, ...]:
    """(test, left, right) of each test that is on; those that cannot be made are left out: no step, or an overflow."""
    found: list[Side] = []
    for name in wanted(tolerances):
        try:
            pair = _SIDES[name](arithmetic, tolerances, stride)
        except OperationFailed:
            continue
        if pair is not None:
            found.append((name, *pair))
    return tuple(found)


def step_under_test(arithmetic: Arithmetic, stride: Stride, raw: bool) -> Real | None:
    """dx as the tests see it, None where there is no iterate before. Raises OperationFailed when it overflows."""
    new, old = stride.new, stride.old
    if old is None:
        return None
    if not raw or new.raw is None:
        return arithmetic.subtract(new.x, old.x)
    if new.account is not None and new.account.step is not None:
        return new.account.step
    return arithmetic.subtract(new.raw, old.x)


def inequality(arithmetic: Arithmetic, side: Side) -> str:
    """`|dx| = 1.5e-11 <= 1e-10`, or with > where it does not hold; a comparison of one's own with its two sides."""
    name, left, right = (side[0], *(told(arithmetic, number) for number in side[1:]))
    if name not in LEFT_SIDES:
        return f"{name} ({left} and {right})"
    return f"{LEFT_SIDES[name]} = {left} {'<=' if side[1] <= side[2] else '>'} {right}"


def _absolute(arithmetic: Arithmetic, tolerances: Tolerances, stride: Stride) -> tuple[Real, Real] | None:
    dx = step_under_test(arithmetic, stride, tolerances.raw)
    return None if dx is None or tolerances.x_absolute is None else (abs(dx), tolerances.x_absolute)


def _relative(arithmetic: Arithmetic, tolerances: Tolerances, stride: Stride) -> tuple[Real, Real] | None:
    dx = step_under_test(arithmetic, stride, tolerances.raw)
    if dx is None or tolerances.x_relative is None:
        return None
    return abs(dx), arithmetic.multiply(tolerances.x_relative, _size(tolerances.relative_to, stride))


def _sum(arithmetic: Arithmetic, tolerances: Tolerances, stride: Stride) -> tuple[Real, Real] | None:
    dx = step_under_test(arithmetic, stride, tolerances.raw)
    if dx is None:
        return None
    zero = arithmetic.integer(0)
    absolute = zero if tolerances.x_absolute is None else tolerances.x_absolute
    relative = zero if tolerances.x_relative is None else tolerances.x_relative
    return abs(dx), arithmetic.add(absolute, arithmetic.multiply(relative, _size(tolerances.relative_to, stride)))


def _residual(_: Arithmetic, tolerances: Tolerances, stride: Stride) -> tuple[Real, Real] | None:
    if isinstance(stride.new.f, Failure) or tolerances.residual is None:
        return None
    return abs(stride.new.f), tolerances.residual


def _size(relative_to: str, stride: Stride) -> Real:
    """The |x| that a relative tolerance is taken of."""
    new = abs(stride.new.x)
    old = new if stride.old is None else abs(stride.old.x)
    sizes = {"new": new, "old": old, "larger": max(new, old), "start": abs(stride.origin.x)}
    return sizes[relative_to]


_SIDES: Mapping[str, Callable[[Arithmetic, Tolerances, Stride], tuple[Real, Real] | None]] = MappingProxyType(
    {"x_absolute": _absolute, "x_relative": _relative, "sum": _sum, "residual": _residual}
)

LEFT_SIDES = MappingProxyType({"x_absolute": "|dx|", "x_relative": "|dx|", "sum": "|dx|", "residual": "|residual|"})
