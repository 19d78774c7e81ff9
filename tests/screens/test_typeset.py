"""Expressions in two dimensions: what stands under a bar, what is in parentheses, and what gives way to text."""

from __future__ import annotations

from random import Random

import pytest
from hypothesis import given
from hypothesis import strategies as st

from support.equation_trees import Trees
from surefoot.equation.parser import parse_equation, parse_expression
from surefoot.equation.tree import Expression
from surefoot.equation.wording import to_text
from surefoot.figures.characters import ASCII, UNICODE, Characters
from surefoot.screens.typeset import broken, residual, typeset

trees = st.integers(0, 2**32).map(lambda seed: Trees(Random(seed)).expression())


def laid(text: str, width: int = 78, height: int = 12, characters: Characters = ASCII) -> list[str]:
    return [line.rstrip() for line in typeset(parse_equation(text), width, height, characters).lines]


@pytest.mark.parametrize(
    ("text", "lines"),
    [
        ("x^2 - 2", ["x^2 - 2"]),
        ("x = 2", ["x - 2"]),
        ("x = -2", ["x - (-2)"]),
        ("x = a - b", ["x - (a - b)"]),
        ("a - (b + c) - d", ["a - (b + c) - d"]),
        ("-x^2", ["-x^2"]),
        ("(-x)^2", ["(-x)^2"]),
        ("a^b^c", ["a^(b^c)"]),
        ("(a^b)^c", ["(a^b)^c"]),
        ("x^-2", ["x^-2"]),
        ("a/b*c", ["a", "- * c", "b"]),
        ("a/(b*c)", [" a", "---", "b*c"]),
        ("a*b/c", ["a*b", "---", " c"]),
        ("a*(b/c)", ["    /b\\", "a * |-|", "    \\c/"]),
        ("-a/b", ["-a", "--", "b"]),
        ("-(a/b)", [" /a\\", "-|-|", " \\b/"]),
        ("(a/b)^2", ["/a\\", "|-|^2", "\\b/"]),
        ("sqrt(a/b)", ["    /a\\", "sqrt|-|", "    \\b/"]),
        ("max(a, b)", ["max(a, b)"]),
        ("3.7f*x", ["3.7f*x"]),
    ],
)
def test_layout(text: str, lines: list[str]) -> None:
    assert laid(text) == lines


def test_the_equation_of_colebrook_and_white() -> None:
    assert laid("1/sqrt(f) = -2*log10(eps/(3.7*D) + 2.51/(Re*sqrt(f)))") == [
        "   1      /          / eps       2.51   \\\\",
        "------- - |-2 * log10|----- + ----------||",
        "sqrt(f)   \\          \\3.7*D   Re*sqrt(f)//",
    ]


def test_the_same_with_box_drawing() -> None:
    assert laid("a/(b/c)", characters=UNICODE) == [" a", "───", " b", " ─", " c"]
    assert laid("sqrt(a/b)", characters=UNICODE) == ["    ⎛a⎞", "sqrt⎜─⎟", "    ⎝b⎠"]


def test_a_long_sum_goes_on_below() -> None:
    assert laid("a + b/c - d + e/f + g", width=12) == ["    b", "a + - - d", "    c", "     e", "   + - + g", "     f"]


def test_what_is_too_high_or_too_wide_is_text() -> None:
    assert laid("a/(b + c)", height=2) == ["a/(b + c)"]
    assert laid("sqrt(alpha/(beta + gamma))", width=12) == ["sqrt(alpha", "/(beta", "+ gamma))"]


def test_deep_and_large_trees_are_text() -> None:
    deep = "-(" * 60 + "x" + ")" * 60
    assert laid(deep, width=400) == [deep.replace("(", "").replace(")", "")]
    large = "max(" + ",".join(f"a/b{number}" for number in range(400)) + ")"
    assert "".join(laid(large)).replace(" ", "") == large


def test_names_that_ascii_cannot_show_are_spelled_out() -> None:
    assert laid("λ/2") == ["lambda", "------", "  2"]


@given(trees, st.integers(1, 100), st.integers(1, 30), st.sampled_from([ASCII, UNICODE]))
def test_nothing_is_wider_than_its_space(tree: Expression, width: int, height: int, characters: Characters) -> None:
    box = typeset(tree, width, height, characters)
    assert all(len(line.rstrip()) <= width for line in box.lines)
    assert 0 <= box.base < box.height


@given(trees, st.integers(1, 60))
def test_broken_text_is_the_text(tree: Expression, width: int) -> None:
    text = to_text(tree)
    lines = broken(text, width)
    assert all(len(line) <= width for line in lines)
    assert "".join(lines).replace(" ", "") == text.replace(" ", "")


def test_the_residual_of_an_expression_is_itself() -> None:
    equation = parse_equation("x - 1")
    assert residual(equation) == parse_expression("x - 1")
