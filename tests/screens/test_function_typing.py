"""The function room, typed into at 80x24: first what the session and the fields hold, then what the screen shows."""

from __future__ import annotations

import time
from pathlib import Path

import pytest

from support.function_room import fill, function_room, paste, room_of, settle
from support.screens import BY, TAILRACE, message_of, screen_text, tailrace_session, wait_until
from surefoot.equation.problem import Input, Problem
from surefoot.screens.form import Form, form_of
from surefoot.screens.typed import typed_of
from surefoot.session.session import Session

COLEBROOK = "1/sqrt(f) = -2*log10(eps/(3.7*D) + 2.51/(Re*sqrt(f)))"
PIPE = Form(
    title="Friction in the penstock",
    unknown="f",
    low="0.005",
    high="0.1",
    equation=COLEBROOK,
    inputs="eps = 1e-4 m\nD = 0.9 m [0.8, 1.0]\nRe = 1e5",
)


# -- opening --------------------------------------------------------------------------------------------------------


async def test_the_empty_room_offers_file_source_and_typing_in_this_order(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, _, room):
        assert app.session is None
        assert room.focused is None
        lines = screen_text(app).splitlines()
        ways = [line.split()[0] for line in lines[5:20] if line.strip()]
        assert ways == ["o", "p", "enter"]
        assert "no problem yet" in lines[2]


