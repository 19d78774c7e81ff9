"""`surefoot run`: from a problem file to printed steps, a JSON object, a saved session and the exit code."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from support.command import Home, complaint
from support.problem_files import COLEBROOK, DIVERGING_SECANT, SECANT, published_root, write
from support.tree import ROOT
from surefoot.cli.exits import Exit
from surefoot.cli.main import main

GOLDEN = Path(__file__).parent / "golden"
SCHEMA = json.loads((ROOT / "docs" / "output.schema.json").read_text(encoding="utf-8"))


def run_object(capsys: pytest.CaptureFixture[str], *words: str) -> tuple[int, dict[str, Any]]:
    """Exit code and JSON object of `surefoot run`."""
    code = main(["run", "--json", *words])
    seen = capsys.readouterr()
    assert seen.err == ""
    answer = json.loads(seen.out)
    jsonschema.validate(answer, SCHEMA)
    return code, answer


def refused(capsys: pytest.CaptureFixture[str], *words: str) -> str:
    """The one line of a request that is refused; nothing is printed and no file is left."""
    before = sorted(path for path in Path().rglob("*") if path.is_file())
    assert main(["run", *words]) == Exit.REQUEST
    seen = capsys.readouterr()
    assert seen.out == ""
    assert sorted(path for path in Path().rglob("*") if path.is_file()) == before
    return complaint(seen.err)


def test_the_root_of_colebrook_is_the_published_one(home: Home, capsys) -> None:
    code, answer = run_object(capsys, write(home.folder, COLEBROOK + SECANT), "--no-save")
    assert code == Exit.GOOD
    assert (answer["outcome"], answer["in_range"], answer["admissible"], answer["session"]) == (
        "converged",
        True,
        None,
        None,
    )
    # C. F. Colebrook 1939 (equation); 16 digits as printed, hyd-colebrook-lib of the published data.
    assert answer["root"] == pytest.approx(float(published_root("hyd-colebrook-lib").value), rel=4e-16)
    assert answer["root"] == answer["iterates"][-1]["x"]
    assert [row["k"] for row in answer["iterates"]] == list(range(answer["steps"] + 2))
    assert answer["evaluations"] == answer["steps"] + 2
    assert [answer["iterates"][0]["x"], answer["iterates"][1]["x"]] == [0.02, 0.03]
    for before, after in zip(answer["iterates"], answer["iterates"][1:], strict=False):
        assert after["dx"] == after["x"] - before["x"]
    assert answer["iterates"][0]["dx"] is None


def test_the_printed_steps_are_these_bytes(home: Home) -> None:
    write(home.folder, COLEBROOK + SECANT)
    result = home.run("run", "colebrook.toml", "--no-save")
    assert (result.returncode, result.stderr) == (Exit.GOOD, b"")
    assert result.stdout == (GOLDEN / "colebrook-run.txt").read_bytes()


def test_the_printed_object_is_these_bytes(home: Home) -> None:
    write(home.folder, COLEBROOK + SECANT)
    result = home.run("run", "colebrook.toml", "--no-save", "--json")
    assert result.stdout == (GOLDEN / "colebrook-run.json").read_bytes()


def test_a_run_is_saved_by_date_and_title(home: Home, capsys) -> None:
    write(home.folder, COLEBROOK + SECANT)
    code, answer = run_object(capsys, "colebrook.toml", "--by", "M. R., duty")
    assert code == Exit.GOOD
    session = Path(answer["session"])
    assert session.parent == home.folder / "data" / "surefoot" / "sessions"
    assert session.name[10:] == "-colebrook-white-re-1e5-eps-d-1e-4.json"
    record = json.loads(session.read_text(encoding="utf-8"))
    assert {event["by"] for event in record["events"]} == {"M. R., duty"}
    assert main(["recompute", str(session)]) == Exit.GOOD


@pytest.mark.parametrize("how", ["option", "environment", "configuration", "beside"])
def test_the_folder_of_sessions(home: Home, capsys, monkeypatch, how: str) -> None:
    write(home.folder, COLEBROOK + SECANT)
    wanted, words = home.folder / how, []
    settings = home.folder / "config" / "surefoot"
    settings.mkdir(parents=True)
    if how != "beside":
        (settings / "config.toml").write_text(f'by = "M. R."\nsessions = "{home.folder / "configuration"}"\n')
    if how in ("option", "environment"):
        monkeypatch.setenv("SUREFOOT_SESSIONS", str(home.folder / "environment"))
    if how == "option":
        words = ["--sessions", str(wanted)]
    if how == "beside":
        wanted = home.folder / "sessions"
        wanted.mkdir()
    _, answer = run_object(capsys, "colebrook.toml", *words)
    assert Path(answer["session"]).parent == wanted
    by = json.loads(Path(answer["session"]).read_text(encoding="utf-8"))["events"][0]["by"]
    assert by == ("(no name given)" if how == "beside" else "M. R.")


def test_save_names_the_file(home: Home, capsys) -> None:
    _, answer = run_object(capsys, write(home.folder, COLEBROOK + SECANT), "--save", "night.json")
    assert answer["session"] == "night.json"
    assert Path("night.json").exists()


def test_save_refuses_an_existing_file(home: Home, capsys) -> None:
    Path("night.json").write_text("x")
    line = refused(capsys, write(home.folder, COLEBROOK + SECANT), "--save", "night.json")
    assert line == "--save night.json: exists already; choose another name"
    assert Path("night.json").read_text() == "x"


@pytest.mark.parametrize(
    ("words", "line"),
    [
        (["--save", "night.txt"], "--save night.txt: must end in .json; a session is a JSON file"),
        (["--save", "a.json", "--no-save"], "--no-save: contradicts --save; give one of them"),
    ],
)
def test_where_to_save_is_checked_before_anything_runs(home: Home, capsys, words: list[str], line: str) -> None:
    assert refused(capsys, write(home.folder, COLEBROOK + SECANT), *words) == line


def test_a_folder_that_is_not_there_is_refused(home: Home, capsys) -> None:
    line = refused(capsys, write(home.folder, COLEBROOK + SECANT), "--save", "gone/night.json")
    assert line.startswith("gone/night.json: ")


OUTCOMES = [
    ("failed_evaluation", COLEBROOK + DIVERGING_SECANT),
    (
        "step_limit",
        COLEBROOK + SECANT.replace("[plan.stop]", "max_steps = 2\n[plan.stop]"),
    ),
    (
        "no_progress",
        COLEBROOK
        + '[plan]\nmethod = "bisection"\nstart = [0.005, 0.1]\nmax_steps = 200\n[plan.stop]\nexact_zero = false\n',
    ),
]


@pytest.mark.parametrize(("outcome", "text"), OUTCOMES, ids=[outcome for outcome, _ in OUTCOMES])
def test_another_outcome_is_a_true_answer_and_exit_1(home: Home, capsys, outcome: str, text: str) -> None:
    code, answer = run_object(capsys, write(home.folder, text), "--no-save")
    assert code == Exit.OTHER
    assert (answer["outcome"], answer["root"], answer["in_range"], answer["admissible"]) == (outcome, None, None, None)


def test_a_residual_without_value_says_why(home: Home, capsys) -> None:
    _, answer = run_object(capsys, write(home.folder, COLEBROOK + DIVERGING_SECANT), "--no-save")
    assert answer["iterates"][-1]["x"] < 0
    assert answer["iterates"][-1]["f"].startswith("outside the domain: sqrt(f)")
    assert main(["run", "colebrook.toml", "--no-save"]) == Exit.OTHER
    assert "no value" in capsys.readouterr().out


def test_a_root_outside_the_range_is_exit_1(home: Home, capsys) -> None:
    text = COLEBROOK.replace("[0.005, 0.1]", "[0.05, 0.1]") + SECANT
    code, answer = run_object(capsys, write(home.folder, text), "--no-save")
    assert (code, answer["outcome"], answer["in_range"]) == (Exit.OTHER, "converged", False)
    main(["run", "colebrook.toml", "--no-save"])
    assert "outside the working range 0.05 to 0.1\n" in capsys.readouterr().out


@pytest.mark.parametrize(
    ("condition", "admissible", "code", "says"),
    [
        ("f > 0.01", True, Exit.GOOD, ""),
        ("f > 0.05", False, Exit.OTHER, "not admissible: f > 0.05 does not hold\n"),
        ("ln(f) < ln(-f)", None, Exit.GOOD, "admissibility is undecided: ln(f) < ln(-f) has no value here\n"),
    ],
)
def test_an_inadmissible_root_is_exit_1(
    home: Home, capsys, condition: str, admissible: bool | None, code: int, says: str
) -> None:
    text = COLEBROOK.replace("equation =", f'admissible = ["{condition}"]\nequation =') + SECANT
    given, answer = run_object(capsys, write(home.folder, text), "--no-save")
    assert (given, answer["admissible"], answer["in_range"]) == (code, admissible, True)
    main(["run", "colebrook.toml", "--no-save"])
    printed = capsys.readouterr().out
    assert says in printed
    assert ("admissib" in printed) == bool(says)


def test_a_condition_that_fails_counts_even_beside_one_without_value(home: Home, capsys) -> None:
    text = COLEBROOK.replace("equation =", 'admissible = ["ln(-f) > 0", "f > 1"]\nequation =') + SECANT
    code, answer = run_object(capsys, write(home.folder, text), "--no-save")
    assert (code, answer["admissible"]) == (Exit.OTHER, False)


def test_limits_stand_beside_their_steps(home: Home, capsys) -> None:
    text = COLEBROOK + SECANT + "[plan.control]\nstep_limit = 0.004\n"
    write(home.folder, text)
    assert main(["run", "colebrook.toml", "--no-save"]) == Exit.GOOD
    lines = capsys.readouterr().out.splitlines()
    assert lines[3].split() == ["k", "f", "residual", "df", "limits"]
    assert lines[6].endswith("step_limit")


@pytest.mark.parametrize("arithmetic", ["binary32", "multiprecision:50"])
def test_another_arithmetic_is_written_as_the_record_writes_it(home: Home, capsys, arithmetic: str) -> None:
    stop = SECANT.replace("1e-12", "1e-6")
    text = COLEBROOK + f'[arithmetic]\nkind = "{arithmetic}"\n' + stop
    code, answer = run_object(capsys, write(home.folder, text), "--no-save")
    assert code == Exit.GOOD
    prefix = {"binary32": "f32:", "multiprecision:50": "mp50:"}[arithmetic]
    assert answer["root"].startswith(f"{prefix}0.018513")
    assert {type(row["x"]) for row in answer["iterates"]} == {str}


def test_a_range_may_be_wider_than_the_arithmetic(home: Home, capsys) -> None:
    text = COLEBROOK.replace("[0.005, 0.1]", '["0x1p-9", 1e100]') + '[arithmetic]\nkind = "binary32"\n'
    code, answer = run_object(capsys, write(home.folder, text + SECANT.replace("1e-12", "1e-6")), "--no-save")
    assert (code, answer["in_range"]) == (Exit.GOOD, True)


def test_a_title_cannot_steer_the_terminal(home: Home, capsys) -> None:
    write(home.folder, COLEBROOK.replace('title = "', 'title = "\\u001b[31m\\n') + SECANT)
    main(["run", "colebrook.toml", "--no-save"])
    assert capsys.readouterr().out.startswith("\\x1b[31m\\nColebrook-White")


def test_a_unit_follows_the_root(home: Home, capsys) -> None:
    text = 'unknown = "y"\nunit = "m"\nequation = "y^2 = 2"\nrange = [0, 2]\nformat = 1\n'
    plan = '[plan]\nmethod = "newton-raphson"\nstart = [1.5]\n[plan.stop]\nx_relative = 1e-15\n'
    write(home.folder, text + plan)
    assert main(["run", "colebrook.toml", "--no-save"]) == Exit.GOOD
    lines = capsys.readouterr().out.splitlines()
    assert lines[0] == "y^2 = 2"
    assert "y = 1.4142135623730951 m" in lines or "y = 1.4142135623730949 m" in lines
    assert "y [m]" in lines[3]


NEWTON = '[plan]\nmethod = "newton-raphson"\nstart = [0.02]\n'
BAD = [
    (COLEBROOK, "colebrook.toml: plan: is missing; a run needs a [plan] with method and start"),
    (COLEBROOK.replace("sqrt(f)))", "sqrt(f)"), "colebrook.toml: equation: "),
    (COLEBROOK + '[plan]\nmethod = "secant"\n', "colebrook.toml: plan.start: missing"),
    (COLEBROOK + "[plan]\nstart = [1, 2]\n", "colebrook.toml: plan.method: missing"),
    (COLEBROOK + '[plan]\nmethod = "secnt"\nstart = [1, 2]\n', "colebrook.toml: plan.method: "),
    (COLEBROOK + '[plan]\nmethod = "secant"\nstart = [1]\n', "colebrook.toml: plan.start: "),
    (COLEBROOK.replace("range", "rnge") + SECANT, "colebrook.toml: rnge: "),
    (COLEBROOK.replace("sqrt(f)))", "sqrt(f)") + SECANT, "colebrook.toml: equation: "),
    (COLEBROOK.replace("sqrt", "sqr") + SECANT, "colebrook.toml: equation: "),
    (
        COLEBROOK.replace("1/sqrt(f) =", "1/sqrt(airy_ai(f)) =") + NEWTON,
        "colebrook.toml: plan.method: newton-raphson needs derivative 1",
    ),
    (COLEBROOK + "[where]\na = 'b'\nb = 'a'\n" + SECANT, "colebrook.toml: "),
    ("unknown = ", "colebrook.toml: is not TOML: invalid value at the end of the file"),
    ("", "colebrook.toml: "),
]


@pytest.mark.parametrize(("text", "line"), BAD)
def test_a_bad_file_is_one_line_with_its_place(home: Home, capsys, text: str, line: str) -> None:
    assert refused(capsys, write(home.folder, text)).startswith(line)


def test_a_missing_file(home: Home, capsys) -> None:
    assert refused(capsys, "gone.toml") == "gone.toml: there is no such file; check the path"


def test_a_folder_is_no_problem_file(home: Home, capsys) -> None:
    assert refused(capsys, ".") == ".: this is a folder; name a file in it"


def test_a_file_without_end_is_not_read_to_its_end(home: Home, capsys) -> None:
    assert refused(capsys, "/dev/zero") == "/dev/zero: is larger than 16 MB, which no problem file is"


def test_bytes_that_are_no_text_name_their_line(home: Home, capsys) -> None:
    Path("p.toml").write_bytes(b'format = 1\ntitle = "\xff"\n')
    assert refused(capsys, "p.toml") == "p.toml: line 2: is not UTF-8 text here; save the file as UTF-8"


def test_an_impossible_path_is_one_line(home: Home, capsys) -> None:
    assert refused(capsys, "a\0b.toml") == "a\\x00b.toml: this is no path; check the word"
    assert refused(capsys, "a" * 300 + ".toml").endswith("cannot be read (File name too long); check its permissions")


def test_units_and_titles_in_any_locale(home: Home) -> None:
    text = COLEBROOK.replace('title = "', 'title = "Rohrreibung λ, ').replace('"f"', '"λ"').replace("(f)", "(λ)")
    write(home.folder, text + SECANT)
    plain = home.run("run", "colebrook.toml", "--no-save", environment={"LC_ALL": "C", "PYTHONIOENCODING": "ascii"})
    assert (plain.returncode, plain.stderr) == (Exit.GOOD, b"")
    assert b"\\u03bb = 0.0185138660774716" in plain.stdout
    whole = home.run("run", "colebrook.toml", "--no-save", environment={"LANG": "C"})
    assert "λ = 0.0185138660774716" in whole.stdout.decode()


def test_a_full_standard_output_keeps_the_session(home: Home) -> None:
    write(home.folder, COLEBROOK + SECANT)
    code = (
        "import os; os.dup2(os.open('/dev/full', os.O_WRONLY), 1); from surefoot.cli.main import main; "
        "raise SystemExit(main(['run', 'colebrook.toml', '--save', 's.json']))"
    )
    result = home.python("-c", code)
    assert result.returncode == Exit.REQUEST
    assert complaint(result.stderr).startswith("standard output: cannot be written")
    assert home.run("recompute", "s.json").returncode == Exit.GOOD
