"""Glyphs: one cell each, ASCII where it is promised, and told apart without colour."""

import unicodedata

import pytest
from hypothesis import given
from hypothesis import strategies as st
from rich.cells import cell_len

from surefoot.figures.characters import ASCII, UNICODE, Characters

MARKS = [
    "iterate",
    "previous",
    "current",
    "base",
    "root",
    "bound",
    "pole",
    "bracket_low",
    "bracket_high",
    "exact_zero",
    "no_value",
    "off_left",
    "off_right",
    "off_top",
    "off_bottom",
]


@pytest.mark.parametrize("characters", [UNICODE, ASCII])
def test_every_glyph_takes_one_cell(characters: Characters) -> None:
    glyphs = [characters.rule, characters.vertical, characters.separator, characters.digit_mark]
    glyphs += [characters.minus, characters.cut, *(characters.mark(kind) for kind in MARKS)]
    assert [cell_len(glyph) for glyph in glyphs] == [1] * len(glyphs)
    if not characters.unicode:
        assert all(glyph.isascii() for glyph in glyphs)


@pytest.mark.parametrize("characters", [UNICODE, ASCII])
def test_marks_that_can_meet_in_a_picture_differ(characters: Characters) -> None:
    kinds = [kind for kind in MARKS if kind not in ("base", "bound")]
    assert len({characters.mark(kind) for kind in kinds}) == len(kinds)
    # The base of a step is the previous iterate seen on the curve; a pole is a broken line, in ASCII by its rows.
    assert characters.mark("base") == characters.mark("previous")


def test_a_mark_may_be_one_ascii_character_of_its_own() -> None:
    assert [UNICODE.mark(kind) for kind in ("d", "f", "", "λ", "\n", "nothing")] == ["d", "f", "?", "?", "?", "?"]


@pytest.mark.parametrize(
    ("words", "ascii_words"),
    [
        ("W/(m²·K)", "W/(m^2*K)"),
        ("m³/s", "m^3/s"),
        ("10⁻³ m⁻¹", "10^-3 m^-1"),
        ("µm", "um"),
        ("°C", "degC"),
        ("λ", "lambda"),
        ("ς Σ", "sigma Sigma"),
        ("½", "1/2"),
        ("naïve", "naive"),
        ("a\tb\n", "a?b?"),
        ("深さ", "??"),
        ("", ""),
    ],
)
def test_ascii_spells_out_signs_and_greek(words: str, ascii_words: str) -> None:
    assert ASCII.text(words) == ascii_words


def test_unicode_keeps_what_takes_one_cell() -> None:
    assert UNICODE.text("λ [W/(m²·K)] naïve") == "λ [W/(m²·K)] naïve"
    assert UNICODE.text("e\u0301") == "é"  # composed, so that it takes one cell and one character
    assert UNICODE.text("深\u200b\x1b[0m\u00a0x") == "???[0m x"


@given(st.text(alphabet=st.characters(max_codepoint=0x25FF) | st.characters(categories=["L"])))
def test_the_length_of_shown_text_is_its_width(words: str) -> None:
    shown, ascii_shown = UNICODE.text(words), ASCII.text(words)
    assert cell_len(shown) == len(shown)
    assert ascii_shown.isascii()
    assert all(c == " " or unicodedata.category(c)[0] not in "CZ" for c in shown + ascii_shown)


@given(st.text(), st.integers(0, 30))
def test_fit_gives_the_exact_width(words: str, width: int) -> None:
    for characters in (UNICODE, ASCII):
        assert len(characters.fit(words, width)) == width


def test_fit_says_that_it_cut() -> None:
    assert ASCII.fit("newton-raphson", 8) == "newton-~"
    assert UNICODE.fit("newton-raphson", 8) == "newton-…"
    assert UNICODE.fit("secant", 8) == "secant  "
    assert UNICODE.fit("secant", 6) == "secant"
