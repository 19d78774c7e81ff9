"""Texts as people type them: what is accepted, and where and how the rest is refused."""

from __future__ import annotations

import time
from collections.abc import Callable

import pytest

from support.stack import below
from surefoot.equation.functions import CONSTANTS, FUNCTIONS, RESERVED, WORDS, nearest
from surefoot.equation.parser import MAX_DEPTH, MAX_TEXT, parse_condition, parse_equation, parse_expression
from surefoot.equation.tokens import is_hexadecimal, is_literal, is_name, tokenize
from surefoot.equation.tree import (
    Binary,
    Call,
    Comparison,
    Equation,
    Junction,
    Lookup,
    Name,
    Negate,
    Node,
    Not,
    Number,
    Piecewise,
)
from surefoot.errors import EquationError

X, Y = Name("x"), Name("y")
ONE, TWO = Number("1"), Number("2")


def refusal(parse: Callable[[str], Node], text: str) -> EquationError:
    with pytest.raises(EquationError) as caught:
        parse(text)
    return caught.value


# What is accepted


@pytest.mark.parametrize(
    ("text", "tree"),
    [
        ("1", ONE),
        (".5", Number(".5")),
        ("1.", Number("1.")),
        ("1e-3", Number("1e-3")),
        ("1E+05", Number("1E+05")),
        ("00.1000", Number("00.1000")),
        ("3.7f", Number("3.7", single=True)),
        ("1e-3F", Number("1e-3", single=True)),
        ("2.*f", Binary("*", Number("2."), Name("f"))),
        ("ρ_2*Δt", Binary("*", Name("ρ_2"), Name("Δt"))),
        ("_a1", Name("_a1")),
        ("-x^2", Negate(Binary("^", X, TWO))),
        ("-x*y", Binary("*", Negate(X), Y)),
        ("2^-x", Binary("^", TWO, Negate(X))),
        ("2^-x^y", Binary("^", TWO, Negate(Binary("^", X, Y)))),
        ("x^y^2", Binary("^", X, Binary("^", Y, TWO))),
        ("x**y", Binary("^", X, Y)),
        ("x-y-1", Binary("-", Binary("-", X, Y), ONE)),
        ("x/y*2", Binary("*", Binary("/", X, Y), TWO)),
        ("x - -y", Binary("-", X, Negate(Y))),
        ("x*-y", Binary("*", X, Negate(Y))),
        ("+x", X),
        ("-+-x", Negate(Negate(X))),
        ("2*+(x)", Binary("*", TWO, X)),
        ("((x))", X),
        ("pi", Name("pi")),
        ("max(x, y, 1, 2)", Call("max", (X, Y, ONE, TWO))),
        ("sin( x )", Call("sin", (X,))),
        ('table("mean head", x)', Lookup("mean head", X)),
        ("x\n  +\r\n y\r+\t1", Binary("+", Binary("+", X, Y), ONE)),
        ("x\u00a0+\u2009y", Binary("+", X, Y)),
        ("piecewise(x < 1: y)", Piecewise(((Comparison((X, ONE), ("<",)), Y),), None)),
        (
            "piecewise(x < 1: y; 1 <= x: 2; otherwise: x)",
            Piecewise(((Comparison((X, ONE), ("<",)), Y), (Comparison((ONE, X), ("<=",)), TWO)), X),
        ),
    ],
)
def test_expressions(text: str, tree: Node) -> None:
    assert parse_expression(text) == tree


LESS, SAME = Comparison((X, ONE), ("<",)), Comparison((X, Y), ("==",))


@pytest.mark.parametrize(
    ("text", "tree"),
    [
        ("x < 1", LESS),
        ("1 <= x != y > 2", Comparison((ONE, X, Y, TWO), ("<=", "!=", ">"))),
        ("(x) >= (y)", Comparison((X, Y), (">=",))),
        ("x < 1 and x == y and x < 1", Junction("and", (LESS, SAME, LESS))),
        ("(x < 1 and x == y) and x < 1", Junction("and", (Junction("and", (LESS, SAME)), LESS))),
        ("x < 1 or x == y and not x < 1", Junction("or", (LESS, Junction("and", (SAME, Not(LESS)))))),
        ("not x < 1 and x == y", Junction("and", (Not(LESS), SAME))),
        ("not not (x < 1)", Not(Not(LESS))),
        ("-x < 1 + y", Comparison((Negate(X), Binary("+", ONE, Y)), ("<",))),
    ],
)
def test_conditions(text: str, tree: Node) -> None:
    assert parse_condition(text) == tree


