"""Source lines as parts of a problem: every kind of reading, shapes of statements, languages, errors, limits."""

from __future__ import annotations

from pathlib import Path

import pytest

from support.listings import Expected
from surefoot.equation.parser import parse_expression
from surefoot.equation.pasting import LANGUAGES, MAX_SOURCE, read_source
from surefoot.equation.source_functions import CONSTANTS_OF, FUNCTIONS_OF
from surefoot.equation.tree import Number
from surefoot.equation.wording import to_text
from surefoot.errors import EquationError


def readings_of(text: str, language: str) -> list[tuple[int, int, str, str]]:
    found = read_source(text, language).readings
    return [(reading.line, reading.column, reading.as_written, reading.read_as) for reading in found]


def why_of(text: str, language: str) -> list[str]:
    return [reading.why for reading in read_source(text, language).readings]


# Readings


@pytest.mark.parametrize(
    ("language", "text", "readings"),
    [
        # integer division
        ("fortran", "x = a**(1/3)", [(1, 9, "1/3", "0")]),
        (
            "fortran",
            "x = -7/2 + 10**3/7 + 2**(-1)",
            [(1, 5, "-7/2", "-3"), (1, 12, "10**3/7", "142"), (1, 22, "2**(-1)", "0")],
        ),
        ("c", "x = 1/3*y;", [(1, 5, "1/3", "0")]),
        ("c", "x = y*1/3;", []),
        ("c", "x = (double)1/3 + 1/3.0;", []),
        ("python", "x = 1/3", []),
        ("python", "x = y//3", [(1, 5, "y//3", "floor(y/3)")]),
        ("fortran", "n = 3\nx = 1/n", [(2, 5, "1/n", "sign(1/n)*floor(abs(1/n))")]),
        ("fortran", "integer a\nx = a/2", [(2, 5, "a/2", "sign(a/2)*floor(abs(a/2))")]),
        ("fortran", "x = 2/k", [(1, 5, "2/k", "2/k")]),
        ("fortran", "real(8) k\nx = 2/k", []),
        ("c", "int n; x = n/2;", [(1, 12, "n/2", "sign(n/2)*floor(abs(n/2))")]),
        ("c", "double f(int n) { return n/2; }", [(1, 26, "n/2", "sign(n/2)*floor(abs(n/2))")]),
        ("c", "n = 3; x = 1/n;", [(1, 12, "1/n", "1/n")]),
        # whole-number names
        ("fortran", "integer k\nk = 2.7d0", [(2, 5, "2.7d0", "2")]),
        ("c", "int k = x*2.5;", [(1, 9, "x*2.5", "sign(x*2.5)*floor(abs(x*2.5))")]),
        ("fortran", "length = 2.5d0*w", [(1, 1, "length", "length")]),
        ("fortran", "x = 100000*100000", [(1, 5, "100000*100000", "100000*100000")]),
        # single precision
        ("fortran", "x = 2.51*y", [(1, 5, "2.51", "2.51f")]),
        ("fortran", "x = 0.5*y + 2.0 + 1.5e0", []),
        ("fortran", "x = 2.51d0*y + 2.51_dp + 2.51_8", []),
        ("fortran", "x = 2.51_sp*y", [(1, 5, "2.51_sp", "2.51f")]),
        ("fortran", "x = 2.51 + 2.51*y", [(1, 5, "2.51", "2.51f")]),
        ("fortran", "x = 1.0/3.0*y", [(1, 5, "1.0/3.0", "0.33333334f")]),
        ("fortran", "x = 1/3.0*y", [(1, 5, "1/3.0", "0.33333334f")]),
        ("fortran", "x = -(2.0/3.0)*y", [(1, 7, "2.0/3.0", "0.6666667f")]),
        ("fortran", "x = sqrt(2.0)*y", [(1, 5, "sqrt(2.0)", "1.4142135f")]),
        ("fortran", "x = dsqrt(2.0d0)*y", []),
        ("fortran", "x = exp(0.5)*y", [(1, 5, "exp(0.5)", "exp(0.5)")]),
        ("fortran", "real y\nx = y*2.5", [(1, 1, "y", "y")]),
        ("fortran", "x = int(y, 8) + floor(z, kind=i4)", [(1, 5, "int(y, 8)", "sign(y)*floor(abs(y))")]),
        ("fortran", "x = real(y) + dble(z) + real(z, 8) + real(z, kind=dp)", [(1, 5, "real(y)", "y")]),
        ("c", "x = 2.51f*y + 0.5f;", [(1, 5, "2.51f", "2.51f")]),
        ("c", "float x = 2.51;", [(1, 1, "x", "x"), (1, 7, "2.51", "2.509999990463257")]),
        ("c", "x = (float)y;", [(1, 5, "(float)y", "y")]),
        ("python", "x = 2.51*y", []),
        # the logarithm
        ("fortran", "x = LOG(y) + ALOG(z)", [(1, 5, "LOG", "ln"), (1, 14, "ALOG", "ln")]),
        ("c", "x = log(y) + log10(z);", [(1, 5, "log", "ln")]),
        (
            "python",
            "x = np.log(y) + math.log(z, 2)",
            [(1, 5, "np.log", "ln"), (1, 17, "math.log(z, 2)", "ln(z)/ln(2)")],
        ),
        # degrees
        (
            "fortran",
            "x = cosd(y) + asind(z)",
            [(1, 5, "cosd(y)", "cos(y*(pi/180))"), (1, 15, "asind(z)", "asin(z)*(180/pi)")],
        ),
        ("python", "x = np.deg2rad(y)", [(1, 5, "np.deg2rad(y)", "y*(pi/180)")]),
        # powers, abs, capitals, new values, words, members
        ("fortran", "x = y**3 + y**2 + 2**3 + y**a", [(1, 5, "y**3", "y^3")]),
        ("c", "x = abs(y) + fabs(z);", [(1, 5, "abs(y)", "abs(y)")]),
        ("fortran", "Re = 1.0d5\nx = RE + re + Re", [(2, 5, "RE", "Re"), (2, 10, "re", "Re")]),
        ("python", "Re = 1e5\nx = RE", []),
        ("c", "x = a; x = x + 1;", [(1, 8, "x", "x_2")]),
        ("c", "y = x; x = 1;", [(1, 8, "x", "x_2")]),
        ("c", "table = 2; y = table*pi;", [(1, 1, "table", "table_"), (1, 22, "pi", "pi")]),
        ("c", "pi = 3.14; y = 2*pi;", [(1, 1, "pi", "pi_")]),
        ("c", "y = p->D + q.D;", [(1, 5, "p->D", "p_D"), (1, 12, "q.D", "q_D")]),
        ("c", "x = 017;", [(1, 5, "017", "15")]),
        ("c", "x = 1; if (a) x = 2; y = x;", [(1, 26, "x", "x")]),
        ("fortran", "x = 1\ncall change(x)\ny = x", [(3, 5, "x", "x")]),
    ],
)
def test_what_changes_a_value_is_listed_with_its_place(
    language: str, text: str, readings: list[tuple[int, int, str, str]]
) -> None:
    assert readings_of(text, language) == readings


