"""The room that an outline leaves for bars at a height, inside cover and stirrup."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

from ifccheck.beam import Outline, Ring

EDGE = 1e-3
"""How far from a corner of the outline its width is taken [mm]"""

Stretch = tuple[float, float]
"""From right to left across the width: least and greatest y [mm]"""


class NoRoomError(Exception):
    """Bars do not fit; the message says where."""


def soffit_and_top(outline: Outline) -> tuple[float, float]:
    """Lowest and highest place of an outline [mm]."""
    heights = [z for _, z in outline.rings[0]]
    return min(heights), max(heights)


def stretch_between(outline: Outline, low: float, high: float) -> Stretch:
    """The y that are inside the outline at every height from low to high [mm].

    Raises
    ------
    NoRoomError
        Where the outline has several webs there, or none.
    """
    bottom, top = soffit_and_top(outline)
    low, high = max(low, bottom + EDGE), min(high, top - EDGE)
    corners = [z for ring in outline.rings for _, z in ring if low < z < high]
    heights = [low, high, *(z + step for z in corners for step in (-EDGE, EDGE))]
    stretches = [_stretch_at(outline, z) for z in heights]
    right, left = max(s[0] for s in stretches), min(s[1] for s in stretches)
    if left <= right:
        raise NoRoomError(f"the outline leaves no width from {low:.0f} to {high:.0f} mm")
    return right, left


def web(outline: Outline) -> Stretch:
    """The narrowest stretch of the outline [mm]; one of several webs is no web."""
    bottom, top = soffit_and_top(outline)
    corners = [z for ring in outline.rings for _, z in ring]
    heights = sorted(
        {min(max(z + s, bottom + EDGE), top - EDGE) for z in corners for s in (-EDGE, EDGE)}
    )
    return min((_stretch_at(outline, z) for z in heights), key=lambda s: s[1] - s[0])


def _stretch_at(outline: Outline, z: float) -> Stretch:
    crossings = sorted(y for ring in outline.rings for y in _crossings(ring, z))
    if len(crossings) != 2:
        raise NoRoomError(f"the outline has several webs or a void at a height of {z:.0f} mm")
    return crossings[0], crossings[1]


def _crossings(ring: Ring, z: float) -> list[float]:
    found = []
    for (y0, z0), (y1, z1) in pairwise((*ring, ring[0])):
        if min(z0, z1) <= z < max(z0, z1):
            found.append(y0 + (y1 - y0) * (z - z0) / (z1 - z0))
    return found


def narrowed(stretch: Stretch, inset: float) -> Stretch:
    """The stretch less an inset at both sides [mm]."""
    return stretch[0] + inset, stretch[1] - inset


def common(one: Stretch, other: Stretch) -> Stretch:
    """What two stretches share [mm]; left below right where they share nothing."""
    return max(one[0], other[0]), min(one[1], other[1])


def spread(diameters: Sequence[float], stretch: Stretch) -> list[float]:
    """Centres of bars spread with equal gaps over a stretch, in the order given.

    The first bar goes into the one corner, the second into the other, and so on inwards; a
    single bar goes into the middle.
    """
    right, left = stretch
    if len(diameters) == 1:
        return [0.5 * (right + left)]
    gap = (left - right - sum(diameters)) / (len(diameters) - 1)
    places = [0.0] * len(diameters)
    for index, diameter in enumerate(diameters):
        if index % 2 == 0:
            places[index] = left - 0.5 * diameter
            left -= diameter + gap
        else:
            places[index] = right + 0.5 * diameter
            right += diameter + gap
    return places
