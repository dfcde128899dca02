"""Plane figures: area, centroid, how they look from the axes of a member."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
import numpy.typing as npt

from ifccheck.beam import Outline
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.profile_curves import Place, Points, after, before, signed_area


@dataclass(frozen=True)
class Elevation:
    """A convex profile with two parallel long sides: rows of the corners that start them."""

    corners: Points
    """The corners at which the profile turns."""
    first: int
    """Row of the corner that starts the longest side."""
    second: int
    """Row of the corner that starts the side opposite."""
    length: float
    """Length of the longest side [mm]."""
    depth: float
    """Distance between the two sides [mm]."""


@dataclass(frozen=True)
class Turned:
    """A profile turned into the axes of a member: y to the left, z up, about its own origin."""

    corners: tuple[Place, ...]
    """Corners of the outer ring, then the centroid."""
    low: Place
    """Least y and z of the outer ring [mm]."""
    high: Place
    outline: Outline


@dataclass(frozen=True, eq=False)
class Profile:
    """A plane figure: the outer ring anticlockwise, then voids clockwise."""

    rings: tuple[Points, ...]
    name: str = ""
    _turned: dict[tuple[float, ...], Turned] = field(default_factory=dict, repr=False)

    @cached_property
    def area(self) -> float:
        """Area [mm2]."""
        return sum(signed_area(points.tolist()) for points in self.rings)

    @cached_property
    def centroid(self) -> Place:
        """Centroid of the area [mm]."""
        base = self.rings[0][0]
        area = moment_x = moment_y = 0.0
        for points in self.rings:
            x, y = (points - base).T
            next_x, next_y = after(x), after(y)
            twice = x * next_y - next_x * y
            area += float(twice.sum()) / 2.0
            moment_x += float((x + next_x) @ twice) / 6.0
            moment_y += float((y + next_y) @ twice) / 6.0
        return float(base[0] + moment_x / area), float(base[1] + moment_y / area)

    @cached_property
    def diameter(self) -> float:
        """Greatest distance between two corners [mm]."""
        points = self.rings[0]
        apart = points[:, None, :] - points[None, :, :]
        return float(np.sqrt((apart * apart).sum(axis=2).max()))

    @cached_property
    def longest_side(self) -> Place:
        """Direction of the longest side, a unit vector."""
        places = self.rings[0].tolist()
        longest, x, y = 0.0, 1.0, 0.0
        last_x, last_y = places[-1]
        for next_x, next_y in places:
            length = math.hypot(next_x - last_x, next_y - last_y)
            if length > longest:
                longest, x, y = length, (next_x - last_x) / length, (next_y - last_y) / length
            last_x, last_y = next_x, next_y
        return x, y

    @cached_property
    def extent(self) -> tuple[float, float, float, float]:
        """Least and greatest coordinates along its longest side and to the left of it [mm]."""
        x, y = self.longest_side
        places = self.rings[0].tolist()
        along = [a * x + b * y for a, b in places]
        left = [b * x - a * y for a, b in places]
        return min(along), max(along), min(left), max(left)

    @cached_property
    def elevation(self) -> Elevation | None:
        """The profile as an elevation, None where it has no two parallel long sides."""
        return as_elevation(self.rings[0]) if len(self.rings) == 1 else None

    def turned(self, yx: float, yy: float, zx: float, zy: float) -> Turned:
        """Return the profile in other axes: y = yx X + yy Y, z = zx X + zy Y."""
        key = (round(yx, 9), round(yy, 9), round(zx, 9), round(zy, 9))
        if key not in self._turned:
            self._turned[key] = self._turn(key)
        return self._turned[key]

    def _turn(self, turn: tuple[float, float, float, float]) -> Turned:
        matrix = np.eye(4)
        matrix[:2, :2] = np.reshape(turn, (2, 2))
        moved = self.moved(matrix)
        low, high = moved.rings[0].min(axis=0).tolist(), moved.rings[0].max(axis=0).tolist()
        middle = np.array(((low[0] + high[0]) / 2.0, low[1]))
        rings = tuple(
            tuple((y, z) for y, z in np.round(points - middle, 6).tolist())
            for points in moved.rings
        )
        outline = Outline(rings, self.name)
        corners = (*((y, z) for y, z in moved.rings[0].tolist()), moved.centroid)
        return Turned(corners, (low[0], low[1]), (high[0], high[1]), outline)

    def moved(self, matrix: Matrix) -> Profile:
        """Return the profile after a transformation in its plane, mirrored ones included."""
        turn, shift = matrix[:2, :2], matrix[:2, 3]
        rings = tuple(points @ turn.T + shift for points in self.rings)
        if turn[0, 0] * turn[1, 1] < turn[0, 1] * turn[1, 0]:
            rings = tuple(points[::-1] for points in rings)
        return Profile(rings, self.name)


MOST_CORNERS = 12
"""An elevation with mitred ends has few corners."""


def as_elevation(points: Points) -> Elevation | None:
    """Return a convex polygon with two parallel long sides as an elevation, else None."""
    corners = points[_turning(points)]
    if not 4 <= len(corners) <= MOST_CORNERS or not _convex(corners):
        return None
    sides = after(corners) - corners
    lengths = np.hypot(sides[:, 0], sides[:, 1])
    first = int(lengths.argmax())
    along = sides[first] / lengths[first]
    cosines = sides @ along / lengths
    sines = (sides[:, 1] * along[0] - sides[:, 0] * along[1]) / lengths
    opposite = np.flatnonzero((cosines < 0.0) & (np.abs(sines) < 1e-5))
    if len(opposite) != 1:
        return None
    second = int(opposite[0])
    across = corners[second] - corners[first]
    depth = abs(float(across[1] * along[0] - across[0] * along[1]))
    return Elevation(corners, first, second, float(lengths[first]), depth)


def _turns(points: Points) -> Points:
    back, ahead = points - before(points), after(points) - points
    return np.asarray(back[:, 0] * ahead[:, 1] - back[:, 1] * ahead[:, 0])


def _turning(points: Points) -> npt.NDArray[np.bool_]:
    """Which points of a polygon are corners."""
    back, ahead = points - before(points), after(points) - points
    size = np.hypot(*back.T) * np.hypot(*ahead.T)
    return np.asarray(np.abs(_turns(points)) > 1e-7 * size)


def _convex(points: Points) -> bool:
    return bool((_turns(points) > 0.0).all())
