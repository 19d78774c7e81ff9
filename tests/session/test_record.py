"""The session file: appending, what a crash leaves, and what the system refuses."""

from __future__ import annotations

import errno
import json
import os
import stat
from collections.abc import Sequence
from pathlib import Path

import pytest

from surefoot.errors import RecordError
from surefoot.session import record as record_module
from surefoot.session.entries import Entries
from surefoot.session.entry import NO_HASH, Entry, seal
from surefoot.session.layout import CLOSING, HEADER, SEPARATOR, document, lay_out
from surefoot.session.record import Record, read_bytes, torn_path

AT = "2026-12-01T14:02:11.318Z"


def chain(count: int, size: int = 5) -> tuple[list[Entry], list[bytes]]:
    """Entries that follow one another, and their lines."""
    entries, lines, prev = [], [], NO_HASH
    for n in range(count):
        entry, line = seal(n, AT, "M. R.", "note_made", {"text": f"ä\n{n}" * size}, prev)
        entries.append(entry)
        lines.append(line)
        prev = entry.hash
    return entries, lines


def read(data: bytes) -> list[Entry]:
    return list(Entries(data))


def grown(path: Path, lines: Sequence[bytes]) -> Record:
    """A record made with the first line, then appended to one by one."""
    record = Record.create(path, lines[:1])
    for line in lines[1:]:
        record.append([line])
    return record


def test_the_file_is_one_json_document_after_every_append(tmp_path: Path) -> None:
    entries, lines = chain(5)
    path = tmp_path / "a.json"
    record = Record.create(path, lines[:1])
    for count in range(1, 5):
        whole = json.loads(path.read_text(encoding="utf-8"))
        assert list(whole) == ["format", "version", "events"]
        assert (whole["format"], whole["version"], len(whole["events"])) == ("surefoot-session", 1, count)
        record.append([lines[count]])
    record.close()
    assert read(path.read_bytes()) == entries
    assert path.read_bytes().count(b"\n") == len(lines) + 2


