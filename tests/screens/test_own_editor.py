"""Hand-over to the own editor: which one, what it leaves behind, and every way in which it can fail."""

from __future__ import annotations

import os
import signal
import sys
from pathlib import Path

import pytest

from surefoot.screens.own_editor import EditorError, edit, editor_command


def nothing_installed(program: str) -> None:
    """A machine without editors."""


def script(folder: Path, body: str) -> list[str]:
    """The command of an editor that does what `body` says; `path` is the file it is given."""
    program = folder / "editor.py"
    program.write_text(f"import os, signal, sys\npath = sys.argv[-1]\n{body}\n", encoding="utf-8")
    return [sys.executable, str(program)]


def test_visual_goes_before_editor_and_may_have_words_behind_it() -> None:
    named = {"VISUAL": "my-editor --wait 'a b'", "EDITOR": "other"}
    assert editor_command(named, nothing_installed) == ["my-editor", "--wait", "a b"]
    assert editor_command({"VISUAL": " ", "EDITOR": "other"}, nothing_installed) == ["other"]


def test_without_a_named_editor_an_installed_one_is_taken() -> None:
    assert editor_command({}, lambda program: f"/bin/{program}") == ["vi"]
    assert editor_command({}, lambda program: "/bin/nano" if program == "nano" else None) == ["nano"]


def test_without_any_editor_it_is_said_what_to_do() -> None:
    with pytest.raises(EditorError, match=r"no editor: set \$VISUAL or \$EDITOR"):
        editor_command({}, nothing_installed)


def test_a_name_that_is_no_command_is_refused() -> None:
    with pytest.raises(EditorError, match=r"\$EDITOR is no command"):
        editor_command({"EDITOR": "vi 'unclosed"}, nothing_installed)


def test_the_saved_text_comes_back(tmp_path: Path) -> None:
    body = "text = open(path, encoding='utf-8').read(); open(path, 'w', encoding='utf-8').write(text + 'α = 1\\n')"
    assert edit("format = 1\n", script(tmp_path, body)) == "format = 1\nα = 1\n"


def test_the_editor_sees_a_toml_file_and_nothing_is_left_behind(tmp_path: Path) -> None:
    body = f"open({str(tmp_path / 'seen')!r}, 'w').write(path)"
    assert edit("kept", script(tmp_path, body)) == "kept"
    seen = Path((tmp_path / "seen").read_text())
    assert seen.suffix == ".toml"
    assert not seen.parent.exists()


def test_an_editor_that_does_not_exist(tmp_path: Path) -> None:
    with pytest.raises(EditorError, match="cannot be handed to no-such-editor: No such file"):
        edit("text", ["no-such-editor"])


def test_an_editor_that_fails_keeps_what_it_saved(tmp_path: Path) -> None:
    with pytest.raises(EditorError, match="ended with status 3; nothing was taken over") as failed:
        edit("text", script(tmp_path, "open(path, 'w').write('half'); sys.exit(3)"))
    assert failed.value.text == "half"


def test_an_editor_that_fails_without_saving_leaves_nothing(tmp_path: Path) -> None:
    with pytest.raises(EditorError, match="ended with status 1") as failed:
        edit("text", script(tmp_path, "sys.exit(1)"))
    assert failed.value.text == ""


def test_an_editor_that_is_killed_keeps_what_it_saved(tmp_path: Path) -> None:
    body = "open(path, 'w').write('half'); os.kill(os.getpid(), signal.SIGKILL)"
    with pytest.raises(EditorError, match="ended by signal 9") as failed:
        edit("text", script(tmp_path, body))
    assert failed.value.text == "half"


def test_a_file_that_vanished(tmp_path: Path) -> None:
    with pytest.raises(EditorError, match="left no file"):
        edit("text", script(tmp_path, "os.remove(path)"))


def test_text_that_is_not_utf_8(tmp_path: Path) -> None:
    with pytest.raises(EditorError, match="not UTF-8"):
        edit("text", script(tmp_path, "open(path, 'wb').write(b'\\xff\\xfe')"))


def test_an_interrupt_ends_neither_the_program_nor_its_handler(tmp_path: Path) -> None:
    """The editor is interrupted as it would be by itself; the program goes on and hears interrupts as before."""
    before = signal.getsignal(signal.SIGINT)
    body = "os.kill(os.getppid(), signal.SIGINT); open(path, 'w').write(str(signal.getsignal(signal.SIGINT)))"
    assert "default_int_handler" in edit("text", script(tmp_path, body))
    assert signal.getsignal(signal.SIGINT) is before


def test_standard_output_that_leads_elsewhere_is_not_written_to(
    tmp_path: Path, capfd: pytest.CaptureFixture[str]
) -> None:
    assert not os.isatty(1)
    edit("text", script(tmp_path, "print('drawn')"))
    seen = capfd.readouterr()
    assert (seen.out, seen.err) == ("", "drawn\n")
