"""The body of an element as a straight member: a plain extrusion at once, others by slices."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.beam import Axis, Box
from ifccheck.ifc.axis_bodies import axis_line, prism_about_axis
from ifccheck.ifc.bodies import Placed, body_items, read_prism
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import ILL_TYPED, Entity, UnreadableError
from ifccheck.ifc.placements import IDENTITY, Matrix
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.sliced import slice_solid
from ifccheck.ifc.solid_items import Solids
from ifccheck.ifc.solids import Solid, together
from ifccheck.ifc.straight import Straight, straighten
from ifccheck.ifc.vectors import Triple, rounded

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context


LEVEL = 1e-12
"""How far from 1 the upright component of what stands level may be by rounding."""


class Shapes:
    """The bodies of a model's elements as straight members."""

    def __init__(self, context: Context, profiles: Profiles) -> None:
        self._context = context
        self._profiles = profiles
        self._solids = Solids(context, profiles)
        self._sliced: dict[tuple[object, ...], Straight] = {}

    def plain(self, entity: Entity) -> Straight:
        """Return a body that is one extrusion with its ends cut.

        Raises UnreadableError where it is anything else, or no straight member.
        """
        items = body_items(self._context, entity)
        placement = self._context.placements.matrix(entity)
        if not items:
            prism, told = prism_about_axis(self._context, self._profiles, entity)
            straight = straighten(prism, placement)
            return replace(straight, remarks=(told, *straight.remarks))
        if len(items) > 1:
            raise UnreadableError(f"body of {len(items)} parts")
        prism = read_prism(self._context, self._profiles, items[0])
        return straighten(prism, placement)

    def sliced(self, entity: Entity) -> Straight:
        """Return any body by slices; raises UnreadableError where it is no straight member.

        Bodies of the same items, placed alike in elements that stand level, are sliced once.
        """
        placement = self._context.placements.matrix(entity)
        way = self._axis_way(entity)
        if abs(placement[2, 2] - 1.0) > LEVEL:
            return slice_solid(self.solid(entity), placement, way)
        items, back = body_items(self._context, entity), np.linalg.inv(placement)
        inner = [placed._replace(matrix=back @ placed.matrix) for placed in items]
        way = None if way is None else back[:3, :3] @ way
        key = tuple((each.item.id(), *np.round(each.matrix, 6).ravel().tolist()) for each in inner)
        key += () if way is None else tuple(np.round(way, 6).tolist())
        if key not in self._sliced:
            solid = self._together(entity, inner)
            self._sliced[key] = slice_solid(solid, IDENTITY, way)
        return moved(self._sliced[key], placement)

    def solid(self, entity: Entity) -> Solid:
        """Return the body of an element in the building, without its openings [mm]."""
        return self._together(entity, body_items(self._context, entity))

    def _together(self, entity: Entity, items: Sequence[Placed]) -> Solid:
        if not items:
            prism_about_axis(self._context, self._profiles, entity)  # tells what it lacks
            raise UnreadableError("no body in the model")
        return together([self._solids.of(each.item).moved(each.matrix) for each in items])

    def _axis_way(self, entity: Entity) -> Cloud | None:
        """Direction of the Axis representation, None where it has no straight one."""
        try:
            line = axis_line(self._context, entity)
        except (UnreadableError, *ILL_TYPED):
            return None  # the edges of the body tell the span without it
        return None if line is None else line[1] - line[0]


def moved(straight: Straight, placement: Matrix) -> Straight:
    """Return a member of a level frame in the building."""
    turn, shift = placement[:3, :3], placement[:3, 3]

    def place(at: Triple) -> Triple:
        x, y, z = (turn @ at + shift).tolist()
        return rounded((x, y, z))

    def axes(three: tuple[Triple, Triple, Triple]) -> tuple[Triple, Triple, Triple]:
        x, y, z = (rounded((turn @ axis).tolist()) for axis in three)
        return x, y, z

    axis, box = straight.axis, straight.box
    x, y, z = axes((axis.x, axis.y, axis.z))
    return replace(
        straight,
        axis=Axis(place(axis.origin), x, y, z, axis.length),
        box=Box(place(box.centre), axes(box.axes), box.half),
    )
