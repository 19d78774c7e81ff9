"""Canonical JSON and its SHA-256.

RFC 8785 for the values that a record holds: objects with ASCII keys, arrays, strings, true, false, null and integers
below 2^53. For these, the scheme is: sorted keys, no spaces, UTF-8, and no escapes but those that JSON demands.
"""

from __future__ import annotations

import hashlib
import json
from typing import Any, TypeAlias

from surefoot.errors import RecordError

Json: TypeAlias = Any  # what the json module reads and writes

INTEGER_LIMIT = 2**53  # beyond it, readers that keep numbers as binary64 would change them

_ENCODER = json.JSONEncoder(ensure_ascii=False, sort_keys=True, separators=(",", ":"), allow_nan=False)
_MAX_NESTING = 100


def canonical(value: Json) -> bytes:
    """The canonical form of a value.

    Raises:
        RecordError: the value holds something that a record cannot hold.
    """
    _check(value, 0)
    try:
        return _ENCODER.encode(value).encode("utf-8")
    except UnicodeEncodeError as error:
        raise RecordError("text with half a surrogate pair cannot be recorded") from error


def sha256(data: bytes) -> str:
    """SHA-256 as 64 hexadecimal digits, in lower case."""
    return hashlib.sha256(data).hexdigest()


def _check(value: Json, depth: int) -> None:
    if value is None or isinstance(value, (str, bool)):
        return
    if isinstance(value, int):
        if not -INTEGER_LIMIT < value < INTEGER_LIMIT:
            raise RecordError(f"a whole number beyond 2^53 cannot be recorded: {str(value)[:24]}")
        return
    if depth >= _MAX_NESTING:
        raise RecordError(f"values nested more than {_MAX_NESTING} deep cannot be recorded")
    if isinstance(value, dict):
        for key, member in value.items():
            if not (isinstance(key, str) and key.isascii()):
                raise RecordError(f"the key {key!r} is not ASCII text")
            _check(member, depth + 1)
    elif isinstance(value, (list, tuple)):
        for item in value:
            _check(item, depth + 1)
    else:
        raise RecordError(f"a {type(value).__name__} cannot be recorded")
