"""The end of every command: whatever is raised becomes one line and an exit code. No traceback reaches a user."""

from __future__ import annotations

import os
import signal
import sys
from collections.abc import Sequence
from pathlib import Path
from types import TracebackType

from surefoot import __version__
from surefoot.cli import streams
from surefoot.cli.exits import SIGNALLED, Exit
from surefoot.cli.interruption import Interrupted
from surefoot.errors import SurefootError


class Guard:
    """Stands around a command. `code` is what the command gave, or what its error comes to."""

    def __init__(self, words: Sequence[str]) -> None:
        self.code: int = Exit.GOOD
        self._words = tuple(words)

    def __enter__(self) -> Guard:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> bool:
        if error is None:
            return False
        code = self._code_of(error)
        if code is not None:
            self.code = code
        return code is not None

    def _code_of(self, error: BaseException) -> int | None:
        """The exit code of what was raised, after its one line was written; None for what is not ours to end."""
        match error:
            case Interrupted():
                return SIGNALLED + error.number
            case KeyboardInterrupt():
                return SIGNALLED + signal.SIGINT
            case BrokenPipeError():
                streams.silence(sys.stdout)
                return SIGNALLED + signal.SIGPIPE
            case SurefootError():
                streams.complain(str(error))
                return Exit.REQUEST
            case OSError(filename=str() as name):
                streams.complain(f"{name}: {error.strerror}; check the path and its permissions")
                return Exit.REQUEST
            case Exception():
                streams.complain(_report(error, self._words))
                return Exit.FAULT
        return None


def _report(error: Exception, words: Sequence[str]) -> str:
    """Save what is needed to mend the fault; the line that says where it is."""
    import platform
    import tempfile
    import traceback
    from datetime import UTC, datetime

    now = datetime.now(UTC)
    text = "\n".join(
        (
            f"surefoot {__version__}, Python {platform.python_version()}, {platform.platform()}",
            f"at {now.isoformat(timespec='seconds')}",
            f"words: {list(words)!a}",
            "",
            "".join(traceback.format_exception(error)),
        )
    )
    says = f"this is a fault of surefoot ({type(error).__name__})"
    for folder in (state_folder(), Path(tempfile.gettempdir())):
        path = folder / f"surefoot-fault-{now:%Y-%m-%dT%H%M%S.%fZ}.txt"
        try:
            folder.mkdir(mode=0o700, parents=True, exist_ok=True)
            with path.open("x", encoding="utf-8", errors="backslashreplace") as file:
                file.write(text)
        except OSError:
            continue
        return f"{path}: {says}; please send this report with the problem or session"
    return f"{says}, and no report could be saved: {error}"


def state_folder() -> Path:
    """Where reports of faults are kept: surefoot's part of the user's state folder."""
    base = os.environ.get("XDG_STATE_HOME") or ""
    return Path(base if Path(base).is_absolute() else os.path.expanduser("~/.local/state")) / "surefoot"
