"""Cases cut into parts that act or not, each for itself.

What may stand on one span of a line and not on the next makes a part for every span. What the
beams that rest on a line give it, where that may press or lift, makes two.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.loads import LoadTable
from ifccheck.mechanics.arrays import Floats, Ints


@dataclass(frozen=True, slots=True)
class Parts:
    """The parts (P) of all cases (K), case by case."""

    case: Ints
    """Case of each part (P)"""
    first: Ints
    """First part of each case, and the number of parts (K + 1)"""
    places: int
    """Spans of the longest line"""

    @property
    def apart(self) -> bool:
        """Whether some case has parts for loads that act apart."""
        return bool(np.diff(self.first).max() > self.places)

    @property
    def cut(self) -> bool:
        """Whether any case has more than one part."""
        return self.case.size >= self.first.size

    def rows(self, case: int) -> Ints:
        """The parts of one case."""
        return np.arange(self.first[case], self.first[case + 1])

    def of(self, loads: LoadTable, place: Ints, *, apart: bool) -> LoadTable:
        """Loads by cases as loads by parts.

        Parameters
        ----------
        loads
            On spans (L).
        place
            Which span of its line each span is, from 0 (S).
        apart
            They act where the others of their case on the same span do not.
        """
        if not self.cut:
            return loads
        counts = np.diff(self.first)[loads.case]
        part = self.first[loads.case] + np.where(counts > 1, place[loads.beam], 0)
        return loads.with_case(part + np.where(counts > self.places, self.places * apart, 0))

    def whole(self, of_parts: Floats) -> Floats:
        """What every case does as a whole (K, ...), of what its parts do (P, ...)."""
        return np.add.reduceat(of_parts, self.first[:-1], axis=0)


def parts_of(by_spans: Sequence[bool], places: int, *, apart: bool) -> Parts:
    """Cut cases into parts.

    Parameters
    ----------
    by_spans
        Of each case, whether it may act on one span and not on the next (K).
    places
        Spans of the longest line.
    apart
        Whether any load acts apart from the others of its case.
    """
    most = places * (2 if apart else 1)
    counts = np.where(by_spans, most, 1)
    first = np.concatenate([[0], np.cumsum(counts)])
    return Parts(np.repeat(np.arange(counts.size), counts), first, places)
