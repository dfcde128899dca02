"""Oriented boxes round the members that a beam may touch."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from ifccheck.beam import Box
from ifccheck.ifc.bodies import body_items, extrusion
from ifccheck.ifc.clips import Cloud, left_over, read_cut
from ifccheck.ifc.entity import Entity, UnreadableError, get
from ifccheck.ifc.placements import Matrix, cross_product
from ifccheck.ifc.profiles import Profiles

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

FACETED = (
    "IfcManifoldSolidBrep",
    "IfcTessellatedItem",
    "IfcShellBasedSurfaceModel",
    "IfcFaceBasedSurfaceModel",
)
"""Bodies that lie within the hull of the points they are made of, arcs apart."""


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
            cloud, axes = self._item(*placed[0])
        else:
            cloud, axes = np.vstack([self._item(*one)[0] for one in placed]), None
        if axes is None:
            axes = _rigid_axes(self._context.placements.matrix(product))
        return box_round(cloud, axes)

    def _item(self, item: Entity, matrix: Matrix) -> tuple[Cloud, Matrix | None]:
        """Corners of an item in the building, and its own axes where it has some."""
        if item.is_a("IfcBooleanResult"):
            return self._boolean(item, matrix)
        if item.is_a("IfcExtrudedAreaSolid"):
            return self._extrusion(item, matrix)
        if item.is_a("IfcCsgSolid"):
            return self._item(get(item, "TreeRootExpression"), matrix)
        if any(item.is_a(name) for name in FACETED):
            points = self._faceted(item)
            return points @ matrix[:3, :3].T + matrix[:3, 3], None
        raise UnreadableError(f"extent of an {item.is_a()}")

    def _boolean(self, item: Entity, matrix: Matrix) -> tuple[Cloud, Matrix | None]:
        cloud, axes = self._item(get(item, "FirstOperand"), matrix)
        operator, second = get(item, "Operator"), get(item, "SecondOperand")
        if operator == "UNION":
            return np.vstack((cloud, self._item(second, matrix)[0])), None
        if operator != "DIFFERENCE" or second.is_a() != "IfcHalfSpaceSolid":
            return cloud, axes  # the rest only takes something away: the box may be too large
        try:
            cut = read_cut(second, self._context.placements).moved(matrix)
        except UnreadableError:
            return cloud, axes
        rest = left_over(cloud, cut)
        return (rest if len(rest) else cloud), axes

    def _extrusion(self, item: Entity, matrix: Matrix) -> tuple[Cloud, Matrix]:
        prism = extrusion(self._context, self._profiles, item, matrix)
        cloud = prism.corners()
        end_area = get(item, "EndSweptArea")
        if end_area is not None:
            end = replace(prism, profile=self._profiles.of(end_area))
            cloud = np.concatenate((cloud, end.corners()))
        side = np.array(prism.profile.longest_side)
        x, z = prism.matrix[:3, :2] @ side, prism.normal
        return cloud, np.array((x, cross_product(z.tolist(), x.tolist()), z))

    def _faceted(self, item: Entity) -> Cloud:
        step_id = item.id()
        if step_id not in self._points:
            self._points[step_id] = self._read_points(item)
        return self._points[step_id]

    def _read_points(self, item: Entity) -> Cloud:
        scale = self._context.units.length
        points: list[tuple[float, ...]] = []
        for entity in self._context.file.traverse(item):
            reader = POINT_READERS.get(entity.is_a())
            if reader is not None:
                points += reader(entity)
        cloud = np.array(points, dtype=float).reshape(-1, 3) * scale
        if not len(cloud) or not np.isfinite(cloud).all():
            raise UnreadableError(f"extent of an {item.is_a()} without points")
        return cloud


def _point(entity: Entity) -> list[tuple[float, ...]]:
    return [entity[0]] if len(entity[0]) == 3 else []


def _point_list(entity: Entity) -> list[tuple[float, ...]]:
    return list(entity[0])


def _round(entity: Entity) -> list[tuple[float, ...]]:
    """Corners of the cube round a circle or an ellipse."""
    x, y, z = get(get(entity, "Position"), "Location")[0]
    r = max(get(entity, name) or 0.0 for name in ("Radius", "SemiAxis1", "SemiAxis2"))
    return [(x + a, y + b, z + c) for a in (-r, r) for b in (-r, r) for c in (-r, r)]


POINT_READERS: dict[str, Callable[[Entity], list[tuple[float, ...]]]] = {
    "IfcCartesianPoint": _point,
    "IfcCartesianPointList3D": _point_list,
    "IfcCircle": _round,
    "IfcEllipse": _round,
}


def box_round(cloud: Cloud, axes: Matrix) -> Box:
    """Return the box along three axes (rows) round points in the building [mm]."""
    local = cloud @ axes.T
    low, high = local.min(axis=0), local.max(axis=0)
    x, y, z = (_triple(row) for row in axes)
    return Box(_triple(((low + high) / 2.0) @ axes), (x, y, z), _triple((high - low) / 2.0))


def _rigid_axes(matrix: Matrix) -> Matrix:
    return np.ascontiguousarray(matrix[:3, :3].T)


def _triple(values: Cloud) -> tuple[float, float, float]:
    x, y, z = values.tolist()
    return round(x, 9), round(y, 9), round(z, 9)
