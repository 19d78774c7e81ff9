"""What a step costs the record's reader, the stepper and the measures; printed (`-s`) for docs/measured.md."""

from __future__ import annotations

import json
import sys
import time
from collections.abc import Callable

import pytest

from support.runs import Walk, run, stepper_for
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.problem import Problem
from surefoot.methods.measures import measure_last
from surefoot.methods.plan import Plan, Stop
from surefoot.methods.states import (
    decode_iterate,
    decode_spent,
    decode_state,
    encode_iterate,
    encode_spent,
    encode_state,
)
from surefoot.methods.table import method_of

BINARY64 = arithmetic_of("binary64")
KEPLER = Problem("x", "x = 0.7 + 0.5*sin(x)")
PLANS = {
    "bisection": Plan("bisection", ("0", "2"), stop=Stop()),
    "secant": Plan("secant", ("0.5", "2"), stop=Stop()),
    "finite-difference-newton": Plan("finite-difference-newton", ("2",), settings=(("h", "1e-3"),), stop=Stop()),
    "fixed-point": Plan("fixed-point", ("2",), stop=Stop()),
    "newton-raphson": Plan("newton-raphson", ("2",), stop=Stop()),
}
TURNS = 4000


def microseconds(work: Callable[[], object], turns: int = TURNS) -> float:
    """The best of five rounds, per call."""
    rounds = []
    for _ in range(5):
        start = time.perf_counter()
        for _ in range(turns):
            work()
        rounds.append((time.perf_counter() - start) / turns)
    return min(rounds) * 1e6


def third_step(code: str) -> Walk:
    return run(PLANS[code], KEPLER, limit=3)


@pytest.mark.parametrize("code", PLANS)
def test_decoding_a_step(code: str) -> None:
    """A hundred thousand of them are to be resumed in 3 s with all else; twice the goal of 15 us is let pass."""
    walk, method = third_step(code), method_of(code)
    iterate = encode_iterate(walk.iterates[-1], BINARY64)
    state, spent = encode_state(walk.states[-1], BINARY64), encode_spent(walk.pieces[-1].spent)
    text = json.dumps({"iterate": iterate, "state": state, "spent": spent})

    def decode() -> None:
        decode_iterate(iterate, BINARY64)
        decode_state(method, state, BINARY64)
        decode_spent(spent)

    decoding, parsing = microseconds(decode), microseconds(lambda: json.loads(text))
    sys.stdout.write(f"\n{code}: decoding {decoding:.1f} us, parsing its JSON {parsing:.1f} us\n")
    assert decoding < 30


@pytest.mark.parametrize("code", PLANS)
def test_a_step_of_the_stepper(code: str) -> None:
    """The frame around a rule costs little beside the evaluations of a real equation: a bound against growth."""
    walk, stepper = third_step(code), stepper_for(PLANS[code], KEPLER)
    progress = walk.progress
    step = microseconds(lambda: stepper.advance(progress))
    sys.stdout.write(f"\n{code}: a step {step:.1f} us\n")
    assert step < 100


def test_the_last_measure_costs_the_same_in_a_long_run() -> None:
    walk = run(PLANS["fixed-point"], KEPLER, limit=20)
    short, long = list(walk.iterates[:5]), list(walk.iterates[:5]) * 20_000
    early = microseconds(lambda: measure_last(short, BINARY64))
    late = microseconds(lambda: measure_last(long, BINARY64))
    sys.stdout.write(f"\nlast measure {early:.1f} us after 5 iterates, {late:.1f} us after 100 000\n")
    assert late < 1.5 * early
