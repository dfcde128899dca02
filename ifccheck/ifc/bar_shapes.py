"""The shapes of bars: which centre lines a product's representation sweeps, and where."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ifccheck.ifc.bar_curves import read_path, read_swept_path
from ifccheck.ifc.bar_paths import Path, rounded
from ifccheck.ifc.entity import Entity, UnreadableError, get
from ifccheck.ifc.placements import IDENTITY, Matrix, Placements, unit
from ifccheck.ifc.units import ModelUnits

SAME_SCALE = 1e-6
"""Relative difference within which a mapped bar is not stretched."""
FARTHEST = 1e11
"""Greatest coordinate [mm] of a place on the earth, and more."""
DEEPEST_MAPPING = 8
"""Mapped items within mapped items that are followed."""


@dataclass(frozen=True, slots=True)
class Strand:
    """One bar of a product: an index into ``BarShapes.paths``, placed in the product's axes."""

    path: int
    matrix: Matrix
    diameter: float | None
    """Swept diameter [mm]; None where only a centre line is given."""


class BarShapes:
    """The shapes of a model's bars; a shape that many bars share is read once."""

    def __init__(self, units: ModelUnits, placements: Placements) -> None:
        self.paths: list[Path] = []
        self._units = units
        self._placements = placements
        self._solids: dict[int, tuple[Strand, ...]] = {}
        self._maps: dict[int, tuple[Strand, ...]] = {}
        self._mapped_strands: dict[tuple[int, int], tuple[Strand, ...]] = {}

    def of(self, shape: Entity | None) -> tuple[Strand, ...]:
        """Return the bars of a product's shape; its body, or else its axis.

        Raises UnreadableError where there is no shape, or one of a kind that is not read.
        """
        if shape is None:
            raise UnreadableError("has no shape")
        representations = shape.get_argument(2)
        if len(representations) == 1:
            return self._representation(representations[0], 0)
        body, axis = _body_and_axis(representations)
        try:
            return self._representation(axis if body is None else body, 0)
        except UnreadableError:
            if body is None or axis is None:
                raise
            return self._representation(axis, 0)

    def of_item(self, item: int, source: int, target: int, file: Any) -> tuple[Strand, ...]:
        """Return the bars of a shape that is one item, by STEP ids; mapped where source is not 0.

        Raises UnreadableError where the item is of a kind that is not read.
        """
        if not source:
            known = self._solids.get(item)
            return known or self._item(file.by_id(item), 0)
        known = self._mapped_strands.get((source, target))
        return known or self._mapped(file.by_id(source), file.by_id(target), 0)

    def _representation(self, representation: Entity | None, depth: int) -> tuple[Strand, ...]:
        items: tuple[Entity, ...] = ()
        if representation is not None:
            items = representation.get_argument(3)
        if len(items) == 1:
            return self._item(items[0], depth)
        return tuple(strand for item in items for strand in self._item(item, depth))

    def _item(self, item: Entity, depth: int) -> tuple[Strand, ...]:
        if item.is_a() == "IfcMappedItem":
            return self._mapped(item.get_argument(0), item.get_argument(1), depth)
        step_id = item.id()
        if step_id not in self._solids:
            self._solids[step_id] = (self._solid(item),)
        return self._solids[step_id]

    def _mapped(self, source: Entity, target: Entity, depth: int) -> tuple[Strand, ...]:
        key = (source.id(), target.id())
        if key not in self._mapped_strands:
            if depth >= DEEPEST_MAPPING:
                raise UnreadableError("has mapped items nested too deeply")
            if key[0] not in self._maps:
                self._maps[key[0]] = self._mapped_source(source, depth)
            matrix = self._placements.operator(target)
            self._mapped_strands[key] = _moved(self._maps[key[0]], matrix)
        return self._mapped_strands[key]

    def _mapped_source(self, source: Entity, depth: int) -> tuple[Strand, ...]:
        strands = self._representation(source.get_argument(1), depth + 1)
        return _moved(strands, self._placements.axes(source.get_argument(0)))

    def _solid(self, item: Entity) -> Strand:
        kind = item.is_a()
        if kind in ("IfcSweptDiskSolid", "IfcSweptDiskSolidPolygonal"):
            argument = item.get_argument
            if argument(2):
                raise UnreadableError("is hollow, which is not read")
            path = read_swept_path(argument(0), argument(3), argument(4), self._units)
            if kind == "IfcSweptDiskSolidPolygonal" and argument(5):
                path = rounded(path, argument(5) * self._units.length)
            return self._strand(path, IDENTITY, 2.0 * argument(1) * self._units.length)
        if kind == "IfcExtrudedAreaSolid":
            return self._extruded(item)
        if item.is_a("IfcCurve"):
            return self._strand(read_path(item, self._units), IDENTITY, None)
        raise UnreadableError(f"has a body of kind {kind}, which is not read yet")

    def _strand(self, path: Path, matrix: Matrix, diameter: float | None) -> Strand:
        values = [value for point in path.points for value in point]
        if len(path.points) < 2 or not -FARTHEST < min(values) <= max(values) < FARTHEST:
            raise UnreadableError("has a centre line without length, or of no earthly length")
        self.paths.append(path)
        return Strand(len(self.paths) - 1, matrix, diameter)

    def _extruded(self, solid: Entity) -> Strand:
        """A circle extruded: a straight bar."""
        profile = solid[0]
        if profile.is_a() != "IfcCircleProfileDef":
            raise UnreadableError(f"is extruded from an {profile.is_a()}, which is not read yet")
        centre = self._placements.axes(get(profile, "Position"))[:3, 3]
        along = unit(solid[2][0]) * (solid[3] * self._units.length)
        ends = tuple((float(x), float(y), float(z)) for x, y, z in (centre, centre + along))
        diameter = 2.0 * get(profile, "Radius") * self._units.length
        return self._strand(Path(ends), self._placements.axes(solid[1]), diameter)


def _body_and_axis(representations: Sequence[Entity]) -> tuple[Entity | None, Entity | None]:
    body, axis = None, None
    for representation in representations:
        identifier = representation[1]
        if identifier == "Axis":
            axis = axis or representation
        elif body is None or identifier == "Body":
            body = representation
    return body, axis


def _moved(strands: tuple[Strand, ...], matrix: Matrix) -> tuple[Strand, ...]:
    """Strands moved by a matrix, which may enlarge them."""
    if np.array_equal(matrix, IDENTITY):
        return strands
    scale = _enlargement(matrix)
    return tuple(
        Strand(
            strand.path,
            matrix if strand.matrix is IDENTITY else matrix @ strand.matrix,
            None if strand.diameter is None else strand.diameter * scale,
        )
        for strand in strands
    )


def _enlargement(matrix: Matrix) -> float:
    """How much a transformation enlarges, the same in all directions."""
    scales = np.sqrt((matrix[:3, :3] ** 2).sum(axis=0))
    if scales.max() - scales.min() > SAME_SCALE * scales.max():
        raise UnreadableError("is mapped with a stretch in one direction, which is not read")
    return 1.0 if abs(scales[0] - 1.0) <= SAME_SCALE else float(scales[0])
