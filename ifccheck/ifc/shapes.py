"""The body of an element as a straight member: a plain extrusion at once, others by slices."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from ifccheck.ifc.axis_bodies import axis_line, prism_about_axis
from ifccheck.ifc.bodies import Placed, body_items, read_prism
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import ILL_TYPED, Entity, UnreadableError
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.sliced import slice_solid
from ifccheck.ifc.solid_items import Solids
from ifccheck.ifc.solids import Solid, together
from ifccheck.ifc.straight import Straight, straighten

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context


class Shapes:
    """The bodies of a model's elements as straight members."""

    def __init__(self, context: Context, profiles: Profiles) -> None:
        self._context = context
        self._profiles = profiles
        self._solids = Solids(context, profiles)

    def plain(self, entity: Entity) -> Straight:
        """Return a body that is one extrusion with its ends cut.

        Raises UnreadableError where it is anything else, or no straight member.
        """
        items = body_items(self._context, entity)
        placement = self._context.placements.matrix(entity)
        if not items:
            prism, told = prism_about_axis(self._context, self._profiles, entity)
            return replace(straighten(prism, placement), remarks=(told,))
        if len(items) > 1:
            raise UnreadableError(f"body of {len(items)} parts")
        prism = read_prism(self._context, self._profiles, items[0])
        return straighten(prism, placement)

    def sliced(self, entity: Entity) -> Straight:
        """Return any body by slices; raises UnreadableError where it is no straight member."""
        solid = self.solid(entity)
        placement = self._context.placements.matrix(entity)
        return slice_solid(solid, placement, self._axis_way(entity))

    def solid(self, entity: Entity) -> Solid:
        """Return the body of an element in the building, without its openings [mm]."""
        items = body_items(self._context, entity)
        if not items:
            prism_about_axis(self._context, self._profiles, entity)  # tells what it lacks
            raise UnreadableError("no body in the model")
        return together([self._placed(item) for item in items])

    def _placed(self, placed: Placed) -> Solid:
        return self._solids.of(placed.item).moved(placed.matrix)

    def _axis_way(self, entity: Entity) -> Cloud | None:
        """Direction of the Axis representation, None where it has no straight one."""
        try:
            line = axis_line(self._context, entity)
        except (UnreadableError, *ILL_TYPED):
            return None  # the edges of the body tell the span without it
        return None if line is None else line[1] - line[0]
