"""Oriented boxes by the thousand: which of them may touch, and how far they overlap."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from functools import lru_cache
from itertools import chain

import numpy as np
import numpy.typing as npt

from ifccheck.beam import Beam, Member, Outline

Floats = npt.NDArray[np.float64]
Ints = npt.NDArray[np.intp]
Bools = npt.NDArray[np.bool_]

_SIGNS = np.array([[x, y, z] for x in (-1.0, 1.0) for y in (-1.0, 1.0) for z in (-1.0, 1.0)])
_EDGES = np.array([[a, a | bit] for bit in (1, 2, 4) for a in range(8) if not a & bit])
"""The twelve edges of a box as pairs of corners of _SIGNS."""

_PARALLEL = 1e-12

_SQUARE = 1e-15
"""Sine of the angle between axes that are the same but for the rounding of numbers"""

_BLOCK = 1024
"""Pairs of boxes worked out together: so many stay in the processor's own memory"""


@dataclass(frozen=True, slots=True)
class Boxes:
    """Oriented boxes (M)."""

    centre: Floats
    """[mm] (M, 3)"""
    axes: Floats
    """Three unit vectors each, by row (M, 3, 3)"""
    half: Floats
    """Half extents along them [mm] (M, 3)"""

    def take(self, rows: Ints) -> Boxes:
        """The boxes of the given rows."""
        return Boxes(self.centre[rows], self.axes[rows], self.half[rows])

    def grown(self, distance: float) -> Boxes:
        """The boxes with every face moved outward."""
        return Boxes(self.centre, self.axes, self.half + distance)


def member_boxes(members: Sequence[Member]) -> Boxes:
    """Boxes of members, in their order."""
    boxes = [member.box for member in members]
    return Boxes(
        _numbers(chain.from_iterable(box.centre for box in boxes), len(boxes), 3),
        _numbers(chain.from_iterable(chain(*box.axes) for box in boxes), len(boxes), 3, 3),
        _numbers(chain.from_iterable(box.half for box in boxes), len(boxes), 3),
    )


def beam_boxes(beams: Sequence[Beam]) -> Boxes:
    """Boxes of beams from their axis and their outlines, in the beams' own axes.

    Every beam must have an axis and at least one run.
    """
    count = len(beams)
    axes = [beam.axis for beam in beams if beam.axis is not None]
    frame = _numbers(chain.from_iterable((*a.x, *a.y, *a.z) for a in axes), count, 3, 3)
    origin = _numbers(chain.from_iterable(axis.origin for axis in axes), count, 3)
    ranges = _numbers(chain.from_iterable(map(_ranges, beams)), count, 3, 2)
    middle, half = ranges.mean(axis=2), np.ptp(ranges, axis=2) / 2.0
    return Boxes(origin + np.einsum("mk,mkd->md", middle, frame), frame, half)


def _numbers(values: Iterable[float], *shape: int) -> Floats:
    return np.fromiter(values, np.float64, math.prod(shape)).reshape(shape)


def _ranges(beam: Beam) -> tuple[float, ...]:
    """What a beam's body covers along x, y and z of its own axes."""
    return 0.0, beam.length, *section_extent(beam)


def section_extent(beam: Beam) -> tuple[float, float, float, float]:
    """Least and greatest y, then z, of all outlines along a beam with runs [mm]."""
    found = [extent_of(run.outline) for run in beam.runs]
    found += [extent_of(run.outline_end) for run in beam.runs if run.outline_end is not None]
    if len(found) == 1:
        return found[0]
    y_low, y_high, z_low, z_high = zip(*found, strict=True)
    return min(y_low), max(y_high), min(z_low), max(z_high)


@lru_cache(maxsize=4096)
def extent_of(outline: Outline) -> tuple[float, float, float, float]:
    """Least and greatest y, then least and greatest z, of an outline [mm]."""
    ys, zs = zip(*(point for ring in outline.rings for point in ring), strict=True)
    return min(ys), max(ys), min(zs), max(zs)


def near_pairs(first: Boxes, second: Boxes) -> tuple[Ints, Ints]:
    """Rows of the pairs whose upright boxes in the building, and in each other's axes, meet."""
    one, other = _meeting_upright(first, second)
    a, b = first.take(one), second.take(other)
    turn = _turn(a, b)
    apart = _apart_along(a, b, turn) | _apart_along(b, a, turn.swapaxes(1, 2))
    return one[~apart], other[~apart]


def _meeting_upright(first: Boxes, second: Boxes) -> tuple[Ints, Ints]:
    """Pairs whose boxes along X, Y and Z meet."""
    import shapely

    if not (len(first.half) and len(second.half)):
        return np.empty(0, np.intp), np.empty(0, np.intp)
    (low, high), (other_low, other_high) = _upright(first), _upright(second)
    footprints = shapely.box(other_low[:, 0], other_low[:, 1], other_high[:, 0], other_high[:, 1])
    sought = shapely.box(low[:, 0], low[:, 1], high[:, 0], high[:, 1])
    one, other = shapely.STRtree(footprints).query(sought)
    level = (low[one, 2] <= other_high[other, 2]) & (other_low[other, 2] <= high[one, 2])
    return one[level].astype(np.intp), other[level].astype(np.intp)


