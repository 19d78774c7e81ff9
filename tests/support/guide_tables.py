"""The tables of the guide that the program's own tables make. Run as a module, this writes them into the guide."""

from __future__ import annotations

from support.tree import ROOT
from surefoot.methods.table import METHODS
from surefoot.screens.commands import EVERYWHERE, FIELD, PLACES

GUIDE_PAGE = ROOT / "docs" / "guide.md"


def with_tables(page: str) -> str:
    """The page with the tables as they are now between their marks."""
    for name, table in (("keys", _keys()), ("methods", _methods())):
        begin, end = f"<!-- {name}: begin -->\n", f"<!-- {name}: end -->"
        before, _, rest = page.partition(begin)
        page = before + begin + table + end + rest.partition(end)[2]
    return page


def _keys() -> str:
    places = {
        "On the opening screen": PLACES["opening"],
        "In the function": PLACES["function"],
        "In the method": PLACES["method"],
        "In the steps": PLACES["steps"],
        "In the record": PLACES["record"],
        "In each of these four": EVERYWHERE,
        "While a field is typed in": FIELD,
    }
    tables = []
    for place, keys in places.items():
        rows = "".join(f"| `{key.shown}` | {key.meaning} |\n" for key in keys)
        tables.append(f"{place}:\n\n| key | |\n| --- | --- |\n{rows}\n")
    return "".join(tables)


def _methods() -> str:
    rows = ["| method | starts | evaluations a step | order | idea | source |", "| --- | --- | --- | --- | --- | --- |"]
    for code, method in METHODS.items():
        traits = method.traits
        starts = f"{traits.starts}, a bracket" if traits.bracket else str(traits.starts)
        order = f"{traits.order:.3g}" if traits.order is not None else ""
        rows.append(f"| `{code}` | {starts} | {sum(traits.evaluations)} | {order} | {traits.idea} | {traits.source} |")
    return "\n".join(rows) + "\n"


if __name__ == "__main__":
    GUIDE_PAGE.write_text(with_tables(GUIDE_PAGE.read_text(encoding="utf-8")), encoding="utf-8")
