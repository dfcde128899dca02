"""The shapes of bars: which centre lines a product's representation sweeps, and where."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from ifccheck.ifc.bar_paths import Path
from ifccheck.ifc.bar_solids import BarSolids, Drawn, end_to_end
from ifccheck.ifc.entity import Entity, UnreadableError
from ifccheck.ifc.placements import IDENTITY, Matrix, Placements
from ifccheck.ifc.units import ModelUnits

SAME_SCALE = 1e-6
"""Relative difference within which a mapped bar is not stretched."""
FARTHEST = 1e11
"""Greatest coordinate [mm] of a place on the earth, and more."""
IN_PARTS = "IfcRevolvedAreaSolid"
"""A bar with such a bend is drawn in parts."""
DEEPEST_MAPPING = 8
"""Mapped items within mapped items that are followed."""


@dataclass(frozen=True, slots=True)
class Strand:
    """One bar of a product: an index into ``BarShapes.paths``, placed in the product's axes."""

    path: int
    matrix: Matrix
    diameter: float | None
    """Swept diameter [mm]; None where only a centre line is given."""
    widest: float | None
    """What the diameter may be at most: greater where a polygon stands for a circle [mm]."""
    note: str = ""
    """What people are told of how it was read."""


class BarShapes:
    """The shapes of a model's bars; a shape that many bars share is read once."""

    def __init__(self, units: ModelUnits, placements: Placements) -> None:
        self.paths: list[Path] = []
        self._placements = placements
        self._reader = BarSolids(units, placements)
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
        if any(item.is_a() == IN_PARTS for item in items):
            parts = [part for item in items for part in self._reader.of(item)]
            return tuple(self._strand(bar) for bar in end_to_end(parts))
        return tuple(strand for item in items for strand in self._item(item, depth))

    def _item(self, item: Entity, depth: int) -> tuple[Strand, ...]:
        if item.is_a() == "IfcMappedItem":
            return self._mapped(item.get_argument(0), item.get_argument(1), depth)
        step_id = item.id()
        if step_id not in self._solids:
            self._solids[step_id] = tuple(self._strand(bar) for bar in self._reader.of(item))
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

    def _strand(self, bar: Drawn) -> Strand:
        path = bar.path
        values = [value for point in path.points for value in point]
        if len(path.points) < 2 or not -FARTHEST < min(values) <= max(values) < FARTHEST:
            raise UnreadableError("has a centre line without length, or of no earthly length")
        self.paths.append(path)
        return Strand(len(self.paths) - 1, IDENTITY, bar.least, bar.most, bar.note)


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
        replace(
            strand,
            matrix=matrix if strand.matrix is IDENTITY else matrix @ strand.matrix,
            diameter=None if strand.diameter is None else strand.diameter * scale,
            widest=None if strand.widest is None else strand.widest * scale,
        )
        for strand in strands
    )


def _enlargement(matrix: Matrix) -> float:
    """How much a transformation enlarges, the same in all directions."""
    scales = np.sqrt((matrix[:3, :3] ** 2).sum(axis=0))
    if scales.max() - scales.min() > SAME_SCALE * scales.max():
        raise UnreadableError("is mapped with a stretch in one direction, which is not read")
    return 1.0 if abs(scales[0] - 1.0) <= SAME_SCALE else float(scales[0])