def _upright(boxes: Boxes) -> tuple[Floats, Floats]:
    reach = np.einsum("mk,mkd->md", boxes.half, np.abs(boxes.axes))
    return boxes.centre - reach, boxes.centre + reach


def _apart_along(a: Boxes, b: Boxes, turn: Floats) -> Bools:
    """Whether one of the axes of a shows a gap between the two boxes (P).

    ``turn`` holds the axes of b in those of a.
    """
    distance = np.abs(np.einsum("pkd,pd->pk", a.axes, b.centre - a.centre))
    reach = a.half + np.einsum("pj,pkj->pk", b.half, np.abs(turn))
    return np.asarray((distance > reach).any(axis=1))


def holds(outer: Boxes, inner: Boxes) -> Bools:
    """Whether each inner box lies wholly in its outer one (P)."""
    distance = np.abs(np.einsum("pkd,pd->pk", outer.axes, inner.centre - outer.centre))
    reach = np.einsum("pj,pkj->pk", inner.half, np.abs(_turn(outer, inner)))
    return np.asarray((distance + reach <= outer.half).all(axis=1))


def _turn(a: Boxes, b: Boxes) -> Floats:
    """Axes of b in those of a: row k, column j is axis k of a along axis j of b (P, 3, 3)."""
    return np.asarray(np.einsum("pkd,pjd->pkj", a.axes, b.axes))


def overlaps(a: Boxes, b: Boxes) -> Floats:
    """What the common part of each pair of boxes covers along the axes of the first.

    Returns
    -------
    array
        Least and greatest place along x, y and z of the first box, from its centre [mm]
        (P, 3, 2); nan where the two do not meet.
    """
    turn, offset = _turn(a, b), np.einsum("pkd,pd->pk", a.axes, b.centre - a.centre)
    size: Floats = np.abs(turn)
    square = ((size <= _SQUARE) | (size >= 1.0 - _SQUARE)).all(axis=(1, 2))
    covered = _square_overlaps(a.half, b.half, np.asarray(size.round(), np.float64), offset)
    askew = np.flatnonzero(~square)
    for first in range(0, askew.size, _BLOCK):
        rows = askew[first : first + _BLOCK]
        covered[rows] = _askew_overlaps(a.half[rows], b.half[rows], turn[rows], offset[rows])
    return covered


def _square_overlaps(half_a: Floats, half_b: Floats, along: Floats, offset: Floats) -> Floats:
    """The common parts of boxes of which every axis of one is along one of the other."""
    reach = np.einsum("pj,pkj->pk", half_b, along)
    low, high = np.maximum(-half_a, offset - reach), np.minimum(half_a, offset + reach)
    meet = (low <= high).all(axis=1)
    return np.where(meet[:, None, None], np.stack([low, high], axis=-1), np.nan)


def _askew_overlaps(half_a: Floats, half_b: Floats, turn: Floats, offset: Floats) -> Floats:
    """The common parts of boxes that stand at any angle to each other.

    The corners of the common part of two convex bodies lie on the edges of one within the
    other, so that the edges of each, cut by the other, give its extent.
    """
    # The axes come first in every array from here on: numpy is slow along short last axes.
    turn, offset = np.ascontiguousarray(turn.transpose(1, 2, 0)), np.ascontiguousarray(offset.T)
    half_a, half_b = np.ascontiguousarray(half_a.T), np.ascontiguousarray(half_b.T)
    signs = _SIGNS.T[:, :, None]
    corners_b = _from_second(signs * half_b[:, None, :], turn, offset)
    corners_a = _turned(signs * half_a[:, None, :] - offset[:, None, :], turn.swapaxes(0, 1))
    cut_a = _from_second(_cut_edges(corners_a, half_b), turn, offset)
    points = np.concatenate([cut_a, _cut_edges(corners_b, half_a)], axis=1)
    return np.stack([np.fmin.reduce(points, axis=1).T, np.fmax.reduce(points, axis=1).T], axis=-1)


def _from_second(points: Floats, turn: Floats, offset: Floats) -> Floats:
    """Places in the axes of the second box, in those of the first (3, S, P)."""
    return offset[:, None, :] + _turned(points, turn)


def _turned(points: Floats, turn: Floats) -> Floats:
    """Sum over j of ``turn[k, j] points[j]`` (3, S, P)."""
    x, y, z = (points[j] * turn[:, None, j] for j in range(3))
    return np.asarray(x + y + z)


def _cut_edges(corners: Floats, half: Floats) -> Floats:
    """Ends of the parts of a box's edges within the upright box of the half extents (3, 24, P);
    nan where an edge has none."""
    start = corners[:, _EDGES[:, 0]]
    way = corners[:, _EDGES[:, 1]] - start
    limit = half[:, None, :]
    parallel = np.abs(way) < _PARALLEL
    step = np.where(parallel, 1.0, way)
    one, other = (-limit - start) / step, (limit - start) / step
    inside = np.abs(start) <= limit
    enter = np.where(parallel, np.where(inside, 0.0, np.inf), np.minimum(one, other))
    leave = np.where(parallel, np.where(inside, 1.0, -np.inf), np.maximum(one, other))
    first = np.maximum(enter.max(axis=0), 0.0)
    last = np.minimum(leave.min(axis=0), 1.0)
    first, last = np.where(first <= last, (first, last), np.nan)
    return np.concatenate([start + first * way, start + last * way], axis=1)
