"""Placements as 4 x 4 matrices in mm: local, on a grid, and along a line."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Any

import numpy as np
import numpy.typing as npt

from ifccheck.ifc import vectors
from ifccheck.ifc.entity import (
    OBJECT_PLACEMENT,
    Entity,
    UnreadableError,
    get,
    label,
    need,
    numbers,
    several,
)
from ifccheck.ifc.vectors import Triple

Matrix = npt.NDArray[np.float64]

IDENTITY: Matrix = np.eye(4)
IDENTITY.flags.writeable = False
PARALLEL = 1e-9
"""Sine of the angle below which two directions count as parallel."""


class Placements:
    """The placements of a model's products, each worked out once."""

    def __init__(self, file: Any, scale: float, angle_scale: float = 1.0) -> None:
        self._file = file
        self.scale = scale
        self.angle_scale = angle_scale
        self._objects: dict[int, Matrix] = {}
        self._axes: dict[int, Matrix] = {}
        self._rotations: dict[tuple[int, int], Matrix] = {}
        self._grid_of_axis: dict[int, Entity] | None = None

    def matrix(self, product: Entity) -> Matrix:
        """Return the placement of a product in the building [mm]."""
        placement = product.get_argument(OBJECT_PLACEMENT)
        return IDENTITY if placement is None else self.placement(placement)

    def placement(self, placement: Entity) -> Matrix:
        """Return an object placement in the building [mm]."""
        chain: dict[int, Entity] = {}
        known: Matrix = IDENTITY
        step: Entity | None = placement
        while step is not None:
            step_id = step.id()
            if step_id in self._objects:
                known = self._objects[step_id]
                break
            if step_id in chain:
                raise UnreadableError(f"placement {label(placement)} refers to itself")
            chain[step_id] = step
            step = get(step, "PlacementRelTo")
        for step_id, step in reversed(chain.items()):
            known = self._objects[step_id] = self._placed(step, known)
        return known

    def known(self, step_id: int) -> Matrix | None:
        """Return an object placement in the building by its STEP id, if it was worked out."""
        return self._objects.get(step_id)

    def learn(self, step_ids: Sequence[int], matrices: Iterable[Matrix]) -> None:
        """Take over object placements in the building that were worked out elsewhere."""
        self._objects.update(zip(step_ids, matrices, strict=True))

    def _placed(self, placement: Entity, parent: Matrix) -> Matrix:
        kind = placement.is_a()
        if kind == "IfcLocalPlacement":
            relative = placement.get_argument(1)
            if relative is None:
                raise UnreadableError(f"{label(placement)} has no RelativePlacement")
            own = self.axes(relative)
            return parent if own is IDENTITY else parent @ own
        if kind == "IfcGridPlacement":
            return self._on_grid(placement, parent)
        position = get(placement, "CartesianPosition")
        if position is None:
            raise UnreadableError(f"placement is an {kind} without a Cartesian position")
        return parent @ self.axes(position)

    def axes(self, position: Entity | None) -> Matrix:
        """Return an axis placement of two or three dimensions [mm]; None is the identity."""
        if position is None:
            return IDENTITY
        step_id = position.id()
        if step_id not in self._axes:
            self._axes[step_id] = self._read_axes(position)
        return self._axes[step_id]

    def _read_axes(self, position: Entity) -> Matrix:
        kind, location = position.is_a(), position.get_argument(0)
        if location is None or location.is_a() != "IfcCartesianPoint":
            raise UnreadableError(f"{label(position)} does not lie at a Cartesian point")
        if kind == "IfcAxis2Placement3D":
            axis, reference = position.get_argument(1), position.get_argument(2)
        elif kind == "IfcAxis2Placement2D":
            axis, reference = None, position.get_argument(1)
        else:
            raise UnreadableError(f"{label(position)} is no axis placement that is read")
        flat = kind == "IfcAxis2Placement2D"
        origin = numbers(location, 2 if flat else 3)
        if axis is None and reference is None and not any(origin):
            return IDENTITY
        matrix = self._rotation(axis, reference, flat).copy()
        for row, coordinate in enumerate(origin):
            matrix[row, 3] = coordinate * self.scale
        return matrix

    def _rotation(self, axis: Entity | None, reference: Entity | None, flat: bool) -> Matrix:
        key = (0 if axis is None else axis.id(), 0 if reference is None else reference.id())
        if key not in self._rotations:
            self._rotations[key] = rigid(_given(axis, flat), _given(reference, flat))
        return self._rotations[key]

    def operator(self, operator: Entity) -> Matrix:
        """Return a Cartesian transformation operator, which may scale and mirror [mm]."""
        flat = operator.is_a("IfcCartesianTransformationOperator2D")
        first, second, third = (get(operator, name) for name in ("Axis1", "Axis2", "Axis3"))
        matrix = rigid(_given(third, flat), _given(first, flat))
        if first is None and flat and second is not None:
            along = unit(_given(second, flat))
            matrix[:3, 0] = (along[1], -along[0], 0.0)
            matrix[:3, 1] = along
        elif matrix[:3, 1] @ unit(_given(second, flat) or (0.0, 1.0, 0.0)) < 0:
            matrix[:3, 1] = -matrix[:3, 1]
        matrix[:3, :3] *= _scales(operator)
        for row, coordinate in enumerate(numbers(need(operator, "LocalOrigin"), 2 if flat else 3)):
            matrix[row, 3] = coordinate * self.scale
        return matrix

    def _on_grid(self, placement: Entity, parent: Matrix) -> Matrix:
        intersection = need(placement, "PlacementLocation")
        axes = several(intersection, "IntersectingAxes")
        if len(axes) != 2:
            raise UnreadableError(f"{label(placement)} does not name two grid axes")
        grid = self._grid(axes[0])
        grid_matrix = self.matrix(grid)
        lines = [self._grid_line(axis) for axis in axes]
        offsets = [value * self.scale for value in several(intersection, "OffsetDistances")]
        point = cross(lines[0], lines[1], offsets)
        height = offsets[2] if len(offsets) > 2 else 0.0
        matrix = self._grid_direction(placement, lines[0])
        matrix[:3, 3] = (*point, height)
        del parent  # its axes are the grid's own: the grid's placement is the one that counts
        return np.asarray(grid_matrix @ matrix)

    def _grid_direction(self, placement: Entity, first: Matrix) -> Matrix:
        reference = get(placement, "PlacementRefDirection")
        if reference is None:
            along = first[1] - first[0]
            return rigid(None, (along[0], along[1], 0.0))
        if reference.is_a("IfcDirection"):
            return rigid(None, reference.get_argument(0))
        raise UnreadableError(f"{label(placement)} takes its direction from a second intersection")

    def _grid(self, axis: Entity) -> Entity:
        if self._grid_of_axis is None:
            self._grid_of_axis = {
                member.id(): grid
                for grid in self._file.by_type("IfcGrid")
                for name in ("UAxes", "VAxes", "WAxes")
                for member in several(grid, name)
            }
        try:
            return self._grid_of_axis[axis.id()]
        except KeyError:
            raise UnreadableError(f"{label(axis)} belongs to no grid") from None

    def _grid_line(self, axis: Entity) -> Matrix:
        curve = need(axis, "AxisCurve")
        if not curve.is_a("IfcPolyline") or len(curve[0]) != 2:
            raise UnreadableError(f"grid axis {label(axis)} is no straight polyline")
        ends = [point.get_argument(0)[:2] for point in curve[0]]
        line = np.array(ends if get(axis, "SameSense") is not False else ends[::-1], dtype=float)
        return line * self.scale


