"""A seeded tenth of the mutated equation texts; the whole of them stands in tests/long."""

from __future__ import annotations

from support.equation_fuzz import run


def test_mutated_texts_are_read_or_refused() -> None:
    became = run(seed=2, count=10_000)
    assert became["parse_equation accepted"] > 500
    assert became["parse_equation refused"] > 5_000
    assert became["parse_condition accepted"] > 5
    assert became["check refused"] > 5_000
    assert became["value"] > 100
    assert became["failure"] > 10
