"""Which language source lines are in, with the sign that decides it."""

from __future__ import annotations

import re
from dataclasses import dataclass

from surefoot.equation.source_tokens import Language


@dataclass(frozen=True, slots=True)
class _Sign:
    """What a language shows itself by: how much it weighs, however often it is there, and its name in words."""

    language: Language
    weight: int
    pattern: str
    words: str


_UNDECIDED = "nothing tells the language; 1/3 and 2.51 mean something else in Fortran and C"

_SIGNS = (
    _Sign(
        "fortran",
        4,
        r"(?i)^[ \t]*(?:end[ \t]*(?:if|do|function|subroutine|program)|subroutine|program)\b",
        "blocks of Fortran",
    ),
    _Sign("fortran", 4, r"(?i)^[ \t]*implicit[ \t]+\w", "implicit"),
    _Sign("fortran", 4, r"(?i)^[ \t]*(?:real|integer|double[ \t]+precision)\b[^;\n]*::", "declarations with ::"),
    _Sign(
        "fortran",
        4,
        r"(?i)^[ \t]*(?:real[ \t]*[*(]|integer[ \t]+\w|double[ \t]+precision)",
        "declarations of Fortran",
    ),
    _Sign("fortran", 3, r"&[ \t]*(?:!.*)?$", "lines that & continues"),
    _Sign("fortran", 3, r"^ {5}[^ 0\n]", "a mark in column 6"),
    _Sign("fortran", 4, r"(?<![\w.])\d+(?:\.\d*)?[dD][+-]?\d", "exponents with D"),
    _Sign("fortran", 4, r"(?i)\d_(?:dp|wp|rk|r8|real64|double|8)\b", "kinds behind numbers"),
    _Sign(
        "fortran",
        4,
        r"(?i)\b(?:d(?:log10|log|sqrt|abs|exp|sin|cos|tan|max1|min1|ble)|alog(?:10)?|am(?:ax|in)1)[ \t]*\(",
        "function names of Fortran",
    ),
    _Sign("fortran", 3, r"(?i)\.(?:lt|le|gt|ge|eq|ne|and|or|not)\.", "operators such as .gt."),
    _Sign("fortran", 2, r"^[cC*](?:[ \t]|$)", "comments with C in column 1"),
    _Sign("fortran", 3, r"^[^'\"#\n]*!(?!=)", "comments with !"),
    _Sign(
        "fortran",
        2,
        r"\b(?:SQRT|LOG10|LOG|EXP|ABS|SIN|COS|TAN|ATAN|TANH|COSH|SINH)[ \t]*\(",
        "functions in capitals",
    ),
    _Sign("fortran", 1, r"\*\*", "powers with **"),
    _Sign("c", 3, r";[ \t]*(?://.*|/\*.*)?\r?$", "lines that end with a semicolon"),
    _Sign("c", 5, r"^[ \t]*#[ \t]*(?:include|define)\b", "lines of the preprocessor"),
    _Sign(
        "c",
        4,
        r"^[ \t]*(?:static[ \t]+)?(?:const[ \t]+)?(?:double|float|int)[ \t]+\w+[ \t]*[=;,(]",
        "declarations of C",
    ),
    _Sign("c", 2, r"(?<![\w.])(?:pow|fabs)[ \t]*\(", "pow or fabs"),
    _Sign("c", 3, r"/\*", "comments with /*"),
    _Sign("c", 2, r"(?:^|;)[ \t]*//", "comments with //"),
    _Sign("c", 2, r"[{}][ \t]*\r?$", "braces"),
    _Sign("c", 3, r"\bM_PI\b|\bstd::|&&|\|\||->\w", "names and operators of C"),
    _Sign("python", 6, r"^[ \t]*def[ \t]+\w+[ \t]*\(", "def"),
    _Sign("python", 5, r"(?<![\w.])(?:math|np|numpy)\.\w", "names of Python's libraries"),
    _Sign("python", 5, r"^[ \t]*(?:import|from)[ \t]+\w", "import"),
    _Sign("python", 3, r"^[^'\"\n]*#(?![ \t]*(?:include|define|if|endif|else|ifdef|ifndef|pragma))", "comments with #"),
    _Sign("python", 4, r"\blambda\b[^:\n]*:", "lambda"),
    _Sign("python", 3, r"^[ \t]*return\b[^;\n]*$", "return without a semicolon"),
    _Sign("python", 2, r"\\[ \t]*$", "lines that \\ continues"),
    _Sign("python", 4, r"^[ \t]*(?:for|if|elif|else|while|class|try|with)\b[^;{\n]*:[ \t]*\r?$", "blocks of Python"),
    _Sign("python", 1, r"[^/:;\s][ \t]*//[ \t]*\w", "whole-number division with //"),
    _Sign("python", 1, r"\*\*", "powers with **"),
)


def guessed_language(text: str) -> tuple[Language, str]:
    """The language with the most signs, and the strongest of them; Python where nothing decides."""
    found = [sign for sign in _SIGNS if re.search(sign.pattern, text, re.MULTILINE)]
    scores: dict[Language, int] = {}
    for sign in found:
        scores[sign.language] = scores.get(sign.language, 0) + sign.weight
    best = max(scores.values(), default=0)
    leaders = [language for language, score in scores.items() if score == best]
    if len(leaders) != 1:
        return "python", _UNDECIDED
    own = [sign for sign in found if sign.language == leaders[0]]
    return leaders[0], max(own, key=lambda sign: sign.weight).words
