"""The session file as it is written: made once, then appended to, one write and one sync a group of events."""

from __future__ import annotations

import contextlib
import errno
import os
import stat
from collections.abc import Sequence
from pathlib import Path

from surefoot.errors import RecordError
from surefoot.session.layout import CLOSING, SEPARATOR, Layout, document

_sync = getattr(os, "fdatasync", os.fsync)  # not every system has fdatasync; fsync does more than is needed

_REASONS = {
    errno.ENOSPC: "the disk is full; make room and do it again",
    errno.EDQUOT: "your quota of the disk is used up; make room and do it again",
    errno.EROFS: "the file system is read-only; copy the file to where you can write",
    errno.EACCES: "you may not write here; check the permissions of the file and its folder",
    errno.EPERM: "you may not write here; check the permissions of the file and its folder",
    errno.EFBIG: "the file may not grow further; check the limits of your account",
    errno.EIO: "the disk reports an error; copy the file to another disk",
    errno.ENOENT: "there is no such file or folder",
    errno.EEXIST: "the file exists already; choose another name",
    errno.EISDIR: "this is a folder",
    errno.ENAMETOOLONG: "the name is too long",
}


def reason(error: OSError) -> str:
    """What the system's refusal means to the person who must act."""
    return _REASONS.get(error.errno or 0, (error.strerror or str(error)).lower())


def read_bytes(path: Path) -> bytes:
    """All bytes of a session file. Raises RecordError when it cannot be read, or is a device, pipe or folder."""
    try:
        if not stat.S_ISREG(os.stat(path).st_mode):
            raise RecordError("is not a regular file", file=str(path))
        return path.read_bytes()
    except OSError as error:
        raise RecordError(f"cannot be read: {reason(error)}", file=str(path)) from error
    except (ValueError, MemoryError) as error:  # a zero byte in the name; a file beyond memory
        raise RecordError("cannot be read: it is no session file of surefoot", file=str(path)) from error


class Record:
    """An open session file. What `append` returned from is on disk; what it raised from is not in the file.

    Attributes:
        path: the file.
    """

    def __init__(self, path: Path, descriptor: int, end: int) -> None:
        self.path = path
        self._descriptor = descriptor
        self._end = end
        self._usable = True

    @classmethod
    def create(cls, path: Path, lines: Sequence[bytes]) -> Record:
        """Make a new file with these events, and see it and its name to disk.

        Raises:
            RecordError: the file exists, or cannot be made; nothing is left behind.
        """
        data = document(tuple(lines))
        try:
            descriptor = os.open(path, os.O_RDWR | os.O_CREAT | os.O_EXCL | os.O_CLOEXEC, 0o666)
        except (OSError, ValueError) as error:
            raise _failed("cannot be made", path, error) from error
        try:
            _write_all(descriptor, data, 0)
            os.fsync(descriptor)
            _sync_folder(path.parent)
        except OSError as error:
            os.close(descriptor)
            with contextlib.suppress(OSError):
                path.unlink()
            raise _failed("cannot be made", path, error) from error
        return cls(path, descriptor, len(data) - len(CLOSING))

    @classmethod
    def open(cls, path: Path, layout: Layout) -> Record:
        """Open a file for appending, after it was read and found to be laid out so.

        What a cut write left behind its last whole event is kept in `NAME.torn` beside it, and the closing is
        written again. A file that another program laid out differently is written anew, with the same events.

        Raises:
            RecordError: the file cannot be opened for writing, or not be put in order.
        """
        try:
            if not layout.ours:
                _write_anew(path, document(layout.lines))
            descriptor = os.open(path, os.O_RDWR | os.O_CLOEXEC)
        except OSError as error:
            raise _failed("cannot be opened for writing", path, error) from error
        end = layout.end if layout.ours else os.fstat(descriptor).st_size - len(CLOSING)
        record = cls(path, descriptor, end)
        if not layout.closed:
            try:
                if layout.tail:
                    _keep(torn_path(path), layout.tail)
                record._close_document()
            except OSError as error:
                record.close()
                raise _failed("was cut by a crash and cannot be put in order", path, error) from error
        return record

    def append(self, lines: Sequence[bytes]) -> None:
        """Add events in one write, and see them to disk.

        Raises:
            RecordError: nothing was added; the file is as it was before.
        """
        self._check_place()
        data = b"".join(SEPARATOR + line for line in lines) + CLOSING
        try:
            _write_all(self._descriptor, data, self._end)
            _sync(self._descriptor)
        except OSError as error:
            self._take_back()
            raise _failed("cannot be written", self.path, error) from error
        self._end += len(data) - len(CLOSING)

    def close(self) -> None:
        if self._descriptor >= 0:
            os.close(self._descriptor)
            self._descriptor = -1

    def _check_place(self) -> None:
        """Raise RecordError unless the path still names this file and nobody else wrote to it."""
        if not self._usable:
            raise RecordError("could not be written before; open it again", file=str(self.path))
        try:
            here, there = os.fstat(self._descriptor), os.stat(self.path)
        except OSError as error:
            raise RecordError(f"was removed while it was open ({reason(error)})", file=str(self.path)) from error
        if (here.st_dev, here.st_ino) != (there.st_dev, there.st_ino):
            raise RecordError("was replaced by another file while it was open; open it again", file=str(self.path))
        if here.st_size != self._end + len(CLOSING):
            raise RecordError("was written by another program while it was open; open it again", file=str(self.path))

    def _take_back(self) -> None:
        """After a failed write: the closing where it was. If that fails too, the next open recovers the file."""
        try:
            self._close_document()
        except OSError:
            self._usable = False

    def _close_document(self) -> None:
        _write_all(self._descriptor, CLOSING, self._end)
        os.ftruncate(self._descriptor, self._end + len(CLOSING))
        os.fsync(self._descriptor)


def torn_path(path: Path) -> Path:
    """Where the remains of a cut write are kept."""
    return path.with_suffix(".torn")


def _write_all(descriptor: int, data: bytes, offset: int) -> None:
    """One write; the system takes less than the whole only when it is about to refuse."""
    view = memoryview(data)
    while view:
        written = os.pwrite(descriptor, view, offset)
        view, offset = view[written:], offset + written


def _keep(path: Path, data: bytes) -> None:
    with path.open("ab") as file:
        file.write(data)
        file.flush()
        os.fsync(file.fileno())


def _write_anew(path: Path, data: bytes) -> None:
    """Replace the file in one go, with its permissions."""
    beside = path.with_suffix(f".{os.getpid()}.part")
    try:
        with beside.open("xb") as file:
            file.write(data)
            file.flush()
            os.fchmod(file.fileno(), stat.S_IMODE(os.stat(path).st_mode))
            os.fsync(file.fileno())
        os.replace(beside, path)
    except OSError:
        beside.unlink(missing_ok=True)
        raise
    _sync_folder(path.parent)


def _sync_folder(folder: Path) -> None:
    descriptor = os.open(folder, os.O_RDONLY | os.O_CLOEXEC)
    try:
        os.fsync(descriptor)
    except OSError as error:
        if error.errno not in (errno.EINVAL, errno.ENOTSUP):  # some network file systems cannot, and need not
            raise
    finally:
        os.close(descriptor)


def _failed(what: str, path: Path, error: OSError | ValueError) -> RecordError:
    says = reason(error) if isinstance(error, OSError) else "the name is no file name"
    return RecordError(f"{what}: {says}", file=str(path))
