"""Stirrups: bars that lie square to the beam, their legs, and zones of one spacing."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines, Pieces, count_by_row
from ifccheck.ifc.bar_samples import offsets, spread
from ifccheck.ifc.stirrup_legs import Legs, find_legs

SQUARE_DIAMETERS, SQUARE_SLOPE = 3.0, 0.1
"""A stirrup reaches along the beam by no more than this many diameters, or this part of its
extent across."""
UPRIGHT = math.cos(math.radians(20.0))
"""Cosine of the angle to the vertical within which a piece is a leg."""
MEETING, HOOKED_MEETING = 2.0, 8.0
"""A stirrup is closed where its ends, or the bends of its end hooks, are within this many
diameters."""
FULL_WINDING = 2.0 * math.pi * (1.0 - 1e-3)
SAME_PLACE, SAME_PLACE_DIAMETERS = 5.0, 1.5
"""Stirrups are at one place along the beam within this [mm], or within this many diameters."""
SAME_SPACING = 1.05
"""Ratio of spacings up to which gaps make one zone."""
SAME_STEEL = 0.01
"""Relative step of areas within which two places hold the same steel."""


@dataclass(frozen=True, slots=True)
class Ties:
    """Bars square to the beam, one row per bar (T)."""

    row: Ints
    x: Floats
    """Place along the beam [mm]."""
    low: Floats
    """Least y and z of the centre line (T, 2)."""
    high: Floats
    legs: Ints
    """Legs that cross each of ``LEVELS`` (T, 3)."""
    closed: Bools
    shape: Ints
    """Which of the bars that were measured it is like."""
    soffit: Floats
    top: Floats
    """Of the section [mm]."""

    def take(self, kept: Ints | Bools) -> Ties:
        """Some of the ties; rows may repeat."""
        return Ties(
            self.row[kept],
            self.x[kept],
            self.low[kept],
            self.high[kept],
            self.legs[kept],
            self.closed[kept],
            self.shape[kept],
            self.soffit[kept],
            self.top[kept],
        )


def lies_square(lines: CentreLines) -> Bools:
    """Whether each bar lies in a plane square to the beam's axis (R)."""
    extent = lines.highest() - lines.lowest()
    across = extent[:, 1:].max(axis=1)
    allowed = np.maximum(SQUARE_DIAMETERS * lines.diameter, SQUARE_SLOPE * across)
    return np.asarray((extent[:, 0] <= allowed) & (across > extent[:, 0]))


def find_ties(
    lines: CentreLines, pieces: Pieces, soffit: Floats, height: Floats
) -> tuple[Ties, Legs]:
    """Find the legs of bars that lie square; soffit and height of the section at each (R)."""
    closed = is_closed(lines, pieces)
    anchored = closed[pieces.row] | ((pieces.neighbour(-1) >= 0) & (pieces.neighbour(1) >= 0))
    upright = pieces.straight & (np.abs(pieces.direction[:, 2]) >= UPRIGHT) & anchored
    low, high = lines.lowest(), lines.highest()
    middle = (low[:, 0] + high[:, 0]) / 2.0
    legs = find_legs(pieces, upright, middle, soffit, height)
    row = np.arange(lines.count)
    ties = Ties(
        row=row,
        x=middle,
        low=low[:, 1:],
        high=high[:, 1:],
        legs=legs.count(lines.count),
        closed=closed,
        shape=row,
        soffit=soffit,
        top=soffit + height,
    )
    return ties, legs


def is_closed(lines: CentreLines, pieces: Pieces) -> Bools:
    """Whether each bar closes on itself, hooks both ends round one corner, or laps a full turn."""
    first, last = lines.first[:-1], lines.first[1:] - 1
    gap = np.sqrt(((lines.points[first] - lines.points[last]) ** 2).sum(axis=1))
    meets = gap <= MEETING * lines.diameter
    if len(pieces.row):
        meets |= _hooks_meet(lines, pieces)
    return np.asarray(meets | (np.abs(_winding(lines)) >= FULL_WINDING))


