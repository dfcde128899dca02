"""Oriented boxes by the thousand: which of them may touch, and how far they overlap."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields
from typing import Self

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


@dataclass(frozen=True, slots=True)
class Boxes:
    """Oriented boxes (M)."""

    centre: Floats
    """[mm] (M, 3)"""
    axes: Floats
    """Three unit vectors each, by row (M, 3, 3)"""
    half: Floats
    """Half extents along them [mm] (M, 3)"""

    def take(self, rows: Ints) -> Self:
        """The boxes of the given rows."""
        return type(self)(*(getattr(self, f.name)[rows] for f in fields(self)))

    def grown(self, distance: float) -> Boxes:
        """The boxes with every face moved outward."""
        return Boxes(self.centre, self.axes, self.half + distance)

    def corners(self) -> Floats:
        """(M, 8, 3)"""
        offsets = np.einsum("sk,mk,mkd->msd", _SIGNS, self.half, self.axes)
        return np.asarray(self.centre[:, None, :] + offsets)


def member_boxes(members: Sequence[Member]) -> Boxes:
    """Boxes of members, in their order."""
    count = len(members)
    return Boxes(
        np.array([member.box.centre for member in members], np.float64).reshape(count, 3),
        np.array([member.box.axes for member in members], np.float64).reshape(count, 3, 3),
        np.array([member.box.half for member in members], np.float64).reshape(count, 3),
    )


def beam_boxes(beams: Sequence[Beam]) -> Boxes:
    """Boxes of beams from their axis and their outlines, in the beams' own axes.

    Every beam must have an axis and at least one run.
    """
    count = len(beams)
    axes = [beam.axis for beam in beams if beam.axis is not None]
    frame = np.array([(axis.x, axis.y, axis.z) for axis in axes], np.float64).reshape(count, 3, 3)
    origin = np.array([axis.origin for axis in axes], np.float64).reshape(count, 3)
    ranges = np.array([_ranges(beam) for beam in beams], np.float64).reshape(count, 3, 2)
    middle, half = ranges.mean(axis=2), np.ptp(ranges, axis=2) / 2.0
    return Boxes(origin + np.einsum("mk,mkd->md", middle, frame), frame, half)


def _ranges(beam: Beam) -> tuple[tuple[float, float], ...]:
    """What a beam's body covers along x, y and z of its own axes."""
    outlines: list[Outline] = []
    for run in beam.runs:
        outlines.append(run.outline)
        if run.outline_end is not None:
            outlines.append(run.outline_end)
    points = [point for outline in outlines for ring in outline.rings for point in ring]
    ys, zs = [y for y, _ in points], [z for _, z in points]
    return (0.0, beam.length), (min(ys), max(ys)), (min(zs), max(zs))


def near_pairs(first: Boxes, second: Boxes) -> tuple[Ints, Ints]:
    """Rows of the pairs whose upright boxes in the building, and in each other's axes, meet."""
    one, other = _meeting_upright(first, second)
    a, b = first.take(one), second.take(other)
    apart = _apart_along(a, b) | _apart_along(b, a)
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


def _apart_along(a: Boxes, b: Boxes) -> Bools:
    """Whether one of the axes of a shows a gap between the two boxes (P)."""
    distance = np.abs(np.einsum("pkd,pd->pk", a.axes, b.centre - a.centre))
    reach = a.half + np.einsum("pj,pkj->pk", b.half, np.abs(_turn(a, b)))
    return np.asarray((distance > reach).any(axis=1))


def _turn(a: Boxes, b: Boxes) -> Floats:
    """Axes of b in those of a: row k, column j is axis k of a along axis j of b (P, 3, 3)."""
    return np.asarray(np.einsum("pkd,pjd->pkj", a.axes, b.axes))


def overlaps(a: Boxes, b: Boxes) -> Floats:
    """What the common part of each pair of boxes covers along the axes of the first.

    The corners of the common part of two convex bodies lie on the edges of one within the
    other, so that the edges of each, cut by the other, give its extent.

    Returns
    -------
    array
        Least and greatest place along x, y and z of the first box, from its centre [mm]
        (P, 3, 2); nan where the two do not meet.
    """
    # The axes come first in every array from here on: numpy is slow along short last axes.
    turn = np.ascontiguousarray(_turn(a, b).transpose(1, 2, 0))
    offset = np.ascontiguousarray(np.einsum("pkd,pd->kp", a.axes, b.centre - a.centre))
    half_a, half_b = np.ascontiguousarray(a.half.T), np.ascontiguousarray(b.half.T)
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
