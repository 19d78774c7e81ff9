"""The walls of the house: what may import what, how long a module may be, and what stands in none of them."""

from __future__ import annotations

import ast
import re
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest

from support.command import Home
from support.tree import PACKAGE, ROOT, files, imported, modules, parsed

FLOORS: dict[str, set[str]] = {
    "errors": set(),
    "equation": {"errors"},
    "methods": {"errors", "equation"},
    "session": {"errors", "equation", "methods"},
    "figures": {"errors", "equation", "methods"},
    "screens": {"errors", "equation", "methods", "session", "figures"},
    "cli": {"errors", "equation", "methods", "session", "figures", "screens"},
}
"""What each floor may import beside itself. Figures know nothing of sessions."""

LIBRARIES: dict[str, set[str]] = {
    "sympy": {"equation"},
    "mpmath": {"equation"},
    "flint": {"equation"},
    "numpy": {"equation", "session"},
    "plotext": {"figures"},
    "textual": {"screens"},
    "rich": {"screens"},
}
"""Which floors may use which library; the session only asks numpy for its version."""

MODULE_LINES = 350
FUNCTION_LINES = 60

MODULES = modules()


def floor_of(name: str) -> str:
    """The floor of a dotted name; empty for the package itself and its version."""
    return (name.split(".")[1:] or [""])[0].replace("__version__", "")


def each(names: dict[str, Path]) -> pytest.MarkDecorator:
    return pytest.mark.parametrize("name", sorted(names))


def test_the_floors_are_all_there_is() -> None:
    found = {floor_of(name) for name in MODULES} - {""}
    assert found == set(FLOORS)


@each(MODULES)
def test_a_module_imports_only_from_floors_below(name: str) -> None:
    own = floor_of(name)
    reached = {floor_of(other) for other in imported(MODULES[name]) if other.split(".")[0] == "surefoot"} - {"", own}
    assert reached <= (FLOORS[own] if own else set())


@each(MODULES)
def test_a_library_is_used_only_where_it_belongs(name: str) -> None:
    for library in {other.split(".")[0] for other in imported(MODULES[name])} & set(LIBRARIES):
        assert floor_of(name) in LIBRARIES[library], f"{name} imports {library}"


@each(MODULES)
def test_a_module_holds_one_idea(name: str) -> None:
    assert len(MODULES[name].read_text(encoding="utf-8").splitlines()) <= MODULE_LINES


@each(MODULES)
def test_a_function_fits_on_a_page(name: str) -> None:
    for node in ast.walk(parsed(MODULES[name])):
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef):
            assert (node.end_lineno or 0) - node.lineno < FUNCTION_LINES, f"{name}.{node.name}, line {node.lineno}"


@each(MODULES)
def test_a_module_says_what_it_is_for(name: str) -> None:
    text = ast.get_docstring(parsed(MODULES[name]))
    assert text or not MODULES[name].read_text(encoding="utf-8").strip()


@each({name: path for name, path in MODULES.items() if path.name == "__init__.py"})
def test_a_package_file_only_hands_on(name: str) -> None:
    for node in parsed(MODULES[name]).body:
        docstring = isinstance(node, ast.Expr) and isinstance(node.value, ast.Constant)
        naming = isinstance(node, ast.Assign | ast.AnnAssign) and _target(node) in ("__all__", "__version__")
        assert docstring or naming or isinstance(node, ast.Import | ast.ImportFrom), f"{name}, line {node.lineno}"


def _target(node: ast.Assign | ast.AnnAssign) -> str:
    target = node.target if isinstance(node, ast.AnnAssign) else node.targets[0]
    return target.id if isinstance(target, ast.Name) else ""


def _calls(path: Path) -> Iterator[tuple[str, int]]:
    for node in ast.walk(parsed(path)):
        if isinstance(node, ast.Call):
            called = node.func
            if isinstance(called, ast.Name):
                yield called.id, node.lineno
            elif isinstance(called, ast.Attribute):
                owner = called.value.id if isinstance(called.value, ast.Name) else ""
                yield f"{owner}.{called.attr}", node.lineno


