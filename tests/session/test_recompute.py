"""Doing a record again: what is altered is found, and where another library computes, by how much."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest

from support.sessions import (
    BISECTION,
    DEPTH,
    NEWTON,
    QUADRATIC,
    SECANT,
    TIGHT,
    begun,
    chained,
    members_of,
    wandering,
)
from surefoot.errors import RecordError
from surefoot.methods.plan import Plan
from surefoot.session import recompute as recompute_module
from surefoot.session.commands import (
    Abandon,
    BeginRun,
    BeginVariant,
    PutIterate,
    StateProblem,
    TakeSteps,
    Withdraw,
)
from surefoot.session.environment import environment
from surefoot.session.layout import document, lay_out
from surefoot.session.recompute import recompute, recomputed_words


@pytest.fixture
def path(tmp_path: Path) -> Path:
    """Runs of two problems, variants, iterates by hand, withdrawn steps."""
    with begun(tmp_path / "a.json") as session:
        session.do(TakeSteps(2))
        session.do(PutIterate("2.5", "a guess"))
        session.do(TakeSteps(2))
        session.do(Withdraw())
        session.do(BeginVariant(1, 1, NEWTON))
        session.do(TakeSteps(None))
        session.do(BeginRun(BISECTION))
        session.do(TakeSteps(5))
        session.do(Abandon("slow"))
        session.do(StateProblem(DEPTH))
        session.do(BeginRun(Plan("secant", ("0.5", "3"), stop=TIGHT)))
        session.do(TakeSteps(None))
        return session.path


@pytest.mark.parametrize("arithmetic", ["binary64", "binary32", "multiprecision:30"])
def test_a_record_is_reproduced_to_the_bit(tmp_path: Path, arithmetic: str) -> None:
    with begun(tmp_path / "a.json", DEPTH, replace(SECANT, start=("0.5", "3"), arithmetic=arithmetic)) as session:
        session.do(TakeSteps(None))
        session.do(BeginVariant(1, 1, replace(NEWTON, arithmetic=arithmetic)))
        session.do(TakeSteps(None))
        steps = sum(run.steps for run in session.state.runs)
    done = recompute(session.path)
    assert done.reproduced
    assert (done.steps, done.differing, done.chain, done.first_difference) == (steps, 0, "whole", None)
    assert done.events == session.state.events
    assert recomputed_words(done) == (
        f"all {steps} steps reproduced to the bit; chain whole, {session.state.events} events"
    )


def test_every_run_of_a_session_is_done_again_withdrawn_steps_too(path: Path) -> None:
    done = recompute(path)
    assert done.reproduced
    assert done.steps == sum(event["kind"] == "step_taken" for event in members_of(path))
    assert path.read_bytes() == document(lay_out(path.read_bytes()).lines)


def last_place(text: str) -> str:
    return repr(math.nextafter(float(text), math.inf))


def step_of(events: list[dict[str, Any]], count: int) -> dict[str, Any]:
    """The content of the step with that number in the file."""
    content: dict[str, Any] = [event["content"] for event in events if event["kind"] == "step_taken"][count]
    return content


@pytest.mark.parametrize(
    ("alter", "what", "places"),
    [
        (lambda step: step["iterate"].update(x=last_place(step["iterate"]["x"])), "x of iterate 2", 1),
        (lambda step: step["iterate"].update(f=last_place(step["iterate"]["f"])), "f of iterate 2", 1),
        (lambda step: step["iterate"].update(raw="0.75"), "raw of iterate 2", 2**51),
        (lambda step: step["iterate"]["account"].update(slope="9.5"), "slope of iterate 2", None),
        (lambda step: step["iterate"]["account"].update(shape="tangent"), "shape of iterate 2", None),
        (lambda step: step["state"]["newer"].reverse(), "state.newer.0", None),
        (lambda step: step.update(spent={"f": 7}), "spent.f", None),
        (
            lambda step: step.update(ending={"outcome": "converged", "says": "good enough"}),
            "ending",
            None,
        ),
    ],
)
@pytest.mark.parametrize("rehashed", [True, False])
def test_an_altered_step_is_found_even_when_the_chain_was_made_new(
    tmp_path: Path, alter: Callable[[dict[str, Any]], None], what: str, places: float | None, rehashed: bool
) -> None:
    path = tmp_path / "a.json"
    with begun(path) as session:
        session.do(TakeSteps(1))
    events = members_of(path)
    alter(step_of(events, 0))
    lines = [*lay_out(path.read_bytes()).lines]
    if rehashed:
        path.write_bytes(chained(events))
    else:
        path.write_bytes(document((*lines[:3], lay_out(chained(events)).lines[3])))
        forged = members_of(path)[3]
        path.write_bytes(path.read_bytes().replace(forged["hash"].encode(), b"0" * 64))
    done = recompute(path)
    assert not done.reproduced
    assert done.chain == ("whole" if rehashed else "broken at 3")
    assert done.first is not None
    assert (done.first.event, done.first.run, done.first.what) == (3, 1, what)
    assert done.first.recorded != done.first.recomputed
    assert places is None or done.first.places == places
    assert done.differing == 1
    assert "event 3, run 1" in recomputed_words(done)
    assert "\n" not in recomputed_words(done)


def test_a_difference_stands_where_it_arose_and_does_not_spread(path: Path) -> None:
    events = members_of(path)
    altered = [n for n, event in enumerate(events) if event["kind"] == "step_taken"][6]
    step = events[altered]["content"]
    step["spent"] = {**step["spent"], "f": 9}
    path.write_bytes(chained(events))
    done = recompute(path)
    assert (done.first is not None and done.first.event, done.differing) == (altered, 1)


@pytest.mark.parametrize(
    ("kind", "alter", "what"),
    [
        ("run_begun", lambda content: content["iterates"][1].update(f="12.000000000000002"), "f of iterate 1"),
        ("run_begun", lambda content: content["plan"].update(start=["0", "4"]), "x of iterate 1"),
        ("iterate_put", lambda content: content["iterate"].update(f="0.5"), "f of iterate 4"),
    ],
)
def test_altered_starts_and_iterates_put_by_hand_are_found(
    path: Path, kind: str, alter: Callable[[dict[str, Any]], None], what: str
) -> None:
    events = members_of(path)
    at = next(n for n, event in enumerate(events) if event["kind"] == kind)
    alter(events[at]["content"])
    path.write_bytes(chained(events))
    done = recompute(path)
    assert not done.reproduced
    assert done.first is not None
    assert (done.first.event, done.first.what) == (at, what)


def test_the_starts_of_a_variant_are_taken_from_its_parent(path: Path) -> None:
    events = members_of(path)
    at = next(n for n, event in enumerate(events) if "parent" in event["content"])
    events[at]["content"]["parent"] = [1, 0]
    path.write_bytes(chained(events))
    done = recompute(path)
    assert done.first is not None
    assert (done.first.event, done.first.what) == (at, "plan.start.0")


def test_an_altered_problem_or_derivative_changes_the_steps(path: Path) -> None:
    events = members_of(path)
    events[1]["content"]["derivatives"][0]["text"] = "2*x - 1"
    path.write_bytes(chained(events))
    done = recompute(path)
    assert done.first is not None
    assert done.first.what == "x of iterate 1"
    newton = next(event["n"] for event in events if "parent" in event["content"])
    assert done.first.event == newton + 1


def test_what_cannot_be_done_again_is_told(path: Path) -> None:
    events = members_of(path)
    events[1]["content"]["problem"]["equation"] = "x^2 = 2*x + unknown"
    path.write_bytes(chained(events))
    done = recompute(path)
    assert not done.reproduced
    assert done.first is not None
    assert (done.first.event, done.first.what) == (2, "run_begun")
    assert "cannot be done" in str(done.first)
    assert "unknown" in str(done.first)


def test_another_library_of_functions_is_told_by_how_many_last_places_and_where(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The record comes from a place where exp gives the next larger number, in all but the small cases."""
    path = tmp_path / "a.json"
    problem, plan = QUADRATIC, SECANT
    problem = replace(problem, equation="exp(x) = 2")
    with monkeypatch.context() as patched:
        exp = math.exp
        from surefoot.equation import binary64

        functions = {**binary64._FUNCTIONS, "exp": lambda x: math.nextafter(exp(x), math.inf) if x > 0.5 else exp(x)}
        patched.setattr(binary64, "_FUNCTIONS", functions)
        there = replace(environment(), libm="glibc 2.17", libm_digest="0123456789abcdef")
        patched.setattr("surefoot.session.session.environment", lambda: there)
        with begun(path, problem, replace(plan, start=("0", "0.25"))) as session:
            session.do(TakeSteps(None))
            assert session.state.phase == "ended"
    done = recompute(path)
    assert done.chain == "whole"
    assert not done.reproduced
    assert done.first is not None
    assert done.first.what.startswith("f of iterate ")
    assert done.first.places is not None
    assert done.first.places >= 1
    words = done.first_difference
    assert words is not None
    assert "last place" in words
    assert f"event {done.first.event}, run 1, {done.first.what}" in words
    assert (
        f"recorded with libm glibc 2.17, libm_digest 0123456789abcdef; recomputed with libm {environment().libm}"
        in (words)
    )
    assert f"{done.differing} of {done.steps} steps differ" in words


