"""Derivatives as text: names kept, known forms exact, kinks told, limits kept; and their values.

The values are checked in 60 digits: mpmath differentiates an evaluation that shares nothing with the package's.
"""

from __future__ import annotations

import time
from collections.abc import Callable, Mapping
from random import Random
from typing import Any

import mpmath
import pytest

from support.equation_trees import Trees
from support.plain import MP
from support.runs import simple
from surefoot.equation.checking import CheckedProblem, check_problem
from surefoot.equation.choice import arithmetic_of
from surefoot.equation.derivatives import HIGHEST_ORDER, NoDerivative, derive
from surefoot.equation.function import Function
from surefoot.equation.functions import FUNCTIONS
from surefoot.equation.parser import parse_expression
from surefoot.equation.problem import Definition, Derivative, Input, Problem
from surefoot.equation.results import EvaluationFailed, Failure, FailureKind
from surefoot.equation.wording import to_text

DIGITS = arithmetic_of("multiprecision:60")
BINARY64 = arithmetic_of("binary64")


def literal(text: str) -> Any:
    return DIGITS.literal(text, single=False)


def stated(equation: str, unknown: str, lines: Mapping[str, str], inputs: Mapping[str, str]) -> CheckedProblem:
    where = tuple(Definition(name, text) for name, text in lines.items())
    given = tuple(Input(name, value) for name, value in inputs.items())
    return check_problem(Problem(unknown, equation, where=where, inputs=given))


def value_of(checked: CheckedProblem, derivative: Derivative, x: str, arithmetic: Any = DIGITS) -> Any:
    function = Function(checked, arithmetic, (derivative,))
    return function.derivative(arithmetic.literal(x, single=False), derivative.order)


def failure_of(checked: CheckedProblem, derivative: Derivative, x: str) -> Failure:
    with pytest.raises(EvaluationFailed) as caught:
        value_of(checked, derivative, x)
    result = caught.value.result
    assert isinstance(result, Failure)
    return result


def lines_of(derivative: Derivative) -> dict[str, str]:
    return {line.name: line.text for line in derivative.where}


# Known forms


@pytest.mark.parametrize(
    ("text", "first", "second"),
    [
        ("x^3 - 2*x - 5", "3*x^2 - 2", "6*x"),
        ("3.7*x", "3.7", "0"),
        ("1/x", "-1/x^2", "2/x^3"),
        ("1/sqrt(x)", "-0.5/x^1.5", "0.75/x^2.5"),
        ("x^(1/2)", "0.5/sqrt(x)", "-0.25/x^1.5"),
        ("x^(2/3)", "2/(3*x^(1/3))", "-2/(9*x^(4/3))"),
        ("x^0.25", "0.25/x^0.75", "-0.1875/x^1.75"),
        ("sqrt(4*x + 1)", "2/sqrt(4*x + 1)", "-4/(4*x + 1)^1.5"),
        ("cbrt(x)", "1/(3*cbrt(x)^2)", "-2/(9*cbrt(x)^5)"),
        ("x^n", "n*x^(n - 1)", "n*(n - 1)*x^(n - 2)"),
        ("10^-x", "-ln(10)*10^-x", "ln(10)^2*10^-x"),
        ("x/(1 - x)", "x/(1 - x)^2 + 1/(1 - x)", "2*x/(1 - x)^3 + 2/(1 - x)^2"),
        ("((b + 1.5*x)*x)^3", "3*((b + 1.5*x)*x)^2*(b + 3*x)", None),
        ("x*exp(x)", "x*exp(x) + exp(x)", "x*exp(x) + 2*exp(x)"),
        ("x*exp(-x^2)", "exp(-x^2) - 2*x^2*exp(-x^2)", "4*x^3*exp(-x^2) - 6*x*exp(-x^2)"),
        ("exp(x)/(1 + exp(x))", "exp(x)/(1 + exp(x)) - (exp(x)/(1 + exp(x)))^2", None),
        ("ln(3*x)", "1/x", "-1/x^2"),
        ("log10(x)", "1/(ln(10)*x)", "-1/(ln(10)*x^2)"),
        ("sin(2*x)", "2*cos(2*x)", "-4*sin(2*x)"),
        ("tan(x)", "tan(x)^2 + 1", "2*(tan(x)^2 + 1)*tan(x)"),
        ("asin(x)", "1/sqrt((x + 1)*(1 - x))", "x/((x + 1)*(1 - x))^1.5"),
        ("cosh(x)*cos(x)", "sinh(x)*cos(x) - cosh(x)*sin(x)", "-2*sinh(x)*sin(x)"),
        ("x - b*sin(x)", "1 - b*cos(x)", "b*sin(x)"),
        ("normal_cdf(x)", "exp(-0.5*x^2)/sqrt(2*pi)", "-exp(-0.5*x^2)*x/sqrt(2*pi)"),
        ("cyl_bessel_j(0, x)", "-cyl_bessel_j(1, x)", "-0.5*(cyl_bessel_j(0, x) - cyl_bessel_j(2, x))"),
        ("exp_integral_e1(x)", "-exp(-x)/x", "exp(-x)/x + exp(-x)/x^2"),
        ("lgamma(x)", "digamma(x)", None),
        ("(x + 1e16) - 1e16", "1", "0"),
    ],
)
def test_a_known_derivative_reads_as_an_engineer_writes_it(text: str, first: str, second: str | None) -> None:
    checked = simple(text, b="1", n="2")
    assert derive(checked, 1) == Derivative(1, (), first)
    if second is not None:
        assert derive(checked, 2) == Derivative(2, (), second)