def test_an_equation_has_two_sides_or_one() -> None:
    assert parse_equation("x = y") == Equation(X, Y)
    assert parse_equation("x - y") == Equation(Binary("-", X, Y), None)


def test_columns_are_those_of_the_text() -> None:
    tree = parse_expression("  x + max(y,\n 2*y)")
    assert isinstance(tree, Binary)
    assert tree.column == 5
    assert tree.left.column == 3
    assert isinstance(tree.right, Call)
    assert tree.right.column == 7
    assert [argument.column for argument in tree.right.arguments] == [11, 3]
    assert parse_condition(" (x + 1) < 2").column == 2
    negative = parse_expression(" -x")
    assert negative.column == 2


# What is refused: text, column, a part of the message, a part of the hint

SIDE_BY_SIDE = "no operator between two values"
REFUSED = [
    ("", 1, "there is no text", "accepted: a number, a name, a function, - or ("),
    ("  ", 3, "there is no text", "a number"),
    ("x +", 4, "the text ends behind '+'", "a number"),
    ("x = ", 5, "the text ends behind '='", "a number"),
    ("* x", 1, "a value is expected, not '*'", "a number"),
    ("x + * y", 5, "a value is expected behind '+', not '*'", "a number"),
    ("sin()", 5, "a value is expected behind '(', not ')'", "a number"),
    ("2x", 2, SIDE_BY_SIDE, "write 2*x to multiply"),
    ("2 x", 3, SIDE_BY_SIDE, "write 2*x to multiply"),
    ("2(x + 1)", 2, SIDE_BY_SIDE, "write 2*(..."),
    ("(x)(y)", 4, SIDE_BY_SIDE, "write ...)*(..."),
    ("(x)y", 4, SIDE_BY_SIDE, "write ...)*y"),
    ("x y", 3, SIDE_BY_SIDE, "write x*y"),
    ("x sin(y)", 3, SIDE_BY_SIDE, "write x*sin"),
    ("2f", 2, SIDE_BY_SIDE, "write 2*f, or 2.0f for a single-precision literal"),
    ("3.7fx", 4, SIDE_BY_SIDE, "write 3.7*fx"),
    ("1 2", 3, "two numbers side by side, 1 and 2", "operator"),
    ("1_000", 2, "a number has no underscores", "together"),
    ("1e", 2, "1e is not a number", "write 1*e, or digits of the exponent"),
    ("1e+", 2, "1e is not a number", "exponent"),
    ("1.2.3", 4, "1.2 is followed by a second point", ""),
    ("1..2", 3, "1. is followed by a second point", ""),
    ("1.0D-3", 1, "the exponent of 1.0D-3 is written with a D", "write 1.0e-3"),
    ("2*x + 5d0", 7, "the exponent of 5d0 is written with a D", "write 5e0"),
    ("log(x)", 1, "two logarithms", "write ln for the natural one, log10 for base 10"),
    ("2*log", 3, "two logarithms", "ln"),
    ("sin x", 1, "sin stands without its parenthesis", "write sin(...)"),
    ("x + max", 5, "max stands without its parenthesis", "write max(...)"),
    ("piecewise x", 1, "without its parenthesis", "write piecewise(condition: value; otherwise: value)"),
    ("table + 1", 1, "without its parenthesis", 'write table("name", x)'),
    ("Sin(x)", 1, "there is no function Sin", "write sin, or Sin*(..."),
    ("arctan(x)", 1, "there is no function arctan", "write atan"),
    ("Gamma(x)", 1, "there is no function Gamma", "write tgamma"),
    ("q(x)", 1, "there is no function q", "write q*(... to multiply"),
    ("pow(x, 2)", 1, "pow is not a function here", "write a^b"),
    ("pi(2)", 1, "pi is a constant", "write pi*(..."),
    ("sin(x, y)", 1, "sin takes 1 argument, 2 given", "sine of an angle in radians"),
    ("atan2(x)", 1, "atan2 takes 2 arguments, 1 given", "atan2(y, x)"),
    ("1 + max(x)", 5, "max takes 2 arguments or more, 1 given", "largest"),
    ("0,5*x", 2, "a comma in a number", "write 0.5 with a point"),
    ("sqrt(0,5)", 1, "sqrt takes 1 argument, 2 given", "write decimals with a point, not a comma"),
    ("x, y", 2, "a comma outside the arguments of a function", "accepted: an operator"),
    ("a, ²", 2, "a comma outside the arguments of a function", "accepted: an operator"),
    ("sin(x,)", 7, "a value is expected behind ',', not ')'", ""),
    ("x)", 2, "no parenthesis is open for this )", "delete it"),
    ("(x", 3, "the parenthesis of column 1 is not closed", "write )"),
    ("y*sin(x + (2)", 14, "the parenthesis of column 3 is not closed", "write )"),
    ("x²", 2, "² is not part of the language", "write ^2"),
    ("x⁻¹²", 2, "⁻¹² is not part of the language", "write ^-12"),
    ("x₁", 2, "₁ is not part of the language", "write 1 as plain digits of the name"),
    ("x × y", 3, "× is not part", "write *"),
    ("x·y", 2, "· is not part", "write *"),
    ("x − y", 3, "− is not part", "write - "),
    ("x ÷ y", 3, "÷ is not part", "write /"),
    ("√x", 1, "√ is not part", "write sqrt(...)"),
    ("[x]", 1, "[ is not part", "write ( and )"),
    ("50%", 3, "% is not part", "write /100"),
    ("|x|", 1, "| is not part", "abs(...)"),
    ("x!", 2, "! is not part", "tgamma(n + 1)"),
    ("x // y", 3, "// is not an operator here", "floor(a/b)"),
    ("a.b", 2, ". is not part", "digits before or behind the point"),
    ("x # y", 3, "# is not part", "accepted: + - * / ^ ( ) ="),
    ("\u200bx", 1, "the invisible character U+200B", "delete it"),
    ("x\ud800", 2, "the invisible character U+D800", "delete it"),
    ("x\0", 2, "the invisible character U+0000", "delete it"),
    ("x\x0by", 2, "the invisible character U+000B", "delete it"),
    ("x = y = 2", 7, "a second =", "one ="),
    ("x == y", 1, "a condition stands where a value is expected", "write the equation with one ="),
    ("x < y", 1, "a condition stands where a value is expected", "piecewise"),
    ("x + (x < y)", 5, "a condition stands where a value is expected", "piecewise"),
    ("+(x < y)", 2, "a condition stands where a value is expected", "piecewise"),
    ("-(x < y)", 2, "a condition stands where a value is expected", "piecewise"),
    ("sin(x < y)", 5, "a condition stands where a value is expected", "piecewise"),
    ("(x = y)", 4, "= is not accepted here", "once in an equation, outside parentheses"),
    ("x = = y", 5, "a value is expected behind '=', not '='", "in one piece"),
    ("x += y", 4, "a value is expected behind '+', not '='", "assignments"),
    ("x := y", 3, "':' is not accepted here", "an operator, or the end"),
    ("(x; y)", 3, "';' is not accepted here", "an operator, or )"),
    ('"pump"', 1, "a name in quotes stands alone", 'table("name", x)'),
    ('x "pump"', 3, "a name in quotes stands alone", 'table("name", x)'),
    ("table(pump, x)", 7, "the name of a table stands in quotes", 'table("name", x)'),
    ('table("pump" x)', 14, "a comma follows the name of the table", 'table("name", x)'),
    ('table("pump", x, y)', 16, "a table takes its name and one value", 'table("name", x)'),
    ('table("pump, x)', 7, "the name in quotes has no end", 'close it with "'),
    ('table("pu\x07mp", x)', 7, "a character that cannot be shown", ""),
    ("piecewise(otherwise: 1)", 11, "otherwise stands first", "a condition and its value before it"),
    ("piecewise(x < 1: 1; otherwise 2)", 31, "otherwise needs a colon", "otherwise: value"),
    ("piecewise(x < 1: 1; otherwise: otherwise: 2)", 32, "a second otherwise", ""),
    ("piecewise(x < 1: 1; otherwise: 2; x > 3: 1)", 33, "';' is not accepted here", "write )"),
    ("piecewise(x < 1: 1 otherwise: 2)", 20, "otherwise begins a branch of its own", "write ; before it"),
    ("piecewise(x < 1: 1; x > 2)", 26, "the last branch has no value", "otherwise: value"),
    ("piecewise(x < 1)", 16, "the last branch has no value", "condition: value"),
    ("piecewise(x < 1, 1)", 16, "branches are parted by semicolons", "piecewise(condition: value;"),
    ("piecewise(x < 1; 1)", 16, "';' is not accepted here", "piecewise(condition: value;"),
    ("piecewise(x = 1: 1)", 13, "= is not accepted here", "write == to compare"),
    ("piecewise(x: 1)", 11, "a value stands where a condition is expected", "x > 0"),
    ("piecewise(x < 1: x < 2)", 18, "a condition stands where a value is expected", ""),
    ("otherwise", 1, "otherwise stands where a value is expected", "a number"),
    ("x + and", 5, "and stands where a value is expected", "a number"),
    ("x not y", 3, "not stands behind a value", "and not"),
]


