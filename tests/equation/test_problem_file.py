"""Problem files: what is read, what is refused and in which words, and that what is written reads back equal."""

from __future__ import annotations

import time
import tomllib
from dataclasses import fields
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.plan_tables import plan_tables
from support.problems import problems
from surefoot.equation.problem import Correlation, Definition, Input, Job, Problem
from surefoot.equation.problem_file import MAX_CHARACTERS, ProblemFile, problem_file_text, read_problem_file
from surefoot.equation.problem_keys import CONTROL, CORRELATION, FILE, INPUT, JOB, PLAN, STOP
from surefoot.equation.problem_values import MAX_NUMBER
from surefoot.errors import ProblemError
from surefoot.methods.plan import Control, Plan, Stop

PUBLISHED = Path(__file__).parents[1] / "published"
HEAD = 'format = 1\nunknown = "y"\nequation = "y = 1"\n'

TAILRACE = """\
format   = 1
title    = "Depth in the tailrace at 12 m3/s"
unknown  = "y"
unit     = "m"
range    = [0.05, 6.0]         # working range
needed   = 0.005
admissible = ["y > yc"]
prefer   = { nearest = 1.2 }
equation = "Q = Qd"
derivative = "1"
note     = "from the night shift"

[job]
reference = "QW-117"
revision = "B"
purpose = "gate setting"
assumptions = ["uniform flow"]

[where]
A  = "(b + z*y)*y"
yc = "1.05"

[inputs]
b  = 3.0
z  = 1_5e-1
k  = 7
S  = "0x1.a36e2eb1c432dp-11"
n  = { value = 0.025, unit = "s/m^(1/3)", uncertainty = 2e-3, distribution = "normal", source = "survey 3, rev B" }
Qd = { value = 12.0, unit = "m3/s", low = 4, high = 18.0, interval = [11.0, 13.0] }

[[correlation]]
between = ["b", "n"]
r = 0.30

[arithmetic]
kind = "multiprecision:50"
integer_power = "pow"
fused = false

[plan]
method = "secant"
start  = [1.0, 0x1F]
max_steps = 50
[plan.settings]
h = 1e-6
scheme = "central"
complex = false
[plan.memory]
last = { first = 1.0, update = "x_k" }
[plan.control]
bounds = [0.01, 10]
order = ["damping", "bounds"]
derivative_every = 2
[plan.stop]
x_relative = 1e-10
exact_zero = true
"""


def refused(text: str) -> str:
    with pytest.raises(ProblemError) as caught:
        read_problem_file(text, "p.toml")
    words = str(caught.value)
    assert words.startswith("p.toml: ")
    assert words.isprintable()
    return words.removeprefix("p.toml: ")


# Reading


def test_a_file_with_every_key_is_read_as_typed() -> None:
    file = read_problem_file(TAILRACE, "tailrace.toml")
    assert file.problem == Problem(
        unknown="y",
        equation="Q = Qd",
        title="Depth in the tailrace at 12 m3/s",
        unit="m",
        range=("0.05", "6.0"),
        needed="0.005",
        admissible=("y > yc",),
        prefer="nearest:1.2",
        derivative="1",
        note="from the night shift",
        job=Job("QW-117", "B", "gate setting", ("uniform flow",)),
        where=(Definition("A", "(b + z*y)*y"), Definition("yc", "1.05")),
        inputs=(
            Input("b", "3.0"),
            Input("z", "15e-1"),
            Input("k", "7"),
            Input("S", "0x1.a36e2eb1c432dp-11"),
            Input("n", "0.025", "s/m^(1/3)", uncertainty="2e-3", distribution="normal", source="survey 3, rev B"),
            Input("Qd", "12.0", "m3/s", low="4", high="18.0", interval=("11.0", "13.0")),
        ),
        correlation=(Correlation(("b", "n"), "0.30"),),
    )
    assert file.arithmetic == "multiprecision:50"
    assert file.plan == {
        "method": "secant",
        "start": ["1.0", "31"],
        "max_steps": 50,
        "settings": {"h": "1e-6", "scheme": "central", "complex": False},
        "memory": {"last": {"first": "1.0", "update": "x_k"}},
        "control": {"bounds": ["0.01", "10"], "order": ["damping", "bounds"], "derivative_every": 2},
        "stop": {"x_relative": "1e-10", "exact_zero": True},
    }


