"""Solids between plane rings: primitives, and sections along a straight line."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np

from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import Entity, UnreadableError, get, label, need, several
from ifccheck.ifc.figures import Figure, matched
from ifccheck.ifc.placements import Matrix, rigid
from ifccheck.ifc.profile_curves import SAGITTA, Points
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.solids import Facets, Solid, loft

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

STRAIGHT = 1e-6
"""Sine of the angle below which two directions are one."""
NOT_CORRESPONDING = "body runs between sections whose corners do not correspond"


def upright(ring: Points, low: float, high: float) -> Facets:
    """Return the prism of a plane ring between two heights."""
    return loft([[np.column_stack([ring, np.full(len(ring), z)])] for z in (low, high)])


def _length(context: Context, item: Entity, name: str) -> float:
    value = float(need(item, name)) * context.units.length
    if not (math.isfinite(value) and value > 0.0):
        raise UnreadableError(f"{label(item)} with {name} of {value:g} mm")
    return value


def _positioned(context: Context, item: Entity, solid: Facets) -> Solid:
    return solid.moved(context.placements.axes(get(item, "Position")))


def pyramid(context: Context, item: Entity) -> Solid:
    """Return an IfcBlock or an IfcRectangularPyramid."""
    x, y = (_length(context, item, name) for name in ("XLength", "YLength"))
    base = np.array([(0.0, 0.0), (x, 0.0), (x, y), (0.0, y)])
    if item.is_a("IfcBlock"):
        return _positioned(context, item, upright(base, 0.0, _length(context, item, "ZLength")))
    return _positioned(context, item, _pointed(base, _length(context, item, "Height")))


def _pointed(base: Points, height: float) -> Facets:
    apex = np.tile((*base.mean(axis=0), height), (len(base), 1))
    return loft([[np.column_stack([base, np.zeros(len(base))])], [apex]])


def cone(context: Context, item: Entity) -> Solid:
    """Return an IfcRightCircularCylinder or an IfcRightCircularCone, traced by chords."""
    height = _length(context, item, "Height")
    cylinder = item.is_a("IfcRightCircularCylinder")
    radius = _length(context, item, "Radius" if cylinder else "BottomRadius")
    step = 2.0 * math.acos(max(0.5, 1.0 - SAGITTA / radius))
    angles = np.linspace(0.0, 2.0 * math.pi, max(8, math.ceil(2.0 * math.pi / step)) + 1)[:-1]
    base = radius * np.stack([np.cos(angles), np.sin(angles)], axis=1)
    solid = upright(base, 0.0, height) if cylinder else _pointed(base, height)
    return _positioned(context, item, solid)


def sectioned_spine(context: Context, profiles: Profiles, item: Entity) -> Solid:
    """Return an IfcSectionedSpine whose spine is straight.

    Raises UnreadableError where the spine bends.
    """
    require_straight(context, need(item, "SpineCurve"))
    places = [context.placements.axes(axes) for axes in several(item, "CrossSectionPositions")]
    return _through(profiles, several(item, "CrossSections"), places)


def sectioned_horizontal(context: Context, profiles: Profiles, item: Entity) -> Solid:
    """Return an IfcSectionedSolidHorizontal whose directrix is a straight line.

    The profile's y points up, its x to the left seen along the directrix.
    """
    start, along = require_straight(context, need(item, "Directrix"))
    frame = rigid(along, np.cross((0.0, 0.0, 1.0), along))
    places = []
    for position in several(item, "CrossSectionPositions"):
        matrix = frame.copy()
        matrix[:3, 3] = start + frame[:3, :3] @ _offsets(context, position)
        places.append(matrix)
    return _through(profiles, several(item, "CrossSections"), places)


def _offsets(context: Context, position: Entity) -> Cloud:
    """To the left, up, and along the directrix of a place on it [mm]."""
    point = position
    if position.is_a("IfcAxis2PlacementLinear"):
        if get(position, "Axis") is not None or get(position, "RefDirection") is not None:
            raise UnreadableError("body has sections turned out of its axis: not read")
        point = need(position, "Location")
    distance: Any = get(point, "DistanceAlong")
    if distance is None:
        raise UnreadableError(f"{label(point)} has no DistanceAlong")
    along = distance[0] if hasattr(distance, "is_a") else distance
    if get(point, "OffsetLongitudinal"):
        raise UnreadableError("body has sections offset along its axis: not read")
    lateral, up = (get(point, name) or 0.0 for name in ("OffsetLateral", "OffsetVertical"))
    return np.array((lateral, up, along), dtype=float) * context.units.length


def _through(profiles: Profiles, areas: Sequence[Entity], places: Sequence[Matrix]) -> Facets:
    if len(areas) != len(places) or len(areas) < 2:
        raise UnreadableError("body is sectioned at another number of places than it has sections")
    figures: list[Figure] = [profiles.of(areas[0]).rings]
    for area in areas[1:]:
        found = matched(figures[-1], profiles.of(area).rings)
        if found is None:
            raise UnreadableError(NOT_CORRESPONDING)
        figures.append(found)
    stations = [
        [_in_space(points, matrix) for points in figure]
        for figure, matrix in zip(figures, places, strict=True)
    ]
    return loft(stations, profiles.of(areas[0]).name)


def _in_space(points: Points, matrix: Matrix) -> Cloud:
    return np.asarray(points @ matrix[:3, :2].T + matrix[:3, 3])


def require_straight(context: Context, curve: Entity) -> tuple[Cloud, Cloud]:
    """Return the start [mm] and the direction of a curve that is a straight line in space.

    Raises UnreadableError where it bends.
    """
    start, end = straight_line(context, curve)
    way = end - start
    return start, way / np.sqrt(way @ way)


def straight_line(context: Context, curve: Entity) -> tuple[Cloud, Cloud]:
    """Return the start and the end of a curve that is a straight line in space [mm].

    Raises UnreadableError where it bends.
    """
    points = np.array(_line_points(curve), dtype=float).reshape(-1, 3) * context.units.length
    ways = np.diff(points, axis=0)
    sizes = np.sqrt((ways * ways).sum(axis=1))
    ways = ways[sizes > 0.0] / sizes[sizes > 0.0, None]
    if not len(ways):
        raise UnreadableError(f"{label(curve)} has no length")
    if np.abs(np.cross(ways, ways[0])).max() > STRAIGHT or (ways @ ways[0]).min() < 0.0:
        raise UnreadableError(f"not straight: it follows {label(curve)}, which bends")
    return points[0], points[-1]


def _line_points(curve: Entity) -> list[tuple[float, ...]]:
    """Points of a curve that is made of straight lines, in their order."""
    if curve.is_a("IfcPolyline"):
        return [(*point[0], 0.0)[:3] for point in curve[0]]
    if curve.is_a("IfcIndexedPolyCurve") and not any(
        segment.is_a("IfcArcIndex") for segment in several(curve, "Segments")
    ):
        return [(*row, 0.0)[:3] for row in need(curve, "Points")[0]]
    if curve.is_a("IfcCompositeCurve"):
        found: list[tuple[float, ...]] = []
        for segment in several(curve, "Segments"):
            part = _line_points(need(segment, "ParentCurve"))
            found += part if get(segment, "SameSense") is not False else part[::-1]
        return found
    if curve.is_a("IfcTrimmedCurve") and need(curve, "BasisCurve").is_a("IfcLine"):
        ends = [_cartesian(trim) for trim in (curve[1], curve[2])]
        if all(ends):
            return [end for end in ends if end is not None]
    raise UnreadableError(f"not straight: it follows {label(curve)}")


def _cartesian(trim: Sequence[Entity]) -> tuple[float, ...] | None:
    return next(((*one[0], 0.0)[:3] for one in trim if one.is_a("IfcCartesianPoint")), None)