@pytest.mark.parametrize(("text", "column", "message", "hint"), REFUSED)
def test_refused_equations(text: str, column: int, message: str, hint: str) -> None:
    error = refusal(parse_equation, text)
    assert error.column == column
    assert message in error.message
    assert hint in error.hint
    assert "\n" not in str(error)


@pytest.mark.parametrize(
    ("text", "column", "message", "hint"),
    [
        ("x", 1, "a value stands where a condition is expected", "x > 0"),
        ("x < 1 and y", 11, "a value stands where a condition is expected", "x > 0"),
        ("not x", 5, "a value stands where a condition is expected", "x > 0"),
        ("x = 1", 3, "= is not accepted here", "write == to compare"),
        ("(x < y) < 2", 1, "a condition stands where a value is expected", ""),
        ("x && y", 3, "&& is not an operator here", "write and"),
        ("x < 1 || y < 1", 7, "|| is not an operator here", "write or"),
        ("x <> y", 3, "<> is not an operator here", "write !="),
        ("x => y", 3, "=> is not an operator here", "write >="),
        ("x ≤ y", 3, "≤ is not part of the language", "write <="),
        ("!x < 1", 1, "! is not part of the language", "write not"),
        ("x < = y", 5, "a value is expected behind '<', not '='", "in one piece"),
    ],
)
def test_refused_conditions(text: str, column: int, message: str, hint: str) -> None:
    error = refusal(parse_condition, text)
    assert error.column == column
    assert message in error.message
    assert hint in error.hint


