"""The problem in the person's own editor: what it is given, what comes back, and every way it can go wrong."""

from __future__ import annotations

import contextlib
import sys
from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest

from support.command import Home
from support.function_room import fill, function_room, settle
from support.screens import TAILRACE, message_of, screen_text, tailrace_session, wait_until
from support.terminal import Terminal
from surefoot.equation.problem_file import read_problem_file
from surefoot.screens.app import SurefootApp
from surefoot.screens.form import Form, form_of
from surefoot.screens.problem_text import text_of
from surefoot.screens.typed import Typed, draft_of, typed_from, typed_of
from surefoot.session.draft import Draft

PIPE = Form(unknown="f", equation="f = a*b", inputs="a = 2\nb = 3 m")


@pytest.fixture
def hand_over(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> Any:
    """Let the program of a test have an editor that does what some lines of Python say; `text` is what it is given."""

    @contextlib.contextmanager
    def suspended(_: SurefootApp) -> Iterator[None]:
        yield

    def prepare(body: str) -> None:
        program = tmp_path / "editor.py"
        lines = f"import sys\npath = sys.argv[-1]\ntext = open(path, encoding='utf-8').read()\n{body}\n"
        program.write_text(lines + "open(path, 'w', encoding='utf-8').write(text)\n", encoding="utf-8")
        monkeypatch.setenv("VISUAL", f"{sys.executable} {program}")

    monkeypatch.setattr(SurefootApp, "suspend", suspended)
    return prepare


# -- the text for an editor -----------------------------------------------------------------------------------------


def test_a_whole_problem_is_given_as_its_problem_file() -> None:
    text = text_of(typed_of(TAILRACE), None)
    assert read_problem_file(text, "").problem == TAILRACE


def test_the_plan_of_the_file_goes_along() -> None:
    text = text_of(typed_of(TAILRACE), {"method": "secant", "start": ["1.0", "2.0"]})
    assert 'method = "secant"' in text


def test_an_empty_form_gives_a_template_that_says_what_to_write() -> None:
    text = text_of(Typed(Form()), None)
    assert 'equation = "" # left = right' in text
    assert 'unknown = "" # the name that is solved for' in text


def test_what_cannot_be_taken_yet_stands_above_as_comments() -> None:
    form = replace(PIPE, low="1,5", high="2", where="A = 1\nB =\nC", inputs="a = 2\nb = \nc 3", needed="x")
    text = text_of(Typed(form), None)
    head = text.partition("\n\n")[0].splitlines()
    assert head[0].startswith("# Not accepted yet")
    assert head[1:] == [
        "# range from: 1,5 to 2",
        "# needed: x",
        "# where: B =",
        "# where: C",
        "# inputs: b =",
        "# inputs: c 3",
    ]
    read = read_problem_file(text, "").problem
    assert [each.name for each in read.where] == ["A"]
    assert [each.name for each in read.inputs] == ["a"]


# -- in the room ----------------------------------------------------------------------------------------------------


async def test_an_edited_problem_fills_the_form(tmp_path: Path, hand_over: Any) -> None:
    hand_over("text = text.replace('a*b', 'a*b*2').replace('f = ', 'f = ')")
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, PIPE)
        await pilot.press("e")
        await wait_until(pilot, lambda: room.view.form.equation == "f = a*b*2")
        assert room.reading.problem is not None
        assert "taken from the editor" in screen_text(app)
        await pilot.press("a")
        await settle(pilot, app)
        assert app.session is not None
        assert app.session.state.stated is not None
        assert app.session.state.stated.problem.equation == "f = a*b*2"


async def test_hidden_keys_can_be_written_in_the_editor(tmp_path: Path, hand_over: Any) -> None:
    hand_over("text = text.replace('equation', 'note = \"as coded\"\\nequation', 1)")
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, PIPE)
        await pilot.press("e")
        await wait_until(pilot, lambda: room.typed.base.note == "as coded")
        await pilot.press("escape")
        await pilot.pause()
        assert "kept too: note" in screen_text(app)


async def test_unchanged_text_changes_nothing(tmp_path: Path, hand_over: Any) -> None:
    hand_over("")
    session = tailrace_session(tmp_path, plan=None)
    async with function_room(tmp_path, session=session) as (app, pilot, room):
        await pilot.press("e")
        await wait_until(pilot, lambda: "nothing changed" in screen_text(app))
        assert room.view.form == form_of(TAILRACE)
        assert not room.typed.changed


async def test_an_error_of_the_text_is_told_with_its_place_and_the_text_is_kept(tmp_path: Path, hand_over: Any) -> None:
    hand_over("text = text.replace('unknown', 'unknwon', 1)")
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, PIPE)
        await pilot.press("e")
        await wait_until(pilot, lambda: room.typed.editor_text != "")
        said = message_of(app)
        assert "unknwon" in said
        assert room.view.form == PIPE
        assert "unknwon" in (Draft(tmp_path).load() or {})["editor_text"]
        hand_over("text = text.replace('unknwon', 'unknown', 1).replace('a*b', 'a')")
        await pilot.press("e")
        await wait_until(pilot, lambda: room.view.form.equation == "f = a")
        assert room.typed.editor_text == ""