# -- damaged chains ---------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("edit", "at"),
    [
        (lambda lines: [*lines[:4], lines[4].replace(b'"M. R."', b'"M. S."'), *lines[5:]], 4),
        (lambda lines: [*lines[:4], *lines[5:]], 4),
        (lambda lines: [*lines[:4], lines[5], lines[4], *lines[6:]], 4),
        (lambda lines: [*lines[:4], lines[3], *lines[4:]], 4),
        (lambda lines: [*lines[:4], b"{}", *lines[5:]], 4),
    ],
    ids=["changed", "removed", "swapped", "added", "no event"],
)
def test_a_damaged_chain_is_told_not_raised(path: Path, edit: Callable[[list[bytes]], list[bytes]], at: int) -> None:
    path.write_bytes(document(tuple(edit([*lay_out(path.read_bytes()).lines]))))
    done = recompute(path)
    assert done.chain == f"broken at {at}"
    assert f"chain broken at {at}" in recomputed_words(done)


def test_a_change_that_keeps_the_steps_is_told_by_the_chain_alone(path: Path) -> None:
    lines = [*lay_out(path.read_bytes()).lines]
    lines[4] = lines[4].replace(b'"M. R."', b'"M. S."')
    path.write_bytes(document(tuple(lines)))
    done = recompute(path)
    assert (done.chain, done.reproduced, done.events) == ("broken at 4", True, len(lines))


