"""Every published problem, run from the command line, comes to the published figure (sources: the published data)."""

from __future__ import annotations

import json
from decimal import Decimal

import pytest

from support.command import Home
from support.problem_files import PROBLEMS, PUBLISHED, published_root, write
from surefoot.cli.main import main

METHODS = {"sf-airy": ("secant", "-2.0, -2.4")}
"""Where the derivative of f is not in the equation language."""


def test_every_published_problem_has_its_file() -> None:
    assert {path.stem for path in PROBLEMS.glob("*.toml")} == set(PUBLISHED)


@pytest.mark.parametrize("problem", sorted(PUBLISHED))
def test_a_published_problem_comes_to_its_published_root(home: Home, capsys, problem: str) -> None:
    known = published_root(problem)
    method, starts = METHODS.get(problem, ("newton-raphson", known.start))
    plan = f'\n[plan]\nmethod = "{method}"\nstart = [{starts}]\n[plan.stop]\nx_relative = 1e-12\n'
    write(home.folder, (PROBLEMS / f"{problem}.toml").read_text(encoding="utf-8") + plan)
    main(["run", "colebrook.toml", "--no-save", "--json"])
    answer = json.loads(capsys.readouterr().out)
    root = Decimal(answer["iterates"][-1]["x"])
    # What binary64 can know of this root, as a bracketing solve of the same text in binary64 attains it.
    attained = max(PUBLISHED[problem]["float64_root_rel_error"])
    rounding = abs(known.value) * Decimal(max(8 * attained, 4e-15))
    assert answer["outcome"] in ("converged", "no_progress")
    assert abs(root - known.value) <= rounding
    if known.printed is not None:
        assert abs(root - known.printed) <= known.quantum + rounding