def _hooks_meet(lines: CentreLines, pieces: Pieces) -> Bools:
    """Whether the tails at both ends of each bar are short and their bends are at one corner."""
    counts = count_by_row(pieces.row, np.ones(len(pieces.row), dtype=bool), lines.count)
    end = np.cumsum(counts)
    enough = counts >= 4
    head, foot = np.where(enough, end - counts, 0), np.where(enough, end - 1, 0)
    longest_tail = (lines.highest() - lines.lowest())[:, 2] / 2.0
    short = np.maximum(pieces.length[head], pieces.length[foot]) <= longest_tail
    between = pieces.end[head] - pieces.start[foot]
    distance = np.sqrt((between[:, 1:] ** 2).sum(axis=1))
    return np.asarray(enough & short & (distance <= HOOKED_MEETING * lines.diameter))


def _winding(lines: CentreLines) -> Floats:
    """Angle [rad] that each bar turns round the middle of its extent, in the section's plane."""
    middle = (lines.lowest() + lines.highest()) / 2.0
    arm = (lines.points - middle[lines.row])[:, 1:]
    angle = np.arctan2(arm[:, 1], arm[:, 0])
    step = np.diff(angle, append=angle[-1:])
    step = (step + math.pi) % (2.0 * math.pi) - math.pi
    step[lines.first[1:] - 1] = 0.0
    return np.asarray(np.bincount(lines.row, weights=step, minlength=lines.count))


@dataclass(frozen=True, slots=True)
class Places:
    """All the stirrups at one place along a beam, sorted by beam and x (P)."""

    beam: Ints
    x: Floats
    legs: Ints
    area: Floats
    """Area of all the legs [mm2]."""
    diameter: Floats
    closed: Bools
    grade: Ints
    """Index of the steel; -1 where the stirrups here are of several."""
    bottom: Floats
    top: Floats
    half_width: Floats
    ties: Ints
    """The ties, those of one place after those of another."""
    first_tie: Ints
    """Where the ties of each place begin, and their number at the end (P + 1)."""

    def ties_of(self, place: int) -> list[int]:
        """The ties of a place."""
        found: list[int] = self.ties[self.first_tie[place] : self.first_tie[place + 1]].tolist()
        return found

    def take(self, kept: Ints) -> Places:
        """Some of the places, in order."""
        if len(kept) == len(self.x):
            return self
        counts = np.diff(self.first_tie)[kept]
        place, within = spread(counts)
        return Places(
            beam=self.beam[kept],
            x=self.x[kept],
            legs=self.legs[kept],
            area=self.area[kept],
            diameter=self.diameter[kept],
            closed=self.closed[kept],
            grade=self.grade[kept],
            bottom=self.bottom[kept],
            top=self.top[kept],
            half_width=self.half_width[kept],
            ties=self.ties[self.first_tie[kept][place] + within],
            first_tie=offsets(counts),
        )

    def steel(self) -> Ints:
        """A number for each place, the same where legs, area, steel and form are the same."""
        area = np.rint(np.log(np.maximum(self.area, 1e-3)) / SAME_STEEL).astype(np.intp)
        key = np.stack([self.legs, area, self.grade, self.closed.astype(np.intp)], axis=1)
        return np.unique(key, axis=0, return_inverse=True)[1].reshape(-1)


@dataclass(frozen=True, slots=True)
class Zone:
    """A stretch of a beam with stirrups at one spacing."""

    start: float
    end: float
    spacing: float
    first: int
    """The places that bound its gaps, the last included."""
    last: int

    def between(self, start: float, end: float) -> Zone:
        """The same zone with other ends."""
        return Zone(start, end, self.spacing, self.first, self.last)

    def shifted(self, places: int) -> Zone:
        """The same zone where other places stand before."""
        return Zone(self.start, self.end, self.spacing, self.first + places, self.last + places)


