"""Numbers of the equation language as fractions, and back as the shortest way to write them."""

from __future__ import annotations

import re
from fractions import Fraction

from surefoot.equation.tree import Binary, Expression, Negate, Number

_MOST_DIGITS = 18
_SHORT = 6
_PLAIN = re.compile(r"[0-9]*\.?[0-9]*")
_EXPONENT = re.compile(r"[eE]([+-]?[0-9]+)")
_LARGEST_EXPONENT = 30


def exact_number(node: Number) -> Fraction | None:
    """The value of a literal without exponent that binary64 holds exactly (`2`, `0.5`), else None."""
    if node.single or len(node.text) > _MOST_DIGITS + 2 or not _PLAIN.fullmatch(node.text):
        return None
    value = Fraction(node.text)
    return value if value.denominator & (value.denominator - 1) == 0 and Fraction(float(value)) == value else None


def rational_of(node: Expression) -> Fraction | None:
    """The value of a literal, a negated one, or a quotient of whole literals (`-2/3`); None for anything else."""
    match node:
        case Number(text, False) if len(text) <= _MOST_DIGITS + 2:
            exponent = _EXPONENT.search(text)
            too_large = exponent is not None and abs(int(exponent[1])) > _LARGEST_EXPONENT
            return None if too_large else Fraction(text)
        case Negate(operand):
            value = rational_of(operand)
            return None if value is None else -value
        case Binary("/", left, right):
            over, under = rational_of(left), rational_of(right)
            if over is not None and under and over.denominator == under.denominator == 1:
                return over / under
    return None


def decimal_text(value: Fraction) -> str | None:
    """The value of a fraction >= 0 as a finite decimal without exponent; None when it has none or a long one."""
    twos = fives = 0
    rest = value.denominator
    while rest % 2 == 0:
        rest, twos = rest // 2, twos + 1
    while rest % 5 == 0:
        rest, fives = rest // 5, fives + 1
    places = max(twos, fives)
    if rest != 1 or places > _MOST_DIGITS:
        return None
    digits = str(value.numerator * 10**places // value.denominator).rjust(places + 1, "0")
    return f"{digits[:-places]}.{digits[-places:]}" if places else digits


def is_short(text: str) -> bool:
    """Whether a decimal is easier to read than a quotient."""
    return len(text.replace(".", "").lstrip("0")) <= _SHORT and len(text) <= _SHORT + 3


def number_tree(value: Fraction) -> Expression:
    """The tree of a number: a decimal when it has one, else a quotient; negative numbers are negated ones."""
    if value < 0:
        positive = number_tree(-value)
        if isinstance(positive, Binary):
            return Binary(positive.operator, Negate(positive.left), positive.right)
        return Negate(positive)
    text = decimal_text(value)
    if text is not None and (value.denominator == 1 or is_short(text)):
        return Number(text)
    return Binary("/", Number(str(value.numerator)), Number(str(value.denominator)))
