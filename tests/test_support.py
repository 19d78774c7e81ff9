"""The terminal of the tests does to a program what a terminal does."""

from __future__ import annotations

import signal
import sys
from pathlib import Path

import pytest

from support.command import Home
from support.terminal import Terminal

ECHO = """
import sys, tty
tty.setraw(0)
sys.stdout.write("\\x1b[?1049h\\x1b[>1u\\x1b[?2026$p\\x1b[2J\\x1b[Hready \\u2500\\u28ff\\r\\n")
sys.stdout.flush()
typed = ""
while not typed.endswith("q"):
    typed += sys.stdin.read(1)
    sys.stdout.write("\\x1b[2;1H" + ascii(typed) + "\\x1b[K")
    sys.stdout.flush()
sys.stdout.write("\\x1b[<u\\x1b[?1049l" + "left in order\\r\\n")
sys.exit(7)
"""


def terminal(tmp_path: Path, program: str) -> Terminal:
    return Terminal([sys.executable, "-c", program], environment=Home(tmp_path).environment, folder=tmp_path)


def test_keys_go_in_and_the_screen_comes_out(tmp_path: Path) -> None:
    with terminal(tmp_path, ECHO) as seen:
        seen.wait_for("ready ─⣿")
        assert seen.lines[0] == "ready ─⣿"
        seen.press("a", "up", "backspace")
        seen.wait_for(ascii("a\x1b[A\x7f"))
        seen.paste("x\ny")
        seen.wait_for(ascii("a\x1b[A\x7f\x1b[200~x\ny\x1b[201~"))
        seen.press("q")
        assert seen.wait_end() == 7
        assert seen.after_the_screens == "left in order\r\n"


def test_a_wait_that_is_not_met_fails_with_the_screen(tmp_path: Path) -> None:
    with terminal(tmp_path, ECHO) as seen:
        seen.wait_for("ready")
        with pytest.raises(AssertionError, match=r"waited for gone; the program still runs; screen:\nready"):
            seen.wait_for("gone", limit=0.05)


def test_a_program_that_ends_meets_no_wait(tmp_path: Path) -> None:
    with (
        terminal(tmp_path, "import sys; sys.exit(3)") as seen,
        pytest.raises(AssertionError, match=r"the program (ended with 3|still runs)"),
    ):
        seen.wait_for("gone")


def test_closing_the_terminal_hangs_the_program_up(tmp_path: Path) -> None:
    with terminal(tmp_path, "print('ready', flush=True); input()") as seen:
        seen.wait_for("ready")
        seen.hang_up()
        assert seen.process.wait(10) == -signal.SIGHUP


def test_the_program_learns_the_size(tmp_path: Path) -> None:
    program = "import os; print(os.get_terminal_size()); input(); print(os.get_terminal_size()); input()"
    with terminal(tmp_path, program) as seen:
        seen.wait_for("columns=80, lines=24")
        seen.resize(120, 40)
        seen.press("enter")
        seen.wait_for("columns=120, lines=40")
        assert len(seen.lines) == 40
