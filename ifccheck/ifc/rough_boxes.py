"""Boxes round members whose body cannot be traced: rough, and rather too large than too small."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.beam import Box
from ifccheck.ifc.bodies import BOOLEANS, resolved_items
from ifccheck.ifc.boxes import FACETED, box_round
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import (
    REPRESENTATION,
    Entity,
    UnreadableError,
    get,
    need,
    numbers,
    several,
)
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.points import curve_points_of, points_of
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.vectors import unit

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

GROWN = 300.0
"""Every face of a rough box is moved out by this: an axis tells of no width [mm]."""

ROUGH = "its extent is known only roughly"

_STEP = math.radians(5.0)
_PROFILES = ("SweptArea", "EndSweptArea")


def rough_box(context: Context, profiles: Profiles, product: Entity) -> Box:
    """Return the box round all that can be told of any representation, and GROWN more.

    A revolved body by its profile at steps of five degrees; one swept along a curve by the
    points of that curve and the reach of its profile. Raises UnreadableError where a body
    cannot be told and no axis tells where the member runs.
    """
    shape = product.get_argument(REPRESENTATION)
    whole = context.placements.matrix(product)
    clouds: list[Cloud] = []
    lost: UnreadableError | None = None
    axis = False
    for representation in (shape.get_argument(2) or ()) if shape is not None else ():
        for placed in resolved_items(context, representation, whole):
            try:
                local = _local(context, profiles, placed.item)
            except UnreadableError as error:
                lost = error
                continue
            clouds.append(local @ placed.matrix[:3, :3].T + placed.matrix[:3, 3])
            axis = axis or get(representation, "RepresentationIdentifier") == "Axis"
    if not clouds or (lost is not None and not axis):
        raise lost or UnreadableError(f"extent of an {product.is_a()} without a shape")
    return _grown(np.concatenate(clouds), np.ascontiguousarray(whole[:3, :3].T))


def _grown(cloud: Cloud, axes: Matrix) -> Box:
    box = box_round(cloud, axes)
    x, y, z = box.half
    return Box(box.centre, box.axes, (x + GROWN, y + GROWN, z + GROWN))


def _local(context: Context, profiles: Profiles, item: Entity) -> Cloud:
    """Points that enclose an item, in its own axes."""
    if item.is_a() in BOOLEANS:
        first = _local(context, profiles, need(item, "FirstOperand"))
        if get(item, "Operator") != "UNION":
            return first
        return np.concatenate((first, _local(context, profiles, need(item, "SecondOperand"))))
    if item.is_a("IfcCsgSolid"):
        return _local(context, profiles, need(item, "TreeRootExpression"))
    if item.is_a("IfcCurve"):
        return curve_points_of(context, item)
    if any(item.is_a(name) for name in FACETED):
        return points_of(context, item)
    if item.is_a("IfcRevolvedAreaSolid"):
        return _revolved(context, profiles, item)
    if item.is_a("IfcExtrudedAreaSolid"):
        return _extruded(context, profiles, item)
    return _swept(context, profiles, item)


def _extruded(context: Context, profiles: Profiles, item: Entity) -> Cloud:
    """Corners of an extrusion, both ways: what is wrong with it may be its sense."""
    depth = float(need(item, "Depth")) * context.units.length
    if not math.isfinite(depth):
        raise UnreadableError(f"body is extruded by {depth:g} mm")
    ring = _ring(context, profiles, need(item, "SweptArea"))
    corners = np.column_stack([ring, np.zeros(len(ring))])
    along = np.array(unit(numbers(need(item, "ExtrudedDirection"), 3))) * depth
    return _positioned(context, item, np.concatenate((corners - along, corners + along)))


def _ring(context: Context, profiles: Profiles, area: Entity) -> Cloud:
    """Corners of a profile; those of its outline where it is no sound figure."""
    try:
        return profiles.of(area).rings[0]
    except UnreadableError:
        return curve_points_of(context, need(area, "OuterCurve"))[:, :2]


def _swept(context: Context, profiles: Profiles, item: Entity) -> Cloud:
    curve = get(item, "Directrix") or get(item, "SpineCurve")
    if curve is None:
        raise UnreadableError(f"extent of an {item.is_a()}")
    areas = [area for name in _PROFILES if (area := get(item, name)) is not None]
    areas += several(item, "CrossSections")
    reach = max(
        (float(np.abs(_ring(context, profiles, area)).max()) * math.sqrt(2.0) for area in areas),
        default=float(get(item, "Radius") or 0.0) * context.units.length,
    )
    ways = np.array([[x, y, z] for x in (-1, 1) for y in (-1, 1) for z in (-1, 1)]) * reach
    cloud = curve_points_of(context, curve)
    return _positioned(context, item, (cloud[:, None, :] + ways).reshape(-1, 3))


def _positioned(context: Context, item: Entity, cloud: Cloud) -> Cloud:
    position = context.placements.axes(get(item, "Position"))
    return np.asarray(cloud @ position[:3, :3].T + position[:3, 3])


def _revolved(context: Context, profiles: Profiles, item: Entity) -> Cloud:
    """Corners of a revolved profile at even steps of its turn, in the item's own axes."""
    ring = _ring(context, profiles, need(item, "SweptArea"))
    corners = np.column_stack([ring, np.zeros(len(ring))])
    axis = need(item, "Axis")
    about = get(axis, "Axis")
    way = np.array(numbers(about, 3) if about is not None else (0.0, 0.0, 1.0))
    way = way / np.sqrt(way @ way)
    foot = np.array(need(axis, "Location")[0]) * context.units.length
    angle = float(need(item, "Angle")) * context.units.angle
    steps = np.linspace(0.0, angle, max(2, math.ceil(abs(angle) / _STEP) + 1))
    turned = np.concatenate([_turned(corners - foot, way, step) + foot for step in steps])
    return _positioned(context, item, turned)


def _turned(points: Cloud, way: Cloud, angle: float) -> Cloud:
    """Points turned about an axis through the origin, by Rodrigues' formula."""
    c, s = math.cos(angle), math.sin(angle)
    return np.asarray(
        points * c + np.cross(way, points) * s + np.outer(points @ way, way) * (1.0 - c)
    )
