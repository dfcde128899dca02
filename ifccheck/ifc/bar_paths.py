"""Centre lines of bars: points, with arcs through three of them."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.many_vectors import crosses, dots
from ifccheck.ifc.placements import Matrix

Floats = npt.NDArray[np.float64]
Ints = npt.NDArray[np.intp]
Bools = npt.NDArray[np.bool_]
Point = tuple[float, float, float]

LONGEST_ARC = 1.9 * math.pi
"""Greatest angle [rad] that three points describe well."""
STRAIGHT_ON = 1e-4
"""Half of the turn [rad] below which a polyline has no corner."""


@dataclass(frozen=True, slots=True)
class Path:
    """A centre line: points [mm]; at each index in ``arcs`` an arc runs through three points."""

    points: tuple[Point, ...]
    arcs: tuple[int, ...] = ()

    def reversed(self) -> Path:
        """Return the same line run the other way."""
        last = len(self.points) - 1
        return Path(self.points[::-1], tuple(last - first - 2 for first in reversed(self.arcs)))


def rounded(path: Path, radius: float) -> Path:
    """Round the inner corners of a polyline to a radius of the centre line [mm].

    Raises UnreadableError where its pieces are too short for that.
    """
    corners = [np.array(point) for point in path.points]
    points, arcs = [corners[0]], []
    for before, corner, after in zip(corners, corners[1:], corners[2:], strict=False):
        back, on = before - corner, after - corner
        back, on = back / max(_norm(back), 1e-9), on / max(_norm(on), 1e-9)
        half = math.acos(min(max(float(back @ on), -1.0), 1.0)) / 2.0
        if half > math.pi / 2.0 - STRAIGHT_ON:
            points.append(corner)
            continue
        tangent = radius / max(math.tan(half), 1e-9)
        if tangent > _norm(points[-1] - corner) or tangent > _norm(after - corner):
            raise UnreadableError("has bends too wide for its pieces")
        inward = (back + on) / _norm(back + on)
        arcs.append(len(points))
        middle = corner + inward * radius * (1.0 / math.sin(half) - 1.0)
        points += [corner + back * tangent, middle, corner + on * tangent]
    points.append(corners[-1])
    return Path(tuple((float(x), float(y), float(z)) for x, y, z in points), tuple(arcs))


def _norm(vector: Floats) -> float:
    return math.sqrt(float(vector @ vector))


def path_length(path: Path) -> float:
    """Length of a centre line along its lines and arcs [mm]."""
    points = np.array(path.points)
    steps = np.sqrt((np.diff(points, axis=0) ** 2).sum(axis=1))
    if path.arcs:
        starts = np.array(path.arcs, dtype=np.intp)
        _, across, _, half = arc_frames(points, starts)
        radius = np.sqrt((across**2).sum(axis=1))
        for step in (0, 1):
            steps[starts + step] = np.maximum(steps[starts + step], radius * half[:, step])
    return float(steps.sum())


def whole_arc(frame: Matrix, radius: float, first: float, turn: float) -> Path:
    """An arc from an angle on through a turn, as one or two arcs of three points."""
    pieces = 1 if abs(turn) <= LONGEST_ARC else 2
    points = [
        frame[:3, 3] + radius * (math.cos(angle) * frame[:3, 0] + math.sin(angle) * frame[:3, 1])
        for angle in (first + turn * step / (2 * pieces) for step in range(2 * pieces + 1))
    ]
    return Path(
        tuple((float(x), float(y), float(z)) for x, y, z in points),
        tuple(2 * piece for piece in range(pieces)),
    )


def arc_frames(points: Floats, starts: Ints) -> tuple[Floats, Floats, Floats, Floats]:
    """Centre, radius vectors at and square to the start, and the angle of each half (arcs, 2).

    Three points on one line are no arc: their halves have the angle 0.
    """
    a, b, c = points[starts], points[starts + 1], points[starts + 2]
    ab, ac = b - a, c - a
    normal = crosses(ab, ac)
    square, first, second = dots(normal, normal), dots(ab, ab), dots(ac, ac)
    reach = first * second
    flat = square <= 1e-12 * reach
    safe = np.where(flat, 1.0, square)
    centre = (
        a
        + (second[:, None] * crosses(normal, ab) - first[:, None] * crosses(normal, ac))
        * (0.5 / safe)[:, None]
    )
    across = a - centre
    turned = crosses(normal / np.sqrt(safe)[:, None], across)
    angles = [
        np.arctan2(dots(p - centre, turned), dots(p - centre, across)) % (2.0 * math.pi)
        for p in (b, c)
    ]
    half = np.stack([angles[0], angles[1] - angles[0]], axis=1)
    return centre, across, turned, np.where(flat[:, None], 0.0, half)
