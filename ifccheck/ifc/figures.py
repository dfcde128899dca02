"""Plane figures as rings of corners: cleaned, and one matched to another corner by corner."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.ifc.profile_curves import Points

if TYPE_CHECKING:
    from shapely import Polygon
    from shapely.geometry.base import BaseGeometry

Figure = tuple[Points, ...]
"""The outer ring anticlockwise, then the voids clockwise; corners (y, z) [mm]."""

STRAIGHT = 0.01
"""A corner nearer than this to the line between its neighbours is none [mm]."""
SPECK = 1.0
"""Parts and voids of less area than this are noise of what was cut [mm2]."""


def parts_of(geometry: BaseGeometry) -> list[Polygon]:
    """Return the parts of a figure that are more than specks, the largest first."""
    from shapely import Polygon

    found = [geometry] if isinstance(geometry, Polygon) else getattr(geometry, "geoms", ())
    parts = [part for part in found if isinstance(part, Polygon) and part.area > SPECK]
    return sorted(parts, key=lambda part: -part.area)


def figure(polygon: Polygon) -> Figure:
    """Return a polygon by its corners alone, without specks of voids."""
    from shapely import Polygon
    from shapely.geometry.polygon import orient

    turned = orient(polygon)
    voids = [np.array(ring.coords)[:-1] for ring in turned.interiors if Polygon(ring).area > SPECK]
    rings = [corners(ring) for ring in (np.array(turned.exterior.coords)[:-1], *voids)]
    return tuple(rings)


def corners(points: Points) -> Points:
    """Return a closed polygon without the points that lie on its sides."""
    places = [(float(y), float(z)) for y, z in points]
    at = passed = 0
    while len(places) > 3 and passed < len(places):
        before, place = places[at - 1], places[at]
        after = places[(at + 1) % len(places)]
        if _off_line(before, place, after) <= STRAIGHT:
            del places[at]
            at, passed = (at - 1) % len(places), 0
        else:
            at, passed = (at + 1) % len(places), passed + 1
    return np.array(places)


def _off_line(
    before: tuple[float, float], place: tuple[float, float], after: tuple[float, float]
) -> float:
    """Distance of a place from the line between its neighbours [mm]."""
    y, z = after[0] - before[0], after[1] - before[1]
    length = math.hypot(y, z)
    b, c = place[0] - before[0], place[1] - before[1]
    return abs(y * c - z * b) / length if length > STRAIGHT else math.hypot(b, c)


def matched(one: Figure, other: Figure) -> Figure | None:
    """Return the other figure with its corners in the order of those of the one.

    None where they have not the same numbers of rings and corners.
    """
    if len(one) != len(other):
        return None
    voids = list(other[1:])
    rings = [_turned(one[0], other[0])]
    for void in one[1:]:
        middle = void.mean(axis=0)
        nearest = min(range(len(voids)), key=lambda k: _apart(voids[k].mean(axis=0), middle))
        rings.append(_turned(void, voids.pop(nearest)))
    found = [ring for ring in rings if ring is not None]
    return tuple(found) if len(found) == len(rings) else None


def _apart(one: Points, other: Points) -> float:
    return float(((one - other) ** 2).sum())


def _turned(one: Points, other: Points) -> Points | None:
    """A ring begun at the corner that brings it nearest to another of as many corners."""
    if len(one) != len(other):
        return None
    # corners compared about the middles, so that what grows to one side keeps its order
    first, second = one - one.mean(axis=0), other - other.mean(axis=0)
    places = np.arange(len(one))
    begun = second[(places[:, None] + places) % len(one)]
    apart = ((begun - first) ** 2).sum(axis=(1, 2))
    return other[(places + int(apart.argmin())) % len(one)]


def between(one: Figure, other: Figure, share: float) -> Figure:
    """Return the figure part of the way from one to another whose corners match."""
    return tuple(a + (b - a) * share for a, b in zip(one, other, strict=True))


def farthest(one: Figure, other: Figure) -> float:
    """Return how far the corners of two matching figures are apart at most [mm]."""
    return max(
        float(np.sqrt(((a - b) ** 2).sum(axis=1)).max()) for a, b in zip(one, other, strict=True)
    )


def polygon_of(rings: Figure) -> Polygon:
    """Return a figure as a polygon."""
    from shapely import Polygon

    return Polygon(rings[0], list(rings[1:]))


def alike(one: Figure, other: Figure, within: float) -> bool:
    """Tell whether two figures differ nowhere by more than about that much [mm]."""
    turned = matched(one, other)
    if turned is not None:
        return farthest(one, turned) <= within
    first, second = polygon_of(one), polygon_of(other)
    return bool(first.buffer(within).contains(second) and second.buffer(within).contains(first))
