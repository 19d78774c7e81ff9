"""Whatever words and files are given, the answer is an exit code, at most one line on standard error, no traceback."""

from __future__ import annotations

import os
import random
import string

from support.command import Home
from support.problem_files import COLEBROOK, SECANT, write
from surefoot.cli.arguments import ABSENT_COMMANDS, ABSENT_OPTIONS, COMMANDS
from surefoot.cli.exits import Exit
from surefoot.cli.faults import state_folder
from surefoot.cli.main import main

SEED = 20261201
TRIALS = 400

FILES = [
    "colebrook.toml",
    "s.json",
    "junk.json",
    "junk.toml",
    "empty.json",
    ".",
    "gone.json",
    "../up.toml",
    "/dev/null",
]
OPTIONS = sorted({option.name for command in COMMANDS.values() for option in command.options})
WORDS = [
    *COMMANDS,
    *ABSENT_COMMANDS,
    *OPTIONS,
    *(name for names in ABSENT_OPTIONS.values() for name in names),
    *FILES,
    *[
        "--",
        "-",
        "-h",
        "--help",
        "--version",
        "--look=plain",
        "--run=1",
        "1",
        "-1",
        "\0",
        "\udcff",
        "a\nb",
        "%s{}",
        "ü",
    ],
]


def random_words(source: random.Random) -> list[str]:
    words = [source.choice(WORDS) for _ in range(source.randrange(6))]
    if source.random() < 0.2:
        words.append("".join(source.choices(string.printable, k=source.randrange(30))))
    if source.random() < 0.5:
        words.insert(0, source.choice(["run", "recompute", "table"]))
    return words


def test_any_words_give_an_exit_code_and_no_traceback(home: Home, capsys, monkeypatch) -> None:
    write(home.folder, COLEBROOK + SECANT)
    assert main(["run", "colebrook.toml", "--save", "s.json"]) == Exit.GOOD
    source = random.Random(SEED)
    (home.folder / "junk.json").write_bytes(source.randbytes(500))
    (home.folder / "junk.toml").write_bytes(source.randbytes(500))
    (home.folder / "empty.json").write_bytes(b"")
    monkeypatch.setattr(os, "isatty", lambda number: False)
    capsys.readouterr()
    for _ in range(TRIALS):
        words = random_words(source)
        code = main(words)
        seen = capsys.readouterr()
        told = f"seed {SEED}, words {words!a}"
        assert code in (Exit.GOOD, Exit.OTHER, Exit.REQUEST), told
        assert "Traceback" not in seen.out + seen.err, told
        lines = seen.err.splitlines()
        assert all(line.startswith("surefoot: ") for line in lines), told
        assert len(lines) == (1 if code == Exit.REQUEST else 0) or words[0] == "recompute", told
    assert not state_folder().exists()
