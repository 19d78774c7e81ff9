"""`surefoot recompute`: all reproduced and whole, or what is not and where."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from support.command import Home, complaint
from support.problem_files import COLEBROOK, DIVERGING_SECANT, SECANT, write
from support.tree import ROOT
from surefoot.cli.exits import Exit
from surefoot.cli.main import main
from surefoot.session.canonical import canonical, sha256

SCHEMA = json.loads((ROOT / "docs" / "output.schema.json").read_text(encoding="utf-8"))


@pytest.fixture
def sessions(home: Home, capsys) -> tuple[str, str]:
    """Two sessions: one converged, one whose last residual has no value."""
    for name, plan in (("good.json", SECANT), ("failed.json", DIVERGING_SECANT)):
        write(home.folder, COLEBROOK + plan)
        main(["run", "colebrook.toml", "--save", name, "--by", "M. R."])
    capsys.readouterr()
    return "good.json", "failed.json"


def recomputed(capsys, *words: str) -> tuple[int, dict[str, Any]]:
    code = main(["recompute", "--json", *words])
    seen = capsys.readouterr()
    answer = json.loads(seen.out)
    jsonschema.validate(answer, SCHEMA)
    return code, answer


def change(name: str, *, rehash: bool) -> int:
    """Alter the last bit of the root in a record; with `rehash` as a forger would, so that the chain is whole again."""
    record = json.loads(Path(name).read_text(encoding="utf-8"))
    number = len(record["events"]) - 1
    event = record["events"][number]
    x = float(event["content"]["iterate"]["x"])
    event["content"]["iterate"]["x"] = repr(x * (1 + 2**-52))
    if rehash:
        event["hash"] = sha256(canonical({key: value for key, value in event.items() if key != "hash"}))
    Path(name).write_text(json.dumps(record), encoding="utf-8")
    return number


def test_what_was_run_is_reproduced(capsys, sessions: tuple[str, str]) -> None:
    code, answer = recomputed(capsys, *sessions)
    assert code == Exit.GOOD
    assert [row["file"] for row in answer["sessions"]] == list(sessions)
    for row in answer["sessions"]:
        record = json.loads(Path(row["file"]).read_text(encoding="utf-8"))
        assert row["events"] == len(record["events"])
        assert row["steps"] == sum(event["kind"] == "step_taken" for event in record["events"])
        assert (row["reproduced"], row["chain"], row["first_difference"]) == (True, "whole", None)


def test_deep_asks_for_no_more_than_there_is(capsys, sessions: tuple[str, str]) -> None:
    assert recomputed(capsys, "--deep", *sessions) == recomputed(capsys, *sessions)


def test_the_printed_table(capsys, sessions: tuple[str, str]) -> None:
    assert main(["recompute", *sessions]) == Exit.GOOD
    lines = capsys.readouterr().out.splitlines()
    assert [line.split()[2:] for line in lines] == [
        ["reproduced", "chain", "session"],
        ["all", "whole", "good.json"],
        ["all", "whole", "failed.json"],
    ]


def test_a_changed_bit_is_a_difference(capsys, sessions: tuple[str, str]) -> None:
    number = change("good.json", rehash=True)
    code, answer = recomputed(capsys, *sessions)
    assert code == Exit.OTHER
    first, second = answer["sessions"]
    assert (first["reproduced"], first["chain"]) == (False, "whole")
    assert str(number) in first["first_difference"]
    assert second["reproduced"]
    assert main(["recompute", "good.json"]) == Exit.OTHER
    assert first["first_difference"] in capsys.readouterr().out


def test_a_broken_chain_is_named_by_its_event(capsys, sessions: tuple[str, str]) -> None:
    number = change("good.json", rehash=False)
    code, answer = recomputed(capsys, "good.json")
    assert (code, answer["sessions"][0]["chain"]) == (Exit.OTHER, f"broken at {number}")


def test_with_several_files_the_largest_exit_code_wins(capsys, sessions: tuple[str, str]) -> None:
    change("good.json", rehash=True)
    Path("junk.json").write_text("{}")
    code = main(["recompute", "--json", "junk.json", *sessions])
    seen = capsys.readouterr()
    assert code == Exit.REQUEST
    assert complaint(seen.err).startswith("junk.json: ")
    assert [row["file"] for row in json.loads(seen.out)["sessions"]] == list(sessions)


def test_only_unreadable_files_print_nothing(home: Home, capsys) -> None:
    assert main(["recompute", "gone.json"]) == Exit.REQUEST
    seen = capsys.readouterr()
    assert seen.out == ""
    assert complaint(seen.err).startswith("gone.json: ")


def test_recomputing_needs_neither_screens_nor_symbols(home: Home, sessions: tuple[str, str]) -> None:
    code = (
        "import sys; from surefoot.cli.main import main; code = main(['recompute', 'good.json']); "
        "print(*sorted({name.partition('.')[0] for name in sys.modules}), file=sys.stderr); sys.exit(code)"
    )
    result = home.python("-c", code)
    assert result.returncode == Exit.GOOD
    assert not set(result.stderr.decode().split()) & {"textual", "rich", "sympy", "plotext", "scipy"}


def test_recomputing_changes_no_file(home: Home, sessions: tuple[str, str]) -> None:
    before = {path: path.read_bytes() for path in home.folder.glob("*.json")}
    assert home.run("recompute", *sessions).returncode == Exit.GOOD
    assert {path: path.read_bytes() for path in home.folder.glob("*.json*")} == before
