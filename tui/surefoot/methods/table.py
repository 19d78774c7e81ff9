"""The table of methods: one row each. Screens, documents, plans and tests read it; nothing else names the methods."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

from surefoot.equation.functions import nearest
from surefoot.errors import PlanError
from surefoot.methods.anderson_bjorck import AndersonBjorck
from surefoot.methods.bisection import Bisection
from surefoot.methods.brent_dekker import BrentDekker
from surefoot.methods.chandrupatla import Chandrupatla
from surefoot.methods.contract import Method, Traits
from surefoot.methods.finite_difference_newton import FiniteDifferenceNewton
from surefoot.methods.fixed_point import FixedPoint
from surefoot.methods.illinois import Illinois
from surefoot.methods.itp import Itp
from surefoot.methods.newton_raphson import NewtonRaphson
from surefoot.methods.regula_falsi import RegulaFalsi
from surefoot.methods.ridders import Ridders
from surefoot.methods.safeguarded_newton import SafeguardedNewton
from surefoot.methods.secant import Secant
from surefoot.methods.toms_748 import Toms748

_ROWS: tuple[Method, ...] = (
    Bisection(),
    RegulaFalsi(),
    Illinois(),
    AndersonBjorck(),
    Ridders(),
    BrentDekker(),
    Chandrupatla(),
    Toms748(),
    Itp(),
    SafeguardedNewton(),
    Secant(),
    FiniteDifferenceNewton(),
    FixedPoint(),
    NewtonRaphson(),
)

METHODS: Mapping[str, Method] = MappingProxyType({method.traits.code: method for method in _ROWS})

PLANNED = frozenset(
    [
        "steffensen",
        "muller",
        "inverse-quadratic",
        "aitken",
        "wegstein",
        "multiplicity-newton",
        "ratio-newton",
        "backtracking-newton",
        "natural-level-newton",
        "halley",
        "householder-3",
        "ostrowski",
        "own-rule",
    ]
)
"""Codes of the problem file that this version reads but cannot run."""


def method_of(code: str) -> Method:
    """The method of a code of the problem file.

    Raises:
        PlanError: there is no such method, or it is not in this version; the nearest code is named.
    """
    if code in METHODS:
        return METHODS[code]
    if code in PLANNED:
        raise PlanError(f"{code} is not in this version; it has {', '.join(METHODS)}", key="plan.method")
    meant = nearest(code, METHODS.keys() | PLANNED)
    offered = f"nearest: {meant}" if meant else f"it can be {', '.join(METHODS)}"
    raise PlanError(f"there is no method {code!r}; {offered}", key="plan.method")


@dataclass(frozen=True, slots=True)
class TraitRow:
    """The traits of a method in words, for a table on a screen or in a document."""

    code: str
    title: str
    needs: str
    evaluations: str
    order: str
    source: str
    revision: str
    note: str


def trait_rows() -> tuple[TraitRow, ...]:
    """One row a method, in the order of the table."""
    return tuple(_row(method.traits) for method in METHODS.values())


def _row(traits: Traits) -> TraitRow:
    return TraitRow(
        traits.code,
        traits.title,
        _needs(traits),
        ", ".join(f"{count} {what}" for count, what in zip(traits.evaluations, ("f", "f'", "g"), strict=True) if count),
        "-" if traits.order is None else f"{traits.order:.4g}",
        traits.source,
        str(traits.revision),
        traits.cost_note,
    )


def _needs(traits: Traits) -> str:
    starts = "a bracket" if traits.bracket else "1 start" if traits.starts == 1 else f"{traits.starts} starts"
    extras = ["f'", "f''", "f'''"][: traits.derivatives] + (["g"] if traits.evaluations[2] else [])
    return ", ".join([starts, *extras])
