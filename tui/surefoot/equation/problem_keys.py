"""The keys of a problem file: one table of what may stand where, read by the reader and the writer alike."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import TypeAlias

from surefoot.equation.problem_values import (
    COUNT,
    FLAG,
    NUMBER,
    NUMBERS,
    PAIR,
    PREFERENCE,
    SETTING,
    TEXT,
    TEXTS,
    Leaf,
    choice,
    list_of,
)

FORMAT = 1


@dataclass(frozen=True, slots=True)
class Table:
    """A table with known keys."""

    keys: Mapping[str, Node]
    required: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Names:
    """A table whose keys are names of one's own, each with the same kind of value."""

    item: Node


@dataclass(frozen=True, slots=True)
class Either:
    """A number alone, which stands for the key `value` of the table, or the table."""

    table: Table


@dataclass(frozen=True, slots=True)
class Tables:
    """An array of tables: `[[correlation]]`."""

    table: Table


Node: TypeAlias = Leaf | Table | Names | Either | Tables


INPUT = Table(
    {
        "value": NUMBER,
        "unit": TEXT,
        "low": NUMBER,
        "high": NUMBER,
        "uncertainty": NUMBER,
        "half_width": NUMBER,
        "interval": PAIR,
        "distribution": choice("normal", "rectangular", "triangular", "t"),
        "dof": NUMBER,
        "source": TEXT,
        "from": TEXT,
        "column": TEXT,
        "row": COUNT,
    }
)
JOB = Table({"reference": TEXT, "revision": TEXT, "purpose": TEXT, "assumptions": TEXTS})
CORRELATION = Table({"between": list_of(TEXT, "two names", 2), "r": NUMBER}, required=("between", "r"))
ARITHMETIC = Table({"kind": TEXT, "integer_power": choice("pow", "multiply"), "fused": FLAG})
CONTROL = Table(
    {
        "damping": NUMBER,
        "step_limit": NUMBER,
        "relative_step_limit": NUMBER,
        "factor_limit": NUMBER,
        "first_step_limit": NUMBER,
        "edge_fraction": NUMBER,
        "bounds": PAIR,
        "at_bound": TEXT,
        "leave": TEXT,
        "derivative_every": COUNT,
        "order": TEXTS,
    }
)
STOP = Table(
    {
        "x_absolute": NUMBER,
        "x_relative": NUMBER,
        "relative_to": TEXT,
        "residual": NUMBER,
        "exact_zero": FLAG,
        "combine": TEXT,
        "min_steps": COUNT,
        "before_step": FLAG,
        "step_tested": TEXT,
        "test": TEXT,
        "cap_is_success": FLAG,
    }
)
PLAN = Table(
    {
        "method": TEXT,
        "start": NUMBERS,
        "max_steps": COUNT,
        "settings": Names(SETTING),
        "memory": Names(Table({"first": NUMBER, "update": TEXT}, required=("first", "update"))),
        "control": CONTROL,
        "stop": STOP,
    }
)
FILE = Table(
    {
        "format": COUNT,
        "title": TEXT,
        "unknown": TEXT,
        "unit": TEXT,
        "range": PAIR,
        "needed": NUMBER,
        "admissible": TEXTS,
        "prefer": PREFERENCE,
        "equation": TEXT,
        "derivative": TEXT,
        "note": TEXT,
        "job": JOB,
        "where": Names(TEXT),
        "inputs": Names(Either(INPUT)),
        "correlation": Tables(CORRELATION),
        "tables": Names(Table({"x": NUMBERS, "y": NUMBERS, "file": TEXT, "kind": choice("linear", "monotone-cubic")})),
        "program": Table(
            {"command": TEXTS, "protocol": choice("line", "once"), "timeout_s": NUMBER}, required=("command",)
        ),
        "arithmetic": ARITHMETIC,
        "plan": PLAN,
    },
    required=("unknown", "equation"),
)


def tables_with(key: str, node: Node = FILE, path: tuple[str, ...] = ()) -> Iterator[tuple[str, ...]]:
    """The tables that know a key, by their path; `*` stands for a name of one's own."""
    if isinstance(node, Either | Tables):
        node = node.table
    if isinstance(node, Names):
        yield from tables_with(key, node.item, (*path, "*"))
    elif isinstance(node, Table):
        if key in node.keys:
            yield path
        for name, inner in node.keys.items():
            yield from tables_with(key, inner, (*path, name))


@dataclass(frozen=True, slots=True)
class Later:
    """A key that is known and not read by this version.

    Attributes:
        path: where it stands; `*` for a name of one's own.
        says: one line for the person.
        accepted: the one value that may stand there nevertheless.
    """

    path: tuple[str, ...]
    says: str
    accepted: object = None


_SNAPSHOT = "values from another file are not read by this version; write the number as value"
LATER = (
    Later(("program",), "outside programs are not run by this version; state an equation"),
    Later(("tables",), "tables are not read by this version; state the relation as an expression or piecewise"),
    Later(("inputs", "*", "from"), _SNAPSHOT),
    Later(("inputs", "*", "column"), _SNAPSHOT),
    Later(("inputs", "*", "row"), _SNAPSHOT),
    Later(("arithmetic", "integer_power"), 'only "pow" is available in this version', accepted="pow"),
    Later(("arithmetic", "fused"), "only false is available in this version", accepted=False),
)
UNIT_IN_VALUE = "a value with a unit of its own is not converted by this version; write the number alone"
