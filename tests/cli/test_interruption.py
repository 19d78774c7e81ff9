"""Signals during a run: what was computed is on disk, the exit code tells the signal."""

from __future__ import annotations

import json
import os
import signal

import pytest

from support.command import Home, complaint
from support.problem_files import COLEBROOK, write
from surefoot.cli.exits import Exit
from surefoot.cli.main import main
from surefoot.methods.stepper import Stepper

LONG = COLEBROOK + '[plan]\nmethod = "bisection"\nstart = [0.005, 0.1]\nmax_steps = 1000\n'
"""Bisection without a test that could fire: it halves until the iterate repeats, after more than 40 steps."""

SIGNALS = pytest.mark.parametrize("number", [signal.SIGTERM, signal.SIGHUP, signal.SIGINT])


@pytest.fixture
def signal_in_step(monkeypatch):
    """Sends this process a signal while it takes step number `step`."""

    def arrange(step: int, number: signal.Signals) -> None:
        advance, taken = Stepper.advance, 0

        def advance_and_signal(self, progress):
            nonlocal taken
            taken += 1
            if taken == step:
                os.kill(os.getpid(), number)
            return advance(self, progress)

        monkeypatch.setattr(Stepper, "advance", advance_and_signal)

    return arrange


def steps_on_disk(home: Home, name: str) -> int:
    events = json.loads((home.folder / name).read_bytes())["events"]
    return sum(event["kind"] == "step_taken" for event in events)


@SIGNALS
def test_what_was_computed_is_on_disk(home: Home, capsys, signal_in_step, monkeypatch, number: signal.Signals) -> None:
    write(home.folder, LONG)
    signal_in_step(21, number)
    assert main(["run", "colebrook.toml", "--save", "s.json", "--json"]) == 128 + number
    seen = capsys.readouterr()
    steps = steps_on_disk(home, "s.json")
    assert steps in (20, 21)
    assert seen.out == ""
    assert complaint(seen.err) == f"s.json: ended by a signal after step {steps}; all of it is saved"
    monkeypatch.undo()
    monkeypatch.chdir(home.folder)
    assert main(["recompute", "s.json", "--json"]) == Exit.GOOD
    assert json.loads(capsys.readouterr().out)["sessions"][0]["steps"] == steps


@SIGNALS
def test_a_run_that_is_not_kept_ends_quietly(home: Home, capsys, signal_in_step, number: signal.Signals) -> None:
    write(home.folder, LONG)
    signal_in_step(21, number)
    assert main(["run", "colebrook.toml", "--no-save"]) == 128 + number
    assert capsys.readouterr() == ("", "")


def test_a_signal_before_there_is_a_run_leaves_no_file(home: Home, capsys, monkeypatch) -> None:
    def derive(*_: object) -> None:
        os.kill(os.getpid(), signal.SIGTERM)

    monkeypatch.setattr("surefoot.session.solver.Solver.state_problem", derive)
    write(home.folder, LONG)
    assert main(["run", "colebrook.toml", "--save", "s.json"]) == 128 + signal.SIGTERM
    assert capsys.readouterr() == ("", "")
    assert [path.name for path in home.folder.iterdir()] == ["colebrook.toml"]


def test_a_signal_while_recomputing_ends_it(home: Home, capsys, signal_in_step) -> None:
    write(home.folder, LONG)
    main(["run", "colebrook.toml", "--save", "s.json"])
    capsys.readouterr()
    signal_in_step(5, signal.SIGTERM)
    assert main(["recompute", "s.json"]) == 128 + signal.SIGTERM
    assert capsys.readouterr() == ("", "")


def test_the_handlers_of_the_process_are_put_back(home: Home, capsys) -> None:
    before = [signal.getsignal(number) for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP)]
    write(home.folder, LONG)
    main(["run", "colebrook.toml", "--no-save"])
    assert [signal.getsignal(number) for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP)] == before


def test_a_process_ends_with_the_code_of_the_signal(home: Home) -> None:
    write(home.folder, LONG)
    code = (
        "import os, signal, sys; from surefoot.methods.stepper import Stepper; from surefoot.cli.main import main\n"
        "advance = Stepper.advance\n"
        "def hit(*rest): os.kill(os.getpid(), signal.SIGTERM); return advance(*rest)\n"
        "Stepper.advance = hit\n"
        "sys.exit(main(['run', 'colebrook.toml', '--save', 's.json']))"
    )
    result = home.python("-c", code)
    assert (result.returncode, result.stdout) == (143, b"")
    assert complaint(result.stderr).startswith("s.json: ended by a signal after step ")
