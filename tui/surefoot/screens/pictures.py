"""The pictures of the rooms: f sampled over a window, with what a step took for true, as lines of text.

Samples are evaluations with the purpose `picture`, of a meter of their own: they never count as the solve's cost. They
are made in binary64, whatever arithmetic a run has, since a cell of the terminal shows two digits.
"""

from __future__ import annotations

from collections import OrderedDict
from collections.abc import Callable, Sequence
from dataclasses import replace
from typing import TypeAlias

from surefoot.equation.binary64 import BINARY64
from surefoot.equation.checking import check_problem
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.function import Function
from surefoot.equation.meter import Meter, What
from surefoot.equation.results import Failure, Purpose, Real, Stopped
from surefoot.figures.characters import Characters
from surefoot.figures.cobweb_picture import cobweb_picture
from surefoot.figures.convergence_picture import convergence_picture
from surefoot.figures.function_picture import Samples, StepShape, function_picture, zoom
from surefoot.figures.picture import Axis, Mark, Vertical
from surefoot.figures.plot import draw
from surefoot.methods.contract import Account, Iterate
from surefoot.methods.plan import Plan
from surefoot.methods.preparation import prepare
from surefoot.screens.step_table import Window
from surefoot.session.state import Run, StatedProblem

_Near: TypeAlias = Callable[[Real], float]

_RESIDUAL = Axis("residual")
_SAMPLES_A_CELL = 2
_KEPT = 16  # windows whose samples are kept: the ones one comes back to
_SHOWN_ITERATES = 200
_CONVERGENCE_STEPS = 400


class Sampler:
    """Values of f of one problem, and of g of one plan, for pictures; kept by window."""

    def __init__(self, stated: StatedProblem, plan: Plan | None = None) -> None:
        self.stated, self.plan = stated, plan
        checked = check_problem(stated.problem)
        if plan is None:
            function = Function(checked, BINARY64, stated.derivatives)
        else:
            function = prepare(replace(plan, arithmetic=BINARY64.kind), checked, stated.derivatives).function
        self.meter = Meter(function)
        self._kept: OrderedDict[tuple[float, float, int, What], Samples] = OrderedDict()

    def over(self, low: float, high: float, count: int, what: What = "f") -> Samples:
        """f, or g of the plan, at `count` places from low to high; None where it has no value."""
        key = (low, high, count, what)
        if key not in self._kept:
            xs = [low * (1 - n / (count - 1)) + high * (n / (count - 1)) for n in range(count)]
            self._kept[key] = (xs, [_finite(self.meter.evaluate(x, Purpose.PICTURE, what)) for x in xs])
            while len(self._kept) > _KEPT:
                self._kept.popitem(last=False)
        self._kept.move_to_end(key)
        return self._kept[key]

    def at(self, x: float) -> float | None:
        """f at one place, None where it has no value."""
        return _finite(self.meter.evaluate(x, Purpose.PICTURE))

    @property
    def range(self) -> tuple[float, float] | None:
        """The working range, None when the problem gives none."""
        ends = self.stated.problem.range
        return None if ends is None else (BINARY64.literal(ends[0], False), BINARY64.literal(ends[1], False))


def start_window(sampler: Sampler, starts: Sequence[float], zoomed: bool) -> tuple[float, float] | None:
    """The window that starts are chosen in: the working range, or around the starts; None without either."""
    around = zoom([(start, None) for start in starts], count=2)
    return around if zoomed and around is not None else sampler.range or around


def start_picture(
    sampler: Sampler,
    starts: Sequence[float],
    cursor: float | None,
    zoomed: bool,
    width: int,
    height: int,
    characters: Characters,
) -> list[str]:
    """f over the range, or around the starts, with the starts and the cursor marked."""
    window = start_window(sampler, starts, zoomed)
    if window is None:
        return ["", " Give the working range (1 function) or a start", " to see f here."][:height]
    points = [(start, None) for start in starts]
    picture = function_picture(_samples(sampler, window, width), iterates=points, x=_x_axis(sampler), f=_RESIDUAL)
    if cursor is not None:
        f = sampler.at(cursor)
        picture = replace(
            picture, verticals=(*picture.verticals, Vertical(cursor)), marks=(*picture.marks, Mark(cursor, f, "+"))
        )
    return draw(picture, width, height, characters)


def step_lines(
    sampler: Sampler, run: Run, window: Window, zoomed: bool, width: int, height: int, characters: Characters
) -> list[str]:
    """f with the step that led to the iterate under the cursor."""
    arithmetic = arithmetic_of(run.plan.arithmetic)
    near = arithmetic.approximate
    shown = window.iterates[max(0, window.at + 1 - _SHOWN_ITERATES) : window.at + 1]
    points = [(near(iterate.x), _value(near, iterate.f)) for iterate in shown]
    span = zoom(points) if zoomed else sampler.range or zoom(points, count=len(points))
    if span is None:
        return []
    iterate = window.current
    if iterate.account is not None and iterate.account.shape == "cobweb":
        samples = _samples(sampler, span, width, "g")
        path = [x for x, _ in points]
        return draw(cobweb_picture(samples, iterates=path, x=_x_axis(sampler)), width, height, characters)
    shape = _shape(near, iterate, iterate.account) if iterate.account is not None else None
    picture = function_picture(
        _samples(sampler, span, width), iterates=points, step=shape, x=_x_axis(sampler), f=_RESIDUAL
    )
    return draw(picture, width, height, characters)


def convergence_lines(run: Run, width: int, height: int, characters: Characters) -> list[str]:
    """|dx| and |f| by step."""
    near = arithmetic_of(run.plan.arithmetic).approximate
    tail = run.iterates.newest(_CONVERGENCE_STEPS)
    steps: list[tuple[int, float | None, float | None]] = []
    for before, iterate in zip((None, *tail), tail, strict=False):
        dx = None if before is None else near(iterate.x - before.x)
        steps.append((iterate.k, dx, _value(near, iterate.f)))
    return draw(convergence_picture(steps, name=run.stated.problem.unknown), width, height, characters)


def _samples(sampler: Sampler, window: tuple[float, float], width: int, what: What = "f") -> Samples:
    return sampler.over(*window, max(width, 2) * _SAMPLES_A_CELL, what)


def _x_axis(sampler: Sampler) -> Axis:
    return Axis(sampler.stated.problem.unknown, sampler.stated.problem.unit)


def _shape(near: _Near, iterate: Iterate, account: Account) -> StepShape:
    points = tuple((near(point.x), near(point.f)) for point in account.points)
    landing = None if iterate.raw is None else near(iterate.raw)
    slope = None if account.slope is None else near(account.slope)
    return StepShape(account.shape, points, landing, slope)


def _value(near: _Near, f: Real | Failure) -> float | None:
    return None if isinstance(f, Failure) else near(f)


def _finite(result: Real | Failure | Stopped) -> float | None:
    return None if isinstance(result, Failure | Stopped) else result