def test_colebrook_white() -> None:
    equation = "1/sqrt(f) = -2*log10(eps/(3.7*D) + 2.51/(Re*sqrt(f)))"
    checked = simple(equation, "f", eps="4.5e-5", D="0.1", Re="1e5")
    assert derive(checked, 1).text == ("-0.5/f^1.5 - 2.51/(Re*ln(10)*f^1.5*(eps/(3.7*D) + 2.51/(Re*sqrt(f))))")


def test_literals_of_the_equation_stay_as_typed() -> None:
    checked = simple("0.6*exp(14.2724 - 2945.47/(t + 224.00)) = 70", "t")
    assert derive(checked, 1).text == "0.6*2945.47*exp(14.2724 - 2945.47/(t + 224.00))/(t + 224.00)^2"
    assert derive(simple("2.51f*x^2"), 1).text == "2*2.51f*x"


# Definitions


MANNING = {"A": "(b + z*y)*y", "P": "b + 2*y*sqrt(1 + z^2)", "Q": "A/n*(A/P)^(2/3)*sqrt(S)"}
CHANNEL = {"b": "3.0", "z": "1.5", "S": "0.0008", "n": "0.025", "Qd": "12"}


def test_definitions_keep_their_names() -> None:
    checked = stated("Q = Qd", "y", MANNING, CHANNEL)
    first = derive(checked, 1)
    assert first.text == "dQ_dy"
    assert lines_of(first) == {
        "dA_dy": "b + 2*z*y",
        "dP_dy": "2*sqrt(1 + z^2)",
        "dQ_dy": "2*sqrt(S)*(dA_dy/P - A*dP_dy/P^2)*A/(3*n*(A/P)^(1/3)) + sqrt(S)*dA_dy*(A/P)^(2/3)/n",
    }
    second = derive(checked, 2)
    assert second.text == "d2Q_dy2"
    assert lines_of(second)["d2A_dy2"] == "2*z"
    assert "d2P_dy2" not in lines_of(second)
    assert "dQ_dy" not in lines_of(second)


def test_definitions_agree_with_the_text_that_has_them_inlined() -> None:
    area, perimeter = f"({MANNING['A']})", f"({MANNING['P']})"
    inlined = f"{area}/n*({area}/{perimeter})^(2/3)*sqrt(S) = Qd"
    named, whole = stated("Q = Qd", "y", MANNING, CHANNEL), stated(inlined, "y", {}, CHANNEL)
    for order in (1, 2, 3):
        for y in ("0.2", "1.7", "6.1"):
            expected = value_of(whole, derive(whole, order), y)
            assert abs(value_of(named, derive(named, order), y) / expected - 1) < 1e-55


def test_a_definition_without_the_unknown_is_a_constant_and_a_straight_one_leaves_no_line() -> None:
    lines = {"r": "b/2", "s": "x + r", "u": "3*x"}
    first = derive(stated("s^2*u = r", "x", lines, {"b": "1"}), 1)
    assert first == Derivative(1, (), "3*s^2 + 2*s*u")


