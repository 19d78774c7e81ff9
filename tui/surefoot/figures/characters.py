"""The two character sets: every glyph of the program in one place, each exactly one cell wide.

A glyph alone tells things apart, since a terminal may have no colour, and the ASCII set alone must do, since a link
may carry nothing else. Figures that can be copied from the screen (numbers, signs, marks in numbers) are the same in
both sets.
"""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass
from typing import Final

_REPLACEMENT: Final = "?"

_GREEK: Final = {
    letter: unicodedata.name(letter).split()[-1].lower().replace("lamda", "lambda")
    for letter in "αβγδεζηθικλμνξοπρςστυφχψω"
}

# What the trade writes when it has only ASCII, for the signs of units and of running text.
_FOLDED: Final = {
    "µ": "u",
    "°": "deg",
    "·": "*",
    "⋅": "*",
    "×": "x",
    "÷": "/",
    "−": "-",
    "–": "-",
    "—": "-",
    "±": "+-",
    "≤": "<=",
    "≥": ">=",
    "≠": "!=",
    "≈": "~",
    "√": "sqrt",
    "∞": "inf",
    "∂": "d",
    "‘": "'",
    "’": "'",
    "“": '"',
    "”": '"',
    "…": "...",
    "→": "->",
    "ß": "ss",
    "ø": "o",
    "Ø": "O",
    "⁄": "/",
    **_GREEK,
    **{letter.upper(): name.capitalize() for letter, name in _GREEK.items() if letter != "ς"},
}

_SUPERSCRIPTS: Final = str.maketrans("⁺⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "+-0123456789")
_SUPERSCRIPT_RUN: Final = re.compile("[⁺⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+")

# Hangul vowels and finals outside a composed syllable: letters that take no cell of their own.
_JOINING: Final = frozenset(map(chr, (*range(0x1160, 0x1200), *range(0xD7B0, 0xD800))))

_MARKS: Final = {
    # kind: (Unicode, ASCII)
    "iterate": ("•", "."),
    "previous": ("x", "x"),
    "current": ("o", "o"),
    "base": ("x", "x"),
    "root": ("*", "*"),
    "bound": ("│", "|"),
    "pole": ("╎", "|"),
    "bracket_low": ("[", "["),
    "bracket_high": ("]", "]"),
    "exact_zero": ("0", "0"),
    "no_value": ("!", "!"),
    "off_left": ("<", "<"),
    "off_right": (">", ">"),
    "off_top": ("^", "^"),
    "off_bottom": ("v", "v"),
}


@dataclass(frozen=True, slots=True)
class Characters:
    """A character set; `UNICODE` and `ASCII` are the two there are.

    Attributes:
        unicode: True for box drawing and braille, False for pure ASCII.
    """

    unicode: bool

    @property
    def rule(self) -> str:
        """A horizontal line: between the parts of a screen, and the zero line of a picture."""
        return "─" if self.unicode else "-"

    @property
    def vertical(self) -> str:
        """A vertical line between columns."""
        return "│" if self.unicode else "|"

    @property
    def separator(self) -> str:
        """A light vertical line between panes."""
        return "╎" if self.unicode else ":"

    @property
    def digit_mark(self) -> str:
        """Stands in a number behind the digits that did not change from the iterate before."""
        return "'"

    @property
    def minus(self) -> str:
        """The sign of negative numbers: in both sets the one that reads back when copied from the screen."""
        return "-"

    @property
    def cut(self) -> str:
        """Stands at the end of text that was cut to its width."""
        return "…" if self.unicode else "~"

    def mark(self, kind: str) -> str:
        """The glyph of a mark in a picture.

        Args:
            kind: a name (`iterate`, `previous`, `current`, `base`, `root`, `bound`, `pole`, `bracket_low`,
                `bracket_high`, `exact_zero`, `no_value`, `off_left`, `off_right`, `off_top`, `off_bottom`), or one
                printable ASCII character, which stands for itself. Anything else gives `?`.
        """
        pair = _MARKS.get(kind)
        if pair is not None:
            return pair[0 if self.unicode else 1]
        return kind if len(kind) == 1 and " " < kind <= "~" else _REPLACEMENT

    def text(self, words: str) -> str:
        """Words as this set can show them, every character one cell wide.

        In ASCII the signs of units and the Greek letters are spelled out (`µm` is `um`, `m⁻¹` is `m^-1`, `λ` is
        `lambda`). A character
        that takes no cell or two cells becomes `?`, so that `len` of the result is its width.
        """
        if words.isascii() and words.isprintable():
            return words
        composed = unicodedata.normalize("NFC", words)
        if self.unicode:
            return "".join(_shown(c) for c in composed)
        raised = _SUPERSCRIPT_RUN.sub(lambda run: "^" + run[0].translate(_SUPERSCRIPTS), composed)
        return "".join(_ascii(c) for c in raised)

    def fit(self, words: str, width: int) -> str:
        """Words in exactly `width` cells: padded with spaces at the right, or cut with the cut mark as last cell."""
        shown = self.text(words)
        if len(shown) <= width:
            return shown.ljust(width)
        return shown[: width - 1] + self.cut if width > 0 else ""


UNICODE: Final = Characters(unicode=True)
ASCII: Final = Characters(unicode=False)


def _shown(character: str) -> str:
    """The character where a terminal gives it one cell (ambiguous widths count as one, as terminals have it)."""
    category = unicodedata.category(character)
    if unicodedata.east_asian_width(character) in "WF" or category[0] in "CM" or character in _JOINING:
        return _REPLACEMENT
    return " " if category[0] == "Z" else character


def _ascii(character: str) -> str:
    if character.isascii():
        return character if character.isprintable() else _REPLACEMENT
    if character in _FOLDED:
        return _FOLDED[character]
    folded = "".join(_FOLDED.get(c, c) for c in unicodedata.normalize("NFKD", character))
    return "".join(c for c in folded if c.isascii() and c.isprintable()) or _REPLACEMENT
