"""One event as it stands in the file: its members, its canonical line, its hash and the hash of the event before.

An entry knows nothing of what its content means; `surefoot.session.events` does.
"""

from __future__ import annotations

import hashlib
import json
import re
from dataclasses import dataclass
from typing import Any, NoReturn

from surefoot.errors import RecordError
from surefoot.session.canonical import Json, canonical, sha256

NO_HASH = "0" * 64
"""`prev` of event 0."""

_MEMBERS = frozenset({"n", "at", "by", "kind", "content", "prev", "hash"})
_TIME = re.compile(r"\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z")
_KIND = re.compile(r"[a-z][a-z_]*")
_HASH = re.compile(r"[0-9a-f]{64}")
_HASH_MEMBER = b',"hash":"'


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
    _check_members({**body, "hash": NO_HASH}, n)
    unsigned = canonical(body)
    digest = sha256(unsigned)
    # Behind `kind` stand only n and prev, so this is the member itself and never text inside the content.
    place = unsigned.rindex(b',"kind":"')
    line = unsigned[:place] + _HASH_MEMBER + digest.encode() + b'"' + unsigned[place:]
    return Entry(n, at, by, kind, content, prev, digest), line


def read_entry(line: bytes, n: int, prev: str, *, strict: bool = False) -> Entry:
    """The entry that a line holds, after its place in the chain and its hash were checked.

    A line in canonical form is hashed as it stands, with the hash member cut out; any other is written canonically
    first. With `strict` every line is, so that none can pass for canonical that is not.

    Raises:
        RecordError: the line is not event `n` that follows the event with hash `prev`, as it was written.
    """
    members = _parse(line, n)
    _check_members(members, n)
    if members["n"] != n:
        raise RecordError(f"this place holds event {members['n']}: events were removed, added or moved", event=n)
    if members["prev"] != prev:
        raise RecordError("does not follow the event before it: the chain of hashes is broken", event=n)
    stored = members["hash"]
    if strict or _digest_of_line(line, stored) != stored:
        members = _parse(line, n, unique=True)
        if _digest_of_members(members, n) != stored:
            raise RecordError("was changed after it was written: its hash does not match", event=n)
    return Entry(n, members["at"], members["by"], members["kind"], members["content"], prev, stored)


def quick_check(line: bytes, n: int, prev: str) -> tuple[str, str] | None:
    """Kind and hash of a canonical line whose chain holds, read without parsing it; None when it must be parsed."""
    match = _END.search(line, max(0, len(line) - _END_LENGTH))
    if match is None or match.group(3) != str(n).encode() or match.group(4).decode() != prev:
        return None
    stored = match.group(1).decode()
    if _digest_of_line(line, stored) != stored:
        return None
    return match.group(2).decode(), stored


_END = re.compile(
    rb',"hash":"([0-9a-f]{64})","kind":"([a-z][a-z_]{0,40})","n":(0|[1-9][0-9]{0,15}),"prev":"([0-9a-f]{64})"\}\Z'
)
_END_LENGTH = 300  # more than the members of `_END` can take


def _digest_of_line(line: bytes, stored: str) -> str:
    """SHA-256 of the line without its hash member."""
    head, found, rest = line.rpartition(_HASH_MEMBER)
    if not found or rest[:65] != stored.encode() + b'"':
        return ""
    digest = hashlib.sha256(head)
    digest.update(rest[65:])
    return digest.hexdigest()


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
    try:
        return (_UNIQUE_DECODER if unique else _DECODER).decode(data.decode("utf-8"))
    except RecursionError as error:
        raise ValueError("the values are nested too deep") from error


def _parse(line: bytes, n: int, *, unique: bool = False) -> dict[str, Any]:
    try:
        members = parse_json(line, unique=unique)
    except ValueError as error:  # of UTF-8, of JSON, and of whole numbers with thousands of digits
        raise RecordError(f"is not an event: {_first_line(error)}", event=n) from error
    if not isinstance(members, dict) or members.keys() != _MEMBERS:
        raise RecordError("does not have the members of an event", event=n)
    return members


def _first_line(error: ValueError) -> str:
    return str(error).splitlines()[0][:120]


def _check_members(members: dict[str, Any], n: int) -> None:
    """Raise RecordError unless every member has the form that the record gives it."""
    texts = (members["at"], members["by"], members["kind"], members["prev"], members["hash"])
    if type(members["n"]) is not int or not all(isinstance(text, str) for text in texts):
        raise RecordError("has a member of the wrong type", event=n)
    if not isinstance(members["content"], dict):
        raise RecordError("has content that is not an object", event=n)
    if not members["by"].strip():
        raise RecordError("does not say by whom it is", event=n)
    forms = ((_TIME, "at"), (_KIND, "kind"), (_HASH, "prev"), (_HASH, "hash"))
    for form, name in forms:
        if not form.fullmatch(members[name]):
            raise RecordError(f"has a member {name!r} of the wrong form", event=n)
