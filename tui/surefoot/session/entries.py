"""From the bytes of a session file to its entries, each checked where it stands."""

from __future__ import annotations

from collections.abc import Iterator

from surefoot.errors import RecordError
from surefoot.session.entry import NO_HASH, Entry, read_entry
from surefoot.session.layout import cut_at, lay_out


class Entries:
    """The entries of a file in order, each checked for its form, its place in the chain and its hash.

    `layout` is that of the file; after the last entry it ends where the whole events end.
    """

    def __init__(self, data: bytes, *, strict: bool = False) -> None:
        self.layout = lay_out(data)
        self._data, self._strict = data, strict

    def __iter__(self) -> Iterator[Entry]:
        prev = NO_HASH
        for n, line in enumerate(self.layout.lines):
            try:
                entry = read_entry(line, n, prev, strict=self._strict)
            except RecordError:
                cut = cut_at(self.layout, n, self._data)
                if cut is None:
                    raise
                self.layout = cut
                return
            yield entry
            prev = entry.hash
