"""Special functions against mpmath at 40 digits, an evaluation by other algorithms: equal to the last bit."""

from __future__ import annotations

import contextlib
import json
import math
import random
import subprocess
import sys
import threading
import time
from collections.abc import Callable
from fractions import Fraction
from pathlib import Path
from typing import Any

import flint
import mpmath
import pytest

from surefoot.equation.arithmetic import OperationFailed
from surefoot.equation.special import DEFINITIONS, MAX_ORDER, arb_precision, evaluate, to_binary64

PUBLISHED = Path(__file__).parents[1] / "published" / "data" / "published.json"

TINY_TO_HUGE = [5e-324, 3e-310, 1e-300, 1e-155, 1e-20, 2.0**-27, 1e-8, 1e-3, 0.1, 0.5, 0.75, 1.0, 1.4616321449683623]
TINY_TO_HUGE += [1.5, 2.0, 2.404825557695773, 2.5, 3.0, 5.520078110286311, 7.25, 10.0, 25.5, 26.6, 38.4, 100.0, 170.6]
TINY_TO_HUGE += [171.5, 700.0, 745.0, 1e4, 1e8, 1e15]
NEAR_ZEROS = [
    0.37250741078136663,
    0.6165054856207162,
    2.0 - 2**-50,
    1.0 + 2**-52,
    -2.338107410459767,
    -1.173713222709128,
]
NEAR_ZEROS += [-2.4570247382208006, -0.5040830082644554]
POSITIVE = [x for x in TINY_TO_HUGE + NEAR_ZEROS if x > 0]
ANY = [0.0, *POSITIVE, *(-x for x in POSITIVE), *NEAR_ZEROS]
NOT_POLES = [x for x in ANY if x > 0 or x != math.floor(x)]
NOT_ZERO = [x for x in ANY if x != 0]


def rounded(value: Any) -> float:
    """The binary64 nearest to a mpmath number; infinite where it overflows."""
    sign, mantissa, exponent, bits = value._mpf_
    if exponent + bits > 1100:
        return -math.inf if sign else math.inf
    if exponent + bits < -1100:
        return 0.0
    try:
        return float(Fraction(-mantissa if sign else mantissa) * Fraction(2) ** exponent)
    except OverflowError:
        return -math.inf if sign else math.inf


def check(name: str, reference: Callable[..., Any], *arguments: float) -> None:
    with mpmath.workdps(40):
        expected = rounded(mpmath.re(reference(*map(mpmath.mpf, arguments))))
    if math.isinf(expected):
        with pytest.raises(OperationFailed) as caught:
            evaluate(name, *arguments)
        assert caught.value.kind == "overflow"
    else:
        assert evaluate(name, *arguments) == expected, f"{name}{arguments}"


def lgamma(x: Any) -> Any:
    """ln |gamma(x)|; near -2.457 and 2 it is a small difference, hence the further digits."""
    with mpmath.workdps(80):
        return mpmath.loggamma(x) if x > 0 else mpmath.log(mpmath.pi / abs(mpmath.sinpi(x))) - mpmath.loggamma(1 - x)


def more_digits(function: Callable[..., Any], digits: int) -> Callable[..., Any]:
    def reference(*arguments: Any) -> Any:
        with mpmath.workdps(digits):
            return function(*arguments)

    return reference


OF_ONE: dict[str, tuple[Callable[..., Any], list[float]]] = {
    "erf": (mpmath.erf, ANY),
    "erfc": (mpmath.erfc, ANY),
    "tgamma": (mpmath.gamma, [x for x in NOT_POLES if abs(x) < 1e8]),
    "lgamma": (lgamma, NOT_POLES),
    "digamma": (lambda x: mpmath.psi(0, x), NOT_POLES),
    "normal_cdf": (more_digits(lambda x: mpmath.erfc(-x / mpmath.sqrt(2)) / 2, 60), [x for x in ANY if abs(x) < 1e8]),
    "expint": (more_digits(mpmath.ei, 80), [x for x in NOT_ZERO if abs(x) < 1e6]),
    "exp_integral_e1": (more_digits(mpmath.e1, 80), [x for x in POSITIVE if x < 1e6]),
    "cos_integral": (more_digits(mpmath.ci, 80), POSITIVE),
    "sin_integral": (mpmath.si, [x for x in ANY if abs(x) > 1e-300 or x == 0]),
    "airy_ai": (more_digits(mpmath.airyai, 80), [x for x in ANY if abs(x) < 1e4]),
    "airy_bi": (more_digits(mpmath.airybi, 80), [x for x in ANY if abs(x) < 1e4]),
}
OF_TWO: dict[str, Callable[..., Any]] = {
    "cyl_bessel_j": mpmath.besselj,
    "cyl_neumann": mpmath.bessely,
    "cyl_bessel_i": mpmath.besseli,
    "cyl_bessel_k": mpmath.besselk,
}
ORDERS = [0.0, 1.0, 2.0, 7.0, 0.5, 1.0 / 3.0, 2.75, -0.5, -1.0, 40.0]


