"""Tree -> text -> tree: an equal tree, the fewest parentheses, and the precedence that Python's own parser has."""

from __future__ import annotations

import re
from collections.abc import Callable
from random import Random

import pytest

from support.equation_trees import Trees, python_tree
from surefoot.equation.parser import parse_condition, parse_equation, parse_expression
from surefoot.equation.tree import Binary, Call, Expression, Name, Negate, Node, Number
from surefoot.equation.wording import children, names_in, to_text
from surefoot.errors import EquationError


def test_the_text_of_an_expression_parses_back_to_an_equal_tree() -> None:
    trees = Trees(Random(1))
    for _ in range(3000):
        tree = trees.expression()
        assert parse_expression(to_text(tree)) == tree, to_text(tree)


def test_the_text_of_a_condition_parses_back_to_an_equal_tree() -> None:
    trees = Trees(Random(2))
    for _ in range(2000):
        tree = trees.condition()
        assert parse_condition(to_text(tree)) == tree, to_text(tree)


def test_the_text_of_an_equation_parses_back_to_an_equal_tree() -> None:
    trees = Trees(Random(3))
    for _ in range(1000):
        tree = trees.equation()
        assert parse_equation(to_text(tree)) == tree, to_text(tree)


def test_no_pair_of_parentheses_can_be_left_out() -> None:
    trees = Trees(Random(4), tables=False)
    pairs = 0
    for _ in range(1000):
        tree = trees.expression(4)
        text = to_text(tree)
        for opening, closing in _grouping_pairs(text):
            pairs += 1
            shorter = text[:opening] + text[opening + 1 : closing] + text[closing + 1 :]
            try:
                other: Node | None = parse_expression(shorter)
            except EquationError:
                other = None
            assert other != tree, f"{text} needs no parenthesis at {opening}"
    assert pairs > 1000


def _grouping_pairs(text: str) -> list[tuple[int, int]]:
    """Places of the parentheses that belong to no function."""
    waiting: list[int] = []
    pairs = []
    for at, character in enumerate(text):
        if character == "(":
            waiting.append(at)
        elif character == ")":
            opening = waiting.pop()
            if not re.search(r"\w$", text[:opening]) or re.search(r"\b(and|or|not) ?$", text[:opening]):
                pairs.append((opening, at))
    return pairs


def test_python_reads_our_text_as_the_same_tree() -> None:
    trees = Trees(Random(5), names=("x", "y", "θ"), singles=False, piecewise=False, tables=False)
    compared = 0
    while compared < 1500:
        tree: Node = trees.random.choice((trees.expression, trees.condition))()
        text = to_text(tree)
        if "00.50" not in text:  # Python has no leading zeros
            assert python_tree(text) == tree, text
            compared += 1


@pytest.mark.parametrize(
    ("parse", "pieces", "seed"),
    [
        (parse_expression, "+ - * / ^ x y 2 ( ) - x 1.5 sin( atan2( , x ) y", 6),
        (parse_condition, "< <= == != and or not x y 2 ( ) + - x y x y not", 7),
    ],
)
def test_what_we_accept_we_read_as_python_does_and_what_we_refuse_it_refuses(
    parse: Callable[[str], Node], pieces: str, seed: int
) -> None:
    random, accepted = Random(seed), 0
    for _ in range(60_000):
        text = " ".join(random.choices(pieces.split(), k=random.randrange(1, 12)))
        try:
            tree = parse(text)
        except EquationError:
            if parse is parse_expression and ", )" not in text:  # Python lets arguments end with a comma
                with pytest.raises((SyntaxError, TypeError)):
                    python_tree(text)
            continue
        accepted += 1
        assert python_tree(text) == tree, text
    assert accepted > 250


@pytest.mark.parametrize(
    ("text", "shortest"),
    [
        ("((a)+(b))-(c)", "a + b - c"),
        ("a+(b-c)", "a + (b - c)"),
        ("(a*b)/(c*d)", "a*b/(c*d)"),
        ("-(x^2)", "-x^2"),
        ("(-x)^2", "(-x)^2"),
        ("2^(-3)", "2^-3"),
        ("(a^b)^c", "(a^b)^c"),
        ("a^(b^c)", "a^b^c"),
        ("-(-x)", "--x"),
        ("a - (-b)", "a - -b"),
        ("+x**2", "x^2"),
        ("3.7f*x", "3.7f*x"),
        ("piecewise((x>0): (1); otherwise: (x))", "piecewise(x > 0: 1; otherwise: x)"),
        ("piecewise(not (a<b) and (c<d or e<f): 1)", "piecewise(not a < b and (c < d or e < f): 1)"),
        ("piecewise(not (a<b and c<d): 1)", "piecewise(not (a < b and c < d): 1)"),
        ('table("pump", (x))', 'table("pump", x)'),
        ("atan2( y,x )", "atan2(y, x)"),
    ],
)
def test_the_shortest_text(text: str, shortest: str) -> None:
    assert to_text(parse_expression(text)) == shortest


def test_names_are_those_of_the_text_without_constants() -> None:
    tree = parse_equation('a + sin(b*pi) = piecewise(c < d: table("pump", e); otherwise: f^-g)')
    assert names_in(tree) == {"a", "b", "c", "d", "e", "f", "g"}


def test_children_stand_in_the_order_of_the_text() -> None:
    tree = parse_expression("piecewise(a < b: c; d < e: f; otherwise: g)")
    texts = [to_text(child) for child in children(tree)]
    assert texts == ["a < b", "c", "d < e", "f", "g"]
    assert children(Call("max", (Name("a"), Name("b"), Name("c")))) == (Name("a"), Name("b"), Name("c"))
    assert children(parse_equation("a = b")) == (Name("a"), Name("b"))
    assert children(parse_equation("a")) == (Name("a"),)


def test_a_tree_far_higher_than_texts_may_be_still_has_words() -> None:
    tree: Expression = Name("x")
    for _ in range(5000):
        tree = Negate(Binary("+", tree, Number("1")))
    assert to_text(tree) == "-(" * 5000 + "x" + " + 1)" * 5000
    assert names_in(tree) == {"x"}
