"""The bracketing methods as plain loops in Python's floats, each written from its published description.

A loop yields each x that it moves to, and ends where the published algorithm ends for want of a narrower bracket. It
knows nothing of the package; f is a Python function. Sources are those of the methods, from memory.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator

F = Callable[[float], float]
Xs = Iterator[float]
EPS = 2.0**-52


def chord(x0: float, f0: float, x1: float, f1: float, form: str) -> float:
    if form == "symmetric":
        return (x0 * f1 - x1 * f0) / (f1 - f0)
    if form == "product":
        return x1 - f1 * (x1 - x0) / (f1 - f0)
    if form == "ratio":
        return x1 - f1 / (f1 - f0) * (x1 - x0)
    return x1 - f1 / ((f1 - f0) / (x1 - x0))


def regula_falsi(f: F, a: float, b: float, form: str) -> Xs:
    fa, fb = f(a), f(b)
    while True:
        x = chord(a, fa, b, fb, form)
        yield x
        fx = f(x)
        if (fx > 0) == (fa > 0):
            a, fa = x, fx
        else:
            b, fb = x, fx


def illinois(f: F, x0: float, x1: float, form: str) -> Xs:
    """Dowell and Jarratt 1971."""
    f0, f1 = f(x0), f(x1)
    while True:
        x2 = chord(x0, f0, x1, f1, form)
        yield x2
        f2 = f(x2)
        if (f2 > 0) != (f1 > 0):
            x0, f0 = x1, f1
        else:
            f0 = 0.5 * f0
        x1, f1 = x2, f2


def anderson_bjorck(f: F, x0: float, x1: float, form: str) -> Xs:
    """Anderson and Bjorck 1973."""
    f0, f1 = f(x0), f(x1)
    while True:
        x2 = chord(x0, f0, x1, f1, form)
        yield x2
        f2 = f(x2)
        if (f2 > 0) != (f1 > 0):
            x0, f0 = x1, f1
        else:
            gamma = 1.0 - f2 / f1
            f0 = f0 * (gamma if gamma > 0 else 0.5)
        x1, f1 = x2, f2


def ridders(f: F, a: float, b: float, form: str) -> Xs:
    """Ridders 1979; it evaluates the middle too, and yields the point after it."""
    fa, fb = f(a), f(b)
    while True:
        half = (b - a) / 2
        m = a + half if form == "offset" else (a + b) / 2
        half = half if form == "offset" else m - a
        fm = f(m)
        if fm == 0.0:
            yield m
            return
        side = 1.0 if fa > fb else -1.0
        if form == "ratios":
            x = m + side * math.copysign(1.0, fm) * (half / math.sqrt(1 - (fa / fm) * (fb / fm)))
        else:
            s = math.sqrt(fm * fm - fa * fb)
            x = m + side * half * (fm / s) if form == "quotient" else m + side * half * fm / s
        yield x
        fx = f(x)
        if (fx > 0) != (fm > 0):
            a, fa, b, fb = (x, fx, m, fm) if form == "offset" else (m, fm, x, fx)
        elif (fx > 0) != (fa > 0):
            b, fb = x, fx
        else:
            a, fa = x, fx


def brent(f: F, a: float, b: float, t: float = 0.0) -> Xs:
    """Brent 1973, procedure zero."""
    fa, fb = f(a), f(b)
    c, fc = a, fa
    d = e = b - a
    while True:
        if abs(fc) < abs(fb):
            a, b, c = b, c, b
            fa, fb, fc = fb, fc, fb
        tol = 2.0 * EPS * abs(b) + t
        m = 0.5 * (c - b)
        if abs(m) <= tol or fb == 0.0:
            return
        if abs(e) < tol or abs(fa) <= abs(fb):
            d = e = m
        else:
            s = fb / fa
            if a == c:
                p = 2.0 * m * s
                q = 1.0 - s
            else:
                q = fa / fc
                r = fb / fc
                p = s * (2.0 * m * q * (q - r) - (b - a) * (r - 1.0))
                q = (q - 1.0) * (r - 1.0) * (s - 1.0)
            if p > 0:
                q = -q
            else:
                p = -p
            s, e = e, d
            if 2.0 * p < 3.0 * m * q - abs(tol * q) and p < abs(0.5 * s * q):
                d = p / q
            else:
                d = e = m
        a, fa = b, fb
        b += d if abs(d) > tol else tol if m > 0 else -tol
        yield b
        fb = f(b)
        if (fb > 0) == (fc > 0):
            c, fc = a, fa
            d = e = b - a


def chandrupatla(f: F, x1: float, x2: float, t_absolute: float = 0.0) -> Xs:
    """Chandrupatla 1997."""
    f1, f2 = f(x1), f(x2)
    t = 0.5
    while True:
        x = x1 + t * (x2 - x1)
        yield x
        fx = f(x)
        if (fx > 0) == (f1 > 0):
            x3, f3 = x1, f1
        else:
            x3, f3, x2, f2 = x2, f2, x1, f1
        x1, f1 = x, fx
        xm, fm = (x1, f1) if abs(f1) < abs(f2) else (x2, f2)
        tl = (2 * EPS * abs(xm) + t_absolute) / abs(x2 - x1)
        if tl > 0.5 or fm == 0.0:
            return
        xi = (x1 - x2) / (x3 - x2)
        phi = (f1 - f2) / (f3 - f2)
        alpha = (x3 - x1) / (x2 - x1)
        if 1 - math.sqrt(1 - xi) < phi < math.sqrt(xi):
            t = f1 / (f1 - f2) * f3 / (f3 - f2) - alpha * f1 / (f3 - f1) * f2 / (f2 - f3)
        else:
            t = 0.5
        t = min(max(t, tl), 1 - tl)


def toms_748(f: F, a: float, b: float, k: int, tolerance: float = 0.0) -> Xs:
    """Alefeld, Potra and Shi 1995: RROOT with BRACKT, NEWQUA and PZERO, written out."""
    fa, fb = f(a), f(b)
    d = fd = e = fe = math.nan

    def clear(c: float) -> float:
        tol = 0.7 * 2.0 * (tolerance + 2.0 * abs(b if abs(fb) <= abs(fa) else a) * EPS)
        if b - a <= 2.0 * tol:
            return a + 0.5 * (b - a)
        return a + tol if c <= a + tol else b - tol if c >= b - tol else c

    def ended() -> bool:
        return fa == 0.0 or b - a <= 2.0 * (tolerance + 2.0 * abs(b if abs(fb) <= abs(fa) else a) * EPS)

    def cut(c: float) -> None:
        nonlocal a, fa, b, fb, d, fd
        fc = f(c)
        if fc == 0.0:
            a, fa = c, fc
        elif (fc > 0) != (fa > 0):
            d, fd, b, fb = b, fb, c, fc
        else:
            d, fd, a, fa = a, fa, c, fc

    iteration = 0
    while not ended():
        width, iteration = b - a, iteration + 1
        if iteration == 1:
            c = clear(a - (fa / (fb - fa)) * (b - a))
            yield c
            cut(c)
            continue
        for steps in range(2, k + 2):
            c = math.nan
            if iteration > 2 or steps > 2:
                c = inverse_cubic(a, b, d, e, fa, fb, fd, fe) if len({fa, fb, fd, fe}) == 4 else math.nan
            if not a < c < b:
                c = newton_quadratic(a, b, d, fa, fb, fd, steps)
            e, fe = d, fd
            c = clear(c)
            yield c
            cut(c)
            if ended():
                return
        u, fu = (a, fa) if abs(fa) < abs(fb) else (b, fb)
        c = u - 2.0 * (fu / (fb - fa)) * (b - a)
        if abs(c - u) > 0.5 * (b - a):
            c = a + 0.5 * (b - a)
        e, fe = d, fd
        c = clear(c)
        yield c
        cut(c)
        if ended() or b - a < 0.5 * width:
            continue
        e, fe = d, fd
        c = clear(a + 0.5 * (b - a))
        yield c
        cut(c)


def newton_quadratic(a: float, b: float, d: float, fa: float, fb: float, fd: float, k: int) -> float:
    a1 = (fb - fa) / (b - a)
    a2 = ((fd - fb) / (d - b) - a1) / (d - a)
    if a2 == 0.0:
        return a - fa / a1
    c = a if (a2 > 0) == (fa > 0) else b
    for _ in range(k):
        pc = fa + (a1 + a2 * (c - b)) * (c - a)
        pdc = a1 + a2 * (2.0 * c - (a + b))
        if pdc == 0.0:
            return a - fa / a1
        c = c - pc / pdc
    return c


def inverse_cubic(a: float, b: float, d: float, e: float, fa: float, fb: float, fd: float, fe: float) -> float:
    q11 = (d - e) * fd / (fe - fd)
    q21 = (b - d) * fb / (fd - fb)
    q31 = (a - b) * fa / (fb - fa)
    d21 = (b - d) * fd / (fd - fb)
    d31 = (a - b) * fb / (fb - fa)
    q22 = (d21 - q11) * fb / (fe - fb)
    q32 = (d31 - q21) * fa / (fd - fa)
    d32 = (d31 - q21) * fd / (fd - fa)
    q33 = (d32 - q22) * fa / (fe - fa)
    return a + q31 + q32 + q33


def itp(f: F, a: float, b: float, epsilon: float, kappa1: float = 0.1, kappa2: float = 2.0, n0: int = 1) -> Xs:
    """Oliveira and Takahashi 2020, algorithm 1."""
    ya, yb = f(a), f(b)
    steps = n0
    while epsilon * 2.0 ** (steps - n0) < (b - a) / 2:
        steps += 1
    j = 0
    while b - a > 2 * epsilon:
        half = (a + b) / 2
        r = epsilon * 2.0 ** (steps - j) - (b - a) / 2
        delta = kappa1 * (b - a) ** kappa2
        xf = (yb * a - ya * b) / (yb - ya)
        sigma = math.copysign(1.0, half - xf) if half != xf else 0.0
        xt = xf + sigma * delta if delta <= abs(half - xf) else half
        x = xt if abs(xt - half) <= r else half - sigma * r
        yield x
        y = f(x)
        if y == 0.0:
            return
        if (y > 0) == (yb > 0):
            b, yb = x, y
        else:
            a, ya = x, y
        j += 1


def safeguarded_newton(f: F, df: F, x1: float, x2: float) -> Xs:
    """Press et al. 2007, rtsafe."""
    low, high = (x1, x2) if f(x1) < 0 else (x2, x1)
    before = step = abs(x2 - x1)
    x = 0.5 * (x1 + x2)
    while True:
        yield x
        fx, slope = f(x), df(x)
        if fx == 0.0:
            return
        if fx < 0:
            low = x
        else:
            high = x
        inside = ((x - high) * slope - fx) * ((x - low) * slope - fx) <= 0
        if not inside or abs(2.0 * fx) > abs(before * slope):
            before, step = step, 0.5 * (high - low)
            x = low + step
        else:
            before, step = step, fx / slope
            x = x - step
