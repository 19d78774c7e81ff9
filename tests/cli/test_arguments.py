"""The words of the command line: what is taken, and what each mistake is told."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from surefoot.cli.arguments import ABSENT_COMMANDS, COMMANDS, OPEN, RECOMPUTE, RUN, TABLE, nearest, parse
from surefoot.cli.exits import RequestError


def refusal(*words: str) -> str:
    with pytest.raises(RequestError) as caught:
        parse(words)
    return str(caught.value)


def test_no_words_open_the_program() -> None:
    request = parse([])
    assert (request.command, request.operands, dict(request.options)) == (OPEN, (), {})


def test_options_take_their_value_with_a_space_or_an_equals_sign() -> None:
    request = parse(["--look", "dark", "--sessions=a b", "--ascii", "tailrace.toml"])
    assert request.command is OPEN
    assert request.operands == ("tailrace.toml",)
    assert (request.value("--look"), request.value("--sessions"), request.flag("--ascii")) == ("dark", "a b", True)
    assert request.value("--by") is None


def test_a_command_has_options_of_its_own() -> None:
    request = parse(["run", "--json", "p.toml", "--save", "-"])
    assert request.command is RUN
    assert request.operands == ("p.toml",)
    assert (request.flag("--json"), request.value("--save"), request.flag("--no-save")) == (True, "-", False)


def test_two_dashes_end_the_options() -> None:
    assert parse(["recompute", "a.json", "--", "--json", "-h"]).operands == ("a.json", "--json", "-h")


def test_a_path_that_looks_like_a_file_is_opened_even_when_there_is_none() -> None:
    assert parse(["./run"]).operands == ("./run",)
    assert parse(["gone.JSON"]).operands == ("gone.JSON",)


def test_a_file_without_an_ending_is_opened_when_it_is_there(tmp_path, monkeypatch) -> None:
    monkeypatch.chdir(tmp_path)
    (tmp_path / "tailrace").write_text("")
    assert parse(["tailrace"]).operands == ("tailrace",)


@pytest.mark.parametrize("words", [["--help"], ["run", "-h"], ["table", "--run", "2", "--help"]])
def test_help_is_asked_before_anything_is_checked(words: list[str]) -> None:
    assert parse(words).asks == "help"


def test_help_after_two_dashes_is_a_file() -> None:
    assert parse(["table", "--", "--help"]).operands == ("--help",)


@pytest.mark.parametrize(
    ("words", "line"),
    [
        (["recompte", "a"], "recompte: is neither a command nor a file; did you mean recompute?"),
        (["zzzzzz"], "zzzzzz: is neither a command nor a file; the commands are run, recompute, table"),
        (["run"], "surefoot run: needs a file; write surefoot run PROBLEM.toml"),
        (["run", "a.toml", "b.toml"], "b.toml: is one word too many; write surefoot run PROBLEM.toml"),
        (
            ["recompute", ""],
            "surefoot recompute: an empty word names no file; write surefoot recompute SESSION.json...",
        ),
        (["run", "--jason", "a"], "--jason: is no option here; did you mean --json?"),
        (["table", "a", "--xyzzy"], "--xyzzy: is no option here; there are --run, --json"),
        (["run", "a", "--json=yes"], "--json: takes no value; leave out what follows it"),
        (["run", "a", "--by"], "--by: needs a value; write --by NAME"),
        (["run", "a", "--by", "--json"], "--by: needs a value; write --by NAME"),
        (["run", "a", "--by="], "--by: has an empty value; write --by NAME"),
        (["run", "a", "--json", "--json"], "--json: is given twice; give it once"),
        (["--look", "blue"], "--look: cannot be blue; choose plain or dark or light"),
        (["--by", "M", "run", "a"], "run: the command comes first; write surefoot run ..."),
        (["run", "a", "--cases", "c.csv"], "--cases: this version does not have this option; leave it out"),
        (["recompute", "a", "--require", "made"], "--require: this version does not have this option; leave it out"),
        (["-x"], "-x: is no option here; there are --sessions, --by, --ascii, --look"),
    ],
)
def test_each_mistake_is_told_in_one_line(words: list[str], line: str) -> None:
    assert refusal(*words) == line


@pytest.mark.parametrize("name", ABSENT_COMMANDS)
def test_a_command_of_another_version_is_named_as_such(name: str) -> None:
    assert refusal(name, "x") == f"{name}: this version does not have this command; it has run, recompute, table"


def test_a_very_long_word_is_cut() -> None:
    assert len(refusal("x" * 100_000)) < 400
    assert len(refusal("--" + "x" * 100_000)) < 400


def test_nearest_prefers_the_closest() -> None:
    assert nearest("tabel", [command.name for command in (RUN, RECOMPUTE, TABLE)]) == "table"
    assert nearest("q", list(COMMANDS)) == ""


words = st.lists(
    st.one_of(
        st.sampled_from([*COMMANDS, *(option.name for command in COMMANDS.values() for option in command.options)]),
        st.sampled_from(["--", "-", "-h", "a.toml", "b.json", "--by=x", "--look=dark", "--run", "2"]),
        st.text(max_size=12),
    ),
    max_size=6,
)


@given(words)
def test_any_words_are_understood_or_refused(given_words: list[str]) -> None:
    try:
        request = parse(given_words)
    except RequestError:
        return
    command = request.command
    assert set(request.options) <= {option.name for option in command.options}
    if not request.asks:
        assert command.least <= len(request.operands)
        assert command.most is None or len(request.operands) <= command.most