def test_an_expression_has_no_equals_sign() -> None:
    error = refusal(parse_expression, "x = y")
    assert (error.column, error.message) == (3, "= is not accepted here")


def test_errors_of_longer_texts_name_the_line() -> None:
    error = refusal(parse_equation, "x +\r\n y\n * 2 z")
    assert (error.line, error.column) == (3, 6)
    assert str(error).startswith("line 3, column 6: no operator between two values")
    assert refusal(parse_equation, "(x +\n y\n").message == "the parenthesis of line 1 is not closed"


def test_the_first_of_two_errors_is_told() -> None:
    assert refusal(parse_equation, "2x + y²").column == 2


def test_long_names_are_cut_in_messages() -> None:
    error = refusal(parse_equation, "x " + "y" * 19_000)
    assert len(str(error)) < 150


# Limits


LIMITS = [
    ("10 000 parentheses", "(" * 10_000 + "x" + ")" * 10_000, "20001 characters"),
    ("9 999 parentheses", "(" * 9_999 + "x" + ")" * 9_999, "nested deeper than 200 levels"),
    ("a line of 1 MB", "x" * 1_000_000, "1000000 characters, 20000 are accepted"),
    ("minus signs", "-" * 19_999 + "x", "more than 200 operations"),
    ("powers", "x^" * 9_999 + "x", "more than 200 operations"),
    ("sums", "x+" * 9_999 + "x", "more than 200 operations"),
    ("calls", "sin(" * 3_900 + "x" + ")" * 3_900, "nested deeper"),
    ("piecewise", "piecewise(x>0:" * 1_300 + "x" + ")" * 1_300, "nested deeper"),
    ("open parentheses", "(" * 20_000, "nested deeper"),
]


@pytest.mark.parametrize(("text", "message"), [case[1:] for case in LIMITS], ids=[case[0] for case in LIMITS])
@pytest.mark.parametrize("frames", [0, 100, 850])
def test_limits_are_refused_at_once_at_any_depth_of_the_stack(text: str, message: str, frames: int) -> None:
    began = time.perf_counter()
    assert message in below(frames, lambda: refusal(parse_equation, text)).message
    assert time.perf_counter() - began < 1.0


@pytest.mark.parametrize("frames", [0, 850])
def test_long_conditions_end(frames: int) -> None:
    assert "more than 200" in below(frames, lambda: refusal(parse_condition, "not " * 4_000 + "x<1")).message
    chained = parse_condition("1<" * 9_999 + "x")
    assert isinstance(chained, Comparison)
    assert len(chained.operands) == 10_000
    joined = parse_condition(" or ".join(["x<1"] * 2_500))
    assert isinstance(joined, Junction)
    assert len(joined.operands) == 2_500


