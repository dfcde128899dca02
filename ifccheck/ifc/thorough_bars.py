"""Bars read one by one through the entities of the model."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import numpy as np

from ifccheck.ifc.bar_columns import (
    NO_MOVE,
    BarColumns,
    BarReaders,
    Gathered,
    name_of,
    noted,
    thinnest,
    what_is_wrong,
)
from ifccheck.ifc.bar_data import NOTHING_SAID, Data
from ifccheck.ifc.bar_meshes import MESH, Wires, wires_of
from ifccheck.ifc.bar_shapes import Strand
from ifccheck.ifc.entity import ILL_TYPED, Entity, UnreadableError, get


def read_thoroughly(readers: BarReaders, products: Iterable[tuple[int, Entity]]) -> Gathered:
    """Read products one by one, each given with its place."""
    found = _Bars(readers)
    unreadable: dict[int, str] = {}
    for place, product in products:
        try:
            found.add(place, product)
        except (UnreadableError, *ILL_TYPED) as error:
            unreadable[place] = what_is_wrong(error)
    return Gathered(found.columns(), unreadable, found.notes)


class _Bars:
    def __init__(self, readers: BarReaders) -> None:
        self._readers = readers
        self._bars: list[tuple[int, int]] = []
        """Place and outer matrix of each bar."""
        self._names: list[str] = []
        self._data: list[Data] = []
        self._moves: list[Sequence[float]] = []
        self._strands: list[tuple[int, int, int]] = []
        """Bar, path and inner matrix of each strand."""
        self.notes: dict[int, str] = {}

    def add(self, place: int, product: Entity) -> None:
        """Add one product; raises UnreadableError."""
        readers = self._readers
        shape = product.get_argument(6)
        if shape is None:
            raise UnreadableError(_without_shape(readers, product))
        strands = readers.shapes.of(shape)
        placed = _placement(readers, product.get_argument(5))
        if product.is_a() == MESH:
            of_type = _type_of(readers, product)
            units, paths = readers.context.units, readers.shapes.paths
            wires = wires_of(product, of_type, strands, paths, units)
        else:
            wires = [Wires(strands, NOTHING_SAID)]
        name = name_of(product)
        data = [readers.settled(product, name, thinnest(one.strands), one.said) for one in wires]
        for one, datum in zip(wires, data, strict=True):
            self._add(place, placed, name, datum, one.strands)

    def _add(
        self,
        place: int,
        placed: tuple[int, Sequence[float]],
        name: str,
        data: Data,
        strands: Sequence[Strand],
    ) -> None:
        outer, move = placed
        bar = len(self._bars)
        self._bars.append((place, outer))
        self._names.append(name)
        self._data.append(data)
        self._moves.append(move)
        if note := noted(strands):
            self.notes[place] = note
        for strand in strands:
            inner = self._readers.inner.index(strand.matrix)
            self._strands.append((bar, self._readers.path(strand), inner))

    def columns(self) -> BarColumns:
        """All bars that were added."""
        product, outer = np.array(self._bars, dtype=np.intp).reshape(-1, 2).T
        bar, path, inner = np.array(self._strands, dtype=np.intp).reshape(-1, 3).T
        move = np.array(self._moves, dtype=float).reshape(-1, 3)
        own = np.arange(len(product))
        return BarColumns(product, own, self._names, own, self._data, outer, move, bar, path, inner)


def _type_of(readers: BarReaders, product: Entity) -> Entity | None:
    type_id = readers.context.relations.types.get(product.id())
    return None if type_id is None else readers.context.file.by_id(type_id)


def _without_shape(readers: BarReaders, product: Entity) -> str:
    """What to say of a bar that is not drawn."""
    if product.is_a() == MESH:
        return "is a mesh that is not drawn: where its wires lie is not told"
    of_type = _type_of(readers, product)
    if of_type is not None and get(of_type, "RepresentationMaps"):
        return "is not drawn: only its type has a shape, and where that stands is not told"
    return "has no shape"


def _placement(readers: BarReaders, placement: Entity | None) -> tuple[int, Sequence[float]]:
    """An outer matrix, and where a bar stands in it; most bars are only moved, not turned."""
    if placement is None:
        return readers.parent(0), NO_MOVE
    move = _only_moved(placement)
    if move is None:
        return readers.parent(placement.id()), NO_MOVE
    parent = placement.get_argument(0)
    return readers.parent(0 if parent is None else parent.id()), move


def _only_moved(placement: Entity) -> Sequence[float] | None:
    """The move of a local placement that does not turn; None for any other placement."""
    if placement.is_a() != "IfcLocalPlacement":
        return None
    axes = placement.get_argument(1)
    if axes.is_a() != "IfcAxis2Placement3D":
        return None
    argument = axes.get_argument
    if argument(1) is not None or argument(2) is not None:
        return None
    location = argument(0)
    if location.is_a() != "IfcCartesianPoint":
        return None
    moved: Sequence[float] = location.get_argument(0)
    return moved if len(moved) == 3 else None
