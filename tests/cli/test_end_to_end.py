"""The main job on a terminal of 80x24: type Colebrook-White, step the secant rule, lose the line, resume, recompute.

The equation is that of C. F. Colebrook, J. Inst. Civ. Eng. 11 (1939) 133-156; the root is the published figure of
`hyd-colebrook-lib` in the published data.
"""

from __future__ import annotations

import json
from math import log10, sqrt
from pathlib import Path

import pytest

from support.command import SUREFOOT, Home
from support.problem_files import COLEBROOK, DIVERGING_SECANT, SECANT, published_root, write
from support.terminal import KEYS, Terminal
from surefoot.cli.exits import Exit

EQUATION = "1/sqrt(f) = -2*log10(eps/(3.7*D) + 2.51/(Re*sqrt(f)))"
INPUTS = "Re = 1e5\reps = 1e-4 m\rD = 1.0 m"


def secant(x0: float, x1: float, steps: int) -> list[tuple[float, float]]:
    """Plain Python: the iterates and residuals of the secant rule, in the order of operations of the equation."""

    def f(x: float) -> float:
        return 1 / sqrt(x) - -2 * log10(1e-4 / (3.7 * 1.0) + 2.51 / (1e5 * sqrt(x)))

    pairs = [(x0, f(x0)), (x1, f(x1))]
    for _ in range(steps):
        (a, fa), (b, fb) = pairs[-2:]
        x = b - fb * (b - a) / (fb - fa)
        pairs.append((x, f(x)))
    return pairs


def open_screens(home: Home, *words: str) -> Terminal:
    return Terminal([*SUREFOOT, *words], environment=home.environment, folder=home.folder)


def iterates_on_disk(session: Path) -> list[tuple[float, float]]:
    """What the record holds of the run, read as plain JSON."""
    found = []
    for event in json.loads(session.read_bytes())["events"]:
        content = event["content"]
        rows = content["iterates"] if event["kind"] == "run_begun" else [content.get("iterate")]
        found += [(float(row["x"]), float(row["f"])) for row in rows if row]
    return found


def state_the_problem(seen: Terminal) -> None:
    """Type the equation, the inputs and the working range, and accept them."""
    seen.wait_for("No sessions here yet")
    seen.press("n")
    seen.wait_for("its equation: type it")
    seen.press("enter")
    seen.wait_for("equation, column 1")
    seen.send(EQUATION)
    seen.wait_for(f"equation, column {len(EQUATION) + 1}")
    for place in ("where, line 1", "inputs, line 1"):
        seen.press("tab")
        seen.wait_for(place)
    seen.send(INPUTS)
    seen.wait_for("inputs, line 3", "D = 1.0 m")
    for place in ("where, line 1", "equation, ", "needed, ", "range to,", "range from,"):
        seen.press("shift+tab")
        seen.wait_for(place)
    seen.send("0.005")
    seen.press("tab")
    seen.wait_for("range to,")
    seen.send("0.1")
    seen.wait_for("to 0.1")
    seen.press("ctrl+s")
    seen.wait_for("[2 method]", "accepted")


def begin_the_run(seen: Terminal) -> None:
    """Choose the secant rule and its two starts."""
    seen.press("up", "up", "up", "enter")
    seen.wait_for(">secant", "start 2")
    for start in ("0.02", "0.03"):
        seen.press("enter")
        seen.wait_for("enter takes it")
        seen.send(start)
        seen.wait_for(start)
        seen.press("enter")
        seen.wait_until(lambda now, start=start: f" {start} " in now.text and "enter takes it" not in now.text)
        seen.press("down")
    seen.press("b")
    seen.wait_for("[3 steps]", "0 steps, 2 evaluations")


