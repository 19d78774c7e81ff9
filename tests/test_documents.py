"""What the documents say is what the program does."""

from __future__ import annotations

import re
import subprocess
import tomllib
from pathlib import Path

import pytest

from support.command import Home
from support.guide_tables import GUIDE_PAGE, with_tables
from support.tree import ROOT, files
from surefoot import __version__
from surefoot.cli.arguments import COMMANDS
from surefoot.equation.functions import FUNCTIONS
from surefoot.equation.problem_file import read_problem_file
from surefoot.methods.plan_table import plan_from_table
from surefoot.methods.table import METHODS

README = (ROOT / "README.md").read_text(encoding="utf-8")
GUIDE = GUIDE_PAGE.read_text(encoding="utf-8")


def blocks(text: str, language: str = "") -> list[str]:
    return re.findall(rf"^```{language}\n(.*?)^```$", text, re.MULTILINE | re.DOTALL)


def test_the_check_of_the_whole_runs_the_command_of_the_readme() -> None:
    command = next(block.strip() for block in blocks(README) if "pytest" in block)
    assert command in (ROOT / ".ci" / "run").read_text(encoding="utf-8").splitlines()


def test_the_commands_of_the_readme_are_one_line_each() -> None:
    run, test = blocks(README)[:2]
    for command in (run, test):
        assert command.count("\n") == 1
        assert command.startswith("python3 -m venv .venv && .venv/bin/pip install -q ")


def test_the_version_is_that_of_the_project() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    assert project["version"] == __version__


def test_the_tables_of_the_guide_are_those_of_the_program() -> None:
    assert with_tables(GUIDE) == GUIDE, "PYTHONPATH=tests .venv/bin/python -m support.guide_tables writes them"


def test_the_guide_has_every_command() -> None:
    for command in COMMANDS.values():
        call = " ".join(word for word in ("surefoot", command.name, command.operands) if word)
        assert f"| `{call}` |" in GUIDE


def test_the_guide_has_every_function() -> None:
    assert set(FUNCTIONS) <= set(re.findall(r"[a-z][a-z0-9_]+", GUIDE))


@pytest.mark.parametrize("page", [GUIDE_PAGE, ROOT / "README.md"], ids=lambda page: page.name)
def test_a_problem_file_in_a_document_is_accepted(page: Path) -> None:
    for text in blocks(page.read_text(encoding="utf-8"), "toml"):
        if "equation" in text:
            file = read_problem_file(text, page.name)
            assert file.plan is not None
            assert plan_from_table(file.plan).method in METHODS


def test_the_problem_of_the_guide_runs(tmp_path: Path) -> None:
    text = next(text for text in blocks(GUIDE, "toml") if "equation" in text)
    (tmp_path / "tailrace.toml").write_text(text, encoding="utf-8")
    result = Home(tmp_path).run("run", "tailrace.toml", "--no-save")
    assert result.returncode == 0, result


def test_links_inside_the_repository_lead_somewhere() -> None:
    named = re.compile(r"`((?:docs|tests|tui|sessions|\.ci)/[\w./-]*)`")
    for page in files(ROOT, "*.md"):
        for target in named.findall(page.read_text(encoding="utf-8")):
            assert (ROOT / target).exists(), f"{page.name}: {target}"


def test_the_script_of_the_whole_check_is_sound() -> None:
    script = ROOT / ".ci" / "run"
    assert script.stat().st_mode & 0o100
    assert subprocess.run(["bash", "-n", str(script)], check=False).returncode == 0