def test_the_shortest_file() -> None:
    assert read_problem_file(HEAD, "p.toml") == ProblemFile(Problem("y", "y = 1"), None, "binary64")
    assert read_problem_file("\ufeff" + HEAD.replace("\n", "\r\n"), "p.toml").problem == Problem("y", "y = 1")


@pytest.mark.parametrize("prefer", ['"smallest"', '"largest"'])
def test_a_preference_can_be_a_word(prefer: str) -> None:
    assert read_problem_file(f"{HEAD}prefer = {prefer}", "p.toml").problem.prefer == prefer.strip('"')


@pytest.mark.parametrize("text", ["-0.0", "1e-400", "+1.5", "9007199254740993", "0.1000000000000000055511151231257827"])
def test_a_number_keeps_its_text(text: str) -> None:
    assert read_problem_file(f"{HEAD}[inputs]\nb = {text}", "p.toml").problem.inputs[0].value == text


def test_every_field_of_a_problem_has_its_key() -> None:
    apart = {"format", "tables", "program", "arithmetic", "plan"}
    assert FILE.keys.keys() - apart == {field.name for field in fields(Problem)}
    assert INPUT.keys.keys() - {"from", "column", "row"} == {field.name for field in fields(Input)} - {"name"}
    assert JOB.keys.keys() == {field.name for field in fields(Job)}
    assert CORRELATION.keys.keys() == {field.name for field in fields(Correlation)}


def test_every_field_of_a_plan_has_its_key() -> None:
    assert CONTROL.keys.keys() == {field.name for field in fields(Control)}
    assert STOP.keys.keys() == {field.name for field in fields(Stop)}
    assert PLAN.keys.keys() - {"memory"} == {field.name for field in fields(Plan)} - {"arithmetic"}


# The published files

UNREAD: dict[str, str] = {}
"""Published files that this version does not read, with the reason; there is none."""


@pytest.mark.parametrize("path", sorted(PUBLISHED.glob("*/*.toml")), ids=lambda path: path.stem)
def test_published_files_are_read_to_the_letter(path: Path) -> None:
    assert path.stem not in UNREAD
    text = path.read_text(encoding="utf-8")
    file = read_problem_file(text, path.name)
    as_typed = tomllib.loads(text, parse_float=str)
    assert file.problem.equation == as_typed["equation"]
    assert file.problem.range == tuple(map(str, as_typed["range"]))
    inputs = {
        name: each["value"] if isinstance(each, dict) else each for name, each in as_typed.get("inputs", {}).items()
    }
    assert {each.name: each.value for each in file.problem.inputs} == {name: str(each) for name, each in inputs.items()}
    assert (file.plan is None) == ("plan" not in as_typed)
    assert read_problem_file(problem_file_text(file.problem, file.plan, file.arithmetic), "written.toml") == file


# Refusing


@pytest.mark.parametrize(
    ("line", "message"),
    [
        ('unkown = "x"', "unkown: unknown key in the head of the file (nearest: unknown) (line 4)"),
        (
            'colour = "red"',
            "colour: unknown key in the head of the file; known are format, title, unknown, unit, range,",
        ),
        ("[inputs]\nn = { valeu = 1.0 }", "inputs.n.valeu: unknown key in [inputs.n] (nearest: value) (line 5)"),
        (
            "[plan.stop]\nx_absolut = 1.0",
            "plan.stop.x_absolut: unknown key in [plan.stop] (nearest: x_absolute) (line 5)",
        ),
        ("[plan]\n\ndamping = 0.5", "plan.damping: unknown key in [plan]; it belongs in [plan.control] (line 6)"),
        ('[job]\nlow = "1"', "job.low: unknown key in [job]; it belongs in [inputs.NAME] (line 5)"),
        (
            "[plan.control]\nunit = 0.5",
            "plan.control.unit: unknown key in [plan.control]; it belongs in the head of the f",
        ),
        ("[inputz]\nb = 1.0", "inputz: unknown key in the head of the file (nearest: inputs) (line 4)"),
        ("inputs.n.vaule = 1.0", "inputs.n.vaule: unknown key in [inputs.n] (nearest: value) (line 4)"),
        (
            "[tables.pump]\nz = [1.0]",
            "tables.pump.z: unknown key in [tables.pump]; known are x, y, file, kind (line 5)",
        ),
        ('[program]\ncomand = ["./a"]', "program.comand: unknown key in [program] (nearest: command) (line 5)"),
        ('"a\\nb" = 1', "'a\\nb': unknown key in the head of the file; known are"),
    ],
)
def test_an_unknown_key_is_refused_with_the_nearest_and_its_table(line: str, message: str) -> None:
    assert refused(HEAD + line).startswith(message)