def test_equal_readings_are_one_with_a_count() -> None:
    text = "x = log(y) + log(z)\nw = log(x)"
    assert readings_of(text, "python") == [(1, 5, "log", "ln")]
    assert why_of(text, "python") == ["log is the natural logarithm (3 places)"]


def test_reasons_are_told() -> None:
    assert why_of("x = 1/3", "c") == ["a quotient of integers drops its fraction"]
    assert why_of("x = y*2.51", "fortran") == ["a real literal without D or kind is single precision in Fortran"]
    assert why_of("a = 1\nif (b) then\na = 2\nend if\nx = a", "fortran") == ["line 2 was not read and may change it"]


# Languages


@pytest.mark.parametrize(
    ("text", "language", "reason"),
    [
        ("x = 1.5D-3*y", "fortran", "exponents with D"),
        ("x = a + &\n b", "fortran", "lines that & continues"),
        ("X = SQRT(Y)", "fortran", "functions in capitals"),
        ("x = pow(y, 2);", "c", "lines that end with a semicolon"),
        ("#define G 9.81", "c", "lines of the preprocessor"),
        ("def f(x):\n    return x", "python", "def"),
        ("x = math.sqrt(y)", "python", "names of Python's libraries"),
        ("x = a*b", "python", "nothing tells the language; 1/3 and 2.51 mean something else in Fortran and C"),
        ("x = a**b", "python", "nothing tells the language; 1/3 and 2.51 mean something else in Fortran and C"),
    ],
)
def test_the_language_is_guessed_with_a_reason(text: str, language: str, reason: str) -> None:
    pasted = read_source(text)
    assert (pasted.language, pasted.language_reason) == (language, reason)


