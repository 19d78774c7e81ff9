"""Tick labels of an axis: round numbers at their exact places, short enough to stand beside each other.

A tick is a whole number times a power of ten, so its label says its value exactly. Where that needs more than four
digits, the labels count from an offset, or in a power of ten, which the note of the axis then tells.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from typing import Final, TypeAlias

from surefoot.figures.scale import Scale

_MOST_DIGITS: Final = 4
_MOST_TICKS: Final = 60
_SLACK: Final = Fraction(1, 10**9)
_LARGEST_EXPONENT: Final = 308.25  # 10.0 to a larger power is no float


@dataclass(frozen=True, slots=True)
class Tick:
    """A label and where on the axis it belongs, as a fraction of the length."""

    fraction: float
    text: str


@dataclass(frozen=True, slots=True)
class Ticks:
    """The labels of an axis. `note` tells how to read them: `1.78316 + e-6`, `e+45`; empty for plain numbers."""

    ticks: tuple[Tick, ...] = ()
    note: str = ""


Fits: TypeAlias = Callable[[Sequence[Tick]], bool]


def choose(scale: Scale, fits: Fits) -> Ticks:
    """The finest labels that fit.

    Args:
        scale: the axis with its limits.
        fits: whether labels, in order, can stand beside each other.
    """
    best = Ticks()
    for ticks in _decades(scale) if scale.log and scale.high - scale.low >= 2 else _steps(scale):
        if len(ticks.ticks) > _MOST_TICKS:
            break
        if fits(ticks.ticks):
            best = ticks
        elif len(best.ticks) > 1:
            break
    return best


def _decades(scale: Scale) -> Iterator[Ticks]:
    """Powers of ten, from far apart to each."""
    for step in (500, 200, 100, 50, 20, 10, 5, 3, 2, 1):
        first = math.ceil(scale.low / step) * step
        exponents = range(first, math.floor(scale.high) + 1, step)
        span = scale.high - scale.low
        yield Ticks(tuple(Tick((k - scale.low) / span, f"1e{k}") for k in exponents))


def _steps(scale: Scale) -> Iterator[Ticks]:
    """Multiples of 1, 2 and 5 times powers of ten, from far apart to close."""
    low, high = _ends(scale)
    size = high - low
    if size <= 0:
        return
    exponent = len(str(int(size))) if size >= 1 else 1 - len(str(int(1 / size)))
    for power in range(exponent, max(exponent - 4, -1 if scale.whole else -400), -1):
        for factor in (5, 2, 1):
            yield _multiples(scale, low, high, factor, power)


def _multiples(scale: Scale, low: Fraction, high: Fraction, factor: int, power: int) -> Ticks:
    step = factor * Fraction(10) ** power
    # The limit that is typed as 0.3 is a binary number just below it, and has its label all the same.
    slack = (high - low) * _SLACK
    first, last = math.ceil((low - slack) / step), math.floor((high + slack) / step)
    if last - first > _MOST_TICKS:
        last = first + _MOST_TICKS
    counts = [factor * n for n in range(first, last + 1)]
    texts, note = _labels(counts, power)
    if scale.log:
        fractions = [scale.fraction(float(count * Fraction(10) ** power)) for count in counts]
    else:
        fractions = [float((count * Fraction(10) ** power - low) / (high - low)) for count in counts]
    return Ticks(tuple(Tick(fraction, text) for fraction, text in zip(fractions, texts, strict=True)), note)


def _labels(counts: list[int], power: int) -> tuple[list[str], str]:
    """Labels for whole numbers of 10**power, and the note that they need."""
    largest = max((abs(count) for count in counts), default=0)
    digits = len(str(largest))
    leading = digits - 1 + power
    if digits <= _MOST_DIGITS:
        if power >= -4 and leading <= 4:
            return [_plain(count, power) for count in counts], ""
        return [_plain(count, power - leading) for count in counts], f"e{leading:+d}"
    offset = min(counts) // 10 * 10
    return [str(count - offset) for count in counts], f"{_offset(offset, power)} + e{power:+d}"


def _plain(count: int, power: int) -> str:
    return f"{Decimal(count).scaleb(power):f}" if count else "0"


def _offset(count: int, power: int) -> str:
    """The offset of an axis, exactly."""
    exact = Decimal(count).scaleb(power).normalize()
    return f"{exact:f}" if -5 < exact.adjusted() < 16 else f"{exact:e}"


def _ends(scale: Scale) -> tuple[Fraction, Fraction]:
    """The limits as exact numbers; on a logarithmic axis of less than two decades, the values at them."""
    if scale.log:
        return Fraction(10.0**scale.low), Fraction(10.0 ** min(scale.high, _LARGEST_EXPONENT))
    return Fraction(scale.low), Fraction(scale.high)
