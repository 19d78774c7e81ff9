"""100 000 mutated equation texts. The seed is drawn, printed, and can be given in SUREFOOT_SEED."""

from __future__ import annotations

import os
from random import SystemRandom

from support.equation_fuzz import run


def test_mutated_texts_are_read_or_refused() -> None:
    seed = int(os.environ.get("SUREFOOT_SEED", SystemRandom().randrange(2**32)))
    became = run(seed, count=100_000)
    assert became["parse_equation accepted"] > 5_000
    assert became["value"] > 1_000