async def test_enter_shows_the_form_with_the_cursor_in_the_equation(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await pilot.press("enter")
        await pilot.pause()
        assert room.view.place == ("equation", 1, 1)
        text = screen_text(app)
        for label in ("title", "unknown", "unit", "range", "needed", "equation", "where", "inputs"):
            assert f" {label}" in text
        assert "cyl_bessel_j" in text


async def test_typing_is_read_after_a_pause_and_shown_as_it_was_read(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await pilot.press("enter", *COLEBROOK)
        await wait_until(pilot, lambda: room.reading.equation is not None)
        assert room.typed.form.equation == COLEBROOK
        assert room.reading.nameless == ("f", "eps", "D", "Re")
        text = screen_text(app)
        assert " no value f, eps, D, Re" in text
        assert " read as  ─────── - ⎜-2 * log10⎜───── + ──────────⎟⎟" in text
        assert "not accepted yet" in text


async def test_enter_goes_from_the_equation_to_the_unknown_and_lines_for_the_names_appear(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await pilot.press("enter", *COLEBROOK, "enter")
        await pilot.pause()
        assert room.view.place == ("unknown", 1, 1)
        await pilot.press("f", "enter")
        await pilot.pause()
        assert room.view.place == ("unit", 1, 1)
        assert room.typed.form.inputs == "eps = \nD = \nRe = "
        assert "eps =" in screen_text(app)


async def test_the_one_name_that_is_left_becomes_the_unknown(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await pilot.press("enter", *"x^2 = 2", "enter")
        await wait_until(pilot, lambda: room.typed.form.unknown == "x")
        assert room.reading.problem == Problem("x", "x^2 = 2")
        assert "x is taken as the unknown" in screen_text(app)


async def test_tab_goes_through_all_fields_and_back(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (_, pilot, room):
        await pilot.press("enter")
        seen = []
        for _ in range(9):
            await pilot.press("tab")
            assert room.view.place is not None
            seen.append(room.view.place[0])
        assert seen == ["where", "inputs", "title", "unknown", "unit", "low", "high", "needed", "equation"]
        await pilot.press("shift+tab")
        assert room.view.place == ("needed", 1, 1)


async def test_escape_leaves_the_field_and_single_keys_act(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await pilot.press("enter", "a", "escape")
        await pilot.pause()
        assert room.typed.form.equation == "a"
        assert room.focused is None
        await pilot.press("question_mark")
        await pilot.pause()
        assert "While typing in a field" in screen_text(app)


async def test_a_title_with_a_question_mark_and_digits_is_text(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, Form(equation="x"))
        room.view.enter_field("title")
        await pilot.press(*"why 2? a")
        await pilot.pause()
        assert room.view.form.title == "why 2? a"
        assert app.screen is room


# -- errors ---------------------------------------------------------------------------------------------------------


async def test_the_first_error_is_shown_at_its_column(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, Form(unknown="x", equation="x + 2*(3 - ", inputs="a = 1"))
        lines = screen_text(app).splitlines()
        at = next(index for index, line in enumerate(lines) if line.startswith(" open"))
        assert "equation, column 12" in lines[at]
        under = next(line for line in lines[at:] if line.strip() == "^")
        above = lines[lines.index(under) - 1]
        assert above.strip() == "x + 2*(3 -"
        assert under.index("^") - above.index("x") == 11


async def test_accepting_puts_the_cursor_at_the_error(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, Form(unknown="y", equation="A = 2", where="B = 1\nA = y*(B +* 2)"))
        await pilot.press("a")
        await pilot.pause()
        assert app.session is None
        assert room.view.place == ("where", 2, 11)
        assert "where, line 2, column 11" in message_of(app)


async def test_accepting_an_empty_form_says_what_is_missing(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await pilot.press("a")
        await pilot.pause()
        assert app.session is None
        assert room.view.place == ("unknown", 1, 1)
        assert "unknown: not named yet" in screen_text(app)


async def test_a_long_equation_wraps_and_its_error_is_shown_around_its_place(tmp_path: Path) -> None:
    equation = " + ".join(f"c{number}*x^{number}" for number in range(30)) + " + )"
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, Form(unknown="x", equation=equation))
        lines = screen_text(app).splitlines()
        under = next(line for line in lines if line.strip() == "^")
        above = lines[lines.index(under) - 1]
        assert above[10:].startswith("...")
        assert above[under.index("^")] == ")"
        assert "c0*x^0 + c1*x^1" in lines[6]
        assert all(len(line) <= 80 for line in lines)


# -- accepting ------------------------------------------------------------------------------------------------------


async def test_accepting_makes_a_session_with_the_problem_and_goes_to_the_method(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, PIPE)
        await pilot.press("a")
        await settle(pilot, app)
        assert app.session is not None
        state = app.session.state
        assert (state.phase, state.title, state.by) == ("planning", "Friction in the penstock", BY)
        assert state.stated is not None
        assert form_of(state.stated.problem) == PIPE
        assert state.stated.problem.inputs[1] == Input("D", "0.9", "m", low="0.8", high="1.0")
        assert app.session.path.parent == tmp_path
        assert app.session.path.name.endswith("-friction-in-the-penstock.json")
        assert app.screen.id != room.id or app.screen is not room
        assert "[2 method]" in screen_text(app)
    with Session.open(app.session.path, by=BY, read_only=True) as again:
        assert again.state.stated == state.stated


async def test_an_accepted_problem_shows_its_derivative(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, Form(unknown="x", equation="x^3 = a", inputs="a = 2"))
        await pilot.press("a")
        await settle(pilot, app)
        await pilot.press("1")
        await wait_until(pilot, lambda: "df/dx" in screen_text(app))
        assert app.session is not None
        assert app.session.state.stated is not None
        assert app.session.state.stated.derivatives[0].text == "3*x^2"
        text = screen_text(app)
        assert " df/dx    3*x^2" in text
        assert " problem 1\n" in text
        assert room.view.form == Form(unknown="x", equation="x^3 = a", inputs="a = 2")


async def test_the_kept_gap_of_a_derivative_is_said(tmp_path: Path) -> None:
    async with function_room(tmp_path, size=(80, 40)) as (app, pilot, room):
        await fill(pilot, room, Form(unknown="x", equation="abs(x) = 1"))
        await pilot.press("a")
        await settle(pilot, app)
        await pilot.press("1")
        await wait_until(pilot, lambda: "df/dx" in screen_text(app))
        assert app.session is not None
        assert app.session.state.stated is not None
        (gap,) = app.session.state.stated.derivatives[0].gaps
        assert gap in screen_text(app)


async def test_ctrl_s_accepts_from_within_a_field(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, _):
        await pilot.press("enter", *"x^2 = 2", "ctrl+s")
        await settle(pilot, app)
        assert app.session is not None
        assert app.session.state.stated is not None
        assert app.session.state.stated.problem == Problem("x", "x^2 = 2")


async def test_the_name_is_asked_for_before_the_first_event(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        app.by = ""
        await fill(pilot, room, Form(unknown="x", equation="x = 1"))
        await pilot.press("a")
        await pilot.pause()
        assert app.session is None
        await pilot.press(*"A. N.", "enter")
        await settle(pilot, app)
        assert app.session is not None
        assert app.session.state.by == "A. N."


async def test_an_unchanged_problem_makes_no_event(tmp_path: Path) -> None:
    session = tailrace_session(tmp_path, plan=None)
    async with function_room(tmp_path, session=session) as (app, pilot, room):
        assert room.view.form == form_of(TAILRACE)
        assert app.session is not None
        before = app.session.state.events
        await pilot.press("a")
        await settle(pilot, app)
        assert app.session.state.events == before
        text = screen_text(app)
        assert "[2 method]" in text
        assert "nothing changed" in text


async def test_a_changed_problem_is_a_new_one_and_the_old_run_keeps_its_own(tmp_path: Path) -> None:
    async with function_room(tmp_path, session=tailrace_session(tmp_path)) as (app, pilot, _):
        assert app.session is not None
        await pilot.press("3", "end")
        await settle(pilot, app)
        await pilot.press("1")
        await pilot.pause()
        room = room_of(app)
        room.view.enter_field("high")
        await pilot.press("end", "backspace", "5")
        await wait_until(pilot, lambda: "problem 1, changed and not accepted yet" in screen_text(app))
        await pilot.press("ctrl+s")
        await settle(pilot, app)
        state = app.session.state
        assert [stated.problem.range for stated in state.problems] == [("0.05", "6.0"), ("0.05", "6.5")]
        assert state.stated is not None
        assert state.stated.number == 2
        assert state.runs[0].stated.number == 1


async def test_while_a_run_is_under_way_the_fields_are_closed_and_the_keys_say_why(tmp_path: Path) -> None:
    async with function_room(tmp_path, session=tailrace_session(tmp_path)) as (app, pilot, room):
        assert app.session is not None
        before = app.session.state.events
        await pilot.press("tab")
        assert room.focused is None
        await pilot.press("enter")
        await pilot.pause()
        assert room.focused is None
        assert "the run in hand is under way" in screen_text(app)
        assert "(a accept)" in screen_text(app)
        assert app.session.state.events == before


async def test_withdrawing_the_problem_leaves_its_text_in_the_fields(tmp_path: Path) -> None:
    session = tailrace_session(tmp_path, plan=None)
    async with function_room(tmp_path, session=session) as (app, pilot, room):
        await pilot.press("backspace")
        await pilot.pause()
        assert app.session is not None
        assert app.session.state.stated is None
        assert room.view.form == form_of(TAILRACE)
        assert "not accepted yet" in screen_text(app)


async def test_throwing_away_shows_the_problem_in_force_again(tmp_path: Path) -> None:
    session = tailrace_session(tmp_path, plan=None)
    async with function_room(tmp_path, session=session) as (app, pilot, room):
        await pilot.press("enter", *"+1", "escape", "x")
        await pilot.pause()
        assert room.typed.changed
        await pilot.press("down", "enter")
        await pilot.pause()
        assert room.view.form == form_of(TAILRACE)
        assert "changed" not in screen_text(app)


# -- pasting into a field -------------------------------------------------------------------------------------------


async def test_a_paste_of_several_lines_is_one_change(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, Form(equation="x = a"))
        room.view.enter_field("inputs")
        await pilot.pause()
        paste(app, "a = 1\r\nb = 2\x1b[2J m\n")
        await wait_until(pilot, lambda: room.typed.form.inputs != "")
        assert room.typed.form.inputs == "a = 1\nb = 2\ufffd[2J m\n"
        await pilot.press("ctrl+underscore")
        await wait_until(pilot, lambda: room.typed.form.inputs == "")


async def test_a_paste_into_one_line_takes_its_first_line(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, Form(equation="x"))
        room.view.enter_field("title")
        await pilot.pause()
        paste(app, " Weir 3 \nsecond line")
        await wait_until(pilot, lambda: room.typed.form.title != "")
        assert room.typed.form.title == "Weir 3"


@pytest.mark.parametrize("field", ["equation", "title"])
async def test_a_megabyte_does_not_hang_the_keys(tmp_path: Path, field: str) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, Form(unknown="x", equation="x"))
        room.view.enter_field(field)
        await pilot.pause()
        before = time.monotonic()
        paste(app, "x+" * 500_000)
        await pilot.press("tab")
        await wait_until(pilot, lambda: room.view.place is not None and room.view.place[0] != field)
        assert time.monotonic() - before < 2.0
        if field == "equation":
            assert room.view.form.equation == "x"
            assert "1000000 characters are more than a field takes" in screen_text(app)


# -- what the form does not show ------------------------------------------------------------------------------------


async def test_what_the_form_does_not_show_is_said_and_stays(tmp_path: Path) -> None:
    problem = Problem("x", "x = a", admissible=("x > 0",), inputs=(Input("a", "1", uncertainty="0.1", source="log 3"),))
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, typed_of(problem))
        assert "kept too: admissible; uncertainty, source of a" in screen_text(app)
        room.view.enter_field("equation")
        await pilot.press("end", *"*2", "ctrl+s")
        await settle(pilot, app)
        assert app.session is not None
        assert app.session.state.stated is not None
        accepted = app.session.state.stated.problem
        assert accepted == Problem("x", "x = a*2", admissible=problem.admissible, inputs=problem.inputs)


# -- sizes and characters -------------------------------------------------------------------------------------------


@pytest.mark.parametrize("size", [(1, 1), (10, 3), (30, 10), (80, 24), (131, 20), (132, 20), (200, 50)])
async def test_every_size_of_terminal_is_drawn(tmp_path: Path, size: tuple[int, int]) -> None:
    session = tailrace_session(tmp_path, plan=None)
    async with function_room(tmp_path, session=session, size=size) as (app, pilot, _):
        await pilot.resize_terminal(*size)
        await pilot.pause()
        lines = screen_text(app).split("\n")
        assert len(lines) == size[1]
        if size[1] >= 20:
            assert any("Q = Qd" in line for line in lines)
            assert any("dy" in line or "df/dy" in line for line in lines)


async def test_a_wide_terminal_has_the_echo_beside_the_form(tmp_path: Path) -> None:
    session = tailrace_session(tmp_path, plan=None)
    async with function_room(tmp_path, session=session, size=(160, 24)) as (app, _, _room):
        lines = screen_text(app).splitlines()
        title = next(line for line in lines if line.startswith(" title"))
        assert "read as" in title[80:]


async def test_ascii_alone_will_do(tmp_path: Path) -> None:
    async with function_room(tmp_path, ascii_only=True) as (app, pilot, room):
        await fill(pilot, room, Form(unknown="f", equation=COLEBROOK, title="Reibung λ"))
        room.view.enter_field("where")
        await pilot.pause()
        echo = screen_text(app).split("inputs", 1)[1]
        assert echo.isascii()
        assert "sqrt(f)   \\          \\3.7*D" in echo
        assert app.session is None


async def test_the_page_of_readings_shows_all_of_it(tmp_path: Path) -> None:
    session = tailrace_session(tmp_path, plan=None)
    async with function_room(tmp_path, session=session) as (app, pilot, room):
        await pilot.press("r")
        await pilot.pause()
        text = screen_text(app)
        assert "read as  Q - Qd" in text
        assert "(b + z*y)*y" in text
        assert "df/dy" in text
        assert "esc goes back" in text
        await pilot.press("escape")
        await pilot.pause()
        assert app.screen is room


async def test_the_cursor_waits_where_the_first_value_is_to_be_typed(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (_, pilot, room):
        await fill(pilot, room, Form(unknown="y", equation="a*y = b"))
        room.view.enter_field("where")
        await pilot.press("tab")
        await pilot.pause()
        assert room.view.form.inputs == "a = \nb = "
        assert room.view.place == ("inputs", 1, 5)
        await pilot.press(*"2.5 m")
        assert room.view.form.inputs == "a = 2.5 m\nb = "
