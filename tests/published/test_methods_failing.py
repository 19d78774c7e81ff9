"""The failing solves of tests/published/failing that these methods can take: same outcome, same iterates.

`observed` in data/failures.json is a plain binary64 simulation: its first iterates, the last three, and how it ended.
Problems and plans are read from the files themselves; the sources stand in the data.
"""

from __future__ import annotations

import tomllib
from typing import Any

import pytest

from support.published import FAILURES
from support.runs import Walk, problem_of, run
from support.tree import ROOT
from surefoot.methods.plan import Plan
from surefoot.methods.plan_table import plan_from_table
from surefoot.methods.table import METHODS

OURS = [code for code, row in FAILURES.items() if row["method"] in METHODS]
OUTCOMES = {
    "converged": "converged",
    "step_limit": "step_limit",
    "zero_derivative": "broke_down",
    "no_bracket": "broke_down",
    "domain_error": "failed_evaluation",
    "overflow": "failed_evaluation",
}
RELAXED = ("wrong-fp-eos", "fp-diode", "fp-plate")
"""Simulated as x + 1.0*(g(x) - x), which rounds otherwise than g(x): a damping of one does the same."""


def plan_of(code: str, **control: str) -> Plan:
    text = (ROOT / "tests" / "published" / "failing" / f"{code}.toml").read_text(encoding="utf-8")
    table = tomllib.loads(text, parse_float=str)["plan"]
    return plan_from_table({**table, "control": {**table.get("control", {}), **control}})


def walked(code: str, **control: str) -> Walk:
    """The run of the file; the derivative is the host code's, which the data states."""
    row = FAILURES[code]
    return run(plan_of(code, **control), problem_of(row), () if row["derivative"] else None)


def assert_first_iterates(walk: Walk, observed: dict[str, Any], rel: float | None = None) -> None:
    for seen in observed["first_iterates"]:
        iterate = walk.iterates[seen["k"]]
        if rel is None:
            assert (iterate.x.hex(), iterate.f.hex()) == (float(seen["x"]).hex(), float(seen["f"]).hex())
        else:
            assert iterate.x == pytest.approx(float(seen["x"]), rel=rel)
            assert iterate.f == pytest.approx(float(seen["f"]), rel=rel)


def test_which_of_them_are_ours() -> None:
    assert len(OURS) == 53
    assert set(FAILURES) - set(OURS) == {
        "run-catenary-halley", "wrong-halley-negative", "ok-friction-halley", "ok-bessel-muller",
    }  # fmt: skip


@pytest.mark.parametrize("code", OURS)
def test_outcome(code: str) -> None:
    walk, observed = walked(code), FAILURES[code]["observed"]
    assert walk.outcome == OUTCOMES[observed["status"]]
    assert walk.ending is not None
    assert walk.ending.says


@pytest.mark.parametrize("code", [code for code in OURS if code not in (*RELAXED, "tol-loose-theis")])
def test_iterates_to_the_bit(code: str) -> None:
    walk, observed = walked(code), FAILURES[code]["observed"]
    assert_first_iterates(walk, observed)
    for seen in observed["last_iterates"]:
        assert walk.iterates[seen["k"]].x.hex() == float(seen["x"]).hex()
    valued = [iterate for iterate in walk.iterates if isinstance(iterate.f, float)]
    assert valued[-1].k == observed["last_iterates"][-1]["k"] if observed["last_iterates"] else not valued


@pytest.mark.parametrize("code", RELAXED)
def test_a_relaxed_substitution_to_the_bit(code: str) -> None:
    walk, observed = walked(code, damping="1.0"), FAILURES[code]["observed"]
    assert walk.outcome == OUTCOMES[observed["status"]]
    assert_first_iterates(walk, observed)
    assert [it.x.hex() for it in walk.iterates[-3:]] == [float(it["x"]).hex() for it in observed["last_iterates"]]


def test_the_exponential_integral_of_the_simulation_is_not_correctly_rounded() -> None:
    """Theis: ours is (`arb`), so the one step agrees to a few last places only."""
    assert_first_iterates(walked("tol-loose-theis"), FAILURES["tol-loose-theis"]["observed"], rel=4e-15)


def test_the_diode_by_substitution_as_written() -> None:
    """x := g(x) returns 5.00000000001 from -1e73, where the relaxed form loses it and gives 0."""
    walk = walked("fp-diode")
    assert walk.x[3:6] == [-1.0064707129933145e73, 5.00000000001, -1.0064707129933145e73]
    assert walk.outcome == "step_limit"
