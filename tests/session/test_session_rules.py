"""A real session driven by rules: allowed commands do what they say, forbidden ones leave no trace."""

from __future__ import annotations

import shutil
import tempfile
from pathlib import Path
from typing import Any

from hypothesis import HealthCheck, settings
from hypothesis import strategies as st
from hypothesis.stateful import RuleBasedStateMachine, initialize, invariant, rule

from support.sessions import BISECTION, NEWTON, QUADRATIC, SECANT, TIGHT, prefixes, ticking, undo_chain
from surefoot.equation.problem import Problem
from surefoot.errors import PlanError, ProblemError, Refused
from surefoot.methods.plan import Plan
from surefoot.session.commands import (
    Abandon,
    AddNote,
    BeginRun,
    BeginVariant,
    Command,
    PutIterate,
    StateProblem,
    TakeSteps,
    TakeUp,
    Withdraw,
)
from surefoot.session.loading import load
from surefoot.session.recompute import recompute
from surefoot.session.session import Session
from surefoot.session.state import SessionState

PROBLEMS = st.sampled_from(
    [QUADRATIC, Problem("x", "x^3 = 2"), Problem("t", "ln(t) = 1"), Problem("x", "x +"), Problem("x", "y = 1")]
)
PLANS = st.sampled_from(
    [
        SECANT,
        NEWTON,
        BISECTION,
        Plan("secant", ("1", "-1"), max_steps=3),
        Plan("newton-raphson", ("1",), stop=TIGHT, arithmetic="binary32"),
        Plan("fixed-point", ("1",), settings=(("g", "x/2"),), max_steps=4),
        Plan("secant", ("1",)),
        Plan("unknown", ("1", "2")),
    ]
)


def may(command: Command, state: SessionState, undoable: int) -> bool:
    """Section 4 of the states, spelt out a second time."""
    phase = state.phase
    match command:
        case StateProblem():
            return phase != "stepping"
        case BeginRun():
            return phase in ("planning", "ended")
        case TakeSteps() | PutIterate() | Abandon():
            return phase == "stepping"
        case BeginVariant():
            return bool(state.runs)
        case TakeUp():
            return {run.number for run in state.runs} - {state.hand} != set()
        case Withdraw():
            return undoable > 0
        case AddNote():
            return True


