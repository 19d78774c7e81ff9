"""Whole pictures as a person sees them, cell by cell, with the functions of the demo scenario."""

import math
from collections.abc import Callable
from pathlib import Path

import pytest

from surefoot.figures.characters import ASCII, UNICODE, Characters
from surefoot.figures.convergence_picture import convergence_picture
from surefoot.figures.function_picture import StepShape, function_picture
from surefoot.figures.picture import Axis, Picture
from surefoot.figures.plot import draw

GOLDEN = Path(__file__).parent / "golden"


def tailrace(y: float) -> float:
    """Discharge at depth y in a trapezoidal channel less 12 m3/s, after Manning."""
    area, wetted = (3.0 + 1.5 * y) * y, 3.0 + 2.0 * y * math.sqrt(1.0 + 1.5**2)
    return area / 0.025 * (area / wetted) ** (2 / 3) * math.sqrt(0.0008) - 12.0


def penstock(f: float) -> float:
    """The residual of Colebrook-White."""
    return 1 / math.sqrt(f) + 2 * math.log10(4.6e-5 / (3.7 * 0.05) + 2.51 / (1e5 * math.sqrt(f)))


def over(f: Callable[[float], float], low: float, high: float, count: int) -> tuple[list[float], list[float]]:
    xs = [low * (1 - n / (count - 1)) + high * (n / (count - 1)) for n in range(count)]
    return xs, [f(x) for x in xs]


def tangent(width: int) -> Picture:
    """Newton-Raphson from far out: the third step."""
    iterates = [(x, tailrace(x)) for x in (6.11, 3.6744937721, 2.3716946576)]
    step = StepShape("tangent", (iterates[1],), iterates[2][0])
    samples = over(tailrace, 0.05, 6.0, 2 * width)
    return function_picture(samples, iterates=iterates, step=step, x=Axis("y", "m"), f=Axis("f", "m3/s"))


def chord(width: int) -> Picture:
    """A step of the secant method."""
    points = [(x, penstock(x)) for x in (0.01, 0.03)]
    (a, fa), (b, fb) = points
    landing = b - fb * (b - a) / (fb - fa)
    step = StepShape("chord", tuple(points), landing)
    samples = over(penstock, 0.005, 0.1, 2 * width)
    return function_picture(
        samples, iterates=[*points, (landing, penstock(landing))], step=step, x=Axis("f"), f=Axis("r")
    )


def poles(width: int) -> Picture:
    return function_picture(over(math.tan, -6.0, 6.0, 2 * width), bounds=(-5.0, 5.0))


def convergence(width: int) -> Picture:
    return convergence_picture(
        [(0, None, 40.0), (1, -2.4, 9.0), (2, -0.5, 0.3), (3, -2e-3, 2e-5), (4, -1e-7, 0.0)], name="y"
    )


PICTURES = {"tangent": tangent, "chord": chord, "poles": poles, "convergence": convergence}


@pytest.mark.parametrize("characters", [UNICODE, ASCII], ids=["unicode", "ascii"])
@pytest.mark.parametrize(("width", "height"), [(28, 8), (80, 20)])
@pytest.mark.parametrize("name", PICTURES)
def test_whole_picture(name: str, width: int, height: int, characters: Characters) -> None:
    lines = draw(PICTURES[name](width), width, height, characters)
    file = GOLDEN / f"{name}-{width}x{height}-{'unicode' if characters.unicode else 'ascii'}.txt"
    assert "".join(f"{line}|\n" for line in lines) == file.read_text(encoding="utf-8")
