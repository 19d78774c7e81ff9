"""The records shipped with the project: whole, and made again to the bit with the mathematics library they name."""

from __future__ import annotations

from pathlib import Path

import pytest

from surefoot.equation.problem_file import read_problem_file
from surefoot.session.environment import environment
from surefoot.session.library import find_sessions
from surefoot.session.loading import load
from surefoot.session.recompute import recompute

FOLDER = Path(__file__).parent.parent / "sessions"
SHIPPED = sorted(FOLDER.glob("*.json"))


def test_three_cases_of_the_scenario_are_shipped() -> None:
    found = {summary.title: (summary.phase, summary.outcome, summary.fault) for summary in find_sessions((FOLDER,))}
    assert found == {
        "Compressibility of the nitrogen accumulator, cold night": ("ended", "converged", ""),
        "Depth in the tailrace at 12 m3/s": ("ended", "converged", ""),
        "Penstock friction factor at full load": ("ended", "converged", ""),
    }


@pytest.mark.parametrize("path", SHIPPED, ids=lambda path: path.stem)
def test_a_shipped_record_is_whole_and_reproduced(path: Path) -> None:
    result = recompute(path)
    assert result.chain == "whole"
    assert result.steps >= 7
    recorded = load(path).state.environment
    same_library = recorded is not None and recorded.libm_digest == environment().libm_digest
    assert result.reproduced or not same_library, result.first_difference


@pytest.mark.parametrize("path", sorted(FOLDER.glob("*.toml")), ids=lambda path: path.stem)
def test_a_shipped_problem_file_states_what_its_record_holds(path: Path) -> None:
    problem = read_problem_file(path.read_text(encoding="utf-8"), path.name).problem
    recorded = {load(each).state.runs[0].stated.problem for each in SHIPPED}
    assert problem in recorded
