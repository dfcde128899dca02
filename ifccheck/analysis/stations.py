"""Where along the beams things are evaluated."""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np

from ifccheck.analysis.loads import LINE, LoadTable
from ifccheck.analysis.spans import SpanTable
from ifccheck.mechanics.arrays import Bools, Floats, Ints

DIVISIONS = 40
"""Parts that a span is cut into at least."""

SAME_PLACE = 1e-6
"""Places nearer together than this are one [mm]."""


@dataclass(frozen=True, slots=True)
class Places:
    """Places where something changes, in any order (Q)."""

    beam: Ints
    x: Floats
    """[mm] from the beam's start (Q)"""
    two_sided: Bools
    """Whether what acts or resists differs just left and just right of it (Q)"""


@dataclass(frozen=True, slots=True)
class StationTable:
    """Stations sorted by beam, x and side (N)."""

    beam: Ints
    x: Floats
    """[mm] from the beam's start (N)"""
    side: Ints
    """-1 just left, +1 just right, 0 where nothing jumps (N)"""

    def first_rows(self, beams: int) -> Ints:
        """First row of each beam, and the number of rows at the end (beams + 1)."""
        return np.searchsorted(self.beam, np.arange(beams + 1)).astype(np.intp, copy=False)


def places(beam: Ints, x: Floats, *, two_sided: bool) -> Places:
    """Places that are all two-sided or all not; places at nan are left out."""
    known = ~np.isnan(x)
    return Places(
        np.asarray(beam, np.intp)[known],
        np.asarray(x, np.float64)[known],
        np.full(int(known.sum()), two_sided),
    )


NOWHERE = places(np.zeros(0, np.intp), np.zeros(0), two_sided=False)


def join_places(*parts: Places) -> Places:
    """Several tables of places as one."""
    return Places(
        *(np.concatenate([getattr(part, f.name) for part in parts]) for f in fields(Places))
    )


def load_places(loads: LoadTable) -> Places:
    """Edges of line loads, and both sides of point loads and moments."""
    line = loads.kind == LINE
    return Places(
        np.concatenate([loads.beam, loads.beam[line]]),
        np.concatenate([loads.start, loads.end[line]]),
        np.concatenate([~line, np.zeros(int(line.sum()), np.bool_)]),
    )


def make_stations(
    spans: SpanTable, loads: LoadTable, extra: Places, divisions: int = DIVISIONS
) -> StationTable:
    """Stations along every span.

    They stand at the ends of equal parts of the span, at every load edge, point load and
    moment, and at the extra places; only within the span. At a two-sided place there are two,
    just left and just right of it; at the ends of the span only the one just inside.

    Parameters
    ----------
    spans
        One span per beam (B).
    loads
        Loads on those beams.
    extra
        Support faces, edges of section runs, bar ends, stirrup zone edges, critical sections.
    divisions
        Number of equal parts.
    """
    found = join_places(_even_places(spans, divisions), load_places(loads), extra)
    reach = SAME_PLACE
    inside = (found.x >= spans.start[found.beam] - reach) & (
        found.x <= spans.end[found.beam] + reach
    )
    beam, x, two_sided = found.beam[inside], found.x[inside], found.two_sided[inside]
    order = np.lexsort((x, beam))
    return _sided(spans, *_merged(beam[order], x[order], two_sided[order]))


def _even_places(spans: SpanTable, divisions: int) -> Places:
    part = np.arange(divisions + 1) / divisions
    x = spans.start[:, None] + spans.length[:, None] * part
    x[:, -1] = spans.end
    beam = np.repeat(np.arange(len(spans.start)), divisions + 1)
    return Places(beam, x.ravel(), np.zeros(x.size, np.bool_))


def _merged(beam: Ints, x: Floats, two_sided: Bools) -> tuple[Ints, Floats, Bools]:
    """Sorted places with those that are one put together; two-sided if any of them is."""
    new = np.ones(len(x), np.bool_)
    new[1:] = (beam[1:] != beam[:-1]) | (x[1:] - x[:-1] > SAME_PLACE)
    first = np.flatnonzero(new)
    if not first.size:
        return beam, x, two_sided
    return beam[first], x[first], np.logical_or.reduceat(two_sided, first)


