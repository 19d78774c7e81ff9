"""Problem files for tests: the published problems, and Colebrook-White with plans of every outcome."""

from __future__ import annotations

import json
import re
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal
from pathlib import Path
from typing import Any

from support.tree import ROOT

PROBLEMS = ROOT / "tests" / "published" / "problems"
PUBLISHED: Mapping[str, Mapping[str, Any]] = {
    row["id"]: row
    for row in json.loads((ROOT / "tests" / "published" / "data" / "published.json").read_text(encoding="utf-8"))
}

COLEBROOK = """\
format = 1
title = "Colebrook-White, Re = 1e5, eps/D = 1e-4"
unknown = "f"
range = [0.005, 0.1]
equation = "1/sqrt(f) = -2*log10(eps/(3.7*D) + 2.51/(Re*sqrt(f)))"

[inputs]
Re = 1e5
eps = { value = 1e-4, unit = "m" }
D = { value = 1.0, unit = "m" }
"""
"""C. F. Colebrook, J. Inst. Civ. Eng. 11 (1939) 133-156; the root is that of `hyd-colebrook-lib` as published."""

SECANT = """
[plan]
method = "secant"
start = [0.02, 0.03]

[plan.stop]
x_relative = 1e-12
"""

DIVERGING_SECANT = """
[plan]
method = "secant"
start = [0.1, 0.2]

[plan.stop]
x_relative = 1e-10
"""
"""From these starts the chord leads to a negative friction factor, where the square root has no value."""


def write(folder: Path, text: str, name: str = "colebrook.toml") -> str:
    """Save a problem file; its name."""
    (folder / name).write_text(text, encoding="utf-8")
    return name


@dataclass(frozen=True, slots=True)
class PublishedRoot:
    """A root as published.

    Attributes:
        value: 25 digits, from 70-digit arithmetic.
        printed: the figure in the source; None where it prints none, or prints one known to be wrong.
        quantum: one unit of its last printed digit, or the accuracy to which the source can be read.
        start: from which Newton-Raphson comes to it.
    """

    value: Decimal
    printed: Decimal | None
    quantum: Decimal
    start: str


def published_root(problem: str) -> PublishedRoot:
    """The root of a published problem to which its first good start leads."""
    row = PUBLISHED[problem]
    found = next(trial for trial in row["plain_newton_from_starts"] if trial["status"] == "converged")
    root = row["roots"][found["root_index"]]
    printed = Decimal(root["published"]) if root["tolerance"] and "DISAGREES" not in root["agreement"] else None
    quantum = re.search(r"(?:quantum|about) ([0-9.e+-]+[0-9])", root["tolerance"] or "")
    return PublishedRoot(Decimal(root["value"]), printed, Decimal(quantum[1] if quantum else "1e-28"), found["start"])