def test_names_of_lines_are_free_of_the_problems_names() -> None:
    lines = {"A": "x^2", "dA_dx": "sin(x)", "t1": "2"}
    inputs = {"dA_dx_": "1", "t2": "3"}
    repeated = "ln(x*sqrt(x + t2)*cos(x) + dA_dx_)"
    checked = stated(f"A*dA_dx + {repeated}*sin({repeated}) = t1", "x", lines, inputs)
    names = set(lines_of(derive(checked, 1)))
    assert {"dA_dx__", "t3", "dt3_dx"} <= names
    assert not names & checked.names.keys()


def test_what_the_equation_repeats_gets_one_line_and_one_derivative() -> None:
    repeated = "(x/(1 + x*sqrt(b + x)))"
    checked = simple(f"{repeated} + 0.5*{repeated}^2 - sin({repeated})", b="2")
    first = derive(checked, 1)
    assert first.text == "dt1_dx - dt1_dx*cos(t1) + dt1_dx*t1"
    assert lines_of(first)["t1"] == "x/(1 + x*sqrt(b + x))"
    assert list(lines_of(first)) == ["t1", "dt1_dx"]


def test_a_line_stands_below_everything_that_it_uses() -> None:
    checked = stated("Q = Qd", "y", MANNING, CHANNEL)
    for order in (1, 2, 3):
        known = set(checked.names)
        derivative = derive(checked, order)
        for line in derivative.where:
            Function(checked, BINARY64, (Derivative(1, derivative.where, "0"),))  # refuses a name that is not known yet
            assert line.name not in known
            known.add(line.name)


# Kinks


@pytest.mark.parametrize(
    ("text", "first", "gap", "place"),
    [
        ("abs(x - 2)", "piecewise(x - 2 > 0: 1; x - 2 < 0: -1)", "no derivative where x = 2: abs(x - 2)", "2"),
        ("abs(2 - x)", "-piecewise(2 - x > 0: 1; 2 - x < 0: -1)", "no derivative where x = 2: abs(2 - x)", "2"),
        ("abs(x + 2)", "piecewise(x + 2 > 0: 1; x + 2 < 0: -1)", "no derivative where x = -2: abs(x + 2)", "-2"),
        (
            "abs(sin(x))",
            "piecewise(sin(x) > 0: 1; sin(x) < 0: -1)*cos(x)",
            "no derivative where sin(x) = 0: abs(sin(x))",
            "0",
        ),
        ("sign(x)", "piecewise(x != 0: 0)", "no derivative where x = 0: sign(x)", "0"),
        (
            "floor(x/2)",
            "piecewise(x/2 != floor(x/2): 0)",
            "no derivative where x/2 is a whole number: floor(x/2)",
            "6",
        ),
        ("ceil(x) + x", "piecewise(x != ceil(x): 1)", "no derivative where x is a whole number: ceil(x)", "3"),
        ("min(x^2, 4)", "piecewise(x^2 < 4: 2*x; x^2 > 4: 0)", "no derivative where x^2 = 4: min(x^2, 4)", "2"),
        ("max(x, b)", "piecewise(x > b: 1; x < b: 0)", "no derivative where x = b: max(x, b)", "1"),
        (
            "max(x, 2, b)",
            "piecewise(x > 2 and x > b: 1; 2 > x and 2 > b: 0; b > x and b > 2: 0)",
            "no derivative where two of the arguments are equal and the largest: max(x, 2, b)",
            "2",
        ),
        (
            "piecewise(x > b: x^2; otherwise: 1)",
            "piecewise(x > b: 2*x; x < b: 0)",
            "no derivative taken where x = b: the piecewise switches there",
            "1",
        ),
        (
            "piecewise(x >= 3: sin(x); otherwise: x)",
            "piecewise(x > 3: cos(x); x < 3: 1)",
            "no derivative taken where x = 3: the piecewise switches there",
            "3",
        ),
        (
            "piecewise(x == 3: 1; otherwise: x^2)",
            "piecewise(x != 3: piecewise(x == 3: 0; otherwise: 2*x))",
            "no derivative taken where x = 3: the piecewise switches there",
            "3",
        ),
    ],
)
def test_a_kink_is_told_and_fails_to_evaluate(text: str, first: str, gap: str, place: str) -> None:
    checked = simple(text, b="1")
    derivative = derive(checked, 1)
    assert derivative == Derivative(1, (), first, (gap,))
    failure = failure_of(checked, derivative, place)
    assert failure.kind is FailureKind.NO_DERIVATIVE
    assert failure_of(checked, derive(checked, 2), place).kind is FailureKind.NO_DERIVATIVE
    beside, h, function = literal(place) + literal("0.25"), literal("1e-20"), Function(checked, DIGITS)
    expected = (function.value(beside + h) - function.value(beside - h)) / (2 * h)
    assert abs(value_of(checked, derivative, f"{float(place) + 0.25}") - expected) < 1e-30