def gather_places(
    ties: Ties, place: Ints, beam: Ints, diameter: Floats, area: Floats, grade: Ints
) -> Places:
    """Put stirrups at one place of a beam together; arrays are one row per tie."""
    width = ties.high[:, 0] - ties.low[:, 0]
    order = np.lexsort((width, place))
    first = np.flatnonzero(np.diff(place[order], prepend=-1))
    ends = np.concatenate((first, [len(order)]))
    thick, grades, outside = diameter[order], grade[order], diameter[order] / 2.0
    low, high, legs = ties.low[order], ties.high[order], ties.legs[order]
    least_grade = np.minimum.reduceat(grades, first)
    one_grade = least_grade == np.maximum.reduceat(grades, first)
    reach = np.maximum(high[:, 0], -low[:, 0]) + outside
    return Places(
        beam=beam[order[first]],
        x=np.add.reduceat(ties.x[order], first) / np.diff(ends),
        legs=np.add.reduceat(legs, first).min(axis=1),
        area=np.add.reduceat(legs * area[order][:, None], first).min(axis=1),
        diameter=np.minimum.reduceat(thick, first),
        closed=ties.closed[order[ends[1:] - 1]],  # the widest
        grade=np.where(one_grade, least_grade, -1),
        bottom=np.minimum.reduceat(low[:, 1] - outside, first),
        top=np.maximum.reduceat(high[:, 1] + outside, first),
        half_width=np.maximum.reduceat(reach, first),
        ties=ties.row[order],
        first_tie=ends,
    )


def same_place(ties: Ties, beam: Ints, diameter: Floats) -> Ints:
    """Number the places along the beams, in order; stirrups at one place have one number."""
    order = np.lexsort((ties.x, beam))
    near = np.maximum(SAME_PLACE, SAME_PLACE_DIAMETERS * diameter[order])
    split = np.zeros(len(order), dtype=np.intp)
    split[1:] = (np.diff(beam[order]) != 0) | (np.diff(ties.x[order]) > near[1:])
    place = np.empty(len(order), dtype=np.intp)
    place[order] = np.cumsum(split)
    return place


def zones_of_one_spacing(
    xs: Sequence[float], areas: Sequence[float], steel: Sequence[int], length: float
) -> list[Zone]:
    """Divide sorted stirrups into zones of one spacing along a beam of that length [mm].

    Consecutive gaps within 5 % make a zone with the greatest as its spacing; a gap that differs
    starts another, and so does other steel. Each gap has the lesser steel of its two ends. A
    single gap that is closer than its neighbours does not make a closer zone. A zone reaches to
    the beam's end where its last stirrup is within a spacing of it, else half a spacing further.
    """
    if len(xs) < 2:
        return []
    zones = _without_lone_close_gaps(list(_joined(xs, areas, steel)))
    first, last = zones[0], zones[-1]
    zones[0] = first.between(_reach(first.start, first.spacing, 0.0, -1.0), first.end)
    zones[-1] = zones[-1].between(zones[-1].start, _reach(last.end, last.spacing, length, 1.0))
    return zones


def _reach(x: float, spacing: float, end: float, sign: float) -> float:
    return end if (end - x) * sign <= spacing else x + sign * spacing / 2.0


def _joined(xs: Sequence[float], areas: Sequence[float], steel: Sequence[int]) -> Iterator[Zone]:
    """Join consecutive gaps of one spacing and the same steel."""
    begin, wide, close, held = 0, 0.0, 0.0, -1
    for index in range(len(xs) - 1):
        gap = xs[index + 1] - xs[index]
        lesser = steel[index] if areas[index] <= areas[index + 1] else steel[index + 1]
        widest, closest = (gap if gap > wide else wide), (gap if gap < close else close)
        if index and lesser == held and widest <= SAME_SPACING * closest:
            wide, close = widest, closest
            continue
        if index:
            yield Zone(xs[begin], xs[index], wide, begin, index)
        begin, wide, close, held = index, gap, gap, lesser
    yield Zone(xs[begin], xs[-1], wide, begin, len(xs) - 1)


def _without_lone_close_gaps(zones: list[Zone]) -> list[Zone]:
    """Give a zone of one gap that is closer than all its neighbours their least spacing."""
    if len(zones) == 1:
        return zones
    settled = []
    for index, zone in enumerate(zones):
        beside = [z.spacing for z in zones[max(index - 1, 0) : index + 2] if z is not zone]
        lone = zone.last == zone.first + 1 and beside and zone.spacing < min(beside)
        settled.append(replace(zone, spacing=min(beside)) if lone else zone)
    return settled
