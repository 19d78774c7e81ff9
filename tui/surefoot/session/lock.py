"""One writer a session: a sidecar that says who holds it, and the system's advisory lock where that works.

The sidecar is what people read, and all there is on file systems without locks. The advisory lock decides between two
processes of one host that find the same orphaned sidecar at the same moment.
"""

from __future__ import annotations

import contextlib
import errno
import json
import os
from dataclasses import asdict, dataclass, fields
from pathlib import Path

from surefoot.errors import RecordError
from surefoot.session.environment import host
from surefoot.session.record import reason


@dataclass(frozen=True, slots=True)
class Holder:
    """Who holds a session.

    Attributes:
        by: the name given for the sitting.
        boot: identity of the host's current start, empty where the system has none.
        started: start time of the process in the system's own count, empty where the system has none.
        since: when the lock was taken (UTC).
    """

    by: str
    host: str
    pid: int
    boot: str
    started: str
    since: str

    def __str__(self) -> str:
        return f"{self.by} on {self.host} (process {self.pid}, since {self.since})" if self.host else self.by


NOBODY_KNOWN = Holder("somebody whose lock file cannot be read", "", 0, "", "", "")


class Held(RecordError):
    """The session is held by another; `holder` says by whom."""

    def __init__(self, holder: Holder, file: str) -> None:
        self.holder = holder
        super().__init__(f"is held by {holder}", file=file)


class Lock:
    """A held lock.

    Attributes:
        path: the sidecar.
        notice: what had to be done to get the lock; empty in the usual case.
    """

    def __init__(self, session: Path, descriptor: int, inode: tuple[int, int], notice: str) -> None:
        self.path, self.notice = lock_path(session), notice
        self._session = session
        self._descriptor = descriptor
        self._inode = inode

    def check(self) -> None:
        """Raise RecordError when another has taken the session over since."""
        if not self._still_ours():
            other = read_holder(self.path)
            says = f"was taken over by {other}" if other else "has lost its lock"
            raise RecordError(f"{says}; nothing more is written from here, open it again", file=str(self._session))

    def release(self) -> None:
        if self._still_ours():
            with contextlib.suppress(OSError):
                self.path.unlink()
        os.close(self._descriptor)

    def _still_ours(self) -> bool:
        try:
            found = os.stat(self.path)
        except OSError:
            return False
        return (found.st_dev, found.st_ino) == self._inode


def lock_path(session: Path) -> Path:
    return session.with_name(session.name + ".lock")


def myself(by: str, now: str) -> Holder:
    """This process as a holder."""
    return Holder(by, host(), os.getpid(), _boot(), _started(os.getpid()), now)


def acquire(session: Path, me: Holder, *, take_over: bool = False) -> Lock:
    """Take the lock of an existing session file.

    A lock that was left by a process of this host that is gone is taken over, with a notice. Any other is taken over
    only with `take_over`.

    Raises:
        Held: another holds it.
        RecordError: the file or the sidecar cannot be written.
    """
    try:
        descriptor = os.open(session, os.O_RDWR | os.O_CLOEXEC)
    except OSError as error:
        raise RecordError(f"cannot be opened for writing: {reason(error)}", file=str(session)) from error
    try:
        # The advisory lock first: of two that find an orphaned sidecar, only one goes on to replace it.
        free = _advisory_lock(descriptor)
        inode, notice = _take_sidecar(session, me, free=free, take_over=take_over)
    except RecordError:
        os.close(descriptor)
        raise
    return Lock(session, descriptor, inode, notice)


def _take_sidecar(session: Path, me: Holder, *, free: bool, take_over: bool) -> tuple[tuple[int, int], str]:
    """Put our sidecar in place. Returns its device and inode, and the notice."""
    path = lock_path(session)
    try:
        if free:
            with contextlib.suppress(FileExistsError):
                return _write_new(path, me), ""
        other = read_holder(path)
        gone = free and other is not None and is_gone(other, me)
        if not gone and not take_over:
            raise Held(other or NOBODY_KNOWN, str(session))
        beside = path.with_name(f"{path.name}.{me.pid}")
        beside.unlink(missing_ok=True)
        inode = _write_new(beside, me)
        os.replace(beside, path)
    except OSError as error:
        raise RecordError(f"cannot be locked: {reason(error)}", file=str(session)) from error
    return inode, f"{'left open by' if gone else 'taken over from'} {other or NOBODY_KNOWN}"


def _advisory_lock(descriptor: int) -> bool:
    """Lock the open file. False when another process has it; True also where there are no such locks."""
    try:
        import fcntl
    except ImportError:  # not on every system
        return True
    try:
        fcntl.flock(descriptor, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except OSError as error:
        return error.errno not in (errno.EWOULDBLOCK, errno.EACCES)
    return True


def read_holder(path: Path) -> Holder | None:
    """Who a sidecar names; None when there is none, or none that can be read."""
    try:
        members = json.loads(path.read_bytes()[:4096])
        types = {field.name: int if field.name == "pid" else str for field in fields(Holder)}
        if members.keys() != types.keys() or any(type(members[name]) is not kind for name, kind in types.items()):
            return None
        return Holder(**members)
    except (OSError, ValueError, AttributeError, RecursionError):
        return None


def is_gone(other: Holder, me: Holder) -> bool:
    """Whether this host shows that the process of a holder has ended. False when it cannot be known."""
    if other.host != me.host:
        return False
    if other.boot and me.boot and other.boot != me.boot:
        return True
    if other.pid == me.pid:
        return other.started != me.started
    try:
        os.kill(other.pid, 0)
    except ProcessLookupError:
        return True
    except (OSError, OverflowError):
        return False
    started = _started(other.pid)
    return bool(started and other.started) and started != other.started


def _write_new(path: Path, holder: Holder) -> tuple[int, int]:
    """Make the sidecar; its device and inode. Raises FileExistsError when there is one."""
    with path.open("x", encoding="utf-8") as file:
        file.write(json.dumps(asdict(holder)) + "\n")
        file.flush()
        os.fsync(file.fileno())
        found = os.fstat(file.fileno())
    return found.st_dev, found.st_ino


def _boot() -> str:
    try:
        return Path("/proc/sys/kernel/random/boot_id").read_text(encoding="ascii").strip()
    except OSError:
        return ""


def _started(pid: int) -> str:
    """When the process started, in clock ticks since the host started (field 22 of /proc/PID/stat).

    `ended` for a process that has ended and was not yet collected; empty where the system does not tell.
    """
    try:
        behind_name = Path(f"/proc/{pid}/stat").read_text(encoding="utf-8", errors="replace").rpartition(")")[2].split()
        return "ended" if behind_name[0] in "ZX" else behind_name[19]
    except (OSError, IndexError):
        return ""
