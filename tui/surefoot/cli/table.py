"""`surefoot table`: the iterates of one run of a session, as CSV (RFC 4180) or one JSON object."""

from __future__ import annotations

import csv
import io
from pathlib import Path

from surefoot.cli import streams
from surefoot.cli.arguments import Request
from surefoot.cli.exits import Exit, RequestError
from surefoot.cli.iterates import digits, rows_of
from surefoot.cli.output import json_number, say_object
from surefoot.session.loading import load
from surefoot.session.state import Run, SessionState

COLUMNS = ("k", "x", "f", "dx", "ratio", "order", "limits")


def table(request: Request) -> int:
    """Print the iterates; the exit code. Raises SurefootError."""
    name = request.operands[0]
    run = _chosen(load(Path(name)).state, request.value("--run"), name)
    (_say_object if request.flag("--json") else _say_csv)(run)
    return Exit.GOOD


def _chosen(state: SessionState, number: str | None, name: str) -> Run:
    """The run that is asked for. Raises RequestError that lists the runs there are."""
    if not state.runs:
        raise RequestError("holds no run yet; open it and begin one", place=name)
    if number is None:
        assert state.run is not None, "a session with runs has one in hand"
        return state.run
    for run in state.runs:
        if str(run.number) == number:
            return run
    known = ", ".join(str(run.number) for run in state.runs)
    raise RequestError(f"holds no run {number}; it holds {known}", place=name)


def _say_csv(run: Run) -> None:
    """Numbers in all their digits; a field is empty where there is no number."""
    arithmetic, rows = rows_of(run)
    text = io.StringIO(newline="")
    writer = csv.writer(text, lineterminator="\r\n")
    writer.writerow(COLUMNS)
    for row in rows:
        measured = [row.measure.dx, row.measure.contraction, row.measure.order]
        numbers = [digits(x, arithmetic) for x in (row.iterate.x, row.iterate.f, *measured)]
        writer.writerow([row.iterate.k, *numbers, "; ".join(row.limits)])
    streams.say(text.getvalue())


def _say_object(run: Run) -> None:
    arithmetic, rows = rows_of(run)
    say_object(
        {
            "run": run.number,
            "method": run.plan.method,
            "unknown": run.stated.problem.unknown,
            "unit": run.stated.problem.unit,
            "arithmetic": run.plan.arithmetic,
            "outcome": run.ending.outcome if run.ending else None,
            "iterates": [
                {
                    "k": row.iterate.k,
                    "x": json_number(row.iterate.x, arithmetic),
                    "f": json_number(row.iterate.f, arithmetic),
                    "dx": json_number(row.measure.dx, arithmetic),
                    "ratio": row.measure.contraction,
                    "order": row.measure.order,
                    "limits": list(row.limits),
                }
                for row in rows
            ],
        }
    )
