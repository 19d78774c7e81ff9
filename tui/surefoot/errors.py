"""The errors a person can act on. The message of each is one line: what is wrong, where, what to do.

    SurefootError
      EquationError        text of an equation, condition or definition (line, column, what would be accepted)
      ProblemError         a problem file or problem (file, place)
      PlanError            a plan: unknown method, setting out of range, missing start (key)
      RecordError          a session file that cannot be read or written
      Refused              a command that the session's state does not allow now (reason, hint)

Numeric trouble is not an error: it is a value (`surefoot.equation.results.Failure`).
"""

from __future__ import annotations


class SurefootError(Exception):
    """Base of all errors that are shown to a person; `str(error)` is the one line shown."""


class EquationError(SurefootError):
    """Text that the equation language does not accept.

    Attributes:
        message: what is wrong, without the place.
        line: line of the text, from 1.
        column: column of the text, from 1, counted in characters.
        hint: what would be accepted here, or the nearest known name; empty if there is nothing to say.
    """

    def __init__(self, message: str, *, column: int, line: int = 1, hint: str = "") -> None:
        self.message, self.line, self.column, self.hint = message, line, column, hint
        place = f"column {column}" if line == 1 else f"line {line}, column {column}"
        super().__init__(f"{place}: {message}" + (f"; {hint}" if hint else ""))


class ProblemError(SurefootError):
    """A problem, or the file that states it, is not acceptable.

    Attributes:
        message: what is wrong and what to do.
        place: the key (`inputs.n.value`) or `line 4`; empty when the whole file is meant.
        file: name of the file, empty for a problem that was typed.
        equation_error: the error of the text at `place`, where that is the cause.
    """

    def __init__(
        self, message: str, *, place: str = "", file: str = "", equation_error: EquationError | None = None
    ) -> None:
        self.message, self.place, self.file, self.equation_error = message, place, file, equation_error
        super().__init__(": ".join(part for part in (file, place, message) if part))


class PlanError(SurefootError):
    """A plan that cannot be run: `key` names the setting (`plan.stop.x_absolute`)."""

    def __init__(self, message: str, *, key: str = "") -> None:
        self.message, self.key = message, key
        super().__init__(f"{key}: {message}" if key else message)


class RecordError(SurefootError):
    """A session file that cannot be read, trusted or written: `file`, and the event where known."""

    def __init__(self, message: str, *, file: str = "", event: int | None = None) -> None:
        self.message, self.file, self.event = message, file, event
        place = f"event {event}" if event is not None else ""
        super().__init__(": ".join(part for part in (file, place, message) if part))


class Refused(SurefootError):
    """A command that is not allowed now. `reason` says why, `hint` what to do instead."""

    def __init__(self, reason: str, hint: str = "") -> None:
        self.reason, self.hint = reason, hint
        super().__init__(f"{reason}; {hint}" if hint else reason)
