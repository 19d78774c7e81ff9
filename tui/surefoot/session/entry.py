"""One event as it stands in the file: its members, its canonical line, its hash and the hash of the event before.

An entry knows nothing of what its content means; `surefoot.session.events` does.
"""

from __future__ import annotations

import json
import re
from dataclasses import dataclass
from typing import Any, NoReturn

from surefoot.errors import RecordError
from surefoot.session.canonical import Json, canonical, sha256

NO_HASH = "0" * 64
"""`prev` of event 0."""

_MEMBERS = frozenset({"n", "at", "by", "kind", "content", "prev", "hash"})
_TIME = re.compile(r"\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z", re.ASCII)
_KIND = re.compile(r"[a-z][a-z_]*")
_HASH = re.compile(r"[0-9a-f]{64}")


@dataclass(frozen=True, slots=True)
class Entry:
    """The members of an event as they are in the file."""

    n: int
    at: str
    by: str
    kind: str
    content: dict[str, Json]
    prev: str
    hash: str


def seal(n: int, at: str, by: str, kind: str, content: dict[str, Json], prev: str) -> tuple[Entry, bytes]:
    """An entry with its hash, and its line in the file (canonical, without a line end).

    Raises:
        RecordError: the content holds what a record cannot hold.
    """
    body = {"n": n, "at": at, "by": by, "kind": kind, "content": content, "prev": prev}
    _check_forms({**body, "hash": NO_HASH}, n, _FORMS)
    unsigned = canonical(body)
    digest = sha256(unsigned)
    # Behind `kind` stand only n and prev, so this is the member itself and never text inside the content.
    place = unsigned.rindex(b',"kind":"')
    line = b'%s,"hash":"%s"%s' % (unsigned[:place], digest.encode(), unsigned[place:])
    return Entry(n, at, by, kind, content, prev, digest), line


def read_entry(line: bytes, n: int, prev: str, *, strict: bool = False) -> Entry:
    """The entry that a line holds, after its place in the chain and its hash were checked.

    A line in canonical form is hashed as it stands, with the hash member cut out; any other is written canonically
    first. With `strict` every line is, so that none can pass for canonical that is not.

    Raises:
        RecordError: the line is not event `n` that follows the event with hash `prev`, as it was written.
    """
    seen = None if strict else quick_check(line, n, prev)
    if seen is not None:
        members = _parse(line, n, unique=False)
        _check_forms(members, n, _AT)
        return Entry(n, members["at"], members["by"], seen[0], members["content"], prev, seen[1])
    members = _parse(line, n, unique=True)
    _check_forms(members, n, _FORMS)
    if members["n"] != n:
        raise RecordError(f"this place holds event {members['n']}: events were removed, added or moved", event=n)
    if members["prev"] != prev:
        raise RecordError("does not follow the event before it: the chain of hashes is broken", event=n)
    if _digest_of_members(members, n) != members["hash"]:
        raise RecordError("was changed after it was written: its hash does not match", event=n)
    return Entry(**members)


def read_unchecked(line: bytes, n: int) -> Entry:
    """The entry that a line holds, whatever its place and its hash, for looking at a record that is not whole.

    Raises:
        RecordError: the line does not have the form of an event.
    """
    members = _parse(line, n, unique=True)
    _check_forms(members, n, _FORMS)
    return Entry(**members)


def quick_check(line: bytes, n: int, prev: str) -> tuple[str, str] | None:
    """Kind and hash of a line whose hash is right as the line stands, read without parsing it; otherwise None.

    What it calls the kind is only that when the line is an event.
    """
    end = b'","n":%d,"prev":"%s"}' % (n, prev.encode())
    if not line.endswith(end) or b"\\u" in line:  # an escape may hide half a surrogate pair: to be looked at closely
        return None
    behind = line.rfind(b',"kind":"')
    hashed = line[max(0, behind - _HASH_LENGTH) : max(0, behind)]
    if not (hashed.startswith(b',"hash":"') and hashed.endswith(b'"') and len(hashed) == _HASH_LENGTH):
        return None
    stored = hashed[9:-1].decode("latin-1")
    if sha256(line[: behind - _HASH_LENGTH] + line[behind:]) != stored:
        return None
    return line[behind + 9 : -len(end)].decode("latin-1"), stored


_HASH_LENGTH = len(',"hash":""') + 64


def _digest_of_members(members: dict[str, Json], n: int) -> str:
    try:
        return sha256(canonical({key: value for key, value in members.items() if key != "hash"}))
    except RecordError as error:
        raise RecordError(str(error), event=n) from error


def _refuse_number(text: str) -> NoReturn:
    raise ValueError(f"the number {text[:24]} is no whole number")


def _refuse_repeated_keys(pairs: list[tuple[str, Json]]) -> dict[str, Json]:
    members = dict(pairs)
    if len(members) != len(pairs):
        raise ValueError("a key stands twice in one object")
    return members


_DECODER = json.JSONDecoder(parse_float=_refuse_number, parse_constant=_refuse_number)
_UNIQUE_DECODER = json.JSONDecoder(
    parse_float=_refuse_number, parse_constant=_refuse_number, object_pairs_hook=_refuse_repeated_keys
)


def parse_json(data: bytes, *, unique: bool) -> Json:
    """JSON whose numbers are whole, with `unique` also one whose keys are not repeated (slower).

    Raises:
        ValueError: anything else, nesting without end included.
    """
    text = data.decode("utf-8").lstrip()
    try:
        value, end = (_UNIQUE_DECODER if unique else _DECODER).raw_decode(text)
    except RecursionError as error:
        raise ValueError("the values are nested too deep") from error
    if end < len(text) and text[end:].strip():
        raise ValueError(f"something stands behind the value: {text[end : end + 24]!r}")
    return value


def _parse(line: bytes, n: int, *, unique: bool) -> dict[str, Any]:
    try:
        members = parse_json(line, unique=unique)
    except ValueError as error:  # of UTF-8, of JSON, and of whole numbers with thousands of digits
        raise RecordError(f"is not an event: {_first_line(error)}", event=n) from error
    if not isinstance(members, dict) or members.keys() != _MEMBERS:
        raise RecordError("does not have the members of an event", event=n)
    return members


def _first_line(error: ValueError) -> str:
    return str(error).splitlines()[0][:120]


_AT = (("at", _TIME),)
_FORMS = (*_AT, ("kind", _KIND), ("prev", _HASH), ("hash", _HASH))


def _check_forms(members: dict[str, Any], n: int, forms: tuple[tuple[str, re.Pattern[str]], ...]) -> None:
    """Raise RecordError unless every member has its type, and those of `forms` the form that the record gives them."""
    if type(members["n"]) is not int or not isinstance(members["by"], str):
        raise RecordError("has a member of the wrong type", event=n)
    if not isinstance(members["content"], dict):
        raise RecordError("has content that is not an object", event=n)
    if not members["by"].strip():
        raise RecordError("does not say by whom it is", event=n)
    for name, form in forms:
        text = members[name]
        if not isinstance(text, str) or not form.fullmatch(text):
            raise RecordError(f"has a member {name!r} of the wrong form", event=n)
