"""Every stage of step control with its figures: what it does, when it stays silent, and the flag it leaves."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from surefoot.equation.choice import arithmetic_of
from surefoot.errors import PlanError
from surefoot.methods.contract import Limited
from surefoot.methods.control import STAGES, controlled, read_limits
from surefoot.methods.plan import Control

BINARY64 = arithmetic_of("binary64")


def take(
    control: Control, x_k: float, x_proposed: float, *, step: float | None = None, first: bool = False
) -> tuple[float, tuple[Limited, ...]]:
    return controlled(BINARY64, read_limits(control, BINARY64), x_k, x_proposed, step, first)


def test_the_table_of_stages_is_the_default_order() -> None:
    assert tuple(STAGES) == Control().order


def test_no_control_takes_the_proposal_to_the_bit() -> None:
    assert take(Control(), 1.0, 1.1, step=0.1) == (1.1, ())


def test_damping() -> None:
    assert take(Control(damping="0.5"), 2.0, 3.0) == (2.5, (Limited("damping", 3.0, 2.5),))


def test_damping_acts_on_the_step_as_computed_not_on_the_rounded_difference() -> None:
    step = -1.0000000000000002e-17  # lost in x_k + step, so x_proposed - x_k would be zero
    assert take(Control(damping="1e16"), 1.0, 1.0 + step, step=step)[0] == 1.0 + 1e16 * step
    assert take(Control(damping="1e16"), 1.0, 1.0 + step) == (1.0, ())


def test_damping_of_one_still_rounds_as_the_host_code_does() -> None:
    # x + 1*(g - x) from x = -1e73 to g = 5.00000000001 loses g altogether
    assert take(Control(damping="1.0"), -1e73, 5.00000000001) == (0.0, (Limited("damping", 5.00000000001, 0.0),))


def test_first_step_limit_holds_in_the_first_step_only() -> None:
    control = Control(first_step_limit="0.25")
    assert take(control, 1.0, 3.0, first=True) == (1.25, (Limited("first_step_limit", 3.0, 1.25),))
    assert take(control, 1.0, 3.0) == (3.0, ())
    assert take(control, 1.0, 1.25, first=True) == (1.25, ())


def test_step_limit_on_both_sides() -> None:
    control = Control(step_limit="0.5")
    assert take(control, 1.0, 3.0) == (1.5, (Limited("step_limit", 3.0, 1.5),))
    assert take(control, 1.0, -3.0) == (0.5, (Limited("step_limit", -3.0, 0.5),))
    assert take(control, 1.0, 1.5) == (1.5, ())


def test_relative_step_limit() -> None:
    control = Control(relative_step_limit="0.25")
    assert take(control, -8.0, 3.0) == (-6.0, (Limited("relative_step_limit", 3.0, -6.0),))
    assert take(control, -8.0, -9.0) == (-9.0, ())
    assert take(control, 0.0, 1.0) == (0.0, (Limited("relative_step_limit", 1.0, 0.0),))


def test_factor_limit_for_either_sign() -> None:
    control = Control(factor_limit="4")
    assert take(control, 2.0, 100.0) == (8.0, (Limited("factor_limit", 100.0, 8.0),))
    assert take(control, 2.0, -1.0) == (0.5, (Limited("factor_limit", -1.0, 0.5),))
    assert take(control, -2.0, 1.0) == (-0.5, (Limited("factor_limit", 1.0, -0.5),))
    assert take(control, -2.0, -100.0) == (-8.0, (Limited("factor_limit", -100.0, -8.0),))
    assert take(control, 2.0, 7.0) == (7.0, ())


def test_edge_fraction_goes_part_of_the_way_to_the_bound_ahead() -> None:
    control = Control(edge_fraction="0.75", bounds=("0", "8"))
    assert take(control, 4.0, 9.0) == (7.0, (Limited("edge_fraction", 9.0, 7.0),))
    assert take(control, 4.0, 7.5) == (7.0, (Limited("edge_fraction", 7.5, 7.0),))
    assert take(control, 4.0, -1.0) == (1.0, (Limited("edge_fraction", -1.0, 1.0),))
    assert take(control, 4.0, 6.5) == (6.5, ())


def test_edge_fraction_without_bounds_is_off() -> None:
    assert take(Control(edge_fraction="0.75"), 4.0, 9.0) == (9.0, ())


def test_edge_fraction_stays_silent_beyond_the_bound() -> None:
    control = Control(edge_fraction="0.75", bounds=("0", "8"), order=("edge_fraction", "bounds"))
    assert take(control, 9.0, 10.0) == (8.0, (Limited("bounds", 10.0, 8.0),))


@pytest.mark.parametrize(
    ("at_bound", "taken"),
    [("clip", (8.0, 0.0)), ("reject", (4.0, 4.0)), ("halve", (7.0, 1.0)), ("reflect", (6.0, 2.0))],
)
def test_bounds(at_bound: str, taken: tuple[float, float]) -> None:
    control = Control(bounds=("0", "8"), at_bound=at_bound)
    assert take(control, 4.0, 10.0) == (taken[0], (Limited("bounds", 10.0, taken[0]),))
    assert take(control, 4.0, -2.0) == (taken[1], (Limited("bounds", -2.0, taken[1]),))
    assert take(control, 4.0, 8.0) == (8.0, ())


def test_halving_goes_on_until_inside() -> None:
    assert take(Control(bounds=("0", "8"), at_bound="halve"), 4.0, 4.0 + 1024.0)[0] == 8.0
    assert take(Control(bounds=("0", "8"), at_bound="halve"), 4.0, 4.0 + 1025.0)[0] == 4.0 + 1025.0 / 512


def test_halving_from_outside_stays_when_no_half_ends_inside() -> None:
    assert take(Control(bounds=("0", "8"), at_bound="halve"), 9.0, 20.0)[0] == 9.0
    assert take(Control(bounds=("0", "8"), at_bound="halve"), 9.0, -13.0)[0] == 3.5


def test_halving_ends_where_steps_never_become_zero() -> None:
    numbers = arithmetic_of("multiprecision:50")
    limits = read_limits(Control(bounds=("0", "8"), at_bound="halve"), numbers)
    x, flags = controlled(numbers, limits, numbers.integer(0), numbers.integer(-1), None, False)
    assert x == 0
    assert [flag.stage for flag in flags] == ["bounds"]


def test_reflection_beyond_the_other_bound_ends_there() -> None:
    assert take(Control(bounds=("0", "8"), at_bound="reflect"), 4.0, 100.0)[0] == 0.0
    assert take(Control(bounds=("0", "8"), at_bound="reflect"), 4.0, -100.0)[0] == 8.0


def test_stages_act_in_the_order_of_the_plan() -> None:
    forward = Control(damping="0.5", step_limit="1")
    assert take(forward, 0.0, 4.0) == (1.0, (Limited("damping", 4.0, 2.0), Limited("step_limit", 2.0, 1.0)))
    backward = Control(damping="0.5", step_limit="1", order=("step_limit", "damping"))
    assert take(backward, 0.0, 4.0) == (0.5, (Limited("step_limit", 4.0, 1.0), Limited("damping", 1.0, 0.5)))


def test_a_stage_that_is_not_in_the_order_is_off() -> None:
    assert take(Control(damping="0.5", step_limit="1", order=("damping",)), 0.0, 4.0)[0] == 2.0


def test_limits_are_read_in_the_arithmetic_of_the_run() -> None:
    numbers = arithmetic_of("binary32")
    limits = read_limits(Control(damping="0.1"), numbers)
    assert limits.numbers["damping"] == numbers.literal("0.1", False)
    assert float(limits.numbers["damping"]) != 0.1
    with pytest.raises(PlanError, match=r"plan\.control\.step_limit"):
        read_limits(Control(step_limit="much"), BINARY64)


numbers_here = st.floats(-1e6, 1e6)


@given(numbers_here, numbers_here, st.sampled_from(["clip", "reject", "halve", "reflect"]))
def test_from_inside_no_step_ends_outside_the_bounds(x_k: float, x_proposed: float, at_bound: str) -> None:
    x_k = math.copysign(x_k % 8.0, 1)
    x, flags = take(Control(bounds=("0", "8"), at_bound=at_bound), x_k, x_proposed)
    assert 0.0 <= x <= 8.0
    assert bool(flags) == (x != x_proposed)


@given(numbers_here, numbers_here)
def test_a_flag_for_each_change_and_only_for_a_change(x_k: float, x_proposed: float) -> None:
    control = Control(damping="0.7", step_limit="3", factor_limit="10", bounds=("-100", "100"))
    x, flags = take(control, x_k, x_proposed)
    assert all(flag.before != flag.after for flag in flags)
    chain = [x_proposed, *(flag.after for flag in flags)]
    assert [flag.before for flag in flags] == chain[:-1]
    assert x == chain[-1]