@pytest.mark.parametrize(
    ("line", "message"),
    [
        ("title = 5", "title: a text in quotes is expected, not 5 (line 4)"),
        ("title = 5.50", "title: a text in quotes is expected, not 5.50 (line 4)"),
        ("title = true", "title: a text in quotes is expected, not true (line 4)"),
        ("title = 1979-05-27", "title: a text in quotes is expected, not the date or time 1979-05-27 (line 4)"),
        ("needed = 'a little'", "needed: a number is expected (0.025, 1e-3 or \"0x1.8p-3\"), not 'a little' (line 4)"),
        ("needed = nan", 'needed: a number is expected (0.025, 1e-3 or "0x1.8p-3"), not nan (line 4)'),
        ("needed = -inf", 'needed: a number is expected (0.025, 1e-3 or "0x1.8p-3"), not -inf (line 4)'),
        ("needed = false", 'needed: a number is expected (0.025, 1e-3 or "0x1.8p-3"), not false (line 4)'),
        ("needed = []", 'needed: a number is expected (0.025, 1e-3 or "0x1.8p-3"), not a list (line 4)'),
        ("range = [1.0]", "range: a list of two numbers is expected, not of 1 (line 4)"),
        ("range = 1.0", "range: a list of two numbers is expected, not 1.0 (line 4)"),
        ("range = [1.0, true]", 'range: a number is expected (0.025, 1e-3 or "0x1.8p-3"), not true (line 4)'),
        ("admissible = 'y > 0'", "admissible: a list of texts is expected, not 'y > 0' (line 4)"),
        ("admissible = [1]", "admissible: a text in quotes is expected, not 1 (line 4)"),
        (
            "prefer = 'lowest'",
            'prefer: "smallest", "largest" or { nearest = 1.2 } is expected, not \'lowest\' (line 4)',
        ),
        (
            "prefer = { nearst = 1 }",
            'prefer: "smallest", "largest" or { nearest = 1.2 } is expected, not a table (line 4)',
        ),
        ("inputs = 5", "inputs: a table is expected, not 5 (line 4)"),
        ("correlation = 1", "correlation: tables [[correlation]] are expected, not 1 (line 4)"),
        ("[correlation]\nr = 1", "correlation: tables [[correlation]] are expected, not a table (line 4)"),
        ("[[correlation]]\nr = 1", "correlation: the key between is missing (line 4)"),
        ("[[correlation]]\nr = 1\nbetween = ['a']", "correlation.between: a list of two names is expected, not of 1"),
        ("[where]\nA = 1.05", "where.A: a text in quotes is expected, not 1.05 (line 5)"),
        ("[inputs]\nn = { unit = 'm' }", "inputs.n: has no value (line 5)"),
        (
            "[inputs]\nn = {value = 1, distribution = 'norml'}",
            "inputs.n.distribution: 'norml' is not accepted here (nearest:",
        ),
        (
            "[inputs]\nn = {value = 1, distribution = 'beta'}",
            "inputs.n.distribution: 'beta' is not accepted here (accepted",
        ),
        (
            "[inputs]\nnote = 'x'",
            "inputs.note.value: a number is expected (0.025, 1e-3 or \"0x1.8p-3\"), not 'x'; the key note of t",
        ),
        ("[plan]\nmax_steps = 5.0", "plan.max_steps: a whole number is expected, not 5.0 (line 5)"),
        ("[plan]\nmax_steps = true", "plan.max_steps: a whole number is expected, not true (line 5)"),
        ("[plan]\nstart = 1.0", "plan.start: a list of numbers is expected, not 1.0 (line 5)"),
        ("[plan.stop]\nexact_zero = 1", "plan.stop.exact_zero: true or false is expected, not 1 (line 5)"),
        (
            "[plan.settings]\nh = []",
            "plan.settings.h: a text, a number, true or false is expected, not a list (line 5)",
        ),
        (
            "[plan.settings]\nh = nan",
            'plan.settings.h: a number is expected (0.025, 1e-3 or "0x1.8p-3"), not nan (line 5)',
        ),
        ("[plan.memory]\na = { first = 1.0 }", "plan.memory.a: the key update is missing (line 5)"),
        (
            "needed = 0x" + "f" * 5000,
            'needed: a number is expected (0.025, 1e-3 or "0x1.8p-3"), not a whole number of thou',
        ),
        (
            f"needed = 0.{'3' * MAX_NUMBER}",
            f"needed: a number may have {MAX_NUMBER} characters; this one has 4002 (line 4)",
        ),
    ],
)
def test_a_value_of_the_wrong_type_is_refused_in_one_line(line: str, message: str) -> None:
    assert refused(HEAD + line).startswith(message)


