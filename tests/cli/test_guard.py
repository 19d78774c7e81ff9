"""Whatever a command raises becomes one line and an exit code; a fault leaves a report."""

from __future__ import annotations

import errno
import os
import signal
from collections.abc import Callable
from pathlib import Path

import pytest

from support.command import Home, complaint
from surefoot.cli import main as console
from surefoot.cli.exits import Exit, RequestError
from surefoot.cli.faults import state_folder
from surefoot.cli.interruption import Interrupted, watching
from surefoot.errors import EquationError, PlanError, ProblemError, RecordError, Refused, SurefootError


@pytest.fixture
def raising(monkeypatch: pytest.MonkeyPatch) -> Callable[[BaseException], int]:
    """Runs the console script with a command that raises."""

    def end(error: BaseException) -> int:
        def answer(request: object) -> int:
            raise error

        monkeypatch.setattr(console, "_answer", answer)
        return console.main(["run", "p.toml"])

    return end


ERRORS: list[tuple[SurefootError, str]] = [
    (EquationError("unexpected )", column=3), "column 3: unexpected )"),
    (ProblemError("is missing", place="unknown", file="p.toml"), "p.toml: unknown: is missing"),
    (PlanError("must be positive", key="plan.max_steps"), "plan.max_steps: must be positive"),
    (RecordError("hash differs", file="s.json", event=4), "s.json: event 4: hash differs"),
    (Refused("the run has ended", "begin a new one"), "the run has ended; begin a new one"),
    (RequestError("is missing", place="p.toml"), "p.toml: is missing"),
]


def test_every_kind_of_error_is_shown_here() -> None:
    shown = {type(error) for error, _ in ERRORS}
    ours = {kind for kind in SurefootError.__subclasses__() if kind.__module__ == SurefootError.__module__}
    assert shown == ours | {RequestError}


@pytest.mark.parametrize(("error", "line"), ERRORS, ids=lambda value: type(value).__name__)
def test_an_error_of_ours_is_one_line_and_exit_2(home, raising, capsys, error: SurefootError, line: str) -> None:
    assert raising(error) == Exit.REQUEST
    seen = capsys.readouterr()
    assert complaint(seen.err) == line
    assert seen.out == ""


def test_a_path_that_the_system_refuses_is_one_line_and_exit_2(home, raising, capsys) -> None:
    assert raising(PermissionError(errno.EACCES, "Permission denied", "/srv/x")) == Exit.REQUEST
    assert complaint(capsys.readouterr().err) == "/srv/x: Permission denied; check the path and its permissions"


@pytest.mark.parametrize(
    ("error", "code"),
    [
        (KeyboardInterrupt(), 130),
        (Interrupted(signal.SIGTERM), 143),
        (Interrupted(signal.SIGHUP), 129),
        (BrokenPipeError(), 141),
    ],
    ids=repr,
)
def test_signals_are_quiet(home, raising, capsys, monkeypatch, error: BaseException, code: int) -> None:
    monkeypatch.setattr("surefoot.cli.streams.silence", lambda stream: None)
    assert raising(error) == code
    assert capsys.readouterr() == ("", "")


@pytest.mark.parametrize("error", [RuntimeError("what\nnow"), RecursionError(), MemoryError(), OSError(5, "no name")])
def test_a_fault_is_one_line_and_a_report(home: Home, raising, capsys, error: Exception) -> None:
    assert raising(error) == Exit.FAULT
    line = complaint(capsys.readouterr().err)
    [report] = state_folder().iterdir()
    assert report.name.startswith("surefoot-fault-20")
    assert report.suffix == ".txt"
    assert line.startswith(f"{report}: this is a fault of surefoot ({type(error).__name__})")
    text = report.read_text()
    assert "words: ['run', 'p.toml']" in text
    assert "Traceback (most recent call last)" in text


def test_without_a_state_folder_a_report_goes_to_the_temporary_one(home, raising, capsys, monkeypatch) -> None:
    blocked = home.folder / "file"
    blocked.write_text("")
    temporary = home.folder / "temporary"
    temporary.mkdir()
    monkeypatch.setenv("XDG_STATE_HOME", str(blocked))
    monkeypatch.setattr("tempfile.gettempdir", lambda: str(temporary))
    assert raising(ValueError("x")) == Exit.FAULT
    [report] = temporary.iterdir()
    assert str(report) in complaint(capsys.readouterr().err)


def test_a_fault_that_cannot_be_saved_is_still_one_line(home, raising, capsys, monkeypatch) -> None:
    blocked = home.folder / "file"
    blocked.write_text("")
    monkeypatch.setenv("XDG_STATE_HOME", str(blocked))
    monkeypatch.setattr("tempfile.gettempdir", lambda: str(blocked))
    assert raising(ValueError("x is\tbad")) == Exit.FAULT
    assert complaint(capsys.readouterr().err) == (
        "this is a fault of surefoot (ValueError), and no report could be saved: x is\\tbad"
    )


