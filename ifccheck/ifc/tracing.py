"""How the section of a solid goes along its axis: stretches on which it changes linearly.

Between two places at which some edge of the solid begins, ends or meets another face, the corners
of its section move along straight lines. The section is cut at three places of each such stretch:
two give the lines, the third proves them. Where it does not, a place was missing, and the stretch
is halved until it does or is shorter than anything that matters.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Literal

import numpy as np

from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.figures import Figure, between, farthest, figure, matched, parts_of
from ifccheck.ifc.solids import Facets, Floats, HalfSpace, Ints, Leaf, Solid

SAME_PLACE = 0.01
"""Places nearer than this are one [mm]."""
SHORT = 1.0
"""A stretch shorter than this is the joint between its neighbours [mm]."""
FINE = 2.0
"""A stretch shorter than this is not halved any more [mm]."""
LINEAR = 0.05
"""How far a corner may lie off the straight line between its places on both sides [mm]."""
CONSTANT = 0.05
"""A section whose corners move by less than this is constant [mm]."""
MOST_PLACES = 600
"""A solid whose section changes at more places than this is curved."""
MOST_CUTS = 2500
"""Sections cut of one solid before it is given up."""
NEAR = 1.0
"""How far beyond the box round a face a crossing may lie and still be on it [mm]."""

Kind = Literal["whole", "parts", "empty", "unclear"]


@dataclass(frozen=True, eq=False)
class Piece:
    """A stretch on which the section changes linearly, or why it cannot be told how."""

    start: float
    end: float
    kind: Kind
    first: Figure = ()
    """Section just after the start [mm]"""
    last: Figure = ()
    """Section just before the end, its corners in the order of the first [mm]"""

    @property
    def constant(self) -> bool:
        """Whether the section stays as it is."""
        return farthest(self.first, self.last) <= CONSTANT

    @property
    def rate(self) -> float:
        """How far a corner moves for each mm along the axis, at most."""
        return farthest(self.first, self.last) / max(self.end - self.start, SHORT)

    def at(self, x: float) -> Figure:
        """The section at a place, its lines drawn on beyond the ends."""
        length = max(self.end - self.start, 1e-9)
        return between(self.first, self.last, (x - self.start) / length)

    def moved_to(self, start: float, end: float) -> Piece:
        """The same lines over another stretch."""
        return Piece(start, end, self.kind, self.at(start), self.at(end))


def trace(solid: Solid) -> list[Piece]:
    """Return the stretches of a solid along x, without those that hold nothing at both ends.

    Raises UnreadableError where its section changes at too many places, or is not closed.
    """
    places = changes(solid)
    if len(places) > MOST_PLACES:
        raise UnreadableError(
            f"not straight: its section changes at {len(places)} places: curved, or too intricate"
        )
    cutter = _Cutter(solid)
    found: list[Piece] = []
    for start, end in pairwise(places):
        if end - start >= SHORT:
            found += cutter.pieces(start, end)
    while found and found[0].kind == "empty":
        found.pop(0)
    while found and found[-1].kind == "empty":
        found.pop()
    return found


@dataclass
class _Cutter:
    """Cuts a solid, and counts."""

    solid: Solid
    cuts: int = 0

    def pieces(self, start: float, end: float) -> list[Piece]:
        """The stretches between two places."""
        width = end - start
        places = [start + share * width for share in (0.25, 0.5, 0.75)]
        parts = [parts_of(self.solid.section(place)) for place in places]
        self._count(len(parts))
        counts = {min(len(each), 2) for each in parts}
        if counts == {0}:
            return [Piece(start, end, "empty")]
        if counts == {1}:
            linear = _linear(start, end, *(figure(each[0]) for each in parts))
            if linear is not None:
                return [linear]
        if counts == {2}:
            return [Piece(start, end, "parts")]
        if width < FINE:
            return [Piece(start, end, "unclear")]
        middle = (start + end) / 2.0
        return [*self.pieces(start, middle), *self.pieces(middle, end)]

    def _count(self, cuts: int) -> None:
        self.cuts += cuts
        if self.cuts > MOST_CUTS:
            raise UnreadableError("not straight: its section changes along curves")


def _linear(start: float, end: float, one: Figure, two: Figure, three: Figure) -> Piece | None:
    """The stretch of three sections at a quarter, a half and three quarters, if it is linear."""
    middle, last = matched(one, two), matched(one, three)
    if middle is None or last is None or farthest(between(one, last, 0.5), middle) > LINEAR:
        return None
    if farthest(one, last) <= CONSTANT:
        return Piece(start, end, "whole", middle, middle)
    return Piece(start, end, "whole", between(one, last, -0.5), between(one, last, 1.5))


def changes(solid: Solid) -> list[float]:
    """Places along x at which the section of a solid may begin to change in another way [mm]."""
    leaves = list(solid.leaves())
    added = list(solid.added())
    if not added:
        raise UnreadableError("body is a half-space alone")
    low = min(float(leaf.points[:, 0].min()) for leaf in added)
    high = max(float(leaf.points[:, 0].max()) for leaf in added)
    found = [leaf.points[:, 0] for leaf in leaves if isinstance(leaf, Facets)]
    for leaf in leaves:
        if isinstance(leaf, Facets):
            found += [_meetings(leaf, other) for other in leaves if other is not leaf]
    found.append(_wedges(leaves))
    places = np.concatenate(found)
    places = np.unique(places[(places >= low) & (places <= high)])
    kept = np.concatenate([[True], np.diff(places) > SAME_PLACE])
    return [float(place) for place in places[kept].tolist()]


def _meetings(leaf: Facets, other: Leaf) -> Floats:
    """x of the places at which edges of a solid cross the faces of another."""
    ends = leaf.points[leaf.edges]
    if isinstance(other, HalfSpace):
        return _crossings(ends, other.outward[None, :], other.point[None, :])[1][:, 0]
    low, high, normals, points = _faces(other)
    face, at = _crossings(ends, normals, points)
    on = ((at >= low[face] - NEAR) & (at <= high[face] + NEAR)).all(axis=1)
    return np.asarray(at[on, 0])


def _faces(leaf: Facets) -> tuple[Floats, Floats, Floats, Floats]:
    """Box round each face, its unit normal, and a point of it."""
    order = np.argsort(leaf.sides[:, 0], kind="stable")
    corner = leaf.points[leaf.sides_points[order, 0]]
    first = np.flatnonzero(np.diff(leaf.sides[order, 0], prepend=-1))
    low = np.minimum.reduceat(corner, first, axis=0)
    high = np.maximum.reduceat(corner, first, axis=0)
    normals = leaf.normals[leaf.sides[order[first], 0]]
    size = np.sqrt((normals * normals).sum(axis=1, keepdims=True))
    return low, high, normals / np.maximum(size, 1e-12), corner[first]


def _crossings(ends: Floats, normals: Floats, points: Floats) -> tuple[Ints, Floats]:
    """Rows of the planes that edges cross, and where they do."""
    height = np.einsum("epk,fk->epf", ends, normals) - np.einsum("fk,fk->f", points, normals)
    edge, plane = np.nonzero(height[:, 0] * height[:, 1] < 0.0)
    first, last = height[edge, 0, plane], height[edge, 1, plane]
    share = (first / (first - last))[:, None]
    return plane, ends[edge, 0] + share * (ends[edge, 1] - ends[edge, 0])


def _wedges(leaves: Sequence[Leaf]) -> Floats:
    """x of the places at which two half-spaces' planes and a face of a solid meet."""
    planes = [leaf for leaf in leaves if isinstance(leaf, HalfSpace)]
    found: list[float] = []
    solids = [_faces(leaf) for leaf in leaves if isinstance(leaf, Facets)] if planes[1:] else []
    for row, one in enumerate(planes):
        for other in planes[row + 1 :]:
            for low, high, normals, points in solids:
                found += _triple(one, other, low, high, normals, points)
    return np.array(found)


def _triple(
    one: HalfSpace, other: HalfSpace, low: Floats, high: Floats, normals: Floats, points: Floats
) -> list[float]:
    shape = normals.shape
    rows = np.stack(
        [np.broadcast_to(one.outward, shape), np.broadcast_to(other.outward, shape), normals],
        axis=1,
    )
    sure = np.abs(np.linalg.det(rows)) > 1e-9
    right = np.stack(
        [
            np.full(len(points), one.outward @ one.point),
            np.full(len(points), other.outward @ other.point),
            (normals * points).sum(axis=1),
        ],
        axis=1,
    )
    at = np.linalg.solve(rows[sure], right[sure][..., None])[..., 0]
    on = ((at >= low[sure] - NEAR) & (at <= high[sure] + NEAR)).all(axis=1)
    return [float(x) for x in at[on, 0]]