@pytest.mark.parametrize(
    ("line", "message"),
    [
        (
            "[inputs]\nQ = '12000 L/s'",
            "inputs.Q.value: a value with a unit of its own is not converted by this version; write",
        ),
        (
            "[inputs]\nQ = { value = '12 L/s' }",
            "inputs.Q.value: a value with a unit of its own is not converted by this ver",
        ),
        (
            "[inputs]\nT = { from = 'a.csv', column = 'T', row = 3 }",
            "inputs.T.from: values from another file are not read",
        ),
        (
            "[inputs]\nT = { value = 1, row = 3 }",
            "inputs.T.row: values from another file are not read by this version; wr",
        ),
        (
            "[tables.pump]\nx = [0.0, 1.0]\ny = [1.0, 2.0]",
            "tables: tables are not read by this version; state the relation",
        ),
        (
            "[program]\ncommand = ['./b']\nprotocol = 'line'",
            "program: outside programs are not run by this version; state",
        ),
        (
            "[arithmetic]\ninteger_power = 'multiply'",
            'arithmetic.integer_power: only "pow" is available in this version',
        ),
        ("[arithmetic]\nfused = true", "arithmetic.fused: only false is available in this version (line 5)"),
    ],
)
def test_what_this_version_does_not_read_says_so(line: str, message: str) -> None:
    assert refused(HEAD + line).startswith(message)


def test_a_program_without_an_equation_is_told_of_the_program() -> None:
    text = "format = 1\nunknown = 'y'\n[program]\ncommand = ['./b']"
    assert refused(text).startswith("program: outside programs are not run by this version")


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", "format: the key is missing; write format = 1 in the first line"),
        ("format = 2", "format: format 2 is newer than this version, which reads format 1 (line 1)"),
        ("format = 2\nnew_key = 1", "format: format 2 is newer than this version, which reads format 1 (line 1)"),
        ("format = 0", "format: format = 1 is expected, not 0 (line 1)"),
        ("format = true", "format: format = 1 is expected, not true (line 1)"),
        ("format = '1'", "format: format = 1 is expected, not '1' (line 1)"),
        ("format = 1.0", "format: format = 1 is expected, not 1.0 (line 1)"),
        ("format = 1\nequation = 'x'", 'unknown: the key is missing; write unknown = "y"'),
        ("format = 1\nunknown = 'x'", 'equation: the key is missing; write equation = "left = right"'),
        ("format = ", "is not TOML: invalid value at the end of the file"),
        ("format = 1\nx = = 2", "line 2: is not TOML: invalid value in column 5"),
        ("format = 1\nformat = 1", "is not TOML: a key or table is stated twice at the end of the file"),
        ("[a]\n[a]\nb = 1", "line 2: is not TOML: a key or table is stated twice in column 3"),
        ("a = 1\n[a.b]\n", "line 2: is not TOML: a key or table is stated twice in column 5"),
        ("format = " + "9" * 5000, "holds a whole number of thousands of digits, or a date that there is not"),
        ("format = 0x" + "f" * 5000, "format: format a whole number of thousands of digits is newer than this version"),
        ("format = 1\nx = " + "[" * 100_000, "lists or tables are nested too deeply"),
        ("a." * 400_000 + "a = 1", "line 1: a key with so many parts is in no problem file"),
        (f"format = 1\n[{'b . ' * 17}b]", "line 2: a key with so many parts is in no problem file"),
        ("#" * MAX_CHARACTERS + "#", "has 1000001 characters; a problem file may have 1000000"),
    ],
)
def test_what_is_no_problem_file_is_refused_in_time(text: str, message: str) -> None:
    began = time.perf_counter()
    assert refused(text).startswith(message)
    assert time.perf_counter() - began < 1.0