def test_several_switches_stand_under_one_guard() -> None:
    checked = simple("piecewise(Re < 2300: 64/Re; Re < 4000: 0.03; otherwise: 0.3164/Re^0.25) = 0.031", "Re")
    first = derive(checked, 1)
    assert first.text == (
        "piecewise(Re != 2300 and Re != 4000: "
        "piecewise(Re < 2300: -64/Re^2; Re < 4000: 0; otherwise: -0.25*0.3164/Re^1.25))"
    )
    assert first.gaps == (
        "no derivative taken where Re = 2300: the piecewise switches there",
        "no derivative taken where Re = 4000: the piecewise switches there",
    )
    second = derive(checked, 2)
    assert second.gaps == first.gaps
    assert failure_of(checked, second, "4000").kind is FailureKind.NO_DERIVATIVE
    assert value_of(checked, second, "3000") == 0


def test_conditions_without_the_unknown_switch_nothing() -> None:
    checked = simple("piecewise(b > 1: x^2; otherwise: x) + piecewise(b < 5: 7; otherwise: b)", b="2")
    assert derive(checked, 1) == Derivative(1, (), "piecewise(b > 1: 2*x; otherwise: 1)")


def test_a_kink_in_a_definition_names_it() -> None:
    checked = stated("A*x = 1", "x", {"A": "abs(x - 2)"}, {})
    assert derive(checked, 1).gaps == ("no derivative where x = 2: abs(x - 2) in A",)


def test_a_term_that_vanishes_beside_its_kink_still_fails_there() -> None:
    checked = simple("x*abs(x) + floor(x)")
    second = derive(checked, 2)
    assert second.text == "piecewise(x != floor(x): 2*piecewise(x > 0: 1; x < 0: -1))"
    assert value_of(checked, second, "-1.5") == -2
    assert failure_of(checked, second, "0").kind is FailureKind.NO_DERIVATIVE
    assert failure_of(checked, second, "5").kind is FailureKind.NO_DERIVATIVE


def test_nothing_is_evaluated_outside_its_branch() -> None:
    """ln(x) stands four times in a branch, and the definition's derivative fails where that branch does not hold."""
    repeated = "x*ln(x)*sqrt(x + 1)"
    checked = stated(
        f"piecewise(x > 0: {repeated} + sin({repeated})*A; otherwise: -x) = 1", "x", {"A": "abs(x + 3)"}, {}
    )
    for order, expected in ((1, -1), (2, 0)):
        derivative = derive(checked, order)
        assert value_of(checked, derivative, "-3") == expected
        assert value_of(checked, derivative, "-2") == expected


# Floating point


def test_a_growing_denominator_overflows_no_earlier_than_the_equation() -> None:
    for text in ("1/(1 + exp(x))", "exp(x)/(2 + exp(x))", "x/cosh(x)", "5/(10^x + 1)"):
        checked = simple(text)
        largest = "300" if "10^x" in text else "700"
        for order in (1, 2, 3):
            derivative = derive(checked, order)
            exact = value_of(checked, derivative, largest)
            assert abs(value_of(checked, derivative, largest, BINARY64) - exact) < 1e-15


def test_a_power_with_a_name_for_exponent_has_its_derivative_at_zero() -> None:
    checked = simple("x^n", n="3")
    assert value_of(checked, derive(checked, 1), "0", BINARY64) == 0.0


# Values, by function


