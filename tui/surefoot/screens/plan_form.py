"""A plan while it is being made: every key of it as a row of text. Pure; the method room draws and edits it."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
from typing import Any

from surefoot.methods.plan import Control, Plan, Stop
from surefoot.methods.plan_table import plan_from_table, plan_to_table
from surefoot.methods.table import method_of

_FLAGS = ("true", "false")


@dataclass(frozen=True, slots=True)
class PlanRow:
    """One key of the plan.

    Attributes:
        key: `start 1`, `settings.h`, `control.damping`, `stop.residual`, `max_steps`, `arithmetic`.
        value: text as typed, empty when the key is not set.
        default: what holds while it is not set.
        meaning: one line.
        choices: what may be chosen; empty when a text is typed.
    """

    key: str
    value: str
    default: str
    meaning: str
    choices: tuple[str, ...] = ()


# key of the row -> (default, meaning, choices). Flags are choices between true and false.
_STOP: Mapping[str, tuple[str, str, tuple[str, ...]]] = {
    "x_absolute": ("", "stop when |dx| <= this", ()),
    "x_relative": ("", "stop when |dx| <= this times |x|", ()),
    "relative_to": ("new", "which x the relative test uses", ("new", "old", "larger", "start")),
    "residual": ("", "stop when |f| <= this", ()),
    "combine": ("any", "one test is enough, all must hold, or the sum of both bounds", ("any", "all", "sum")),
    "exact_zero": ("true", "stop when f is exactly zero", _FLAGS),
    "min_steps": ("0", "no test before so many steps", ()),
    "before_step": ("false", "test before a step, at the iterate in hand", _FLAGS),
    "step_tested": ("taken", "the step as taken, or raw: as the rule proposed it", ("taken", "raw")),
    "test": ("", "own condition instead, over x_k f_k dx k ...: abs(dx) < 1e-6", ()),
    "cap_is_success": ("false", "reaching max_steps counts as converged, as some host codes have it", _FLAGS),
}
_CONTROL: Mapping[str, tuple[str, str, tuple[str, ...]]] = {
    "damping": ("", "factor on every step", ()),
    "first_step_limit": ("", "|dx| of the first step at most this", ()),
    "step_limit": ("", "|dx| at most this", ()),
    "relative_step_limit": ("", "|dx| at most this times |x|", ()),
    "factor_limit": ("", "x within [x/r, x*r] of the iterate before", ()),
    "edge_fraction": ("", "at most this part of the way to a bound", ()),
    "bounds": ("", "lo, hi that the host code clamps to", ()),
    "at_bound": ("clip", "what happens at a bound", ("clip", "reject", "halve", "reflect")),
    "leave": ("allow", "stop when an iterate leaves the working range, or allow it", ("allow", "stop")),
    "derivative_every": ("1", "refresh the derivative every so many steps", ()),
    "order": ("", "stages in the order of the host code, separated by commas", ()),
}
_INTEGERS = frozenset({"min_steps", "derivative_every", "max_steps"})
_LISTS = frozenset({"bounds", "order"})
ARITHMETICS = ("binary64", "binary32", "multiprecision:50")


@dataclass(frozen=True, slots=True)
class PlanForm:
    """The plan as rows of text.

    Attributes:
        method: code of the method.
        values: key of a row -> text; keys that are not there hold their default.
    """

    method: str
    values: Mapping[str, str] = field(default_factory=dict)

    def rows(self) -> tuple[PlanRow, ...]:
        """All rows that this method has, in the order they are read."""
        return tuple(self._rows())

    def _rows(self) -> Iterator[PlanRow]:
        method = method_of(self.method)
        for number in range(1, method.traits.starts + 1):
            meaning = "end of the bracket" if method.traits.bracket else "starting value"
            yield self._row(f"start {number}", "", meaning)
        for setting in method.settings:
            choices = _FLAGS if setting.kind == "flag" else setting.choices
            yield self._row(f"settings.{setting.key}", setting.default or "", setting.meaning, choices)
        for key in ("x_absolute", "x_relative", "relative_to", "residual", "combine"):
            yield self._row(f"stop.{key}", *_STOP[key])
        yield self._row("max_steps", "50", "the run ends after so many steps")
        for key, (default, meaning, choices) in _CONTROL.items():
            if key == "derivative_every" and not method.traits.derivatives:
                continue
            yield self._row(f"control.{key}", default, meaning, choices)
        for key in ("exact_zero", "min_steps", "before_step", "step_tested", "test", "cap_is_success"):
            yield self._row(f"stop.{key}", *_STOP[key])
        yield self._row("arithmetic", "binary64", "binary64, binary32 or multiprecision:digits")

    def _row(self, key: str, default: str, meaning: str, choices: tuple[str, ...] = ()) -> PlanRow:
        return PlanRow(key, self.values.get(key, ""), default, meaning, choices)

    def with_method(self, code: str) -> PlanForm:
        """The same plan with another method; starts, tests and limits stay."""
        return replace(self, method=code)

    def with_value(self, key: str, text: str) -> PlanForm:
        """The plan with one row changed; an empty text puts the row back to its default."""
        values = {name: value for name, value in self.values.items() if name != key}
        if text.strip():
            values[key] = text.strip()
        return replace(self, values=values)

    def table(self) -> dict[str, Any]:
        """The plan as the tables of a problem file; only rows that the method has take part."""
        table: dict[str, Any] = {"method": self.method, "start": [], "settings": {}, "control": {}, "stop": {}}
        for row in self.rows():
            if not row.value:
                continue
            part, _, key = row.key.rpartition(".")
            if row.key.startswith("start "):
                table["start"].append(row.value)
            elif part:
                table[part][key] = _typed(key, row)
            elif row.key == "max_steps":
                table["max_steps"] = _typed(row.key, row)
        return {key: value for key, value in table.items() if value not in ({}, [])}

    def plan(self) -> Plan:
        """The plan. Raises PlanError naming the key that is wrong."""
        return plan_from_table(self.table(), arithmetic=self.values.get("arithmetic", "binary64"))


def _typed(key: str, row: PlanRow) -> object:
    if row.choices == _FLAGS:
        return row.value == "true"
    if key in _INTEGERS and row.value.isascii() and row.value.isdigit():
        return int(row.value)
    if key in _LISTS:
        return [part.strip() for part in row.value.split(",")]
    return row.value


def form_of_table(table: Mapping[str, Any], arithmetic: str) -> PlanForm:
    """The form for a [plan] table as a problem file holds it. Raises PlanError when the method is not known."""
    values: dict[str, str] = {}
    starts = table.get("start", [])
    for number, start in enumerate(starts if isinstance(starts, list | tuple) else [starts], 1):
        values[f"start {number}"] = str(start)
    for part in ("settings", "control", "stop"):
        for key, value in dict(table.get(part, {})).items():
            values[f"{part}.{key}"] = _shown(value)
    if "max_steps" in table:
        values["max_steps"] = str(table["max_steps"])
    if arithmetic != "binary64":
        values["arithmetic"] = arithmetic
    code = str(table.get("method", "newton-raphson"))
    method_of(code)
    return PlanForm(code, values)


def form_of_plan(plan: Plan) -> PlanForm:
    """The form that shows a plan; keys that hold their default stay empty."""
    table = dict(plan_to_table(plan))
    form = form_of_table(table, plan.arithmetic)
    defaults = {f"stop.{key}": _shown(getattr(Stop(), key)) for key in _STOP}
    defaults["max_steps"] = str(Plan.__dataclass_fields__["max_steps"].default)
    defaults |= {f"control.{key}": _shown(getattr(Control(), key)) for key in _CONTROL}
    kept = {key: value for key, value in form.values.items() if defaults.get(key) != value}
    return replace(form, values=kept)


def _shown(value: object) -> str:
    if value is None:
        return ""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, list | tuple):
        return ", ".join(str(part) for part in value)
    return str(value)
