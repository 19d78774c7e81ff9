"""Lines of text that repaint only the cells that changed.

A terminal toolkit sends a whole widget again when anything in it is new; over a slow line that is most of the traffic.
This widget keeps the strips it painted and asks for just the spans in which the new ones differ.
"""

from __future__ import annotations

from collections.abc import Sequence

from rich.segment import Segment
from rich.style import Style
from rich.text import Text
from textual.geometry import Region
from textual.strip import Strip
from textual.widget import Widget

_BLANK = (" ", None)


class Lines(Widget):
    """Shows lines from its top; what does not fit is cut. Set them with `show`."""

    DEFAULT_CSS = "Lines { height: 1fr; width: 1fr; }"

    def __init__(self, *, id: str | None = None, classes: str | None = None) -> None:  # noqa: A002 - the toolkit's name
        super().__init__(id=id, classes=classes)
        self._strips: list[Strip] = []

    def show(self, lines: Sequence[Text | str]) -> None:
        """Replace what is shown, repainting only the cells that differ."""
        fresh = [self._strip(line) for line in lines]
        shown, self._strips = self._strips, fresh
        regions = []
        for y in range(min(max(len(shown), len(fresh)), self.size.height)):
            span = _changed_span(shown[y] if y < len(shown) else None, fresh[y] if y < len(fresh) else None)
            if span is not None:
                regions.append(Region(span[0], y, span[1] - span[0], 1))
        if regions:
            self.refresh(*regions)

    def plain(self) -> str:
        """What is shown, as text."""
        return "\n".join(strip.text.rstrip() for strip in self._strips)

    def _strip(self, line: Text | str) -> Strip:
        if isinstance(line, str):
            return Strip([Segment(line)])
        if not line.spans:  # rendering such a text leaves its own style out
            return Strip([Segment(line.plain, self.app.console.get_style(line.style))])
        return Strip(list(line.render(self.app.console)))

    def render_line(self, y: int) -> Strip:
        base = self.rich_style
        if y >= len(self._strips):
            return Strip.blank(self.size.width, base)
        return self._strips[y].adjust_cell_length(self.size.width, base).apply_style(base)


def _cells(strip: Strip | None) -> list[tuple[str, Style | None]]:
    if strip is None:
        return []
    return [(character, segment.style) for segment in strip for character in segment.text]


def _changed_span(old: Strip | None, new: Strip | None) -> tuple[int, int] | None:
    """First and one past the last cell in which two strips differ, None when they are the same."""
    if old is not None and new is not None and old == new:
        return None
    before, after = _cells(old), _cells(new)
    width = max(len(before), len(after))
    before += [_BLANK] * (width - len(before))
    after += [_BLANK] * (width - len(after))
    first = next((at for at in range(width) if before[at] != after[at]), None)
    if first is None:
        return None
    last = next(at for at in range(width - 1, -1, -1) if before[at] != after[at])
    return first, last + 1
