"""The raster: what plotext draws, without its frame, and where we say that it draws."""

import pytest
from hypothesis import given
from hypothesis import strategies as st
from plotext._figure import _figure_class

from surefoot.figures.raster import BRAILLE, Layer, as_ascii, column_of, raster, row_of

fractions = st.floats(0, 1)


@given(fractions, fractions, st.integers(1, 60), st.integers(1, 30))
def test_points_are_drawn_where_column_of_and_row_of_say(x: float, y: float, columns: int, rows: int) -> None:
    cells = raster([Layer([[(x, y)]])], columns, rows)
    assert (len(cells), {len(row) for row in cells}) == (rows, {columns})
    inked = [(n, m) for n, row in enumerate(cells) for m, cell in enumerate(row) if cell != " "]
    assert inked == [(row_of(y, rows), column_of(x, columns))]


def test_the_cells_are_those_of_the_built_figure() -> None:
    line = [(0.0, 0.1), (0.3, 0.9), (1.0, 0.2)]
    figure = _figure_class()
    figure._set_size(30, 8)
    figure.theme("clear")
    figure.frame(False)
    figure.xlim(0, 1)
    figure.ylim(0, 1)
    figure.xticks([], [])
    figure.yticks([], [])
    figure.plot([x for x, _ in line], [y for _, y in line], marker="braille")
    built = figure.build().replace("\x1b[0m", "").splitlines()
    assert ["".join(row) for row in raster([Layer([line])], 30, 8)] == built


def test_later_layers_cover_earlier_ones() -> None:
    flat = [(0.0, 0.5), (1.0, 0.5)]
    cells = raster([Layer([flat], "+"), Layer([[(0.5, 0.5)]], "o")], 9, 3)
    assert "".join(cells[1]) == "++++o++++"


@pytest.mark.parametrize("layers", [[], [Layer([])], [Layer([[]])], [Layer([[]], "+"), Layer([], BRAILLE)]])
def test_nothing_is_blank(layers: list[Layer]) -> None:
    assert raster(layers, 4, 2) == [[" "] * 4] * 2


@pytest.mark.parametrize(
    ("cell", "shown"),
    [
        *((cell, "'") for cell in "⠁⠐⠛⠒⠉"),
        *((cell, ".") for cell in "⠄⣀⣤⠤"),
        *((cell, ":") for cell in "⡇⠦⣿"),
        ("⠀", " "),
        (" ", " "),
    ],
)
def test_ascii_has_its_ink_at_the_same_height(cell: str, shown: str) -> None:
    assert as_ascii(cell) == shown
