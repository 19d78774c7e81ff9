"""Half-typed text beside the session: what a lost terminal would take with it. It is no part of the record."""

from __future__ import annotations

import contextlib
import json
import os
from collections.abc import Mapping
from pathlib import Path

from surefoot.errors import RecordError
from surefoot.session.record import reason

_MAX_BYTES = 4 * 1024 * 1024


class Draft:
    """The draft of one session (`NAME.draft`), or of a folder in which a session is about to begin (`new.draft`).

    Attributes:
        path: the draft's file; it exists only while there is a draft.
    """

    def __init__(self, session_or_folder: Path) -> None:
        beside = session_or_folder
        self.path = beside / "new.draft" if beside.is_dir() else beside.with_suffix(".draft")

    def save(self, fields: Mapping[str, str]) -> None:
        """Replace the draft by these texts in one go, and see them to disk.

        Raises:
            RecordError: it cannot be written; the draft from before is still there.
        """
        beside = self.path.with_name(f"{self.path.name}.{os.getpid()}")
        try:
            with beside.open("w", encoding="utf-8", errors="surrogatepass") as file:
                json.dump(dict(fields), file)
                file.flush()
                os.fsync(file.fileno())
            os.replace(beside, self.path)
        except OSError as error:
            with contextlib.suppress(OSError):
                beside.unlink()
            raise RecordError(f"the draft cannot be written: {reason(error)}", file=str(self.path)) from error

    def load(self) -> dict[str, str] | None:
        """The texts of the draft; None when there is none, or none that can be read."""
        try:
            with self.path.open("rb") as file:
                fields = json.loads(file.read(_MAX_BYTES))
        except (OSError, ValueError, RecursionError):
            return None
        if not isinstance(fields, dict) or not all(isinstance(text, str) for text in fields.values()):
            return None
        return fields

    def remove(self) -> None:
        """The text was accepted, or thrown away."""
        with contextlib.suppress(OSError):
            self.path.unlink()
