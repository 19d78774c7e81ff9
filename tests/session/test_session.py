"""A session on disk: what commands do, what is on disk when, and what is refused."""

from __future__ import annotations

import errno
import gc
import itertools
import json
import os
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import pytest

from support.sessions import (
    BISECTION,
    DEPTH,
    NEWTON,
    QUADRATIC,
    SECANT,
    TIGHT,
    begun,
    members_of,
    prefixes,
    ticking,
    undo_chain,
    wandering,
)
from surefoot.equation.problem import Problem
from surefoot.equation.results import Failure
from surefoot.errors import PlanError, ProblemError, RecordError, Refused
from surefoot.methods.plan import Plan, Stop
from surefoot.session import loading as loading_module
from surefoot.session import session as session_module
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
from surefoot.session.environment import environment
from surefoot.session.events import RunBegun
from surefoot.session.loading import load
from surefoot.session.session import Session
from surefoot.session.state import SessionState


def kinds(path: Path) -> list[str]:
    return [event["kind"] for event in members_of(path)]


def assert_on_disk(session: Session) -> None:
    """The state shown is the one that folding the file gives, at every prefix and with all that can be withdrawn."""
    loaded = load(session.path)
    assert loaded.state == session.state
    assert undo_chain(loaded.state) == undo_chain(session.state)
    assert loaded.events == list(session.events())
    assert list(prefixes(session.events()))[-1] == session.state


def test_the_main_job_from_the_first_event_to_the_root(tmp_path: Path) -> None:
    session = Session.create(tmp_path, by="M. R., duty", title="Two roots at weir", now=ticking())
    assert session.path.name == "2026-12-01-two-roots-at-weir.json"
    assert (session.state.phase, session.state.title, session.state.by) == (
        "posing",
        "Two roots at weir",
        "M. R., duty",
    )
    session.do(StateProblem(QUADRATIC, readings=("1/3 is 0 in the source",)))
    assert session.state.phase == "planning"
    assert session.state.title == "Two roots"
    assert session.state.stated is not None
    assert session.state.stated.readings == ("1/3 is 0 in the source",)
    assert [derivative.text for derivative in session.state.stated.derivatives] == ["2*x - 2"]
    session.do(BeginRun(SECANT))
    assert session.state.phase == "stepping"
    assert session.state.run is not None
    # f = x^2 - 2x - 3 by hand: f(0) = -3, f(5) = 12; the chord meets zero at x = 1, where f = -4.
    assert [(each.x, each.f) for each in session.state.run.iterates] == [(0.0, -3.0), (5.0, 12.0)]
    (event,) = session.do(TakeSteps())
    assert (event.n, event.kind, event.by) == (3, "step_taken", "M. R., duty")
    assert (session.state.run.current.x, session.state.run.current.f) == (1.0, -4.0)
    assert session.state.run.steps == 1
    session.do(TakeSteps(None))
    assert session.state.phase == "ended"
    assert session.state.run.ending is not None
    assert session.state.run.ending.outcome == "converged"
    assert session.state.run.current.x == pytest.approx(3.0, abs=1e-12)
    assert_on_disk(session)
    session.close()
    assert sorted(path.name for path in tmp_path.iterdir()) == [session.path.name]


def test_a_session_is_made_in_a_named_file_or_in_a_folder_that_is_made_for_it(tmp_path: Path) -> None:
    with Session.create(tmp_path / "a.json", by="M. R.") as named:
        assert named.path == tmp_path / "a.json"
    with pytest.raises(RecordError, match="exists already"):
        Session.create(tmp_path / "a.json", by="M. R.")
    with Session.create(tmp_path / "new" / "folder", by="M. R.", now=ticking()) as filed:
        assert filed.path == tmp_path / "new" / "folder" / "2026-12-01-session.json"
    with Session.create(tmp_path / "new" / "folder", by="M. R.", now=ticking()) as second:
        assert second.path.name == "2026-12-01-session-2.json"
    with pytest.raises(RecordError, match="the folder cannot be made"):
        Session.create(tmp_path / "a.json" / "b", by="M. R.")


