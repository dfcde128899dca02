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
