"""Mutated problem files: real ones with random edits, each read or refused in time."""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from random import Random

from support.tree import ROOT
from surefoot.equation.problem_file import problem_file_text, read_problem_file
from surefoot.errors import ProblemError

LIMIT_S = 1.0

_RICH = """\
format = 1
title = "Depth in the tailrace at 12 m3/s"
unknown = "y"
unit = "m"
range = [0.05, 6.0]
needed = 0.005
admissible = ["y > yc"]
prefer = { nearest = 1.2 }
equation = "Q = Qd"
note = '''two
lines'''

[job]
reference = "QW-117"
assumptions = ["uniform flow", "clean channel"]

[where]
A = "(b + z*y)*y"
Q = "A/n*(A/(b + 2*y*sqrt(1 + z^2)))^(2/3)*sqrt(S)"
yc = "1.05"

[inputs]
b = 3.0
z = 1.5
S = "0x1.a36e2eb1c432dp-11"
n = { value = 0.025, unit = "s/m^(1/3)", uncertainty = 0.002, distribution = "normal", source = "survey 3, rev B" }
Qd = { value = 12.0, unit = "m3/s", low = 4.0, high = 18.0 }

[[correlation]]
between = ["b", "n"]
r = 0.3

[arithmetic]
kind = "multiprecision:50"
integer_power = "pow"
fused = false

[plan]
method = "secant"
start = [1.0, 2.0]
max_steps = 50

[plan.settings]
form = "stable"
complex = false
h = 1e-6

[plan.memory]
last = { first = 1.0, update = "x_k" }

[plan.control]
damping = 0.5
bounds = [0.01, 10.0]
order = ["damping", "bounds"]

[plan.stop]
x_relative = 1e-10
exact_zero = true
test = "abs(dx) < 1e-9"
"""
_SEEDS = (
    *(_RICH,) * 20,
    *(path.read_text(encoding="utf-8") for path in sorted((ROOT / "tests" / "published").glob("*/*.toml"))),
)
_FRAGMENTS = (
    *"=[]{}\"'.,#\\\n\t -+_0123456789eExXinfπ\r\0\x7f\u2028\ufeff",
    *(
        '"""',
        "'''",
        "[[",
        "]]",
        "\r\n",
        " = ",
        "[plan]\n",
        "[inputs]\n",
        "[[correlation]]\n",
        "format = 1\n",
        "value = ",
    ),
    *("true", "nan", "-inf", "1e999999999", "0x" + "f" * 5000, "9" * 5000, "1979-05-27", "07:32:00", "0o17", "1_000"),
    *(
        '"12000 L/s"',
        '{ from = "night.csv", row = 3 }',
        "{ nearest = 1 }",
        "[" * 3000,
        "{a=" * 3000,
        "a." * 3000,
        "\\ud800",
    ),
)


def run(seed: int, count: int) -> dict[str, int]:
    """Reads so many mutated files; how many were accepted and refused.

    Raises:
        AssertionError: a file took longer than LIMIT_S, was written and did not read back equal, or a message is not
            one line.
        Exception: whatever a text brought about beside ProblemError.
    """
    sys.stdout.write(f"seed {seed}\n")
    random = Random(seed)
    became = {"accepted": 0, "refused": 0}
    for _ in range(count):
        text = mutated(random)
        began = time.perf_counter()
        became[_outcome(text)] += 1
        assert time.perf_counter() - began < LIMIT_S, text
    return became


def mutated(random: Random) -> str:
    """A problem file with one to six edits, now and then with many."""
    text = random.choice(_SEEDS)
    for _ in range(random.choice((1, 1, 1, 2, 3, 6, 40))):
        text = random.choice(_EDITS)(random, text)
    return text


def _outcome(text: str) -> str:
    try:
        file = read_problem_file(text, "changed.toml")
    except ProblemError as error:
        words = str(error)
        assert words.startswith("changed.toml: ")
        assert words.isprintable(), ascii(words)
        assert len(words) < 600
        return "refused"
    plan = None if file.plan is None else {key: value for key, value in file.plan.items() if value != {}}
    written = read_problem_file(problem_file_text(file.problem, plan, file.arithmetic), "written.toml")
    assert (written.problem, written.plan, written.arithmetic) == (file.problem, plan, file.arithmetic), text
    return "accepted"


# Edits


def _insert(random: Random, text: str) -> str:
    at = random.randrange(len(text) + 1)
    return text[:at] + random.choice(_FRAGMENTS) + text[at:]


def _replace(random: Random, text: str) -> str:
    at = random.randrange(len(text) + 1)
    return text[:at] + random.choice(_FRAGMENTS) + text[at + random.choice((1, 1, 4)) :]


def _delete(random: Random, text: str) -> str:
    at = random.randrange(len(text) + 1)
    return text[:at] + text[at + random.choice((1, 1, 2, 20)) :]


def _change_word(random: Random, text: str) -> str:
    words = text.split(" ")
    words[random.randrange(len(words))] = random.choice(random.choice(_SEEDS).split(" "))
    return " ".join(words)


def _move_line(random: Random, text: str) -> str:
    lines = text.split("\n")
    line = lines.pop(random.randrange(len(lines)))
    lines.insert(random.randrange(len(lines) + 1), line)
    return "\n".join(lines)


def _repeat_line(random: Random, text: str) -> str:
    lines = text.split("\n")
    lines.insert(random.randrange(len(lines) + 1), random.choice(lines))
    return "\n".join(lines)


def _drop_line(random: Random, text: str) -> str:
    lines = text.split("\n")
    del lines[random.randrange(len(lines))]
    return "\n".join(lines)


def _splice(random: Random, text: str) -> str:
    other = random.choice(_SEEDS)
    return text[: random.randrange(len(text) + 1)] + other[random.randrange(len(other)) :]


_EDITS: tuple[Callable[[Random, str], str], ...] = (
    *(_insert, _replace, _delete, _change_word),
    *(_move_line, _repeat_line, _drop_line, _splice),
)
