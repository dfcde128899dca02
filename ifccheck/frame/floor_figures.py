"""Floors as plane figures: rings in plan, without voids and openings."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from ifccheck.beam import Point, Ring
from ifccheck.frame.panels import SLIVER

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry


def floor_figure(
    rings: Sequence[Ring], openings: Sequence[Sequence[Ring]], origin: Point = (0.0, 0.0)
) -> BaseGeometry:
    """Return a floor without its openings, seen from an origin."""
    from shapely import Polygon, unary_union

    outer, *voids = (shifted(ring, origin) for ring in rings)
    figure: BaseGeometry = Polygon(outer, voids)
    holes = [Polygon(one, rest) for one, *rest in
             ([shifted(ring, origin) for ring in hole] for hole in openings)]  # fmt: skip
    return figure.difference(unary_union(holes)) if holes else figure


def covered(plans: Sequence[Sequence[Ring]]) -> list[tuple[Ring, ...]]:
    """Return what several plans cover together, each part by its rings."""
    from shapely import unary_union

    whole = unary_union([floor_figure(rings, ()) for rings in plans])
    parts = [part for part in getattr(whole, "geoms", [whole]) if part.area > SLIVER]
    return [
        tuple(tuple(line.coords[:-1]) for line in (part.exterior, *part.interiors))
        for part in parts
    ]


def shifted(ring: Ring, origin: Point) -> list[Point]:
    """Return a ring as it is seen from an origin."""
    return [(x - origin[0], y - origin[1]) for x, y in ring]


def distance_from(ring: Ring, place: Point) -> float:
    """Return how far a place is from what a ring encloses [mm]."""
    from shapely import Point as Place
    from shapely import Polygon

    return float(Polygon(ring).distance(Place(place)))


def together(figures: Sequence[BaseGeometry]) -> BaseGeometry:
    """Return figures that do not overlap as one, without joining those that touch."""
    from shapely import MultiPolygon

    parts = [part for figure in figures for part in getattr(figure, "geoms", [figure])]
    return MultiPolygon([part for part in parts if part.geom_type == "Polygon" and part.area > 0.0])
