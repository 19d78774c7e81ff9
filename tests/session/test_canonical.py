"""Canonical JSON against the text of RFC 8785 and against another way of writing it."""

from __future__ import annotations

import hashlib
import json

import pytest
from hypothesis import given
from hypothesis import strategies as st

from surefoot.errors import RecordError
from surefoot.session.canonical import canonical, sha256

TEXT = st.text(st.characters(exclude_categories=["Cs"]))
VALUES = st.recursive(
    st.none() | st.booleans() | st.integers(-(2**53) + 1, 2**53 - 1) | TEXT,
    lambda inner: st.lists(inner) | st.dictionaries(st.text(st.characters(max_codepoint=127)), inner),
    max_leaves=20,
)


def test_strings_of_rfc_8785_section_3_2_2() -> None:
    # The example object of RFC 8785, section 3.2.2, without its numbers with fractions.
    text = r'{"string": "\u20ac$\u000F\u000aA\u0027\u0042\u0022\u005c\\\"\/", "literals": [null, true, false]}'
    expected = '{"literals":[null,true,false],"string":"€$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}'
    assert canonical(json.loads(text)) == expected.encode()


def by_hand(value: object) -> str:
    """The scheme of RFC 8785 spelt out, sharing nothing with the json module."""
    if value is None or isinstance(value, bool):
        return {None: "null", True: "true", False: "false"}[value]
    if isinstance(value, int):
        return str(value)
    if isinstance(value, str):
        short = {"\b": "\\b", "\t": "\\t", "\n": "\\n", "\f": "\\f", "\r": "\\r", '"': '\\"', "\\": "\\\\"}
        escape = (short.get(c) or (f"\\u{ord(c):04x}" if ord(c) < 32 else c) for c in value)
        return '"' + "".join(escape) + '"'
    if isinstance(value, dict):
        return "{" + ",".join(f"{by_hand(k)}:{by_hand(value[k])}" for k in sorted(value)) + "}"
    assert isinstance(value, list)
    return "[" + ",".join(map(by_hand, value)) + "]"


@given(VALUES)
def test_agrees_with_the_scheme_spelt_out(value: object) -> None:
    assert canonical(value) == by_hand(value).encode()


@given(VALUES)
def test_reads_back_and_holds_no_line_end(value: object) -> None:
    written = canonical(value)
    assert json.loads(written) == value
    assert b"\n" not in written


@pytest.mark.parametrize(
    "value", [1.0, float("nan"), 2**53, -(2**53), {"ä": 1}, {1: 2}, "\ud800", [[{"a": b"x"}]], object()]
)
def test_what_a_record_cannot_hold_is_refused(value: object) -> None:
    with pytest.raises(RecordError):
        canonical(value)


def test_deep_nesting_is_refused_without_exhausting_the_stack() -> None:
    value: object = 1
    for _ in range(50_000):
        value = [value]
    with pytest.raises(RecordError, match="nested"):
        canonical(value)


def test_hash_of_the_empty_text() -> None:
    # FIPS 180-4 example value of SHA-256 for the empty message, from memory.
    assert sha256(b"") == "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855"
    assert sha256(b"abc") == hashlib.sha256(b"abc").hexdigest()