def test_resuming_goes_on_where_the_session_was_left_and_says_by_whom(tmp_path: Path) -> None:
    with begun(tmp_path / "a.json") as first:
        first.do(TakeSteps(2))
        left = first.state
    with Session.open(tmp_path / "a.json", by="A. N.", now=ticking("2027-02-03T08:00:00.000")) as second:
        assert second.state == left
        assert second.notices == ()
        before = (tmp_path / "a.json").read_bytes()
        second.refusal(TakeSteps)
        assert (tmp_path / "a.json").read_bytes() == before, "looking is not recorded"
        (event,) = second.do(TakeSteps())
        assert event.kind == "step_taken"
        assert (second.state.by, second.state.changed_at[:10]) == ("A. N.", "2027-02-03")
        second.do(AddNote("resumed"))
        assert_on_disk(second)
    assert kinds(tmp_path / "a.json")[-3:] == ["session_resumed", "step_taken", "note_made"]
    # Steps of a resumed run are those of a run that was never left.
    with begun(tmp_path / "b.json") as whole:
        whole.do(TakeSteps(3))
        assert whole.state.run is not None
        assert second.state.run is not None
        assert whole.state.run.iterates == second.state.run.iterates


def test_the_environment_is_recorded_again_only_where_it_changed(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    path = tmp_path / "a.json"
    begun(path).close()
    other = replace(environment(), libm="glibc 2.99")
    for here in (environment(), other, other):
        monkeypatch.setattr(session_module, "environment", lambda here=here: here)
        with Session.open(path, by="A. N.") as session:
            session.do(AddNote("looked"))
    resumed = [event["content"] for event in members_of(path) if event["kind"] == "session_resumed"]
    assert [content.get("environment", {}).get("libm") for content in resumed] == [None, "glibc 2.99", None]
    assert load(path).state.environment == other


def test_steps_are_on_disk_before_they_are_shown(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json", *wandering(1200))
    shown: list[int] = []

    def look(state: SessionState) -> None:
        assert load(session.path).state == state == session.state
        assert state.run is not None
        shown.append(state.run.steps)

    session.do(TakeSteps(1), on_step=look)
    assert shown == [1]
    taken = session.do(TakeSteps(None), on_step=look)
    assert len(taken) == 1199
    assert shown[-1] == 1200
    assert all(later - earlier <= session_module.GROUP_STEPS for earlier, later in itertools.pairwise(shown))
    assert session.state.run is not None
    assert session.state.run.ending is not None
    assert session.state.run.ending.outcome == "step_limit"


def test_groups_are_synced_by_count_and_by_time(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    session = begun(tmp_path / "a.json", *wandering(100))
    monkeypatch.setattr(session_module, "GROUP_STEPS", 7)
    sizes: list[int] = []
    session.do(TakeSteps(20), on_step=lambda state: sizes.append(state.events))
    assert [size - 3 for size in sizes] == [7, 14, 20]
    monkeypatch.setattr(session_module, "GROUP_SECONDS", 0.0)
    session.do(TakeSteps(3), on_step=lambda state: sizes.append(state.events))
    assert [size - 3 for size in sizes[3:]] == [21, 22, 23]
    assert_on_disk(session)


def test_long_work_is_stopped_between_steps_and_keeps_what_it_did(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json", *wandering(100_000))
    asked = iter(range(10**9))
    taken = session.do(TakeSteps(None), stop=lambda: next(asked) > 60)
    assert 0 < len(taken) < 61
    assert session.state.phase == "stepping"
    assert session.do(TakeSteps(5), stop=lambda: True) == ()
    assert session.do(PutIterate("0.4", "try"), stop=lambda: True) == ()
    assert session.do(BeginVariant(1, 1, SECANT), stop=lambda: True) == ()
    assert_on_disk(session)


def test_steps_that_were_computed_are_kept_when_the_work_is_broken_off(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    session = begun(tmp_path / "a.json", *wandering(100))
    step, count = session._solver.step, iter(range(100))

    def interrupted(*given: object) -> object:
        if next(count) == 4:
            raise KeyboardInterrupt
        return step(*given)  # type: ignore[arg-type]

    monkeypatch.setattr(session._solver, "step", interrupted)
    with pytest.raises(KeyboardInterrupt):
        session.do(TakeSteps(None))
    assert session.state.run is not None
    assert session.state.run.steps == 4
    assert_on_disk(session)


@pytest.mark.parametrize("count", [0, -1])
def test_a_count_of_steps_is_one_or_more(tmp_path: Path, count: int) -> None:
    session = begun(tmp_path / "a.json")
    with pytest.raises(Refused, match="must be 1 or more"):
        session.do(TakeSteps(count))
    assert session.state.events == 3


# -- withdrawing ------------------------------------------------------------------------------------------------------


def test_withdrawing_takes_back_one_thing_after_another_down_to_the_empty_session(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json")
    seen: list[SessionState] = [next(prefixes(session.events()))]
    seen += list(prefixes(session.events()))[1:]
    for command in (
        TakeSteps(),
        PutIterate("2.5", "between the roots"),
        TakeSteps(),
        BeginVariant(1, 4, NEWTON),
        TakeSteps(),
        TakeUp(1),
        Abandon("enough"),
        StateProblem(replace(QUADRATIC, title="Changed")),
        BeginRun(BISECTION),
    ):
        session.do(command)
        seen.append(session.state)
    undone = []
    for expected in reversed(seen[:-1]):
        undone.append(session.state.undo)
        session.do(Withdraw())
        # What outlives a withdrawal are the count of events, the clock and the numbers given out.
        lasting = ("events", "changed_at", "run_numbers", "problem_numbers")
        assert session.state == replace(expected, **{name: getattr(session.state, name) for name in lasting})
    assert undone == [
        "run 3",
        "problem 2",
        "abandoning run 1",
        "taking up run 1",
        "step 1",
        "run 2",
        "step 2",
        "iterate 3, put by hand",
        "step 1",
        "run 1",
        "problem 1",
    ]
    with pytest.raises(Refused, match="nothing to withdraw"):
        session.do(Withdraw())
    assert_on_disk(session)
    session.do(StateProblem(QUADRATIC))
    session.do(BeginRun(SECANT))
    assert session.state.stated is not None
    assert (session.state.stated.number, session.state.hand) == (3, 4), "numbers are not given out twice"
    assert_on_disk(session)


def test_withdrawing_the_last_step_of_an_ended_run_steps_on(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json")
    session.do(TakeSteps(None))
    assert session.state.run is not None
    ended = session.state.run
    session.do(Withdraw())
    assert session.state.phase == "stepping"
    session.do(TakeSteps())
    assert session.state.phase == "ended"
    assert session.state.run == ended


def test_notes_and_sittings_outlive_a_withdrawal(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    with begun(path) as session:
        session.do(TakeSteps())
        session.do(AddNote("far off"))
    with Session.open(path, by="A. N.") as session:
        session.do(Withdraw())
        session.do(Withdraw())
        assert session.state.phase == "planning"
        assert [(note.text, note.by, note.run, note.k) for note in session.state.notes] == [("far off", "M. R.", 1, 2)]
        assert session.state.by == "A. N."
        assert_on_disk(session)


def test_an_ending_without_an_iterate_can_be_withdrawn(tmp_path: Path) -> None:
    # f(0) = f(2) = -3 by hand: the chord is level and the secant rule has no step.
    session = begun(tmp_path / "a.json", QUADRATIC, Plan("secant", ("0", "2"), stop=TIGHT))
    session.do(TakeSteps())
    assert session.state.run is not None
    assert session.state.run.ending is not None
    assert session.state.run.ending.outcome == "broke_down"
    assert (session.state.run.steps, len(session.state.run.iterates)) == (0, 2)
    assert session.state.undo == "the end of the run"
    assert_on_disk(session)
    session.do(Withdraw())
    assert session.state.phase == "stepping"
    session.do(PutIterate("4", "away from the level chord"))
    session.do(TakeSteps())
    # f(2) = -3, f(4) = 5 by hand: the chord from (2, -3) to (4, 5) meets zero at 2.75.
    assert session.state.run.current.x == 2.75


# -- iterates by hand, variants, other runs, abandoning ---------------------------------------------------------------


def test_an_iterate_put_by_hand_has_its_own_value_and_reason(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json")
    (event,) = session.do(PutIterate(" 0x1.8p+1 ", "the value in the log"))
    assert event.kind == "iterate_put"
    assert session.state.run is not None
    current = session.state.run.current
    assert (current.k, current.x, current.f, current.put) == (2, 3.0, 0.0, "the value in the log")
    assert session.state.run.steps == 0
    session.do(Withdraw())
    for x, reason in (("2", "  "), ("two", "read"), ("", "read")):
        with pytest.raises((Refused, PlanError)):
            session.do(PutIterate(x, reason))
    assert_on_disk(session)


@pytest.mark.parametrize("arithmetic", ["binary64", "binary32", "multiprecision:40"])
def test_a_variant_begins_at_the_iterates_of_its_parent_to_the_bit(tmp_path: Path, arithmetic: str) -> None:
    session = begun(tmp_path / "a.json", DEPTH, Plan("secant", ("0.5", "3"), stop=TIGHT, arithmetic=arithmetic))
    session.do(TakeSteps(4))
    assert session.state.run is not None
    parent = session.state.run
    session.do(BeginVariant(1, 4, Plan("secant", ("ignored",), stop=Stop(residual="1e-6"), arithmetic=arithmetic)))
    variant = session.state.run
    assert variant.parent == (1, 4)
    assert [(each.x, each.f) for each in variant.iterates] == [(each.x, each.f) for each in tuple(parent.iterates)[3:5]]
    session.do(BeginVariant(1, 4, Plan("newton-raphson", (), stop=TIGHT, arithmetic="binary64")))
    assert session.state.run.origin.x == float(tuple(parent.iterates)[4].x)
    session.do(TakeSteps(None))
    assert session.state.run.ending is not None
    assert session.state.run.ending.outcome == "converged"
    assert_on_disk(session)


def test_a_variant_keeps_the_problem_of_its_parent(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json")
    session.do(TakeSteps(None))
    session.do(StateProblem(DEPTH))
    assert session.state.hand is None
    session.do(BeginVariant(1, 2, NEWTON))
    assert session.state.run is not None
    assert session.state.run.stated.problem == QUADRATIC
    assert session.state.stated is not None
    assert session.state.stated.problem == DEPTH
    assert_on_disk(session)


def test_a_bracketing_variant_takes_the_last_iterates_with_a_sign_change(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json")
    session.do(TakeSteps(2))
    assert session.state.run is not None
    # By hand: f(0) = -3, f(5) = 12, f(1) = -4, f(2) = -3; only 5 is across.
    assert [each.x for each in session.state.run.iterates] == [0.0, 5.0, 1.0, 2.0]
    session.do(BeginVariant(1, 3, BISECTION))
    assert [each.x for each in session.state.run.iterates] == [5.0, 2.0]
    session.do(TakeSteps(None))
    assert session.state.run.current.x == pytest.approx(3.0, abs=1e-9)
    session.do(BeginVariant(1, 1, BISECTION))
    assert [each.x for each in session.state.run.iterates] == [0.0, 5.0]


@pytest.mark.parametrize(
    ("command", "says"),
    [
        (BeginVariant(7, 0, NEWTON), "there is no run 7; there are 1"),
        (BeginVariant(1, 9, NEWTON), "run 1 has no iterate 9; its last is 1"),
        (BeginVariant(1, -1, NEWTON), "run 1 has no iterate -1"),
        (BeginVariant(1, 0, SECANT), "secant needs 2 iterates, and run 1 has 1 up to 0"),
        (TakeUp(1), "there is no other run"),
        (Abandon("  "), "a reason is needed"),
        (AddNote("\n"), "a note needs a text"),
    ],
)
def test_what_cannot_be_done_is_refused_in_words_and_leaves_no_event(
    tmp_path: Path, command: Command, says: str
) -> None:
    session = begun(tmp_path / "a.json")
    with pytest.raises(Refused) as caught:
        session.do(command)
    assert says in str(caught.value)
    assert session.state.events == 3
    assert_on_disk(session)


def test_other_runs_are_taken_up_and_keep_their_outcome(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json")
    session.do(TakeSteps(1))
    session.do(BeginVariant(1, 1, NEWTON))
    session.do(TakeSteps(None))
    assert session.state.phase == "ended"
    with pytest.raises(Refused, match="run 2 is in hand already"):
        session.do(TakeUp(2))
    with pytest.raises(Refused, match="there is no run 5; there are 1, 2"):
        session.do(TakeUp(5))
    session.do(TakeUp(1))
    assert (session.state.phase, session.state.hand) == ("stepping", 1)
    session.do(TakeSteps(None))
    assert [run.ending.outcome for run in session.state.runs if run.ending] == ["converged", "converged"]
    assert_on_disk(session)


def test_an_abandoned_run_has_ended_with_its_reason(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json")
    session.do(Abandon(" wrong input "))
    assert session.state.run is not None
    assert session.state.run.ending is not None
    assert (session.state.run.ending.outcome, session.state.run.ending.says) == ("abandoned", "wrong input")
    with pytest.raises(Refused, match="the run in hand has ended"):
        session.do(TakeSteps())
    assert_on_disk(session)


def test_a_run_whose_start_fails_has_ended_at_once(tmp_path: Path) -> None:
    problem = Problem("x", "ln(x) = 1")
    session = begun(tmp_path / "a.json", problem, Plan("secant", ("2", "-1")))
    assert session.state.phase == "ended"
    assert session.state.run is not None
    assert isinstance(session.state.run.current.f, Failure)
    assert session.state.run.ending is not None
    assert session.state.run.ending.outcome == "failed_evaluation"
    assert_on_disk(session)
    session.do(Withdraw())
    assert session.state.phase == "planning"


def test_trial_steps_record_nothing(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json")
    before = session.path.read_bytes()
    by_code = {landing.code: landing for landing in session.trial()}
    # By hand: the chord of f through (0, -3) and (5, 12) meets zero at 1; the tangent at 5 (slope 8) at 3.5.
    assert by_code["secant"].x == 1.0
    assert by_code["newton-raphson"].x == 3.5
    assert by_code["bisection"].x == 2.5
    assert [landing.code for landing in session.trial(["secant"])] == ["secant"]
    assert session.path.read_bytes() == before
    session.do(TakeSteps(None))
    with pytest.raises(Refused):
        session.trial()


# -- problems and plans -----------------------------------------------------------------------------------------------


def test_a_problem_or_plan_that_is_not_acceptable_leaves_no_event(tmp_path: Path) -> None:
    session = Session.create(tmp_path / "a.json", by="M. R.")
    with pytest.raises(ProblemError):
        session.do(StateProblem(Problem("x", "x +")))
    assert session.state.events == 1
    session.do(StateProblem(QUADRATIC))
    with pytest.raises(PlanError):
        session.do(BeginRun(Plan("secant", ("1",))))
    with pytest.raises(PlanError):
        session.do(BeginRun(Plan("secnat", ("1", "2"))))
    assert session.state.events == 2
    assert_on_disk(session)


def test_where_there_is_no_derivative_the_event_says_so_and_other_methods_go_on(tmp_path: Path) -> None:
    problem = Problem("x", "cyl_bessel_j(x, 2) = 0.1")
    session = begun(tmp_path / "a.json", problem, Plan("secant", ("1", "2"), stop=TIGHT))
    assert session.state.stated is not None
    (derivative,) = session.state.stated.derivatives
    assert derivative.text == ""
    assert derivative.gaps
    assert "cyl_bessel_j" in derivative.gaps[0]
    with pytest.raises(PlanError, match="derivative"):
        session.do(BeginVariant(1, 1, NEWTON))
    session.do(TakeSteps(None))
    assert session.state.phase == "ended"
    assert_on_disk(session)


def test_settings_are_kept_in_the_order_of_the_record(tmp_path: Path) -> None:
    plan = Plan("finite-difference-newton", ("5",), settings=(("scheme", "central"), ("h", "1e-4")), stop=TIGHT)
    session = begun(tmp_path / "a.json", QUADRATIC, plan)
    assert session.state.run is not None
    assert session.state.run.plan.settings == (("h", "1e-4"), ("scheme", "central"))
    assert_on_disk(session)


def test_stepping_a_resumed_session_needs_no_symbolic_engine(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    begun(path, DEPTH, replace(NEWTON, start=("0.5",))).close()
    code = (
        "import sys; sys.modules['sympy'] = None\n"
        "from pathlib import Path\n"
        "from surefoot.session.session import Session\n"
        "from surefoot.session.commands import TakeSteps, BeginVariant\n"
        "from surefoot.session.recompute import recompute\n"
        "from surefoot.methods.plan import Plan, Stop\n"
        f"session = Session.open(Path({str(path)!r}), by='A. N.')\n"
        "session.do(TakeSteps(None))\n"
        "session.do(BeginVariant(1, 2, Plan('newton-raphson', (), stop=Stop(residual='1e-9'))))\n"
        "session.do(TakeSteps(None))\n"
        "session.close()\n"
        f"print([run.ending.outcome for run in session.state.runs], recompute(Path({str(path)!r})).reproduced)\n"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.stdout.strip() == "['converged', 'converged'] True", done.stderr


def test_opening_a_record_evaluates_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "a.json"
    with begun(path) as session:
        session.do(TakeSteps(3))
    monkeypatch.setattr("surefoot.equation.meter.Meter._value", lambda *given: pytest.fail("f was evaluated"))
    monkeypatch.setattr("surefoot.session.solver.check_problem", lambda *given: pytest.fail("a text was parsed"))
    with Session.open(path, by="A. N.") as resumed:
        assert resumed.state.phase == "stepping"


# -- one writer, and what the system refuses --------------------------------------------------------------------------


def test_a_second_opener_reads_only_and_is_told_who_holds_it(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    first = begun(path)
    second = Session.open(path, by="A. N.")
    assert second.read_only
    assert second.holder is not None
    assert second.holder.by == "M. R."
    assert second.notices[0].startswith("open for reading only: is held by M. R. on ")
    for command in (TakeSteps(), AddNote("x"), Withdraw()):
        with pytest.raises(Refused, match=r"held by M\. R\."):
            second.do(command)
    assert second.state == first.state
    second.close()
    first.do(TakeSteps())
    first.close()
    third = Session.open(path, by="A. N.")
    assert not third.read_only
    third.close()


def test_a_session_that_was_taken_over_writes_no_more(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    first = begun(path)
    second = Session.open(path, by="A. N.", take_over=True)
    assert second.notices[0].startswith("taken over from M. R. on ")
    second.do(TakeSteps())
    before = first.state
    with pytest.raises(RecordError, match=r"was taken over by A\. N\."):
        first.do(TakeSteps())
    assert first.state == before
    first.close()
    second.do(TakeSteps())
    assert_on_disk(second)
    second.close()


def test_what_a_killed_process_left_is_taken_over_with_a_notice(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    code = (
        "import os, signal; from pathlib import Path; from support.sessions import begun\n"
        "from surefoot.session.commands import TakeSteps\n"
        f"session = begun(Path({str(path)!r})); session.do(TakeSteps(2)); os.kill(os.getpid(), signal.SIGKILL)\n"
    )
    here = {**os.environ, "PYTHONPATH": str(Path(__file__).parents[1])}
    subprocess.run([sys.executable, "-c", code], env=here, check=False)
    assert (tmp_path / "a.json.lock").exists()
    session = Session.open(path, by="A. N.")
    assert not session.read_only
    assert session.notices[0].startswith("left open by M. R. on ")
    assert session.state.run is not None
    assert session.state.run.steps == 2
    session.close()
    assert not (tmp_path / "a.json.lock").exists()


def test_opening_to_read_leaves_no_trace(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    begun(path).close()
    with Session.open(path, by="A. N.", read_only=True) as session:
        assert [each.name for each in tmp_path.iterdir()] == ["a.json"]
        with pytest.raises(Refused, match="open for reading only"):
            session.do(TakeSteps())
        assert session.notices == ()


def test_a_file_that_cannot_be_written_opens_for_reading(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "a.json"
    begun(path).close()
    opened = os.open

    def denied(name: Path, flags: int, *more: int) -> int:
        if flags & os.O_RDWR:
            raise OSError(errno.EROFS, "Read-only file system")
        return opened(name, flags, *more)

    monkeypatch.setattr(os, "open", denied)
    session = Session.open(path, by="A. N.")
    assert session.read_only
    assert "the file system is read-only" in session.notices[0]
    assert session.state.phase == "stepping"


def test_a_full_disk_stops_the_session_where_the_record_ends(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    session = begun(tmp_path / "a.json")
    before, write = session.state, os.pwrite

    def full(descriptor: int, data: bytes, offset: int) -> int:
        if len(data) < 10:
            return write(descriptor, data, offset)
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(os, "pwrite", full)
    with pytest.raises(RecordError, match="the disk is full; make room and do it again"):
        session.do(TakeSteps(None))
    assert session.state == before
    assert_on_disk(session)
    monkeypatch.setattr(os, "pwrite", write)
    session.do(TakeSteps(None))
    assert session.state.phase == "ended"
    assert_on_disk(session)


def test_a_number_given_to_what_could_not_be_recorded_is_given_again(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    session = Session.create(tmp_path / "a.json", by="M. R.")

    def full(lines: object) -> None:
        raise RecordError("cannot be written: the disk is full")

    assert session._record is not None
    with monkeypatch.context() as patched:
        patched.setattr(session._record, "append", full)
        with pytest.raises(RecordError):
            session.do(StateProblem(DEPTH))
    session.do(StateProblem(QUADRATIC))
    with monkeypatch.context() as patched:
        patched.setattr(session._record, "append", full)
        with pytest.raises(RecordError):
            session.do(BeginRun(NEWTON))
    session.do(BeginRun(SECANT))
    session.do(TakeSteps(None))
    assert session.state.run is not None
    assert (session.state.run.number, session.state.run.stated.number) == (1, 1)
    assert session.state.run.current.x == pytest.approx(3.0)
    assert_on_disk(session)


@pytest.mark.parametrize("written", [True, False])
def test_after_a_write_that_a_signal_broke_off_the_file_decides(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, written: bool
) -> None:
    session = begun(tmp_path / "a.json")
    assert session._record is not None
    append = session._record.append

    def broken_off(lines: list[bytes]) -> None:
        if written:
            append(lines)
        raise KeyboardInterrupt

    with monkeypatch.context() as patched:
        patched.setattr(session._record, "append", broken_off)
        with pytest.raises(KeyboardInterrupt):
            session.do(TakeSteps())
    on_disk = session.path.read_bytes()
    with pytest.raises(RecordError, match="a write was broken off before; open the session again"):
        session.do(TakeSteps())
    assert session.path.read_bytes() == on_disk
    session.close()
    with Session.open(session.path, by="M. R.") as again:
        assert again.state.run is not None
        assert again.state.run.steps == written
        again.do(TakeSteps())
        assert_on_disk(again)


def test_text_that_cannot_be_recorded_is_refused_in_one_line(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json")
    with pytest.raises(RecordError, match="half a surrogate pair"):
        session.do(AddNote("\udcff"))
    session.do(AddNote("ünïcode\n\x1b[31m\u2028 stays"))
    assert session.state.notes[-1].text == "ünïcode\n\x1b[31m\u2028 stays"
    assert_on_disk(session)


def test_a_torn_file_opens_with_a_word_about_it(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    with begun(path) as session:
        session.do(TakeSteps(2))
    whole = path.read_bytes()
    path.write_bytes(whole[:-100])
    with Session.open(path, by="A. N.", read_only=True) as looking:
        assert len(looking.notices) == 1
        assert looking.notices[0].startswith("a write was cut short: events up to 3 are whole, the ")
        assert path.read_bytes() == whole[:-100]
    with Session.open(path, by="A. N.") as resumed:
        assert resumed.notices[-1] == "what a cut write left is kept in a.torn"
        assert resumed.state.run is not None
        assert resumed.state.run.steps == 1
        resumed.do(TakeSteps())
        assert_on_disk(resumed)
    assert whole.endswith((tmp_path / "a.torn").read_bytes() + whole[-100:])
    json.loads(path.read_bytes())


def test_the_method_revision_is_recorded(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json")
    what = session.events()[2].what
    assert isinstance(what, RunBegun)
    assert what.revision == 1


def test_a_session_whose_lock_cannot_be_taken_is_not_left_behind(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def denied(*given: object, **how: object) -> None:
        raise RecordError("cannot be locked: the disk is full")

    monkeypatch.setattr(session_module, "acquire", denied)
    with pytest.raises(RecordError, match="cannot be locked"):
        Session.create(tmp_path / "a.json", by="M. R.")
    assert list(tmp_path.iterdir()) == []


def test_a_session_that_cannot_be_read_is_not_left_locked(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    begun(path).close()
    path.write_bytes(path.read_bytes().replace(b"Two roots", b"Two r00ts"))
    with pytest.raises(RecordError, match="event 1: was changed after it was written"):
        Session.open(path, by="A. N.")
    assert [each.name for each in tmp_path.iterdir()] == ["a.json"]
    with pytest.raises(RecordError, match="there is no such file"):
        Session.open(tmp_path / "none.json", by="A. N.")


def test_a_name_is_needed(tmp_path: Path) -> None:
    with pytest.raises(RecordError, match="does not say by whom it is"):
        Session.create(tmp_path / "a.json", by=" ")
    assert list(tmp_path.iterdir()) == []


def test_a_bracketing_variant_without_a_sign_change_has_ended_at_once(tmp_path: Path) -> None:
    session = begun(tmp_path / "a.json", QUADRATIC, Plan("secant", ("4", "5"), stop=TIGHT))
    session.do(BeginVariant(1, 1, BISECTION))
    assert session.state.run is not None
    assert session.state.run.ending is not None
    assert session.state.run.ending.outcome == "broke_down"
    logarithm = Plan("secant", ("2", "1"), stop=TIGHT)
    session = begun(tmp_path / "b.json", Problem("x", "ln(x) = 1"), logarithm)
    session.do(PutIterate("-1", "outside"))
    session.do(BeginVariant(1, 2, BISECTION))
    assert session.state.run is not None
    assert session.state.run.ending is not None
    assert session.state.run.ending.outcome == "failed_evaluation"
    with pytest.raises(ValueError, match="no state to step from"):
        session.state.run.progress()


def test_folding_leaves_the_search_for_garbage_as_it_was(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "a.json"
    begun(path).close()
    frozen: list[bool] = []
    monkeypatch.setattr(gc, "freeze", lambda: frozen.append(gc.isenabled()))
    load(path)
    assert (frozen, gc.isenabled()) == ([], True)
    monkeypatch.setattr(loading_module, "_MANY_OBJECTS", -1)
    load(path)
    assert (frozen, gc.isenabled()) == ([False], True)
    gc.disable()
    try:
        load(path)
        assert not gc.isenabled()
    finally:
        gc.enable()