def test_every_function_is_checked() -> None:
    assert OF_ONE.keys() | OF_TWO.keys() == DEFINITIONS.keys()


@pytest.mark.parametrize("name", OF_ONE)
def test_values_of_one_argument_are_correctly_rounded(name: str) -> None:
    reference, arguments = OF_ONE[name]
    for x in arguments:
        check(name, reference, x)


@pytest.mark.parametrize("name", OF_ONE)
def test_values_at_random_arguments_are_correctly_rounded(name: str) -> None:
    reference, arguments = OF_ONE[name]
    draw = random.Random(20)
    signs = (1.0, -1.0) if any(x < 0 for x in arguments) else (1.0,)
    for _ in range(60):
        check(name, reference, draw.choice(signs) * draw.choice((draw.uniform(0.0, 30.0), 10 ** draw.uniform(-8, 1.5))))


@pytest.mark.parametrize("name", OF_TWO)
@pytest.mark.parametrize("nu", ORDERS)
def test_bessel_functions_are_correctly_rounded(name: str, nu: float) -> None:
    for x in [1e-20, 1e-3, 0.5, 1.0, 2.404825557695773, 3.0, 5.520078110286311, 11.75, 30.0, 200.0]:
        check(name, more_digits(OF_TWO[name], 60), nu, x)


@pytest.mark.parametrize("name", ["cyl_bessel_j", "cyl_bessel_i"])
@pytest.mark.parametrize("nu", [0.0, 1.0, 2.0, 3.0, -1.0, -3.0])
def test_bessel_functions_of_whole_order_are_real_left_of_zero(name: str, nu: float) -> None:
    for x in [-0.0, 0.0, -1e-3, -2.5, -30.0]:
        check(name, more_digits(OF_TWO[name], 60), nu, x)


def test_a_value_just_beside_a_midpoint_falls_on_its_own_side() -> None:
    """J_1(x) = x/2 - x^3/16 + ..., I_1(x) = x/2 + x^3/16 + ...: with the smallest numbers x/2 is a midpoint."""
    smallest = 5e-324
    assert evaluate("cyl_bessel_j", 1.0, smallest) == 0.0
    assert evaluate("cyl_bessel_i", 1.0, smallest) == smallest
    assert evaluate("cyl_bessel_j", 1.0, 3 * smallest) == smallest
    assert evaluate("cyl_bessel_i", 1.0, 3 * smallest) == 2 * smallest


@pytest.mark.parametrize("nu", [1e-25, -1e-300, 5e-324])
def test_an_order_close_to_a_whole_number_is_no_loss(nu: float) -> None:
    """K_nu = K_0 + nu**2 ..., so that the values of order 0 are the nearest."""
    for x in (1e-3, 1.0, 30.0, 200.0):
        check("cyl_bessel_k", lambda _nu, x: more_digits(mpmath.besselk, 60)(0, x), nu, x)


def test_exact_values_are_exact() -> None:
    assert evaluate("tgamma", 24.0) == float(math.factorial(23))
    assert [evaluate("lgamma", x) for x in (1.0, 2.0)] == [0.0, 0.0]
    assert evaluate("normal_cdf", 0.0) == 0.5
    assert evaluate("cyl_bessel_j", 0.0, 0.0) == 1.0
    assert evaluate("erfc", -1e300) == 2.0
    assert evaluate("erfc", 1e300) == 0.0


@pytest.mark.parametrize(
    ("problem", "name", "order"),
    [
        ("sf-j0", "cyl_bessel_j", (0.0,)),
        ("sf-ei-zero", "expint", ()),
        ("sf-airy", "airy_ai", ()),
    ],
)
def test_published_zeros_lie_between_neighbouring_signs(problem: str, name: str, order: tuple[float, ...]) -> None:
    """The roots of the published set (Abramowitz and Stegun, Tables 9.5 and 10.13; Ei: DLMF 6.13)."""
    entry = next(each for each in json.loads(PUBLISHED.read_text()) if each["id"] == problem)
    for root in entry["roots"]:
        x = float(root["value"])
        below, above = (evaluate(name, *order, math.nextafter(x, to)) for to in (-math.inf, math.inf))
        assert below * above < 0


def test_the_published_quantile_of_the_normal_distribution() -> None:
    """z with Phi(z) = 0.975, to 16 digits; its published value is 1.96 (any table of the normal distribution)."""
    entry = next(each for each in json.loads(PUBLISHED.read_text()) if each["id"] == "sf-z975")
    assert abs(evaluate("normal_cdf", float(entry["roots"][0]["value"])) - 0.975) <= 2 * math.ulp(0.975)


