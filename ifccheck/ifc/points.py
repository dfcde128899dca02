"""The points that a body is made of."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import Entity, UnreadableError, get, need

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

Coordinates = list[tuple[float, ...]]


def points_of(context: Context, item: Entity) -> Cloud:
    """Return every point under an item, in the item's own axes [mm]; arcs by what encloses them.

    Raises UnreadableError where there is none.
    """
    points: Coordinates = []
    for entity in context.file.traverse(item):
        reader = READERS.get(entity.is_a())
        if reader is not None:
            points += reader(entity)
    cloud = np.array(points, dtype=float).reshape(-1, 3) * context.units.length
    if not len(cloud) or not np.isfinite(cloud).all():
        raise UnreadableError(f"extent of an {item.is_a()} without points")
    return cloud


def curve_points_of(context: Context, curve: Entity) -> Cloud:
    """Return points that enclose a curve in space, or in the plane of x and y [mm].

    Raises UnreadableError where it is not within the hull of points that the model gives.
    """
    points: Coordinates = []
    for entity in context.file.traverse(curve):
        kind = entity.is_a()
        if kind in BOUNDLESS or (kind == "IfcTrimmedCurve" and not _encloses(entity)):
            raise UnreadableError(f"extent of an {kind}")
        if kind == "IfcCartesianPoint":
            points.append((*entity[0], 0.0)[:3])
        elif kind in ("IfcCartesianPointList2D", "IfcCartesianPointList3D"):
            points += [(*row, 0.0)[:3] for row in entity[0]]
        elif kind in ("IfcCircle", "IfcEllipse"):
            points += _cube(entity, need(need(entity, "Position"), "Location")[0])
    if curve.is_a("IfcLine"):
        raise UnreadableError("extent of a line without ends")
    cloud = np.array(points, dtype=float).reshape(-1, 3) * context.units.length
    if not len(cloud) or not np.isfinite(cloud).all():
        raise UnreadableError(f"extent of an {curve.is_a()} without points")
    return cloud


BOUNDLESS = (
    "IfcCurveSegment", "IfcGradientCurve", "IfcSegmentedReferenceCurve", "IfcOffsetCurve2D",
    "IfcOffsetCurve3D", "IfcOffsetCurveByDistances", "IfcClothoid", "IfcPcurve",
)  # fmt: skip
"""Curves that leave the hull of the points they are made of."""


def _encloses(trimmed: Entity) -> bool:
    """Whether the points of a trimmed curve enclose it: a line's only where it is cut at some."""
    if not need(trimmed, "BasisCurve").is_a("IfcLine"):
        return True
    return all(any(end.is_a("IfcCartesianPoint") for end in trimmed[n]) for n in (1, 2))


def _point(entity: Entity) -> Coordinates:
    return [entity[0]] if len(entity[0]) == 3 else []


def _point_list(entity: Entity) -> Coordinates:
    return list(entity[0])


def _round(entity: Entity) -> Coordinates:
    """Corners of the cube round a circle or an ellipse in space."""
    centre = need(need(entity, "Position"), "Location")[0]
    return _cube(entity, centre) if len(centre) == 3 else []


def _cube(entity: Entity, centre: tuple[float, ...]) -> Coordinates:
    x, y, z = (*centre, 0.0)[:3]
    r = max(get(entity, name) or 0.0 for name in ("Radius", "SemiAxis1", "SemiAxis2"))
    return [(x + a, y + b, z + c) for a in (-r, r) for b in (-r, r) for c in (-r, r)]


READERS: dict[str, Callable[[Entity], Coordinates]] = {
    "IfcCartesianPoint": _point,
    "IfcCartesianPointList3D": _point_list,
    "IfcCircle": _round,
    "IfcEllipse": _round,
}
