"""The functions of the equation language as functions of sympy that it neither evaluates, expands nor reorders.

sympy's own exp, sqrt and Piecewise rewrite themselves when they meet: sqrt(4*x) becomes 2*sqrt(x), conditions change
sides. These heads know their derivatives and nothing else, so sympy's part is the chain and product rules and the
arithmetic of sums and products. A symbol stands for each expression that does not depend on the unknown; its name is
the text of that expression, a condition's is that text behind CONDITION.

sympy is imported when the first head is made.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache
from typing import Any

from surefoot.equation.partial_derivatives import Symbolic, partial

CONDITION = "?"
"""First character of the name of a symbol that stands for a condition."""

POWER, EXPONENTIAL, QUOTIENT, LINE, BRANCHES = "power", "exponential", "quotient", "line", "branches"
"""Heads beside the functions of the language: u^e; c^u (with the logarithm of c); a/b of a denominator that grows fast;
a definition that depends on the unknown (its name, its derivative, the unknown); and a piecewise."""

_LARGEST_WHOLE_POWER = 100
_LARGEST_POWER_OF_NUMBER = 3


class Heads:
    """Makes the heads; the `Maker` of the rules."""

    def call(self, function: str, *arguments: Symbolic) -> Symbolic:
        if function == "sqrt":
            return self.power(arguments[0], self.rational(1, 2))
        return head(function)(*arguments)

    def power(self, base: Symbolic, exponent: Symbolic) -> Symbolic:
        """base^exponent; sympy's own power only where it neither multiplies out nor evaluates anything.

        Of a product, and with a fraction p/q, it is the p-th power of the q-th root (the first root keeps the product
        together), so that powers of the same base come together.
        """
        import sympy

        exponent = sympy.Integer(exponent) if isinstance(exponent, int) else exponent
        if exponent.is_Rational and is_head(base, POWER) and (base.args[1] * exponent).is_Integer:
            return self.power(base.args[0], base.args[1] * exponent)
        if exponent.is_Integer:
            compound = base.is_Mul or base.is_Pow
            largest = _LARGEST_POWER_OF_NUMBER if base.is_Rational else _LARGEST_WHOLE_POWER
            if exponent in (0, 1) or (abs(exponent) <= largest and not compound):
                return base**exponent
        if exponent.is_Rational:
            return head(POWER)(base, sympy.Rational(1, exponent.q)) ** int(exponent.p)
        return head(POWER)(base, exponent)

    def exponential(self, base: Symbolic, exponent: Symbolic, logarithm: str) -> Symbolic:
        """base^exponent of a base that does not depend on the unknown."""
        return head(EXPONENTIAL)(base, exponent, self.constant(logarithm))

    def quotient(self, numerator: Symbolic, denominator: Symbolic) -> Symbolic:
        if denominator in (numerator.args if numerator.is_Mul else (numerator,)):
            return numerator / denominator
        coefficient, rest = numerator.as_coeff_Mul()
        return coefficient * head(QUOTIENT)(rest, denominator)

    def constant(self, text: str) -> Symbolic:
        import sympy

        return sympy.Symbol(text)

    def rational(self, numerator: int, denominator: int = 1) -> Symbolic:
        import sympy

        return sympy.Rational(numerator, denominator)

    def line(self, name: str, slope: Symbolic, unknown: Symbolic) -> Symbolic:
        """A definition under its own name, which sympy differentiates to `slope`."""
        return head(LINE)(self.constant(name), slope, unknown)

    def condition(self, text: str) -> Symbolic:
        return self.constant(CONDITION + text)

    def branches(
        self,
        branches: Sequence[tuple[Symbolic, Symbolic]],
        otherwise: Symbolic | None = None,
        derived: Sequence[Symbolic] = (),
        *,
        switched_by: Symbolic = 0,
    ) -> Symbolic:
        """A piecewise over symbols of conditions.

        Args:
            switched_by: what the conditions depend on, which their symbols do not show; 0 when they stay as they are.
            derived: conditions of the derivative. None: the same. One: a guard around them all. Two: those two
                instead of the first condition and otherwise.
        """
        parts = [part for branch in branches for part in branch]
        rest = [] if otherwise is None else [otherwise]
        return head(BRANCHES)(switched_by, len(derived), *derived, *parts, *rest)


HEADS = Heads()


@cache
def head(name: str) -> Any:
    """The class of sympy functions with this name."""
    import sympy

    rules: dict[str, dict[str, Any]] = {
        LINE: {"_eval_derivative": _line_derivative},
        QUOTIENT: {"_eval_derivative": _quotient_derivative},
        BRANCHES: {"_eval_derivative": _branches_derivative},
        "abs": {"_eval_derivative": _kinked_derivative},
        "sign": {"_eval_derivative": _kinked_derivative},
        "floor": {"_eval_derivative": _kinked_derivative},
        "ceil": {"_eval_derivative": _kinked_derivative},
        "min": {"_eval_derivative": _chosen_derivative},
        "max": {"_eval_derivative": _chosen_derivative},
    }
    return type(name, (sympy.Function,), rules.get(name, {"fdiff": _partial}))


def is_head(expression: Symbolic, name: str) -> bool:
    return bool(expression.is_Function) and type(expression).__name__ == name


def _partial(self: Symbolic, argindex: int = 1) -> Symbolic:
    """`fdiff` of sympy; `argindex` counts from 1."""
    name, arguments = type(self).__name__, self.args
    if name == POWER:
        base, exponent = arguments
        return exponent * HEADS.power(base, exponent - 1) if argindex == 1 else self * HEADS.call("ln", base)
    if name == EXPONENTIAL:
        return self * arguments[2]
    return partial(name, argindex - 1, arguments, self, HEADS)


def _line_derivative(self: Symbolic, by: Symbolic) -> Symbolic:  # noqa: ARG001 - sympy hands it over
    return self.args[1]


def _quotient_derivative(self: Symbolic, by: Symbolic) -> Symbolic:
    """a'/b - (a/b)*(b'/b): b^2 would overflow long before b does."""
    over, under = self.args
    return HEADS.quotient(over.diff(by), under) - self * HEADS.quotient(under.diff(by), under)


def _kinked_derivative(self: Symbolic, by: Symbolic) -> Symbolic:
    """Of abs (its argument, then the conditions of its two branches); of a step: 0 beside the place of the step."""
    slopes = (1, -1) if len(self.args) == 3 else (0,)
    slope = HEADS.branches(list(zip(self.args[1:], slopes, strict=True)), switched_by=by)
    return slope * self.args[0].diff(by)


def _chosen_derivative(self: Symbolic, by: Symbolic) -> Symbolic:
    """Of min and max: the arguments, then for each the condition that it alone is the one."""
    count = len(self.args) // 2
    pairs = zip(self.args[count:], self.args[:count], strict=True)
    return HEADS.branches([(condition, argument.diff(by)) for condition, argument in pairs], switched_by=by)


def branch_parts(expression: Symbolic) -> tuple[list[Symbolic], list[tuple[Symbolic, Symbolic]], Symbolic | None]:
    """Conditions of the derivative, branches, and what holds otherwise, of a head of `Heads.branches`."""
    count = int(expression.args[1])
    derived, parts = list(expression.args[2 : 2 + count]), expression.args[2 + count :]
    pairs = list(zip(parts[0::2], parts[1::2], strict=False))
    return derived, pairs, parts[-1] if len(parts) % 2 else None


def _branches_derivative(self: Symbolic, by: Symbolic) -> Symbolic:
    switched_by = self.args[0]
    derived, pairs, otherwise = branch_parts(self)
    slopes = [(condition, value.diff(by)) for condition, value in pairs]
    slope_otherwise = None if otherwise is None else otherwise.diff(by)
    if len(derived) == 2:
        both = [(derived[0], slopes[0][1]), (derived[1], slope_otherwise)]
        return HEADS.branches(both, switched_by=switched_by)
    if switched_by == 0 and slope_otherwise in (0, None) and all(slope == 0 for _, slope in slopes):
        return switched_by
    result = HEADS.branches(slopes, slope_otherwise, switched_by=switched_by)
    return HEADS.branches([(derived[0], result)], switched_by=switched_by) if derived else result
