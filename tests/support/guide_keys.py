"""The keys of the guide, made from the one table of keys. Run as a module, this writes them into the guide."""

from __future__ import annotations

from support.tree import ROOT
from surefoot.screens.commands import EVERYWHERE, FIELD, PLACES

GUIDE_PAGE = ROOT / "docs" / "guide.md"

_BEGIN, _END = "<!-- keys: begin -->\n", "<!-- keys: end -->"


def with_keys(page: str) -> str:
    """The page with the tables of keys as they are now between its marks."""
    before, _, rest = page.partition(_BEGIN)
    return before + _BEGIN + _tables() + _END + rest.partition(_END)[2]


def _tables() -> str:
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


if __name__ == "__main__":
    GUIDE_PAGE.write_text(with_keys(GUIDE_PAGE.read_text(encoding="utf-8")), encoding="utf-8")
