"""Strands in the axes of their beams, with all that is known of each and is to be said of it."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import islice

import numpy as np

from ifccheck.beam import Given
from ifccheck.ifc.bar_findings import LISTED, Findings, name_bars
from ifccheck.ifc.bar_paths import Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines, Pieces, cut_into_pieces
from ifccheck.ifc.bar_rows import BarPlaces, Rows
from ifccheck.ifc.bar_samples import offsets, spread
from ifccheck.ifc.bar_sizes import BarSize
from ifccheck.ifc.equal_rows import first_of_each

USUAL_YIELD = 400.0
"""Yield strength [MPa] by which bars of unknown steel are compared."""


@dataclass(frozen=True, slots=True)
class Measured:
    """Strands in the axes of their beams with all that is known of each (R)."""

    places: BarPlaces
    rows: Rows
    lines: CentreLines
    pieces: Pieces
    findings: Findings
    bar: Ints
    """Bar of each row."""

    def label(self, row: int) -> str:
        """What people call the bar of a row."""
        return self.places.table.label(int(self.bar[row]))

    def names(self, bars: Ints, first: Ints, stop: Ints) -> list[str]:
        """What people call bars, those of each of several runs together."""
        run, within = spread(stop - first)
        bars = bars[first[run] + within]
        distinct = np.sort(first_of_each(run, bars)[0])
        counts = np.bincount(run[distinct], minlength=len(first))
        rank = np.arange(len(distinct)) - offsets(counts)[run[distinct]]
        labels = iter(self.places.table.labels(bars[distinct[rank < LISTED]]))
        return [name_bars(list(islice(labels, min(LISTED, n))), n) for n in counts.tolist()]

    def size(self, row: int) -> BarSize:
        """Size of the bar of a row."""
        table = self.places.table
        return table.sizes[int(table.size[self.bar[row]])]

    def strength(self, row: int) -> Given | None:
        """Yield strength of the bar of a row; nan where one is stated that cannot be read."""
        table = self.places.table
        return table.grades[int(table.grade[self.bar[row]])].given

    def yields(self) -> Floats:
        """Yield strength by which bars of each grade are compared [MPa]."""
        grades = self.places.table.grades
        return np.array([g.strength.value if g.strength else USUAL_YIELD for g in grades])

    def remark(self, rows: Ints, text: str) -> None:
        """Say something of the bars of rows."""
        self.remark_each(rows, np.zeros(len(rows), dtype=np.intp), (text,))

    def remark_each(self, rows: Ints, number: Ints, texts: Sequence[str]) -> None:
        """Say of the bar of each row the text that it has the number of; "" is not said."""
        told = np.array([bool(text) for text in texts], dtype=bool)[number]
        for beam, one, labels in self._by_beam(rows[told], number[told]):
            self.findings.remark(beam, texts[one], labels)

    def reason(self, rows: Ints, text: str) -> None:
        """Say why the bars of rows keep their beams from being rated."""
        for beam, _, labels in self._by_beam(rows, np.zeros(len(rows), dtype=np.intp)):
            self.findings.reason(beam, text, labels)

    def _by_beam(self, rows: Ints, number: Ints) -> Iterator[tuple[int, int, list[str]]]:
        """Labels of the bars of rows, together for each beam and number, in the order of the
        first row of each."""
        beam = self.rows.beam[rows]
        order = np.lexsort((number, beam))
        begins = np.ones(len(order), dtype=bool)
        begins[1:] = (np.diff(beam[order]) != 0) | (np.diff(number[order]) != 0)
        first = np.flatnonzero(begins)
        stop = np.append(first[1:], len(order))
        labels = self.places.table.labels(self.bar[rows[order]])
        in_turn = np.argsort(order[first])
        columns = (beam[order[first]], number[order[first]], first, stop)
        for at, one, a, b in zip(*(c[in_turn].tolist() for c in columns), strict=True):
            yield at, one, labels[a:b]


def measure(places: BarPlaces, rows: Rows, lines: CentreLines, findings: Findings) -> Measured:
    """Measure strands in the axes of their beams by their centre lines there."""
    bar = places.table.bar[rows.strand]
    return Measured(places, rows, lines, cut_into_pieces(lines), findings, bar)
