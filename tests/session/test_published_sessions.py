"""Published problems solved in sessions: bracket, change to Newton-Raphson, leave, resume, recompute, verify.

The sources of the roots stand beside them in tests/published/data/published.json.
"""

from __future__ import annotations

import json
from pathlib import Path

import jsonschema
import pytest

from support.published import PUBLISHED, WITHOUT_DERIVATIVE, brackets, problem
from support.sessions import ticking
from support.tree import ROOT
from surefoot.methods.plan import Plan, Stop
from surefoot.session.commands import BeginRun, BeginVariant, StateProblem, TakeSteps
from surefoot.session.loading import load
from surefoot.session.recompute import recompute
from surefoot.session.session import Session

VALIDATOR = jsonschema.Draft202012Validator(json.loads((ROOT / "docs" / "session.schema.json").read_bytes()))
BRACKETED = tuple(code for code in PUBLISHED if brackets(code))
CLOSE = Stop(x_relative="1e-4", x_absolute="1e-6")


@pytest.mark.parametrize("code", BRACKETED)
def test_a_published_root_is_reached_recorded_and_reproduced(tmp_path: Path, code: str) -> None:
    low, high, root = brackets(code)[0]
    path = tmp_path / "a.json"
    with Session.create(path, by="M. R.", now=ticking()) as session:
        session.do(StateProblem(problem(code)))
        session.do(BeginRun(Plan("bisection", (repr(low), repr(high)), max_steps=200, stop=CLOSE)))
        session.do(TakeSteps(None))
        assert session.state.run is not None
        last = session.state.run.current.k
    method = "secant" if code in WITHOUT_DERIVATIVE else "newton-raphson"
    with Session.open(path, by="A. N.", now=ticking()) as session:
        session.do(BeginVariant(1, last, Plan(method, (), max_steps=30, stop=Stop(x_relative="1e-13"))))
        if session.state.phase == "stepping":
            session.do(TakeSteps(None))
        assert session.state.run is not None
        assert session.state.run.ending is not None
        # 3.4e-13 at worst (fin-regz-iii, whose residual cancels); the others are right to the last places of binary64.
        assert session.state.run.current.x == pytest.approx(root, rel=1e-11, abs=0.0)
        assert load(path).state == session.state
    done = recompute(path)
    assert (done.reproduced, done.chain) == (True, "whole"), done.first_difference
    VALIDATOR.validate(json.loads(path.read_bytes()))
