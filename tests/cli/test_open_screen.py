"""`surefoot` and `surefoot FILE`: what must hold before the screens open, and what they are given."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from support.command import SUREFOOT, Home, complaint
from support.terminal import Terminal
from surefoot.cli.exits import Exit
from surefoot.cli.main import main


@pytest.fixture
def given(monkeypatch: pytest.MonkeyPatch) -> dict[str, Any]:
    """What the screens are opened with, in place of opening them."""
    found: dict[str, Any] = {}

    def run_app(target: Path | None, **options: Any) -> int:
        found.update(options, target=target)
        return 7

    monkeypatch.setattr("surefoot.screens.app.run_app", run_app)
    return found


def test_without_words_and_settings(home: Home, given) -> None:
    assert main([]) == 7
    folder = home.folder / "data" / "surefoot" / "sessions"
    assert given == {"target": None, "folder": folder, "by": None, "ascii_only": None, "look": None}


def test_settings_are_handed_on_and_words_go_before_them(home: Home, given) -> None:
    settings = home.folder / "config" / "surefoot"
    settings.mkdir(parents=True)
    (settings / "config.toml").write_text('by = "M. R."\nlook = "dark"\nascii = false\nsessions = "/srv/solves"\n')
    main([])
    expected = {"target": None, "folder": Path("/srv/solves"), "by": "M. R.", "ascii_only": False, "look": "dark"}
    assert given == expected
    (home.folder / "p.toml").write_text("")
    main(["p.toml", "--by", "K. L.", "--look", "light", "--ascii", "--sessions", "here"])
    assert given == {
        "target": Path("p.toml"),
        "folder": Path("here"),
        "by": "K. L.",
        "ascii_only": True,
        "look": "light",
    }


@pytest.mark.parametrize(
    ("word", "line"),
    [
        ("gone.json", "gone.json: there is no such file; check the path"),
        ("./", "./: is a folder; write surefoot --sessions with it"),
    ],
)
def test_what_cannot_be_opened_is_one_line(home: Home, given, capsys, word: str, line: str) -> None:
    assert main([word]) == Exit.REQUEST
    assert complaint(capsys.readouterr().err) == line
    assert not given


def test_a_bad_setting_is_one_line(home: Home, given, capsys) -> None:
    settings = home.folder / "config" / "surefoot"
    settings.mkdir(parents=True)
    (settings / "config.toml").write_text("look = 3\n")
    assert main([]) == Exit.REQUEST
    assert complaint(capsys.readouterr().err).endswith("config.toml: look: must be a text in quotes")


def test_without_a_terminal_one_line_says_so(home: Home) -> None:
    result = home.run()
    assert (result.returncode, result.stdout) == (Exit.REQUEST, b"")
    assert "need a terminal" in complaint(result.stderr)


def test_a_terminal_that_cannot_place_text_is_refused(home: Home) -> None:
    environment = {**home.environment, "TERM": "dumb"}
    with Terminal(SUREFOOT, environment=environment, folder=home.folder) as seen:
        assert seen.wait_end() == Exit.REQUEST
        assert seen.text.startswith("surefoot: TERM=dumb")


def test_a_fault_in_the_screens_is_one_line_and_a_report(home: Home) -> None:
    code = (
        "import sys; from surefoot.screens.opening import OpeningRoom\n"
        "def fail(self): raise RuntimeError('what now')\n"
        "OpeningRoom.draw = fail\n"
        "from surefoot.cli.main import main; sys.exit(main([]))"
    )
    words = [SUREFOOT[0], "-c", code]
    with Terminal(words, environment=home.environment, folder=home.folder) as seen:
        assert seen.wait_end() == Exit.FAULT
        left = seen.after_the_screens
    [report] = (home.folder / "state" / "surefoot").iterdir()
    assert "RuntimeError: what now" in report.read_text()
    assert "Traceback" not in left
    assert "this is a fault of surefoot (RuntimeError)" in left.replace("\r\n", "")