def test_the_language_can_be_told() -> None:
    text = "x = 1/3 + 2.5"
    assert LANGUAGES == ("fortran", "c", "python")
    texts = {each: read_source(text, each).definitions[0].text for each in LANGUAGES}
    assert texts == {"fortran": "0 + 2.5", "c": "0 + 2.5", "python": "1/3 + 2.5"}
    assert read_source(text, "c").language_reason == "as chosen"
    with pytest.raises(ValueError, match="there is no language cobol"):
        read_source(text, "cobol")


# Shapes of statements


@pytest.mark.parametrize(
    ("language", "text", "expected"),
    [
        ("fortran", "a = b; c = a*2.0d0", Expected({"a": "b", "c": "a*2.0"}, needed="b")),
        (
            "fortran",
            "x(3) = 2.0d0\ny = x(3)",
            Expected(
                skipped={
                    1: "an element of an array, or a part of something, is given a value",
                    2: "x(...) is not a function of the equation language",
                }
            ),
        ),
        (
            "fortran",
            "      a = b +\n     1    c\nC     comment\n      d = a",
            Expected({"a": "b + c", "d": "a"}, needed="b c"),
        ),
        ("fortran", "\ta = b +\n\t1 c", Expected({"a": "b + c"}, needed="b c")),
        ("fortran", "x = 'a!b'\ny = 2 ! x", Expected(inputs={"y": "2"}, skipped={1: "a text stands in it"})),
        (
            "fortran",
            "#ifdef X\nx = 2\n#endif",
            Expected(inputs={"x": "2"}, skipped={1: "a line of the preprocessor", 3: "a line of the preprocessor"}),
        ),
        (
            "fortran",
            "data a /1.0/\nif (x > 1) y = 2",
            Expected(skipped={1: "data is not an assignment", 2: "a one-line if"}),
        ),
        (
            "fortran",
            "subroutine s(x, r)\nr = x - a\nend subroutine",
            Expected(equation="x - a", unknown="x", needed="a"),
        ),
        ("fortran", "function g(x) result(r)\nr = x**2 - 2\nend function g", Expected(equation="x^2 - 2", unknown="x")),
        ("fortran", "x = y .gt. 2", Expected(skipped={1: "a condition is used as a number"})),
        (
            "fortran",
            "do i = 1, 3\n x = i\nend do\ny = x",
            Expected(
                {"y": "x"}, needed="x", skipped={1: "a loop: to read the lines in it, paste them alone (1 statement)"}
            ),
        ),
        (
            "c",
            "double a[3]; x = a[0];",
            Expected(skipped={1: "a[...] is an element of an array; give it a name of its own"}),
        ),
        ("c", "x = y\n  + z;\n\n// end", Expected({"x": "y + z"}, needed="y z")),
        ("c", "#define SQ(x) ((x)*(x))\nx = 2;", Expected(inputs={"x": "2"}, skipped={1: "a macro with arguments"})),
        (
            "c",
            "x = f(2) + 1;\ny = x;",
            Expected({"y": "x"}, needed="x", skipped={1: "f(...) is not a function of the equation language"}),
        ),
        (
            "c",
            "x = !(a < 2) && b >= 3 ? 1 : -1;",
            Expected({"x": "piecewise(not a < 2 and b >= 3: 1; otherwise: -1)"}, needed="a b"),
        ),
        ("c", "1/sqrt(f) + a", Expected(equation="1/sqrt(f) + a", needed="f a")),
        ("c", 'printf("%d", x);\ny = 2;', Expected(inputs={"y": "2"}, skipped={1: "a call"})),
        (
            "python",
            "a, b = b, a",
            Expected(skipped={1: "several names, or an element of something, are given a value"}),
        ),
        ("python", "a, b = x, 2.0", Expected({"a": "x"}, {"b": "2.0"}, needed="x")),
        (
            "python",
            "x = [1, 2]\ny = x[0]",
            Expected(
                skipped={
                    1: "[ is not part of the equation language",
                    2: "x[...] is an element of an array; give it a name of its own",
                }
            ),
        ),
        ("python", "x = (a +\n     b)  # c\ny = a \\\n  - b", Expected({"x": "a + b", "y": "a - b"}, needed="a b")),
        (
            "python",
            "x = 2 if a < b <= c else 3 if not a == 1 else 4",
            Expected({"x": "piecewise(a < b <= c: 2; not a == 1: 3; otherwise: 4)"}, needed="a b c"),
        ),
        ("python", "f = 64/Re", Expected({"f": "64/Re"}, needed="Re")),
        ("python", "f = a*f - b", Expected(equation="f = a*f - b", unknown="f", needed="a b")),
        (
            "python",
            "s = sqrt(f)\nf = (a + s)**-2",
            Expected({"s": "sqrt(f)"}, equation="f = (a + s)^-2", unknown="f", needed="a"),
        ),
        ("python", "x = 3\ndef f(x):\n    return x - 1", Expected(equation="x - 1", unknown="x")),
        (
            "python",
            "def g(a):\n  return a\ndef residual(x):\n  return x - 1\ndef h(b):\n  return b",
            Expected(equation="x - 1", unknown="x", skipped={1: "g is another function", 5: "h is another function"}),
        ),
    ],
)
def test_a_shape_of_statement(language: str, text: str, expected: Expected) -> None:
    assert Expected.of(read_source(text, language)) == expected