def test_the_line_is_told_past_long_strings_and_other_tables() -> None:
    text = HEAD + 'note = """\n[plan]\nstart = 5\n"""\n[plan]\nmethod = "secant"\nstart = 5\n'
    assert refused(text) == "plan.start: a list of numbers is expected, not 5 (line 10)"


def test_quoted_and_dotted_keys_are_found_too() -> None:
    assert refused(f"{HEAD}['plan' . stop]\n\"tset\" = 5").endswith(
        "unknown key in [plan.stop] (nearest: test) (line 5)"
    )
    assert refused(f"{HEAD}\nplan.stop.tset = 5").endswith("unknown key in [plan.stop] (nearest: test) (line 5)")


def test_a_long_key_is_cut_in_the_message() -> None:
    words = refused(HEAD + "k" * 5000 + " = 1")
    assert words.startswith("k" * 37 + "...: unknown key")
    assert len(words) < 300


# Writing


@given(problems(), st.none() | plan_tables, st.sampled_from(["binary64", "binary32", "multiprecision:50"]))
def test_what_is_written_reads_back_equal(problem: Problem, plan: dict[str, Any] | None, arithmetic: str) -> None:
    text = problem_file_text(problem, plan, arithmetic)
    assert read_problem_file(text, "written.toml") == ProblemFile(problem, plan, arithmetic)


def test_the_layout_is_for_reading() -> None:
    file = read_problem_file(TAILRACE, "tailrace.toml")
    assert problem_file_text(file.problem, file.plan, file.arithmetic) == (
        """\
format = 1
title = "Depth in the tailrace at 12 m3/s"
unknown = "y"
unit = "m"
range = [0.05, 6.0]
needed = 0.005
admissible = ["y > yc"]
prefer = { nearest = 1.2 }
equation = "Q = Qd"
derivative = "1"
note = "from the night shift"

[job]
reference   = "QW-117"
revision    = "B"
purpose     = "gate setting"
assumptions = ["uniform flow"]

[where]
A  = "(b + z*y)*y"
yc = "1.05"

[inputs]
b  = 3.0
z  = 15e-1
k  = 7
S  = "0x1.a36e2eb1c432dp-11"
n  = { value = 0.025, unit = "s/m^(1/3)", uncertainty = 2e-3, distribution = "normal", source = "survey 3, rev B" }
Qd = { value = 12.0, unit = "m3/s", low = 4, high = 18.0, interval = [11.0, 13.0] }

[[correlation]]
between = ["b", "n"]
r       = 0.30

[arithmetic]
kind = "multiprecision:50"

[plan]
method    = "secant"
start     = [1.0, 31]
max_steps = 50

[plan.settings]
h       = 1e-6
scheme  = "central"
complex = false

[plan.memory]
last = { first = 1.0, update = "x_k" }

[plan.control]
bounds           = [0.01, 10]
derivative_every = 2
order            = ["damping", "bounds"]

[plan.stop]
x_relative = 1e-10
exact_zero = true
"""
    )


def test_texts_of_several_lines_and_odd_characters() -> None:
    problem = Problem("α", "α\n= 1", note='a "quoted" \\ line\r\n\ttab """ \x00 end', inputs=(Input("Δ p", ".5"),))
    text = problem_file_text(problem)
    assert 'equation = """\nα\n= 1"""' in text
    assert '"Δ p" = ".5"' in text
    assert read_problem_file(text, "p.toml").problem == problem


def test_the_arithmetic_of_a_recorded_plan_is_written_as_that_of_the_file() -> None:
    text = problem_file_text(Problem("y", "y"), {"method": "secant", "start": ["1"], "arithmetic": "binary32"})
    file = read_problem_file(text, "p.toml")
    assert (file.arithmetic, file.plan) == ("binary32", {"method": "secant", "start": ["1"]})


def test_a_name_that_is_stated_twice_is_not_lost() -> None:
    twice = Problem("y", "y = A", where=(Definition("A", "1"), Definition("A", "2")))
    text = problem_file_text(twice)
    assert 'A = "1"\nA = "2"\n' in text
    assert "stated twice" in refused(text)
