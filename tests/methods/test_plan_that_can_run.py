"""What a plan is refused for before anything is evaluated, and what is nobody's business but the engineer's."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from surefoot.equation.checking import CheckedProblem, check_problem
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.problem import Definition, Input, Problem
from surefoot.errors import PlanError
from surefoot.methods.contract import Setting
from surefoot.methods.plan import Control, Plan, Stop
from surefoot.methods.plan_check import check_plan
from surefoot.methods.settings import read_number, read_settings
from surefoot.methods.table import PLANNED, method_of

PROBLEM = Problem(
    "y", "Q = Qd", where=(Definition("Q", "b*y^2"),), inputs=(Input("b", "3"), Input("Qd", "12")), range=("0", "9")
)
NEWTON = Plan("newton-raphson", ("1",))
SECANT = Plan("secant", ("1", "2"))
BISECTION = Plan("bisection", ("0", "9"))
DIFFERENCE = Plan("finite-difference-newton", ("1",), settings=(("h", "1e-6"),))
FIXED = Plan("fixed-point", ("1",), settings=(("g", "sqrt(Qd/b)"),))


def checked(**changes: Any) -> CheckedProblem:
    return check_problem(replace(PROBLEM, **changes))


def control(plan: Plan, **keys: Any) -> Plan:
    return replace(plan, control=Control(**keys))


def stop(plan: Plan, **keys: Any) -> Plan:
    return replace(plan, stop=Stop(**keys))


@pytest.mark.parametrize("plan", [NEWTON, SECANT, BISECTION, DIFFERENCE, FIXED])
def test_plans_that_can_run(plan: Plan) -> None:
    check_plan(plan, checked())


@pytest.mark.parametrize(
    "plan",
    [
        control(SECANT, damping="-40"),
        control(SECANT, step_limit="0", relative_step_limit="0", edge_fraction="7", bounds=("1", "1.5")),
        control(DIFFERENCE, derivative_every=1000),
        stop(SECANT, x_absolute="0", x_relative="3", residual="1e300", min_steps=10_000),
        stop(SECANT, test="k > 1e9 or b*x_k < width_like", x_absolute="1"),
        replace(SECANT, max_steps=1_000_000),
        replace(SECANT, start=("5", "5")),
        replace(SECANT, start=("0x1.8p+1", "-1e-300")),
        stop(BISECTION, test="width <= 1e-6 and abs(f_k) <= f_0"),
        stop(NEWTON, test="abs(f_k/d_k) <= 1e-9 or d_prev == 0"),
        control(NEWTON, leave="stop", order=()),
        replace(BISECTION, start=("1", "3", )),
    ],
)  # fmt: skip
def test_wise_or_not_it_can_run(plan: Plan) -> None:
    check_plan(plan, checked(inputs=(*PROBLEM.inputs, Input("width_like", "1"))))


@pytest.mark.parametrize(
    ("plan", "message"),
    [
        (replace(SECANT, method="sekant"), r"plan\.method: there is no method 'sekant'; nearest: secant"),
        (replace(SECANT, method="?"), r"plan\.method: there is no method '\?'; it can be bisection, regula-falsi, "),
        (replace(SECANT, method="halley"), r"plan\.method: halley is not in this version; it has bisection, regula-"),
        (replace(SECANT, method="own-rule"), r"plan\.method: own-rule is not in this version"),
        (replace(SECANT, arithmetic="binary46"), r"arithmetic\.kind: unknown arithmetic 'binary46' \(nearest: binary"),
        (replace(SECANT, start=("1",)), r"plan\.start: secant takes 2 starts, not 1"),
        (replace(NEWTON, start=("1", "2")), r"plan\.start: newton-raphson takes 1 start, not 2"),
        (replace(BISECTION, start=()), r"plan\.start: bisection takes the two ends of a bracket, not 0"),
        (replace(NEWTON, start=("one",)), r"plan\.start: 'one' is not a number of binary64"),
        (replace(NEWTON, start=("1e999",)), r"plan\.start: '1e999' is not a number of binary64"),
        (replace(NEWTON, start=("nan",)), r"plan\.start: 'nan' is not"),
        (replace(NEWTON, start=("inf",)), r"plan\.start: 'inf' is not"),
        (replace(NEWTON, start=("1e40",), arithmetic="binary32"), r"plan\.start: '1e40' is not a number of binary32"),
        (replace(NEWTON, max_steps=0), r"plan\.max_steps: from 1 to 1000000 steps, not 0"),
        (replace(NEWTON, max_steps=1_000_001), r"plan\.max_steps: from 1 to 1000000 steps, not 1000001"),
        (replace(NEWTON, settings=(("h", "1"),)), r"plan\.settings\.h: newton-raphson takes no h; it takes derivative"),
        (replace(SECANT, settings=(("from", "x"),)), r"from: secant takes no from; nearest: form"),
        (replace(SECANT, settings=(("form", "sloped"),)), r"form: there is no 'sloped'; nearest: slope"),
        (replace(SECANT, settings=(("form", "?"),)), r"form: there is no '\?'; it can be product, slope"),
        (replace(DIFFERENCE, settings=()), r"h: finite-difference-newton needs it: the difference step"),
        (replace(DIFFERENCE, settings=(("h", "0"),)), r"plan\.settings\.h: the difference step must be above zero"),
        (replace(DIFFERENCE, settings=(("h", "-1e-6"),)), r"plan\.settings\.h: the difference step must be above zero"),
        (replace(DIFFERENCE, settings=(("h", "small"),)), r"plan\.settings\.h: 'small' is not a number of binary64"),
        (replace(DIFFERENCE, settings=(("h", "1"), ("scheme", "complex"))), r"scheme: there is no 'complex'"),
        (replace(FIXED, settings=(("g", "sqrt(Qd/bb)"),)), r"plan\.settings\.g: .*unknown name bb \(nearest: b\)"),
        (replace(FIXED, settings=(("g", "sqrt(Qd/"),)), r"plan\.settings\.g: column"),
        (replace(FIXED, settings=()), r"plan\.settings\.g: state the iteration function: .* does not read y = g\(y\)"),
        (replace(NEWTON, settings=(("derivative", "host"),)), r"derivative: the problem states no derivative"),
        (control(SECANT, step_limit="-1"), r"plan\.control\.step_limit: must not be below zero"),
        (control(SECANT, relative_step_limit="-1"), r"plan\.control\.relative_step_limit: must not be below zero"),
        (control(SECANT, first_step_limit="-1"), r"plan\.control\.first_step_limit: must not be below zero"),
        (control(SECANT, edge_fraction="-1", bounds=("0", "1")), r"edge_fraction: must not be below zero"),
        (control(SECANT, factor_limit="0"), r"plan\.control\.factor_limit: must be above zero"),
        (control(SECANT, bounds=("1", "1")), r"plan\.control\.bounds: the lower bound must be below the upper one"),
        (control(SECANT, bounds=("low", "1")), r"plan\.control\.bounds: 'low' is not a number of binary64"),
        (control(SECANT, edge_fraction="0.9"), r"plan\.control\.edge_fraction: needs plan\.control\.bounds"),
        (control(SECANT, derivative_every=2), r"plan\.control\.derivative_every: secant has no derivative to hold"),
        (control(BISECTION, derivative_every=2), r"derivative_every: bisection has no derivative to hold"),
        (control(NEWTON, derivative_every=0), r"plan\.control\.derivative_every: must be 1 or more"),
        (control(SECANT, order=("dampin",)), r"plan\.control\.order: there is no stage 'dampin'; nearest: damping"),
        (control(SECANT, order=("?",)), r"plan\.control\.order: there is no stage '\?'; there are damping"),
        (control(SECANT, order=("bounds", "bounds")), r"plan\.control\.order: a stage stands in it twice"),
        (control(SECANT, damping="1", order=("bounds",)), r"order: damping is set but does not stand in"),
        (stop(SECANT, x_absolute="-1e-9"), r"plan\.stop\.x_absolute: a tolerance must not be below zero"),
        (stop(SECANT, x_relative="-1e-9"), r"plan\.stop\.x_relative: a tolerance must not be below zero"),
        (stop(SECANT, residual="-1e-9"), r"plan\.stop\.residual: a tolerance must not be below zero"),
        (stop(SECANT, residual="inf"), r"plan\.stop\.residual: 'inf' is not"),
        (stop(SECANT, min_steps=-1), r"plan\.stop\.min_steps: must not be below zero"),
        (stop(SECANT, test="abs(dx) <"), r"plan\.stop\.test: column"),
        (stop(SECANT, test="dy < 1"), r"plan\.stop\.test: .*unknown name dy"),
        (stop(SECANT, test="width < 1"), r"plan\.stop\.test: .*unknown name width"),
        (stop(SECANT, test="d_k < 1"), r"plan\.stop\.test: .*unknown name d_k \(nearest: "),
        (stop(FIXED, test="d_prev < 1"), r"plan\.stop\.test: .*unknown name d_prev"),
    ],
)  # fmt: skip
def test_refused(plan: Plan, message: str) -> None:
    with pytest.raises(PlanError, match=message):
        check_plan(plan, checked())


def test_leaving_the_range_needs_a_range() -> None:
    with pytest.raises(PlanError, match=r"plan\.control\.leave: needs the problem's range"):
        check_plan(control(SECANT, leave="stop"), checked(range=None))


def test_g_is_the_other_side_of_the_equation_where_there_is_one() -> None:
    check_plan(replace(FIXED, settings=()), checked(equation="y = Q/b"))
    check_plan(replace(FIXED, settings=()), checked(equation="Q/b = y"))


def test_record_texts_are_numbers_too() -> None:
    check_plan(replace(SECANT, start=("f32:1.5", "2"), arithmetic="binary32"), checked())
    with pytest.raises(PlanError, match=r"plan\.start: 'f32:1\.5' is not a number of binary64"):
        check_plan(replace(SECANT, start=("f32:1.5", "2")), checked())


def test_codes_of_the_problem_file_are_known_or_planned() -> None:
    for code in PLANNED:
        with pytest.raises(PlanError, match="is not in this version"):
            method_of(code)


class _Flagged:
    """A method with a flag among its settings; no method of this version has one."""

    traits = method_of("secant").traits
    settings = (Setting("clever", "flag", "true", "whether to be clever"),)


@pytest.mark.parametrize(
    ("given", "read"), [((), True), ((("clever", "false"),), False), ((("clever", "true"),), True)]
)
def test_a_flag(given: tuple[tuple[str, str], ...], read: bool) -> None:
    settings = read_settings(_Flagged(), replace(SECANT, settings=given), arithmetic_of("binary64"))  # type: ignore[arg-type]
    assert settings["clever"] is read


def test_a_flag_that_is_neither() -> None:
    plan = replace(SECANT, settings=(("clever", "1"),))
    with pytest.raises(PlanError, match=r"plan\.settings\.clever: '1' is neither true nor false"):
        read_settings(_Flagged(), plan, arithmetic_of("binary64"))  # type: ignore[arg-type]


def test_a_number_of_the_record_that_is_not_finite() -> None:
    for kind, text in (("binary64", "-inf"), ("binary64", "nan"), ("binary32", "f32:inf"), ("binary32", "f32:nan")):
        with pytest.raises(PlanError, match=r"plan\.start: .* is not"):
            read_number(text, arithmetic_of(kind), "plan.start")
