"""The reference of the methods says what the code says."""

from __future__ import annotations

import re

from support.methods_page import METHODS_PAGE, methods_page
from surefoot.methods.table import METHODS

PAGE = METHODS_PAGE.read_text(encoding="utf-8")


def test_the_page_is_that_of_the_table_of_methods() -> None:
    assert methods_page() == PAGE, "PYTHONPATH=tests .venv/bin/python -m support.methods_page writes it"


def test_every_method_has_its_section_with_all_its_settings() -> None:
    sections = re.split(r"^## ", PAGE, flags=re.MULTILINE)[1:]
    assert [section.splitlines()[0] for section in sections] == list(METHODS)
    for section, method in zip(sections, METHODS.values(), strict=True):
        assert method.traits.source in section
        assert re.findall(r"^\| `(\w+)` \|", section, re.MULTILINE) == [setting.key for setting in method.settings]
        for heading in ("Idea:", "Update rule", "Needs:", "Costs:", "Breaks down when:", "Source:"):
            assert heading in section
