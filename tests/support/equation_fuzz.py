"""Mutated equation texts: real equations with random edits, read, checked and evaluated."""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from contextlib import suppress
from dataclasses import replace
from random import Random

from support.published import FAILURES, PUBLISHED
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.checking import check_problem
from surefoot.equation.function import Function
from surefoot.equation.functions import FUNCTIONS
from surefoot.equation.meter import Meter
from surefoot.equation.parser import parse_condition, parse_equation, parse_expression
from surefoot.equation.problem import Definition, Input, Problem
from surefoot.equation.results import EvaluationFailed, Purpose
from surefoot.equation.wording import to_text
from surefoot.errors import EquationError, ProblemError

LIMIT_S = 1.0

_FRAGMENTS = (
    *"+-*/^()=<>,:;. \n\t\"'&|!%#[]{}@\\_0123456789efxπµ×−²√\u200b\u00a0\ud800\0",
    *("**", "<=", ">=", "==", "!=", "//", "1e400", "3.7f", "1d0", "1e", "0x1p3", "9^9^9^9", "1_000", "0,5"),
    *("piecewise(", "otherwise:", " and ", " or ", " not ", 'table("t", x)', "log(", "pi", "(x > 0: 1; otherwise: 0)"),
    *(f"{name}(" for name in FUNCTIONS),
)
_ROWS = tuple({**PUBLISHED, **FAILURES}.values())
_SEEDS = (
    *(row["equation"] for row in _ROWS),
    *(row["derivative"] for row in FAILURES.values() if row["derivative"]),
    *("M > 1", "0 < x <= 2*y", "V > b and not (T < 1 or P/R > 10)", "f == 0.5 or zeta != 1 and E < M"),
    "x = piecewise(x < 1 and not (y > 2 or 0 < x <= y): sin(x)^-2; otherwise: max(x, y, 0.5))",
    'lgamma(x) + cyl_bessel_j(0, x) - table("pump", x)/2.5f',
)
_UNKNOWNS = sorted({row["unknown"] for row in _ROWS})
_NAMES = sorted({name for row in _ROWS for name in (*row["parameters"], row["unknown"])})


def run(seed: int, count: int) -> dict[str, int]:
    """Reads so many mutated texts; what became of them, by name.

    Raises:
        AssertionError: a text took longer than LIMIT_S, or a message has more than one line.
        Exception: whatever a text brought about beside EquationError and ProblemError.
    """
    sys.stdout.write(f"seed {seed}\n")
    random = Random(seed)
    became: dict[str, int] = {}
    for _ in range(count):
        text = mutated(random)
        began = time.perf_counter()
        for outcome in _outcomes(text, random):
            became[outcome] = became.get(outcome, 0) + 1
        assert time.perf_counter() - began < LIMIT_S, text
    return became


def mutated(random: Random) -> str:
    """A real equation with one to six edits; now and then with many, or made very long."""
    text = random.choice(_SEEDS)
    for _ in range(random.choice((1, 1, 1, 2, 3, 6, 40))):
        text = random.choice(_EDITS)(random, text)
    if random.random() < 0.01:
        text = text * random.choice((10, 100, 1000))
    return text


def _outcomes(text: str, random: Random) -> list[str]:
    """What each reader made of the text: accepted, refused, and whether a value came of it."""
    outcomes = []
    for parse in (parse_equation, parse_expression, parse_condition):
        try:
            tree = parse(text)
        except EquationError as error:
            outcomes.append(_told(f"{parse.__name__} refused", error))
        else:
            outcomes.append(f"{parse.__name__} accepted")
            assert parse(to_text(tree)) == tree, text
    try:
        checked = check_problem(_problem(text, random))
    except ProblemError as error:
        return [*outcomes, _told("check refused", error)]
    x = random.choice((0.5, 1.0, -2.0, 1e-3, 300.0))
    function = Function(checked, BINARY64)
    result = Meter(function).evaluate(x, Purpose.PROBE)
    with suppress(EvaluationFailed):
        function.admissible(x)
    return [*outcomes, "value" if isinstance(result, float) else "failure"]


def _told(outcome: str, error: EquationError | ProblemError) -> str:
    words = str(error)
    assert words
    assert words.isprintable(), ascii(words)
    return outcome


def _problem(text: str, random: Random) -> Problem:
    """The text as equation, definition or condition of a problem that knows every name of the published texts."""
    unknown = random.choice([name for name in _UNKNOWNS if name in text] or _UNKNOWNS)
    inputs = tuple(Input(name, f"{random.uniform(0.1, 3.0):.3f}") for name in _NAMES if name != unknown)
    problem = Problem(unknown, text, inputs=inputs)
    place = random.randrange(4)
    if place == 0:
        quantity = Definition("Quantity", text.replace("=", "-", 1))
        return replace(problem, equation=f"{unknown} = Quantity", where=(quantity,))
    if place == 1:
        return replace(problem, equation=unknown, admissible=(text,))
    return problem


# Edits


def _insert(random: Random, text: str) -> str:
    at = random.randrange(len(text) + 1)
    return text[:at] + random.choice(_FRAGMENTS) + text[at:]


def _delete(random: Random, text: str) -> str:
    at = random.randrange(len(text) + 1)
    return text[:at] + text[at + random.choice((1, 1, 2, 5)) :]


def _replace(random: Random, text: str) -> str:
    at = random.randrange(len(text) + 1)
    return text[:at] + random.choice(_FRAGMENTS) + text[at + 1 :]


def _move(random: Random, text: str) -> str:
    a, b, c = sorted(random.randrange(len(text) + 1) for _ in range(3))
    return text[:a] + text[b:c] + text[a:b] + text[c:]


def _repeat(random: Random, text: str) -> str:
    a = random.randrange(len(text) + 1)
    b = min(len(text), a + random.randrange(1, 30))
    return text[:b] + text[a:b] * random.choice((1, 2, 30)) + text[b:]


def _splice(random: Random, text: str) -> str:
    other = random.choice(_SEEDS)
    return text[: random.randrange(len(text) + 1)] + other[random.randrange(len(other)) :]


def _wrap(random: Random, text: str) -> str:
    count = random.choice((1, 3, 250))
    return random.choice(("(", "-(", "sin(", "not (")) * count + text + ")" * count


def _rename(random: Random, text: str) -> str:
    return text.replace(random.choice(_NAMES), random.choice(_NAMES))


_EDITS: tuple[Callable[[Random, str], str], ...] = (
    *(_insert, _delete, _replace, _insert, _delete, _replace),
    *(_move, _repeat, _splice, _rename, _wrap),
)