def test_a_state_folder_that_is_no_whole_path_is_not_used(home: Home, monkeypatch) -> None:
    monkeypatch.setenv("XDG_STATE_HOME", "state")
    assert state_folder() == home.folder / ".local" / "state" / "surefoot"


def test_names_of_files_cannot_forge_lines(home, raising, capsys) -> None:
    assert raising(RequestError("is missing", place="a\nsurefoot: b\x1b[31m\udcff")) == Exit.REQUEST
    assert complaint(capsys.readouterr().err) == "a\\nsurefoot: b\\x1b[31m\\udcff: is missing"


def test_a_signal_waits_for_deferred_work_and_then_ends_it() -> None:
    done = []

    def work() -> None:
        with watching() as watch, watch.deferring():
            os.kill(os.getpid(), signal.SIGTERM)
            done.append(watch.stop())

    with pytest.raises(Interrupted) as ended:
        work()
    assert ended.value.number == signal.SIGTERM
    assert done == [True]


def test_a_second_signal_does_not_wait() -> None:
    done = []

    def work() -> None:
        with watching() as watch, watch.deferring():
            os.kill(os.getpid(), signal.SIGTERM)
            os.kill(os.getpid(), signal.SIGINT)
            done.append("not reached")

    with pytest.raises(Interrupted) as ended:
        work()
    assert ended.value.number == signal.SIGINT
    assert not done


def test_a_signal_outside_deferred_work_ends_at_once() -> None:
    with watching(), pytest.raises(Interrupted):
        os.kill(os.getpid(), signal.SIGHUP)


def test_handlers_are_put_back_and_ignored_signals_stay_ignored() -> None:
    before = signal.signal(signal.SIGHUP, signal.SIG_IGN)
    try:
        with watching() as watch:
            os.kill(os.getpid(), signal.SIGHUP)
            assert not watch.stop()
        assert signal.getsignal(signal.SIGHUP) == signal.SIG_IGN
    finally:
        signal.signal(signal.SIGHUP, before)
    assert signal.getsignal(signal.SIGINT) == signal.default_int_handler


def test_a_closed_standard_error_loses_the_line_and_nothing_else(home: Home) -> None:
    result = home.python(
        "-c", "import os; os.close(2); from surefoot.cli.main import main; raise SystemExit(main(['x']))"
    )
    assert result.returncode == Exit.REQUEST


@pytest.mark.parametrize("closed", [(0,), (1,), (2,), (0, 1, 2)])
def test_free_stream_numbers_are_taken_before_files_are_opened(home: Home, closed: tuple[int, ...]) -> None:
    numbers = ", ".join(map(str, closed))
    code = (
        f"import os; [os.close(n) for n in ({numbers},)]; from surefoot.cli import streams; streams.prepare(); "
        "os._exit(open(os.devnull).fileno())"
    )
    assert home.python("-c", code).returncode > 2


def test_help_into_a_full_device_is_one_line(home: Home) -> None:
    code = (
        "import os; os.dup2(os.open('/dev/full', os.O_WRONLY), 1); from surefoot.cli.main import main; "
        "raise SystemExit(main(['--help']))"
    )
    result = home.python("-c", code)
    assert result.returncode == Exit.REQUEST
    assert complaint(result.stderr).startswith("standard output: cannot be written (No space left on device)")


def test_help_into_a_closed_pipe_is_quiet(home: Home) -> None:
    code = (
        "import os; r, w = os.pipe(); os.close(r); os.dup2(w, 1); from surefoot.cli.main import main; "
        "raise SystemExit(main(['--help']))"
    )
    result = home.python("-c", code)
    assert (result.returncode, result.stderr) == (141, b"")


def test_help_without_standard_output_is_quiet(home: Home) -> None:
    result = home.python(
        "-c",
        "import os, sys; sys.stdout = None; from surefoot.cli.main import main; raise SystemExit(main(['--help']))",
    )
    assert (result.returncode, result.stdout, result.stderr) == (0, b"", b"")


def test_a_message_in_a_locale_without_its_letters_is_escaped(home: Home) -> None:
    result = home.python(
        "-m", "surefoot.cli", "Schütz", environment={"PYTHONIOENCODING": "ascii", "LC_ALL": "C", "PYTHONUTF8": "0"}
    )
    assert result.returncode == Exit.REQUEST
    assert "Sch\\udcc3\\udcbctz" in complaint(result.stderr)


def test_report_paths_are_free(home, raising, capsys) -> None:
    for _ in range(3):
        raising(ValueError("x"))
    assert len(list(Path(state_folder()).iterdir())) == 3
