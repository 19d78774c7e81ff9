"""Which class a room is; imported only when the room is first shown, so that the first paint does not wait for it."""

from __future__ import annotations

from surefoot.screens.room import Room


def make_room(place: str) -> Room:
    """A new room of this name. Raises KeyError for a name that no room has."""
    if place == "opening":
        from surefoot.screens.opening import OpeningRoom

        return OpeningRoom()
    if place == "function":
        from surefoot.screens.function import FunctionRoom

        return FunctionRoom()
    if place == "method":
        from surefoot.screens.method import MethodRoom

        return MethodRoom()
    if place == "steps":
        from surefoot.screens.steps import StepsRoom

        return StepsRoom()
    if place == "record":
        from surefoot.screens.record import RecordRoom

        return RecordRoom()
    raise KeyError(place)
