"""10 000 mutated problem files. The seed is drawn, printed, and can be given in SUREFOOT_SEED."""

from __future__ import annotations

import os
from random import SystemRandom

from support.problem_file_fuzz import run


def test_mutated_problem_files_are_read_or_refused() -> None:
    seed = int(os.environ.get("SUREFOOT_SEED", SystemRandom().randrange(2**32)))
    became = run(seed, count=10_000)
    assert became["accepted"] > 500
    assert became["refused"] > 5_000
