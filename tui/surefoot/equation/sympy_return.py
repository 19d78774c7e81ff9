"""sympy -> tree: sums and products in the order of the text that they came from, everything known as it was written."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from typing import TypeAlias

from surefoot.equation.exact_numbers import decimal_text, is_short, number_tree
from surefoot.equation.kinks import any_holds, joined
from surefoot.equation.parser import parse_condition, parse_expression
from surefoot.equation.partial_derivatives import KINKED, Symbolic
from surefoot.equation.sympy_bridge import Bridge
from surefoot.equation.sympy_heads import BRANCHES, CONDITION, EXPONENTIAL, LINE, POWER, QUOTIENT, branch_parts, is_head
from surefoot.equation.tree import Binary, Call, Condition, Expression, Name, Negate, Number, Piecewise

_ONE, _ZERO = Number("1"), Number("0")
_LAST = 1 << 30
_HALF = Fraction(1, 2)

_Place: TypeAlias = tuple[int, int]  # of a factor: quotients, constants, what depends on the unknown; and its place


def differentiated(tree: Expression, bridge: Bridge) -> Expression:
    """The derivative of a tree by the unknown of the bridge. Raises Undifferentiable, RecursionError."""
    from sympy.core.parameters import distribute

    with distribute(False):  # 2*(x + 1) stays a product
        slope = bridge.to_sympy(tree).diff(bridge.unknown)
        return _Return(bridge).tree(slope)


class _Return:
    """Makes trees of what sympy made of an expression that went there over a bridge."""

    def __init__(self, bridge: Bridge) -> None:
        self._known, self._places = bridge.known, dict(bridge.place)
        self._unknown, self._slopes = bridge.unknown, bridge.slopes

    def tree(self, expression: Symbolic) -> Expression:
        known = self._known.get(expression)
        if known is None:
            known = self._known[expression] = self._made(expression)
        return known

    def _made(self, expression: Symbolic) -> Expression:
        if expression.is_Rational:
            return number_tree(_fraction(expression))
        if expression.is_Symbol:
            return parse_expression(expression.name)
        if expression.is_Add:
            return self._sum(expression)
        if is_head(expression, BRANCHES):
            return self._piecewise(expression)
        if is_head(expression, LINE):
            return Name(expression.args[0].name)
        if is_head(expression, QUOTIENT):
            return Binary("/", self.tree(expression.args[0]), self.tree(expression.args[1]))
        if is_head(expression, EXPONENTIAL):
            return Binary("^", self.tree(expression.args[0]), self.tree(expression.args[1]))
        if expression.is_Function and not is_head(expression, POWER):
            arguments = expression.args
            if (name := type(expression).__name__) in KINKED:
                arguments = arguments[: len(arguments) // (3 if name == "abs" else 2) or 1]
            return Call(name, tuple(map(self.tree, arguments)))
        return self._product(expression)

    def _sum(self, expression: Symbolic) -> Expression:
        """Terms in order, a positive one first; terms that are 0 wherever they exist leave only their condition."""
        expression = self._opened(expression)
        if not expression.is_Add:
            return self.tree(expression)
        parts = [self._normal(term) for term in expression.args]
        vanishing = [term for term in parts if _vanishes(term)]
        terms = sorted((term for term in parts if not _vanishes(term)), key=self._term_order)
        first = next((i for i, term in enumerate(terms) if not _is_negative(term)), 0)
        ordered = [terms[first], *terms[:first], *terms[first + 1 :]] if terms else []
        result: Expression = _ZERO
        for i, term in enumerate(ordered):
            if i == 0:
                result = self.tree(term)
            elif _is_negative(term):
                result = Binary("-", result, self.tree(-term))
            else:
                result = Binary("+", result, self.tree(term))
        return self._where_it_exists(vanishing, terms, result)

    def _opened(self, total: Symbolic) -> Symbolic:
        """A sum with the sums in it opened: all of them where that leaves fewer terms, else where only signs change."""
        split = [term.as_coeff_Mul() for term in _terms(total)]
        if not any(inner.is_Add for _, inner in split) or total in self._known:
            return total
        opened = total.func(*(coefficient * part for coefficient, inner in split for part in _terms(inner)))
        if len(_terms(opened)) < sum(len(_terms(inner)) for _, inner in split):
            return opened
        loose = [abs(coefficient) == 1 and inner not in self._known for coefficient, inner in split]
        parts = [_terms(inner) if open_ else (inner,) for (_, inner), open_ in zip(split, loose, strict=True)]
        return total.func(*(pair[0] * part for pair, inside in zip(split, parts, strict=True) for part in inside))

    def _where_it_exists(self, vanishing: list[Symbolic], others: list[Symbolic], value: Expression) -> Expression:
        """`value` under the conditions of vanishing terms, those left out that another term carries anyway."""
        carried = {_existence(part) for term in others for part in _outer_branches(term)}
        wanted = [_existence(part) for term in vanishing for part in _outer_branches(term) if _is_zero_branches(part)]
        conditions = [condition for condition in wanted if condition not in carried]
        return Piecewise(((joined("and", conditions), value),), None) if conditions else value

    def _piecewise(self, expression: Symbolic) -> Expression:
        if _is_zero_branches(expression):
            return Piecewise(((_existence(expression), _ZERO),), None)
        _, pairs, otherwise = branch_parts(expression)
        branches = tuple((_condition(condition), self.tree(value)) for condition, value in pairs)
        return Piecewise(branches, None if otherwise is None else self.tree(otherwise))

    def _product(self, expression: Symbolic) -> Expression:
        if _vanishes(expression):
            return self._where_it_exists([expression], [], _ZERO)
        coefficient, rest = self._normal(expression).as_coeff_Mul()
        if coefficient == -1 and rest.is_Add:
            return self.tree(rest.func(*(-term for term in rest.args)))
        value = abs(_fraction(coefficient))
        above, below = self._above_and_below(rest)
        text = decimal_text(value)
        if text is not None and (value.denominator == 1 or is_short(text)):
            above = [Number(text), *above] if value != 1 else above
        else:
            above = [Number(str(value.numerator)), *above] if value.numerator != 1 else above
            below = [Number(str(value.denominator)), *below]
        above = above or [_ONE]
        if coefficient < 0:
            above[0] = _negated(above[0])
        result = _multiplied(above)
        return Binary("/", result, _multiplied(below)) if below else result

    def _normal(self, product: Symbolic) -> Symbolic:
        """A product whose sums are opened, and have a positive term or are known."""
        sign, factors = 1, []
        for factor in _factors(product):
            total = self._opened(factor) if factor.is_Add else factor
            if total.is_Add and total not in self._known and all(map(_is_negative, total.args)):
                sign, total = -sign, total.func(*(-term for term in total.args))
            factors.append(total)
        return sign * (product.func(*factors) if product.is_Mul else factors[0])

    def _above_and_below(self, product: Symbolic) -> tuple[list[Expression], list[Expression]]:
        """The factors over and under the line of a quotient, constant ones first; powers of one base come together."""
        exponents: dict[Symbolic, Fraction] = {}
        above: list[tuple[_Place, Expression]] = []
        below: list[tuple[_Place, Expression]] = []
        for factor in _factors(product):
            base, exponent = _base_and_exponent(factor)
            if isinstance(exponent, Fraction):
                exponents[base] = exponents.get(base, Fraction(0)) + exponent
            else:
                above.append((self._factor_order(factor), Binary("^", self.tree(base), self.tree(exponent))))
        for base, exponent in exponents.items():
            if exponent:
                side = above if exponent > 0 else below
                side.append((self._factor_order(base), self._power(base, abs(exponent))))
        return [tree for _, tree in sorted(above, key=_first)], [tree for _, tree in sorted(below, key=_first)]

    def _factor_order(self, factor: Symbolic) -> _Place:
        if is_head(factor, QUOTIENT):
            return 0, self._place(factor)
        return 1 + (self._unknown in factor.free_symbols or factor in self._slopes), self._place(factor)

    def _power(self, base: Symbolic, exponent: Fraction) -> Expression:
        """base^exponent for an exponent above 0."""
        tree = self.tree(base)
        if exponent == 1:
            return tree
        if exponent == _HALF:
            return Call("sqrt", (tree,))
        return Binary("^", tree, number_tree(exponent))

    def _term_order(self, term: Symbolic) -> tuple[int, list[int], str]:
        places = sorted(self._place(factor) for factor in _factors(term) if not factor.is_Rational)
        return (places[-1] if places else self._place(term)), places, str(term)

    def _place(self, expression: Symbolic) -> int:
        """Where the expression, or the first part of it that is known, stood in the text."""
        place = self._places.get(expression)
        if place is None:
            below = [self._place(part) for part in expression.args if not part.is_Rational]
            place = self._places[expression] = min(below, default=_LAST)
        return place


def _first(part: tuple[_Place, Expression]) -> _Place:
    return part[0]


def _negated(tree: Expression) -> Expression:
    """The negative, with the sign at the first factor."""
    if isinstance(tree, Binary) and tree.operator in "*/":
        return Binary(tree.operator, _negated(tree.left), tree.right)
    return Negate(tree)


def _multiplied(factors: Sequence[Expression]) -> Expression:
    result = factors[0]
    for factor in factors[1:]:
        result = Binary("*", result, factor)
    return result


def _terms(expression: Symbolic) -> tuple[Symbolic, ...]:
    return tuple(expression.args) if expression.is_Add else (expression,)


def _factors(expression: Symbolic) -> tuple[Symbolic, ...]:
    return tuple(expression.args) if expression.is_Mul else (expression,)


def _fraction(number: Symbolic) -> Fraction:
    return Fraction(int(number.p), int(number.q))


def _base_and_exponent(factor: Symbolic) -> tuple[Symbolic, Fraction | Symbolic]:
    """A factor as base^exponent; whole powers of a power are one power."""
    exponent = Fraction(1)
    if factor.is_Pow and factor.exp.is_Integer:
        factor, exponent = factor.base, _fraction(factor.exp)
    if is_head(factor, POWER):
        base, inner = factor.args
        if inner.is_Rational:
            return base, exponent * _fraction(inner)
        if exponent == 1:
            return base, inner
    return factor, exponent


def _is_negative(term: Symbolic) -> bool:
    return bool(term.as_coeff_Mul()[0] < 0)


def _condition(symbol: Symbolic) -> Condition:
    return parse_condition(symbol.name.removeprefix(CONDITION))


def _existence(expression: Symbolic) -> Condition:
    """That a branch of a head of branches holds."""
    return any_holds([_condition(condition) for condition, _ in branch_parts(expression)[1]])


def _is_zero_branches(expression: Symbolic) -> bool:
    """Whether this is a piecewise that is 0 wherever one of its branches holds."""
    if not is_head(expression, BRANCHES):
        return False
    _, pairs, otherwise = branch_parts(expression)
    return otherwise is None and all(value == 0 for _, value in pairs)


def _vanishes(term: Symbolic) -> bool:
    return any(_is_zero_branches(factor) for factor in _factors(term))


def _outer_branches(term: Symbolic) -> list[Symbolic]:
    """The heads of branches that evaluating a term evaluates in any case."""
    found: list[Symbolic] = []
    waiting = [term]
    while waiting:
        part = waiting.pop()
        if is_head(part, BRANCHES):
            found.append(part)
        else:
            waiting.extend(part.args)
    return found
