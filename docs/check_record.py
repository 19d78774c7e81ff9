#!/usr/bin/env python3
"""Check the chain and the form of session records, by what docs/record.md says and by nothing else.

    python3 check_record.py SESSION.json ...

Standard library only, and no line in common with the program that writes the records. One line a file on standard
output; exit status 0 when every file is whole, 1 when one is not, 2 when one cannot be read.

What it cannot see: events that were removed from the end of a record that nobody signed, and a record that was written
anew from some event on with all its hashes. And it does not do the arithmetic again.
"""

import hashlib
import json
import re
import sys

TIME = re.compile(r"\d{4}-(0[1-9]|1[0-2])-(0[1-9]|[12]\d|3[01])T([01]\d|2[0-3]):[0-5]\d:[0-5]\d\.\d{3}Z", re.ASCII)
HASH = re.compile(r"[0-9a-f]{64}")
NUMBER = re.compile(r"(f32:|mp[0-9]+:)?(nan|-?inf|-?[0-9]+(\.[0-9]+)?(e[+-]?[0-9]+)?)")
DEEPEST = 100

# kind: (members that its content must have, members that it may have)
CONTENT = {
    "session_opened": ({"title", "account", "host", "environment"}, set()),
    "session_resumed": ({"account", "host"}, {"environment"}),
    "problem_stated": ({"number", "problem", "derivatives"}, {"readings"}),
    "run_begun": (
        {"number", "problem", "plan", "revision", "iterates", "spent"},
        {"state", "ending", "parent", "readings"},
    ),
    "step_taken": ({"spent"}, {"iterate", "state", "ending"}),
    "iterate_put": ({"iterate", "spent"}, {"state", "ending"}),
    "run_taken_up": ({"run"}, set()),
    "run_abandoned": ({"reason"}, set()),
    "withdrawn": ({"of"}, set()),
    "note_made": ({"text"}, set()),
}


class Fault(Exception):
    """What is wrong with a record; the text says where."""


def check(data: bytes) -> list:
    """The events of a record. Raises Fault for the first thing that is wrong."""
    try:
        document = json.loads(
            data.decode("utf-8"), object_pairs_hook=unique, parse_float=refuse, parse_constant=refuse, parse_int=whole
        )
    except (ValueError, RecursionError) as error:
        raise Fault(f"not the JSON of a record: {error}") from error
    if not isinstance(document, dict) or set(document) != {"format", "version", "events"}:
        raise Fault("the members are not format, version and events")
    if document["format"] != "surefoot-session" or document["version"] != 1 or document["version"] is True:
        raise Fault(f"format {document['format']!r}, version {document['version']!r} is not known here")
    events = document["events"]
    if not isinstance(events, list) or not events:
        raise Fault("there are no events")
    prev = "0" * 64
    for n, event in enumerate(events):
        try:
            prev = check_event(event, n, prev)
        except Fault as fault:
            raise Fault(f"event {n}: {fault}") from fault
    return events


def check_event(event, n: int, prev: str) -> str:
    """The hash of an event that is right in its place."""
    if not isinstance(event, dict) or set(event) != {"n", "at", "by", "kind", "content", "prev", "hash"}:
        raise Fault("the members are not n, at, by, kind, content, prev and hash")
    if event["n"] is True or event["n"] != n:
        raise Fault(f"it says that it is event {event['n']!r}")
    for name in ("at", "by", "kind", "prev", "hash"):
        if not isinstance(event[name], str):
            raise Fault(f"{name} is no text")
    if not TIME.fullmatch(event["at"]):
        raise Fault(f"{event['at']!r} is no time in UTC to the millisecond")
    if not event["by"].strip():
        raise Fault("it does not say by whom it is")
    if event["prev"] != prev:
        raise Fault("it does not follow the event before it")
    if not HASH.fullmatch(event["hash"]) or event["hash"] != hash_of(event):
        raise Fault("its hash is not that of what it says")
    check_content(event["kind"], event["content"], n)
    return event["hash"]


