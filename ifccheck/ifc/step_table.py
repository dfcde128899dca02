"""The statements of a STEP file as arrays, to follow the same references of many at once.

Following a reference through ifcopenshell costs about a microsecond; a model of fifty thousand
bars asks for half a million of them. What is not written in the plainest way is left to it.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.lexer import Scan

_HASH, _QUOTE, _EQUALS, _SPACE, _ZERO, _OPEN = b"#'= 0("
MOST_DIGITS = 10
_POWERS_OF_TEN = 10 ** np.arange(MOST_DIGITS)


@dataclass(frozen=True, slots=True)
class References:
    """The references in some statements, in order (N statements)."""

    count: Ints
    ids: Ints
    """Those of one statement after those of another."""
    first: Ints
    """Where those of each statement begin (N)."""

    def at(self, place: int) -> Ints:
        """The reference of each statement at a place, 0 where it has none; -1 is the last."""
        position = self.count + place if place < 0 else np.full(len(self.count), place)
        there = (position >= 0) & (position < self.count)
        found = np.zeros(len(self.count), dtype=np.intp)
        found[there] = self.ids[(self.first + position)[there]]
        return found


class StepTable:
    """The statements of a file by number."""

    def __init__(self, data: bytes, scan: Scan) -> None:
        self._data = data
        self._bytes = np.frombuffer(data, np.uint8)
        order = np.argsort(scan.ids, kind="stable")
        self._ids, self._starts, self._stops = (
            values[order] for values in (scan.ids, scan.starts, scan.stops)
        )
        self._hashes = np.flatnonzero(self._bytes == _HASH)
        self._quotes = np.flatnonzero(self._bytes == _QUOTE)

    def rows(self, ids: Ints) -> Ints:
        """Row of each statement by its number, -1 where there is none."""
        row = np.searchsorted(self._ids, ids)
        row = np.minimum(row, len(self._ids) - 1)
        return np.where(self._ids[row] == ids, row, -1)

    def named(self, rows: Ints, word: str) -> Bools:
        """Whether each statement is an instance of a class, written as ``#1=WORD(``."""
        digits = np.searchsorted(_POWERS_OF_TEN, self._ids[rows], side="right")
        at = self._starts[rows] + 1 + digits
        at += self._bytes[at] == _SPACE
        found = (rows >= 0) & (self._bytes[at] == _EQUALS)
        at += 1 + (self._bytes[at + 1] == _SPACE)
        letters = np.frombuffer(word.encode() + b"(", np.uint8)
        at[at + len(letters) > len(self._bytes)] = 0
        for place in range(len(letters) - 1, -1, -1):
            found &= self._bytes[at + place] == letters[place]
        return np.asarray(found)

    def _numbers(self, at: Ints) -> Ints:
        """Read the whole number at each offset."""
        number = np.zeros(len(at), dtype=np.intp)
        pending = np.arange(len(at))
        for place in range(MOST_DIGITS):
            digit = self._bytes[at + place] - np.uint8(_ZERO)  # what is below wraps round
            is_digit = digit <= 9
            if not is_digit.all():
                pending, at, digit = pending[is_digit], at[is_digit], digit[is_digit]
            if not len(pending):
                break
            number[pending] = number[pending] * 10 + digit
        return number

    def references(self, rows: Ints) -> References:
        """The references in statements, those in texts left out; none for a row of -1."""
        low = np.searchsorted(self._hashes, self._starts[rows]) + 1
        high = np.searchsorted(self._hashes, self._stops[rows])
        high = np.where(rows >= 0, np.maximum(low, high), low)
        count = high - low
        owner = np.repeat(np.arange(len(rows)), count)
        begin = np.concatenate(([0], np.cumsum(count)))[:-1]
        offsets = self._hashes[low[owner] + np.arange(len(owner)) - begin[owner]]
        outside = np.searchsorted(self._quotes, offsets) % 2 == 0
        offsets, owner = offsets[outside], owner[outside]
        ids = self._numbers(offsets + 1)
        count = np.bincount(owner, minlength=len(rows))
        return References(count, ids, np.concatenate(([0], np.cumsum(count)))[:-1])

    def texts(self, rows: Ints) -> list[bytes]:
        """The statements themselves; empty for a row of -1."""
        stops = np.where(rows >= 0, self._stops[rows], self._starts[rows])
        bounds = zip(self._starts[rows].tolist(), stops.tolist(), strict=True)
        return [self._data[start:stop] for start, stop in bounds]

    def coordinates(self, rows: Ints) -> Floats:
        """Coordinates of points, written as ``((1.,2.,3.))``; nan for those of other form."""
        found = np.full((len(rows), 3), np.nan)
        texts = [text.partition(b"((")[2].partition(b"))")[0] for text in self.texts(rows)]
        spatial = [row for row, text in enumerate(texts) if text.count(b",") == 2]
        if spatial:
            numbers = b",".join(texts[row] for row in spatial).split(b",")
            found[spatial] = read_floats(numbers).reshape(-1, 3)
        return found


def read_floats(texts: list[bytes]) -> npt.NDArray[np.float64]:
    """Read numbers, all of them nan where one is none."""
    try:
        return np.array(texts).astype(np.float64)
    except ValueError:  # something else than numbers: leave them all to ifcopenshell
        return np.full(len(texts), np.nan)


def make_step_table(data: bytes, scan: Scan) -> StepTable | None:
    """Make the table of a file; None where comments or escaped apostrophes hide what is text."""
    if scan.comments or b"\\S\\'" in data or not len(scan.ids):
        return None
    return StepTable(data, scan)
