"""Times of the record: an append costs the same at any length, 100 000 events are resumed in under 3 s.

Ratios compare within the same run. What is printed (`-s`) belongs into docs/measured.md.
"""

from __future__ import annotations

import statistics
import sys
import time
from pathlib import Path

import pytest

from support.sessions import ticking, wandering
from surefoot.equation.problem import Problem
from surefoot.methods.plan import Plan
from surefoot.session import record as record_module
from surefoot.session.commands import BeginRun, StateProblem, TakeSteps, Withdraw
from surefoot.session.library import summarise
from surefoot.session.loading import load
from surefoot.session.recompute import recompute
from surefoot.session.session import Session

EVENTS = 100_000


def say(text: str) -> None:
    sys.stdout.write(f"\n{text}")


@pytest.fixture(scope="module")
def long_session(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """100 000 steps of Newton-Raphson on x^2 + 1, which never settles: a tangent, a point and a state each."""
    path = tmp_path_factory.mktemp("long") / "a.json"
    with Session.create(path, by="M. R.", now=ticking()) as session:
        session.do(StateProblem(Problem("x", "x^2 + 1 = 0")))
        session.do(BeginRun(Plan("newton-raphson", ("1.3",), max_steps=EVENTS + 1000)))
        started = time.perf_counter()
        session.do(TakeSteps(EVENTS - 3))
        say(f"{EVENTS} steps taken and recorded in {time.perf_counter() - started:.1f} s")
    return path


def cost_of_a_step(path: Path, count: int = 300) -> float:
    """Median time of one step with its append and sync, taken in a session that is open."""
    with Session.open(path, by="M. R.") as session:
        session.do(TakeSteps(20))
        times = []
        for _ in range(count):
            started = time.perf_counter()
            session.do(TakeSteps(1))
            times.append(time.perf_counter() - started)
    return statistics.median(times)


def test_an_append_costs_the_same_at_event_100_000_as_at_event_10(tmp_path: Path, long_session: Path) -> None:
    short = tmp_path / "short.json"
    with Session.create(short, by="M. R.") as session:
        session.do(StateProblem(Problem("x", "x^2 + 1 = 0")))
        session.do(BeginRun(Plan("newton-raphson", ("1.3",), max_steps=EVENTS)))
        session.do(TakeSteps(7))
    copied = tmp_path / "long.json"
    copied.write_bytes(long_session.read_bytes())
    early, late = cost_of_a_step(short), cost_of_a_step(copied)
    say(f"a step at event 10: {early * 1e3:.3f} ms, at event {EVENTS}: {late * 1e3:.3f} ms, ratio {late / early:.2f}")
    assert late / early < 1.5


def test_100_000_events_are_resumed_in_under_3_s(long_session: Path) -> None:
    times = []
    for _ in range(3):
        started = time.perf_counter()
        loaded = load(long_session)
        times.append(time.perf_counter() - started)
        assert loaded.state.events == EVENTS
        del loaded
    say(f"{EVENTS} events resumed in {min(times):.2f} s ({long_session.stat().st_size / 1e6:.0f} MB)")
    assert min(times) < 3.0


def test_withdrawing_costs_the_same_at_any_length(tmp_path: Path, long_session: Path) -> None:
    copied = tmp_path / "long.json"
    copied.write_bytes(long_session.read_bytes())
    medians = []
    for path in (_short(tmp_path), copied):
        with Session.open(path, by="M. R.") as session:
            times = []
            for _ in range(200):
                started = time.perf_counter()
                session.do(Withdraw())
                times.append(time.perf_counter() - started)
            medians.append(statistics.median(times))
    say(f"withdrawing at event 250: {medians[0] * 1e3:.3f} ms, at event {EVENTS}: {medians[1] * 1e3:.3f} ms")
    assert medians[1] / medians[0] < 1.5


def _short(folder: Path) -> Path:
    with Session.create(folder / "short.json", by="M. R.") as session:
        problem, plan = wandering(1000)
        session.do(StateProblem(problem))
        session.do(BeginRun(plan))
        session.do(TakeSteps(250))
    return session.path


def test_recording_costs_under_60_microseconds_a_step(
    tmp_path: Path, long_session: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The whole step of a run to the end, sync apart; the step rule itself and f are in it."""
    syncs: list[float] = []

    def timed(descriptor: int) -> None:
        started = time.perf_counter()
        sync(descriptor)
        syncs.append(time.perf_counter() - started)

    sync = record_module._sync
    monkeypatch.setattr(record_module, "_sync", timed)
    count = 20_000
    with Session.create(tmp_path / "a.json", by="M. R.") as session:
        session.do(StateProblem(Problem("x", "x^2 + 1 = 0")))
        session.do(BeginRun(Plan("newton-raphson", ("1.3",), max_steps=count)))
        run = session.state.run
        assert run is not None
        stepper = session._solver.stepper(run.plan, run.number, run.stated)
        started = time.perf_counter()
        session.do(TakeSteps(None))
        whole = (time.perf_counter() - started - sum(syncs)) / count
    started = time.perf_counter()
    for _ in range(2000):
        stepper.advance(run.progress())
    bare = (time.perf_counter() - started) / 2000
    say(f"a step: {bare * 1e6:.0f} us, recorded: {whole * 1e6:.0f} us; {len(syncs)} syncs, {sum(syncs) * 1e3:.0f} ms")
    assert whole - bare < 60e-6


def test_listing_and_recomputing_are_told(long_session: Path) -> None:
    started = time.perf_counter()
    summary = summarise(long_session)
    listed = time.perf_counter() - started
    assert (summary.steps, summary.fault) == (EVENTS - 3, "")
    started = time.perf_counter()
    done = recompute(long_session)
    again = time.perf_counter() - started
    assert done.reproduced
    say(f"{EVENTS} events listed in {listed:.2f} s, recomputed in {again:.1f} s")
    assert listed < 1.5
