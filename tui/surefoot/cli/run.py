"""`surefoot run`: a problem file's plan, from its starts to its stop, into a session."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from tempfile import TemporaryDirectory

from surefoot.cli.arguments import Request
from surefoot.cli.configuration import read_configuration, sessions_folder
from surefoot.cli.exits import RequestError
from surefoot.cli.files import read_text
from surefoot.cli.interruption import Interrupted, Watch, watching
from surefoot.cli.judgement import judge
from surefoot.cli.run_report import say_run, say_run_object
from surefoot.cli.streams import complain
from surefoot.equation.checking import check_problem
from surefoot.equation.problem import Problem
from surefoot.equation.problem_file import read_problem_file
from surefoot.errors import PlanError, ProblemError
from surefoot.methods.plan import Plan
from surefoot.methods.plan_check import check_plan
from surefoot.methods.plan_table import plan_from_table
from surefoot.session.commands import BeginRun, StateProblem, TakeSteps
from surefoot.session.session import Session
from surefoot.session.state import Run

UNNAMED = "(no name given)"
"""Who an event is by when nobody said: an account is no person, so it is never taken instead."""


def run(request: Request) -> int:
    """Run the plan; the exit code. Raises SurefootError, and Interrupted when a signal came."""
    name = request.operands[0]
    with watching() as watch:
        problem, plan = _read(name)
        with _session(request, problem) as session:
            with _naming(name):
                done = _to_the_stop(session, problem, plan, watch)
            judgement = judge(done)
            saved = None if request.flag("--no-save") else session.path
            (say_run_object if request.flag("--json") else say_run)(done, judgement, saved)
    return judgement.exit


def _read(name: str) -> tuple[Problem, Plan]:
    """The problem and the plan of a file, both checked. Raises SurefootError that names the file."""
    file = read_problem_file(read_text(name), name)
    with _naming(name):
        checked = check_problem(file.problem)
        if file.plan is None:
            raise PlanError("is missing; a run needs a [plan] with method and start", key="plan")
        plan = plan_from_table(file.plan, file.arithmetic)
        check_plan(plan, checked)
    return file.problem, plan


@contextmanager
def _naming(name: str) -> Iterator[None]:
    """Put the name of the file before what is wrong with the problem or the plan in it."""
    try:
        yield
    except (ProblemError, PlanError) as error:
        raise RequestError(str(error), place=name) from error


@contextmanager
def _session(request: Request, problem: Problem) -> Iterator[Session]:
    """A new session where the request wants it; one that is not to be kept lives in a temporary folder.

    A file in which no run was begun is not left behind. Where a signal left one with a run is said in one line.
    """
    if request.flag("--save") and request.flag("--no-save"):
        raise RequestError("contradicts --save; give one of them", place="--no-save")
    settings = read_configuration()
    by = request.value("--by") or settings.by or UNNAMED
    if request.flag("--no-save"):
        with TemporaryDirectory(prefix="surefoot-") as folder, Session.create(Path(folder), by=by) as session:
            yield session
        return
    place = _place(request.value("--save")) or sessions_folder(request.value("--sessions"), settings)
    session = Session.create(place, by=by, title=problem.title)
    try:
        with session:
            yield session
    except Interrupted:
        if session.state.run is not None:
            complain(f"{session.path}: ended by a signal after step {session.state.run.steps}; all of it is saved")
        raise
    finally:
        if session.state.run is None:
            session.path.unlink(missing_ok=True)


def _place(save: str | None) -> Path | None:
    """The file to save as. Raises RequestError when it is none for a session, or exists."""
    if save is None:
        return None
    path = Path(save)
    if path.suffix != ".json":
        raise RequestError("must end in .json; a session is a JSON file", place=f"--save {save}")
    if path.exists():
        raise RequestError("exists already; choose another name", place=f"--save {save}")
    return path


def _to_the_stop(session: Session, problem: Problem, plan: Plan, watch: Watch) -> Run:
    """The run, ended. Raises Interrupted when a signal came; the steps up to there are on disk."""
    session.do(StateProblem(problem))
    with watch.deferring():
        session.do(BeginRun(plan), stop=watch.stop)
        if session.state.run is not None and session.state.run.ending is None:
            session.do(TakeSteps(None), stop=watch.stop)
    done = session.state.run
    assert done is not None, "a run that was not stopped has begun"
    return done
