"""Every stopping test with its figures, at its limit and one place beyond it."""

from __future__ import annotations

import math

import pytest

from surefoot.equation.choice import arithmetic_of
from surefoot.equation.results import Failure, FailureKind
from surefoot.errors import PlanError
from surefoot.methods.contract import Account, Iterate, Verdict
from surefoot.methods.plan import Stop
from surefoot.methods.stopping import Stride, exact_zero, inequality, read_tolerances, sides, step_under_test, verdict

BINARY64 = arithmetic_of("binary64")
ORIGIN = Iterate(0, 100.0, 9.0)


def stride(
    x: float, x_old: float | None, f: float = 1.0, raw: float | None = None, step: float | None = None
) -> Stride:
    account = None if step is None else Account("tangent", (), step=step)
    old = None if x_old is None else Iterate(3, x_old, 2.0)
    return Stride(Iterate(4, x, f, raw=x if raw is None else raw, account=account), old, ORIGIN)


def fired(stop: Stop, here: Stride) -> Verdict | None:
    return verdict(BINARY64, read_tolerances(stop, BINARY64), here)


def test_x_absolute_at_its_limit() -> None:
    stop = Stop(x_absolute="0.25")
    assert fired(stop, stride(1.25, 1.0)) == Verdict("x_absolute", (("x_absolute", 0.25, 0.25),))
    assert fired(stop, stride(0.75, 1.0)) == Verdict("x_absolute", (("x_absolute", 0.25, 0.25),))
    assert fired(stop, stride(math.nextafter(1.25, 2), 1.0)) is None


@pytest.mark.parametrize(("relative_to", "size"), [("new", 4.0), ("old", 3.0), ("larger", 4.0), ("start", 100.0)])
def test_x_relative_to_each_size(relative_to: str, size: float) -> None:
    stop = Stop(x_relative="0.5", relative_to=relative_to)
    assert fired(stop, stride(-4.0, -3.0)) == Verdict("x_relative", (("x_relative", 1.0, 0.5 * size),))


def test_x_relative_at_its_limit() -> None:
    assert fired(Stop(x_relative="0.25"), stride(4.0, 3.0)) == Verdict("x_relative", (("x_relative", 1.0, 1.0),))
    assert fired(Stop(x_relative="0.25"), stride(4.0, math.nextafter(3.0, 0))) is None
    assert fired(Stop(x_relative="0.25", relative_to="old"), stride(4.0, 3.0)) is None
    assert fired(Stop(x_relative="0.25", relative_to="larger"), stride(3.0, 4.0)) is not None


def test_residual_at_its_limit_and_of_either_sign() -> None:
    stop = Stop(residual="1e-3")
    assert fired(stop, stride(5.0, 1.0, f=-1e-3)) == Verdict("residual", (("residual", 1e-3, 1e-3),))
    assert fired(stop, stride(5.0, 1.0, f=math.nextafter(1e-3, 1))) is None
    assert fired(stop, Stride(Iterate(0, 1.0, 1e-4), None, ORIGIN)) is not None


def test_any_names_the_first_that_holds() -> None:
    stop = Stop(x_absolute="1e-9", x_relative="1", residual="1")
    assert fired(stop, stride(2.0, 1.0)) == Verdict("x_relative", (("x_relative", 1.0, 2.0),))
    assert fired(stop, stride(9.0, -9.0)) == Verdict("residual", (("residual", 1.0, 1.0),))
    assert fired(stop, stride(9.0, -9.0, f=3.0)) is None


def test_all_wants_every_test_that_is_on() -> None:
    stop = Stop(x_absolute="1", x_relative="0.5", residual="1", combine="all")
    both = Verdict("all", (("x_absolute", 1.0, 1.0), ("x_relative", 1.0, 1.0), ("residual", 1.0, 1.0)))
    assert fired(stop, stride(2.0, 1.0)) == both
    assert fired(stop, stride(2.0, 1.0, f=1.5)) is None
    assert fired(stop, stride(1.0, 2.0)) is None
    assert fired(stop, stride(2.0, None)) is None  # the tests of x cannot be made before a step


def test_sum_of_the_tolerances() -> None:
    stop = Stop(x_absolute="0.5", x_relative="0.25", combine="sum")
    assert fired(stop, stride(2.0, 1.0)) == Verdict("sum", (("sum", 1.0, 1.0),))
    assert fired(stop, stride(2.0, 0.875)) is None
    assert fired(Stop(x_relative="0.5", combine="sum"), stride(2.0, 1.0)) == Verdict("sum", (("sum", 1.0, 1.0),))
    assert fired(Stop(x_absolute="1", combine="sum"), stride(2.0, 1.0)) == Verdict("sum", (("sum", 1.0, 1.0),))


