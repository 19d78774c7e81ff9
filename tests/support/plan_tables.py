"""Hypothesis strategies of `[plan]` tables, as the reader of problem files gives them."""

from __future__ import annotations

from hypothesis import strategies as st

from support.problems import literals, names, one_line_texts, texts

_flags = st.booleans()
_counts = st.integers(0, 10**6)
_control = st.fixed_dictionaries(
    {},
    optional={
        "damping": literals(),
        "step_limit": literals(),
        "bounds": st.lists(literals(), min_size=2, max_size=2),
        "at_bound": one_line_texts,
        "derivative_every": _counts,
        "order": st.lists(one_line_texts, max_size=3),
    },
)
_stop = st.fixed_dictionaries(
    {}, optional={"x_absolute": literals(), "exact_zero": _flags, "min_steps": _counts, "test": texts}
)
_memory = st.dictionaries(names, st.fixed_dictionaries({"first": literals(), "update": texts}), min_size=1, max_size=2)
_settings = st.dictionaries(names, literals() | texts | _flags, min_size=1, max_size=3)

plan_tables = st.fixed_dictionaries(
    {"method": one_line_texts, "start": st.lists(literals(), max_size=3)},
    optional={
        "max_steps": _counts,
        "settings": _settings,
        "memory": _memory,
        "control": _control.filter(bool),
        "stop": _stop.filter(bool),
    },
)
