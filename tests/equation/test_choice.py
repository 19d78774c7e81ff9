"""From the text of a problem file to the arithmetic."""

from __future__ import annotations

import subprocess
import sys

import pytest

from surefoot.equation.choice import arithmetic_of
from surefoot.errors import ProblemError


@pytest.mark.parametrize(
    "kind", ["binary64", "binary32", "multiprecision:15", "multiprecision:50", "multiprecision:1000"]
)
def test_the_arithmetic_has_the_kind_that_was_asked_for(kind: str) -> None:
    assert arithmetic_of(kind).kind == kind


@pytest.mark.parametrize(
    ("kind", "message"),
    [
        ("binary46", "unknown arithmetic 'binary46' (nearest: binary64)"),
        ("Binary32", "unknown arithmetic 'Binary32' (nearest: binary32)"),
        ("multiprecison:50", "unknown arithmetic 'multiprecison:50' (nearest: multiprecision:50)"),
        ("quad", "unknown arithmetic 'quad'; accepted: binary64, binary32, multiprecision:50 (decimal digits)"),
        ("", "unknown arithmetic ''; accepted: binary64, binary32, multiprecision:50 (decimal digits)"),
        ("multiprecision", "state the decimal digits: multiprecision:50"),
        ("multiprecision:many", "state the decimal digits: multiprecision:50"),
        ("multiprecision:9", "9 digits are not between 15 and 1000"),
        ("multiprecision:99999", "99999 digits are not between 15 and 1000"),
        ("multiprecision:9999999", "state the decimal digits: multiprecision:50"),
    ],
)
def test_other_kinds_are_refused_with_the_nearest_or_with_what_is_accepted(kind: str, message: str) -> None:
    with pytest.raises(ProblemError) as caught:
        arithmetic_of(kind)
    assert caught.value.message == message
    assert caught.value.place == "arithmetic.kind"


def test_binary64_needs_neither_numpy_nor_mpmath() -> None:
    program = (
        "import sys; from surefoot.equation.choice import arithmetic_of; arithmetic_of('binary64');"
        "sys.exit(bool({'numpy', 'mpmath', 'flint'} & sys.modules.keys()))"
    )
    assert subprocess.run([sys.executable, "-c", program], check=False).returncode == 0