def _mp(name: str) -> Callable[..., Any]:
    special: Mapping[str, Callable[..., Any]] = {
        "ln": MP.log,
        "log2": lambda x: MP.log(x) / MP.log(2),
        "cbrt": MP.cbrt,
        "abs": abs,
        "min": min,
        "max": max,
        "erf": MP.erf,
        "normal_cdf": lambda x: MP.erfc(-x / MP.sqrt(2)) / 2,
        "tgamma": MP.gamma,
        "lgamma": lambda x: MP.log(abs(MP.gamma(x))),
        "digamma": MP.digamma,
        "cyl_bessel_j": MP.besselj,
        "cyl_neumann": MP.bessely,
        "cyl_bessel_i": MP.besseli,
        "cyl_bessel_k": MP.besselk,
        "expint": MP.ei,
        "exp_integral_e1": MP.e1,
        "cos_integral": MP.ci,
        "sin_integral": MP.si,
    }
    return special.get(name) or getattr(MP, name)


WITHOUT = {"digamma": 1, "airy_ai": 1, "airy_bi": 1, "tgamma": 2, "lgamma": 2}
"""Functions without a derivative in the language, and the order from which there is none."""
STEPS = {"sign", "floor", "ceil"}
INNER = "0.3*x^2 + 0.35"


@pytest.mark.parametrize("name", sorted(FUNCTIONS.keys() - STEPS))
def test_every_function_against_numerical_differentiation(name: str) -> None:
    """Of the argument 0.3*x^2 + 0.35 (a further one before it where the function takes two), at x = 0.9."""
    shift = {"acosh": 1}.get(name, 0)
    before = [] if FUNCTIONS[name].arity == 1 else ["1.25"]
    checked = simple(f"{name}({', '.join([*before, f'{INNER} + {shift}'])})")
    function = None if WITHOUT.get(name) == 1 else _mp(name)

    def value(x: Any) -> Any:
        argument = MP.mpf("0.3") * x**2 + MP.mpf("0.35") + shift
        assert function is not None
        return function(*[MP.mpf(text) for text in before], argument)

    for order in (1, 2, 3):
        if order >= WITHOUT.get(name, 4):
            with pytest.raises(NoDerivative, match="|".join((name, "digamma"))):
                derive(checked, order)
            continue
        derivative = derive(checked, order)
        expected = MP.diff(value, MP.mpf("0.9"), order)
        found = MP.mpf(value_of(checked, derivative, "0.9"))
        assert abs(found - expected) <= MP.mpf("1e-25") * (1 + abs(expected)), derivative.text


@pytest.mark.parametrize("name", ["atan2", "hypot", "min", "max"])
def test_the_first_argument_of_a_function_of_two(name: str) -> None:
    checked = simple(f"{name}({INNER}, cos(x))")
    function = {"atan2": MP.atan2, "hypot": MP.hypot, "min": min, "max": max}[name]

    def value(x: Any) -> Any:
        return function(MP.mpf("0.3") * x**2 + MP.mpf("0.35"), MP.cos(x))

    for order in (1, 2):
        expected = MP.diff(value, MP.mpf("0.7"), order)
        found = MP.mpf(value_of(checked, derive(checked, order), "0.7"))
        assert abs(found - expected) <= MP.mpf("1e-25") * abs(expected)


@pytest.mark.parametrize("name", ["cyl_bessel_j", "cyl_neumann", "cyl_bessel_i", "cyl_bessel_k"])
@pytest.mark.parametrize("order_of_function", ["0", "0.5", "2", "nu"])
def test_bessel_functions_of_every_kind_of_order(name: str, order_of_function: str) -> None:
    checked = simple(f"{name}({order_of_function}, x)", nu="1.75")
    nu = MP.mpf("1.75" if order_of_function == "nu" else order_of_function)
    for order in (1, 2):
        expected = MP.diff(lambda x: _mp(name)(nu, x), MP.mpf("2.5"), order)
        found = MP.mpf(value_of(checked, derive(checked, order), "2.5"))
        assert abs(found / expected - 1) < MP.mpf("1e-25")


def test_powers_with_the_unknown_in_either_place() -> None:
    checked = simple("x^x + 2^x + x^b + b^(x^2)", b="1.25")

    def value(x: Any) -> Any:
        b = MP.mpf("1.25")
        return x**x + 2**x + x**b + b ** (x**2)

    for order in (1, 2, 3):
        expected = MP.diff(value, MP.mpf("1.3"), order)
        found = MP.mpf(value_of(checked, derive(checked, order), "1.3"))
        assert abs(found / expected - 1) < MP.mpf("1e-25")


