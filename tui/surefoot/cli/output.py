"""What the command line prints: the JSON envelope, numbers in it, and aligned tables."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping, Sequence
from typing import TypeAlias

from surefoot import __version__
from surefoot.cli import streams
from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.results import Failure, Real

SCHEMA = 1
"""Version of the JSON objects; `docs/output.schema.json` describes them."""

Json: TypeAlias = "str | int | float | bool | Sequence[Json] | Mapping[str, Json] | None"


def say_object(members: Mapping[str, Json]) -> None:
    """Print one JSON object with the program's version; ASCII, so that no locale can spoil it."""
    whole = {"surefoot": __version__, "schema": SCHEMA, **members}
    streams.say(json.dumps(whole, allow_nan=False) + "\n")


def json_number(x: Real | Failure | None, arithmetic: Arithmetic) -> float | str | None:
    """A finite binary64 as a number; any other number as the record's text; a failure as its one line."""
    if x is None or isinstance(x, Failure):
        return None if x is None else str(x)
    if arithmetic.kind == "binary64" and math.isfinite(x):
        return float(x)
    return arithmetic.encode(x)


def aligned(rows: Sequence[Sequence[str]], *, right: frozenset[int] = frozenset()) -> list[str]:
    """Rows as lines with aligned columns, two blanks apart; the columns in `right` end at one place."""
    widths = [max(len(row[column]) for row in rows) for column in range(len(rows[0]))]
    return [
        "  ".join(
            cell.rjust(width) if column in right else cell.ljust(width)
            for column, (cell, width) in enumerate(zip(row, widths, strict=True))
        ).rstrip()
        for row in rows
    ]
