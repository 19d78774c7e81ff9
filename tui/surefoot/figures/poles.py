"""Where a sampled curve has a pole: the curve must break there, not run down the picture."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Final

from surefoot.figures.picture import Curve, place

_LARGE: Final = 4.0  # times the median of |f|


def broken_at_poles(xs: Sequence[float], ys: Sequence[float | None]) -> tuple[Curve, list[float]]:
    """The curve with a gap at each pole, and where the poles are, to half the distance of two samples.

    A pole of odd order, or a jump over zero, shows as a change of sign towards which |f| grows from both sides and
    where it is large beside its median; at a root |f| shrinks instead.
    """
    at = [place(x) for x, _ in zip(xs, ys, strict=False)]
    values = [place(y) for _, y in zip(xs, ys, strict=False)]
    sizes = sorted(abs(y) for y in values if math.isfinite(y))
    large = _LARGE * sizes[len(sizes) // 2] if sizes else 0.0
    broken_xs, broken_ys = at[:1], values[:1]
    poles: list[float] = []
    for n in range(1, len(at)):
        if _is_pole(values, n, large):
            poles.append(at[n - 1] / 2 + at[n] / 2)
            broken_xs.append(poles[-1])
            broken_ys.append(math.nan)
        broken_xs.append(at[n])
        broken_ys.append(values[n])
    return Curve(broken_xs, broken_ys), poles


def _is_pole(values: Sequence[float], n: int, large: float) -> bool:
    """Whether there is a pole between values[n - 1] and values[n]; beyond the ends |f| counts as smaller."""
    a, b = values[n - 1], values[n]
    if not (a < 0 < b or b < 0 < a) or math.isinf(a) or math.isinf(b) or max(abs(a), abs(b)) <= large:
        return False
    before = abs(values[n - 2]) if n > 1 else 0.0
    after = abs(values[n + 1]) if n + 1 < len(values) else 0.0
    return not before > abs(a) and not after > abs(b)
