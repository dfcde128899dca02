"""Oriented boxes round the members that a beam may touch."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.beam import Box, Ring
from ifccheck.ifc.bodies import BOOLEANS, Placed, Prism, body_items, extrusion
from ifccheck.ifc.clips import Cloud, left_over, read_cut
from ifccheck.ifc.entity import Entity, UnreadableError, get, need
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.points import points_of
from ifccheck.ifc.profile_curves import signed_area
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.vectors import Triple, added, combined, cross, dot, rounded, unit

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

FACETED = (
    "IfcManifoldSolidBrep",
    "IfcTessellatedItem",
    "IfcShellBasedSurfaceModel",
    "IfcFaceBasedSurfaceModel",
)
"""Bodies that lie within the hull of the points they are made of, arcs apart."""


FILLED = 0.98
"""A profile that covers this part of its box fills it."""

UPRIGHT = 0.9999
"""Least z of the unit vector of what stands upright."""


Axes = tuple[Triple, Triple, Triple]


class Boxes:
    """The boxes of a model's products, from their bodies."""

    def __init__(self, context: Context, profiles: Profiles) -> None:
        self._context = context
        self._profiles = profiles
        self._points: dict[int, Cloud] = {}

    def of(self, product: Entity) -> Box | None:
        """Return the box of a product, None where it has no body.

        Along its own axes where it is one extrusion, else along those of its placement.
        Raises UnreadableError where its extent cannot be told.
        """
        placed = body_items(self._context, product)
        if not placed:
            return None
        if len(placed) == 1:
            if placed[0].item.is_a() == "IfcExtrudedAreaSolid":
                return box_of_prism(extrusion(self._context, self._profiles, placed[0]))
            cloud, axes = self._item(placed[0])
        else:
            cloud, axes = np.vstack([self._item(one)[0] for one in placed]), None
        if axes is None:
            axes = np.ascontiguousarray(self._context.placements.matrix(product)[:3, :3].T)
        return box_round(cloud, axes)

    def plan(self, product: Entity) -> Ring | None:
        """Return the outer ring in plan of one upright extrusion, None for any other body.

        Empty where the extrusion fills its box; cuts are left out of account.
        """
        placed = body_items(self._context, product)
        if len(placed) != 1:
            return None
        item = placed[0].item
        while item.is_a() in BOOLEANS and get(item, "Operator") == "DIFFERENCE":
            item = need(item, "FirstOperand")
        if item.is_a() != "IfcExtrudedAreaSolid":
            return None
        body = placed[0]._replace(item=item)
        return plan_of_prism(extrusion(self._context, self._profiles, body))

    def _item(self, placed: Placed) -> tuple[Cloud, Matrix | None]:
        """Corners of an item in the building, and its own axes where it has some."""
        item, matrix, _ = placed
        kind = item.is_a()
        if kind in ("IfcExtrudedAreaSolid", "IfcExtrudedAreaSolidTapered"):
            return self._extrusion(placed)
        if kind in BOOLEANS:
            return self._boolean(placed)
        if kind == "IfcCsgSolid":
            return self._item(placed._replace(item=need(item, "TreeRootExpression")))
        if any(item.is_a(name) for name in FACETED):
            points = self._faceted(item)
            return points @ matrix[:3, :3].T + matrix[:3, 3], None
        raise UnreadableError(f"extent of an {kind}")

    def _boolean(self, placed: Placed) -> tuple[Cloud, Matrix | None]:
        item, matrix, _ = placed
        cloud, axes = self._item(placed._replace(item=need(item, "FirstOperand")))
        operator, second = get(item, "Operator"), need(item, "SecondOperand")
        if operator == "UNION":
            return np.vstack((cloud, self._item(placed._replace(item=second))[0])), None
        if operator != "DIFFERENCE" or second.is_a() != "IfcHalfSpaceSolid":
            return cloud, axes  # the rest only takes something away: the box may be too large
        try:
            cut = read_cut(second, self._context.placements).moved(matrix)
        except UnreadableError:
            return cloud, axes
        rest = left_over(cloud, cut)
        return (rest if len(rest) else cloud), axes

    def _extrusion(self, placed: Placed) -> tuple[Cloud, Matrix]:
        prism = extrusion(self._context, self._profiles, placed)
        cloud = prism.corners()
        end_area = get(placed.item, "EndSweptArea")
        if end_area is not None:
            end = replace(prism, profile=self._profiles.of(end_area))
            cloud = np.concatenate((cloud, end.corners()))
        return cloud, np.array(own_axes(prism))

    def _faceted(self, item: Entity) -> Cloud:
        step_id = item.id()
        if step_id not in self._points:
            self._points[step_id] = points_of(self._context, item)
        return self._points[step_id]


def plan_of_prism(prism: Prism) -> Ring | None:
    """Return the outer ring in plan of an upright extrusion, empty where it fills its box; None
    for one that does not stand upright."""
    if min(abs(prism.axes[2][2]), abs(unit(prism.along)[2])) < UPRIGHT:
        return None
    low_x, high_x, low_y, high_y = prism.profile.extent
    ring = prism.profile.rings[0]
    filled = abs(signed_area(ring.tolist())) / ((high_x - low_x) * (high_y - low_y))
    if filled > FILLED:
        return ()
    return tuple((float(x), float(y)) for x, y, _ in prism.placed(ring))


def own_axes(prism: Prism) -> Axes:
    """Return the axes of an extrusion: along its profile's longest side, and square to that."""
    x, y, normal = prism.axes
    side = combined((x, y), prism.profile.longest_side)
    return side, cross(normal, side), normal


@dataclass(frozen=True, slots=True)
class BoxShape:
    """All of the box round an extrusion but where the origin of its matrix stands."""

    axes: Axes
    middle: Triple
    """From that origin, along the building's axes [mm]."""
    half: Triple

    def at(self, origin: Sequence[float]) -> Box:
        """Return the box where that origin stands at a place in the building."""
        return Box(rounded(added(origin, self.middle)), self.axes, self.half)


def box_of_prism(prism: Prism) -> Box:
    """Return the box round an extrusion without its cuts."""
    return box_shape(prism).at(prism.matrix[:3, 3].tolist())


def box_shape(prism: Prism) -> BoxShape:
    """Return the shape of the box round an extrusion without its cuts."""
    axes = own_axes(prism)
    low_x, high_x, low_y, high_y = prism.profile.extent
    low, high = [low_x, low_y, 0.0], [high_x, high_y, 0.0]
    for number, axis in enumerate(axes):
        reach = dot(axis, prism.along)
        if reach < 0.0:
            low[number] += reach
        else:
            high[number] += reach
    middle = [(a + b) / 2.0 for a, b in zip(low, high, strict=True)]
    half = [(b - a) / 2.0 for a, b in zip(low, high, strict=True)]
    x, y, z = (rounded(axis) for axis in axes)
    return BoxShape((x, y, z), combined(axes, middle), rounded(half))


def box_round(cloud: Cloud, axes: Matrix) -> Box:
    """Return the box along three axes (rows) round points in the building [mm]."""
    local = cloud @ axes.T
    low, high = local.min(axis=0), local.max(axis=0)
    x, y, z = (rounded(row) for row in axes.tolist())
    centre, half = ((low + high) / 2.0) @ axes, (high - low) / 2.0
    return Box(rounded(centre.tolist()), (x, y, z), rounded(half.tolist()))
