"""The method room: every key of a plan as a row, starts chosen on the picture, and what is wrong said at its row."""

from __future__ import annotations

from pathlib import Path

import pytest

from support.screens import NEWTON, message_of, program, tailrace_session, wait_until
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.methods.table import METHODS
from surefoot.screens.method import MethodRoom
from surefoot.screens.picking import Picking
from surefoot.screens.plan_form import PlanForm, form_of_plan, form_of_table

SIZE = (80, 24)


@pytest.mark.parametrize("code", METHODS)
def test_every_method_has_a_row_for_each_start_and_setting(code: str) -> None:
    keys = [row.key for row in PlanForm(code).rows()]
    method = METHODS[code]
    assert [key for key in keys if key.startswith("start ")] == [f"start {n + 1}" for n in range(method.traits.starts)]
    assert [f"settings.{setting.key}" for setting in method.settings] == [k for k in keys if k.startswith("settings.")]
    assert len(keys) == len(set(keys))


@pytest.mark.parametrize(
    "plan",
    [
        NEWTON,
        Plan("secant", ("0.01", "0x1.999999999999ap-5"), settings=(("form", "slope"),), max_steps=7),
        Plan(
            "newton-raphson",
            ("1e3",),
            control=Control(
                damping="0.5", bounds=("0", "10"), at_bound="reflect", derivative_every=3, order=("bounds",)
            ),
            stop=Stop(residual="1e-8", exact_zero=False, min_steps=2, combine="all", cap_is_success=True),
            arithmetic="binary32",
        ),
        Plan("bisection", ("0.1", "5"), stop=Stop(x_absolute="1e-6", test="", step_tested="raw", before_step=True)),
        Plan(
            "finite-difference-newton",
            ("2",),
            settings=(("h", "1e-6"), ("scheme", "central")),
            arithmetic="multiprecision:60",
        ),
    ],
)
def test_a_plan_survives_its_form(plan: Plan) -> None:
    again = form_of_plan(plan).plan()
    assert {**dict(again.settings)}.items() >= dict(plan.settings).items()
    assert (again.method, again.start, again.max_steps) == (plan.method, plan.start, plan.max_steps)
    assert (again.control, again.stop, again.arithmetic) == (plan.control, plan.stop, plan.arithmetic)


def test_a_table_of_a_problem_file_fills_the_rows() -> None:
    table = {
        "method": "secant",
        "start": ["0.01", "0.05"],
        "stop": {"exact_zero": False},
        "control": {"bounds": ["0", "1"]},
    }
    form = form_of_table(table, "binary32")
    assert form.values == {
        "start 1": "0.01",
        "start 2": "0.05",
        "stop.exact_zero": "false",
        "control.bounds": "0, 1",
        "arithmetic": "binary32",
    }


def test_a_row_put_back_to_its_default_is_not_part_of_the_plan() -> None:
    form = PlanForm("newton-raphson", {"start 1": "1", "control.damping": "0.5"})
    assert form.plan().control.damping == "0.5"
    assert form.with_value("control.damping", " ").plan().control.damping is None


@pytest.mark.parametrize(
    ("low", "high", "cells"), [(0.05, 6.0, 34), (-3.0, 4.0, 2), (1e-9, 2e-9, 30), (1e6, 1e6 + 1, 40)]
)
def test_the_cursor_reads_as_a_short_decimal_inside_its_cell(low: float, high: float, cells: int) -> None:
    cell = (high - low) / (cells - 1)
    for place in range(cells):
        picking = Picking(1, low, high, cells, place)
        assert abs(picking.x - (low + place * cell)) <= 0.5 * cell
        assert float(picking.text) == picking.x
    assert Picking(1, low, high, cells).moved(-5).place == 0
    assert Picking(1, low, high, cells).moved(500).place == cells - 1


async def test_a_start_is_chosen_on_the_picture_and_the_run_begins_there(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path, plan=None))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: isinstance(app.screen, MethodRoom))
        await pilot.press("s", "shift+right", "left", "enter")
        room = app.screen
        assert isinstance(room, MethodRoom)
        start = room.form.values["start 1"]
        assert 0.05 < float(start) < 6.0
        await pilot.press("b")
        await wait_until(pilot, lambda: app.session is not None and app.session.state.run is not None)
        assert app.session is not None
        run = app.session.state.run
        assert run is not None
        assert run.plan.start == (start,)
        assert run.current.x == float(start)


async def test_what_is_wrong_with_a_plan_is_said_and_the_cursor_goes_there(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path, plan=None))
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: isinstance(app.screen, MethodRoom))
        await pilot.press("b")
        await pilot.pause()
        room = app.screen
        assert isinstance(room, MethodRoom)
        assert app.session is not None
        assert app.session.state.run is None
        assert (room.in_methods, room.form.rows()[room.at].key) == (False, "start 1")
        assert "start" in message_of(app)
