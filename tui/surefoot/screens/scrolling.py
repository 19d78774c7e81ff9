"""Lists that are longer than their place: which part of one is in sight, and the keys that move in it."""

from __future__ import annotations

from textual.binding import Binding, BindingType


def first_in_sight(at: int, count: int, room: int) -> int:
    """The first of `count` things to show in `room` places: the one at `at` is in sight, in the middle if it can be."""
    return max(0, min(at - room // 2, count - room))


def moving_keys(page: int) -> tuple[BindingType, ...]:
    """The arrow keys and, by `page` places, the page keys; each calls `action_move`."""
    steps = {"up": -1, "down": 1, "pageup": -page, "pagedown": page}
    return tuple(Binding(key, f"move({by})", show=False) for key, by in steps.items())
