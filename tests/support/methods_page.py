"""The reference of the methods, made from the table of methods. Run as a module, this writes docs/methods.md."""

from __future__ import annotations

import inspect
import sys

from support.tree import ROOT
from surefoot.methods.contract import Method, Setting
from surefoot.methods.table import METHODS, trait_rows

METHODS_PAGE = ROOT / "docs" / "methods.md"

_INTRODUCTION = """\
# Methods

Every method of this version: what it needs, what a step of it costs, the order in which it converges at a simple root,
its settings, and its rule as the code has it. The codes are those of `plan.method` in a problem file; settings go into
`[plan.settings]`. "g" is the iteration function of a fixed-point plan. An order of "-" means that there is none in the
usual sense; the note says what there is. The revision goes up when the bits of a step may change.

`PYTHONPATH=tests .venv/bin/python -m support.methods_page` writes this page.

"""


def methods_page() -> str:
    """The whole page."""
    return _INTRODUCTION + _overview() + "".join(_section(method) for method in METHODS.values())


def _overview() -> str:
    rows = ["| method | needs | a step evaluates | order | revision |", "| --- | --- | --- | --- | --- |"]
    rows += [
        f"| [`{row.code}`](#{row.code}) | {row.needs} | {row.evaluations} | {row.order} | {row.revision} |"
        for row in trait_rows()
    ]
    return "\n".join(rows) + "\n"


def _section(method: Method) -> str:
    traits = method.traits
    rule = inspect.getdoc(sys.modules[type(method).__module__]) or ""
    note = f" Note: {_plain(traits.cost_note)}." if traits.cost_note else ""
    return (
        f"\n## {traits.code}\n\n{traits.title}: {_plain(traits.idea)}.{note}\n\nSource: {traits.source}.\n"
        f"{_settings(method.settings)}\n```text\n{rule.strip()}\n```\n"
    )


def _settings(settings: tuple[Setting, ...]) -> str:
    if not settings:
        return ""
    rows = ["\n| setting | takes | default | meaning |", "| --- | --- | --- | --- |"]
    for setting in settings:
        default = "required" if setting.default is None else f"`{setting.default}`" if setting.default else ""
        rows.append(f"| `{setting.key}` | {_takes(setting)} | {default} | {_plain(setting.meaning)} |")
    return "\n".join(rows) + "\n"


def _takes(setting: Setting) -> str:
    if setting.choices:
        return ", ".join(f"`{choice}`" for choice in setting.choices)
    return f"{setting.kind} in {setting.allowed}" if setting.allowed else setting.kind


def _plain(text: str) -> str:
    """Text whose signs Markdown is to leave alone."""
    return text.replace("|", "\\|").replace("*", "\\*")


if __name__ == "__main__":
    METHODS_PAGE.write_text(methods_page(), encoding="utf-8")
