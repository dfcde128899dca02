"""The statements of a STEP file as arrays, to read the same of many at once.

Following a reference through ifcopenshell costs about a microsecond; a model of fifty thousand
bars asks for half a million of them. What is not written in the plainest way is left to it.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.ifc.bar_paths import Ints
from ifccheck.ifc.equal_rows import first_of_each_text, of_like_width
from ifccheck.ifc.lexer import Scan
from ifccheck.ifc.step_bytes import Offsets, stretches
from ifccheck.ifc.step_cursors import IS_BLANK, WORD, Bytes, Cursors

_HIDDEN_QUOTE = re.compile(rb"\\S\\'")
_LOWER = np.uint8(0x20)
"""What tells a small letter from a capital."""
SPARSE = 8
"""Numbers of statements are looked up in a table where it is not this many times as long."""


_MARGIN = np.zeros(64, dtype=np.uint8)
"""Behind several statements, so that there are always some bytes and none are read beyond."""


class StepTable:
    """The statements of a file by number."""

    def __init__(
        self, data: bytes, ids: Offsets, bodies: Offsets, stops: Offsets, hides: bool = False
    ) -> None:
        self._data = data
        self._hides = hides
        """Whether statements of the file are left out."""
        self._bytes = np.frombuffer(data, np.uint8)
        if not (ids[1:] > ids[:-1]).all():
            order = np.argsort(ids, kind="stable")
            ids, bodies, stops = ids[order], bodies[order], stops[order]
        self._ids, self._after_numbers, self._stops = ids, bodies, stops
        self._row_of = self._direct()

    def _direct(self) -> Ints | None:
        """Row of each number from 0 on; None where that table would be too long."""
        greatest = int(self._ids[-1])
        if greatest > SPARSE * len(self._ids):
            return None
        rows = np.full(greatest + 1, -1, dtype=np.intp)
        rows[self._ids] = np.arange(len(self._ids))
        return rows

    def rows(self, ids: Ints) -> Ints:
        """Row of each statement by its number, -1 where there is none."""
        if self._row_of is not None:
            inside = (ids >= 0) & (ids < len(self._row_of))
            return np.where(inside, self._row_of[np.where(inside, ids, 0)], -1)
        row = np.minimum(np.searchsorted(self._ids, ids), len(self._ids) - 1)
        return np.where(self._ids[row] == ids, row, -1)

    def cursors(self, ids: Ints, word: str) -> Cursors:
        """Cursors within the bracket of statements, of those that are instances of a class."""
        cursors = self.starts(ids)
        cursors.tokens(b"=", word.encode(), b"(")
        return cursors

    def starts(self, ids: Ints) -> Cursors:
        """Cursors behind the numbers of statements, of those that there are."""
        rows = self.rows(ids)
        return Cursors(self._bytes, self._after_numbers[rows], rows >= 0)

    def ids_of(self, word: str) -> Ints | None:
        """Numbers of the instances of a class, from the least on; None where it cannot be told
        of every statement."""
        cursors = Cursors(self._bytes, self._after_numbers, np.ones(len(self._ids), dtype=bool))
        cursors.tokens(b"=")
        cursors.blanks()
        if self._hides or not cursors.plain.all():
            return None
        last = self._bytes.take(cursors.at + len(word) - 1, mode="clip")
        rows = np.flatnonzero(last | _LOWER == ord(word[-1]) | _LOWER)  # most end otherwise
        named = Cursors(self._bytes, cursors.at[rows], np.ones(len(rows), dtype=bool))
        rows = rows[named.word_stands_here(word.encode())]
        exactly = Cursors(self._bytes, cursors.at[rows], np.ones(len(rows), dtype=bool))
        exactly.tokens(word.encode(), b"(")
        return self._ids[rows] if exactly.plain.all() else None

    def matches(
        self, ids: Sequence[int], pattern: re.Pattern[bytes]
    ) -> list[re.Match[bytes] | None]:
        """What a pattern finds in statements, each from what follows its number to its end."""
        data, match = self._data, pattern.fullmatch
        return [match(data, start, stop) for start, stop in self._bounds(ids)]

    def texts(self, ids: Sequence[int]) -> list[bytes]:
        """What stands in statements behind their numbers; empty where there is none."""
        return [self._data[start:stop] for start, stop in self._bounds(ids)]

    def begins(self, step_id: int, text: bytes) -> bool:
        """Whether a statement is known to begin with a text behind its number."""
        table = self._row_of
        if table is None or not 0 <= step_id < len(table) or (row := table.item(step_id)) < 0:
            return False
        return self._data.startswith(text, self._after_numbers.item(row))

    def _bounds(self, ids: Sequence[int]) -> Iterator[tuple[int, int]]:
        rows = self.rows(np.array(ids, dtype=np.int64))
        starts = self._after_numbers[rows]
        stops = np.where(rows >= 0, self._stops[rows], starts)
        return zip(starts.tolist(), stops.tolist(), strict=True)

    def rests(self, cursors: Cursors, ids: Ints) -> Rests:
        """What is left of statements from their cursors on; empty for those that are not plain."""
        stop = np.where(cursors.plain, self._stops[self.rows(ids)], cursors.at)
        return gathered(self._bytes, cursors.at, stop)


@dataclass(frozen=True, slots=True)
class Rests:
    """What is left of statements, somewhere in one array with zeros between them (N)."""

    data: Bytes
    start: Ints
    stop: Ints

    def without_blanks(self) -> Rests:
        """The same without blanks and line breaks, those within texts included."""
        kept = ~IS_BLANK[self.data]
        if kept.all():
            return self
        before = np.concatenate(([0], np.cumsum(kept)))
        return Rests(self.data[kept], before[self.start], before[self.stop])

    def take(self, kept: Ints) -> Rests:
        """Some of them."""
        return Rests(self.data, self.start[kept], self.stop[kept])

    def of(self, row: int) -> bytes:
        """One of them."""
        return self.data[self.start[row] : self.stop[row]].tobytes()

    def first_of_each(self) -> tuple[Ints, Ints]:
        """First of each distinct one, and which of these every one is."""
        return first_of_each_text(self.data, self.start, self.stop)


def gathered(data: Bytes, start: Ints, stop: Ints) -> Rests:
    """Gather the bytes between offsets."""
    width, begin = stop - start, np.zeros(len(start), dtype=np.intp)
    parts, count = [], 0
    for rows, words in of_like_width(width):
        size = words * WORD
        begin[rows] = count + np.arange(len(rows)) * size
        parts.append(_windows(data, start[rows], width[rows], size).reshape(-1))
        count += len(rows) * size
    return Rests(np.concatenate((*parts, _MARGIN)), begin, begin + width)


def _windows(data: Bytes, start: Ints, width: Ints, size: int) -> Bytes:
    """Bytes from each offset on, with zeros behind the width of each (N, size)."""
    windows = stretches(data, start, size)
    least = int(width.min())
    behind = np.arange(least, size) >= width[:, None]
    windows[:, least:][behind] = 0
    return windows


def make_step_table(data: bytes, scan: Scan) -> StepTable | None:
    """Make the table of a file, without the statements in which comments or escaped apostrophes
    hide what is text; None where none is left."""
    hiding = [comment.start for comment in scan.comments]
    if b"\\" in data:  # one byte is found ten times as fast as several
        hiding += [match.start() for match in _HIDDEN_QUOTE.finditer(data)]
    plain = np.ones(len(scan.ids), dtype=bool)
    if hiding:
        at = np.array(hiding)
        row = np.searchsorted(scan.starts, at, side="right") - 1
        plain[row[(row >= 0) & (at < scan.stops[row])]] = False
    if not plain.any():
        return None
    hides = not plain.all()
    kept = plain if hides else slice(None)
    return StepTable(data, scan.ids[kept], scan.bodies[kept], scan.stops[kept], hides)
