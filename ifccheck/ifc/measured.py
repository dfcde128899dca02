"""Strands in the axes of their beams, with all that is known of each and is to be said of it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from ifccheck.beam import Given
from ifccheck.ifc.bar_findings import LISTED, Findings, name_bars
from ifccheck.ifc.bar_paths import Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines, Pieces, cut_into_pieces
from ifccheck.ifc.bar_rows import BarPlaces, Rows
from ifccheck.ifc.bar_sizes import BarSize

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

    def names(self, bars: Iterable[int]) -> str:
        """What people call some bars."""
        bars = list(dict.fromkeys(bars))
        return name_bars([self.places.table.label(bar) for bar in bars[:LISTED]], len(bars))

    def size(self, row: int) -> BarSize:
        """Size of the bar of a row."""
        table = self.places.table
        return table.sizes[int(table.size[self.bar[row]])]

    def strength(self, row: int) -> Given | None:
        """Yield strength of the bar of a row."""
        table = self.places.table
        return table.grades[int(table.grade[self.bar[row]])].strength

    def yields(self) -> Floats:
        """Yield strength by which bars of each grade are compared [MPa]."""
        grades = self.places.table.grades
        return np.array([g.strength.value if g.strength else USUAL_YIELD for g in grades])

    def remark(self, rows: Iterable[int], text: str) -> None:
        """Say something of the bars of rows."""
        for row in rows:
            self.findings.remark(int(self.rows.beam[row]), text, (self.label(row),))

    def reason(self, rows: Iterable[int], text: str) -> None:
        """Say why the bars of rows keep their beams from being rated."""
        for row in rows:
            self.findings.reason(int(self.rows.beam[row]), text, (self.label(row),))


def measure(places: BarPlaces, rows: Rows, findings: Findings) -> Measured:
    """Measure strands in the axes of their beams."""
    lines = places.centre_lines(rows)
    bar = places.table.bar[rows.strand]
    return Measured(places, rows, lines, cut_into_pieces(lines), findings, bar)
