"""The statements of a STEP file as arrays, to read the same of many at once.

Following a reference through ifcopenshell costs about a microsecond; a model of fifty thousand
bars asks for half a million of them. What is not written in the plainest way is left to it.
"""

from __future__ import annotations

import numpy as np

from ifccheck.ifc.bar_paths import Ints
from ifccheck.ifc.lexer import Scan
from ifccheck.ifc.step_cursors import Cursors

_POWERS_OF_TEN = 10 ** np.arange(10)
SPARSE = 8
"""Numbers of statements are looked up in a table where it is not this many times as long."""


class StepTable:
    """The statements of a file by number."""

    def __init__(self, data: bytes, scan: Scan) -> None:
        self._data = data
        self._bytes = np.frombuffer(data, np.uint8)
        order = np.argsort(scan.ids, kind="stable")
        self._ids, self._starts, self._stops = (
            values[order] for values in (scan.ids, scan.starts, scan.stops)
        )
        digits = np.searchsorted(_POWERS_OF_TEN, self._ids, side="right")
        self._after_numbers = self._starts + 1 + digits
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
        rows = self.rows(ids)
        cursors = Cursors(self._bytes, self._after_numbers[rows], rows >= 0)
        cursors.tokens(b"=", word.encode(), b"(")
        return cursors

    def rest(self, cursors: Cursors, ids: Ints) -> list[bytes]:
        """What is left of statements from their cursors on; empty for those that are not plain."""
        stops = np.where(cursors.plain, self._stops[self.rows(ids)], cursors.at)
        bounds = zip(cursors.at.tolist(), stops.tolist(), strict=True)
        return [self._data[start:stop] for start, stop in bounds]


def make_step_table(data: bytes, scan: Scan) -> StepTable | None:
    """Make the table of a file; None where comments or escaped apostrophes hide what is text."""
    if scan.comments or b"\\S\\'" in data or not len(scan.ids):
        return None
    return StepTable(data, scan)
