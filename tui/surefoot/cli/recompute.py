"""`surefoot recompute`: every step of the sessions done again, bits compared, chains of hashes checked."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from surefoot.cli import streams
from surefoot.cli.arguments import Request
from surefoot.cli.exits import Exit
from surefoot.cli.interruption import watching
from surefoot.cli.output import Json, aligned, say_object
from surefoot.errors import RecordError
from surefoot.session import recompute as session_recompute
from surefoot.session.recompute import Recomputed


@dataclass(frozen=True, slots=True)
class _Answer:
    """A session that could be read, and what recomputing it gave."""

    file: str
    recomputed: Recomputed

    @property
    def exit(self) -> Exit:
        good = self.recomputed.reproduced and self.recomputed.chain == "whole"
        return Exit.GOOD if good else Exit.OTHER


def recompute(request: Request) -> int:
    """Recompute every session named; the largest exit code. Raises Interrupted."""
    answers: list[_Answer] = []
    worst = Exit.GOOD
    with watching() as watch:
        for file in request.operands:
            try:
                with watch.deferring():
                    answer = _Answer(file, session_recompute.recompute(Path(file), stop=watch.stop))
            except RecordError as error:
                streams.complain(str(error))
                worst = max(worst, Exit.REQUEST)
                continue
            answers.append(answer)
            worst = max(worst, answer.exit)
    if request.flag("--json"):
        say_object({"sessions": [_object(answer) for answer in answers]})
    elif answers:
        streams.say("\n".join(_lines(answers)) + "\n")
    return worst


def _object(answer: _Answer) -> dict[str, Json]:
    recomputed = answer.recomputed
    return {
        "file": answer.file,
        "events": recomputed.events,
        "steps": recomputed.steps,
        "reproduced": recomputed.reproduced,
        "chain": recomputed.chain,
        "signatures": [],
        "first_difference": recomputed.first_difference,
    }


def _lines(answers: list[_Answer]) -> list[str]:
    table = [["events", "steps", "reproduced", "chain", "session"]]
    for answer in answers:
        recomputed = answer.recomputed
        reproduced = "all" if recomputed.reproduced else "no"
        table.append([str(recomputed.events), str(recomputed.steps), reproduced, recomputed.chain, answer.file])
    lines = aligned(table, right=frozenset({0, 1}))
    for answer in answers:
        recomputed = answer.recomputed
        said = [*recomputed.notices, *([recomputed.first_difference] if recomputed.first_difference else [])]
        lines += [f"{answer.file}: {words}" for words in said]
    return [streams.one_line(line) for line in lines]
