"""Items of the model as solids, each in its own coordinates [mm] and read once."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.ifc.bodies import extruded
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import Entity, UnreadableError, get, need
from ifccheck.ifc.figures import matched
from ifccheck.ifc.lofts import (
    cone,
    pyramid,
    require_straight,
    sectioned_horizontal,
    sectioned_spine,
    upright,
)
from ifccheck.ifc.placements import IDENTITY
from ifccheck.ifc.profile_curves import read_pieces, ring
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.shells import FACED, faced
from ifccheck.ifc.solids import ENDLESS, Combined, HalfSpace, Solid, loft
from ifccheck.ifc.tessellated import tessellated

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

DEEPEST = 60
"""Booleans nested deeper than this refer to each other."""

NOT_STRAIGHT = {
    "IfcRevolvedAreaSolid": "it is revolved about an axis",
    "IfcRevolvedAreaSolidTapered": "it is revolved about an axis",
    "IfcSphere": "it holds a sphere",
}

CURVED = ("IfcAdvancedBrep", "IfcSweptDiskSolid")
"""What may have curved faces, and is left to the geometry engine, with all its kinds."""


class Solids:
    """The solids of a model's items, each read once."""

    def __init__(self, context: Context, profiles: Profiles) -> None:
        self._context = context
        self._profiles = profiles
        self._by_id: dict[int, Solid | UnreadableError] = {}

    def of(self, item: Entity, depth: int = 0) -> Solid:
        """Return an item as a solid in its own coordinates [mm].

        Raises UnreadableError where it is none that can be sliced.
        """
        step_id = item.id()
        if step_id not in self._by_id:
            try:
                self._by_id[step_id] = self._read(item, depth)
            except UnreadableError as error:
                self._by_id[step_id] = error
        found = self._by_id[step_id]
        if isinstance(found, UnreadableError):
            raise found
        return found

    def _read(self, item: Entity, depth: int) -> Solid:
        kind = item.is_a()
        if depth > DEEPEST:
            raise UnreadableError("body is put together of parts that refer to each other")
        if kind in NOT_STRAIGHT:
            raise UnreadableError(f"body is an {kind}: not straight, for {NOT_STRAIGHT[kind]}")
        if kind in ("IfcBooleanResult", "IfcBooleanClippingResult"):
            return self._boolean(item, depth + 1)
        if kind == "IfcCsgSolid":
            return self.of(need(item, "TreeRootExpression"), depth + 1)
        if item.is_a("IfcHalfSpaceSolid"):
            return self._half_space(item)
        if kind in FACED:
            return faced(item, self._context.units.length)
        if get(item, "Directrix") is not None and kind != "IfcSectionedSolidHorizontal":
            self._require_disk(item)
        if any(item.is_a(name) for name in CURVED):
            return tessellated(item)
        reader = self._lofts().get(kind)
        if reader is None:
            raise UnreadableError(f"body is an {kind}: not read")
        return reader(item)

    def _require_disk(self, item: Entity) -> None:
        """Raise UnreadableError for what is swept along a curve, unless it is a straight rod.

        How an area stands on a line that it is swept along is read in several ways.
        """
        require_straight(self._context, need(item, "Directrix"))
        if not item.is_a("IfcSweptDiskSolid"):
            raise UnreadableError(
                f"body is an {item.is_a()}: which way its section stands is unclear"
            )

    def _lofts(self) -> dict[str, Callable[[Entity], Solid]]:
        context, profiles = self._context, self._profiles
        return {
            "IfcExtrudedAreaSolid": self._extruded,
            "IfcExtrudedAreaSolidTapered": self._extruded,
            "IfcBlock": lambda item: pyramid(context, item),
            "IfcRectangularPyramid": lambda item: pyramid(context, item),
            "IfcRightCircularCylinder": lambda item: cone(context, item),
            "IfcRightCircularCone": lambda item: cone(context, item),
            "IfcSectionedSpine": lambda item: sectioned_spine(context, profiles, item),
            "IfcSectionedSolidHorizontal": lambda item: sectioned_horizontal(
                context, profiles, item
            ),
        }

    def _boolean(self, item: Entity, depth: int) -> Solid:
        first = self.of(need(item, "FirstOperand"), depth)
        second = self.of(need(item, "SecondOperand"), depth)
        return Combined(need(item, "Operator"), first, second)

    def _extruded(self, item: Entity) -> Solid:
        area, _, along = extruded(self._context, item)
        first, end_area = self._profiles.of(area), get(item, "EndSweptArea")
        last = first if end_area is None else self._profiles.of(end_area)
        rings = matched(first.rings, last.rings)
        if rings is None:
            raise UnreadableError("body tapers between profiles whose corners do not correspond")
        stations = [_raised(first.rings, np.zeros(3)), _raised(rings, np.array(along))]
        return self._placed(item, loft(stations, first.name))

    def _placed(self, item: Entity, solid: Solid) -> Solid:
        position = self._context.placements.axes(get(item, "Position"))
        return solid if position is IDENTITY else solid.moved(position)

    def _half_space(self, item: Entity) -> Solid:
        placements = self._context.placements
        surface = need(item, "BaseSurface")
        if not surface.is_a("IfcPlane"):
            raise UnreadableError(f"body is cut along an {surface.is_a()}: not read")
        plane = placements.axes(get(surface, "Position"))
        # the half-space fills the side away from the normal where the flag agrees with it
        outward = plane[:3, 2] if get(item, "AgreementFlag") else -plane[:3, 2]
        half = HalfSpace(plane[:3, 3].copy(), outward.copy())
        if not item.is_a("IfcPolygonalBoundedHalfSpace"):
            return half
        boundary = ring(read_pieces(need(item, "PolygonalBoundary"), placements))
        bound = upright(boundary, -ENDLESS, ENDLESS)
        return Combined("INTERSECTION", half, self._placed(item, bound))


def _raised(rings: Sequence[Cloud], by: Cloud) -> list[Cloud]:
    """Rings of a plane in space, moved."""
    return [np.column_stack([points, np.zeros(len(points))]) + by for points in rings]
