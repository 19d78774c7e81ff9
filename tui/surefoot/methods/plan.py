"""A plan: a method with its starts, settings, step control, stopping test and arithmetic. Literals stay text."""

from __future__ import annotations

from dataclasses import dataclass, field


@dataclass(frozen=True, slots=True)
class Control:
    """Step control, `[plan.control]`. None or empty means that the stage is off. Literals as typed.

    Attributes:
        damping: factor on the step.
        step_limit: |dx| <= step_limit.
        relative_step_limit: |dx| <= relative_step_limit * |x_k|.
        factor_limit: x_{k+1} within [x_k / r, x_k * r].
        first_step_limit: |dx| of the first step only.
        edge_fraction: go at most this fraction of the way to a bound.
        bounds: (lo, hi) that the host code clamps to.
        at_bound: "clip", "reject" (stay), "halve" (the step, until inside) or "reflect".
        leave: "allow" or "stop": what happens when an iterate leaves the working range.
        derivative_every: the derivative is refreshed every so many steps.
        order: stages in the order of the host code.
    """

    damping: str | None = None
    step_limit: str | None = None
    relative_step_limit: str | None = None
    factor_limit: str | None = None
    first_step_limit: str | None = None
    edge_fraction: str | None = None
    bounds: tuple[str, str] | None = None
    at_bound: str = "clip"
    leave: str = "allow"
    derivative_every: int = 1
    order: tuple[str, ...] = (
        "damping",
        "first_step_limit",
        "step_limit",
        "relative_step_limit",
        "factor_limit",
        "edge_fraction",
        "bounds",
    )


@dataclass(frozen=True, slots=True)
class Stop:
    """Stopping test, `[plan.stop]`. After step k: dx = x_{k+1} - x_k, comparisons are <=.

    Attributes:
        x_absolute, x_relative: |dx| <= x_absolute; |dx| <= x_relative * |x|.
        relative_to: which |x|: "new", "old", "larger" or "start".
        residual: |f(x_{k+1})| <= residual.
        exact_zero: f exactly zero ends the run.
        combine: "any", "all", or "sum": |dx| <= x_absolute + x_relative * |x|.
        min_steps: no test before so many steps were taken.
        before_step: the test is made before a step, at the iterate in hand.
        step_tested: "taken", or "raw": the step as the rule proposed it.
        test: own condition over the reserved names; with it the built-in tests are off.
        cap_is_success: reaching max_steps counts as converged, as the host code has it.
    """

    x_absolute: str | None = None
    x_relative: str | None = None
    relative_to: str = "new"
    residual: str | None = None
    exact_zero: bool = True
    combine: str = "any"
    min_steps: int = 0
    before_step: bool = False
    step_tested: str = "taken"
    test: str = ""
    cap_is_success: bool = False


@dataclass(frozen=True, slots=True)
class Plan:
    """What a run will do. `start` and `settings` are literals as typed; `arithmetic` as in `[arithmetic] kind`."""

    method: str
    start: tuple[str, ...]
    max_steps: int = 50
    settings: tuple[tuple[str, str], ...] = ()
    control: Control = field(default_factory=Control)
    stop: Stop = field(default_factory=Stop)
    arithmetic: str = "binary64"
