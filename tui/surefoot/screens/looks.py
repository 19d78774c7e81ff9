"""The three looks. Plain uses the terminal's own two colours; no look tells anything by colour alone."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal, TypeAlias

from textual.theme import Theme

# What a piece of text is, for its style: heading, quiet (less important), here (cursor or selection), alert (a failure,
# a refusal), key (a key of the key line), value (a figure that was asked for).
Kind: TypeAlias = Literal["heading", "quiet", "here", "alert", "key", "value"]


@dataclass(frozen=True, slots=True)
class Look:
    name: str
    theme: Theme
    styles: Mapping[Kind, str]


def _theme(name: str, *, dark: bool, ground: str, ink: str, line: str, accent: str, native: bool = False) -> Theme:
    return Theme(
        name=f"surefoot-{name}",
        primary=accent,
        secondary=accent,
        accent=accent,
        warning=accent,
        error=accent,
        success=accent,
        foreground=ink,
        background=ground,
        surface=ground,
        panel=ground,
        boost=ground,
        dark=dark,
        ansi=native,
        variables=({"ansi-background": ground, "ansi-foreground": ink} if native else {})
        | {"line": line, "input-selection-background": accent, "block-cursor-background": ink},
    )


LOOKS: Mapping[str, Look] = {
    look.name: look
    for look in (
        Look(
            "plain",
            _theme(
                "plain",
                dark=True,
                ground="ansi_default",
                ink="ansi_default",
                line="ansi_default",
                accent="ansi_default",
                native=True,
            ),
            {"heading": "bold", "quiet": "dim", "here": "reverse", "alert": "bold", "key": "bold", "value": "bold"},
        ),
        Look(
            "dark",
            _theme("dark", dark=True, ground="#16181c", ink="#d8d6cf", line="#4a4f57", accent="#d9a441"),
            {
                "heading": "bold #f0ede4",
                "quiet": "#8f949b",
                "here": "reverse",
                "alert": "bold #e8896b",
                "key": "bold #d9a441",
                "value": "bold #9fc7a8",
            },
        ),
        Look(
            "light",
            _theme("light", dark=False, ground="#f6f4ee", ink="#23262b", line="#b9b5aa", accent="#8a5a00"),
            {
                "heading": "bold #000000",
                "quiet": "#6b6f76",
                "here": "reverse",
                "alert": "bold #a3341a",
                "key": "bold #8a5a00",
                "value": "bold #1d6b3a",
            },
        ),
    )
}
DEFAULT_LOOK = "plain"
