"""Outlines as plane figures: what a box leaves of them, and how wide they are."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from functools import lru_cache
from itertools import pairwise
from typing import TYPE_CHECKING

from ifccheck.beam import Outline, Ring

if TYPE_CHECKING:
    from shapely import LinearRing, Polygon
    from shapely.geometry.base import BaseGeometry

Stretch = tuple[float, float]
"""From right to left, or from low to high [mm]"""

SLIVER = 1e-3
"""Lengths below this are rounding, not shape [mm]"""


@lru_cache(maxsize=1024)
def figure_of(outline: Outline) -> BaseGeometry:
    """Return what lies in an odd number of the rings of an outline."""
    from shapely import Polygon

    figure: BaseGeometry = Polygon(outline.rings[0])
    for ring in outline.rings[1:]:
        figure = figure.symmetric_difference(Polygon(ring))
    return figure


def outline_of(figure: BaseGeometry, name: str) -> Outline:
    """Return a figure as an outline: outer rings anticlockwise, each with its voids clockwise."""
    from shapely.geometry.polygon import orient

    def ring_of(line: LinearRing) -> Ring:
        return tuple((round(y, 6), round(z, 6)) for y, z in line.coords[:-1])

    turned = [orient(part) for part in parts_of(figure)]
    lines = [line for part in turned for line in (part.exterior, *part.interiors)]
    return Outline(tuple(map(ring_of, lines)), name)


def parts_of(figure: BaseGeometry) -> list[Polygon]:
    """Return the polygons that a figure is made of, from the lowest up."""
    parts = [part for part in getattr(figure, "geoms", [figure]) if part.area > SLIVER]
    return sorted(parts, key=lambda part: (part.bounds[1], part.bounds[0]))


def levels_of(figure: BaseGeometry) -> list[Stretch]:
    """Return the stretches of height that a figure covers, from the lowest up."""
    joined: list[Stretch] = []
    for low, high in sorted((part.bounds[1], part.bounds[3]) for part in parts_of(figure)):
        if joined and low <= joined[-1][1] + SLIVER:
            joined[-1] = (joined[-1][0], max(joined[-1][1], high))
        else:
            joined.append((low, high))
    return joined


def narrowest(figure: BaseGeometry) -> tuple[float, Stretch]:
    """Return the least width of a figure where it has any, and from where to where it runs."""
    found = [row for z in _heights(figure) if (row := _across(figure, z))]
    least = min(found, key=lambda row: sum(left - right for right, left in row))
    return sum(left - right for right, left in least), (least[0][0], least[-1][1])


def _heights(figure: BaseGeometry) -> Iterator[float]:
    """Heights just above and just below every corner."""
    rings = [ring for part in parts_of(figure) for ring in (part.exterior, *part.interiors)]
    corners = sorted({round(z, 6) for ring in rings for _, z in ring.coords})
    for low, high in pairwise(corners):
        step = min(SLIVER, (high - low) / 3.0)
        yield low + step
        yield high - step


def _across(figure: BaseGeometry, z: float) -> Sequence[Stretch]:
    """What a level line through a figure runs through, from right to left."""
    from shapely import LineString

    low, _, high, _ = figure.bounds
    cut = figure.intersection(LineString([(low - 1.0, z), (high + 1.0, z)]))
    pieces = [piece for piece in getattr(cut, "geoms", [cut]) if piece.length > SLIVER]
    return sorted((piece.bounds[0], piece.bounds[2]) for piece in pieces)