def check_content(kind: str, content, n: int) -> None:
    if kind not in CONTENT:
        raise Fault(f"the kind {kind!r} is not known here")
    if (kind == "session_opened") != (n == 0):
        raise Fault("session_opened is event 0, and nothing else is")
    required, optional = CONTENT[kind]
    if not isinstance(content, dict) or not required <= set(content) <= required | optional:
        raise Fault(f"the content of {kind} does not have the members that it must have")
    if kind == "withdrawn" and not (isinstance(content["of"], int) and 0 < content["of"] < n):
        raise Fault("it withdraws no event before it")
    iterates = content.get("iterates", []) if kind == "run_begun" else [content.get("iterate")]
    if not isinstance(iterates, list):
        raise Fault("the iterates are no list")
    for place, iterate in enumerate(iterates):
        if iterate is not None or kind in ("run_begun", "iterate_put"):
            check_iterate(iterate, place if kind == "run_begun" else None)
    if kind == "step_taken" and not {"iterate", "ending"} & set(content):
        raise Fault("a step has neither an iterate nor an ending")


def check_iterate(iterate, place) -> None:
    if not isinstance(iterate, dict) or not {"k", "x"} <= set(iterate) or ("f" in iterate) == ("failure" in iterate):
        raise Fault("an iterate has k, x, and either f or failure")
    if place is not None and iterate["k"] != place:
        raise Fault(f"iterate {iterate['k']!r} stands where iterate {place} is due")
    for name in ("x", "f", "raw"):
        if name in iterate and not (isinstance(iterate[name], str) and NUMBER.fullmatch(iterate[name])):
            raise Fault(f"{name} of iterate {iterate['k']!r} is no number of a record")


def hash_of(event: dict) -> str:
    """SHA-256 of the canonical form (RFC 8785) of an event without its hash."""
    rest = {name: value for name, value in event.items() if name != "hash"}
    try:
        return hashlib.sha256(canonical(rest, 0).encode("utf-8")).hexdigest()
    except UnicodeEncodeError as error:
        raise Fault("a text has half a surrogate pair") from error


def canonical(value, depth: int) -> str:
    if depth > DEEPEST:
        raise Fault(f"values are nested more than {DEEPEST} deep")
    if value is None or value is True or value is False:
        return {None: "null", True: "true", False: "false"}[value]
    if isinstance(value, int):
        return str(value)
    if isinstance(value, str):
        return '"' + "".join(map(escaped, value)) + '"'
    if isinstance(value, list):
        return "[" + ",".join(canonical(item, depth + 1) for item in value) + "]"
    if not all(key.isascii() for key in value):
        raise Fault("a key is not ASCII")
    members = (f"{canonical(key, depth)}:{canonical(value[key], depth + 1)}" for key in sorted(value))
    return "{" + ",".join(members) + "}"


def escaped(character: str) -> str:
    short = {'"': '\\"', "\\": "\\\\", "\b": "\\b", "\t": "\\t", "\n": "\\n", "\f": "\\f", "\r": "\\r"}
    return short.get(character) or (f"\\u{ord(character):04x}" if character < " " else character)


def unique(pairs: list) -> dict:
    if len({key for key, _ in pairs}) != len(pairs):
        raise ValueError("a key stands twice in one object")
    return dict(pairs)


def refuse(text: str):
    raise ValueError(f"{text[:24]} is no whole number")


def whole(text: str) -> int:
    if len(text) > 17 or abs(int(text)) >= 2**53:
        raise ValueError("a whole number is beyond 2^53")
    return int(text)


def main(paths: list) -> int:
    if not paths:
        sys.stderr.write("usage: check_record.py SESSION.json ...\n")
        return 2
    status = 0
    for path in paths:
        try:
            with open(path, "rb") as file:
                events = check(file.read())
        except Fault as fault:
            sys.stdout.write(f"{path}: {fault}\n")
            status = max(status, 1)
        except OSError as error:
            sys.stderr.write(f"{path}: cannot be read: {error.strerror}\n")
            status = 2
        else:
            sys.stdout.write(f"{path}: whole: {len(events)} events, the last one {events[-1]['hash']}\n")
    return status


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
