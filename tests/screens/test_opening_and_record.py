"""The opening room, the record room, and how the program is left."""

from __future__ import annotations

from pathlib import Path

import pytest

from support.screens import TAILRACE, message_of, program, screen_text, tailrace_session, wait_until
from surefoot.screens.commands import EVERYWHERE, FIELD, PLACES, ROOMS, keys_of
from surefoot.screens.driver import AsciiDriver, wants_ascii
from surefoot.screens.leaving import leaving_line
from surefoot.screens.looks import LOOKS
from surefoot.screens.opening import OpeningRoom, session_lines
from surefoot.screens.rooms import make_room
from surefoot.screens.steps import StepsRoom
from surefoot.session.commands import TakeSteps
from surefoot.session.session import Session
from surefoot.session.summary import Summary

SIZE = (80, 24)


async def test_an_empty_folder_says_what_to_do_first(tmp_path: Path) -> None:
    app = program(tmp_path)
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: isinstance(app.screen, OpeningRoom))
        text = screen_text(app)
        assert "No sessions here yet." in text
        assert "o   opens the problem file" in text
        await pilot.press("enter")
        await pilot.pause()
        assert "n begins a new one" in message_of(app)


async def test_enter_resumes_the_session_under_the_cursor(tmp_path: Path) -> None:
    path = tailrace_session(tmp_path)
    app = program(tmp_path)
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: TAILRACE.title[:25] in screen_text(app))
        assert "stepping" in screen_text(app)
        await pilot.press("enter")
        await wait_until(pilot, lambda: app.session is not None and isinstance(app.screen, StepsRoom))
        assert app.session is not None
        assert app.session.path == path
        await pilot.press("w")
        await wait_until(pilot, lambda: isinstance(app.screen, OpeningRoom))
        assert app.session is None


async def test_the_filter_shows_only_what_has_its_letters(tmp_path: Path) -> None:
    tailrace_session(tmp_path)
    app = program(tmp_path)
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: isinstance(app.screen, OpeningRoom))
        await pilot.press("slash", *"penstock", "enter")
        await wait_until(pilot, lambda: "No session has 'penstock' in it" in screen_text(app))
        await pilot.press("slash", *(["backspace"] * 8), *"TAIL", "enter")
        await wait_until(pilot, lambda: "1 of 1 with 'TAIL'" in screen_text(app))


async def test_a_file_that_is_no_session_is_listed_with_its_fault_and_not_opened(tmp_path: Path) -> None:
    (tmp_path / "torn.json").write_text("{", encoding="utf-8")
    app = program(tmp_path)
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: isinstance(app.screen, OpeningRoom))
        assert "cannot be read: " in screen_text(app)
        await pilot.press("enter")
        await pilot.pause()
        assert app.session is None


async def test_the_record_lists_every_event_and_recomputes(tmp_path: Path) -> None:
    path = tailrace_session(tmp_path)
    with Session.open(path, by="M. R., duty") as session:
        session.do(TakeSteps(None))
        steps = session.state.run.steps if session.state.run else 0
    app = program(tmp_path, target=path)
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("4")
        await pilot.pause()
        text = screen_text(app)
        assert text.count("step taken") == steps
        assert str(path)[:40] in text
        await pilot.press("r")
        await wait_until(pilot, lambda: "reproduced" in screen_text(app) and not app.working)


async def test_leaving_says_outcome_root_unit_and_file(tmp_path: Path) -> None:
    path = tailrace_session(tmp_path)
    with Session.open(path, by="M. R., duty") as session:
        assert (
            leaving_line(session)
            == f"surefoot: stepping at y = 0.20000000000000001 m, residual -11.764279953227335; {path}"
        )
        session.do(TakeSteps(None))
        assert leaving_line(session) == f"surefoot: converged, y = 1.7831627143022979 m; {path}"
    assert leaving_line(None) == ""


async def test_the_name_is_asked_once_and_needed(tmp_path: Path) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path))
    app.by = ""
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: "Who is at the keyboard?" in screen_text(app))
        await pilot.press("enter")
        await pilot.pause()
        assert "a name is needed" in screen_text(app)
        await pilot.press(*"K. L.", "enter")
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("space")
        await pilot.pause()
        assert app.session is not None
        assert app.session.state.by == "K. L."


@pytest.mark.parametrize("place", PLACES)
def test_every_key_of_the_table_has_its_handler_and_no_two_clash(place: str) -> None:
    room, keys = make_room(place), keys_of(place)
    for key in keys:
        assert callable(getattr(room, f"do_{key.action}")), key.action
    pressed = [name for key in keys for name in key.keys]
    assert len(pressed) == len(set(pressed))
    assert all(key.label and key.meaning.endswith(".") for key in (*keys, *FIELD, *EVERYWHERE))
    assert set(ROOMS) < set(PLACES)


@pytest.mark.parametrize("place", PLACES)
async def test_the_page_of_keys_shows_each_of_them(tmp_path: Path, place: str) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path) if place in ROOMS else None)
    async with app.run_test(size=(80, 40)) as pilot:
        await wait_until(pilot, lambda: place == "opening" or app.session is not None)
        app.go(place)
        await pilot.press("escape", "f1")
        await pilot.pause()
        text = screen_text(app)
        for key in keys_of(place):
            assert f"  {key.shown.ljust(11)}{key.meaning}" in text


def test_a_long_list_of_sessions_keeps_the_cursor_in_sight() -> None:
    many = [Summary(Path(f"{n}.json"), title=f"case {n}", phase="ended", outcome="converged") for n in range(100)]
    lines = session_lines(many, 57, 80, 10)
    assert len(lines) == 10
    assert [text.split()[2] for text, here in lines if here] == ["57"]
    assert all(len(text) <= 80 for text, _ in lines)


@pytest.mark.parametrize(
    ("environment", "ascii_only"),
    [
        ({"LANG": "C"}, True),
        ({}, True),
        ({"LANG": "en_US.UTF-8"}, False),
        ({"LANG": "en_US.UTF-8", "LC_ALL": "C"}, True),
        ({"LC_CTYPE": "C.utf8"}, False),
        ({"LANG": "de_DE.ISO-8859-1"}, True),
    ],
)
def test_the_locale_decides_between_unicode_and_ascii(environment: dict[str, str], ascii_only: bool) -> None:
    assert wants_ascii(environment) is ascii_only


def test_the_ascii_driver_sends_one_ascii_cell_for_every_glyph() -> None:
    shown = "─│┌┼⠁⣿█░•…→≤²√Δ y"
    sent = shown.translate(AsciiDriver._translation)
    assert sent.isascii()
    assert len(sent) == len(shown)


@pytest.mark.parametrize("look", LOOKS)
@pytest.mark.parametrize("ascii_only", [False, True])
async def test_every_look_shows_the_same_text(tmp_path: Path, look: str, ascii_only: bool) -> None:
    app = program(tmp_path, target=tailrace_session(tmp_path), look=look, ascii_only=ascii_only)
    async with app.run_test(size=SIZE) as pilot:
        await wait_until(pilot, lambda: app.session is not None)
        await pilot.press("space", "space")
        await pilot.pause()
        text = screen_text(app)
        assert "slope 66.41" in text
        assert "2  '3.6744937709969063 +4.28e+01 -2.4e+00" in text
        assert text.isascii() is ascii_only
