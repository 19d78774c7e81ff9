"""What each source listing says, and that it computes what Python computes from the same lines.

The listings stand in tests/support/listings.py. Single precision is held against numpy's binary32.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from types import SimpleNamespace
from typing import Any

import numpy as np
import pytest

from support.listings import LISTINGS, PYTHON, Expected
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.checking import check_problem
from surefoot.equation.function import Function
from surefoot.equation.pasting import Pasted, read_source
from surefoot.equation.problem import Input, Problem

EXPECTED = {
    ("fortran", "penstock friction, fixed form"): Expected(
        definitions={"X": "2.51f/(RE*sqrt(F))"},
        inputs={"EPS": "4.5e-5", "D": "1.2", "RE": "1.05e06"},
        equation="1.0/sqrt(F) + 2.0*log10(EPS/(3.7f*D) + X)",
        unknown="F",
    ),
    ("fortran", "tailrace depth, free form"): Expected(
        definitions={
            "area": "(b + z*y)*y",
            "wet": "b + 2.0*y*sqrt(1.0 + z^2)",
            "q": "area/n*(area/wet)^(2.0/3.0)*sqrt(8.0e-4) - qd",
        },
        inputs={"b": "3.0", "z": "1.5", "g": "9.81"},
        needed="y n qd",
        skipped={1: "a program begins"},
    ),
    ("fortran", "normal depth with an integer quotient"): Expected(
        definitions={"A": "(B + Z*Y)*Y", "P": "B + 2*Y*sqrt(1 + Z^2)", "R": "A/P"},
        equation="A/0.025*R^0*sqrt(S) - QD",
        needed="B Z Y S QD",
    ),
    ("fortran", "accumulator, cubic equation of state"): Expected(
        definitions={"A": "0.42748*RGAS^2*TC^2.5/PC", "B": "0.08664*RGAS*TC/PC"},
        inputs={"RGAS": "83.14", "TC": "126.2", "PC": "34.0"},
        equation="RGAS*T/(V - B) - A/(sqrt(T)*V*(V + B)) - P",
        needed="T V P",
    ),
    ("fortran", "friction in single precision"): Expected(
        definitions={"X1": "2.51f/RE", "X4": "0.5*RE", "X5": "exp(0.1f)"},
        inputs={"X2": "0.3333333432674408", "X3": "1.4142135381698608"},
        needed="RE",
    ),
    ("fortran", "a statement function"): Expected(
        equation="X^3 - 2.0*X - 5.0",
        unknown="X",
    ),
    ("fortran", "integers by name and by declaration"): Expected(
        definitions={
            "H": "1.0/N",
            "W": "sign(1/N)*floor(abs(1/N))",
            "U": "sign((IP + 1)/2)*floor(abs((IP + 1)/2))",
            "V": "2/K",
        },
        inputs={"N": "3", "IP": "7", "K2": "2"},
        needed="K",
    ),
    ("fortran", "an if block"): Expected(
        definitions={"re": "v*d/nu", "f": "64.0/re", "dh": "f*len/d*v^2/(2.0*g)"},
        needed="v d nu len g",
        skipped={3: "an if block: its branches are not read (1 statement)"},
    ),
    ("fortran", "a loop of fixed-point steps"): Expected(
        inputs={"XK": "0.02"},
        skipped={2: "a loop: to read the lines in it, paste them alone (1 statement)", 5: "write is not an assignment"},
    ),
    ("fortran", "angles and signs"): Expected(
        definitions={
            "s": "sin(phi*(pi/180)) + atan2(1.0, x)*(180/pi)",
            "w": "piecewise(x - 1.0 >= 0: abs(2.0); otherwise: -abs(2.0))",
            "m": "piecewise(x > 0.0 and x < 5.0: x; otherwise: 0.0)",
            "j": "sign(x)*floor(abs(x) + 0.5)",
        },
        inputs={"phi": "30.0"},
        needed="x",
    ),
    ("fortran", "sequence numbers behind column 72"): Expected(
        definitions={"X": "(A + B)*2.0 - C", "Y": "ln(X)"},
        needed="A B C",
    ),
    ("fortran", "members of a derived type"): Expected(
        definitions={"reynolds": "line_v*line_d/nu"},
        equation="64.0/reynolds - f",
        needed="line_v line_d nu f",
    ),
    ("fortran", "continued in every way"): Expected(
        definitions={"T1": "a + b", "T2": "1.50*T1 - c"},
        needed="a b c",
    ),
    ("c", "penstock friction"): Expected(
        definitions={"x": "2.51/(RE*sqrt(f))"},
        inputs={"RE": "1.05e6", "eps": "4.5e-5"},
        equation="1/sqrt(f) + 2*log10(eps/(3.7*d) + x)",
        unknown="f",
        needed="d",
        skipped={12: "main is another function"},
    ),
    ("c", "tailrace depth"): Expected(
        definitions={"A": "(b + z*y)*y", "P": "b + 2*y*sqrt(1 + z^2)", "R": "(A/P)^0"},
        inputs={"b": "3.0", "z": "1.5", "n": "0.025"},
        equation="A/n*R*sqrt(0.0008) - 12.0",
        unknown="y",
    ),
    ("c", "accumulator, cubic equation of state"): Expected(
        definitions={"a": "0.42748*R^2*Tc^2.5/Pc", "b": "0.08664*R*Tc/Pc"},
        inputs={"R": "83.14", "Tc": "126.2", "Pc": "34.0"},
        equation="R*T/(V - b) - a/(sqrt(T)*V*(V + b)) - P",
        needed="T V P",
    ),
    ("c", "single precision suffixes"): Expected(
        definitions={"x": "2.51f/Re", "y": "0.5*Re", "v": "sqrt(x)"},
        inputs={"z": "0.3333333432674408", "w": "0.10000000149011612"},
        needed="Re",
    ),
    ("c", "a conditional value"): Expected(
        definitions={
            "Re": "v*d/nu",
            "f": "piecewise(Re < 2300.0: 64.0/Re; Re < 4000 and d > 0.1: 0.03; otherwise: 0.3164/Re^0.25)",
        },
        needed="v d nu",
    ),
    ("c", "casts and whole numbers"): Expected(
        definitions={
            "b": "1/3",
            "c": "3*2.0",
            "d": "sign(n/2)*floor(abs(n/2))",
            "e": "sign(x/2)*floor(abs(x/2)) + y",
            "g": "1/m",
        },
        inputs={"n": "7", "a": "0"},
        needed="x y m",
    ),
    ("c", "members and pointers"): Expected(
        definitions={"re": "pipe_v*pipe_d/nu", "r": "ln(re) + re^0.5"},
        needed="pipe_v pipe_d nu",
    ),
    ("c", "new values for old names"): Expected(
        definitions={"x_2": "x/1000", "t_2": "t + x_2", "t_3": "t_2*t_2", "y": "t_3"},
        inputs={"t": "1.0"},
        needed="x",
    ),
    ("c", "odd literals"): Expected(
        inputs={"a": "16", "b": "8", "c": "1000.5", "d": "2.5e3", "e": "1.5", "f": "3"},
    ),
    ("c", "logarithms"): Expected(
        definitions={"a": "ln(x) + ln(y)", "b": "log10(x)", "c": "log2(x)", "d": "exp(-x)", "e": "abs(x) + abs(y)"},
        needed="x y",
    ),
    ("c", "a loop and an if"): Expected(
        definitions={"y": "2*x", "z": "y + 1"},
        inputs={"x": "0.02"},
        skipped={
            2: "a loop: to read the lines in it, paste them alone (4 statements)",
            7: "an if: its branches are not read",
        },
    ),
    ("c", "constants of the library"): Expected(
        definitions={
            "area": "pi*d*d/4",
            "w": "2*pi*n/60",
            "k": "hypot(a, b) + cbrt(c) + tgamma(d) + cyl_bessel_j(0, x) + cyl_bessel_j(2, x)",
        },
        needed="d n a b c x",
    ),
    ("c", "a method in a namespace"): Expected(
        equation="v*d/nu - 2300",
        unknown="v",
        needed="d nu",
        skipped={1: "namespace: what stands in it is read"},
    ),
    ("c", "comments inside"): Expected(
        definitions={"a": "b + c + d"},
        needed="b c d",
    ),
    ("python", "penstock friction"): Expected(
        definitions={"x": "2.51/(Re*sqrt(f))"},
        inputs={"Re": "1.05e6", "d": "1.2", "eps": "4.5e-5"},
        equation="1/sqrt(f) + 2*log10(eps/(3.7*d) + x)",
        unknown="f",
        skipped={13: "a call"},
    ),
    ("python", "tailrace depth"): Expected(
        definitions={"A": "(b + z*y)*y", "P": "b + 2*y*sqrt(1 + z^2)"},
        inputs={"b": "3.0", "z": "1.5", "n": "0.025", "Qd": "12.0"},
        equation="A/n*(A/P)^(2/3)*sqrt(0.0008) - Qd",
        unknown="y",
    ),
    ("python", "accumulator, cubic equation of state"): Expected(
        definitions={"a": "0.42748*R^2*126.2^2.5/34.0", "b": "0.08664*R*126.2/34.0"},
        inputs={"R": "83.14", "Tc": "126.2", "Pc": "34.0", "T": "293.15", "P": "200.0"},
        equation="R*T/(V - b) - a/(T^0.5*V*(V + b)) - P",
        unknown="V",
    ),
    ("python", "a lambda"): Expected(
        inputs={"n": "5"},
        equation="x^n - exp(-x)",
        unknown="x",
    ),
    ("python", "critical depth, a bare residual"): Expected(
        definitions={"A": "(3.0 + 1.5*y)*y", "T": "3.0 + 2*1.5*y"},
        inputs={"Q": "12.0", "g": "9.81"},
        equation="Q^2*T - g*A^3",
        unknown="y",
    ),
    ("python", "heat exchanger outlet"): Expected(
        definitions={
            "dt1": "Thi - tco",
            "dt2": "Tho - tci",
            "lmtd": "piecewise(dt1 == dt2: dt1; otherwise: (dt1 - dt2)/ln(dt1/dt2))",
        },
        equation="U*A*lmtd - mc*(tco - tci)",
        needed="Thi tco Tho tci U A mc",
    ),
    ("python", "whole-number division"): Expected(
        definitions={"k": "floor(7/2)", "h": "floor(x/3)", "q": "7/2"},
        needed="x",
    ),
    ("python", "angles"): Expected(
        definitions={"th": "30.0*(pi/180)", "s": "sin(phi*(pi/180))", "d": "atan2(y, x)*(180/pi)"},
        needed="phi y x",
    ),
    ("python", "members"): Expected(
        definitions={"re": "v*pipe_d/nu"},
        equation="re - 2300",
        unknown="v",
        needed="pipe_d nu",
        skipped={1: "a class: what stands in it is read", 4: "of several values that are returned the first is read"},
    ),
    ("python", "two-argument logarithm and friends"): Expected(
        definitions={
            "a": "ln(x)/ln(10)",
            "b": "ln(x) + ln(x)",
            "c": "max(a, b, 0.1) + min(a, 2) + a^2 + abs(b)",
            "d": "piecewise(x > 0: x^2; otherwise: -x)",
            "e": "2*pi*exp(1)",
        },
        needed="x",
    ),
    ("python", "special functions"): Expected(
        definitions={"y": "cyl_bessel_j(0, x) + exp_integral_e1(x) + normal_cdf(x) + lgamma(x) + erf(x)"},
        needed="x",
    ),
    ("python", "annotated, chained, skipped"): Expected(
        definitions={"a": "b", "c": "a + b", "e": "d + 1"},
        inputs={"x": "2.5", "b": "0.5"},
        needed="d",
        skipped={
            3: "a loop: to read the lines in it, paste them alone (1 statement)",
            6: "load(...) is not a function of the equation language",
            8: "assert is not an assignment",
        },
    ),
    ("python", "feed-in contract, yield"): Expected(
        definitions={
            "r": "i/200",
            "annuity": "(1 - (1 + r)^-36)/r",
            "redemption": "1000/(1 + r)^36",
            "value": "30*annuity + redemption",
        },
        inputs={"price": "700.89"},
        equation="value - price",
        unknown="i",
    ),
}


@pytest.mark.parametrize(("language", "name"), [(each, name) for each in LISTINGS for name in LISTINGS[each]])
def test_what_a_listing_says(language: str, name: str) -> None:
    """The same whether the language is guessed or told."""
    text = LISTINGS[language][name]
    guessed = read_source(text)
    assert guessed.language == language
    assert Expected.of(guessed) == EXPECTED[language, name]
    assert Expected.of(read_source(text, language)) == EXPECTED[language, name]
    assert list(EXPECTED[language, name].definitions) == [line.name for line in guessed.definitions]


# Values


SCIENCE = SimpleNamespace(
    sqrt=math.sqrt,
    log=math.log,
    radians=math.radians,
    degrees=math.degrees,
    arctan2=math.atan2,
    square=lambda x: x**2.0,
    where=lambda condition, value, other: value if condition else other,
)


def run_python(text: str, given: Mapping[str, float]) -> dict[str, Any]:
    """The names of a listing after Python has run it."""
    names: dict[str, Any] = {"math": math, "np": SCIENCE, "brentq": lambda *_: 0.0, **given}
    exec(text, names)
    return names


def computed(pasted: Pasted, given: Mapping[str, float], unknown: str) -> tuple[float, dict[str, Any]]:
    """The residual (the unknown itself where there is none), and the definitions."""
    inputs = (*pasted.inputs, *(Input(name, repr(given[name])) for name in pasted.names_needed if name != unknown))
    problem = Problem(unknown, pasted.equation or unknown, where=pasted.definitions, inputs=inputs)
    function = Function(check_problem(problem), BINARY64)
    return function.value(given[unknown]), dict(function.quantities(given[unknown]))


RESIDUALS: Mapping[str, tuple[str, Mapping[str, float], Callable[[dict[str, Any], float], float]]] = {
    "penstock friction": ("f", {"f": 0.0173}, lambda names, x: names["residual"](x)),
    "tailrace depth": ("y", {"y": 1.37}, lambda names, x: names["f"](x)),
    "accumulator, cubic equation of state": ("V", {"V": 131.7}, lambda names, x: names["res"]),
    "a lambda": ("x", {"x": 0.83}, lambda names, x: names["f"](x)),
    "critical depth, a bare residual": (
        "y",
        {"y": 0.97},
        lambda names, x: names["Q"] ** 2 * names["T"] - names["g"] * names["A"] ** 3,
    ),
    "feed-in contract, yield": ("i", {"i": 9.3}, lambda names, x: names["npv"](x)),
}


@pytest.mark.parametrize("name", sorted(RESIDUALS))
def test_a_residual_has_the_bits_that_python_computes(name: str) -> None:
    unknown, given, direct = RESIDUALS[name]
    names = run_python(PYTHON[name], given)
    value, _ = computed(read_source(PYTHON[name]), given, unknown)
    assert value == direct(names, given[unknown])


@pytest.mark.parametrize(
    ("name", "unknown", "given"),
    [
        (
            "heat exchanger outlet",
            "tco",
            {"tco": 61.0, "Thi": 82.5, "Tho": 51.1, "tci": 40.2, "U": 1.9, "A": 3.1, "mc": 2.2},
        ),
        (
            "heat exchanger outlet",
            "tco",
            {"tco": 60.0, "Thi": 80.0, "Tho": 60.0, "tci": 40.0, "U": 1.9, "A": 3.1, "mc": 2.2},
        ),
        ("angles", "x", {"x": -0.7, "y": 2.4, "phi": 33.3}),
        ("two-argument logarithm and friends", "x", {"x": 3.7}),
    ],
)
def test_definitions_have_the_bits_that_python_computes(name: str, unknown: str, given: Mapping[str, float]) -> None:
    pasted = read_source(PYTHON[name])
    names = run_python(PYTHON[name], given)
    _, quantities = computed(pasted, given, unknown)
    assert quantities == {line.name: names[line.name] for line in pasted.definitions}


def test_single_precision_has_the_bits_of_binary32() -> None:
    one, three, two, x = np.float32(1), np.float32(3), np.float32(2), np.float32(2.51)
    pasted = read_source("a = 1.0/3.0\nb = sqrt(2.0)\nc = 2.51\nd = 2.51*3.0\ne = y*2.51", "fortran")
    values = {given.name: float(given.value) for given in pasted.inputs}
    assert values == {"a": float(one / three), "b": float(np.sqrt(two)), "c": float(x), "d": float(x * three)}
    _, quantities = computed(pasted, {"y": 1.7}, "y")
    assert quantities == {"e": 1.7 * float(x)}


@pytest.mark.parametrize(("x", "whole"), [(7.9, 7.0), (-7.9, -7.0), (0.4, 0.0)])
def test_a_dropped_fraction_is_dropped_towards_zero(x: float, whole: float) -> None:
    for language, text in (("c", "y = (int)x;"), ("fortran", "y = int(x)"), ("python", "y = int(x)")):
        assert computed(read_source(text, language), {"x": x}, "x")[1] == {"y": whole}
