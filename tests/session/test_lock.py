"""One writer a session."""

from __future__ import annotations

import errno
import fcntl
import json
import os
import subprocess
import sys
from dataclasses import asdict, replace
from pathlib import Path

import pytest

from surefoot.errors import RecordError
from surefoot.session.lock import Held, Holder, acquire, is_gone, lock_path, myself, read_holder

NOW = "2026-12-01T14:02:11.318Z"


@pytest.fixture
def session(tmp_path: Path) -> Path:
    path = tmp_path / "tailrace.json"
    path.write_bytes(b"{}")
    return path


def leave(session: Path, holder: Holder) -> None:
    """A sidecar as a process that was killed leaves it: without the advisory lock."""
    lock_path(session).write_text(json.dumps(asdict(holder)), encoding="utf-8")


def ended_process() -> Holder:
    """A holder whose process has ended."""
    code = "from surefoot.session.lock import myself; from dataclasses import asdict; import json;"
    code += f"print(json.dumps(asdict(myself('A. N.', '{NOW}'))))"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    return Holder(**json.loads(done.stdout))


def test_the_sidecar_tells_who_holds_the_session_and_goes_with_the_lock(session: Path) -> None:
    me = myself("M. R., duty", NOW)
    lock = acquire(session, me)
    assert lock.path.name == "tailrace.json.lock"
    members = json.loads(lock.path.read_text(encoding="utf-8"))
    assert members["by"] == "M. R., duty"
    assert members["pid"] == os.getpid()
    assert members["since"] == NOW
    assert members["boot"] == Path("/proc/sys/kernel/random/boot_id").read_text(encoding="ascii").strip()
    assert lock.notice == ""
    lock.check()
    lock.release()
    assert not lock.path.exists()


def test_a_second_opener_is_told_who_holds_it(session: Path) -> None:
    first = acquire(session, myself("M. R.", NOW))
    with pytest.raises(Held) as caught:
        acquire(session, myself("A. N.", NOW))
    assert caught.value.holder.by == "M. R."
    assert f"is held by M. R. on {caught.value.holder.host} (process {os.getpid()}" in str(caught.value)
    first.release()
    acquire(session, myself("A. N.", NOW)).release()


def test_the_advisory_lock_holds_where_the_sidecar_was_deleted(session: Path) -> None:
    first = acquire(session, myself("M. R.", NOW))
    lock_path(session).unlink()
    with pytest.raises(Held, match="somebody"):
        acquire(session, myself("A. N.", NOW))
    first.release()


def test_what_a_process_that_is_gone_left_is_taken_over_with_a_notice(session: Path) -> None:
    leave(session, ended_process())
    lock = acquire(session, myself("M. R.", NOW))
    assert lock.notice.startswith("left open by A. N. on ")
    holder = read_holder(lock.path)
    assert holder is not None
    assert holder.by == "M. R."
    lock.release()
    assert list(session.parent.iterdir()) == [session]


def test_an_earlier_start_of_the_host_or_of_the_process_number_is_gone() -> None:
    me = myself("M. R.", NOW)
    assert not is_gone(me, me)
    assert is_gone(replace(me, boot="another"), me)
    assert is_gone(replace(me, started="1"), me)
    assert is_gone(replace(me, pid=os.getppid(), started="1"), me)
    assert not is_gone(replace(me, host="another host", boot="another"), me)
    assert not is_gone(replace(me, pid=2**70), me)


def test_a_process_that_ended_and_was_not_collected_is_gone() -> None:
    child = subprocess.Popen([sys.executable, "-c", ""])
    me = myself("M. R.", NOW)
    other = replace(me, pid=child.pid, started="2")
    os.waitid(os.P_PID, child.pid, os.WEXITED | os.WNOWAIT)
    assert is_gone(other, me)
    child.wait()


def test_another_host_is_taken_over_only_when_asked(session: Path) -> None:
    leave(session, replace(ended_process(), host="another-host"))
    with pytest.raises(Held, match="another-host"):
        acquire(session, myself("M. R.", NOW))
    lock = acquire(session, myself("M. R.", NOW), take_over=True)
    assert lock.notice.startswith("taken over from A. N. on another-host")
    lock.release()


def test_who_was_taken_over_from_writes_no_more(session: Path) -> None:
    first = acquire(session, myself("M. R.", NOW))
    second = acquire(session, myself("A. N.", NOW), take_over=True)
    with pytest.raises(RecordError, match=r"was taken over by A\. N\."):
        first.check()
    first.release()
    second.check()
    second.release()
    with pytest.raises(RecordError, match="has lost its lock"):
        first.check()


@pytest.mark.parametrize("text", ["", "{", "[]", '{"by": 1}', "[" * 3000, json.dumps({"by": "x", "pid": "1"})])
def test_a_sidecar_that_cannot_be_read_is_taken_over_only_when_asked(session: Path, text: str) -> None:
    lock_path(session).write_text(text, encoding="utf-8")
    with pytest.raises(Held, match="cannot be read"):
        acquire(session, myself("M. R.", NOW))
    acquire(session, myself("M. R.", NOW), take_over=True).release()
    assert not lock_path(session).exists()


def test_a_session_that_is_not_there_cannot_be_locked(tmp_path: Path) -> None:
    with pytest.raises(RecordError, match="there is no such file"):
        acquire(tmp_path / "none.json", myself("M. R.", NOW))
    assert list(tmp_path.iterdir()) == []


def test_a_folder_in_which_no_sidecar_can_be_made_is_told(session: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def denied(*given: object) -> None:
        raise OSError(errno.EROFS, "Read-only file system")

    monkeypatch.setattr("surefoot.session.lock._write_new", denied)
    with pytest.raises(RecordError, match="cannot be locked: the file system is read-only"):
        acquire(session, myself("M. R.", NOW))


def test_a_system_without_advisory_locks_and_process_files_has_the_sidecar(
    session: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setitem(sys.modules, "fcntl", None)
    read = Path.read_text
    monkeypatch.setattr(
        Path, "read_text", lambda path, **how: read(path / "none" if "proc" in path.parts else path, **how)
    )
    me = myself("M. R.", NOW)
    assert (me.boot, me.started) == ("", "")
    first = acquire(session, me)
    with pytest.raises(Held):
        acquire(session, myself("A. N.", NOW))
    assert not is_gone(replace(me, pid=os.getppid()), me)
    first.release()


def test_a_network_file_system_without_locks_has_the_sidecar(session: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def none(descriptor: int, how: int) -> None:
        raise OSError(errno.ENOLCK, "No locks available")

    monkeypatch.setattr(fcntl, "flock", none)
    first = acquire(session, myself("M. R.", NOW))
    with pytest.raises(Held):
        acquire(session, myself("A. N.", NOW))
    first.release()
