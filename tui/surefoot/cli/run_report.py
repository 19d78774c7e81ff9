"""What `surefoot run` prints of a run that has ended."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from surefoot.cli import streams
from surefoot.cli.iterates import Row, digits, rows_of
from surefoot.cli.judgement import Judgement
from surefoot.cli.output import aligned, json_number, say_object
from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.problem import Problem
from surefoot.equation.results import Failure, Real
from surefoot.figures.numbers import short, with_unit
from surefoot.methods.table import method_of
from surefoot.session.state import Run

_SIX = 6  # digits of residuals and steps; the iterates have all of theirs


def say_run_object(run: Run, judgement: Judgement, saved: Path | None) -> None:
    """Print the JSON object of a run."""
    arithmetic, rows = rows_of(run)
    say_object(
        {
            "outcome": run.ending.outcome if run.ending else None,
            "root": json_number(judgement.root, arithmetic),
            "in_range": judgement.in_range,
            "admissible": judgement.admissible,
            "steps": run.steps,
            "evaluations": run.spent.total,
            "iterates": [
                {
                    "k": row.iterate.k,
                    "x": json_number(row.iterate.x, arithmetic),
                    "f": json_number(row.iterate.f, arithmetic),
                    "dx": json_number(row.measure.dx, arithmetic),
                }
                for row in rows
            ],
            "session": str(saved) if saved is not None else None,
        }
    )


def say_run(run: Run, judgement: Judgement, saved: Path | None) -> None:
    """Print the steps of a run, how it ended and what it cost."""
    assert run.ending is not None, "only a run that has ended is printed"
    problem = run.stated.problem
    arithmetic, rows = rows_of(run)
    lines = [
        problem.title or problem.equation,
        f"{method_of(run.plan.method).traits.title}, {run.plan.arithmetic}",
        "",
        *_table(problem, arithmetic, rows),
        "",
        f"{run.ending.outcome}: {run.ending.says}",
    ]
    if judgement.root is not None:
        lines.append(f"{problem.unknown} = {with_unit(digits(judgement.root, arithmetic), problem.unit)}")
        lines += _standing(problem, judgement)
    lines.append(_cost(run))
    if saved is not None:
        lines.append(f"session: {saved}")
    streams.say("".join(f"{streams.one_line(line)}\n" for line in lines))


def _table(problem: Problem, arithmetic: Arithmetic, rows: Sequence[Row]) -> list[str]:
    """One row an iterate; the column of limits only when a limit held."""
    unknown = problem.unknown
    heads = ["k", with_unit(unknown, f"[{problem.unit}]" if problem.unit else ""), "residual", f"d{unknown}", "limits"]
    table = [heads]
    for row in rows:
        cells = [str(row.iterate.k), digits(row.iterate.x, arithmetic), _short(row.iterate.f, arithmetic)]
        table.append([*cells, _short(row.measure.dx, arithmetic), ", ".join(row.limits)])
    if not any(row.limits for row in rows):
        table = [line[:-1] for line in table]
    return aligned(table, right=frozenset({0}))


def _short(x: Real | Failure | None, arithmetic: Arithmetic) -> str:
    if isinstance(x, Failure):
        return "no value"
    return "" if x is None else short(arithmetic.encode(x), _SIX)


def _standing(problem: Problem, judgement: Judgement) -> list[str]:
    """What deviates from a root that can be used; nothing when nothing does."""
    lines = []
    if judgement.in_range is False and problem.range is not None:
        lines.append(f"outside the working range {problem.range[0]} to {problem.range[1]}")
    if judgement.admissible is False:
        lines.append(f"not admissible: {' and '.join(problem.admissible)} does not hold")
    if judgement.admissible is None and problem.admissible:
        lines.append(f"admissibility is undecided: {' and '.join(problem.admissible)} has no value here")
    return lines


def _cost(run: Run) -> str:
    spent = run.spent
    counts = [(spent.f, "of f"), (spent.derivative, "of the derivative"), (spent.g, "of g")]
    told = ", ".join(f"{count} {what}" for count, what in counts if count)
    return f"{run.steps} step{'' if run.steps == 1 else 's'}, evaluations: {told or 'none'}"
