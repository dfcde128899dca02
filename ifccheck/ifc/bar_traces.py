"""Curves given by a formula, traced as centre lines of straight pieces and arcs."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from itertools import pairwise

import numpy as np

from ifccheck.ifc.bar_paths import Floats, Path, Point, arc_frames
from ifccheck.ifc.entity import UnreadableError

FLAT_SHARE, FLAT = 1e-4, 1e-3
"""A piece is straight where it leaves its chord by no more than this part of its length, or this
[mm]."""
ARC_FIT = 0.02
"""A piece is an arc where it leaves the circle through its ends and middle by no more [mm]."""
FIRST_PIECES, DEEPEST = 4, 12
"""Pieces that each smooth part is first cut into, and how often they are halved at most."""
WIDEST_HALF = math.pi / 2.0
"""Greatest angle [rad] of either half of an arc that one piece may turn through."""
Formula = Callable[[float], Floats]


def traced(at: Formula, breaks: Sequence[float]) -> Path:
    """Trace a curve that is smooth between its breaks, given by increasing parameters.

    Raises UnreadableError where it is too intricate for that.
    """
    points = [at(breaks[0])]
    arcs: list[int] = []
    for low, high in pairwise(breaks):
        cuts = np.linspace(low, high, FIRST_PIECES + 1).tolist()
        for start, end in pairwise(cuts):
            _trace(at, start, end, points, arcs)
    return Path(tuple(as_point(point) for point in points), tuple(arcs))


def as_point(place: Floats) -> Point:
    """A place as three numbers."""
    x, y, z = place.tolist()
    return x, y, z


def _trace(
    at: Formula, start: float, end: float, points: list[Floats], arcs: list[int], depth: int = 0
) -> None:
    first, last = points[-1], at(end)
    inner = np.array([at(start + (end - start) * share) for share in (0.25, 0.5, 0.75)])
    if _is_flat(first, inner, last):
        points.append(last)
    elif _is_arc(first, inner, last):
        arcs.append(len(points) - 1)
        points += [inner[1], last]
    elif depth == DEEPEST:
        raise UnreadableError("has a curve that is too intricate to be traced")
    else:
        middle = (start + end) / 2.0
        _trace(at, start, middle, points, arcs, depth + 1)
        _trace(at, middle, end, points, arcs, depth + 1)


def _is_flat(first: Floats, inner: Floats, last: Floats) -> bool:
    chord = last - first
    length = math.sqrt(float(chord @ chord))
    if length <= FLAT:
        return bool(np.abs(inner - first).max() <= FLAT)
    along = (inner - first) @ chord / length
    beside = inner - first - along[:, None] * chord / length
    near = np.sqrt((beside**2).sum(axis=1)).max() <= max(FLAT_SHARE * length, FLAT)
    goes_on = np.diff(along, prepend=0.0, append=length).min() >= -FLAT
    return bool(near and goes_on)


def _is_arc(first: Floats, inner: Floats, last: Floats) -> bool:
    three = np.array([first, inner[1], last])
    centre, across, turned, half = arc_frames(three, np.array([0]))
    if not 0.0 < half.min() <= half.max() <= WIDEST_HALF:
        return False
    radius = math.sqrt(float(across[0] @ across[0]))
    normal = np.cross(across[0], turned[0]) / radius**2
    arms = inner[[0, 2]] - centre[0]
    off_plane = np.abs(arms @ normal)
    off_circle = np.abs(np.sqrt((arms**2).sum(axis=1)) - radius)
    angle = np.arctan2(arms @ turned[0], arms @ across[0]) % (2.0 * math.pi)
    in_order = angle[0] < half[0, 0] < angle[1] < half[0].sum()
    return bool(max(off_plane.max(), off_circle.max()) <= ARC_FIT and in_order)
