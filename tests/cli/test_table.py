"""`surefoot table`: CSV that other programs read, and the same as JSON."""

from __future__ import annotations

import csv
import io
import json
from itertools import pairwise

import jsonschema
import pytest

from support.command import Home, complaint
from support.problem_files import COLEBROOK, DIVERGING_SECANT, SECANT, write
from support.tree import ROOT
from surefoot.cli.exits import Exit
from surefoot.cli.main import main
from surefoot.methods.plan import Plan
from surefoot.session.commands import BeginRun, PutIterate
from surefoot.session.session import Session

SCHEMA = json.loads((ROOT / "docs" / "output.schema.json").read_text(encoding="utf-8"))


@pytest.fixture
def session(home: Home, capsys) -> str:
    write(home.folder, COLEBROOK + SECANT)
    main(["run", "colebrook.toml", "--save", "s.json", "--by", "M. R."])
    capsys.readouterr()
    return "s.json"


def table(capsys, *words: str) -> list[dict[str, str]]:
    assert main(["table", *words]) == Exit.GOOD
    seen = capsys.readouterr()
    assert seen.err == ""
    return list(csv.DictReader(io.StringIO(seen.out, newline="")))


def test_the_csv_reads_back_to_the_bits_of_the_run(home: Home, capsys, session: str) -> None:
    main(["run", "colebrook.toml", "--no-save", "--json"])
    iterates = json.loads(capsys.readouterr().out)["iterates"]
    rows = table(capsys, session)
    assert list(rows[0]) == ["k", "x", "f", "dx", "ratio", "order", "limits"]
    assert [(int(row["k"]), float(row["x"]), float(row["f"])) for row in rows] == [
        (row["k"], row["x"], row["f"]) for row in iterates
    ]
    assert [float(row["dx"]) for row in rows[1:]] == [row["dx"] for row in iterates[1:]]
    assert rows[0]["dx"] == ""
    for before, row in pairwise(rows[2:]):
        assert float(row["ratio"]) == pytest.approx(abs(float(row["dx"]) / float(before["dx"])), rel=1e-15)


def test_the_bytes_are_those_of_rfc_4180(home: Home, session: str) -> None:
    result = home.run("table", session)
    assert (result.returncode, result.stderr) == (Exit.GOOD, b"")
    lines = result.stdout.split(b"\r\n")
    assert lines[0] == b"k,x,f,dx,ratio,order,limits"
    assert lines[-1] == b""
    assert not any(b"\n" in line or b"\r" in line for line in lines)
    assert {line.count(b",") for line in lines[:-1]} == {6}


def test_the_object_says_the_same(capsys, session: str) -> None:
    rows = table(capsys, session)
    assert main(["table", session, "--json"]) == Exit.GOOD
    answer = json.loads(capsys.readouterr().out)
    jsonschema.validate(answer, SCHEMA)
    assert (answer["run"], answer["method"], answer["unknown"], answer["unit"]) == (1, "secant", "f", "")
    assert answer["outcome"] == "converged"
    assert [row["x"] for row in answer["iterates"]] == [float(row["x"]) for row in rows]
    orders = [float(row["order"]) if row["order"] else None for row in rows]
    assert [row["order"] for row in answer["iterates"]] == orders
    assert any(orders)


def test_a_residual_without_value_is_an_empty_field(home: Home, capsys) -> None:
    write(home.folder, COLEBROOK + DIVERGING_SECANT)
    main(["run", "colebrook.toml", "--save", "d.json"])
    capsys.readouterr()
    assert table(capsys, "d.json")[-1]["f"] == ""


def test_a_run_is_chosen_by_its_number(home: Home, capsys, session: str) -> None:
    with Session.open(home.folder / session, by="M. R.") as opened:
        opened.do(BeginRun(Plan("bisection", ("0.005", "0.1"))))
        opened.do(PutIterate("0.02", "where the handbook is"))
    rows = table(capsys, session)
    assert [row["x"] for row in rows[:2]] == ["0.0050000000000000001", "0.10000000000000001"]
    assert rows[-1]["limits"] == "put by hand"
    assert float(table(capsys, session, "--run", "1")[0]["x"]) == 0.02
    assert table(capsys, session, "--run", "2") == rows
    assert main(["table", session, "--run", "3"]) == Exit.REQUEST
    assert complaint(capsys.readouterr().err) == "s.json: holds no run 3; it holds 1, 2"


def test_a_session_without_a_run(home: Home, capsys) -> None:
    Session.create(home.folder / "e.json", by="M. R.").close()
    assert main(["table", "e.json"]) == Exit.REQUEST
    assert complaint(capsys.readouterr().err) == "e.json: holds no run yet; open it and begin one"


@pytest.mark.parametrize("name", ["gone.json", ".", "colebrook.toml"])
def test_what_is_no_session_is_one_line(home: Home, capsys, name: str) -> None:
    write(home.folder, COLEBROOK)
    assert main(["table", name]) == Exit.REQUEST
    assert complaint(capsys.readouterr().err).startswith(f"{name}: ")
