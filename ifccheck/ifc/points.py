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


def plane_points_of(context: Context, item: Entity) -> Cloud:
    """Return the points under a curve in space or in the plane of x and y [mm].

    Raises UnreadableError where there is none, or where its ends are no points.
    """
    points: Coordinates = []
    for entity in context.file.traverse(item):
        kind = entity.is_a()
        if kind in ("IfcLine", "IfcTrimmedCurve") and not _trimmed_at_points(item):
            raise UnreadableError("extent of a line without end points")
        if kind == "IfcCartesianPoint":
            points.append((*entity[0], 0.0)[:3])
        elif kind in ("IfcCartesianPointList2D", "IfcCartesianPointList3D"):
            points += [(*row, 0.0)[:3] for row in entity[0]]
    cloud = np.array(points, dtype=float).reshape(-1, 3) * context.units.length
    if not len(cloud) or not np.isfinite(cloud).all():
        raise UnreadableError(f"extent of an {item.is_a()} without points")
    return cloud


def _trimmed_at_points(item: Entity) -> bool:
    return item.is_a("IfcTrimmedCurve") and all(
        any(end.is_a("IfcCartesianPoint") for end in item[number]) for number in (1, 2)
    )


def _point(entity: Entity) -> Coordinates:
    return [entity[0]] if len(entity[0]) == 3 else []


def _point_list(entity: Entity) -> Coordinates:
    return list(entity[0])


def _round(entity: Entity) -> Coordinates:
    """Corners of the cube round a circle or an ellipse in space."""
    centre = need(need(entity, "Position"), "Location")[0]
    if len(centre) != 3:
        return []
    x, y, z = centre
    r = max(get(entity, name) or 0.0 for name in ("Radius", "SemiAxis1", "SemiAxis2"))
    return [(x + a, y + b, z + c) for a in (-r, r) for b in (-r, r) for c in (-r, r)]


READERS: dict[str, Callable[[Entity], Coordinates]] = {
    "IfcCartesianPoint": _point,
    "IfcCartesianPointList3D": _point_list,
    "IfcCircle": _round,
    "IfcEllipse": _round,
}
