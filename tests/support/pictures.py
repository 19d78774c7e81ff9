"""Pictures of any data, and what every drawing must keep."""

import math
import re
from collections.abc import Sequence
from fractions import Fraction

from hypothesis import strategies as st
from rich.cells import cell_len

from surefoot.figures.picture import Axis, Curve, Mark, Picture, Segment, Vertical

NASTY = (0.0, -0.0, 5e-324, 1e-300, -1e-300, 1.0, 1.0 + 2**-52, 1.7e308, -1.7e308, math.inf, -math.inf, math.nan)

numbers = (
    st.floats() | st.sampled_from([*NASTY, 10**400, -(10**400)]) | st.integers(-3, 3) | st.floats(1.78316, 1.78317)
)
gaps = numbers | st.none()
curves = st.lists(st.tuples(numbers, gaps), max_size=20).map(
    lambda points: Curve([x for x, _ in points], [y for _, y in points])
)
kinds = st.sampled_from(["iterate", "current", "root", "pole", "bound", "exact_zero", "no_value", "d", "λ", ""])
axes = st.builds(
    Axis,
    st.sampled_from(["", "y", "λ", "a long name of an unknown", "深さ", "\x1b[31m"]),
    st.sampled_from(["", "1", "m", "W/(m²·K)"]),
    gaps,
    gaps,
    st.booleans(),
    st.booleans(),
)
pictures = st.builds(
    Picture,
    curves=st.lists(curves, max_size=3).map(tuple),
    segments=st.lists(st.builds(Segment, numbers, numbers, numbers, numbers), max_size=3).map(tuple),
    marks=st.lists(st.builds(Mark, numbers, gaps, kinds, st.booleans(), st.booleans()), max_size=5).map(tuple),
    verticals=st.lists(st.builds(Vertical, numbers, st.sampled_from(["bound", "pole"])), max_size=2).map(tuple),
    horizontals=st.lists(numbers, max_size=2).map(tuple),
    x=axes,
    y=axes,
    together=st.sampled_from(["", "*"]),
    empty=st.sampled_from(["nothing", "no value of λ here", ""]),
)


def check_lines(lines: Sequence[str], width: int, height: int, unicode: bool) -> None:
    """Exactly the cells asked for, and only characters that the set allows."""
    assert len(lines) == height
    for line in lines:
        assert len(line) == cell_len(line) == width
        assert line.isprintable()
        if not unicode:
            assert line.isascii()


def labelled_value(text: str, note: str) -> Fraction:
    """The number that a tick label stands for, read as a person reads it: `6` with `1.78316 + e-6` is 1.783166."""
    read = re.fullmatch(r"(?:(?P<offset>\S+) \+ )?(?:e(?P<power>[+-]\d+))?", note)
    assert read is not None
    return Fraction(read["offset"] or 0) + Fraction(text) * Fraction(10) ** int(read["power"] or 0)
