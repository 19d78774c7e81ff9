"""Numbers under each other: a column of iterates of fixed width, and the mark behind the digits that did not change.

The decimals are chosen from the numbers shown, so that neighbouring iterates stand digit under digit and one sees a
solve take hold. A number that the shared decimals would cut to almost nothing, or that is too long for them, is written
with an exponent in the same cells. Words in place of a number are expected as `Characters.text` gives them.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import Final

from surefoot.figures.numbers import Exact, Number, fixed, read, scientific, zero

_ENOUGH_DIGITS: Final = 6
"""Significant digits below which a number is rather written with an exponent."""

_SMALLEST_PLAIN: Final = -4
"""Exponent of ten of the smallest numbers that are written without one."""

_WRITTEN: Final = re.compile(
    r"(?P<lead> *)(?P<sign>[+-]?)(?P<whole>\d+)(?P<rest>(?:\.\d*)?)(?P<exponent>(?:e[+-]\d+)?)(?P<pad> *)"
)


@dataclass(frozen=True, slots=True)
class ColumnLayout:
    """How the numbers of one column are written.

    Attributes:
        width: cells of the column; the last of them, or one inside the number, belongs to the mark.
        lead: cells in front of the decimal point, the sign included.
        decimals: digits behind the point that the column shares; None when every number has its own exponent.
    """

    width: int
    lead: int
    decimals: int | None

    def text(self, number: Number) -> str:
        """A number, or the word that stands in its place, in `width - 1` cells."""
        cells = max(0, self.width - 1)
        exact = read(number)
        if isinstance(exact, str):
            return _within(exact, cells)
        if exact.value.is_zero():
            return _within(zero(exact.value).rjust(min(self.lead, cells)), cells)
        text = self._fixed(exact, cells)
        return _with_exponent(exact, self.lead, cells) if text is None else text

    def marked(self, number: Number, previous: Number) -> str:
        """A number in `width` cells with the mark behind the digits that it shares with the previous iterate."""
        return with_steady_mark(self.text(number), self.text(previous))[: max(0, self.width)]

    def _fixed(self, exact: Exact, cells: int) -> str | None:
        """The number with the shared decimals, point under point; None where that says too little or does not fit."""
        if self.decimals is None or not _fits(exact, self.decimals, self.lead):
            return None
        decimals = min(self.decimals, exact.digits - 1 - exact.value.adjusted())
        whole, _, rest = fixed(exact.value, decimals).partition(".")
        text = f"{whole.rjust(self.lead)}.{rest}"
        return text.ljust(cells) if len(text) <= cells else None


def column_layout(numbers: Iterable[Number], width: int) -> ColumnLayout:
    """The layout that shows most of these numbers digit under digit, the last one above all.

    Args:
        numbers: the numbers that the column shows, in order; words among them do not count.
        width: cells of the column.
    """
    shown = [exact for exact in map(read, numbers) if isinstance(exact, Exact) and not exact.value.is_zero()]
    signs = int(any(exact.value.is_signed() for exact in shown))
    # With these decimals the smallest number shows all its digits.
    most = max((exact.digits - 1 - exact.value.adjusted() for exact in shown), default=0)
    cells = max(0, width - 1)
    best: tuple[bool, int, int] = (False, 0, 0)
    chosen = ColumnLayout(width, signs + 1, None)
    for decimals in range(1, min(cells, most) + 1):
        good = [exact for exact in shown if _fits(exact, decimals, cells - 1 - decimals)]
        score = (bool(good) and good[-1] is shown[-1], len(good), decimals)
        if good and score > best:
            best, chosen = score, ColumnLayout(width, max(map(_lead, good)), decimals)
    return chosen


def iterate_column(numbers: Sequence[Number], width: int, before: Number = None) -> list[str]:
    """A column of iterates, a line each, exactly `width` cells wide.

    Args:
        numbers: the iterates shown, in order.
        width: cells of the column.
        before: the iterate before the first one shown; None where that is the first of the run.
    """
    layout = column_layout(numbers, width)
    return [layout.marked(number, previous) for number, previous in zip(numbers, [before, *numbers], strict=False)]


def with_steady_mark(text: str, previous_text: str, mark: str = "'") -> str:
    """A number as text with the mark behind the digits that did not change from the iterate before.

    The texts are compared as written: `1.7853` after `1.8685` is `1.'7853`. A first digit that changed, another sign,
    another number of digits before the point or another exponent put the mark in front; equal numbers put it at the
    end. Where either text is no number, a space goes in front instead of the mark, so the result is always one cell
    longer than the text.
    """
    now, before = _WRITTEN.fullmatch(text), _WRITTEN.fullmatch(previous_text)
    if now is None or before is None:
        return " " + text
    end = now.start("sign")
    same_place = len(now["whole"]) == len(before["whole"]) and now["exponent"] == before["exponent"]
    if same_place and now["sign"] == before["sign"]:
        steady = _shared(now["whole"] + now["rest"], before["whole"] + before["rest"])
        if steady == len(now["whole"] + now["rest"]):
            end = now.end("exponent")
        elif steady:
            end = now.start("whole") + steady
    return text[:end] + mark + text[end:]


def _shared(text: str, other: str) -> int:
    """Length of the beginning that two texts share."""
    for place, (a, b) in enumerate(zip(text, other, strict=False)):
        if a != b:
            return place
    return min(len(text), len(other))


def _fits(exact: Exact, decimals: int, lead: int) -> bool:
    """Whether a number written with these decimals shows enough of its digits, in the cells before the point."""
    exponent = exact.value.adjusted()
    shown = decimals + exponent + 1
    return exponent >= _SMALLEST_PLAIN and shown >= min(_ENOUGH_DIGITS, exact.digits) and _lead(exact) <= lead


def _lead(exact: Exact) -> int:
    """Cells that a number takes before its point."""
    return int(exact.value.is_signed()) + max(exact.value.adjusted(), 0) + 1


def _with_exponent(exact: Exact, lead: int, cells: int) -> str:
    """The number with its own exponent, its point under the others' where there is room for some digits."""
    sign = int(exact.value.is_signed())
    for before, fewest in ((max(0, lead - 1 - sign), min(4, exact.digits)), (0, 1)):
        for digits in range(min(exact.digits, cells), fewest - 1, -1):
            mantissa, exponent = scientific(exact.value, digits)
            text = f"{' ' * before}{mantissa}e{exponent:+03d}"
            if len(text) <= cells:
                return text.ljust(cells)
    return "~" * cells  # not even one digit and the exponent fit: nothing rather than a wrong number


def _within(word: str, cells: int) -> str:
    return word.ljust(cells) if len(word) <= cells else word[: max(0, cells - 1)] + "~" * min(1, cells)
