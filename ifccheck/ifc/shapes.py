"""The body of an element as a straight member: a plain extrusion at once, others by slices."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.ifc.bodies import Placed, body_items, read_prism, resolved_items
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import ILL_TYPED, REPRESENTATION, Entity, UnreadableError, get
from ifccheck.ifc.lofts import require_straight
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
        if len(items) != 1:
            raise UnreadableError(_number_of_bodies(len(items)))
        prism = read_prism(self._context, self._profiles, items[0])
        return straighten(prism, self._context.placements.matrix(entity))

    def sliced(self, entity: Entity) -> Straight:
        """Return any body by slices; raises UnreadableError where it is no straight member."""
        solid = self.solid(entity)
        placement = self._context.placements.matrix(entity)
        return slice_solid(solid, placement, self._axis_line(entity))

    def solid(self, entity: Entity) -> Solid:
        """Return the body of an element in the building, without its openings [mm]."""
        items = body_items(self._context, entity)
        if not items:
            raise UnreadableError(_number_of_bodies(0))
        return together([self._placed(item) for item in items])

    def _placed(self, placed: Placed) -> Solid:
        return self._solids.of(placed.item).moved(placed.matrix)

    def _axis_line(self, entity: Entity) -> Cloud | None:
        """Direction of the Axis representation in the building, None where it has no straight
        one."""
        shape = entity.get_argument(REPRESENTATION)
        representations: Sequence[Entity] = shape.get_argument(2) or ()
        whole = self._context.placements.matrix(entity)
        for representation in representations:
            if get(representation, "RepresentationIdentifier") != "Axis":
                continue
            try:
                items = list(resolved_items(self._context, representation, whole))
                if len(items) == 1:
                    along = require_straight(self._context, items[0].item)[1]
                    return np.asarray(items[0].matrix[:3, :3] @ along)
            except (UnreadableError, *ILL_TYPED):
                return None  # the edges of the body tell the span without it
        return None


def _number_of_bodies(count: int) -> str:
    return "no body in the model" if count == 0 else f"body of {count} parts"
