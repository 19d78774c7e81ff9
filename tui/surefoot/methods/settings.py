"""From the texts of a plan to the numbers and choices that a rule works with, in the run's arithmetic."""

from __future__ import annotations

import math
from collections.abc import Mapping
from types import MappingProxyType
from typing import Any

from surefoot.equation.arithmetic import Arithmetic, OperationFailed
from surefoot.equation.functions import nearest
from surefoot.equation.results import Real
from surefoot.equation.tokens import is_literal
from surefoot.errors import PlanError
from surefoot.methods.contract import Method, Setting
from surefoot.methods.plan import Plan

DERIVATIVE_EVERY = "derivative_every"
"""Key under which a rule finds the count of `[plan.control]` among its settings, as a plain int."""


def read_number(text: str, arithmetic: Arithmetic, key: str) -> Real:
    """The number that a literal, or a number as the record writes it (`f32:0.1`), stands for.

    Raises:
        PlanError: the text is no number, or none of this arithmetic.
    """
    try:
        number = arithmetic.literal(text, False) if is_literal(text) else arithmetic.decode(text)
    except (ValueError, OperationFailed) as error:
        raise PlanError(f"{text!r} is not a number of {arithmetic.kind}", key=key) from error
    if number != number or abs(number) == math.inf:
        raise PlanError(f"{text!r} is not finite", key=key)
    return number


def read_settings(method: Method, plan: Plan, arithmetic: Arithmetic) -> Mapping[str, Any]:
    """The method's settings by key: numbers of the arithmetic, texts of choices and expressions, flags as bool.

    The count of `control.derivative_every` is among them under `DERIVATIVE_EVERY`.

    Raises:
        PlanError: a setting that the method does not take, lacks, or cannot use.
    """
    given = dict(plan.settings)
    known = {setting.key: setting for setting in method.settings}
    for key in given:
        if key not in known:
            raise PlanError(_not_taken(method, key, known), key=f"plan.settings.{key}")
    values: dict[str, Any] = {DERIVATIVE_EVERY: plan.control.derivative_every}
    for key, setting in known.items():
        text = given.get(key, setting.default)
        if text is None:
            raise PlanError(f"{method.traits.code} needs it: {setting.meaning}", key=f"plan.settings.{key}")
        values[key] = _read(setting, text, arithmetic)
    return MappingProxyType(values)


def _not_taken(method: Method, key: str, known: Mapping[str, Setting]) -> str:
    meant = nearest(key, known)
    if meant:
        return f"{method.traits.code} takes no {key}; nearest: {meant}"
    taken = f"it takes {', '.join(known)}" if known else "it takes no settings"
    return f"{method.traits.code} takes no {key}; {taken}"


def _read(setting: Setting, text: str, arithmetic: Arithmetic) -> Any:
    key = f"plan.settings.{setting.key}"
    if setting.kind == "real":
        number = read_number(text, arithmetic, key)
        if setting.allowed and not _lies_in(number, setting.allowed):
            raise PlanError(f"{text} lies outside {setting.allowed}", key=key)
        return number
    if setting.kind == "flag":
        if text not in ("true", "false"):
            raise PlanError(f"{text!r} is neither true nor false", key=key)
        return text == "true"
    if setting.kind == "choice" and text not in setting.choices:
        meant = nearest(text, setting.choices)
        offered = f"nearest: {meant}" if meant else f"it can be {', '.join(setting.choices)}"
        raise PlanError(f"there is no {text!r}; {offered}", key=key)
    return text


def _lies_in(number: Real, interval: str) -> bool:
    """Whether a number lies in an interval as `[0, inf)`: a square bracket takes its end in, a round one does not."""
    low, high = (float(end) for end in interval[1:-1].split(","))
    above = number >= low if interval[0] == "[" else number > low
    below = number <= high if interval[-1] == "]" else number < high
    return bool(above and below)
