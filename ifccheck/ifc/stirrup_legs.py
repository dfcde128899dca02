"""Legs of stirrups: where they cross the height, which lie in one another, how far they reach."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from ifccheck.beam import Bars
from ifccheck.ifc.bar_clashes import TOUCHING
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import Pieces
from ifccheck.ifc.bar_samples import offsets, spread

LEVELS = (0.25, 0.5, 0.75)
"""Heights in the section at which legs are counted; the least number counts, so that legs which
only lap at one height are not counted twice."""
ROUND_BARS = 1.5
"""A stirrup holds bars whose centres lie beyond it by no more than this many of their diameters."""
CHORD = 0.25
"""Bars within this part of the height from a face are the bars of that face."""
NEAR_SURFACE, GREATEST_COVER = 0.15, 60.0
"""Where a face has no bars, stirrups reach to within this part of the height from it, or this
[mm], the greatest cover of a beam (CSA A23.1, from memory)."""


@dataclass(frozen=True, slots=True)
class Legs:
    """Places at which bars that lie square cross the levels (G), those of one bar together."""

    shape: Ints
    """Bar that each is of."""
    level: Ints
    """Index of the level."""
    x: Floats
    """Along the beam, from the middle of the bar [mm]."""
    y: Floats
    z: Floats

    def take(self, kept: Ints | Bools) -> Legs:
        """Some of the legs."""
        return Legs(self.shape[kept], self.level[kept], self.x[kept], self.y[kept], self.z[kept])

    def count(self, shapes: int) -> Ints:
        """Legs of each bar at each level (S, 3)."""
        number = self.shape * len(LEVELS) + self.level
        return np.bincount(number, minlength=shapes * len(LEVELS)).reshape(shapes, len(LEVELS))


def find_legs(
    pieces: Pieces, upright: Bools, middle: Floats, soffit: Floats, height: Floats
) -> Legs:
    """Find where pieces cross the levels; at half height only those that are ``upright``."""
    found = []
    for column, part in enumerate(LEVELS):
        level = (soffit + part * height)[pieces.row]
        crossing = (pieces.start[:, 2] < level) != (pieces.end[:, 2] < level)
        at = np.flatnonzero(crossing & upright if part == 0.5 else crossing)
        start, end = pieces.start[at], pieces.end[at]
        share = (level[at] - start[:, 2]) / (end[:, 2] - start[:, 2])
        place = start + share[:, None] * (end - start)
        row = pieces.row[at]
        column_of = np.full(len(at), column, dtype=np.intp)
        found.append(Legs(row, column_of, place[:, 0] - middle[row], place[:, 1], place[:, 2]))
    names = ("shape", "level", "x", "y", "z")
    joined = Legs(*(np.concatenate([getattr(legs, name) for legs in found]) for name in names))
    return joined.take(np.argsort(joined.shape, kind="stable"))


@dataclass(frozen=True, slots=True)
class Doubled:
    """Legs that lie in others and are left out."""

    counts: Ints
    """Of each stirrup at each level (T, 3)."""
    pairs: Ints
    """Stirrups with such legs where it matters to their number (Q, 2)."""
    beside: Ints
    """Stirrups with a leg beside a like one of another, along the beam: at one place, but not in
    one another (S)"""


@dataclass(frozen=True, slots=True)
class Standing:
    """Stirrups whose legs are looked at; one row each (T)."""

    shape: Ints
    x: Floats
    diameter: Floats
    strength: Floats
    """Yield strength [MPa]."""
    place: Ints
    """Number of the place along a beam."""
    serves: Bools
    """Levels at which each is looked at (T, 3)."""

    def gives(self, stirrup: int) -> tuple[float, float, int]:
        """What a leg gives; of equal ones the later is as if it gave more."""
        return float(self.diameter[stirrup]), float(self.strength[stirrup]), stirrup


def legs_in_one_another(legs: Legs, ties: Standing) -> Doubled:
    """Find legs that lie in others at the same place along the beam; of two that which gives
    more is left out."""
    stirrup, leg = _legs_of(legs, ties.shape)
    held = ties.serves[stirrup, legs.level[leg]]
    stirrup, leg = stirrup[held], leg[held]
    counts = np.zeros((len(ties.shape), len(LEVELS)), dtype=np.intp)
    group = ties.place[stirrup] * len(LEVELS) + legs.level[leg]
    order = np.lexsort((legs.y[leg], group))
    stirrup, leg, group = stirrup[order], leg[order], group[order]
    along, thick = ties.x[stirrup] + legs.x[leg], ties.diameter[stirrup]
    left_out: set[int] = set()
    beside: set[int] = set()
    pairs = []
    for one, other, in_one in _near_pairs(group, legs.y[leg], along, thick):
        if one in left_out or other in left_out:
            continue
        first, second = int(stirrup[one]), int(stirrup[other])
        if not in_one:
            if legs.level[leg[one]] != 1 and first != second:
                beside |= {first, second}
            continue
        out = one if ties.gives(first) > ties.gives(second) else other
        left_out.add(out)
        counts[stirrup[out], legs.level[leg[out]]] += 1
        if legs.level[leg[out]] != 1 and first != second:
            pairs.append((min(first, second), max(first, second)))
    return Doubled(
        counts,
        np.array(pairs, dtype=np.intp).reshape(-1, 2),
        np.array(sorted(beside), dtype=np.intp),
    )


def overlap_themselves(legs: Legs, diameter: Floats) -> Bools:
    """Whether bars have legs that lie in others of their own (S)."""
    legs = legs.take(np.lexsort((legs.y, legs.level, legs.shape)))
    group = legs.shape * len(LEVELS) + legs.level
    found = np.zeros(len(diameter), dtype=bool)
    pairs = _near_pairs(group, legs.y, legs.x, diameter[legs.shape])
    found[legs.shape[np.array([one for one, _, in_one in pairs if in_one], dtype=np.intp)]] = True
    return found


def _legs_of(legs: Legs, shape: Ints) -> tuple[Ints, Ints]:
    """Stirrup and leg of every leg of the stirrups with these shapes."""
    if not len(shape):
        return np.zeros(0, dtype=np.intp), np.zeros(0, dtype=np.intp)
    first = offsets(np.bincount(legs.shape, minlength=int(shape.max()) + 1))
    stirrup, within = spread(np.diff(first)[shape])
    return stirrup, first[shape[stirrup]] + within


def _near_pairs(group: Ints, y: Floats, x: Floats, diameter: Floats) -> list[tuple[int, int, bool]]:
    """Pairs in one group, sorted by y in each, that are nearer across the beam than bars can lie,
    and whether they are along it too."""
    found: list[tuple[int, int, bool]] = []
    first = np.arange(len(group))
    widest = TOUCHING * float(diameter.max(initial=0.0))
    for step in range(1, len(group)):
        first = first[first + step < len(group)]
        other = first + step
        apart = y[other] - y[first]
        going = (group[other] == group[first]) & (apart < widest)
        first, other, apart = first[going], other[going], apart[going]
        if not first.size:
            break
        reach = TOUCHING * (diameter[first] + diameter[other]) / 2.0
        near, in_one = apart < reach, np.abs(x[first] - x[other]) < reach
        columns = (first[near].tolist(), other[near].tolist(), in_one[near].tolist())
        found.extend(zip(*columns, strict=True))
    return found


@dataclass(frozen=True, slots=True)
class Extents:
    """How stirrups stand in their sections; one row each (T)."""

    beam: Ints
    x: Floats
    low: Floats
    """Least height of the centre line [mm]."""
    high: Floats
    radius: Floats
    soffit: Floats
    top: Floats
    """Of the section [mm]."""


def reaches_chords(extents: Extents, bars: Mapping[int, tuple[Bars, ...]]) -> Bools:
    """Whether stirrups reach the outermost bars at the bottom and at the top (T, 2).

    Web reinforcement goes as close to both surfaces as cover lets it (CSA A23.3-14, 12.13.1,
    from memory).
    """
    height = extents.top - extents.soffit
    cover = np.maximum(NEAR_SURFACE * height, GREATEST_COVER) + extents.radius
    lowest, highest = _chords(extents, bars, height)
    bottom = np.where(np.isinf(lowest), extents.soffit + cover, lowest)
    top = np.where(np.isinf(highest), extents.top - cover, highest)
    return np.stack([extents.low <= bottom, extents.high >= top], axis=1)


def _chords(
    extents: Extents, bars: Mapping[int, tuple[Bars, ...]], height: Floats
) -> tuple[Floats, Floats]:
    """Heights that stirrups reach to hold the bars of both faces [mm]; infinite without bars.

    The bars are those at the stirrup; where none is there, those of the whole beam.
    """
    layers = [(beam, b.start, b.end, b.z, b.diameter) for beam in bars for b in bars[beam]]
    of_beam, start, end, z, thick = np.array(layers, dtype=float).reshape(-1, 5).T
    order = np.argsort(extents.beam, kind="stable")
    sorted_beam = extents.beam[order]
    first = np.searchsorted(sorted_beam, of_beam)
    layer, within = spread(np.searchsorted(sorted_beam, of_beam, side="right") - first)
    tie = order[first[layer] + within]
    here = (start[layer] <= extents.x[tie]) & (extents.x[tie] <= end[layer])
    low = z[layer] <= extents.soffit[tie] + CHORD * height[tie]
    high = z[layer] >= extents.top[tie] - CHORD * height[tie]
    near, far = z[layer] + ROUND_BARS * thick[layer], z[layer] - ROUND_BARS * thick[layer]
    count = len(extents.beam)
    return (
        _extreme(np.minimum, np.inf, count, tie, near, low, here),
        _extreme(np.maximum, -np.inf, count, tie, far, high, here),
    )


def _extreme(
    ufunc: np.ufunc, empty: float, count: int, tie: Ints, value: Floats, side: Bools, here: Bools
) -> Floats:
    at_stirrup, anywhere = np.full(count, empty), np.full(count, empty)
    ufunc.at(anywhere, tie[side], value[side])
    ufunc.at(at_stirrup, tie[side & here], value[side & here])
    return np.where(np.isinf(at_stirrup), anywhere, at_stirrup)