def test_a_cut_file_is_done_again_up_to_its_last_whole_event(path: Path) -> None:
    whole = path.read_bytes()
    path.write_bytes(whole[:-100])
    done = recompute(path)
    assert (done.chain, done.reproduced) == ("whole", True)
    assert done.notices[0].startswith("a write was cut short")
    assert path.read_bytes() == whole[:-100]


def test_what_is_no_session_is_raised(tmp_path: Path) -> None:
    (tmp_path / "a.json").write_text('{"format": "other"}', encoding="ascii")
    for name in ("a.json", "none.json"):
        with pytest.raises(RecordError) as caught:
            recompute(tmp_path / name)
        assert caught.value.file == str(tmp_path / name)


def test_recomputing_is_stopped_when_asked_and_says_so(tmp_path: Path) -> None:
    with begun(tmp_path / "a.json", *wandering(50)) as session:
        session.do(TakeSteps(None))
    asked = iter(range(100))
    done = recompute(session.path, stop=lambda: next(asked) >= 20)
    assert (done.finished, done.reproduced, done.steps) == (False, False, 17)
    assert "17 of 17 steps reproduced to the bit" in recomputed_words(done)
    assert "not done to the end" in recomputed_words(done)


def test_recomputing_asks_the_environment_of_now(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(recompute_module, "environment", lambda: replace(environment(), libm="glibc 9"))
    assert recompute(path).elsewhere == (), "nothing differs, so where it was recorded says nothing"


def test_differences_that_are_not_all_numbers_are_counted(tmp_path: Path) -> None:
    with begun(tmp_path / "a.json") as session:
        session.do(TakeSteps(2))
    events = members_of(session.path)
    for count in range(2):
        step_of(events, count)["iterate"]["account"]["shape"] = "tangent"
    session.path.write_bytes(chained(events))
    words = recompute(session.path).first_difference
    assert words == ("event 3, run 1, shape of iterate 2: recorded tangent, recomputed chord; 2 of 2 steps differ")


def test_what_is_missing_is_told_as_nothing(tmp_path: Path) -> None:
    with begun(tmp_path / "a.json") as session:
        session.do(TakeSteps(1))
    events = members_of(session.path)
    del step_of(events, 0)["iterate"]["raw"]
    session.path.write_bytes(chained(events))
    done = recompute(session.path)
    assert str(done.first) == "event 3, run 1, raw of iterate 2: recorded nothing, recomputed 1.0"
