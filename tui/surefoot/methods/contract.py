"""The contract of a method: a pure step rule over small frozen states.

A method never evaluates, stops, limits or prints on its own account: it is handed the functions it may call, and it
proposes. The stepper (`surefoot.methods.stepper`) does one step in this order: rule, damping, step limits, bounds,
evaluation of f at the iterate taken, test; each is a stage of its own with its own flag.

    begin(starts, settings, functions) -> state                after the starts were evaluated
    propose(state, settings, functions) -> Proposal | Breakdown
    accept(state, proposal, point) -> state                    point: the iterate that was taken, with its own f
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Literal, Protocol, TypeAlias

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.results import Failure, Real


@dataclass(frozen=True, slots=True)
class Point:
    """An iterate and its own function value: never the value of another iterate."""

    x: Real
    f: Real


class Functions(Protocol):
    """What a step rule may call. Each call raises EvaluationFailed when there is no finite value."""

    @property
    def arithmetic(self) -> Arithmetic: ...

    def f(self, x: Real) -> Real:
        """The residual at x."""

    def derivative(self, x: Real, order: int = 1) -> Real:
        """The derivative of the residual, as the plan wants it: the recorded one or the host code's."""

    def g(self, x: Real) -> Real:
        """The iteration function of a fixed-point plan."""


Shape: TypeAlias = Literal["tangent", "chord", "bracket", "cobweb", "parabola"]


@dataclass(frozen=True, slots=True)
class Account:
    """What one step took for true.

    Attributes:
        shape: the picture that explains the step.
        points: the points it rests on (x, f), in the order of the method's definition.
        slope: the derivative or the chord's slope that was used, None where there is none. A tangent or a chord is the
            line of this slope through the first point.
        figures: further named numbers: ("h", h), ("width", |b - a|), ("age", steps since the derivative was refreshed).
        step: dx as the rule computed it, before it was added to x; None where the rule gives the new x itself.
    """

    shape: Shape
    points: tuple[Point, ...]
    slope: Real | None = None
    figures: tuple[tuple[str, Real], ...] = ()
    step: Real | None = None


@dataclass(frozen=True, slots=True)
class Proposal:
    """Where the rule itself would go from here; `memo` is what `accept` needs beside the point taken."""

    x: Real
    account: Account
    memo: Any = None


@dataclass(frozen=True, slots=True)
class Breakdown:
    """The rule has no step from here: `reason` is one sentence with the figures in it, `account` what it saw."""

    reason: str
    account: Account | None = None


# A frozen dataclass whose fields are Real, int, bool, str, None, Point, or tuples of these, so that one codec
# (`surefoot.methods.states`) writes every state into the record and reads it back to the bit.
State: TypeAlias = Any
Settings: TypeAlias = Any


@dataclass(frozen=True, slots=True)
class Traits:
    """One row of the table of methods; screens, documents and tests read it.

    Attributes:
        starts: number of starting values.
        derivatives: highest derivative asked for (0: values only).
        bracket: keeps a bracket with a sign change; the two starts are its ends.
        evaluations: new evaluations of (f, derivative, g) in one step, the f at the iterate taken included.
        order: theoretical order of convergence at a simple root, None where it has none in that sense.
        cost_note: words on cost or order that figures alone cannot say.
        moves_on: a step from an iterate that repeats can still lead elsewhere, since the rule changes what it keeps.
        source: published source of the rule.
        revision: of our implementation; goes up whenever the bits of a step may change.
    """

    code: str
    title: str
    idea: str
    starts: int
    derivatives: int
    bracket: bool
    evaluations: tuple[int, int, int]
    order: float | None
    source: str
    revision: int = 1
    cost_note: str = ""
    moves_on: bool = False


@dataclass(frozen=True, slots=True)
class Setting:
    """A key of `[plan.settings]` that a method takes.

    Attributes:
        kind: "real" (a literal of the arithmetic), "choice", "expression" (over the unknown) or "flag".
        default: text used when the key is absent; None when the key is required.
        allowed: the interval that a real must lie in, as `[0, inf)`; empty where any number will do.
    """

    key: str
    kind: Literal["real", "choice", "expression", "flag"]
    default: str | None
    meaning: str
    choices: tuple[str, ...] = ()
    allowed: str = ""


