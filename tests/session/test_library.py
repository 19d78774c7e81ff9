"""Sessions found in folders: what they are, by which names they go, and where they lie."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.sessions import BISECTION, DEPTH, NEWTON, QUADRATIC, SECANT, TIGHT, begun, chained, members_of, ticking
from surefoot.methods.plan import Plan
from surefoot.session import summary as summary_module
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
from surefoot.session.library import Summary, default_folder, find_sessions, new_name, summarise
from surefoot.session.loading import load
from surefoot.session.session import Session

COMMANDS: list[list[Command]] = [
    [],
    [StateProblem(QUADRATIC)],
    [StateProblem(QUADRATIC), StateProblem(DEPTH), Withdraw()],
    [StateProblem(QUADRATIC), Withdraw(), AddNote("empty again")],
    [StateProblem(QUADRATIC), BeginRun(SECANT)],
    [StateProblem(QUADRATIC), BeginRun(SECANT), TakeSteps(3), AddNote("x"), Withdraw()],
    [StateProblem(QUADRATIC), BeginRun(SECANT), TakeSteps(None)],
    [StateProblem(QUADRATIC), BeginRun(SECANT), TakeSteps(None), Withdraw(), PutIterate("2", "guess")],
    [StateProblem(QUADRATIC), BeginRun(SECANT), TakeSteps(2), Abandon("enough")],
    [StateProblem(QUADRATIC), BeginRun(Plan("secant", ("0", "2"), stop=TIGHT)), TakeSteps(1)],
    [StateProblem(QUADRATIC), BeginRun(Plan("bisection", ("5", "9")))],
    [StateProblem(QUADRATIC), BeginRun(SECANT), TakeSteps(2), BeginVariant(1, 1, NEWTON), TakeSteps(None)],
    [StateProblem(QUADRATIC), BeginRun(SECANT), TakeSteps(2), BeginVariant(1, 1, NEWTON), TakeUp(1)],
    [StateProblem(QUADRATIC), BeginRun(SECANT), TakeSteps(2), BeginVariant(1, 1, NEWTON), TakeUp(1), Withdraw()],
    [StateProblem(QUADRATIC), BeginRun(SECANT), TakeSteps(None), StateProblem(DEPTH)],
    [StateProblem(QUADRATIC), BeginRun(SECANT), TakeSteps(None), BeginRun(BISECTION), TakeSteps(4), Withdraw()],
]


def of_the_fold(path: Path) -> Summary:
    """What a summary must say, from the state itself."""
    state = load(path).state
    run = state.run
    outcome = run.ending.outcome if run and run.ending else None
    steps = run.steps if run else 0
    return Summary(path, state.title, state.phase, outcome, state.changed_at, state.by, len(state.runs), steps)


@pytest.mark.parametrize("commands", COMMANDS)
def test_a_summary_says_what_the_fold_says(tmp_path: Path, commands: list[Command]) -> None:
    with Session.create(tmp_path / "a.json", by="M. R.", title="Weir", now=ticking()) as session:
        for command in commands:
            session.do(command)
    assert summarise(session.path) == of_the_fold(session.path)


def test_a_summary_does_not_fold_what_it_can_tell_without(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    with begun(tmp_path / "a.json") as session:
        session.do(TakeSteps(None))
    expected = of_the_fold(session.path)
    monkeypatch.setattr(summary_module, "load", lambda path: pytest.fail("it was folded"))
    assert summarise(session.path) == expected


def test_sessions_are_found_with_their_faults_the_newest_first(tmp_path: Path) -> None:
    one, two = tmp_path / "one", tmp_path / "two"
    with Session.create(one, by="M. R.", title="Older", now=ticking("2026-11-30T10:00:00.000")):
        pass
    with Session.create(two, by="M. R.", title="Newer", now=ticking("2099-01-01T10:00:00.000")) as newer:
        newer.do(AddNote("x"))
    with begun(two / "changed.json") as session:
        session.do(TakeSteps(3))
    session.path.write_bytes(session.path.read_bytes().replace(b'"k":3', b'"k":4'))
    (two / "later.json").write_text('{"format":"surefoot-session","version":2,"events":[{}]}', encoding="ascii")
    (two / "other.json").write_text("{}", encoding="ascii")
    (two / "folder.json").mkdir()
    (two / "notes.txt").write_text("not a session", encoding="ascii")
    found = find_sessions((one, two, tmp_path / "none"))
    assert [summary.title for summary in found if not summary.fault] == ["Newer", "Older"]
    assert found[0].title == "Newer"
    faults = {summary.path.name: summary.fault for summary in found if summary.fault}
    assert faults == {
        "changed.json": "event 4: was changed after it was written: its hash does not match",
        "later.json": "was written by a newer surefoot (record version 2; this one reads 1)",
        "other.json": "is no session file of surefoot",
        "folder.json": "is not a regular file",
    }
    assert all(summary.changed_at.endswith("Z") for summary in found)


def test_a_cut_file_is_listed_by_its_whole_events(tmp_path: Path) -> None:
    with begun(tmp_path / "a.json") as session:
        session.do(TakeSteps(3))
    session.path.write_bytes(session.path.read_bytes()[:-50])
    assert (summarise(session.path).steps, summarise(session.path).fault) == (2, "")


@pytest.mark.parametrize("harm", ["unknown kind", "bad content", "bad ending", "not allowed"])
def test_what_only_folding_can_refuse_is_listed_with_its_fault(tmp_path: Path, harm: str) -> None:
    with begun(tmp_path / "a.json") as session:
        session.do(TakeSteps(1))
    events = members_of(session.path)
    if harm == "unknown kind":
        events[3]["kind"] = "finding_made"
    elif harm == "bad content":
        events[3]["content"] = "x"
    elif harm == "bad ending":
        events[3]["content"] = {"ending": []}
    else:
        events[2] = {**events[2], "kind": "withdrawn", "content": {"of": 1}}
        events = [*events[:3], *events[2:3]]
    session.path.write_bytes(chained(events))
    assert summarise(session.path).fault.startswith("event 3: ")


# -- names and folders ------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("title", "name"),
    [
        ("Depth in the tailrace at 12 m3/s", "2026-12-01-depth-in-the-tailrace-at-12-m3-s.json"),
        ("", "2026-12-01-session.json"),
        ("../../etc/passwd\0", "2026-12-01-etc-passwd.json"),
        ("Größe: Näherung", "2026-12-01-groe-naherung.json"),
        ("流量", "2026-12-01-session.json"),
        ("a" * 300, f"2026-12-01-{'a' * 48}.json"),
        ("word " * 40, "2026-12-01-word-word-word-word-word-word-word-word-word.json"),
    ],
)
def test_a_name_is_the_date_and_the_title(tmp_path: Path, title: str, name: str) -> None:
    assert new_name("2026-12-01T14:02:11.318Z", title, tmp_path) == name


def test_a_name_is_new_in_its_folder(tmp_path: Path) -> None:
    for expected in ("2026-12-01-depth.json", "2026-12-01-depth-2.json", "2026-12-01-depth-3.json"):
        assert new_name("2026-12-01", "Depth", tmp_path) == expected
        (tmp_path / expected).symlink_to(tmp_path / "nowhere")


@given(st.text())
def test_any_title_gives_a_plain_name(title: str) -> None:
    name = new_name("2026-12-01", title, Path("/nowhere"))
    assert name.isascii()
    assert set(name) <= set("abcdefghijklmnopqrstuvwxyz0123456789-.")
    assert len(name) <= 64
    assert name.count(".") == 1


def test_where_sessions_lie(tmp_path: Path) -> None:
    here = tmp_path / "here"
    (here / "sessions").mkdir(parents=True)
    home = {"HOME": "/home-of-all/user"}
    named = {**home, "SUREFOOT_SESSIONS": "/srv/solves"}
    assert default_folder("given", named, here) == Path("given")
    assert default_folder(Path("/a/b"), named, here) == Path("/a/b")
    assert default_folder(None, named, here) == Path("/srv/solves")
    assert default_folder(None, home, here) == here / "sessions"
    elsewhere = tmp_path / "elsewhere"
    data = {**home, "XDG_DATA_HOME": "/data"}
    assert default_folder(None, data, elsewhere) == Path("/data/surefoot/sessions")
    usual = default_folder(None, home, elsewhere)
    assert usual == default_folder(None, {**home, "XDG_DATA_HOME": "relative/is/ignored"}, elsewhere)
    assert usual.parts[-2:] == ("surefoot", "sessions")
    assert usual.is_relative_to("/home-of-all/user")
