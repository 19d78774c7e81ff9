"""One event of the record: its line, its hash, and what is refused."""

from __future__ import annotations

import contextlib
import hashlib
import json

import pytest
from hypothesis import given
from hypothesis import strategies as st

from surefoot.errors import RecordError
from surefoot.session.canonical import canonical
from surefoot.session.entry import NO_HASH, parse_json, quick_check, read_entry, seal

AT = "2026-12-01T14:02:11.318Z"
TEXT = st.text(st.characters(exclude_categories=["Cs"]))
CONTENT = st.dictionaries(
    st.sampled_from(["hash", "kind", "n", "prev", "text", "x"]),
    TEXT | st.integers(0, 99) | st.lists(TEXT) | st.dictionaries(st.sampled_from(["hash", "kind"]), TEXT),
)


def line_of(content: dict[str, object], n: int = 3, prev: str = NO_HASH) -> bytes:
    return seal(n, AT, "M. R.", "note_made", content, prev)[1]


@given(CONTENT)
def test_a_line_is_canonical_and_its_hash_is_that_of_the_rest(content: dict[str, object]) -> None:
    entry, line = seal(3, AT, "M. R.", "note_made", content, NO_HASH)
    members = json.loads(line)
    assert line == canonical(members)
    stored = members.pop("hash")
    assert stored == entry.hash == hashlib.sha256(canonical(members)).hexdigest()
    assert read_entry(line, 3, NO_HASH) == read_entry(line, 3, NO_HASH, strict=True) == entry
    escapes = b"\\u" in line  # of control characters: these lines are read the slow way
    assert quick_check(line, 3, NO_HASH) == (None if escapes else ("note_made", entry.hash))


@given(CONTENT)
def test_other_spaces_and_order_of_members_do_not_matter(content: dict[str, object]) -> None:
    entry, line = seal(3, AT, "M. R.", "note_made", content, NO_HASH)
    members = json.loads(line)
    spread = json.dumps(dict(reversed(members.items())), indent=2, ensure_ascii=True).encode()
    assert read_entry(spread, 3, NO_HASH) == entry
    assert quick_check(spread, 3, NO_HASH) is None


@given(CONTENT, st.data())
def test_a_changed_byte_never_gives_another_event(content: dict[str, object], data: st.DataObject) -> None:
    entry, line = seal(3, AT, "M. R.", "note_made", content, NO_HASH)
    at = data.draw(st.integers(0, len(line) - 1))
    byte = data.draw(st.integers(0, 255).filter(lambda value: value != line[at]))
    changed = line[:at] + bytes([byte]) + line[at + 1 :]
    assert quick_check(changed, 3, NO_HASH) is None
    with contextlib.suppress(RecordError):
        assert read_entry(changed, 3, NO_HASH) == entry  # `\\u001F` for `\\u001f` is the same text


def test_a_repeated_key_is_refused_where_the_last_one_would_hide_the_first() -> None:
    line = line_of({"text": "as measured"})
    doubled = line.replace(b'{"text":', b'{"text":"invented","text":')
    with pytest.raises(RecordError, match="a key stands twice"):
        read_entry(doubled, 3, NO_HASH)


def test_a_repeated_key_that_was_hashed_with_the_rest_is_refused_by_strict_reading() -> None:
    line = line_of({"text": "as measured"})
    start, end = line.index(b',"hash"'), line.index(b',"kind"')
    body = (line[:start] + line[end:]).replace(b'{"text":', b'{"text":"invented","text":')
    digest = hashlib.sha256(body).hexdigest().encode()
    place = body.rindex(b',"kind"')
    forged = body[:place] + b',"hash":"' + digest + b'"' + body[place:]
    with pytest.raises(RecordError, match="a key stands twice"):
        read_entry(forged, 3, NO_HASH, strict=True)


def test_half_a_surrogate_pair_that_was_hashed_as_it_stands_is_refused() -> None:
    line = line_of({"text": "@"})
    start, end = line.index(b',"hash"'), line.index(b',"kind"')
    body = (line[:start] + line[end:]).replace(b'"@"', b'"\\ud800"')
    place = body.rindex(b',"kind"')
    forged = body[:place] + b',"hash":"' + hashlib.sha256(body).hexdigest().encode() + b'"' + body[place:]
    with pytest.raises(RecordError, match="half a surrogate pair") as caught:
        read_entry(forged, 3, NO_HASH)
    assert caught.value.event == 3


@pytest.mark.parametrize(
    ("n", "prev", "says"),
    [(4, NO_HASH, "this place holds event 3"), (3, "1" * 64, "the chain of hashes is broken")],
)
def test_an_event_in_another_place_is_refused(n: int, prev: str, says: str) -> None:
    with pytest.raises(RecordError, match=says) as caught:
        read_entry(line_of({}), n, prev)
    assert caught.value.event == n


@pytest.mark.parametrize(
    "line",
    [
        b"",
        b"\xff",
        b"[]",
        b"{}",
        b"[" * 100_000,
        b'{"a":' * 100_000,
        b'{"n": 1e400}',
        b'{"n": NaN}',
        b'{"n": ' + b"9" * 5000 + b"}",
        line_of({}).replace(b'"n":3', b'"n":3.0'),
        line_of({}).replace(b'"n":3', b'"n":true'),
        line_of({}).replace(b'"content":{}', b'"content":[]'),
        line_of({}).replace(b'"note_made"', b'"Note"'),
        line_of({}).replace(b"14:02", b"1402"),
        line_of({}).replace(b"M. R.", b" "),
        line_of({}).replace(b'"by"', b'"bye"'),
    ],
    ids=lambda line: line[:24].decode("latin-1"),
)
def test_what_is_no_event_is_refused_with_its_number(line: bytes) -> None:
    with pytest.raises(RecordError) as caught:
        read_entry(line, 3, NO_HASH)
    assert caught.value.event == 3


@pytest.mark.parametrize("text", [b"1.5", b"Infinity", b"-Infinity", b"[1, 2e3]", b"[" * 5000 + b"]" * 5000])
def test_numbers_that_are_not_whole_and_nesting_without_end_are_no_json_of_ours(text: bytes) -> None:
    with pytest.raises(ValueError, match=r"."):
        parse_json(text, unique=False)


@pytest.mark.parametrize(
    ("at", "by", "kind"),
    [("14:02", "M. R.", "note_made"), (AT, "  ", "note_made"), (AT, "M. R.", "Note made")],
)
def test_what_could_not_be_read_back_is_not_written(at: str, by: str, kind: str) -> None:
    with pytest.raises(RecordError):
        seal(0, at, by, kind, {}, NO_HASH)
