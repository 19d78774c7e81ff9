"""Version and help: short, complete, in the words of the table of commands."""

from __future__ import annotations

import pytest

from surefoot import __version__
from surefoot.cli.arguments import COMMANDS
from surefoot.cli.exits import Exit
from surefoot.cli.main import main


def printed(capsys, *words: str) -> str:
    assert main(words) == Exit.GOOD
    seen = capsys.readouterr()
    assert seen.err == ""
    return str(seen.out)


def test_the_version_is_one_line(capsys) -> None:
    assert printed(capsys, "--version") == f"surefoot {__version__}\n"


def test_the_help_names_every_command_and_exit_code(capsys) -> None:
    text = printed(capsys, "--help")
    for command in COMMANDS.values():
        assert f"surefoot {command.name} {command.operands}".replace("  ", " ") in text
        assert command.summary in text
    assert "Exit codes: 0" in text
    assert text == printed(capsys, "-h")


@pytest.mark.parametrize("name", [name for name in COMMANDS if name])
def test_the_help_of_a_command_names_every_option(capsys, name: str) -> None:
    text = printed(capsys, name, "--help")
    command = COMMANDS[name]
    assert text.startswith(f"surefoot {name} {command.operands}\n")
    for option in command.options:
        assert f"  {option.name} {option.value}".rstrip() in text
        assert option.meaning in text
    assert f"exit 0: {command.good}" in text


def test_every_line_of_the_help_fits_a_terminal_of_80_columns(capsys) -> None:
    texts = [printed(capsys, "--help"), *(printed(capsys, name, "--help") for name in COMMANDS if name)]
    assert max(len(line) for text in texts for line in text.splitlines()) <= 80
