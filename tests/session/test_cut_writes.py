"""A crash at any byte of a write, in a real session: no step that was acknowledged is lost."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from support.sessions import begun, ticking, wandering
from surefoot.session.commands import TakeSteps
from surefoot.session.loading import load
from surefoot.session.recompute import recompute
from surefoot.session.session import Session


@pytest.mark.parametrize("group", [1, 4])
def test_cut_at_every_byte(tmp_path: Path, group: int) -> None:
    path = tmp_path / "a.json"
    with begun(path, *wandering(50)) as session:
        session.do(TakeSteps(2))
        acknowledged, before = session.state, path.read_bytes()
        session.do(TakeSteps(group))
        done, after = session.state, path.read_bytes()
    start = next(i for i, (old, new) in enumerate(zip(before, after, strict=False)) if old != new)
    assert start == len(before) - len("\n]}\n")
    reached = set()
    for cut in range(start, len(after) + 1):
        path.write_bytes(after[:cut] + before[cut:])
        loaded = load(path)
        assert acknowledged.events <= loaded.state.events <= done.events
        assert loaded.events[: acknowledged.events] == list(session.events())[: acknowledged.events]
        reached.add(loaded.state.events)
    assert reached == set(range(acknowledged.events, done.events + 1))


def test_a_session_goes_on_from_any_cut(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    with begun(path, *wandering(50)) as session:
        session.do(TakeSteps(3))
        before = path.read_bytes()
        session.do(TakeSteps(1))
        after = path.read_bytes()
        whole = session.state
    for cut in range(len(before) - 4, len(after), 37):
        path.write_bytes(after[:cut] + before[cut:])
        with Session.open(path, by="A. N.", now=ticking()) as resumed:
            missing = whole.events - resumed.state.events
            if missing:
                resumed.do(TakeSteps(missing))
            assert resumed.state.runs == whole.runs
        json.loads(path.read_bytes())
        assert recompute(path).reproduced
        assert recompute(path).chain == "whole"
        path.with_suffix(".torn").unlink(missing_ok=True)