# Errors

NO_PART = "not part of the equation language; write it out with floor"


@pytest.mark.parametrize(
    ("language", "text", "message"),
    [
        ("c", "", "column 1: there is nothing to read; paste assignments of Fortran, C or Python"),
        ("c", "x = a % b;", f"column 7: the remainder % is {NO_PART}"),
        ("python", "y = 1\nx = a % b", f"line 2, column 7: the remainder % is {NO_PART}"),
        ("fortran", "x = mod(a, b)", f"column 5: the remainder mod is {NO_PART}"),
        ("c", "x = fmod(a, b);", f"column 5: the remainder fmod is {NO_PART}"),
        ("c", "x += 2;", "column 3: += is not read; write x = x + ..."),
        ("python", "x **= 2", "column 3: **= is not read; write x = x ** ..."),
        ("c", "x++;", "column 2: ++ is not read; write x = x + ..."),
        ("c", "x = a ^ b;", "column 7: ^ is an exclusive or in C, not a power; write pow(a, b)"),
        ("python", "x = a ^ b", "column 7: ^ is an exclusive or in Python, not a power; write a**b"),
        ("fortran", "x = (a + b", "column 5: ( has no matching )"),
        (
            "python",
            "x = a +",
            "column 8: the expression ends too early; accepted: a number, a name, a function, - or (",
        ),
        ("python", "x = a b", "column 7: b is not expected here; accepted: an operator, or the end"),
        ("fortran", "x = sqrt(a, b)", "column 5: sqrt takes another number of arguments than 2"),
        (
            "c",
            "x = 1 < y < 3 ? 1 : 2;",
            "column 11: a chain of comparisons means something else in this language; join two with and",
        ),
        ("c", "x = 089;", "column 5: 089 is not a number that can be read"),
        ("python", "x = 2j*y", "column 5: 2j is not a number that can be read"),
        ("fortran", "x = 1/0", "column 7: division by zero"),
        ("fortran", "x = 1.0e99", "column 5: 1.0e99 is beyond the range of single precision"),
        ("python", "x = 1e999", "column 5: 1e999 is beyond the range of binary64"),
        (
            "c",
            "/* one\n two */ x = a\n + @;",
            "line 3, column 4: @ is not expected here; accepted: an operator, or the end",
        ),
        (
            "fortran",
            "x = a + &\n  & b c",
            "line 2, column 7: c is not expected here; accepted: an operator, or the end",
        ),
    ],
)
def test_an_error_points_at_its_place(language: str, text: str, message: str) -> None:
    with pytest.raises(EquationError) as caught:
        read_source(text, language)
    assert str(caught.value) == message