RUNS_TEXT = {"eval", "exec", "compile", "__import__", "sympy.sympify", "sympify", "parse_expr", "lambdify"}
RUNS_TEXT |= {"sympy.lambdify", "os.system", "os.popen", "builtins.eval", "builtins.exec"}


@each(MODULES)
def test_no_text_is_ever_run(name: str) -> None:
    found = [(call, line) for call, line in _calls(MODULES[name]) if call in RUNS_TEXT]
    unsafe = imported(MODULES[name]) & {"pickle", "marshal", "shelve", "code", "codeop", "sympy.parsing"}
    assert not found
    assert not unsafe


@each(MODULES)
def test_nothing_catches_everything(name: str) -> None:
    for node in ast.walk(parsed(MODULES[name])):
        if isinstance(node, ast.ExceptHandler):
            caught = {part.id for part in ast.walk(node.type) if isinstance(part, ast.Name)} if node.type else {""}
            assert not caught & {"", "Exception", "BaseException"}, f"{name}, line {node.lineno}"


# The last letter of each word is in brackets, so that this file does not hold the words.
UNFINISHED = r"\b(TOD[O]|FIXM[E]|XX[X]|NotImplementedErro[r])\b"
EXCUSED = r"pytest\.ski[p]|mark\.ski[p]|xfai[l]\(|importorski[p]"
ONE_MACHINE = r"/hom[e]/\w|/roo[t]/|/User[s]/\w"
WORDS = re.compile("|".join((UNFINISHED, EXCUSED, ONE_MACHINE)))


def test_nothing_is_left_for_later_or_tied_to_one_machine() -> None:
    found = []
    for path in files():
        text = path.read_text(encoding="utf-8")
        for match in WORDS.finditer(text):
            found.append(f"{path.relative_to(ROOT)}:{text.count(chr(10), 0, match.start()) + 1}: {match[0]}")
    assert not found


def test_every_test_file_has_a_name_of_its_own() -> None:
    names = [path.name for path in files(ROOT / "tests", "test_*.py")]
    assert sorted(names) == sorted(set(names))


def test_tests_mirror_the_package() -> None:
    floors = {path.name for path in PACKAGE.iterdir() if path.is_dir() and path.name != "__pycache__"}
    apart = {"bench", "long", "published", "support"}
    found = {path.name for path in (ROOT / "tests").iterdir() if path.is_dir() and path.name != "__pycache__"}
    assert found - apart == floors


def test_every_dependency_has_its_reason() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    wanted = [
        *project["dependencies"],
        *(name for group in project["optional-dependencies"].values() for name in group),
    ]
    names = {re.split(r"[<>=~!\[ ;]", requirement)[0] for requirement in wanted}
    page = (ROOT / "docs" / "dependencies.md").read_text(encoding="utf-8")
    explained = set(re.findall(r"^\| `([^`]+)` \|", page, re.MULTILINE))
    assert explained == names


HEAVY = ("textual", "rich", "numpy", "sympy", "mpmath", "flint", "plotext", "scipy")


def modules_after(home: Home, statement: str, *words: str) -> set[str]:
    """Top-level names of what a fresh interpreter has imported after a statement."""
    code = f"import sys; {statement}; print(*sorted({{n.partition('.')[0] for n in sys.modules}}), file=sys.stderr)"
    result = home.python("-c", code, *words)
    assert result.returncode == 0, result.stderr.decode()
    return set(result.stderr.decode().split())


@pytest.mark.parametrize("words", [["--help"], ["--version"], ["run", "--help"]])
def test_a_word_about_the_program_needs_no_library(tmp_path: Path, words: list[str]) -> None:
    statement = "from surefoot.cli.main import main; main(sys.argv[1:])"
    assert not modules_after(Home(tmp_path), statement, *words) & set(HEAVY)


@pytest.mark.parametrize("floor", ["equation", "methods", "session"])
def test_a_floor_below_needs_no_screen(tmp_path: Path, floor: str) -> None:
    names = sorted(name for name in MODULES if floor_of(name) == floor)
    statement = "; ".join(f"import {name}" for name in names)
    assert not modules_after(Home(tmp_path), statement) & {"textual", "rich", "plotext", "sympy"}