class Method(Protocol):
    """A registered method. Implementations are stateless; there is one file and one row each."""

    @property
    def traits(self) -> Traits: ...

    @property
    def settings(self) -> tuple[Setting, ...]: ...

    @property
    def state_type(self) -> type[Any]: ...

    def begin(self, starts: tuple[Point, ...], settings: Settings, functions: Functions) -> State | Breakdown: ...

    def propose(self, state: State, settings: Settings, functions: Functions) -> Proposal | Breakdown: ...

    def accept(self, state: State, proposal: Proposal, point: Point) -> State: ...


@dataclass(frozen=True, slots=True)
class Limited:
    """A stage of step control that changed the step: the flag of that stage."""

    stage: str
    before: Real
    after: Real


@dataclass(frozen=True, slots=True)
class Verdict:
    """Which test ended the run, with both sides of its inequality.

    Attributes:
        test: key of the test in `[plan.stop]` (`x_absolute`, `residual`, `exact_zero`, `sum`, `all`, `max_steps`, ...).
        sides: (name, left, right) of each inequality that took part: ("x_absolute", |dx|, tolerance).
    """

    test: str
    sides: tuple[tuple[str, Real, Real], ...]


Outcome: TypeAlias = Literal[
    "converged", "step_limit", "failed_evaluation", "broke_down", "left_range", "no_progress", "abandoned"
]


@dataclass(frozen=True, slots=True)
class Iterate:
    """One x_k of a run.

    Attributes:
        k: index; the starts come first.
        x: the iterate, in the run's arithmetic.
        f: its function value, or why there is none.
        raw: where the rule itself wanted to go, None for starts and iterates put by hand.
        account: what the step took for true, None for starts and iterates put by hand.
        limited: flags of the control stages that changed the step, in order.
        put: the reason given, for an iterate put by hand; empty otherwise.
    """

    k: int
    x: Real
    f: Real | Failure
    raw: Real | None = None
    account: Account | None = None
    limited: tuple[Limited, ...] = ()
    put: str = ""


@dataclass(frozen=True, slots=True)
class Spent:
    """Evaluations made, by what was evaluated."""

    f: int = 0
    derivative: int = 0
    g: int = 0

    def __add__(self, other: Spent) -> Spent:
        return Spent(self.f + other.f, self.derivative + other.derivative, self.g + other.g)

    @property
    def total(self) -> int:
        return self.f + self.derivative + self.g


@dataclass(frozen=True, slots=True)
class Ending:
    """How a run ended: its outcome, the verdict behind it, and one sentence with the figures.

    `account` is what the rule saw when it broke down, None otherwise.
    """

    outcome: Outcome
    verdict: Verdict | None
    says: str
    account: Account | None = None


@dataclass(frozen=True, slots=True)
class Begun:
    """A run after its starts were evaluated. `state` is None when a start failed or was an exact zero.

    `readings` are plain sentences on what the plan left open and how it was read.
    """

    iterates: tuple[Iterate, ...]
    state: State | None
    spent: Spent
    ending: Ending | None
    readings: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Progress:
    """What a further step is made from; the session's fold keeps it up to date.

    Attributes:
        state: the method's state after `current`.
        current: the iterate in hand; `previous` the one before it, None when there is none.
        origin: iterate 0 of the run.
        steps: step rules applied so far (starts and iterates put by hand do not count).
    """

    state: State
    current: Iterate
    previous: Iterate | None
    origin: Iterate
    steps: int


@dataclass(frozen=True, slots=True)
class Stepped:
    """One step of a run.

    Attributes:
        iterate: None when the run ended without a new one (breakdown, failed derivative, test before the step), and
            when the user stopped the evaluation: then `ending` is None too and nothing happened.
        state: what the next step is made from, None when f failed at the new iterate.
    """

    iterate: Iterate | None
    state: State | None
    spent: Spent
    ending: Ending | None