@pytest.mark.parametrize(
    ("name", "arguments", "kind"),
    [
        ("tgamma", (0.0,), "domain"),
        ("tgamma", (-3.0,), "domain"),
        ("tgamma", (-1e300,), "domain"),
        ("tgamma", (171.7,), "overflow"),
        ("tgamma", (1e300,), "overflow"),
        ("tgamma", (1e-309,), "overflow"),
        ("lgamma", (-2.0,), "domain"),
        ("lgamma", (1e308,), "overflow"),
        ("digamma", (0.0,), "domain"),
        ("digamma", (-1.0,), "domain"),
        ("digamma", (1e-310,), "overflow"),
        ("expint", (0.0,), "domain"),
        ("expint", (1e4,), "overflow"),
        ("exp_integral_e1", (0.0,), "domain"),
        ("exp_integral_e1", (-1.0,), "domain"),
        ("cos_integral", (0.0,), "domain"),
        ("cos_integral", (-2.0,), "domain"),
        ("airy_bi", (1e300,), "overflow"),
        ("cyl_bessel_j", (0.5, -1.0), "domain"),
        ("cyl_bessel_j", (-0.5, 0.0), "domain"),
        ("cyl_bessel_i", (1.5, -1.0), "domain"),
        ("cyl_bessel_i", (0.0, 1e6), "overflow"),
        ("cyl_neumann", (0.0, 0.0), "domain"),
        ("cyl_neumann", (1.0, -1.0), "domain"),
        ("cyl_neumann", (3.0, 1e-200), "overflow"),
        ("cyl_bessel_k", (0.0, 0.0), "domain"),
        ("cyl_bessel_k", (2.0, 1e-200), "overflow"),
        ("cyl_bessel_j", (2.0 * MAX_ORDER, 3.0), "not_a_number"),
        ("cyl_bessel_j", (10_000.0, 10_000.0), "not_a_number"),
        ("erf", (math.inf,), "not_a_number"),
        ("erf", (math.nan,), "not_a_number"),
    ],
)
def test_where_there_is_no_finite_value_the_failure_is_named(
    name: str, arguments: tuple[float, ...], kind: str
) -> None:
    with pytest.raises(OperationFailed) as caught:
        evaluate(name, *arguments)
    assert caught.value.kind == kind


@pytest.mark.parametrize("name", DEFINITIONS)
def test_no_argument_takes_long(name: str) -> None:
    edges = [5e-324, 1e-300, 0.5, 1.0, 30.0, 4321.0, 1e4, 1e6, 1e15, 1e100, 1.7e308]
    edges += [-x for x in edges]
    orders = [(nu,) for nu in (*edges, 3000.5, -9999.5)] if name in OF_TWO else [()]
    slowest = 0.0
    for arguments in ((*order, x) for order in orders for x in edges):
        began = time.perf_counter()
        with contextlib.suppress(OperationFailed):
            assert math.isfinite(evaluate(name, *arguments))
        slowest = max(slowest, time.perf_counter() - began)
    assert slowest < 1.0


def test_the_precision_of_flint_is_put_back() -> None:
    before = flint.ctx.prec
    evaluate("cyl_bessel_j", 2500.0, 2500.0)
    with pytest.raises(OperationFailed):
        evaluate("tgamma", -1.0)
    with pytest.raises(OperationFailed):
        evaluate("cyl_bessel_j", 10_000.0, 10_000.0)
    assert flint.ctx.prec == before


def test_two_threads_do_not_disturb_each_other() -> None:
    def work(found: list[int], bits: int) -> None:
        for _ in range(200):
            with arb_precision(bits):
                time.sleep(0)
                found.append(flint.ctx.prec)

    seen: dict[int, list[int]] = {bits: [] for bits in (100, 200)}
    threads = [threading.Thread(target=work, args=(seen[bits], bits)) for bits in seen]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert all(set(found) == {bits} for bits, found in seen.items())


def test_rounding_to_binary64_agrees_with_exact_fractions() -> None:
    draw = random.Random(7)
    for _ in range(2000):
        mantissa, exponent = draw.getrandbits(draw.randint(1, 200)) - draw.getrandbits(100), draw.randint(-1300, 900)
        try:
            expected = float(Fraction(mantissa) * Fraction(2) ** exponent)
        except OverflowError:
            expected = math.copysign(math.inf, mantissa >> 200 or 1)
        assert to_binary64(mantissa, exponent) == expected
    assert to_binary64((1 << 1024) - 1, 0) == math.inf
    assert to_binary64(1, 10**30) == math.inf
    assert to_binary64(-1, 10**30) == -math.inf
    assert math.copysign(1.0, to_binary64(-1, -(10**30))) == -1.0


def test_flint_is_imported_only_when_needed() -> None:
    program = "import sys, surefoot.equation.special; sys.exit('flint' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", program], check=False).returncode == 0
