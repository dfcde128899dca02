"""Where the members and connections of a structural analysis model lie in the building [mm]."""

from __future__ import annotations

from itertools import chain
from typing import Any, NamedTuple

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.entity import Entity, UnreadableError, get, label, need, numbers, several, text
from ifccheck.ifc.load_groups import LoadGroups
from ifccheck.ifc.placements import IDENTITY, Matrix, Placements
from ifccheck.ifc.vectors import unit

Vector = npt.NDArray[np.float64]
POINTS = ("IfcVertexPoint", "IfcCartesianPoint")
LEAST = 1.0
"""Length [mm] below which a line is a point"""


class Stretch(NamedTuple):
    """A straight line in the building that actions act along."""

    start: Vector
    end: Vector

    @property
    def length(self) -> float:
        """[mm]"""
        return float(np.linalg.norm(self.end - self.start))

    @property
    def along(self) -> Vector:
        """Unit vector from start to end."""
        return np.asarray((self.end - self.start) / self.length)


class Places:
    """The places of items and actions of the analysis models of a file."""

    def __init__(self, placements: Placements, groups: LoadGroups) -> None:
        self._placements = placements
        self._groups = groups

    def matrix(self, product: Entity) -> Matrix:
        """Placement of an item or an action: its own, else that which its model shares."""
        if get(product, "ObjectPlacement") is not None:
            return self._placements.matrix(product)
        return self.shared(product)

    def shared(self, product: Entity) -> Matrix:
        """The placement that all items of its analysis model share."""
        model = self._groups.model_of(product)
        shared = None if model is None else get(model, "SharedPlacement")
        return IDENTITY if shared is None else self._placements.placement(shared)

    def axes(self, item: Entity) -> Matrix:
        """Directions (columns) that loads in global coordinates have on an item."""
        model = self._groups.model_of(item)
        if model is not None and self._has_own_axes(model):
            raise UnreadableError(f"{label(model)} is plane, in axes that its loads may act in")
        if model is not None and get(model, "SharedPlacement") is not None:
            return self.shared(item)[:3, :3]
        return self.matrix(item)[:3, :3]

    def _has_own_axes(self, model: Entity) -> bool:
        """Whether a plane model is oriented otherwise than the building."""
        plane = get(model, "OrientationOf2DPlane")
        if plane is None or not text(model, "PredefinedType").endswith("2D"):
            return False
        return not np.allclose(self._placements.axes(plane)[:3, :3], np.eye(3))

    def local_axes(self, item: Entity, line: Stretch) -> Matrix:
        """Directions (columns) of a curve member's own axes: x along it, z nearest to its Axis.

        Raises UnreadableError where it has no Axis (IFC2X3) or lies along it.
        """
        axis = need(item, "Axis")
        given = self.axes(item) @ np.array(unit(numbers(axis, 3)))
        z = given - (given @ line.along) * line.along
        if (size := float(np.linalg.norm(z))) < 1e-6:
            raise UnreadableError(f"{label(item)} runs along its own Axis")
        z = z / size
        return np.column_stack((line.along, np.cross(z, line.along), z))

    def line(self, product: Entity, matrix: Matrix) -> Stretch | None:
        """The straight line that represents a product; None where no line does.

        Raises UnreadableError where a line is not straight or has no length.
        """
        for items in _representations(product):
            lines = [ends for ends in map(self._ends, items) if ends is not None]
            if len(lines) > 1:
                raise UnreadableError(f"{label(product)} is made of {len(lines)} lines")
            for ends in lines:
                stretch = Stretch(*(matrix[:3, :3] @ end + matrix[:3, 3] for end in ends))
                if stretch.length < LEAST:
                    raise UnreadableError(f"{label(product)} has no length")
                return stretch
        return None

    def point(self, product: Entity, matrix: Matrix) -> Vector | None:
        """The point that represents a product; None where none does."""
        items = chain.from_iterable(_representations(product))
        points = [one for one in items if one.is_a() in POINTS]
        return self.placed(points[0], matrix) if points else None

    def placed(self, item: Entity, matrix: Matrix) -> Vector:
        """A point of some coordinates in the building."""
        point = need(item, "VertexGeometry") if item.is_a("IfcVertexPoint") else item
        return np.asarray(matrix[:3, :3] @ self._at(point) + matrix[:3, 3])

    def _at(self, point: Entity) -> Vector:
        if not point.is_a("IfcCartesianPoint"):
            raise UnreadableError(f"{label(point)} is no Cartesian point")
        return np.array(numbers(point, 3)) * self._placements.scale

    def _ends(self, item: Entity) -> tuple[Vector, Vector] | None:
        if item.is_a("IfcOrientedEdge"):
            ends = self._ends(need(item, "EdgeElement"))
            same = get(item, "Orientation") is not False
            return ends if same or ends is None else ends[::-1]
        if item.is_a("IfcEdge"):
            _require_straight(item)
            start, end = (need(item, name) for name in ("EdgeStart", "EdgeEnd"))
            return self._at(need(start, "VertexGeometry")), self._at(need(end, "VertexGeometry"))
        if item.is_a("IfcPolyline"):
            points = several(item, "Points")
            if len(points) != 2:
                raise UnreadableError(f"{label(item)} is not one straight line")
            return self._at(points[0]), self._at(points[1])
        if item.is_a("IfcCurve"):
            raise UnreadableError(f"{label(item)} is no line that is read")
        return None


def _require_straight(edge: Entity) -> None:
    curve = get(edge, "EdgeGeometry") if edge.is_a("IfcEdgeCurve") else None
    while curve is not None and curve.is_a("IfcTrimmedCurve"):
        curve = get(curve, "BasisCurve")
    if curve is None or curve.is_a("IfcLine"):
        return
    if curve.is_a("IfcPolyline") and len(several(curve, "Points")) == 2:
        return
    raise UnreadableError(f"{label(edge)} is not one straight line")


def _representations(product: Entity) -> list[tuple[Any, ...]]:
    """The items of each representation of a product."""
    shape = get(product, "Representation")
    drawn = () if shape is None else several(shape, "Representations")
    return [several(one, "Items") for one in drawn]
