"""Pasting source lines: what was read is seen before it is taken over, and the readings go into the record."""

from __future__ import annotations

from pathlib import Path

from support.function_room import function_room
from support.screens import screen_text, wait_until
from surefoot.equation.pasting import read_source
from surefoot.screens.form import Form
from surefoot.screens.source import looks_like_source, pasted_lines, reading_words, with_source
from surefoot.screens.source_page import SourcePage

# An invented routine: uniform flow in a trapezoidal section.
SECTION = """double residual(double y) {
  double A = (b + z*y)*y;   /* area */
  double P = b + 2.0*y*sqrt(1.0 + pow(z, 2));
  const double n = 0.025;
  return A/n*pow(A/P, 2/3)*sqrt(S) - Q;
}
"""


def test_what_was_read_fills_the_fields_and_replaces_entries_of_the_same_name() -> None:
    form = with_source(Form(where="A = y\nB = 2", inputs="n = 1\nS = 0.001"), read_source(SECTION))
    assert form == Form(
        unknown="y",
        equation="A/n*(A/P)^0*sqrt(S) - Q",
        where="B = 2\nA = (b + z*y)*y\nP = b + 2.0*y*sqrt(1.0 + z^2)",
        inputs="S = 0.001\nn = 0.025",
    )


def test_every_reading_that_changes_a_value_is_listed_with_its_place() -> None:
    pasted = read_source(SECTION)
    assert reading_words(pasted) == ("line 5, column 23: 2/3 is read as 0: a quotient of integers drops its fraction",)
    lines = pasted_lines(pasted)
    assert lines[0].startswith("read as C: ")
    assert "no value: b, z, S, Q" in lines
    assert lines.index("What changes a value, to be looked at:") == lines.index(reading_words(pasted)[0]) - 1


def test_equations_as_one_types_them_are_not_taken_for_source() -> None:
    assert looks_like_source(SECTION)
    assert not looks_like_source("1/sqrt(f) = -2*log10(eps/(3.7*D) + 2.51/(Re*sqrt(f)))")
    assert not looks_like_source("A = (b + z*y)*y\nP = b + 2*y*sqrt(1 + z^2)")


async def test_source_is_pasted_seen_taken_over_and_recorded(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await pilot.press("p")
        await wait_until(pilot, lambda: isinstance(app.screen, SourcePage))
        page = app.screen
        assert isinstance(page, SourcePage)
        page.field.load_text(SECTION)
        await pilot.press("ctrl+s")
        await pilot.pause()
        assert "2/3 is read as 0" in screen_text(app)
        await pilot.press("enter")
        await wait_until(pilot, lambda: app.screen is room)
        assert room.view.form.equation == "A/n*(A/P)^0*sqrt(S) - Q"
        assert room.typed.readings == reading_words(read_source(SECTION))
