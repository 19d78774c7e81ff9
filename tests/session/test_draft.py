"""Half-typed text that survives a lost terminal."""

from __future__ import annotations

import errno
import os
import subprocess
import sys
from pathlib import Path

import pytest

from surefoot.errors import RecordError
from surefoot.session.draft import Draft

FIELDS = {"equation": "1/sqrt(f) = -2*log10(", "where": "A = b*y\nP =", "odd": "\udcff\x1b[31m\u2028"}


def test_a_draft_is_kept_replaced_and_removed(tmp_path: Path) -> None:
    draft = Draft(tmp_path / "2026-12-01-depth.json")
    assert draft.path == tmp_path / "2026-12-01-depth.draft"
    assert draft.load() is None
    draft.save(FIELDS)
    assert Draft(tmp_path / "2026-12-01-depth.json").load() == FIELDS
    draft.save({"equation": "x"})
    assert draft.load() == {"equation": "x"}
    assert [path.name for path in tmp_path.iterdir()] == [draft.path.name]
    draft.remove()
    draft.remove()
    assert list(tmp_path.iterdir()) == []


def test_a_draft_before_there_is_a_session_lies_in_the_folder(tmp_path: Path) -> None:
    draft = Draft(tmp_path)
    assert draft.path == tmp_path / "new.draft"
    draft.save(FIELDS)
    assert Draft(tmp_path).load() == FIELDS


def test_a_draft_survives_a_kill(tmp_path: Path) -> None:
    code = (
        "import os, signal; from pathlib import Path; from surefoot.session.draft import Draft\n"
        f"Draft(Path({str(tmp_path / 'a.json')!r})).save({{'equation': 'x^2 ='}})\n"
        "os.kill(os.getpid(), signal.SIGKILL)\n"
    )
    subprocess.run([sys.executable, "-c", code], check=False)
    assert Draft(tmp_path / "a.json").load() == {"equation": "x^2 ="}


def test_a_draft_that_cannot_be_written_leaves_the_one_before(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    draft = Draft(tmp_path / "a.json")
    draft.save({"equation": "before"})

    def full(descriptor: int) -> None:
        raise OSError(errno.ENOSPC, "No space left on device")

    with monkeypatch.context() as patched:
        patched.setattr(os, "fsync", full)
        with pytest.raises(RecordError, match="the draft cannot be written: the disk is full"):
            draft.save({"equation": "after"})
    assert draft.load() == {"equation": "before"}
    assert [path.name for path in tmp_path.iterdir()] == ["a.draft"]


@pytest.mark.parametrize("data", [b"", b"{", b"[1]", b'{"a": 1}', b"\xff", b"[" * 100_000])
def test_what_is_no_draft_is_none(tmp_path: Path, data: bytes) -> None:
    draft = Draft(tmp_path / "a.json")
    draft.path.write_bytes(data)
    assert draft.load() is None
