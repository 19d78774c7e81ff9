"""What the bits depend on, as it is recorded."""

from __future__ import annotations

import math
import subprocess
import sys
from dataclasses import replace

import numpy as np
import pytest
import sympy

import surefoot
from surefoot.errors import RecordError
from surefoot.session import environment as environment_module
from surefoot.session.environment import (
    differences,
    environment,
    environment_from_content,
    environment_to_content,
    libm_digest,
)


def test_the_versions_are_those_of_the_libraries() -> None:
    here = environment()
    assert here.surefoot == surefoot.__version__
    assert here.numpy == np.__version__
    assert here.sympy == sympy.__version__
    assert here.python.endswith(".".join(map(str, sys.version_info[:3])))
    assert here.libm != ""
    assert all(environment_to_content(here).values())


def test_content_reads_back_and_nothing_else_does() -> None:
    here = environment()
    content = environment_to_content(here)
    assert environment_from_content(content) == here
    for wrong in (None, [], {}, {**content, "more": "x"}, {**content, "libm": 2}):
        with pytest.raises(RecordError):
            environment_from_content(wrong)


def test_differences_are_named() -> None:
    here = environment()
    assert differences(here, here) == ()
    other = replace(here, libm="glibc 2.17", numpy="1.26.4")
    assert differences(other, here) == (("numpy", "1.26.4", here.numpy), ("libm", "glibc 2.17", here.libm))


def test_one_bit_of_one_function_changes_the_digest(monkeypatch: pytest.MonkeyPatch) -> None:
    assert libm_digest() == libm_digest() == environment().libm_digest
    functions = [*environment_module._FUNCTIONS]
    functions[11] = lambda x: math.nextafter(math.exp(x), 9.0) if x == 0.6180339887498949 else math.exp(x)
    assert math.exp in environment_module._FUNCTIONS[11:12]
    before = libm_digest()
    monkeypatch.setattr(environment_module, "_FUNCTIONS", tuple(functions))
    assert libm_digest() != before


def test_a_missing_library_is_absent_and_nothing_is_imported() -> None:
    assert environment_module._version("surefoot-no-such-library") == "absent"
    code = (
        "import sys; from surefoot.session.environment import environment; environment()\n"
        "print([name for name in ('sympy', 'numpy', 'mpmath', 'flint') if name in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_what_the_system_does_not_tell_is_empty(monkeypatch: pytest.MonkeyPatch) -> None:
    def nobody() -> str:
        raise KeyError("uid not found")

    monkeypatch.setattr("getpass.getuser", nobody)
    assert environment_module.account() == ""
    monkeypatch.setattr("os.confstr_names", {})
    assert environment_module._libm().startswith("of ")
