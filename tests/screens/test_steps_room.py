"""The steps room, driven by keys at 80x24: first what the session holds, then what stands on the screen."""

from __future__ import annotations

from pathlib import Path

import pytest

from support.screens import TAILRACE, program, screen_text, tailrace_session, wait_until
from surefoot.methods.plan import Plan, Stop
from surefoot.screens.app import SurefootApp

SIZE = (80, 24)


def run_of(app: SurefootApp):
    assert app.session is not None
    run = app.session.state.run
    assert run is not None
    return run


def row(text: str, k: int) -> str:
    """The line of the log that belongs to iterate k."""
    return next(line for line in text.splitlines() if line[:5].strip() == str(k))


async def test_space_takes_one_step_and_shows_what_it_took_for_true(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("space")
        run = run_of(app)
        assert (run.steps, run.current.k) == (1, 1)
        assert run.current.x == pytest.approx(6.110, abs=5e-4)
        text = screen_text(app)
        assert row(text, 1).startswith("   1  '6.1")
        assert "Step to 1: tangent at y = 0.20000000" in text
        assert "1 step, 3 evaluations   stepping" in text


async def test_going_on_to_the_stop_ends_with_the_verdict(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("end")
        await wait_until(pilot, lambda: run_of(app).ending is not None and not app.working)
        run = run_of(app)
        assert run.ending is not None
        assert run.ending.outcome == "converged"
        assert run.ending.verdict is not None
        assert run.ending.verdict.test == "x_relative"
        # mpmath 1.3, the same equation in 30 digits.
        assert run.current.x == pytest.approx(1.78316271430229826, rel=1e-14)
        text = screen_text(app)
        assert "converged" in text.splitlines()[2]
        assert "converged after 8 steps: x_relative 7.84e-13 <= 1.78e-10" in text


async def test_a_key_that_is_not_allowed_says_why_and_records_nothing(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path, plan=None))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("3")
        await pilot.pause()
        assert app.session is not None
        before = app.session.state.events
        assert "(space step)" in screen_text(app)
        await pilot.press("space")
        await pilot.pause()
        assert app.session.state.events == before
        assert "choose a method" in screen_text(app)


async def test_withdrawing_takes_back_a_step_and_the_record_keeps_it(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("space", "space", "backspace")
        await pilot.pause()
        assert run_of(app).steps == 1
        assert app.session is not None
        assert [event.kind for event in app.session.events()][-3:] == ["step_taken", "step_taken", "withdrawn"]
        assert "withdrawn: step 2" in screen_text(app)


async def test_trial_steps_spend_no_step_and_no_event(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("space", "space", "space", "space")
        run, events = run_of(app), app.session.state.events if app.session else 0
        await pilot.press("t")
        await pilot.pause()
        assert run_of(app) is run
        assert app.session is not None
        assert app.session.state.events == events
        text = screen_text(app)
        while "newton-raphson  " not in text.partition("would land at")[2]:
            await pilot.press("down")
            await pilot.pause()
            assert screen_text(app) != text
            text = screen_text(app)
        landed = next(line.split()[1] for line in text.splitlines() if line.strip().startswith("newton-raphson  "))
        await pilot.press("t", "space")
        await pilot.pause()
        assert float(landed) == pytest.approx(run_of(app).current.x, rel=1e-11)


async def test_an_iterate_put_by_hand_needs_a_reason(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("p", *"1.5", "enter", "enter")
        await pilot.pause()
        assert run_of(app).current.k == 0
        assert "a reason is needed" in screen_text(app)
        await pilot.press(*"away from the wall", "enter")
        await wait_until(pilot, lambda: run_of(app).current.k == 1)
        assert (run_of(app).current.x, run_of(app).current.put) == (1.5, "away from the wall")
        assert "Put by hand" in screen_text(app)


async def test_a_variant_begins_at_the_iterate_under_the_cursor_to_the_bit(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("space", "space", "up", "v")
        await pilot.pause()
        assert "variant of run 1 from iterate 1" in screen_text(app)
        await pilot.press("up", "up", "up", "enter", "b")  # secant
        await wait_until(pilot, lambda: run_of(app).number == 2)
        first = app.session.state.runs[0] if app.session else None
        assert first is not None
        assert run_of(app).plan.method == "secant"
        assert [each.x for each in run_of(app).iterates] == [each.x for each in first.iterates][:2]


async def test_the_log_follows_a_long_run_and_can_be_looked_through(tmp_path: Path) -> None:
    slow = Plan("newton-raphson", ("0.2",), max_steps=60, stop=Stop(x_relative="1e-10"))
    app = program(tmp_path, target=tailrace_session(tmp_path, slow))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("m", "backspace", "backspace", "5", "enter")
        await wait_until(pilot, lambda: run_of(app).steps == 5 and not app.working)
        await pilot.press("home")
        await pilot.pause()
        text = screen_text(app)
        assert "Start 0: y = 0.200000000 m, residual -1.18e+01." in text
        assert TAILRACE.title in text


@pytest.mark.parametrize("size", [(80, 24), (60, 20), (30, 10), (10, 3), (1, 1), (200, 50)])
async def test_any_size_of_terminal_is_survived(tmp_path: Path, size: tuple[int, int]) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path))
    async with app.run_test(size=size) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("space", "c", "z", "t", "t", "2", "4", "3", "space")
        await wait_until(pilot, lambda: run_of(app).steps == 2)
        assert app.fault is None


async def test_a_fixed_point_run_is_drawn_as_its_path_between_g_and_the_diagonal(tmp_path: Path) -> None:
    shipped = next((Path(__file__).parents[2] / "sessions").glob("*compressibility*.json"))
    path = tmp_path / "accumulator.json"
    path.write_bytes(shipped.read_bytes())
    app = program(tmp_path, target=path)
    async with app.run_test(size=(100, 30)) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("r", "up", "enter")
        await wait_until(pilot, lambda: run_of(app).number == 1)
        text = screen_text(app)
        assert "Step to 30: Z = g(0.98251701), dZ = -1.68e-08." in text
        assert "2.0 g" in text
        assert "30 steps taken and no test fired: |dx| = 1.6828717419592465e-08 > 1e-08" in text


async def test_a_question_leaves_the_log_in_sight(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("space", "n")
        await pilot.pause()
        text = screen_text(app)
        assert "Note for the record:" in text
        assert row(text, 1).startswith("   1  '6.1")


async def test_withdrawing_the_run_says_how_to_begin_another_and_numbers_go_on(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("backspace")
        await pilot.pause()
        assert app.session is not None
        assert app.session.state.run is None
        assert "No run yet: 2 goes to the method; give it its starts, and b begins the run." in screen_text(app)
        await pilot.press("2", "up", "b")
        await wait_until(pilot, lambda: app.session is not None and app.session.state.run is not None)
        assert "run 2 of 2" in screen_text(app)