def test_a_group_is_one_write_and_one_sync(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    entries, lines = chain(6)
    record = Record.create(tmp_path / "a.json", lines[:1])
    done: list[tuple[str, int]] = []
    write = os.pwrite

    def counted(descriptor: int, data: bytes, offset: int) -> int:
        done.append(("write", offset))
        return write(descriptor, data, offset)

    monkeypatch.setattr(os, "pwrite", counted)
    monkeypatch.setattr(record_module, "_sync", lambda descriptor: done.append(("sync", 0)))
    record.append(lines[1:])
    record.close()
    assert done == [("write", len(HEADER) + len(lines[0])), ("sync", 0)]
    assert read((tmp_path / "a.json").read_bytes()) == entries


@pytest.mark.parametrize("group", [1, 3])
def test_a_write_cut_at_every_byte_loses_nothing_that_was_acknowledged(tmp_path: Path, group: int) -> None:
    entries, lines = chain(2 + group, size=1)
    before, after = document(tuple(lines[:2])), document(tuple(lines))
    start = len(before) - len(CLOSING)
    path = tmp_path / "a.json"
    for cut in range(start, len(after) + 1):
        # What was written so far, then what stood in the file beyond it.
        data = after[:cut] + before[cut:]
        path.write_bytes(data)
        whole = Entries(data)
        found = list(whole)
        assert found[:2] == entries[:2]
        assert found == entries[: len(found)], cut
        written = sum(cut >= len(document(tuple(lines[: n + 1]))) - len(CLOSING) for n in range(2, 2 + group))
        assert len(found) == 2 + written, cut
        kept = read_bytes(torn_path(path)) if torn_path(path).exists() else b""
        record = Record.open(path, whole.layout)
        record.append([seal(len(found), AT, "A. N.", "note_made", {}, found[-1].hash)[1]])
        record.close()
        json.loads(path.read_text(encoding="utf-8"))
        assert read(path.read_bytes())[:-1] == found
        lost = whole.layout.tail
        assert (read_bytes(torn_path(path)) if torn_path(path).exists() else b"") == kept + lost
        assert data[whole.layout.end :] == lost or not lost.strip(b" \n,]}{")


def test_blocks_of_zeros_that_a_crash_left_are_taken_for_a_cut_write(tmp_path: Path) -> None:
    entries, lines = chain(6)
    data = document(tuple(lines))
    start = len(HEADER) + sum(len(line) + len(SEPARATOR) for line in lines[:3]) + 40
    holed = data[:start] + b"\0" * 100 + data[start + 100 :]
    whole = Entries(holed)
    assert list(whole) == entries[:3]
    path = tmp_path / "a.json"
    path.write_bytes(holed)
    Record.open(path, whole.layout).close()
    assert path.read_bytes() == document(tuple(lines[:3]))
    assert torn_path(path).read_bytes().startswith(SEPARATOR + lines[3][:30])


def test_a_changed_event_is_no_cut_write(tmp_path: Path) -> None:
    _, lines = chain(4)
    for n in range(4):
        changed = [*lines]
        changed[n] = lines[n].replace(b"M. R.", b"M. S.")
        with pytest.raises(RecordError) as caught:
            read(document(tuple(changed)))
        assert caught.value.event == n
        torn = document(tuple(changed))[: -len(CLOSING)] + b',\n{"at'
        with pytest.raises(RecordError) as caught:
            read(torn)
        assert caught.value.event == n


@pytest.mark.parametrize(
    ("edit", "event"),
    [
        (lambda lines: [*lines[:2], *lines[3:]], 2),
        (lambda lines: [*lines[:2], lines[3], lines[2], *lines[4:]], 2),
        (lambda lines: [*lines[:3], lines[2], *lines[3:]], 3),
        (lambda lines: lines[1:], 0),
    ],
    ids=["missing", "swapped", "twice", "first missing"],
)
def test_missing_moved_and_repeated_events_are_named(edit: object, event: int) -> None:
    assert callable(edit)
    _, lines = chain(5)
    with pytest.raises(RecordError) as caught:
        read(document(tuple(edit(lines))))
    assert caught.value.event == event


def test_a_file_that_another_program_wrote_again_is_whole_and_is_put_in_order(tmp_path: Path) -> None:
    entries, lines = chain(3)
    path = tmp_path / "a.json"
    spread = json.dumps(json.loads(document(tuple(lines))), indent=1).replace("\n", "\r\n").encode()
    path.write_bytes(spread)
    path.chmod(0o640)
    whole = Entries(spread)
    assert list(whole) == entries
    assert not whole.layout.ours
    record = Record.open(path, whole.layout)
    assert path.read_bytes() == document(tuple(lines))
    assert path.stat().st_mode & 0o777 == 0o640
    record.append([seal(3, AT, "M. R.", "note_made", {}, entries[-1].hash)[1]])
    record.close()
    assert len(read(path.read_bytes())) == 4
    assert [each.name for each in tmp_path.iterdir()] == ["a.json"]


@pytest.mark.parametrize(
    ("data", "says"),
    [
        (b"", "is no session file"),
        (b"\xff\xfe", "is no session file"),
        (b"{}", "is no session file"),
        (b'{"format":"surefoot-session","version":2,"events":[{}],"more":1}', "newer surefoot"),
        (b'{"format":"surefoot-session","version":true,"events":[]}', "members of a session file"),
        (b'{"format":"surefoot-session","version":1,"events":{}}', "holds no events"),
        (b'{"format":"surefoot-session","version":1,"events":[]}', "holds no events"),
        (b'{"format":"surefoot-session","version":1,"events":[{"a":9007199254740992}]}', "whole number beyond"),
        (b'{"format":"surefoot-session","version":1,"events":[1],"events":[2]}', "is no session file"),
        (HEADER, "no whole event"),
        (HEADER + b'{"at":"2026', "no whole event"),
        (HEADER + CLOSING, "is not an event"),
        (b"[" * 1_000_000, "is no session file"),
    ],
    ids=lambda value: value[:70].decode("latin-1") if isinstance(value, bytes) else "",
)
def test_what_is_no_record_is_refused_in_one_line(data: bytes, says: str) -> None:
    with pytest.raises(RecordError, match=says) as caught:
        read(data)
    assert "\n" not in str(caught.value)


@pytest.mark.parametrize("code", [errno.ENOSPC, errno.EDQUOT, errno.EIO])
@pytest.mark.parametrize("taken", [0, 1, 7, 60])
def test_a_full_disk_leaves_the_file_as_it_was(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, code: int, taken: int
) -> None:
    """The disk takes some bytes of the append and refuses the rest, then there is room again."""
    entries, lines = chain(3)
    path = tmp_path / "a.json"
    record = grown(path, lines[:2])
    before = path.read_bytes()
    write, left = os.pwrite, [taken]

    def full(descriptor: int, data: memoryview, offset: int) -> int:
        if len(data) <= len(CLOSING):
            return write(descriptor, data, offset)
        if not left[0]:
            raise OSError(code, os.strerror(code))
        took, left[0] = left[0], 0
        return write(descriptor, data[:took], offset)

    monkeypatch.setattr(os, "pwrite", full)
    with pytest.raises(RecordError, match="cannot be written: ") as caught:
        record.append(lines[2:])
    assert "\n" not in str(caught.value)
    assert path.read_bytes() == before
    monkeypatch.setattr(os, "pwrite", write)
    record.append(lines[2:])
    record.close()
    assert read(path.read_bytes()) == entries


def test_a_failed_sync_is_a_failed_write(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    _, lines = chain(2)
    path = tmp_path / "a.json"
    record = grown(path, lines[:1])
    before = path.read_bytes()

    def fail(descriptor: int) -> None:
        raise OSError(errno.EIO, "Input/output error")

    monkeypatch.setattr(record_module, "_sync", fail)
    with pytest.raises(RecordError, match="the disk reports an error"):
        record.append(lines[1:])
    record.close()
    assert path.read_bytes() == before


def test_a_disk_that_stays_gone_ends_the_writing_and_the_next_open_recovers(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    entries, lines = chain(3)
    path = tmp_path / "a.json"
    record = grown(path, lines[:2])
    write, calls = os.pwrite, [0]

    def gone(descriptor: int, data: memoryview, offset: int) -> int:
        calls[0] += 1
        if calls[0] == 1:
            return write(descriptor, data[:30], offset)
        raise OSError(errno.EIO, "Input/output error")

    monkeypatch.setattr(os, "pwrite", gone)
    with pytest.raises(RecordError, match="the disk reports an error"):
        record.append(lines[2:])
    with pytest.raises(RecordError, match="could not be written before; open it again"):
        record.append(lines[2:])
    record.close()
    monkeypatch.setattr(os, "pwrite", write)
    whole = Entries(path.read_bytes())
    assert list(whole) == entries[:2]
    Record.open(path, whole.layout).close()
    assert path.read_bytes() == document(tuple(lines[:2]))


def test_a_file_that_cannot_be_made_leaves_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    _, lines = chain(1)

    def full(descriptor: int, data: memoryview, offset: int) -> int:
        raise OSError(errno.ENOSPC, "No space left on device")

    with monkeypatch.context() as patched:
        patched.setattr(os, "pwrite", full)
        with pytest.raises(RecordError, match="cannot be made: the disk is full"):
            Record.create(tmp_path / "a.json", lines)
    assert list(tmp_path.iterdir()) == []
    with pytest.raises(RecordError, match="there is no such file or folder"):
        Record.create(tmp_path / "none" / "a.json", lines)
    with pytest.raises(RecordError, match="the name is no file name"):
        Record.create(tmp_path / "a\0.json", lines)


def test_an_existing_file_is_never_overwritten(tmp_path: Path) -> None:
    _, lines = chain(1)
    path = tmp_path / "a.json"
    path.write_text("kept", encoding="ascii")
    with pytest.raises(RecordError, match="exists already"):
        Record.create(path, lines)
    assert path.read_text(encoding="ascii") == "kept"


def replace_file(path: Path) -> None:
    other = path.with_suffix(".other")
    other.write_bytes(path.read_bytes())
    other.replace(path)


@pytest.mark.parametrize(
    ("harm", "says"),
    [
        (Path.unlink, "was removed while it was open"),
        (replace_file, "was replaced"),
        (lambda path: path.write_bytes(path.read_bytes() + b"\n"), "was written by another program"),
    ],
    ids=["removed", "replaced", "written"],
)
def test_a_file_harmed_while_open_is_noticed_before_writing(tmp_path: Path, harm: object, says: str) -> None:
    assert callable(harm)
    _, lines = chain(2)
    path = tmp_path / "a.json"
    record = grown(path, lines[:1])
    harm(path)
    left = path.read_bytes() if path.exists() else None
    with pytest.raises(RecordError, match=says):
        record.append(lines[1:])
    record.close()
    assert (path.read_bytes() if path.exists() else None) == left


def test_devices_pipes_and_folders_are_not_read(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe")
    for path in (Path("/dev/zero"), tmp_path / "pipe", tmp_path):
        with pytest.raises(RecordError, match="is not a regular file"):
            read_bytes(path)
    with pytest.raises(RecordError, match="there is no such file"):
        read_bytes(tmp_path / "none.json")
    with pytest.raises(RecordError, match="cannot be read"):
        read_bytes(tmp_path / "a\0b")


def test_where_a_layout_ends_is_where_the_closing_belongs() -> None:
    _, lines = chain(3)
    data = document(tuple(lines))
    assert data[lay_out(data).end :] == CLOSING
    assert data[: lay_out(data[:-2]).end] == data[: -len(CLOSING)]


def test_a_file_that_cannot_be_put_in_order_stays_as_it_is(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    _, lines = chain(3)
    path = tmp_path / "a.json"

    def fail(*given: object) -> None:
        raise OSError(errno.ENOSPC, "No space left on device")

    torn = document(tuple(lines))[:-20]
    spread = json.dumps(json.loads(document(tuple(lines)))).encode()
    for data, says in ((torn, "cannot be put in order: the disk is full"), (spread, "cannot be opened for writing")):
        path.write_bytes(data)
        whole = Entries(data)
        count = len(list(whole))
        with monkeypatch.context() as patched:
            patched.setattr(os, "fsync", fail)
            with pytest.raises(RecordError, match=says):
                Record.open(path, whole.layout)
        assert len(read(path.read_bytes())) == count
        assert not list(tmp_path.glob("*.part"))


def test_a_folder_that_cannot_be_synced_is_no_reason_to_fail_but_a_disk_error_is(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    _, lines = chain(1)
    sync, code = os.fsync, [errno.EINVAL]

    def of_files(descriptor: int) -> None:
        if stat.S_ISDIR(os.fstat(descriptor).st_mode):
            raise OSError(code[0], os.strerror(code[0]))
        sync(descriptor)

    monkeypatch.setattr(os, "fsync", of_files)
    Record.create(tmp_path / "a.json", lines).close()
    code[0] = errno.EIO
    with pytest.raises(RecordError, match="the disk reports an error"):
        Record.create(tmp_path / "b.json", lines)
    assert [path.name for path in tmp_path.iterdir()] == ["a.json"]


@pytest.mark.parametrize(
    "spread",
    [
        lambda data: data.replace(b"},\n{", b"}, {"),
        lambda data: data.replace(b"},\n{", b"},  \n{"),
        lambda data: data.replace(b"},\n{", b"}, {")[:-1],
        lambda data: data.replace(b',"by"', b',\n "by"'),
        lambda data: data.replace(b',"kind"', b' , "kind"').replace(b'"prev":"', b'"prev": "'),
    ],
    ids=["one line", "spaces at the ends", "one line, no last line end", "members in lines", "spaces inside"],
)
def test_other_spaces_behind_our_own_first_line_lose_no_event(tmp_path: Path, spread: object) -> None:
    assert callable(spread)
    entries, lines = chain(4)
    path = tmp_path / "a.json"
    path.write_bytes(spread(document(tuple(lines))))
    whole = Entries(path.read_bytes())
    assert list(whole) == entries
    Record.open(path, whole.layout).close()
    assert read(path.read_bytes()) == entries
    assert not torn_path(path).exists()


def test_another_kind_of_file_is_told_without_parsing_it(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("surefoot.session.layout.parse_json", lambda *given, **how: pytest.fail("it was parsed"))
    with pytest.raises(RecordError, match="is no session file"):
        lay_out(b'{"rows": [' + b"1," * 1000 + b"1]}")


def test_a_time_is_written_in_plain_digits() -> None:
    with pytest.raises(RecordError, match="'at' of the wrong form"):
        seal(0, "２026-12-01T14:02:11.318Z", "M. R.", "note_made", {}, NO_HASH)