def test_the_limits_themselves_are_accepted() -> None:
    assert parse_expression("(" * MAX_DEPTH + "x" + ")" * MAX_DEPTH) == X
    assert "nested" in refusal(parse_expression, "(" * (MAX_DEPTH + 1) + "x" + ")" * (MAX_DEPTH + 1)).message
    highest = "-" * (MAX_DEPTH - 1) + "x"
    assert parse_expression(highest).column == 1
    assert "more than 200" in refusal(parse_expression, "-" + highest).message
    assert parse_expression("x" + " " * (MAX_TEXT - 1)) == X
    assert "characters" in refusal(parse_expression, "x" + " " * MAX_TEXT).message


def test_a_text_that_is_too_long_is_refused_where_its_limit_is() -> None:
    error = refusal(parse_equation, "x\n" + "y" * MAX_TEXT)
    assert (error.line, error.column) == (2, MAX_TEXT - 1)


def test_a_tower_of_powers_is_only_a_text() -> None:
    assert parse_expression("9^9^9^9") == parse_expression("9^(9^(9^9))")


# Names, literals, the table of functions


def test_names() -> None:
    assert all(is_name(name) for name in ("x", "_", "x_1", "Ω", "Größe", "q2"))
    assert not any(is_name(name) for name in ("", "1x", "x.y", "x y", "x²", "x₁", "x-1", "x\n"))


def test_literals() -> None:
    accepted = ("1", "-1", "+.5", "1.", "1e5", "-1.5E-3", "0x1p-3", "-0X1.8P+3", "0x.8p0", "0x10")
    assert all(is_literal(text) for text in accepted)
    refused = ("", ".", "e5", "1e", "nan", "inf", "1_0", " 1", "1 ", "1f", "1d3", "0x", "0x1.8g", "١", "1\n", "--1")
    assert not any(is_literal(text) for text in refused)
    assert [text for text in accepted if is_hexadecimal(text)] == ["0x1p-3", "-0X1.8P+3", "0x.8p0", "0x10"]


def test_tokens_know_where_they_stand() -> None:
    tokens = list(tokenize('ab **\n 3.7f*table("q r"'))
    assert [(token.kind, token.text, token.line, token.column, token.end) for token in tokens] == [
        ("name", "ab", 1, 1, 3),
        ("symbol", "^", 1, 4, 6),
        ("number", "3.7", 2, 2, 6),
        ("symbol", "*", 2, 6, 7),
        ("name", "table", 2, 7, 12),
        ("symbol", "(", 2, 12, 13),
        ("string", "q r", 2, 13, 18),
        ("end", "", 2, 18, 18),
    ]
    assert [token.single for token in tokens if token.kind == "number"] == [True]
    assert tokens[2].touches(tokens[3])
    assert not tokens[0].touches(tokens[1])


def test_the_table_of_functions_is_that_of_the_language() -> None:
    one = (
        "sin cos tan asin acos atan sinh cosh tanh asinh acosh atanh exp expm1 log1p log10 log2 sqrt cbrt erf erfc "
        "tgamma lgamma floor ceil abs sign ln expint digamma normal_cdf airy_ai airy_bi exp_integral_e1 "
        "cos_integral sin_integral"
    )
    two = "atan2 hypot cyl_bessel_j cyl_neumann cyl_bessel_i cyl_bessel_k min max"
    assert {name: row.arity for name, row in FUNCTIONS.items()} == {
        **dict.fromkeys(one.split(), 1),
        **dict.fromkeys(two.split(), 2),
    }
    assert {name for name, row in FUNCTIONS.items() if row.more} == {"min", "max"}
    assert all(row.meaning and "\n" not in row.meaning for row in FUNCTIONS.values())
    assert set(CONSTANTS) == {"pi"}
    assert {*FUNCTIONS, "pi", "log", *WORDS} == RESERVED


@pytest.mark.parametrize(
    ("name", "known", "near"),
    [
        ("Rey", ["Re", "eps"], "Re"),
        ("EPS", ["eps", "Re"], "eps"),
        ("epsilon", ["eps_lon", "x"], "eps_lon"),
        ("\u00b5", ["\u03bc", "m"], "\u03bc"),
        ("π", ["pi", "p"], "pi"),
        ("arcsin", FUNCTIONS, "asin"),
        ("q", ["Re", "eps"], ""),
        ("Rey", [], ""),
        ("x" * 5000, ["x" * 4999], ""),
    ],
)
def test_the_nearest_name(name: str, known: list[str], near: str) -> None:
    assert nearest(name, known) == near
