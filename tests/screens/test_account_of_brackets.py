"""What a step of a bracketing method is told as, next to what it took for true."""

from __future__ import annotations

from itertools import pairwise
from pathlib import Path

import pytest

from support.sessions import ticking
from surefoot.equation.problem import Problem
from surefoot.methods.plan import Plan, Stop
from surefoot.screens.account import account_words
from surefoot.session.commands import BeginRun, StateProblem, TakeSteps
from surefoot.session.session import Session


def told(folder: Path, method: str, count: int, *, equation: str = "x^2 - 2 = 0", **settings: str) -> list[str]:
    """The words of the first steps of a run from the bracket 1 to 2."""
    with Session.create(folder / f"{method}.json", by="M. R.", now=ticking()) as session:
        session.do(StateProblem(Problem("x", equation, unit="m")))
        session.do(BeginRun(Plan(method, ("1", "2"), settings=tuple(settings.items()), stop=Stop())))
        session.do(TakeSteps(count))
        run = session.state.run
        assert run is not None
        iterates = list(run.iterates)
        return [account_words(run, new, old, None) for old, new in pairwise(iterates[1:])]


@pytest.mark.parametrize("method", ["bisection", "chandrupatla", "safeguarded-newton"])
def test_a_halving(tmp_path: Path, method: str) -> None:
    assert told(tmp_path, method, 1) == ["Step to 2: middle of 1.0000000 .. 2.0000000, width 1.00, dx = -0.500 m."]


def test_a_chord_of_the_ends(tmp_path: Path) -> None:
    assert told(tmp_path, "regula-falsi", 1) == [
        "Step to 2: chord through x = 2.0000000 and 1.0000000, slope 3.000, dx = -0.667 m."
    ]


def test_a_chord_with_a_scaled_end(tmp_path: Path) -> None:
    *_, third = told(tmp_path, "illinois", 3)
    assert third == (
        "Step to 4: chord through x = 1.4000000 and 2.0000000, slope 1.733, f at the kept end taken as 1.00, "
        "dx = 0.0231 m."
    )


def test_a_place_that_is_not_the_middle(tmp_path: Path) -> None:
    (words,) = told(tmp_path, "itp", 1, tolerance="0.125")
    assert words == (
        "Step to 2: bracket 1.0000000 .. 2.0000000, width 1.00, radius 0.500, chord zero 1.33, truncation 0.100, "
        "dx = -0.567 m."
    )
    assert told(tmp_path, "ridders", 1) == [
        "Step to 2: bracket 1.0000000 .. 2.0000000, width 1.00, middle 1.50, dx = -0.587 m."
    ]


def test_a_shortest_step(tmp_path: Path) -> None:
    words = told(tmp_path, "brent-dekker", 6, tolerance="0.02")
    assert any(", shortest step 0.0200, " in each for each in words)


def test_interpolation_through_three_and_four_points(tmp_path: Path) -> None:
    words = told(tmp_path, "toms-748", 4)
    assert words[1].startswith("Step to 3: parabola through 1.3333333, 2.0000000, 1.0000000, ")
    assert words[2].startswith("Step to 4: inverse cubic through ")
    assert words[3].startswith("Step to 5: chord of double length through x = ")
    assert any(": parabola through " in each for each in told(tmp_path, "brent-dekker", 5))
