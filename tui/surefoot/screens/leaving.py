"""The one line that stays in the scrollback of the terminal after the program was left."""

from __future__ import annotations

from surefoot.equation.results import Failure
from surefoot.figures.numbers import all_digits, with_unit
from surefoot.screens.words import ending_words, record_text, title_words
from surefoot.session.session import Session


def leaving_line(session: Session | None) -> str:
    """Outcome, root (or the last iterate) at 17 digits, unit and file; empty when there was no session."""
    if session is None:
        return ""
    return "".join(character if character.isprintable() else "?" for character in _line(session))


def _line(session: Session) -> str:
    run = session.state.run
    if run is None:
        return f"surefoot: {title_words(session.state)}: no run yet; {session.path}"
    problem, iterate = run.stated.problem, run.current
    value = f"{problem.unknown} = {with_unit(all_digits(record_text(run, iterate.x)), problem.unit)}"
    if run.ending is not None and run.ending.outcome == "converged":
        return f"surefoot: converged, {value}; {session.path}"
    residual = (
        "no residual" if isinstance(iterate.f, Failure) else f"residual {all_digits(record_text(run, iterate.f))}"
    )
    return f"surefoot: {ending_words(run)} at {value}, {residual}; {session.path}"