class Driven(RuleBasedStateMachine):
    """`undo` is what withdrawing should return to, kept here as a plain stack of what matters of each state."""

    def __init__(self) -> None:
        super().__init__()
        self.folder = Path(tempfile.mkdtemp(prefix="surefoot-rules-"))
        self.undo: list[tuple[Any, ...]] = []

    @initialize()
    def create(self) -> None:
        self.session = Session.create(self.folder / "a.json", by="M. R.", now=ticking())

    def teardown(self) -> None:
        if hasattr(self, "session"):
            self.session.close()
            assert recompute(self.session.path).reproduced
        shutil.rmtree(self.folder)

    def core(self) -> tuple[Any, ...]:
        state = self.session.state
        return state.phase, state.title, state.problems, state.runs, state.hand, state.undo

    def ask(self, command: Command) -> bool:
        """Do a command, or see that it is refused without a trace. True when it was done."""
        before, on_disk = self.session.state, self.session.path.read_bytes()
        allowed = may(command, before, len(self.undo))
        refusal = self.session.refusal(type(command))
        assert (refusal is None) == allowed
        error, events = None, ()
        try:
            events = self.session.do(command)
        except (Refused, PlanError, ProblemError) as raised:
            error = raised
        if error is not None:
            assert refusal is None or (isinstance(error, Refused) and str(error) == str(refusal))
            assert self.session.state is before
            assert self.session.path.read_bytes() == on_disk
            return False
        assert allowed
        assert events
        assert self.session.state.events == before.events + len(events) + self.resumes
        self.resumes = 0
        return True

    resumes = 0  # whether the next command is recorded behind the event of a new sitting

    def do(self, command: Command) -> None:
        core = self.core()
        if self.ask(command):
            self.undo.append(core)

    @rule(problem=PROBLEMS)
    def state_problem(self, problem: Problem) -> None:
        self.do(StateProblem(problem))

    @rule(plan=PLANS)
    def begin_run(self, plan: Plan) -> None:
        self.do(BeginRun(plan))

    @rule(count=st.integers(0, 3))
    def take_steps(self, count: int) -> None:
        before = self.session.state.events + self.resumes
        if self.ask(TakeSteps(count)):
            # One thing to withdraw for each step.
            for state in list(prefixes(self.session.events()))[before - 1 : -1]:
                self.undo.append((state.phase, state.title, state.problems, state.runs, state.hand, state.undo))

    @rule(x=st.sampled_from(["1", "2.5", "-0x1p-3", "0", "x", "1e999"]), reason=st.sampled_from(["the log", " "]))
    def put_iterate(self, x: str, reason: str) -> None:
        self.do(PutIterate(x, reason))

    @rule(run=st.integers(1, 4), k=st.integers(0, 4), plan=PLANS)
    def begin_variant(self, run: int, k: int, plan: Plan) -> None:
        self.do(BeginVariant(run, k, plan))

    @rule(run=st.integers(1, 4))
    def take_up(self, run: int) -> None:
        self.do(TakeUp(run))

    @rule(reason=st.sampled_from(["wrong input", ""]))
    def abandon(self, reason: str) -> None:
        self.do(Abandon(reason))

    @rule(text=st.sampled_from(["far off", "ä\n\u2028", " "]))
    def note(self, text: str) -> None:
        notes = len(self.session.state.notes)
        core = self.core()
        done = self.ask(AddNote(text))
        assert len(self.session.state.notes) == notes + done
        assert self.core() == core

    @rule()
    def withdraw(self) -> None:
        notes = self.session.state.notes
        if self.ask(Withdraw()):
            assert self.core() == self.undo.pop()
            assert self.session.state.notes == notes

    @rule(by=st.sampled_from(["M. R.", "A. N."]))
    def leave_and_resume(self, by: str) -> None:
        before = self.session.state
        self.session.close()
        self.session = Session.open(self.session.path, by=by, now=ticking("2026-12-02T08:00:00.000"))
        assert self.session.state == before
        self.resumes = 1

    @rule(part=st.floats(0.0, 0.99))
    def lose_the_terminal_in_the_middle_of_a_write(self, part: float) -> None:
        before, path = self.session.state, self.session.path
        self.session.close()
        line = b',\n{"at":"2026-12-01T14:02:11.318Z","by":"M. R.","content":{"text":"\xc3\xa4"},"hash":"'
        path.write_bytes(path.read_bytes()[:-4] + line[: int(part * len(line))])
        self.session = Session.open(path, by="M. R.", now=ticking("2026-12-03T08:00:00.000"))
        assert self.session.state == before
        assert self.session.notices[0].startswith("a write was cut short")
        self.resumes = 1

    @rule()
    def a_second_opener_reads_the_same(self) -> None:
        with Session.open(self.session.path, by="A. N.") as other:
            assert other.read_only
            assert other.state == self.session.state

    @invariant()
    def the_fold_of_the_file_is_the_state_shown(self) -> None:
        if hasattr(self, "session"):
            loaded = load(self.session.path)
            assert loaded.state == self.session.state
            assert loaded.events == list(self.session.events())
            assert undo_chain(loaded.state) == undo_chain(self.session.state)
            assert len(undo_chain(loaded.state)) == len(self.undo)

    @invariant()
    def the_phase_is_that_of_the_run_in_hand_and_numbers_are_given_once(self) -> None:
        if hasattr(self, "session"):
            state = self.session.state
            run = state.run
            assert (run is None) == (state.phase in ("posing", "planning"))
            assert run is None or (run.ending is None) == (state.phase == "stepping")
            kinds = [event.kind for event in self.session.events()]
            assert state.run_numbers == kinds.count("run_begun")
            assert state.problem_numbers == kinds.count("problem_stated")


TestDriven = Driven.TestCase
TestDriven.settings = settings(
    max_examples=100, stateful_step_count=30, deadline=None, suppress_health_check=[HealthCheck.too_slow]
)
