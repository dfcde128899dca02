"""Bends that a model gives as chords, taken as the arcs that they stand for."""

from __future__ import annotations

import math

import numpy as np

from ifccheck.ifc.bar_paths import Floats, Path, arc_frames
from ifccheck.ifc.bar_traces import as_point

LONGEST_CHORD = 6.0
"""A chord of a bend is no longer than this many diameters."""
SHARPEST, FLATTEST = math.radians(46.0), math.radians(0.5)
"""Turns between two chords of a bend lie between these."""
EQUAL = 0.01
"""Relative difference of the chords of one bend, and part of its radius that corners leave it."""
LONGEST_BEND = 1.05 * math.pi
"""Greatest angle [rad] of one bend."""


def with_arcs(corners: Floats, diameter: float) -> Path:
    """A centre line through corners, runs of equal chords of one circle taken as arcs (N, 3)."""
    points = [corners[0]]
    arcs: list[int] = []
    at = 0
    while at < len(corners) - 1:
        last, middle = _bend(corners, at, diameter)
        if middle is not None:
            arcs.append(len(points) - 1)
            points.append(middle)
        points.append(corners[last])
        at = last
    return Path(tuple(as_point(point) for point in points), tuple(arcs))


def _bend(corners: Floats, first: int, diameter: float) -> tuple[int, Floats | None]:
    """Where a bend that begins at a corner ends, and its middle; else the next corner."""
    chord = _length(corners[first + 1] - corners[first])
    if chord > LONGEST_CHORD * diameter or first + 2 >= len(corners):
        return first + 1, None
    centre, across, turned, half = arc_frames(corners[first : first + 3], np.array([0]))
    step, radius = float(half[0, 0]), _length(across[0])
    if not FLATTEST <= step <= SHARPEST:
        return first + 1, None
    last = first
    while last + 1 < len(corners) and (last + 1 - first) * step <= LONGEST_BEND:
        angle = (last + 1 - first) * step
        place = centre[0] + math.cos(angle) * across[0] + math.sin(angle) * turned[0]
        if _length(corners[last + 1] - place) > EQUAL * max(chord, radius):
            break
        last += 1
    if last < first + 2:
        return first + 1, None
    angle = (last - first) * step / 2.0
    return last, centre[0] + math.cos(angle) * across[0] + math.sin(angle) * turned[0]


def _length(vector: Floats) -> float:
    return math.sqrt(float(vector @ vector))