# Limits


@pytest.mark.parametrize(
    "text",
    [
        "x = " + "(" * 5000 + "1",
        "x = " + "-" * 5000 + "1",
        "x = " + "2**" * 3000 + "2",
        "x = " + "1 + " * 3000 + "1",
        "x = " + "a//" * 60 + "a",
        "integer a, b\nx = " + "a/b*" * 40 + "a",
        "x = " + "f(" * 3000 + "1",
        "x = " + "not " * 3000 + "a",
        "x = " + "9" * 3000,
        "x = 1e-" + "9" * 300,
        "x = " + "a" * 30_000 + " + 1",
    ],
)
@pytest.mark.parametrize("language", LANGUAGES)
def test_no_text_exhausts_the_reader(text: str, language: str) -> None:
    try:
        texts = [line.text for line in read_source(text, language).definitions]
    except EquationError:
        texts = []
    for each in texts:
        assert to_text(parse_expression(each)) == each


def test_nesting_of_real_code_is_read() -> None:
    nested = "a + b"
    for i in range(30):
        nested = f"{i} + x*({nested})"
    assert read_source(f"y = {nested}", "c").definitions[0].text == nested


def test_the_size_of_the_source_is_limited() -> None:
    with pytest.raises(EquationError, match=f"{MAX_SOURCE} are accepted; paste the lines that define the residual"):
        read_source("x = 1\n" * (MAX_SOURCE // 6 + 1))
    assert len(read_source("x = 1\n" * 200, "python").inputs) == 200


def test_nothing_is_run(tmp_path: Path) -> None:
    mark = tmp_path / "mark"
    text = f'x = __import__("os").system("touch {mark}")\ny = open("{mark}", "w")\nz = eval("1")\nw = 2'
    pasted = read_source(text, "python")
    assert Expected.of(pasted).inputs == {"w": "2"}
    assert len(pasted.skipped) == 3
    assert not mark.exists()


# Tables


@pytest.mark.parametrize("language", LANGUAGES)
def test_every_known_function_makes_text_that_is_accepted(language: str) -> None:
    for name, known in FUNCTIONS_OF[language].items():
        for count in {known.least, known.most or known.least + 2}:
            arguments = [Number(f"0.{i + 1}") for i in range(count)]
            made = to_text(known.make(*arguments))
            assert to_text(parse_expression(made)) == made, name
    for constant in CONSTANTS_OF[language].values():
        parse_expression(to_text(constant))


def test_a_subroutine_gives_its_residual_by_a_parameter() -> None:
    pasted = read_source(
        "      SUBROUTINE FRIC(F, RES)\n      REAL*8 F, RES\n      EPSD = EPS/D\n"
        "      RES = 1.D0/DSQRT(F)\n     1  + EPSD\n      END\n"
    )
    assert (pasted.unknown, pasted.equation) == ("F", "1./sqrt(F) + EPSD")
    assert [(each.name, each.text) for each in pasted.definitions] == [("EPSD", "EPS/D")]
    assert pasted.names_needed == ("EPS", "D")
