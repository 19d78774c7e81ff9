"""A stopping test of one's own: a condition over the names of the problem and the reserved names of a step.

Reserved, at the iterate that is tested:
    x_k, f_k, d_k           the iterate, its f, and the derivative there (evaluated for the test; Newton-Raphson only)
    x_prev, f_prev, d_prev  the iterate before, its f, and the slope that the step from it used
    f_0                     f at iterate 0
    dx, dx_raw              x_k - x_prev, and the step as the rule proposed it
    k                       step rules applied so far
    width                   width of the bracket in hand
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.checking import CheckedProblem, parse_known
from surefoot.equation.compiling import compile_expression
from surefoot.equation.function import Function
from surefoot.equation.parser import parse_condition
from surefoot.equation.results import EvaluationFailed, Failure, Real, Stopped
from surefoot.equation.tree import Comparison, Condition, Junction, Not
from surefoot.equation.wording import names_in, to_text
from surefoot.errors import EquationError, PlanError
from surefoot.methods.contract import Functions, Method, State, Verdict
from surefoot.methods.stopping import Side, Stride, step_under_test

_ALWAYS = ("x_k", "f_k", "x_prev", "f_prev", "f_0", "dx", "dx_raw", "k")
_KEY = "plan.stop.test"


def reserved_names(method: Method) -> tuple[str, ...]:
    """The reserved names that a test may use under a method."""
    names = list(_ALWAYS)
    if method.traits.derivatives >= 1:
        names.append("d_k")
    if not method.traits.bracket and not method.traits.evaluations[2]:
        names.append("d_prev")
    if method.traits.bracket:
        names.append("width")
    return tuple(names)


def parse_test(text: str, checked: CheckedProblem, method: Method) -> Condition:
    """The condition as a tree.

    Raises:
        PlanError: the text is no condition, or uses a name that there is not under this method.
    """
    try:
        return parse_known(text, parse_condition, (*checked.names, *reserved_names(method)))
    except EquationError as error:
        raise PlanError(str(error), key=_KEY) from error


class OwnTest:
    """The condition of a plan, ready to be made at an iterate."""

    def __init__(self, text: str, checked: CheckedProblem, method: Method, function: Function) -> None:
        """Raises PlanError as `parse_test` does."""
        self._text, self._checked, self._function = text, checked, function
        self._tree = parse_test(text, checked, method)
        self._used = names_in(self._tree) & frozenset(reserved_names(method))

    @property
    def counts_steps(self) -> bool:
        """Whether the condition looks at k, so that an iterate that repeats may still fulfil it."""
        return "k" in self._used

    def verdict(self, stride: Stride, state: State, steps: int, functions: Functions) -> Verdict | None:
        """The verdict with both sides of each comparison, None where the test goes on or a name has no value yet.

        Raises:
            EvaluationFailed: an operand of the condition, or d_k, has no finite value.
        """
        values = self._values(stride, state, steps, functions)
        if values is None or not self._function.condition(self._text, stride.new.x, values):
            return None
        return Verdict("test", tuple(self._sides(stride.new.x, values)))

    def _values(self, stride: Stride, state: State, steps: int, functions: Functions) -> dict[str, Real] | None:
        """The reserved names that the condition uses, None where one of them has no value."""
        values: dict[str, Real] = {}
        for name in sorted(self._used):
            try:
                value = _value_of(name, stride, state, steps, functions)
            except OperationFailed:
                return None
            if value is None or isinstance(value, Failure):
                return None
            values[name] = value
        return values

    def _sides(self, x: Real, values: Mapping[str, Real]) -> Iterator[Side]:
        """Both sides of each comparison of the condition whose operands have a value."""
        arithmetic = self._function.arithmetic
        known: dict[str, Real] = {self._checked.problem.unknown: x}
        known |= {given.name: arithmetic.literal(given.value, False) for given in self._checked.problem.inputs}
        known |= {
            name: value for name, value in self._function.quantities(x) if not isinstance(value, Failure | Stopped)
        }
        known |= values
        slots = {name: slot for slot, name in enumerate(known)}
        numbers = list(known.values())
        for comparison in _comparisons(self._tree):
            try:
                operands = [compile_expression(operand, arithmetic, slots)(numbers) for operand in comparison.operands]
            except EvaluationFailed:
                continue
            texts = [to_text(operand) for operand in comparison.operands]
            for at, relation in enumerate(comparison.relations):
                yield f"{texts[at]} {relation} {texts[at + 1]}", operands[at], operands[at + 1]


def _value_of(name: str, stride: Stride, state: State, steps: int, functions: Functions) -> Real | Failure | None:
    """The value of a reserved name, None where there is none yet; `width` is that of the bracket a, b of the state."""
    arithmetic, new, old = functions.arithmetic, stride.new, stride.old
    match name:
        case "x_k":
            return new.x
        case "f_k":
            return new.f
        case "d_k":
            return functions.derivative(new.x)
        case "x_prev":
            return None if old is None else old.x
        case "f_prev":
            return None if old is None else old.f
        case "d_prev":
            return None if new.account is None else new.account.slope
        case "f_0":
            return stride.origin.f
        case "k":
            return arithmetic.integer(steps)
        case "width":
            return abs(arithmetic.subtract(state.b.x, state.a.x))
        case _:
            return step_under_test(arithmetic, stride, raw=name == "dx_raw")


def _comparisons(tree: Condition) -> Iterator[Comparison]:
    match tree:
        case Comparison():
            yield tree
        case Not():
            yield from _comparisons(tree.operand)
        case Junction():
            for operand in tree.operands:
                yield from _comparisons(operand)
