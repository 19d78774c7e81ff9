"""Hypothesis strategies of problems, for the tests of every floor.

`problems()` gives data that is well formed but means nothing: it is for what stores and shows a problem.
"""

from __future__ import annotations

from hypothesis import strategies as st

from surefoot.equation.problem import Correlation, Definition, Derivative, Input, Job, Problem

DISTRIBUTIONS = ("normal", "rectangular", "triangular", "t")

names = st.from_regex(r"[A-Za-zα-ωΑ-Ω_][A-Za-z0-9_]{0,8}", fullmatch=True)
one_line_texts = st.text(st.characters(exclude_categories=["Cs", "Cc"]), max_size=30)
texts = st.text(st.characters(exclude_categories=["Cs"]), max_size=60)


@st.composite
def literals(draw: st.DrawFn) -> str:
    """A finite number as a person types it in a problem file: decimal, whole, or the exact bits."""
    number = draw(st.floats(allow_nan=False, allow_infinity=False))
    style = draw(st.sampled_from(["shortest", "exponent", "whole", "bits"]))
    if style == "exponent":
        return f"{number:.6e}"
    if style == "whole":
        return str(draw(st.integers(-(10**12), 10**12)))
    return number.hex() if style == "bits" else repr(number)


@st.composite
def inputs(draw: st.DrawFn, name: str) -> Input:
    """An input with any of its fields; at most one way of stating the uncertainty, as a problem file has it."""
    spread = draw(st.sampled_from(["", "uncertainty", "half_width", "interval"]))
    distribution = draw(st.sampled_from(DISTRIBUTIONS)) if spread and draw(st.booleans()) else None
    return Input(
        name=name,
        value=draw(literals()),
        unit=draw(st.sampled_from(["", "m", "m3/s", "s/m^(1/3)", "°C"])),
        low=draw(st.none() | literals()),
        high=draw(st.none() | literals()),
        uncertainty=draw(literals()) if spread == "uncertainty" else None,
        half_width=draw(literals()) if spread == "half_width" else None,
        interval=(draw(literals()), draw(literals())) if spread == "interval" else None,
        distribution=distribution,
        dof=draw(literals()) if distribution == "t" else None,
        source=draw(texts),
    )


jobs = st.builds(
    Job,
    reference=one_line_texts,
    revision=one_line_texts,
    purpose=texts,
    assumptions=st.lists(texts, max_size=3).map(tuple),
)
preferences = st.sampled_from(["", "smallest", "largest"]) | literals().map("nearest:{}".format)


@st.composite
def problems(draw: st.DrawFn) -> Problem:
    """A well-formed problem whose names are distinct; its texts are arbitrary."""
    unknown, *others = draw(st.lists(names, min_size=1, max_size=8, unique=True))
    split = draw(st.integers(0, len(others)))
    input_names = others[:split]
    pairs = [(a, b) for a in input_names for b in input_names if a < b]
    correlated = draw(st.lists(st.sampled_from(pairs), max_size=2, unique=True)) if pairs else []
    return Problem(
        unknown=unknown,
        equation=draw(texts),
        title=draw(one_line_texts),
        unit=draw(st.sampled_from(["", "m", "Pa", "°C"])),
        range=draw(st.none() | st.tuples(literals(), literals())),
        needed=draw(st.none() | literals()),
        admissible=tuple(draw(st.lists(texts, max_size=3))),
        prefer=draw(preferences),
        derivative=draw(texts),
        note=draw(texts),
        job=draw(jobs),
        where=tuple(Definition(name, draw(texts)) for name in others[split:]),
        inputs=tuple(draw(inputs(name)) for name in input_names),
        correlation=tuple(Correlation(pair, draw(literals())) for pair in correlated),
    )


@st.composite
def derivatives(draw: st.DrawFn) -> Derivative:
    """A well-formed derivative with arbitrary texts."""
    return Derivative(
        order=draw(st.sampled_from([1, 2, 3])),
        where=tuple(Definition(name, draw(texts)) for name in draw(st.lists(names, max_size=3, unique=True))),
        text=draw(texts),
        gaps=tuple(draw(st.lists(texts, max_size=2))),
    )
