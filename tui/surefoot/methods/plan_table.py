"""A plan as the `[plan]` table of a problem file, both ways. Numbers keep their text; unknown keys are refused.

Whether the plan can run is a question of its own: `surefoot.methods.plan_check`.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import fields
from typing import Any, NoReturn, TypeAlias

from surefoot.equation.functions import nearest
from surefoot.errors import PlanError
from surefoot.methods.plan import Control, Plan, Stop

_Read: TypeAlias = Callable[[Any, str], Any]

_PLAN_KEYS = ("method", "start", "max_steps", "settings", "memory", "control", "stop", "arithmetic")


def plan_from_table(table: Mapping[str, Any], arithmetic: str = "binary64") -> Plan:
    """The plan that a `[plan]` table states.

    Args:
        table: numbers as text, int or float; a float is taken by its shortest text.
        arithmetic: `arithmetic.kind` of the file; the key `arithmetic` of the table, which `plan_to_table` writes for
            the record, goes before it.

    Raises:
        PlanError: an unknown key (the nearest is named), a value of the wrong type, a choice that there is not.
    """
    _refuse_unknown(table, _PLAN_KEYS, "plan")
    if "memory" in table:
        raise PlanError("rules of one's own are not in this version", key="plan.memory")
    for key in ("method", "start"):
        if key not in table:
            raise PlanError("missing", key=f"plan.{key}")
    settings = _read_table(table.get("settings", {}), "plan.settings")
    return Plan(
        method=_read_text(table["method"], "plan.method"),
        start=_read_starts(table["start"], "plan.start"),
        max_steps=_read_count(table.get("max_steps", 50), "plan.max_steps"),
        settings=tuple((key, _read_setting(value, f"plan.settings.{key}")) for key, value in settings.items()),
        control=Control(**_read_keys(table.get("control", {}), _CONTROL, "plan.control")),
        stop=Stop(**_read_keys(table.get("stop", {}), _STOP, "plan.stop")),
        arithmetic=_read_text(table.get("arithmetic", arithmetic), "plan.arithmetic"),
    )


def plan_to_table(plan: Plan) -> dict[str, object]:
    """The table that `plan_from_table` turns back into an equal plan: texts, whole numbers, flags and lists.

    What stands at its default is left out.
    """
    table: dict[str, object] = {"method": plan.method, "start": list(plan.start), "max_steps": plan.max_steps}
    if plan.settings:
        table["settings"] = dict(plan.settings)
    for key, part, default in (("control", plan.control, Control()), ("stop", plan.stop, Stop())):
        changed = _changed(part, default)
        if changed:
            table[key] = changed
    if plan.arithmetic != "binary64":
        table["arithmetic"] = plan.arithmetic
    return table


def _changed(part: Control | Stop, default: Control | Stop) -> dict[str, object]:
    values = {field.name: getattr(part, field.name) for field in fields(part)}
    return {
        key: list(value) if isinstance(value, tuple) else value
        for key, value in values.items()
        if value != getattr(default, key)
    }


def _refuse_unknown(table: Mapping[str, Any], known: tuple[str, ...], place: str) -> None:
    for key in table:
        if key not in known:
            meant = nearest(key, known)
            offered = f"nearest: {meant}" if meant else f"known are {', '.join(known)}"
            raise PlanError(f"unknown key; {offered}", key=f"{place}.{key}")


def _read_keys(content: Any, readers: Mapping[str, _Read], place: str) -> dict[str, Any]:
    table = _read_table(content, place)
    _refuse_unknown(table, tuple(readers), place)
    return {key: readers[key](value, f"{place}.{key}") for key, value in table.items()}


def _read_table(content: Any, place: str) -> Mapping[str, Any]:
    if not isinstance(content, Mapping):
        _refuse("a table", content, place)
    return content


def _read_text(content: Any, place: str) -> str:
    if not isinstance(content, str):
        _refuse("a text", content, place)
    return str(content)


def _read_literal(content: Any, place: str) -> str:
    """A number as text; the underscores that TOML allows between digits are dropped."""
    if isinstance(content, bool) or not isinstance(content, str | int | float):
        _refuse("a number", content, place)
    text = repr(content) if isinstance(content, float) else str(content)
    return text.strip().replace("_", "")


def _read_flag(content: Any, place: str) -> bool:
    if not isinstance(content, bool):
        _refuse("true or false", content, place)
    return content


def _read_count(content: Any, place: str) -> int:
    if isinstance(content, bool) or not isinstance(content, int):
        _refuse("a whole number", content, place)
    return int(content)


def _read_starts(content: Any, place: str) -> tuple[str, ...]:
    items = content if isinstance(content, list | tuple) else [content]
    return tuple(_read_literal(item, place) for item in items)


def _read_bounds(content: Any, place: str) -> tuple[str, str]:
    if not isinstance(content, list | tuple) or len(content) != 2:
        _refuse("a list of two numbers", content, place)
    return _read_literal(content[0], place), _read_literal(content[1], place)


def _read_order(content: Any, place: str) -> tuple[str, ...]:
    if not isinstance(content, list | tuple):
        _refuse("a list of stages", content, place)
    return tuple(_read_text(item, place) for item in content)


def _read_setting(content: Any, place: str) -> str:
    if isinstance(content, bool):
        return "true" if content else "false"
    return str(content) if isinstance(content, str) else _read_literal(content, place)


def _choice(*choices: str) -> _Read:
    def read(content: Any, place: str) -> str:
        text = _read_text(content, place)
        if text not in choices:
            meant = nearest(text, choices)
            offered = f"nearest: {meant}" if meant else f"it can be {', '.join(choices)}"
            raise PlanError(f"there is no {text!r}; {offered}", key=place)
        return text

    return read


def _refuse(wanted: str, content: Any, place: str) -> NoReturn:
    raise PlanError(f"{wanted} is wanted here, not {content!r}", key=place)


_CONTROL: Mapping[str, _Read] = {
    "damping": _read_literal,
    "step_limit": _read_literal,
    "relative_step_limit": _read_literal,
    "factor_limit": _read_literal,
    "first_step_limit": _read_literal,
    "edge_fraction": _read_literal,
    "bounds": _read_bounds,
    "at_bound": _choice("clip", "reject", "halve", "reflect"),
    "leave": _choice("allow", "stop"),
    "derivative_every": _read_count,
    "order": _read_order,
}

_STOP: Mapping[str, _Read] = {
    "x_absolute": _read_literal,
    "x_relative": _read_literal,
    "relative_to": _choice("new", "old", "larger", "start"),
    "residual": _read_literal,
    "exact_zero": _read_flag,
    "combine": _choice("any", "all", "sum"),
    "min_steps": _read_count,
    "before_step": _read_flag,
    "step_tested": _choice("taken", "raw"),
    "test": _read_text,
    "cap_is_success": _read_flag,
}