def test_the_residual_is_a_test_of_its_own_beside_a_sum() -> None:
    stop = Stop(x_absolute="1e-9", residual="1", combine="sum")
    assert fired(stop, stride(2.0, 1.0)) == Verdict("residual", (("residual", 1.0, 1.0),))
    assert fired(Stop(residual="1", combine="sum"), stride(2.0, 1.0)) == Verdict("residual", (("residual", 1.0, 1.0),))


def test_what_cannot_be_compared_does_not_hold() -> None:
    failed = Stride(Iterate(4, 1.0, Failure(FailureKind.DOMAIN, "ln(x)"), raw=1.0), Iterate(3, 1.0, 2.0), ORIGIN)
    assert fired(Stop(residual="1e300"), failed) is None
    assert fired(Stop(x_absolute="1", residual="1", combine="all"), failed) is None
    assert fired(Stop(x_absolute="9", x_relative="9", combine="sum"), stride(2.0, None)) is None


def test_no_test_never_fires() -> None:
    for combine in ("any", "all", "sum"):
        assert fired(Stop(combine=combine), stride(1.0, 1.0, f=1e-300)) is None


def test_the_raw_step_is_that_of_the_rule_before_it_was_added() -> None:
    here = stride(1.0, 1.0, raw=1.0, step=-1e-17)
    assert step_under_test(BINARY64, here, raw=False) == 0.0
    assert step_under_test(BINARY64, here, raw=True) == -1e-17
    assert fired(Stop(x_absolute="1e-18"), here) is not None
    assert fired(Stop(x_absolute="1e-18", step_tested="raw"), here) is None


def test_the_raw_step_of_a_limited_step() -> None:
    here = stride(1.5, 1.0, raw=3.0)
    assert step_under_test(BINARY64, here, raw=True) == 2.0
    assert step_under_test(BINARY64, here, raw=False) == 0.5
    by_hand = Stride(Iterate(4, 1.5, 0.1, put="tried"), Iterate(3, 1.0, 0.2), ORIGIN)
    assert step_under_test(BINARY64, by_hand, raw=True) == 0.5


def test_exact_zero_of_either_sign() -> None:
    found = Verdict("exact_zero", (("exact_zero", 0.0, 0.0),))
    assert exact_zero(BINARY64, Iterate(1, 3.0, 0.0)) == found
    assert exact_zero(BINARY64, Iterate(1, 3.0, -0.0)) == found
    assert exact_zero(BINARY64, Iterate(1, 3.0, 5e-324)) is None
    assert exact_zero(BINARY64, Iterate(1, 3.0, Failure(FailureKind.DOMAIN, "ln(x)"))) is None


def test_a_step_too_long_for_the_arithmetic_does_not_hold() -> None:
    here = stride(1.7e308, -1.7e308)
    assert fired(Stop(x_absolute="1e308"), here) is None
    assert sides(BINARY64, read_tolerances(Stop(x_relative="1e10", residual="1"), BINARY64), here) == (
        ("residual", 1.0, 1.0),
    )


def test_own_conditions_switch_the_other_tests_off() -> None:
    assert fired(Stop(x_absolute="1", residual="1", test="abs(dx) < 1e-9"), stride(1.0, 1.0)) is None


def test_tests_are_made_in_the_arithmetic_of_the_run() -> None:
    numbers = arithmetic_of("binary32")
    tenth = numbers.literal("0.1", False)
    here = Stride(Iterate(1, tenth, numbers.integer(1), raw=tenth), Iterate(0, numbers.integer(0), tenth), ORIGIN)
    assert verdict(numbers, read_tolerances(Stop(x_absolute="0.1"), numbers), here) is not None
    assert float(tenth) > 0.1  # so in binary64 the test would not hold


def test_an_inequality_is_told_with_both_sides() -> None:
    assert inequality(BINARY64, ("x_absolute", 1e-11, 1e-10)) == "|dx| = 1e-11 <= 1e-10"
    assert inequality(BINARY64, ("residual", 2.0, 1e-10)) == "|residual| = 2.0 > 1e-10"
    assert inequality(BINARY64, ("abs(dx) < tol", 1.0, 2.0)) == "abs(dx) < tol (1.0 and 2.0)"


@pytest.mark.parametrize("key", ["x_absolute", "x_relative", "residual"])
def test_a_tolerance_that_cannot_be_read_is_named(key: str) -> None:
    with pytest.raises(PlanError, match=rf"plan\.stop\.{key}: 'tiny' is not a number of binary64"):
        read_tolerances(Stop(**{key: "tiny"}), BINARY64)
    with pytest.raises(PlanError, match=r"not a number|not finite"):
        read_tolerances(Stop(**{key: "inf"}), BINARY64)