def _sided(spans: SpanTable, beam: Ints, x: Floats, two_sided: Bools) -> StationTable:
    """A station for each side of each place; outside the span there is none."""
    at_start = x <= spans.start[beam] + SAME_PLACE
    at_end = x >= spans.end[beam] - SAME_PLACE
    x = np.clip(x, spans.start[beam], spans.end[beam])
    both = two_sided & ~at_start & ~at_end
    side = np.where(two_sided, np.where(at_start, 1, -1), 0)
    rows = np.repeat(np.arange(len(x)), 1 + both)
    second = np.zeros(len(rows), np.bool_)
    second[1:] = rows[1:] == rows[:-1]
    return StationTable(beam[rows], x[rows], np.where(second, 1, side[rows]).astype(np.intp))


def insert_stations(stations: StationTable, beam: Ints, x: Floats) -> tuple[StationTable, Ints]:
    """Stations with more of them, at places where nothing jumps.

    Parameters
    ----------
    stations
        Stations (N).
    beam, x
        Places between them, sorted by beam and x (Q).

    Returns
    -------
    tuple
        All stations, and the row of each in the N stations followed by the Q places (N + Q).
    """
    reach = 2.0 * float(np.max(np.abs(stations.x), initial=0.0)) + 1.0
    before = np.searchsorted(reach * stations.beam + stations.x, reach * beam + x)
    rows = np.insert(np.arange(stations.x.size), before, stations.x.size + np.arange(x.size))
    joined = StationTable(
        np.concatenate([stations.beam, beam])[rows],
        np.concatenate([stations.x, x])[rows],
        np.concatenate([stations.side, np.zeros(x.size, np.intp)])[rows],
    )
    return joined, rows


def station_rows(stations: StationTable, beam: Ints, x: Floats, *, left: bool) -> Ints:
    """Row of the station at each given place, on its left or right side where there are two.

    Raises
    ------
    ValueError
        Where there is no station at such a place.
    """
    count = int(max(stations.beam.max(initial=-1), np.max(beam, initial=-1))) + 1
    first = stations.first_rows(count)
    low, high = first[beam], first[np.asarray(beam) + 1]
    aim = x - SAME_PLACE * 2 if left else x + SAME_PLACE * 2
    row = _search_within(stations.x, low, high, aim)
    row = row if left else row - 1
    inside = (row >= low) & (row < high)
    near = inside & (np.abs(stations.x[np.where(inside, row, 0)] - x) <= SAME_PLACE * 2)
    if not near.all():
        missing = int(np.flatnonzero(~near)[0])
        raise ValueError(f"no station on row {beam[missing]} at {x[missing]} mm")
    return row


def _search_within(values: Floats, low: Ints, high: Ints, aim: Floats) -> Ints:
    """First index in each stretch [low, high) whose value is not below the aim, by bisection."""
    low, high = low.copy(), high.copy()
    for _ in range(int(np.max(high - low, initial=0)).bit_length()):
        open_ = low < high
        middle = (low + high) // 2
        below = open_ & (values[np.where(open_, middle, 0)] < aim)
        low = np.where(below, middle + 1, low)
        high = np.where(open_ & ~below, middle, high)
    return low


def rows_before(station_beam: Ints, station_x: Floats, beam: Ints, x: Floats) -> Ints:
    """Row of the last station at or before each place of a beam, else of the beam's first.

    Parameters
    ----------
    station_beam, station_x
        Stations sorted by beam and x (N).
    beam, x
        Places on those beams (Q).
    """
    first = np.searchsorted(station_beam, beam)
    after = np.searchsorted(station_beam, beam, side="right")
    return np.maximum(_search_within(station_x, first, after, x + SAME_PLACE) - 1, first)


def starts(sorted_values: Ints) -> Ints:
    """First row of each stretch of equal values."""
    new = np.ones(sorted_values.size, dtype=np.bool_)
    np.not_equal(sorted_values[1:], sorted_values[:-1], out=new[1:])
    return np.flatnonzero(new)


def critical_rows(stations: StationTable, start: Floats, end: Floats) -> Ints:
    """Row of the station whose shear may be used at each station.

    Between a support and the critical section next to it that is the critical section, seen
    from the side of the support; elsewhere it is the station itself.

    Parameters
    ----------
    stations
        Stations with one at every critical section given (N).
    start, end
        x of the critical section at the start and at the end of each beam [mm] (B); nan where
        the standard does not let nearer stations use it.
    """
    rows = np.arange(len(stations.x))
    for place, left in ((start, True), (end, False)):
        beams = np.flatnonzero(~np.isnan(place))
        at = np.full(len(place), -1)
        at[beams] = station_rows(stations, beams, place[beams], left=left)
        target = at[stations.beam]
        nearer = (rows < target) if left else (rows > target)
        rows = np.where((target >= 0) & nearer, target, rows)
    return rows
