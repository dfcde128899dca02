"""Boxes round members whose body cannot be traced: rough, and rather too large than too small."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.beam import Box
from ifccheck.ifc.bodies import Placed, resolved_items
from ifccheck.ifc.boxes import box_round
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import (
    ILL_TYPED,
    REPRESENTATION,
    Entity,
    UnreadableError,
    get,
    need,
    numbers,
    several,
)
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.points import plane_points_of, points_of
from ifccheck.ifc.profiles import Profiles

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

GROWN = 300.0
"""Every face of a rough box is moved out by this: an axis tells of no width [mm]."""

ROUGH = "its extent is known only roughly"

_STEP = math.radians(5.0)
_PROFILES = ("SweptArea", "EndSweptArea")


def rough_box(context: Context, profiles: Profiles, product: Entity) -> Box:
    """Return the box round every point under any representation of a product, and GROWN more.

    A revolved body by its profile at steps of five degrees; one swept along a curve by the
    points of that curve, and grown by the reach of its profile besides. Raises UnreadableError
    where it has no point.
    """
    shape = product.get_argument(REPRESENTATION)
    whole = context.placements.matrix(product)
    clouds: list[Cloud] = []
    for representation in (shape.get_argument(2) or ()) if shape is not None else ():
        level = get(representation, "RepresentationIdentifier") == "Axis"
        for placed in resolved_items(context, representation, whole):
            clouds += _clouds(context, profiles, placed, level)
    if not clouds:
        raise UnreadableError(f"extent of an {product.is_a()} without points")
    return _grown(np.concatenate(clouds), np.ascontiguousarray(whole[:3, :3].T))


def _grown(cloud: Cloud, axes: Matrix) -> Box:
    box = box_round(cloud, axes)
    x, y, z = box.half
    return Box(box.centre, box.axes, (x + GROWN, y + GROWN, z + GROWN))


def _clouds(context: Context, profiles: Profiles, placed: Placed, level: bool) -> Iterator[Cloud]:
    """Points of an item in the building; nothing where it has none."""
    try:
        if placed.item.is_a("IfcRevolvedAreaSolid"):
            local = _revolved(context, profiles, placed.item)
        else:
            read = plane_points_of if level else points_of
            local = _swollen(read(context, placed.item), _reach(profiles, placed.item))
    except (UnreadableError, *ILL_TYPED):
        return  # the rest of its representations may tell more
    yield local @ placed.matrix[:3, :3].T + placed.matrix[:3, 3]


def _reach(profiles: Profiles, item: Entity) -> float:
    """How far the profiles of a swept item reach from the curve they are swept along [mm]."""
    areas = [area for name in _PROFILES if (area := get(item, name)) is not None]
    areas += several(item, "CrossSections")
    corners = [np.abs(profiles.of(area).rings[0]).max() for area in areas]
    return float(max(corners, default=0.0)) * math.sqrt(2.0)


def _swollen(cloud: Cloud, reach: float) -> Cloud:
    if not reach:
        return cloud
    ways = np.array([[x, y, z] for x in (-1, 1) for y in (-1, 1) for z in (-1, 1)]) * reach
    return np.asarray((cloud[:, None, :] + ways).reshape(-1, 3))


def _revolved(context: Context, profiles: Profiles, item: Entity) -> Cloud:
    """Corners of a revolved profile at even steps of its turn, in the item's own axes."""
    ring = profiles.of(need(item, "SweptArea")).rings[0]
    corners = np.column_stack([ring, np.zeros(len(ring))])
    axis = need(item, "Axis")
    about = get(axis, "Axis")
    way = np.array(numbers(about, 3) if about is not None else (0.0, 0.0, 1.0))
    way = way / np.sqrt(way @ way)
    foot = np.array(need(axis, "Location")[0]) * context.units.length
    angle = float(need(item, "Angle")) * context.units.angle
    steps = np.linspace(0.0, angle, max(2, math.ceil(abs(angle) / _STEP) + 1))
    turned = np.concatenate([_turned(corners - foot, way, step) + foot for step in steps])
    position = context.placements.axes(get(item, "Position"))
    return np.asarray(turned @ position[:3, :3].T + position[:3, 3])


def _turned(points: Cloud, way: Cloud, angle: float) -> Cloud:
    """Points turned about an axis through the origin, by Rodrigues' formula."""
    c, s = math.cos(angle), math.sin(angle)
    return np.asarray(
        points * c + np.cross(way, points) * s + np.outer(points @ way, way) * (1.0 - c)
    )
