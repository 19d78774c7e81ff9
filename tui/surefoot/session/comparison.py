"""What was recorded against what was computed again: where the first difference stands, and how large it is."""

from __future__ import annotations

import json
import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

from surefoot.equation.arithmetic import Arithmetic
from surefoot.session.canonical import Json

_FIRST = ("iterates", "iterate", "k", "x", "f", "failure", "raw", "account", "slope")  # what a person looks at first


@dataclass(frozen=True, slots=True)
class Difference:
    """Two values that should be the same.

    Attributes:
        event: number of the event.
        run: number of the run.
        what: which value: `x of iterate 6`, `slope of iterate 6`, `state.older of iterate 6`.
        recorded, recomputed: as the record writes them; `nothing` where one is missing.
        places: their distance in units in the last place of the recorded value, None where they are not two numbers.
    """

    event: int
    run: int
    what: str
    recorded: str
    recomputed: str
    places: float | None = None

    def __str__(self) -> str:
        apart = "" if self.places is None else f", {places_words(self.places)} apart"
        said = f"recorded {self.recorded}, recomputed {self.recomputed}{apart}"
        return f"event {self.event}, run {self.run}, {self.what}: {said}"


def places_words(places: float) -> str:
    """`1 last place`, `3 last places`, `4.1e+09 last places`."""
    return "1 last place" if places == 1 else f"{places:.6g} last places"


def compare(event: int, run: int, recorded: Json, recomputed: Json, arithmetic: Arithmetic) -> list[Difference]:
    """Every value in which two contents of an event differ, those of the iterate first."""
    found = []
    for place, old, new in _leaves(recorded, recomputed, ()):
        what = _name(place, recorded)
        found.append(Difference(event, run, what, _text(old), _text(new), _places(old, new, arithmetic)))
    return found


def _leaves(recorded: Json, recomputed: Json, place: tuple[str, ...]) -> Iterator[tuple[tuple[str, ...], Json, Json]]:
    """(place, recorded, recomputed) of every leaf that is not the same in both."""
    if isinstance(recorded, Mapping) and isinstance(recomputed, Mapping):
        for key in sorted({*recorded, *recomputed}, key=_rank):
            yield from _leaves(recorded.get(key), recomputed.get(key), (*place, key))
    elif isinstance(recorded, list) and isinstance(recomputed, list) and len(recorded) == len(recomputed):
        for index, (old, new) in enumerate(zip(recorded, recomputed, strict=True)):
            yield from _leaves(old, new, (*place, str(index)))
    elif recorded != recomputed:
        yield place, recorded, recomputed


def _rank(key: str) -> tuple[int, str]:
    return (_FIRST.index(key) if key in _FIRST else len(_FIRST), key)


def _name(place: tuple[str, ...], recorded: Mapping[str, Json]) -> str:
    head, *rest = place
    if head == "iterates" and rest:
        return f"{_joined(rest[1:])} of iterate {rest[0]}"
    if head == "iterate" and rest:
        iterate = recorded.get("iterate")
        return f"{_joined(rest)} of iterate {iterate.get('k') if isinstance(iterate, Mapping) else '?'}"
    return _joined(place)


def _joined(place: Sequence[str]) -> str:
    return ".".join(part for part in place if part != "account")


def _text(leaf: Json) -> str:
    if leaf is None:
        return "nothing"
    return leaf if isinstance(leaf, str) else json.dumps(leaf)


def _places(recorded: Json, recomputed: Json, arithmetic: Arithmetic) -> float | None:
    """The distance of two numbers in units in the last place of the first; None when they are not two numbers."""
    if not isinstance(recorded, str) or not isinstance(recomputed, str):
        return None
    try:
        old, new = arithmetic.decode(recorded), arithmetic.decode(recomputed)
        unit = arithmetic.spacing(old)
        if arithmetic.kind.startswith(
            "binary"
        ):  # exactly in binary64, where nothing here can overflow but the quotient
            old, new, unit = float(old), float(new), float(unit)
        places = abs(float((new - old) / unit))
    except (ValueError, ArithmeticError):
        return None
    return places if math.isfinite(places) else None
