"""Time of a whole picture against that of plotext alone drawing the same curve, zero line and marks."""

import math
import sys
import time
from collections.abc import Callable

import pytest
from plotext._figure import _figure_class

from surefoot.figures.characters import UNICODE
from surefoot.figures.function_picture import StepShape, function_picture
from surefoot.figures.picture import Axis
from surefoot.figures.plot import draw


def best_of(work: Callable[[], object], repeats: int = 15) -> float:
    times = []
    for _ in range(repeats):
        start = time.perf_counter()
        work()
        times.append(time.perf_counter() - start)
    return min(times)


@pytest.mark.parametrize(("width", "height"), [(28, 8), (80, 24), (200, 50)])
def test_a_picture_costs_little_more_than_plotext_alone(width: int, height: int) -> None:
    xs = [n / (2 * width - 1) for n in range(2 * width)]
    ys = [math.sin(9 * x) for x in xs]

    def ours() -> list[str]:
        step = StepShape("tangent", ((0.4, math.sin(3.6)),), 0.35)
        picture = function_picture((xs, ys), iterates=[(0.4, 0.0), (0.35, 0.0)], step=step, x=Axis("x"), f=Axis("f"))
        return draw(picture, width, height, UNICODE)

    def bare() -> str:
        figure = _figure_class()
        figure._set_size(width, height)
        figure.theme("clear")
        figure.plot(xs, ys, marker="braille")
        figure.plot([0, 1], [0, 0], marker="braille")
        figure.plot([0.4, 0.35], [math.sin(3.6), 0.0], marker="braille")
        figure.scatter([0.4, 0.35], [0, 0], marker="x")
        return str(figure.build())

    mine, plain = best_of(ours), best_of(bare)
    sys.stdout.write(
        f"\n{width}x{height}: {mine * 1e3:.2f} ms, plotext alone {plain * 1e3:.2f} ms, ratio {mine / plain:.2f}\n"
    )
    assert mine < 2.5 * plain