def test_random_expressions_against_numerical_differentiation() -> None:
    """300 random trees of smooth functions; the numerical derivative is that of the same text in 150 digits."""
    functions = ("sin", "cos", "atan", "exp", "tanh", "hypot", "ln", "sqrt", "asinh", "erf")
    trees = Trees(Random(20_261_201), ("x", "x", "b"), functions, singles=False, piecewise=False, tables=False)
    fine = arithmetic_of("multiprecision:150")
    compared = 0
    for _ in range(300):
        text = to_text(trees.expression(4))
        if "x" not in text:
            continue
        checked = simple(f"{text} + x", b="0.75")
        function = Function(checked, fine)
        x, h = fine.literal("0.625", single=False), fine.literal("1e-40", single=False)
        try:
            expected = (function.value(x + h) - function.value(x - h)) / (2 * h)
            found = value_of(checked, derive(checked, 1), "0.625")
        except EvaluationFailed:
            continue
        if abs(function.value(x)) < 1e50:
            assert abs(found - expected) <= 1e-30 * (1 + abs(expected)), text
            compared += 1
    assert compared > 100


# What has none


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("digamma(x)", "no derivative of digamma(x): its derivative, the trigamma function, is not in the language"),
        ("airy_ai(2*x)", "no derivative of airy_ai(2*x): the derivative of an Airy function is not in the language"),
        (
            "cyl_bessel_k(x, 2)",
            "no derivative of cyl_bessel_k(x, 2): the derivative by its order is not in the language",
        ),
    ],
)
def test_a_function_without_derivative_is_named(text: str, message: str) -> None:
    with pytest.raises(NoDerivative) as caught:
        derive(simple(text), 1)
    assert str(caught.value) == message


def test_a_function_without_derivative_in_a_definition() -> None:
    checked = stated("A = x", "x", {"A": "airy_bi(x)"}, {})
    with pytest.raises(NoDerivative, match=r"no derivative of airy_bi\(x\) in A: "):
        derive(checked, 1)


def test_such_a_function_of_an_input_does_no_harm() -> None:
    assert derive(simple("x*airy_ai(b)", b="1"), 1).text == "airy_ai(b)"


@pytest.mark.parametrize("order", [0, 4, -1])
def test_other_orders_are_a_mistake_of_the_caller(order: int) -> None:
    assert HIGHEST_ORDER == 3
    with pytest.raises(ValueError, match="1 to 3"):
        derive(simple("x^5"), order)


# Limits


def chain(length: int) -> str:
    return "*".join(f"(x + {i})" for i in range(length))


@pytest.mark.parametrize(
    "text",
    [
        chain(190),
        f"sin({chain(100)})*exp({chain(60)})",
        " + ".join(f"sin({i}*x)" for i in range(1, 190)),
        "(" * 90 + "x" + "*x + 1)" * 90,
        "sqrt(1 + " * 90 + "x" + ")" * 90,
        "9^9^9^x",
        "x^9^9^9",
        "(7*x)^999999999999999",
        "(2*x)^1e30*x^-1e30",
        "x^1e300 + x^1e-300",
    ],
)
def test_no_text_runs_away(text: str) -> None:
    """The third derivative, or the word that there is none, in a few seconds of processor time."""
    checked = simple(text)
    started = time.process_time()
    try:
        derivative = derive(checked, 3)
        texts = [*lines_of(derivative).values(), derivative.text]
    except NoDerivative:
        texts = []
    assert time.process_time() - started < 8
    for line in texts:
        assert to_text(parse_expression(line)) == line


def test_a_product_that_is_too_long_is_told() -> None:
    factors = "*".join(f"sin(x + {i})^cos(x*{i + 1})" for i in range(60))
    with pytest.raises(NoDerivative, match=r"too long; put parts of the text on lines of \[where\]"):
        derive(simple(factors), 2)


def test_the_same_text_gives_the_same_derivative() -> None:
    checked = stated("Q = Qd", "y", MANNING, CHANNEL)
    assert derive(checked, 3) == derive(stated("Q = Qd", "y", MANNING, CHANNEL), 3)
    assert mpmath.mp.prec == 53  # the library's own context is left alone
