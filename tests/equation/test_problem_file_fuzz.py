"""A seeded tenth of the mutated problem files; the whole of them stands in tests/long."""

from __future__ import annotations

from support.problem_file_fuzz import run


def test_mutated_problem_files_are_read_or_refused() -> None:
    became = run(seed=2, count=1_000)
    assert became["accepted"] > 50
    assert became["refused"] > 500
