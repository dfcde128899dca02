"""Stirrups: bars that lie square to the beam, their legs, and zones of one spacing."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines, Pieces, count_by_row
from ifccheck.ifc.bar_samples import offsets, spread
from ifccheck.ifc.equal_rows import first_of_each
from ifccheck.ifc.stirrup_legs import Legs, find_legs

SQUARE_DIAMETERS, SQUARE_SLOPE = 3.0, 0.1
"""A stirrup reaches along the beam by no more than this many diameters, or this part of its
extent across."""
UPRIGHT = math.cos(math.radians(20.0))
"""Cosine of the angle to the vertical within which a piece is a leg."""
MEETING, HOOKED_MEETING = 2.0, 8.0
"""A stirrup is closed where its ends, or the bends of its end hooks, are within this many
diameters."""
LEAST_HOOK = 5.9
"""Diameters by which a bar goes on beyond a leg that a hook holds: 6 are the straight extension of
a stirrup's hook alone (CSA A23.1, from memory), less what models round."""
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
    upright = upright_legs(pieces, closed, lines.diameter)
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


def upright_legs(pieces: Pieces, closed: Bools, diameter: Floats) -> Bools:
    """Whether each piece is upright and held at both ends: beyond the upright part, of which it may
    be one of several pieces, the bar goes on for a hook (P); ``diameter`` of each bar."""
    upright = np.abs(pieces.direction[:, 2]) >= UPRIGHT
    before = pieces.neighbour(-1)
    goes_on = (before >= 0) & upright & upright[before]
    goes_on &= pieces.direction[:, 2] * pieces.direction[before, 2] > 0.0
    part = np.cumsum(~goes_on) - 1
    first = np.flatnonzero(~goes_on)
    last = np.append(first[1:], len(part)) - 1
    reached = np.cumsum(pieces.length)
    begins, ends = np.flatnonzero(before < 0), np.flatnonzero(pieces.neighbour(1) < 0)
    bar = np.cumsum(before < 0) - 1
    to_start = (reached - pieces.length)[first] - (reached - pieces.length)[begins[bar[first]]]
    to_end = reached[ends[bar[last]]] - reached[last]
    hook = LEAST_HOOK * diameter[pieces.row[first]]
    held = closed[pieces.row] | (np.minimum(to_start, to_end) >= hook)[part]
    return np.asarray(pieces.straight & upright & held)


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
        return first_of_each(self.legs, area, self.grade, self.closed.astype(np.intp))[1]


@dataclass(frozen=True, slots=True)
class Zones:
    """Stretches of beams with stirrups at one spacing (Z)."""

    start: Floats
    end: Floats
    spacing: Floats
    first: Ints
    """The places that bound the gaps of each, the last included."""
    last: Ints


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


def zones_of_one_spacing(beam: Ints, x: Floats, area: Floats, steel: Ints, length: Floats) -> Zones:
    """Divide stirrups, sorted by beam and x, into zones of one spacing; each with the length of
    its beam [mm] (P).

    Consecutive gaps within 5 % make a zone with the greatest as its spacing; a gap that differs
    starts another, and so does other steel. Each gap has the lesser steel of its two ends. A
    single gap that is closer than its neighbours does not make a closer zone. A zone reaches to
    the beam's end where its last stirrup is within a spacing of it, else half a spacing further.
    """
    before = np.flatnonzero(beam[1:] == beam[:-1])
    gap = x[before + 1] - x[before]
    lesser = np.where(area[before] <= area[before + 1], steel[before], steel[before + 1])
    first = np.flatnonzero(_begins(gap, lesser, beam[before]))
    if not len(first):
        nothing = np.zeros(0, dtype=np.intp)
        return Zones(np.zeros(0), np.zeros(0), np.zeros(0), nothing, nothing)
    bounds = before[first], before[np.append(first[1:], len(gap)) - 1] + 1
    is_first = np.diff(beam[bounds[0]], prepend=-1) != 0
    is_last = np.append(is_first[1:], True)
    single = bounds[1] == bounds[0] + 1
    widest = np.maximum.reduceat(gap, first)
    spacing = _without_lone_close_gaps(widest, single, is_first, is_last)
    start, end, to_end = x[bounds[0]], x[bounds[1]], length[bounds[1]]
    near, far = np.where(start <= spacing, 0.0, start - spacing / 2.0), end + spacing / 2.0
    return Zones(
        start=np.where(is_first, near, start),
        end=np.where(is_last, np.where(to_end - end <= spacing, to_end, far), end),
        spacing=spacing,
        first=bounds[0],
        last=bounds[1],
    )


def _begins(gap: Floats, steel: Ints, beam: Ints) -> Bools:
    """Whether each gap begins a zone: other steel, or another spacing than all before it."""
    begins = np.ones(len(gap), dtype=bool)
    wide, close = np.maximum(gap[1:], gap[:-1]), np.minimum(gap[1:], gap[:-1])
    begins[1:] = (steel[1:] != steel[:-1]) | (beam[1:] != beam[:-1])
    begins[1:] |= wide > SAME_SPACING * close
    first = np.flatnonzero(begins)
    if not len(first):
        return begins
    stop = np.append(first[1:], len(gap))
    drifts = np.maximum.reduceat(gap, first) > SAME_SPACING * np.minimum.reduceat(gap, first)
    for a, b in zip(first[drifts].tolist(), stop[drifts].tolist(), strict=True):
        begins[[a + place for place in _breaks(gap[a:b].tolist())]] = True
    return begins


def _breaks(gaps: Sequence[float]) -> Iterator[int]:
    """Where gaps that change little by little are no longer within 5 %."""
    wide = close = gaps[0]
    for place, gap in enumerate(gaps):
        wide, close = max(wide, gap), min(close, gap)
        if wide > SAME_SPACING * close:
            yield place
            wide = close = gap


def _without_lone_close_gaps(
    spacing: Floats, single: Bools, is_first: Bools, is_last: Bools
) -> Floats:
    """Give zones of one gap that is closer than all its neighbours their least spacing."""
    before, after = np.append(np.inf, spacing[:-1]), np.append(spacing[1:], np.inf)
    beside = np.minimum(np.where(is_first, np.inf, before), np.where(is_last, np.inf, after))
    lone = single & np.isfinite(beside) & (spacing < beside)
    return np.where(lone, beside, spacing)
