"""A problem as content of the record: texts, lists and objects of these, never a number.

Fields at their default are left out, so a record stays short and an old one can be read when a field is added.
What is written here is closed to anything unknown: `problem_from_content` refuses it and says where it stands.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import MISSING, dataclass, fields
from typing import Any, cast

from surefoot.equation.problem import Correlation, Definition, Derivative, Input, Job, Problem
from surefoot.errors import RecordError


def problem_to_content(problem: Problem) -> dict[str, object]:
    """The content that `problem_from_content` turns back into an equal problem."""
    return cast(dict[str, object], _PROBLEM.write(problem))


def problem_from_content(content: object) -> Problem:
    """The inverse of `problem_to_content`.

    Raises:
        RecordError: something is missing, unknown or of the wrong type; the message names the place.
    """
    return cast(Problem, _PROBLEM.read(content, "problem"))


def derivative_to_content(derivative: Derivative) -> dict[str, object]:
    """The content that `derivative_from_content` turns back into an equal derivative."""
    return cast(dict[str, object], _DERIVATIVE.write(derivative))


def derivative_from_content(content: object) -> Derivative:
    """The inverse of `derivative_to_content`. Raises RecordError as `problem_from_content` does."""
    return cast(Derivative, _DERIVATIVE.read(content, "derivative"))


@dataclass(frozen=True, slots=True)
class _Codec:
    """Writes a value as content, and reads it back; `place` names where the content stands."""

    write: Callable[[Any], object]
    read: Callable[[object, str], Any]


def _read_text(content: object, place: str) -> str:
    if not isinstance(content, str):
        raise RecordError(f"{place} must be a text")
    return content


def _read_order(content: object, place: str) -> int:
    if content not in ("1", "2", "3"):
        raise RecordError(f'{place} must be "1", "2" or "3"')
    return int(content)


def _list_of(item: _Codec, count: int | None = None) -> _Codec:
    """A tuple of items, of exactly `count` where that is given."""

    def read(content: object, place: str) -> tuple[Any, ...]:
        if not isinstance(content, list):
            raise RecordError(f"{place} must be a list")
        if count is not None and len(content) != count:
            raise RecordError(f"{place} must have {count} items, not {len(content)}")
        return tuple(item.read(each, f"{place}[{index}]") for index, each in enumerate(content))

    return _Codec(lambda values: [item.write(value) for value in values], read)


def _object_of(cls: type[Any], codecs: Mapping[str, _Codec]) -> _Codec:
    """A dataclass; `codecs` has one codec for each of its fields."""
    required = {field.name for field in fields(cls) if field.default is MISSING and field.default_factory is MISSING}
    defaults = {
        field.name: field.default_factory() if field.default_factory is not MISSING else field.default
        for field in fields(cls)
    }

    def write(value: Any) -> dict[str, object]:
        parts = {name: getattr(value, name) for name in codecs}
        return {name: codecs[name].write(part) for name, part in parts.items() if part != defaults[name]}

    def read(content: object, place: str) -> Any:
        if not isinstance(content, dict):
            raise RecordError(f"{place} must be an object")
        for name in content:
            if name not in codecs:
                raise RecordError(f"{place} has an unknown member {name!r}")
        for name in sorted(required - content.keys()):
            raise RecordError(f"{place} has no member {name!r}")
        return cls(**{name: codecs[name].read(part, f"{place}.{name}") for name, part in content.items()})

    return _Codec(write, read)


_TEXT = _Codec(lambda text: text, _read_text)
_TEXTS = _list_of(_TEXT)
_PAIR = _list_of(_TEXT, 2)
_DEFINITIONS = _list_of(_object_of(Definition, {"name": _TEXT, "text": _TEXT}))
_JOB = _object_of(Job, {"reference": _TEXT, "revision": _TEXT, "purpose": _TEXT, "assumptions": _TEXTS})
_CORRELATION = _object_of(Correlation, {"between": _PAIR, "r": _TEXT})
_INPUT = _object_of(
    Input,
    {
        "name": _TEXT,
        "value": _TEXT,
        "unit": _TEXT,
        "low": _TEXT,
        "high": _TEXT,
        "uncertainty": _TEXT,
        "half_width": _TEXT,
        "interval": _PAIR,
        "distribution": _TEXT,
        "dof": _TEXT,
        "source": _TEXT,
    },
)
_PROBLEM = _object_of(
    Problem,
    {
        "unknown": _TEXT,
        "equation": _TEXT,
        "title": _TEXT,
        "unit": _TEXT,
        "range": _PAIR,
        "needed": _TEXT,
        "admissible": _TEXTS,
        "prefer": _TEXT,
        "derivative": _TEXT,
        "note": _TEXT,
        "job": _JOB,
        "where": _DEFINITIONS,
        "inputs": _list_of(_INPUT),
        "correlation": _list_of(_CORRELATION),
    },
)
_DERIVATIVE = _object_of(
    Derivative, {"order": _Codec(str, _read_order), "where": _DEFINITIONS, "text": _TEXT, "gaps": _TEXTS}
)