def test_the_main_job(home: Home) -> None:
    plain = secant(0.02, 0.03, 7)
    with open_screens(home, "--by", "M. R., duty") as seen:
        state_the_problem(seen)
        begin_the_run(seen)
        [session] = (home.folder / "data" / "surefoot" / "sessions").glob("*.json")
        for step in range(1, 5):
            seen.press("space")
            seen.wait_for(f"{step} step{'' if step == 1 else 's'}, {step + 2} evaluations")
            # What is shown is on disk, to the bit of the plain loop.
            assert iterates_on_disk(session) == plain[: step + 2]
        seen.kill()
    with open_screens(home, "--by", "K. L., relief") as seen:
        seen.wait_for("1 found", "stepping")
        seen.press("enter")
        seen.wait_for("[3 steps]", "4 steps, 6 evaluations", "left open by M. R., duty")
        for step in range(5, 8):
            seen.press("space")
            seen.wait_for(f"{step} steps, {step + 2} evaluations")
        seen.wait_for("converged", "the residual is exactly zero")
        assert iterates_on_disk(session) == plain
        seen.press("4")
        seen.wait_for("[4 record]", "session resumed")
        seen.press("r")
        seen.wait_for("all 7 steps reproduced to the bit; chain whole, 11 events")
        seen.press("ctrl+q")
        assert seen.wait_end() == Exit.GOOD
        left = seen.after_the_screens
    root = plain[-1][0]
    assert root == pytest.approx(float(published_root("hyd-colebrook-lib").value), rel=4e-16)
    assert f"surefoot: converged, f = {root:.17g}; {session}\r\n" in left
    answer = home.run("recompute", str(session), "--json")
    assert answer.returncode == Exit.GOOD
    assert json.loads(answer.stdout)["sessions"][0]["steps"] == 7
    names = [event["by"] for event in json.loads(session.read_bytes())["events"]]
    assert names == ["M. R., duty"] * 7 + ["K. L., relief"] * 4


def test_keys_that_arrive_at_once_act_in_their_order(home: Home) -> None:
    """A line that stalled delivers what was typed in one piece: what follows a tab belongs to the next field."""
    with open_screens(home, "--by", "M. R., duty") as seen:
        seen.wait_for("No sessions here yet")
        tab, back = KEYS["tab"], KEYS["shift+tab"]
        seen.send(f"n{KEYS['enter']}{EQUATION}{tab}{tab}{INPUTS}{back * 4}0.1{back}0.005{KEYS['ctrl+s']}")
        seen.wait_for("[2 method]", "accepted")
        choose, take = KEYS["up"] * 3 + KEYS["enter"], KEYS["enter"]
        seen.send(f"{choose}{take}0.02{take}{KEYS['down']}{take}0.03{take}b   ")
        seen.wait_for("[3 steps]", "3 steps, 5 evaluations")
    [session] = (home.folder / "data" / "surefoot" / "sessions").glob("*.json")
    assert iterates_on_disk(session) == secant(0.02, 0.03, 3)


def test_a_problem_file_with_its_plan_opens_and_goes_to_the_stop(home: Home) -> None:
    write(home.folder, COLEBROOK + DIVERGING_SECANT)
    with open_screens(home, "colebrook.toml", "--by", "M. R., duty") as seen:
        seen.wait_for("[1 function]", "colebrook.toml is read; a accepts it")
        seen.press("ctrl+s")
        seen.wait_for("[2 method]", ">secant")
        seen.press("b")
        seen.wait_for("[3 steps]", "0 steps, 2 evaluations")
        seen.press("end")
        seen.wait_for("1 step, 3 evaluations")
        assert "outside the domain: sqrt(f)" in seen.text


def test_a_session_opens_by_its_name(home: Home) -> None:
    write(home.folder, COLEBROOK + SECANT)
    assert home.run("run", "colebrook.toml", "--save", "s.json").returncode == Exit.GOOD
    with open_screens(home, "s.json", "--by", "M. R., duty") as seen:
        seen.wait_for("[3 steps]", "7 steps, 9 evaluations", "converged")
        seen.hang_up()
        assert seen.process.wait(20) == 129
    assert home.run("recompute", "s.json").returncode == Exit.GOOD


@pytest.mark.parametrize("words", [("--ascii",), ()], ids=["asked", "by the locale"])
def test_nothing_but_ascii_where_the_terminal_shows_no_more(home: Home, words: tuple[str, ...]) -> None:
    write(home.folder, COLEBROOK + SECANT)
    home.run("run", "colebrook.toml", "--save", "s.json")
    environment = home.environment if words else {**home.environment, "LANG": "C", "LC_ALL": "C"}
    with Terminal([*SUREFOOT, "s.json", "--by", "x", *words], environment=environment, folder=home.folder) as seen:
        seen.wait_for("[3 steps]", "converged")
        seen.press("ctrl+q")
        assert seen.wait_end() == Exit.GOOD
        assert bytes(seen.received).isascii()


def test_a_signal_ends_the_screens_in_good_order(home: Home) -> None:
    with open_screens(home, "--by", "M. R., duty") as seen:
        seen.wait_for("No sessions here yet")
        seen.process.terminate()
        assert seen.wait_end() == 143
        assert bytes(seen.received).rstrip().endswith((b"\x1b[?1049l", b"\x1b[?25h", b"\x1b[?1004l", b"l", b"h"))
