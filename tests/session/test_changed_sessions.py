"""A seeded tenth of the changed session files; the whole of them stands in tests/long."""

from __future__ import annotations

from pathlib import Path

from support.session_fuzz import run


def test_changed_session_files_are_refused_or_read(tmp_path: Path) -> None:
    refused, read = run(tmp_path, seed=5, count=1000)
    assert refused > 500, "most changes break the chain"
    assert read > 50, "torn tails and changes of layout are read"
