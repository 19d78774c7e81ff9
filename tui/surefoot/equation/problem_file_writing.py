"""A problem as the text of a problem file, laid out for reading: what `read_problem_file` reads back equal."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from dataclasses import fields
from typing import Any

from surefoot.equation.problem import Problem
from surefoot.equation.problem_keys import FILE, FORMAT, Either, Names, Node, Table, Tables
from surefoot.equation.problem_values import TEXT, Leaf, escaped, quoted

_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")


def problem_file_text(
    problem: Problem, plan_table: Mapping[str, object] | None = None, arithmetic: str = "binary64"
) -> str:
    """The text of a problem file.

    Args:
        plan_table: the table `[plan]`, as `read_problem_file` gives it; its key `arithmetic`, which the plan of a
            record has, goes before `arithmetic`.
        arithmetic: `arithmetic.kind`.
    """
    content: dict[str, Any] = {"format": FORMAT} | _stated(problem)
    content["job"] = _stated(problem.job)
    content["where"] = [(line.name, line.text) for line in problem.where]
    content["inputs"] = [(given.name, _stated(given)) for given in problem.inputs]
    content["correlation"] = [_stated(each) for each in problem.correlation]
    plan = dict(plan_table or {})
    kind = plan.pop("arithmetic", arithmetic)
    if kind != "binary64":
        content["arithmetic"] = {"kind": kind}
    if plan_table is not None:
        content["plan"] = plan
    return "\n".join(_sections("", FILE, content))


def _stated(record: Any) -> dict[str, Any]:
    """The fields of a dataclass that are not empty, and the value of an input in any case."""
    values = {field.name: getattr(record, field.name) for field in fields(record)}
    needed = ("unknown", "equation", "value", "r")
    return {name: value for name, value in values.items() if name in needed or value not in ("", None, ())}


def _sections(name: str, table: Table, content: Mapping[str, Any]) -> Iterator[str]:
    """A table, then the tables in it, each under its own header; what is empty is left out, but for `[plan]`."""
    present = {key: node for key, node in table.keys.items() if key in content}
    lines = [(key, _written(node, content[key])) for key, node in present.items() if isinstance(node, Leaf)]
    if lines or name == "plan":
        yield _section(name, lines)
    for key, node in present.items():
        inner = f"{name}.{key}" if name else key
        if isinstance(node, Table):
            yield from _sections(inner, node, content[key])
        elif isinstance(node, Tables):
            for each in content[key]:
                yield _section(inner, list(_leaves(node.table, each)), array=True)
        elif isinstance(node, Names) and content[key]:
            own = content[key].items() if isinstance(content[key], Mapping) else content[key]
            yield _section(inner, [(each, _written(node.item, value)) for each, value in own])


def _section(name: str, lines: list[tuple[str, str]], *, array: bool = False) -> str:
    """A table with its equals signs below each other; the head of the file has neither header nor columns."""
    keys = [key if _BARE_KEY.fullmatch(key) else quoted(key) for key, _ in lines]
    width = max(map(len, keys), default=0) if name else 0
    header = f"[[{name}]]\n" if array else f"[{name}]\n" if name else ""
    return header + "".join(f"{key:<{width}} = {value}\n" for key, (_, value) in zip(keys, lines, strict=True))


def _written(node: Node, value: Any) -> str:
    """A value on the right of its equals sign."""
    if node is TEXT and "\n" in value:
        return f'"""\n{escaped(value, keep=chr(10))}"""'
    if isinstance(node, Leaf):
        return node.write(value)
    if isinstance(node, Either) and value.keys() <= {"name", "value"}:
        return dict(_leaves(node.table, value))["value"]
    inner = node.table if isinstance(node, Either | Tables) else node
    parts = _leaves(inner, value) if isinstance(inner, Table) else ()
    return f"{{ {', '.join(f'{key} = {text}' for key, text in parts)} }}"


def _leaves(table: Table, content: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """The keys of a table with their values on one line, in the order of the schema."""
    for key, node in table.keys.items():
        if key in content and isinstance(node, Leaf):
            yield key, node.write(content[key])
