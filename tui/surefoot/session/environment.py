"""What the bits of a run depend on beside the problem and the plan: the versions of what computes.

The version of the C library does not tell which bits its functions give: the same version chooses other code on another
processor. So the values themselves are summed up too, as a digest over functions at fixed arguments.
"""

from __future__ import annotations

import getpass
import math
import os
import platform
import socket
from collections.abc import Callable, Iterator, Mapping
from dataclasses import asdict, dataclass, fields
from functools import cache

import surefoot
from surefoot.errors import RecordError
from surefoot.session.canonical import sha256


@dataclass(frozen=True, slots=True)
class Environment:
    """Versions as text; `absent` for a library that is not installed.

    Attributes:
        python: implementation and version.
        platform: operating system and processor type.
        libm: the C library that computes exp, sin and the like.
        libm_digest: first 16 digits of a SHA-256 over values that it gave.
    """

    surefoot: str
    python: str
    numpy: str
    sympy: str
    mpmath: str
    flint: str
    platform: str
    libm: str
    libm_digest: str


@cache
def environment() -> Environment:
    """The environment of this process. Nothing is imported for it."""
    return Environment(
        surefoot=surefoot.__version__,
        python=f"{platform.python_implementation()} {platform.python_version()}",
        numpy=_version("numpy"),
        sympy=_version("sympy"),
        mpmath=_version("mpmath"),
        flint=_version("python-flint"),
        platform=f"{platform.system()} {platform.machine()}",
        libm=_libm(),
        libm_digest=libm_digest(),
    )


def environment_to_content(environment: Environment) -> dict[str, str]:
    return asdict(environment)


def environment_from_content(content: object) -> Environment:
    """The inverse of `environment_to_content`. Raises RecordError for anything else."""
    names = {field.name for field in fields(Environment)}
    if not isinstance(content, Mapping) or content.keys() != names:
        raise RecordError("environment does not have the members of an environment")
    if not all(isinstance(value, str) for value in content.values()):
        raise RecordError("environment has a member that is not a text")
    return Environment(**content)


def differences(old: Environment, new: Environment) -> tuple[tuple[str, str, str], ...]:
    """(name, old, new) of what differs."""
    pairs = ((field.name, getattr(old, field.name), getattr(new, field.name)) for field in fields(Environment))
    return tuple((name, before, after) for name, before, after in pairs if before != after)


def account() -> str:
    """The account that this process runs under; empty when the system does not say."""
    try:
        return getpass.getuser()
    except (KeyError, OSError):
        return ""


def host() -> str:
    return socket.gethostname()


def libm_digest() -> str:
    """First 16 digits of a SHA-256 over 29 functions at 64 arguments each, as this process computes them."""
    values = "\n".join(value.hex() for function in _FUNCTIONS for value in map(function, _arguments()))
    return sha256(values.encode())[:16]


def _arguments() -> Iterator[float]:
    """64 fixed numbers in (0, 1), spread evenly; products of binary64, so the same everywhere."""
    return ((k * 0.6180339887498949) % 1.0 for k in range(1, 65))


# Each takes a number in (0, 1) to arguments in the range where work is usually done.
_FUNCTIONS: tuple[Callable[[float], float], ...] = (
    math.sin,
    math.cos,
    math.tan,
    math.asin,
    math.acos,
    math.atan,
    math.sinh,
    math.cosh,
    math.tanh,
    math.asinh,
    math.atanh,
    math.exp,
    math.expm1,
    math.log,
    math.log1p,
    math.log10,
    math.log2,
    math.cbrt,
    math.erf,
    math.erfc,
    math.gamma,
    math.lgamma,
    lambda x: math.acosh(1.0 + 9.0 * x),
    lambda x: math.sin(100.0 * x),
    lambda x: math.exp(50.0 * x),
    lambda x: math.log(1e6 * x),
    lambda x: math.pow(20.0 * x, 0.37),
    lambda x: math.pow(x, 7.0 / 3.0),
    lambda x: math.atan2(x, 0.7),
)


def _version(distribution: str) -> str:
    from importlib import metadata  # a fifth of the time of starting, and only this needs it

    try:
        return metadata.version(distribution)
    except metadata.PackageNotFoundError:
        return "absent"


def _libm() -> str:
    if "CS_GNU_LIBC_VERSION" in getattr(os, "confstr_names", {}):
        return os.confstr("CS_GNU_LIBC_VERSION") or "unknown"
    return f"of {platform.system()} {platform.release()}"
