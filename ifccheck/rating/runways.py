"""Lines that trains run along: what those do wherever anything is asked of a beam."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.arrangements import (
    ARRANGEMENTS,
    GREATEST_MOMENT,
    GREATEST_SHEAR,
    LEAST_MOMENT,
    LEAST_SHEAR,
    MovingEffects,
)
from ifccheck.analysis.line_table import LineTable
from ifccheck.analysis.moving import MovingCase, moving_effects, moving_reactions
from ifccheck.analysis.parts import Parts
from ifccheck.analysis.spans import SpanTable
from ifccheck.analysis.stations import SAME_PLACE, Places, StationTable, places
from ifccheck.analysis.stiffness import Curvature
from ifccheck.mechanics.arrays import Bools, Floats, Ints

DIVISIONS = 200
"""Parts that a span is cut into along which a train runs: its greatest moment turns anywhere"""


@dataclass(frozen=True, slots=True)
class Runway:
    """A line along which trains run, as one of its beams needs it."""

    spans: SpanTable
    """Of the whole line, each in the x of its own beam (L)"""
    lines: LineTable
    """The one line"""
    curvature: Curvature | None
    own: tuple[int, ...]
    """Rows of the spans of the beam, in their order along it"""
    trains: tuple[tuple[str, MovingCase], ...]
    """By the name of their case, whose row is not known here"""

    def numbered(self, rows: Sequence[int]) -> list[MovingCase]:
        """The trains, each in the row of its case among all effects."""
        return [replace(train, case=row) for row, (_, train) in zip(rows, self.trains, strict=True)]


@dataclass(frozen=True, slots=True)
class _Laid:
    """A runway in a batch."""

    runway: Runway
    span: Ints
    """Rows of the spans of the beam in the batch"""
    trains: list[MovingCase]
    """With the part of their case that they make"""


@dataclass(frozen=True, slots=True)
class Runways:
    """All runways of a batch of beams."""

    laid: tuple[_Laid, ...]
    spans: int
    """Of the batch (S)"""
    parts: int
    """Of all cases (P)"""

    @property
    def part(self) -> Ints:
        """Parts of cases that move, ascending (G)."""
        every = {train.case for each in self.laid for train in each.trains}
        return np.array(sorted(every), np.intp)

    @property
    def passed(self) -> Bools:
        """Whether a train may be on each span (S)."""
        found = np.zeros(self.spans, np.bool_)
        for each in self.laid:
            found[each.span] = True
        return found

    def places(self, spans: SpanTable) -> Places:
        """Places on spans at which stations are wanted."""
        rows = np.flatnonzero(self.passed)
        part = np.arange(DIVISIONS + 1) / DIVISIONS
        x = spans.start[rows, None] + part * spans.length[rows, None]
        return places(np.repeat(rows, part.size), x.ravel(), two_sided=False)

    def effects(self, stations: StationTable) -> MovingEffects:
        """What moves, at stations with the rows of the spans of the batch (N).

        With the extreme that an arrangement seeks goes the other effect where that is greatest in
        size, wherever the trains then stand: what depends on moment and shear together may be worse
        under a train between the two places than at either.
        """
        part, size = self.part, stations.x.size
        shape = ARRANGEMENTS, part.size, size
        moment, shear = np.zeros((2, *shape))
        standing, turned = np.full((2, *shape), np.nan), np.zeros(shape, np.bool_)
        for each in self.laid:
            rows, here = _of_runway(each, stations)
            line = each.runway
            found = moving_effects(line.spans, line.lines, each.trains, here, line.curvature)
            if found is None or not rows.size:
                continue
            at = np.ix_(np.arange(ARRANGEMENTS), np.searchsorted(part, found.case), rows)
            moment[at], shear[at], turned[at] = found.moment, found.shear, found.turned
            for train in (0, 1):
                standing[train][at] = found.places[train]
        bending, shearing = [GREATEST_MOMENT, LEAST_MOMENT], [GREATEST_SHEAR, LEAST_SHEAR]
        moment[shearing], shear[bending] = _greater(*moment[bending]), _greater(*shear[shearing])
        return MovingEffects(part, moment, shear, standing, turned)

    def wheels(
        self, part: int, span: int, first: Sequence[float], turned: bool
    ) -> tuple[float, ...]:
        """Where the wheels of a case stand, in the x of the beam of a span [mm]; ``first`` is where
        the first wheel of each train stands along the line, nan where that train is not there."""
        for each in self.laid:
            train = next((one for one in each.trains if one.case == part), None)
            if train is not None and span in each.span:
                order = [one.turned() for one in reversed(train.trains)] if turned else train.trains
                along = [
                    place + wheel
                    for place, one in zip(first, order, strict=False)
                    if not np.isnan(place)
                    for wheel in one.places.tolist()
                ]
                return _in_own_x(each, span, along, train)
        return ()

    def reactions(self) -> tuple[Floats, Floats]:
        """Greatest and least upward force, by part, of the whole support at the start and the end
        of each span [N] (P, S, 2)."""
        greatest, least = np.zeros((2, self.parts, self.spans, 2))
        for each in self.laid:
            line = each.runway
            found = moving_reactions(line.spans, line.lines, each.trains, line.curvature)
            for span, end, node in _nodes(each):
                greatest[found.case, span, end] = found.greatest[:, node]
                least[found.case, span, end] = found.least[:, node]
        return greatest, least

    def end_moments(self, spans: SpanTable) -> tuple[Floats, Floats]:
        """Greatest and least moment just inside the start and the end of each span, by part
        [N*mm] (P, S, 2)."""
        span = np.repeat(np.arange(self.spans), 2)
        x = np.stack([spans.start, spans.end], axis=-1).ravel()
        moving = self.effects(StationTable(span, x, np.tile([1, -1], self.spans)))
        greatest, least = np.zeros((2, self.parts, self.spans, 2))
        greatest[moving.case] = moving.moment[GREATEST_MOMENT].reshape(-1, self.spans, 2)
        least[moving.case] = moving.moment[LEAST_MOMENT].reshape(-1, self.spans, 2)
        return greatest, least


def _greater(one: Floats, other: Floats) -> Floats:
    """Whichever is greater in size."""
    return np.where(np.abs(one) >= np.abs(other), one, other)


def runways_of(
    runways: Sequence[Runway | None], beam_of: Ints, parts: Parts, row_of_case: Mapping[str, int]
) -> Runways | None:
    """The runways of a batch; None where no train runs.

    Parameters
    ----------
    runways
        Of each beam (B).
    beam_of
        Beam of each span (S).
    parts, row_of_case
        Of the cases. A train is in the first part of its case.
    """
    laid = []
    for beam, each in enumerate(runways):
        if each is not None:
            rows = [int(parts.first[row_of_case[name]]) for name, _ in each.trains]
            laid.append(_Laid(each, np.flatnonzero(beam_of == beam), each.numbered(rows)))
    return Runways(tuple(laid), beam_of.size, parts.case.size) if laid else None


def _of_runway(each: _Laid, stations: StationTable) -> tuple[Ints, StationTable]:
    """Rows of the stations on a runway, and those with the rows of its own spans."""
    first = int(each.span[0])
    held = (stations.beam >= first) & (stations.beam < first + each.span.size)
    rows = np.flatnonzero(held)
    own = np.array(each.runway.own, np.intp)[stations.beam[rows] - first]
    return rows, StationTable(own, stations.x[rows], stations.side[rows])


def _in_own_x(
    each: _Laid, span: int, along: Sequence[float], train: MovingCase
) -> tuple[float, ...]:
    """Places along a line in the x of the beam of one of its spans, of wheels on their way."""
    lines, spans = each.runway.lines, each.runway.spans
    own = each.runway.own[span - int(each.span[0])]
    place = int(np.flatnonzero(lines.span == own)[0])
    before = float(spans.length[lines.span[:place]].sum())
    on_way = [s for s in along if train.start - SAME_PLACE <= s <= train.end + SAME_PLACE]
    if lines.reversed[place]:
        return tuple(sorted(float(spans.end[own]) - (s - before) for s in on_way))
    return tuple(float(spans.start[own]) + s - before for s in on_way)


def _nodes(each: _Laid) -> Iterator[tuple[int, int, int]]:
    """Span of the batch, end (0 its start, 1 its end) and node of the line, of all span ends of a
    beam."""
    lines = each.runway.lines
    for span, own in zip(each.span.tolist(), each.runway.own, strict=True):
        place = int(np.flatnonzero(lines.span == own)[0])
        against = bool(lines.reversed[place])
        yield from ((span, end, place + (end != against)) for end in (0, 1))