async def test_an_error_of_the_equation_is_shown_at_its_column_in_its_field(tmp_path: Path, hand_over: Any) -> None:
    hand_over("text = text.replace('a*b', 'a*(b')")
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, PIPE)
        await pilot.press("e")
        await wait_until(pilot, lambda: room.view.form.equation == "f = a*(b")
        assert room.view.place == ("equation", 1, 9)
        assert "equation, column 9" in message_of(app)


async def test_when_the_form_changed_since_it_is_asked_which_text_to_edit(tmp_path: Path, hand_over: Any) -> None:
    hand_over("text = 'broken ['")
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, PIPE)
        await pilot.press("e")
        await wait_until(pilot, lambda: room.typed.editor_text == "broken [")
        room.view.enter_field("title")
        await pilot.press("T", "escape")
        hand_over("text = text.replace('a*b', 'a')")
        await pilot.press("e")
        await pilot.pause()
        assert "Edit which of the two?" in screen_text(app)
        await pilot.press("down", "enter")
        await wait_until(pilot, lambda: room.view.form == replace(PIPE, title="T", equation="f = a"))


@pytest.mark.parametrize(
    ("body", "words"),
    [
        ("sys.exit(2)", "ended with status 2; nothing was taken over"),
        ("import os; os.remove(path); sys.exit(0)", "left no file; nothing was taken over"),
        ("import os; os.kill(os.getpid(), 9)", "was ended by signal 9"),
    ],
)
async def test_an_editor_that_fails_changes_nothing(tmp_path: Path, hand_over: Any, body: str, words: str) -> None:
    hand_over(body)
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, PIPE)
        await pilot.press("e")
        await wait_until(pilot, lambda: words in screen_text(app))
        assert room.view.form == PIPE
        assert room.typed.editor_text == ""


async def test_without_an_editor_one_line_says_what_to_set(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    for name in ("VISUAL", "EDITOR"):
        monkeypatch.delenv(name, raising=False)
    monkeypatch.setenv("PATH", str(tmp_path))
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, PIPE)
        await pilot.press("e")
        await wait_until(pilot, lambda: "no editor: set $VISUAL or $EDITOR" in screen_text(app))


async def test_a_terminal_that_cannot_be_given_up_is_said(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("VISUAL", "true")
    async with function_room(tmp_path) as (app, pilot, room):
        await fill(pilot, room, PIPE)
        await pilot.press("e")
        await wait_until(pilot, lambda: "cannot be handed to an editor" in screen_text(app))


async def test_a_text_kept_for_the_editor_survives_the_program(tmp_path: Path, hand_over: Any) -> None:
    Draft(tmp_path).save(draft_of(Typed(PIPE, editor_text="kept [")))
    hand_over(f"open({str(tmp_path / 'seen')!r}, 'w').write(text); sys.exit(1)")
    async with function_room(tmp_path) as (_, pilot, room):
        assert room.typed == typed_from(draft_of(Typed(PIPE, editor_text="kept [")))
        room._form_at_editor = PIPE
        await pilot.press("e")
        await wait_until(pilot, lambda: (tmp_path / "seen").exists())
        assert (tmp_path / "seen").read_text() == "kept ["


# -- on a real terminal ---------------------------------------------------------------------------------------------


def test_the_screen_is_whole_again_after_the_editor(tmp_path: Path) -> None:
    """The editor draws over the screen; afterwards every line of the room is there as before."""
    editor = tmp_path / "editor.py"
    editor.write_text(
        "import sys\nprint('\\x1b[2J\\x1b[H' + 'EDITOR ' * 200)\ninput('return when done')\n"
        "text = open(sys.argv[1]).read()\nopen(sys.argv[1], 'w').write(text.replace('Q = Qd', 'Q = 2*Qd'))\n"
    )
    session = tailrace_session(tmp_path / "s", plan=None)
    home = Home(tmp_path, {"VISUAL": f"{sys.executable} {editor}"})
    words = [sys.executable, "-m", "surefoot.cli", "--by", "A. N.", str(session)]
    with Terminal(words, environment=home.environment, folder=tmp_path) as terminal:
        terminal.wait_for("[2 method]")
        terminal.press("1")
        terminal.wait_for("df/dy", "b = 3.0 m")
        before = terminal.lines
        terminal.press("e")
        terminal.wait_for("return when done")
        terminal.press("enter")
        terminal.wait_for("Q = 2*Qd", "taken from the editor")
        terminal.wait_until(lambda seen: "EDITOR" not in seen.text, what="the editor's text to be gone")
        same = [at for at in range(24) if before[at] == terminal.lines[at]]
        assert {0, 1, 3, 4, 5, 7, 8, 9, 10, 11, 12} <= set(same)
        terminal.press("escape", "ctrl+q")
        assert terminal.wait_end() == 0
