"""Half-typed text survives whatever ends the program, and goes when it was accepted or thrown away."""

from __future__ import annotations

import json
import os
import sys
from dataclasses import replace
from itertools import cycle
from pathlib import Path

import pytest
from hypothesis import given

from support.command import Home
from support.function_room import fill, function_room, settle
from support.problems import problems, texts
from support.screens import TAILRACE, screen_text, tailrace_session, wait_until
from support.terminal import Terminal
from surefoot.equation.problem import Problem
from surefoot.screens import typing_room
from surefoot.screens.form import Form, form_of
from surefoot.screens.typed import Typed, draft_of, typed_from, typed_of
from surefoot.session.draft import Draft

EVERYTHING = Typed(Form(equation="x = ", inputs="a ="), TAILRACE, ("line 3: 1/3 is 0",), "format = 1\n[oops")


@pytest.fixture
def at_once(monkeypatch: pytest.MonkeyPatch) -> None:
    """Drafts are written soon after a change."""
    monkeypatch.setattr(typing_room, "DRAFT_AFTER", 0.01)


# -- the texts of a draft -------------------------------------------------------------------------------------------


def test_everything_half_done_comes_back() -> None:
    assert typed_from(draft_of(EVERYTHING)) == EVERYTHING


@given(problems(), texts)
def test_any_problem_comes_back(problem: Problem, text: str) -> None:
    typed = replace(typed_of(problem), editor_text=text)
    assert typed_from(json.loads(json.dumps(draft_of(typed)))) == typed


@pytest.mark.parametrize(
    "spoiled", [{"base": "nonsense"}, {"base": "[]"}, {"base": '{"unknown": 3}'}, {"base": "[" * 100_000}]
)
def test_texts_come_back_even_when_the_rest_cannot_be_read(spoiled: dict[str, str]) -> None:
    typed = typed_from({**draft_of(EVERYTHING), **spoiled})
    assert (typed.form, typed.editor_text) == (EVERYTHING.form, EVERYTHING.editor_text)
    assert typed_from({}) == Typed(Form())


# -- in the room ----------------------------------------------------------------------------------------------------


@pytest.mark.usefixtures("at_once")
async def test_typed_text_is_in_the_draft_soon_after_and_taken_up_again(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, _):
        await pilot.press("enter", *"x^2 = ")
        draft = Draft(tmp_path)
        await wait_until(pilot, lambda: (draft.load() or {}).get("equation") == "x^2 = ")
        assert app.session is None
    async with function_room(tmp_path) as (app, _, room):
        assert app.session is None
        assert room.view.form == Form(equation="x^2 = ")
        assert "half-typed text was taken up again" in screen_text(app)


async def test_leaving_keeps_what_was_typed_a_moment_ago(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, _):
        await pilot.press("enter", *"x^2", "ctrl+q")
        await pilot.pause()
        assert app.return_value == 0
    assert (Draft(tmp_path).load() or {})["equation"] == "x^2"


async def test_going_to_another_room_and_back_keeps_it_too(tmp_path: Path) -> None:
    session = tailrace_session(tmp_path, plan=None)
    async with function_room(tmp_path, session=session) as (_, pilot, room):
        await pilot.press("enter", *"+1", "alt+4")
        await pilot.pause()
        assert (Draft(session).load() or {})["equation"] == room.typed.form.equation
        await pilot.press("1")
        await pilot.pause()
        assert room.view.form.equation in ("+1Q = Qd", "Q = Qd+1")


@pytest.mark.usefixtures("at_once")
async def test_accepting_removes_the_draft(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, _):
        await pilot.press("enter", *"x^2 = 2")
        await wait_until(pilot, lambda: Draft(tmp_path).load() is not None)
        await pilot.press("ctrl+s")
        await settle(pilot, app)
        assert app.session is not None
        assert app.session.state.stated is not None
        await wait_until(pilot, lambda: not list(tmp_path.glob("*.draft")))


@pytest.mark.usefixtures("at_once")
async def test_the_draft_of_a_session_lies_beside_it_and_going_back_removes_it(tmp_path: Path) -> None:
    session = tailrace_session(tmp_path, plan=None)
    async with function_room(tmp_path, session=session) as (_, pilot, room):
        room.view.enter_field("needed")
        await pilot.press("1")
        await wait_until(pilot, lambda: session.with_suffix(".draft").exists())
        await pilot.press("backspace")
        await wait_until(pilot, lambda: not session.with_suffix(".draft").exists())
        assert room.view.form == form_of(TAILRACE)


@pytest.mark.usefixtures("at_once")
async def test_throwing_away_removes_the_draft(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (_, pilot, room):
        await pilot.press("enter", "x")
        await wait_until(pilot, lambda: Draft(tmp_path).load() is not None)
        await pilot.press("escape", "x", "down", "enter")
        await wait_until(pilot, lambda: Draft(tmp_path).load() is None)
        assert room.view.form == Form()


async def test_opening_the_room_and_leaving_it_touches_no_draft_of_another(tmp_path: Path) -> None:
    async with function_room(tmp_path) as (app, pilot, room):
        Draft(tmp_path).save(draft_of(Typed(Form(equation="theirs"))))
        room.keep_draft()
        await pilot.press("ctrl+q")
        await pilot.pause()
        assert app.session is None
    assert (Draft(tmp_path).load() or {})["equation"] == "theirs"


async def test_a_draft_that_cannot_be_written_is_said_and_typing_goes_on(tmp_path: Path) -> None:
    folder = tmp_path / "file"
    folder.write_text("no folder")
    async with function_room(folder) as (app, pilot, room):
        await fill(pilot, room, Form(equation="x"))
        room.keep_draft()
        await pilot.pause()
        assert "half-typed text is not kept" in screen_text(app)
        assert room.view.form.equation == "x"


async def test_a_withdrawn_problem_is_in_the_draft(tmp_path: Path) -> None:
    session = tailrace_session(tmp_path, plan=None)
    async with function_room(tmp_path, session=session) as (_, pilot, _room):
        await pilot.press("backspace", "ctrl+q")
        await pilot.pause()
    async with function_room(tmp_path, session=session) as (app, _, room):
        assert app.session is not None
        assert app.session.state.stated is None
        assert room.typed == typed_of(TAILRACE)


# -- from outside ---------------------------------------------------------------------------------------------------


def test_a_kill_loses_at_most_the_last_second(tmp_path: Path) -> None:
    home = Home(tmp_path)
    words = [sys.executable, "-m", "surefoot.cli", "--sessions", str(tmp_path / "s"), "--by", "A. N."]
    os.mkdir(tmp_path / "s")
    with Terminal(words, environment=home.environment, folder=tmp_path) as terminal:
        terminal.wait_for("begins a new one")
        terminal.press("n")
        terminal.wait_for("its equation: type it")
        terminal.press("enter")
        terminal.wait_for("where")
        terminal.send("x^2 = 2*a")
        terminal.wait_for("no value")
        draft, keys = Draft(tmp_path / "s"), cycle(("left", "right"))

        def drafted(seen: Terminal) -> bool:
            seen.press(next(keys))  # so that there is something to wait for; it changes no text
            return draft.load() is not None

        terminal.wait_until(drafted, limit=5)
        terminal.kill()
    with Terminal(words, environment=home.environment, folder=tmp_path) as terminal:
        terminal.wait_for("begins a new one")
        terminal.press("n")
        terminal.wait_for("x^2 = 2*a", "half-typed text was taken up again")
