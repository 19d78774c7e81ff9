"""10 000 changed session files. The seed is drawn, printed, and can be given in SUREFOOT_SEED."""

from __future__ import annotations

import os
import random
from pathlib import Path

from support.session_fuzz import run


def test_changed_session_files_are_refused_or_read(tmp_path: Path) -> None:
    seed = int(os.environ.get("SUREFOOT_SEED") or random.randrange(2**32))
    refused, read = run(tmp_path, seed, count=10_000)
    assert refused > 5000
    assert read > 500
