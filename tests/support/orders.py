"""Errors of runs in 200 digits against roots in 260, for the checks of convergence orders.

Roots are made by mpmath from the text of the equation, over its literals and inputs as the decimals that they are.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from functools import cache
from typing import Any

import mpmath
import pytest

from support.plain import MP
from support.published import PUBLISHED, problem, residual
from support.runs import Walk, run
from surefoot.methods.plan import Plan, Stop

SMOOTH = (
    "hyd-colebrook-lib", "heat-lamp-cure", "orb-kepler-curtis", "che-rk-butane", "che-bubble", "mech-catenary-bj",
    "hyd-chow-normal", "elec-diode", "vib-cantilever", "fin-ytm-fabozzi", "sf-omega", "gas-area-2",
)  # fmt: skip
every_smooth = pytest.mark.parametrize("code", SMOOTH)


def precisely(method: str, code: str, *starts: str, steps: int, **settings: str) -> Walk:
    plan = Plan(method, starts, steps, tuple(settings.items()), stop=Stop(), arithmetic="multiprecision:200")
    return run(plan, problem(code), limit=steps)


@cache
def decimal_residual(code: str) -> Callable[[Any], Any]:
    """f over literals and inputs as the decimals that they are, as multiprecision takes them."""
    with MP.workdps(260):
        inputs = {given.name: MP.mpf(given.value) for given in problem(code).inputs}
        return replace(residual(code), inputs=inputs).decimal()


@cache
def local(code: str) -> tuple[Any, Any, Any]:
    """The first root, and f' and f'' there."""
    f = decimal_residual(code)
    with MP.workdps(260):
        root = MP.findroot(f, MP.mpf(PUBLISHED[code]["roots"][0]["value"]), tol=MP.mpf(10) ** -500, maxsteps=60)
        return root, MP.diff(f, root), MP.diff(f, root, 2)


def errors(walk: Walk, code: str, below: str) -> list[Any]:
    """|x_k - root| where it is small enough for theory to speak, and large enough for 200 digits to show."""
    root = local(code)[0]
    found = [abs(MP.mpf(x) - root) for x in walk.x]
    return [error for error in found if MP.mpf(10) ** -190 * abs(root) < error < MP.mpf(below) * abs(root)]


def beside(code: str, factor: str) -> str:
    """A start beside the root, in 30 digits."""
    return str(mpmath.nstr(local(code)[0] * MP.mpf(factor), 30))
