"""The repository as tests of the whole see it: its files, and the modules of the package with what they import."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
PACKAGE = ROOT / "tui" / "surefoot"

_NOT_OURS = {
    ".git", ".venv", ".hypothesis", ".mypy_cache", ".pytest_cache", ".ruff_cache", "__pycache__", "build", "dist",
}  # fmt: skip


def files(folder: Path = ROOT, pattern: str = "*") -> Iterator[Path]:
    """The files of the repository below a folder, without what tools leave behind."""
    for path in sorted(folder.iterdir()):
        if path.name in _NOT_OURS or path.name.endswith(".egg-info"):
            continue
        if path.is_dir():
            yield from files(path, pattern)
        elif path.match(pattern):
            yield path


def modules() -> dict[str, Path]:
    """Every module of the package by its dotted name."""
    return {_dotted(path): path for path in files(PACKAGE, "*.py")}


def _dotted(path: Path) -> str:
    parts = path.relative_to(PACKAGE.parent).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" else parts)


def parsed(path: Path) -> ast.Module:
    return ast.parse(path.read_text(encoding="utf-8"), str(path))


def imported(path: Path) -> set[str]:
    """Dotted names of every module that a module imports, at its top and inside functions alike."""
    found: set[str] = set()
    for node in ast.walk(parsed(path)):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: write the whole name of what is imported"
            assert node.module is not None
            found |= {node.module, *(f"{node.module}.{alias.name}" for alias in node.names)}
    return found
