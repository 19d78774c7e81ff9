"""Source listings read as definitions: exact texts, every reading, the numbers of the source, garbage refused."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from support.listings import LISTINGS
from surefoot.equation.binary64 import BINARY64
from surefoot.equation.checking import check_problem
from surefoot.equation.function import Function
from surefoot.equation.pasting import read_source
from surefoot.equation.problem import Definition, Input, Problem
from surefoot.errors import EquationError

COLEBROOK = "1.0/sqrt(F) + 2.0*log10(EPS/(3.7f*D) + X)"


@pytest.mark.parametrize(
    ("language", "name", "unknown", "equation", "definitions"),
    [
        ("fortran", "penstock friction, fixed form", "F", COLEBROOK, {"X": "2.51f/(RE*sqrt(F))"}),
        (
            "fortran",
            "normal depth with an integer quotient",
            "",
            "A/0.025*R^0*sqrt(S) - QD",
            {"A": "(B + Z*Y)*Y", "P": "B + 2*Y*sqrt(1 + Z^2)", "R": "A/P"},
        ),
        (
            "fortran",
            "accumulator, cubic equation of state",
            "",
            "RGAS*T/(V - B) - A/(sqrt(T)*V*(V + B)) - P",
            {"A": "0.42748*RGAS^2*TC^2.5/PC", "B": "0.08664*RGAS*TC/PC"},
        ),
        ("fortran", "a statement function", "X", "X^3 - 2.0*X - 5.0", {}),
        (
            "c",
            "penstock friction",
            "f",
            "1/sqrt(f) + 2*log10(eps/(3.7*d) + x)",
            {"x": "2.51/(RE*sqrt(f))"},
        ),
        (
            "c",
            "a conditional value",
            "",
            "",
            {
                "Re": "v*d/nu",
                "f": "piecewise(Re < 2300.0: 64.0/Re; Re < 4000 and d > 0.1: 0.03; otherwise: 0.3164/Re^0.25)",
            },
        ),
        (
            "python",
            "tailrace depth",
            "y",
            "A/n*(A/P)^(2/3)*sqrt(0.0008) - Qd",
            {"A": "(b + z*y)*y", "P": "b + 2*y*sqrt(1 + z^2)"},
        ),
    ],
)
def test_a_listing_becomes_definitions_in_order(
    language: str, name: str, unknown: str, equation: str, definitions: dict[str, str]
) -> None:
    pasted = read_source(LISTINGS[language][name])
    assert pasted.language == language
    assert (pasted.unknown, pasted.equation) == (unknown, equation)
    assert pasted.definitions == tuple(Definition(*each) for each in definitions.items())


@pytest.mark.parametrize(
    ("text", "language", "reading"),
    [
        ("X = 1/3", "fortran", ("1/3", "0")),
        ("X = 2.51/RE", "fortran", ("2.51", "2.51f")),
        ("X = ALOG(Y)", "fortran", ("ALOG", "ln")),
        ("X = sind(phi)", "fortran", ("sind(phi)", "sin(phi*(pi/180))")),
        ("double x = 7/2;", "c", ("7/2", "3")),
        ("x = 2.51f/Re;", "c", ("2.51f", "2.51f")),
        ("x = log(y);", "c", ("log", "ln")),
        ("x = math.log(y)", "python", ("math.log", "ln")),
        ("x = np.radians(phi)", "python", ("np.radians(phi)", "phi*(pi/180)")),
    ],
)
def test_a_reading_that_changes_a_value_is_listed(text: str, language: str, reading: tuple[str, str]) -> None:
    found = read_source(text, language)  # type: ignore[arg-type]
    assert reading in [(each.as_written, each.read_as) for each in found.readings]
    assert all(each.line == 1 and each.column >= 1 and each.why for each in found.readings)


def test_a_subroutine_gives_its_residual_by_a_parameter() -> None:
    pasted = read_source(
        "      SUBROUTINE FRIC(F, RES)\n      REAL*8 F, RES\n      EPSD = EPS/D\n"
        "      RES = 1.D0/DSQRT(F)\n     1  + EPSD\n      END\n"
    )
    assert (pasted.unknown, pasted.equation) == ("F", "1./sqrt(F) + EPSD")
    assert pasted.definitions == (Definition("EPSD", "EPS/D"),)
    assert pasted.names_needed == ("EPS", "D")


def test_what_was_read_computes_what_the_source_computes() -> None:
    pasted = read_source(LISTINGS["python"]["accumulator, cubic equation of state"])
    problem = Problem(pasted.unknown, pasted.equation, where=pasted.definitions, inputs=pasted.inputs)
    function = Function(check_problem(problem), BINARY64)

    def residual(volume: float) -> float:
        gas, temperature, pressure = 83.14, 293.15, 200.0
        a = 0.42748 * math.pow(gas, 2.0) * math.pow(126.2, 2.5) / 34.0
        b = 0.08664 * gas * 126.2 / 34.0
        return gas * temperature / (volume - b) - a / (math.pow(temperature, 0.5) * volume * (volume + b)) - pressure

    assert Input("P", "200.0") in pasted.inputs
    for volume in (60.0, 101.7, 122.3, 5000.0):
        assert function.value(volume) == residual(volume)


TEXTS = [text for listings in LISTINGS.values() for text in listings.values()]


@settings(max_examples=400)
@given(st.sampled_from(TEXTS), st.data())
def test_a_changed_listing_is_read_or_refused(text: str, data: st.DataObject) -> None:
    start = data.draw(st.integers(0, len(text)))
    stop = data.draw(st.integers(start, min(len(text), start + 20)))
    piece = data.draw(st.text(alphabet="()[]{}*/+-=;&!#'\"\\ \n\t0123.eEdDxyf,:%_é", max_size=8))
    try:
        names = [each.name for each in read_source(text[:start] + piece + text[stop:]).definitions]
    except EquationError as error:
        names = [f"{error.line}:{error.column}"]
    assert len(set(names)) == len(names)