def _given(direction: Entity | None, flat: bool) -> Any:
    return None if direction is None else numbers(direction, 2 if flat else 3)


def _scales(operator: Entity) -> tuple[float, float, float]:
    first = get(operator, "Scale")
    first = 1.0 if first is None else float(first)
    others = (get(operator, "Scale2"), get(operator, "Scale3"))
    second, third = (first if value is None else float(value) for value in others)
    if not all(np.isfinite(value) and value != 0.0 for value in (first, second, third)):
        raise UnreadableError(f"{label(operator)} scales to nothing")
    return first, second, third


def rigid(axis: Any, reference: Any) -> Matrix:
    """Return the rotation whose z is ``axis`` and whose x is nearest to ``reference``.

    Missing or parallel directions are replaced as the standard ISO 10303-42 lays down.
    """
    z = vectors.unit(axis) if axis is not None else (0.0, 0.0, 1.0)
    x = _square_to(z, vectors.unit(reference) if reference is not None else (1.0, 0.0, 0.0))
    if x is None:
        x = _square_to(z, (1.0, 0.0, 0.0) if abs(z[0]) < 0.9 else (0.0, 1.0, 0.0))
    assert x is not None  # one of two square directions is never parallel to z
    y = vectors.cross(z, x)
    rows = zip(x, y, z, (0.0, 0.0, 0.0), strict=True)
    return np.array([*rows, (0.0, 0.0, 0.0, 1.0)])


def _square_to(z: Triple, direction: Triple) -> Triple | None:
    """The part of a direction square to z as a unit vector, None where it is parallel."""
    part = vectors.added(direction, vectors.scaled(z, -vectors.dot(direction, z)))
    length = vectors.size(part)
    return None if length < PARALLEL else vectors.scaled(part, 1.0 / length)


def unit(direction: Any) -> npt.NDArray[np.float64]:
    """Return a direction of two or three ratios as a unit vector in space."""
    return np.array(vectors.unit(direction))


def cross(first: Matrix, second: Matrix, offsets: list[float]) -> tuple[float, float]:
    """Return where two grid lines cross, each moved to its left by its offset [mm]."""
    moved = []
    for line, offset in zip((first, second), [*offsets, 0.0, 0.0], strict=False):
        along = (line[1] - line[0]) / np.hypot(*(line[1] - line[0]))
        moved.append((line[0] + offset * np.array((-along[1], along[0])), along))
    (p, u), (q, v) = moved
    sine = u[0] * v[1] - u[1] * v[0]
    if abs(sine) < PARALLEL:
        raise UnreadableError("two parallel grid axes do not cross")
    reach = ((q[0] - p[0]) * v[1] - (q[1] - p[1]) * v[0]) / sine
    return float(p[0] + reach * u[0]), float(p[1] + reach * u[1])
