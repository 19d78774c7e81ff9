"""The function of a problem in one arithmetic: the residual, its derivatives, the iteration function, conditions.

Texts are compiled once. An evaluation goes through the definitions in their order, but only those that are needed
directly or through others, and all of these: like the assignments of a host code they do not wait for a branch.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.checking import CheckedProblem, parse_known
from surefoot.equation.compiling import Decider, Evaluator, compile_condition, compile_expression
from surefoot.equation.parser import parse_condition, parse_expression
from surefoot.equation.problem import Derivative
from surefoot.equation.results import EvaluationFailed, Failure, FailureKind, Real, Result
from surefoot.equation.tree import Condition, Expression, Node
from surefoot.equation.wording import names_in, to_text
from surefoot.errors import EquationError, ProblemError


@dataclass(frozen=True, slots=True)
class _Line:
    """A compiled definition, and the names that it uses."""

    slot: int
    evaluate: Evaluator
    uses: frozenset[str]


@dataclass(frozen=True, slots=True)
class _Formula:
    """A compiled expression with the definitions to go through before it."""

    lines: tuple[_Line, ...]
    evaluate: Evaluator


@dataclass(frozen=True, slots=True)
class _Test:
    """A compiled condition with the definitions to go through before it."""

    lines: tuple[_Line, ...]
    holds: Decider


@dataclass(frozen=True, slots=True)
class _Scope:
    """The names that a text may use: the places of their values, and the definitions among them in order."""

    slots: dict[str, int]
    lines: dict[str, _Line]

    def copy(self) -> _Scope:
        return _Scope(self.slots.copy(), self.lines.copy())

    def needed(self, tree: Node, without: Iterable[str] = ()) -> tuple[_Line, ...]:
        """The definitions that a tree uses, directly or through others, in their order."""
        needed: set[str] = set()
        waiting = list(names_in(tree) - set(without))
        while waiting:
            name = waiting.pop()
            if name in self.lines and name not in needed:
                needed.add(name)
                waiting.extend(self.lines[name].uses)
        return tuple(line for name, line in self.lines.items() if name in needed)


class Function:
    """A checked problem, ready to be evaluated in one arithmetic. Nothing is counted here: see `Meter`."""

    def __init__(
        self,
        checked: CheckedProblem,
        arithmetic: Arithmetic,
        derivatives: Iterable[Derivative] = (),
        g: str | None = None,
        host_derivative: bool = False,
    ) -> None:
        """Compiles the texts.

        Args:
            derivatives: the recorded derivatives of the residual.
            g: the iteration function of a fixed-point plan.
            host_derivative: the first derivative is the one that the problem states.

        Raises:
            EquationError: in `g`.
            ProblemError: in a derivative, or an input that the arithmetic cannot hold.
        """
        self.arithmetic = arithmetic
        self._checked = checked
        self._unknown = checked.problem.unknown
        self._start: list[Real] = []
        self._scope = _Scope({}, {})
        for name in checked.names:
            self._reserve(self._scope, name)
        self._unknown_slot = self._scope.slots[self._unknown]
        for given in checked.problem.inputs:
            self._start[self._scope.slots[given.name]] = self._converted(given.name, given.value)
        for name, tree in checked.definitions:
            self._add_line(self._scope, name, tree)
        self._residual = self._formula(self._scope, checked.residual, "")
        self._admissible = tuple(self._test(tree, "admissible") for tree in checked.admissible)
        self._g = self._formula(self._scope, parse_known(g, parse_expression, checked.names), "g") if g else None
        self._derivatives = {derivative.order: self._derivative(derivative) for derivative in derivatives}
        if host_derivative:
            self._derivatives.pop(1, None)
            if checked.host_derivative is not None:
                self._derivatives[1] = self._formula(self._scope, checked.host_derivative, "d1")
        self._tests: dict[tuple[str, tuple[str, ...]], _Test] = {}

    # Values

    def value(self, x: Real) -> Real:
        """The residual at x. Raises EvaluationFailed when there is no finite value."""
        return self._evaluated(self._residual, x)

    def derivative(self, x: Real, order: int = 1) -> Real:
        """The derivative of the residual at x.

        Raises:
            EvaluationFailed: no finite value; `no_derivative` where none was recorded, or no branch of it holds here.
        """
        formula = self._derivatives.get(order)
        name = f"d{order}"
        if formula is None:
            text = to_text(self._checked.residual)
            raise EvaluationFailed(Failure(FailureKind.NO_DERIVATIVE, text, (), name))
        try:
            return self._evaluated(formula, x)
        except EvaluationFailed as failed:
            result = failed.result
            outside = isinstance(result, Failure) and result.definition in self._checked.names
            if isinstance(result, Failure) and result.kind == FailureKind.NO_BRANCH and not outside:
                raise EvaluationFailed(replace(result, kind=FailureKind.NO_DERIVATIVE)) from None
            raise

    def g(self, x: Real) -> Real:
        """The iteration function at x. Raises EvaluationFailed; ValueError when the plan gave none."""
        if self._g is None:
            raise ValueError("the function was made without an iteration function")
        return self._evaluated(self._g, x)

    def quantities(self, x: Real) -> tuple[tuple[str, Result], ...]:
        """Each definition of the problem with its value at x, in order; why it has none, where it fails."""
        results: dict[str, Result] = {}
        values = self._start.copy()
        values[self._unknown_slot] = x
        not_finite = self._not_finite(x)
        for name, _ in self._checked.definitions:
            line = self._scope.lines[name]
            failed = [results[used] for used in sorted(line.uses) if isinstance(results.get(used), Failure)]
            if not_finite is not None and name in self._checked.moving:
                failed.insert(0, not_finite)
            if failed:
                results[name] = failed[0]
                continue
            try:
                results[name] = values[line.slot] = line.evaluate(values)
            except EvaluationFailed as caught:
                results[name] = caught.result
        return tuple(results.items())

    # Conditions

    def condition(self, text: str, x: Real, extra_names: Mapping[str, Real] | None = None) -> bool:
        """Whether a condition holds at x.

        Args:
            extra_names: names beside the problem's own, with their values (`x_k`, `dx`); they come first.

        Raises:
            EquationError: in the text.
            EvaluationFailed: an operand has no finite value.
        """
        extra = extra_names or {}
        key = text, tuple(extra)
        test = self._tests.get(key)
        if test is None:
            tree = parse_known(text, parse_condition, (*self._checked.names, *extra))
            test = self._tests[key] = self._test(tree, "condition", tuple(extra))
        return self._decided(test, x, extra.values())

    def admissible(self, x: Real) -> tuple[bool, ...]:
        """Whether each condition on a root holds at x. Raises EvaluationFailed when one cannot be evaluated."""
        return tuple(self._decided(test, x, ()) for test in self._admissible)

    # Compiling

    def _converted(self, name: str, text: str) -> Real:
        try:
            return self.arithmetic.literal(text, single=False)
        except OperationFailed:
            message = f"{text} is beyond the range of {self.arithmetic.kind}"
            raise ProblemError(message, place=f"inputs.{name}.value") from None

    def _reserve(self, scope: _Scope, name: str) -> None:
        """A place for the value of a further name."""
        scope.slots[name] = len(self._start)
        self._start.append(self.arithmetic.integer(0))

    def _add_line(self, scope: _Scope, name: str, tree: Expression) -> None:
        encode = self.arithmetic.encode
        evaluate = compile_expression(tree, self.arithmetic, scope.slots, encode=encode, definition=name)
        scope.lines[name] = _Line(scope.slots[name], evaluate, names_in(tree))

    def _formula(self, scope: _Scope, tree: Expression, definition: str) -> _Formula:
        encode = self.arithmetic.encode
        evaluate = compile_expression(tree, self.arithmetic, scope.slots, encode=encode, definition=definition)
        return _Formula(scope.needed(tree), evaluate)

    def _test(self, tree: Condition, definition: str, extra: tuple[str, ...] = ()) -> _Test:
        slots = self._scope.slots | {name: len(self._start) + count for count, name in enumerate(extra)}
        encode = self.arithmetic.encode
        holds = compile_condition(tree, self.arithmetic, slots, encode=encode, definition=definition)
        return _Test(self._scope.needed(tree, without=extra), holds)

    def _derivative(self, derivative: Derivative) -> _Formula:
        """A derivative with its own definitions, which other derivatives do not see."""
        scope, name = self._scope.copy(), f"d{derivative.order}"
        try:
            for line in derivative.where:
                if line.name in scope.slots:
                    raise ProblemError(f"{line.name} is defined already", place=name)
                tree = parse_known(line.text, parse_expression, scope.slots)
                self._reserve(scope, line.name)
                self._add_line(scope, line.name, tree)
            return self._formula(scope, parse_known(derivative.text, parse_expression, scope.slots), name)
        except EquationError as error:
            raise ProblemError(str(error), place=name, equation_error=error) from error

    # Evaluating

    def _evaluated(self, formula: _Formula, x: Real) -> Real:
        return formula.evaluate(self._values(formula.lines, x))

    def _decided(self, test: _Test, x: Real, extra: Iterable[Real]) -> bool:
        return test.holds([*self._values(test.lines, x), *extra])

    def _values(self, lines: tuple[_Line, ...], x: Real) -> list[Real]:
        """The values of all names at x, as far as the lines give them."""
        not_finite = self._not_finite(x)
        if not_finite is not None:
            raise EvaluationFailed(not_finite)
        values = self._start.copy()
        values[self._unknown_slot] = x
        for line in lines:
            values[line.slot] = line.evaluate(values)
        return values

    def _not_finite(self, x: Real) -> Failure | None:
        """An iterate that is not a number any more: no operation is at fault, so the unknown itself is named."""
        if x == x and abs(x) != math.inf:
            return None
        kind = FailureKind.OVERFLOW if x == x else FailureKind.NOT_A_NUMBER
        return Failure(kind, self._unknown, (self.arithmetic.encode(x),))
