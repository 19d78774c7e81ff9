"""The residual over numpy arrays, for pictures and maps.

The last bits differ from those of a scalar run: numpy's vector loops are other code than the C library's functions,
and they depend on the processor. So a value from here is drawn, never quoted: what is quoted is evaluated again in
the arithmetic of the run. Special functions are the correctly rounded ones, element by element.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import partial, reduce
from typing import TypeAlias

import numpy as np
import numpy.typing as npt

from surefoot.equation import special
from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.checking import CheckedProblem
from surefoot.equation.functions import CONSTANTS
from surefoot.equation.tree import (
    Binary,
    Call,
    Comparison,
    Condition,
    Expression,
    Junction,
    Lookup,
    Name,
    Negate,
    Not,
    Number,
    Piecewise,
)
from surefoot.equation.wording import names_in

Array: TypeAlias = npt.NDArray[np.float64]
Mask: TypeAlias = npt.NDArray[np.bool_]


def sample(checked: CheckedProblem, xs: Sequence[float] | Array) -> Array:
    """The residual at each x; NaN where a scalar run would have no finite value (to the last bits, see above).

    Args:
        xs: values of the unknown, in any order; what is not finite gives NaN.
    """
    with np.errstate(all="ignore"):
        points = np.asarray(xs, dtype=np.float64)
        values: dict[str, Array] = {checked.problem.unknown: np.where(np.isfinite(points), points, np.nan)}
        for given in checked.problem.inputs:
            values[given.name] = np.full(points.shape, BINARY64.literal(given.value, single=False))
        needed = _needed(checked)
        for name, tree in checked.definitions:
            if name in needed:
                values[name] = _value(tree, values, points.shape)
        # like the assignments of a host code, a definition that fails leaves no value, whichever branch is taken
        whole = reduce(np.logical_and, (~np.isnan(values[name]) for name in needed), np.isfinite(points))
        return np.where(whole, _value(checked.residual, values, points.shape), np.nan)


def _needed(checked: CheckedProblem) -> list[str]:
    """The definitions that the residual uses, directly or through others."""
    trees = dict(checked.definitions)
    needed: set[str] = set()
    waiting = list(names_in(checked.residual))
    while waiting:
        name = waiting.pop()
        if name in trees and name not in needed:
            needed.add(name)
            waiting.extend(names_in(trees[name]))
    return sorted(needed)


def _value(node: Expression, values: Mapping[str, Array], shape: tuple[int, ...]) -> Array:
    match node:
        case Number():
            return np.full(shape, BINARY64.literal(node.text, node.single))
        case Name() if node.name in CONSTANTS:
            return np.full(shape, BINARY64.functions[node.name]())
        case Name():
            return values[node.name]
        case Negate():
            return -_value(node.operand, values, shape)
        case Binary():
            left = _value(node.left, values, shape)
            return _finite(_BINARY[node.operator], [left, _value(node.right, values, shape)])
        case Call():
            arguments = []
            for argument in node.arguments:  # a comprehension would double the depth of the call
                arguments.append(_value(argument, values, shape))
            return _finite(_FUNCTIONS[node.function], arguments)
        case Piecewise():
            return _piecewise(node, values, shape)
        case Lookup():
            return np.full(shape, np.nan)


def _finite(operation: Callable[..., Array], operands: list[Array]) -> Array:
    """The results that are finite, of operands that are; NaN elsewhere (pow(NaN, 0) would be 1)."""
    result = operation(*operands)
    for operand in (*operands, result):
        result = np.where(np.isfinite(operand), result, np.nan)
    return result


def _piecewise(node: Piecewise, values: Mapping[str, Array], shape: tuple[int, ...]) -> Array:
    """The value of the first branch that holds; NaN from a condition on that cannot be decided."""
    result = np.full(shape, np.nan)
    left = np.full(shape, True)
    for condition, branch in node.branches:
        truth = _truth(condition, values, shape)
        result = np.where(left & truth.known & truth.holds, _value(branch, values, shape), result)
        left &= truth.known & ~truth.holds
    return result if node.otherwise is None else np.where(left, _value(node.otherwise, values, shape), result)


@dataclass(frozen=True, slots=True)
class _Truth:
    """Whether a condition holds at each point, and whether that is known: no operand that it needs has failed."""

    holds: Mask
    known: Mask

    def decided_by(self, settles: bool, other: _Truth) -> _Truth:
        """This one where it is unknown or settles the matter, the other elsewhere."""
        stays = ~self.known | (self.holds == settles)
        return _Truth(np.where(stays, self.holds, other.holds), np.where(stays, self.known, other.known))


def _truth(node: Condition, values: Mapping[str, Array], shape: tuple[int, ...]) -> _Truth:
    match node:
        case Comparison():
            return _comparison(node, values, shape)
        case Not():
            inner = _truth(node.operand, values, shape)
            return _Truth(~inner.holds, inner.known)
        case Junction():
            truth = _truth(node.operands[0], values, shape)
            for operand in node.operands[1:]:
                truth = truth.decided_by(node.word == "or", _truth(operand, values, shape))
            return truth


def _comparison(node: Comparison, values: Mapping[str, Array], shape: tuple[int, ...]) -> _Truth:
    truth = _Truth(np.full(shape, True), np.full(shape, True))
    a = _value(node.operands[0], values, shape)
    for relation, operand in zip(node.relations, node.operands[1:], strict=True):
        b = _value(operand, values, shape)
        truth = truth.decided_by(False, _Truth(_RELATIONS[relation](a, b), ~(np.isnan(a) | np.isnan(b))))
        a = b
    return truth


def _element(name: str, *arguments: float) -> float:
    try:
        return special.evaluate(name, *arguments)
    except OperationFailed:
        return float("nan")


def _elementwise(name: str, *operands: Array) -> Array:
    results = [_element(name, *map(float, elements)) for elements in zip(*(x.flat for x in operands), strict=True)]
    return np.array(results, dtype=np.float64).reshape(operands[0].shape)


def _least(*operands: Array) -> Array:
    return reduce(np.minimum, operands)


def _largest(*operands: Array) -> Array:
    return reduce(np.maximum, operands)


_RELATIONS: Mapping[str, Callable[[Array, Array], Mask]] = {
    "<": np.less,
    "<=": np.less_equal,
    ">": np.greater,
    ">=": np.greater_equal,
    "==": np.equal,
    "!=": np.not_equal,
}
_BINARY: Mapping[str, Callable[..., Array]] = {
    "+": np.add,
    "-": np.subtract,
    "*": np.multiply,
    "/": np.divide,
    "^": np.power,
}
_FUNCTIONS: Mapping[str, Callable[..., Array]] = {
    "sin": np.sin,
    "cos": np.cos,
    "tan": np.tan,
    "asin": np.arcsin,
    "acos": np.arccos,
    "atan": np.arctan,
    "atan2": np.arctan2,
    "sinh": np.sinh,
    "cosh": np.cosh,
    "tanh": np.tanh,
    "asinh": np.arcsinh,
    "acosh": np.arccosh,
    "atanh": np.arctanh,
    "exp": np.exp,
    "expm1": np.expm1,
    "ln": np.log,
    "log1p": np.log1p,
    "log10": np.log10,
    "log2": np.log2,
    "sqrt": np.sqrt,
    "cbrt": np.cbrt,
    "hypot": np.hypot,
    "abs": np.abs,
    "sign": np.sign,
    "floor": np.floor,
    "ceil": np.ceil,
    "min": _least,
    "max": _largest,
    **{name: partial(_elementwise, name) for name in special.DEFINITIONS},
}
