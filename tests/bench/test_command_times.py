"""Times of the console script against a bare interpreter, and what a step costs on the line.

What is printed (`-s`) belongs into docs/measured.md.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from pathlib import Path

from support.command import SUREFOOT, Home
from support.problem_files import COLEBROOK, SECANT, write
from support.terminal import Terminal

STEPS = 6


def best_of(work: Callable[[], object], repeats: int = 5) -> float:
    """The shortest of some times of the work, in seconds."""
    times = []
    for _ in range(repeats):
        start = time.perf_counter()
        work()
        times.append(time.perf_counter() - start)
    return min(times)


def test_a_command_costs_little_more_than_the_interpreter(tmp_path: Path) -> None:
    home = Home(tmp_path)
    write(tmp_path, COLEBROOK + SECANT)
    home.run("run", "colebrook.toml", "--save", "s.json")
    bare = best_of(lambda: home.python("-c", ""))
    version = best_of(lambda: home.run("--version"))
    run = best_of(lambda: home.run("run", "colebrook.toml", "--no-save"))
    recompute = best_of(lambda: home.run("recompute", "s.json"))
    sys.stdout.write(
        f"\ninterpreter {bare * 1e3:.0f} ms, surefoot --version {version * 1e3:.0f} ms, "
        f"run {run * 1e3:.0f} ms, recompute {recompute * 1e3:.0f} ms\n"
    )
    assert version < 6 * bare


def test_a_step_is_short_on_the_line(tmp_path: Path) -> None:
    home = Home(tmp_path)
    write(tmp_path, COLEBROOK + SECANT)
    with Terminal([*SUREFOOT, "colebrook.toml", "--by", "x"], environment=home.environment, folder=tmp_path) as seen:
        start = time.perf_counter()
        seen.wait_for("colebrook.toml is read")
        opened, painted = time.perf_counter() - start, len(seen.received)
        seen.press("ctrl+s")
        seen.wait_for("[2 method]")
        seen.press("b")
        seen.wait_for("0 steps, 2 evaluations")
        before = len(seen.received)
        for step in range(1, STEPS + 1):
            seen.press("space")
            seen.wait_for(f"{step} step", f"{step + 2} evaluations")
        each = (len(seen.received) - before) / STEPS
    sys.stdout.write(
        f"\nfirst screens after {opened * 1e3:.0f} ms and {painted} bytes; a step sends {each:.0f} bytes\n"
    )
    assert each < 2500
