"""Changed listings and garbage: read or refused in words, and what is read is whole."""

from __future__ import annotations

from hypothesis import given, settings
from hypothesis import strategies as st

from support.listings import LISTINGS
from surefoot.equation.functions import CONSTANTS
from surefoot.equation.parser import parse_equation, parse_expression
from surefoot.equation.pasting import LANGUAGES, read_source
from surefoot.equation.tokens import is_literal, is_name
from surefoot.equation.wording import names_in
from surefoot.errors import EquationError

TEXTS = [text for listings in LISTINGS.values() for text in listings.values()]
PIECES = st.text(alphabet="()[]{}*/+-=;&!#'\"\\ \n\t0123.eEdDxyf,:%_<>é²\x00", max_size=12)
STRETCHES = st.builds(lambda text, at, size: text[at : at + size], st.sampled_from(TEXTS), *[st.integers(0, 300)] * 2)


def refused_or_whole(text: str, language: str | None) -> bool:
    """Whether the text is refused at a place in it, or read into parts that fit together."""
    lines = text.count("\n") + text.count("\r") + 1
    try:
        pasted = read_source(text, language)
    except EquationError as error:
        return 1 <= error.line <= lines and error.column >= 1
    known = {given.name for given in pasted.inputs} | {*pasted.names_needed, pasted.unknown} | CONSTANTS.keys()
    given_names = [given.name for given in pasted.inputs] + [line.name for line in pasted.definitions]
    assert len(set(given_names)) == len(given_names)
    assert all(map(is_name, given_names))
    assert all(is_literal(given.value) for given in pasted.inputs)
    for line in pasted.definitions:
        assert names_in(parse_expression(line.text)) <= known
        known.add(line.name)
    if pasted.equation:
        assert names_in(parse_equation(pasted.equation)) <= known
    assert all(1 <= reading.line <= lines and reading.why for reading in pasted.readings)
    return all(1 <= skipped.line <= lines and skipped.why for skipped in pasted.skipped)


@settings(max_examples=600, deadline=2000)
@given(st.sampled_from(TEXTS), st.data(), st.sampled_from([None, *LANGUAGES]))
def test_a_changed_listing_is_refused_or_whole(text: str, data: st.DataObject, language: str | None) -> None:
    for _ in range(data.draw(st.integers(1, 4))):
        start = data.draw(st.integers(0, len(text)))
        stop = start + data.draw(st.integers(0, 25))
        text = text[:start] + data.draw(PIECES | STRETCHES) + text[stop:]
    assert refused_or_whole(text, language)


@settings(max_examples=300, deadline=2000)
@given(st.text(st.characters(exclude_categories=["Cs"]), max_size=200) | PIECES, st.sampled_from([None, *LANGUAGES]))
def test_garbage_is_refused_or_whole(text: str, language: str | None) -> None:
    assert refused_or_whole(text, language)
