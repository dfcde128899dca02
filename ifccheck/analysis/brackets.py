"""What the loads left of a section do about it, summed over the loads of each case.

A load at a distance d left of a section acts on it with its force, with its moment, and, for
the elastic line, with the first and the second integral of that moment along the beam. A
trapezoidal line acts through the moments m0 .. m3 of its loaded part about its own start.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from itertools import takewhile

import numpy as np

from ifccheck.analysis.loads import LINE, MOMENT, POINT, LoadTable
from ifccheck.analysis.stations import SAME_PLACE
from ifccheck.mechanics.arrays import Bools, Floats, Ints


@dataclass(frozen=True, slots=True)
class Brackets:
    """Sums over the loads left of each section, forces downward and moments hogging
    positive (K, M); what was not asked for is 0."""

    force: Floats
    moment: Floats
    slope: Floats
    """First integral of the moment along x [N*mm2]"""
    deflection: Floats
    """Second integral [N*mm3]"""


@dataclass(frozen=True, slots=True)
class Sections:
    """Sections at which the loads of each beam are summed, sorted by beam (M)."""

    first: Ints
    """First section of each beam, and their number at the end (B + 1)"""
    x: Floats
    """[mm] from the start of the span (M)"""
    right: Bools
    """Just right of what acts at the same place (M)"""
    whole: bool = False
    """All loads count, wherever they are."""


def sum_brackets(
    loads: LoadTable, sections: Sections, cases: int, integrals: bool = True
) -> Brackets:
    """Sums over the loads of each case at every section.

    Parameters
    ----------
    loads
        Loads with x from the start of their span, sorted by beam (P).
    sections
        Sections sorted by beam (M).
    cases
        Number of cases (K).
    integrals
        Whether the integrals of the moment are wanted.
    """
    wanted = 4 if integrals else 2
    sums = np.zeros((4, cases * len(sections.x)))
    for kind, terms in ((LINE, _line_terms), (POINT, _point_terms), (MOMENT, _moment_terms)):
        chosen = loads.take(np.flatnonzero(loads.kind == kind))
        if chosen.beam.size:
            _add(sums, chosen, sections, terms, wanted)
    return Brackets(*(part.reshape(cases, len(sections.x)) for part in sums))


_Terms = Callable[[LoadTable, Ints, Floats, Bools | None], Iterator[tuple[int, Floats]]]


def _add(sums: Floats, loads: LoadTable, sections: Sections, terms: _Terms, wanted: int) -> None:
    """Add the wanted rows of what loads of one kind do at every section of their beam."""
    load, section = _pairs(loads.beam, sections.first)
    distance = sections.x[section] - loads.start[load]
    left = None
    if not sections.whole:
        left = (distance > SAME_PLACE) | ((distance >= -SAME_PLACE) & sections.right[section])
    cell = loads.case[load] * len(sections.x) + section
    for row, value in takewhile(lambda term: term[0] < wanted, terms(loads, load, distance, left)):
        sums[row] += np.bincount(cell, weights=value, minlength=sums.shape[1])


def _pairs(beam: Ints, first: Ints) -> tuple[Ints, Ints]:
    """Every load with every section of its beam: rows of loads and rows of sections."""
    counts = first[beam + 1] - first[beam]
    load = np.repeat(np.arange(len(beam)), counts)
    offset = np.cumsum(counts) - counts
    section = np.arange(len(load)) + np.repeat(first[beam] - offset, counts)
    return load, section


def _line_terms(
    loads: LoadTable, load: Ints, distance: Floats, left: Bools | None
) -> Iterator[tuple[int, Floats]]:
    length = loads.end - loads.start
    slope = np.divide(
        loads.value_end - loads.value_start,
        length,
        out=np.zeros_like(length),
        where=length > SAME_PLACE,
    )
    d, w, k, loaded = distance, loads.value_start[load], slope[load], length[load]
    t = loaded if left is None else np.clip(d, 0.0, loaded)
    m0 = t * (w + k * t / 2.0)
    yield 0, m0
    m1 = t * t * (w / 2.0 + k * t / 3.0)
    yield 1, m0 * d - m1
    m2 = t * t * t * (w / 3.0 + k * t / 4.0)
    yield 2, ((m0 * d - 2.0 * m1) * d + m2) / 2.0
    m3 = t * t * t * t * (w / 4.0 + k * t / 5.0)
    yield 3, (((m0 * d - 3.0 * m1) * d + 3.0 * m2) * d - m3) / 6.0


def _point_terms(
    loads: LoadTable, load: Ints, distance: Floats, left: Bools | None
) -> Iterator[tuple[int, Floats]]:
    force = loads.value_start[load]
    force = force if left is None else force * left
    moment = force * distance
    yield 0, force
    yield 1, moment
    yield 2, moment * distance / 2.0
    yield 3, moment * distance * distance / 6.0


def _moment_terms(
    loads: LoadTable, load: Ints, distance: Floats, left: Bools | None
) -> Iterator[tuple[int, Floats]]:
    moment = loads.value_start[load]
    moment = moment if left is None else moment * left
    yield 1, moment
    yield 2, moment * distance
    yield 3, moment * distance * distance / 2.0
