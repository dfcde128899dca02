"""The bars of a model gathered into arrays: a list of products, and one row per strand."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from itertools import repeat
from typing import NamedTuple

import numpy as np

from ifccheck.ifc.bar_chains import Chain, follow_chains
from ifccheck.ifc.bar_data import BarData
from ifccheck.ifc.bar_paths import Floats, Ints, Path
from ifccheck.ifc.bar_shapes import FARTHEST, BarShapes, Strand
from ifccheck.ifc.bar_sizes import BarSize, Grade
from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import ILL_TYPED, Entity, UnreadableError
from ifccheck.ifc.placements import IDENTITY, Matrix
from ifccheck.ifc.step_table import StepTable
from ifccheck.ifc.swept_texts import read_swept_texts

NO_OFFSET = (0.0, 0.0, 0.0)


class Bar(NamedTuple):
    """One product that is a bar, or several equal bars."""

    step_id: int
    name: str
    role: str
    """LIGATURE, MAIN ..., of the occurrence or else of its type; "" where neither tells."""
    size: int
    """Index into ``BarTable.sizes``."""
    grade: int
    """Index into ``BarTable.grades``."""

    @property
    def label(self) -> str:
        """What people call it."""
        return f"{self.name} #{self.step_id}" if self.name else f"#{self.step_id}"


@dataclass(frozen=True, slots=True)
class BarTable:
    """The bars of a model and their centre lines in the building."""

    bars: Sequence[Bar]
    sizes: Sequence[BarSize]
    grades: Sequence[Grade]
    paths: Sequence[Path]
    bar: Ints
    """Bar of each strand (S)."""
    path: Ints
    rotation: Floats
    """(S, 3, 3)"""
    translation: Floats
    """(S, 3) [mm]"""
    unreadable: Mapping[int, str]
    """What is wrong with products that could not be read, by STEP id."""


class _Matrices:
    """Distinct matrices, numbered."""

    def __init__(self) -> None:
        self.all: list[Matrix] = []
        self._index: dict[int, int] = {}

    def index(self, matrix: Matrix) -> int:
        """Number of a matrix; the matrix is kept, so its identity stays its own."""
        found = self._index.get(id(matrix))
        if found is None:
            found = self._index[id(matrix)] = len(self.all)
            self.all.append(matrix)
        return found


class _Gathering:
    def __init__(self, context: Context) -> None:
        self._context = context
        self._parents: dict[int, int] = {}
        self.shapes = BarShapes(context.units, context.placements)
        self.data = BarData(context)
        self.bars: list[Bar] = []
        self.outer, self.inner = _Matrices(), _Matrices()
        self.rows: list[tuple[int, int, int, int]] = []
        """Bar, path, outer matrix and inner matrix of each strand."""
        self.offsets: list[Sequence[float]] = []
        """Place of each bar in its outer matrix, in units of the model."""
        self._whole_place = self._parents[0] = self.outer.index(IDENTITY)

    def add(self, product: Entity, chain: Chain | None) -> None:
        """Add one product; raises UnreadableError."""
        argument = product.get_argument
        if chain is None:
            strands = self.shapes.of(argument(6))
            outer, offset = self._placement(argument(5))
        else:
            item, file = (chain.item, chain.source, chain.target), self._context.file
            strands = self.shapes.of_item(*item, file)
            outer, offset = self._parent(chain.parent), chain.move
        step_id, name = product.id(), argument(2) or argument(7) or ""
        swept = strands[0].diameter if len(strands) == 1 else _thinnest(strands)
        data = self.data.of(product, step_id, name, swept)
        if data.size < 0:
            raise UnreadableError("is of a diameter that nobody states")
        row = len(self.bars)
        self.bars.append(Bar(step_id, name, data.role, data.size, data.grade))
        self.offsets.append(offset)
        for strand in strands:
            self.rows.append((row, strand.path, outer, self.inner.index(strand.matrix)))

    def _placement(self, placement: Entity | None) -> tuple[int, Sequence[float]]:
        """An outer matrix, and where a bar stands in it; most bars are only moved, not turned."""
        if placement is None:
            return self._whole_place, NO_OFFSET
        moved = _only_moved(placement)
        if moved is None:
            return self.outer.index(self._context.placements.placement(placement)), NO_OFFSET
        parent = placement.get_argument(0)
        return self._parent(0 if parent is None else parent.id()), moved

    def _parent(self, step_id: int) -> int:
        """The outer matrix of a placement, by its STEP id; 0 is the building itself."""
        if step_id not in self._parents:
            placement = self._context.file.by_id(step_id)
            matrix = self._context.placements.placement(placement)
            self._parents[step_id] = self.outer.index(matrix)
        return self._parents[step_id]


def _thinnest(strands: Sequence[Strand]) -> float | None:
    if not strands:
        raise UnreadableError("has no shape")
    return min((s.diameter for s in strands if s.diameter is not None), default=None)


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


def gather_bars(
    context: Context, products: Sequence[Entity], statements: StepTable | None = None
) -> BarTable:
    """Gather bars: their data, and the centre line of each strand with its place.

    With the ``statements`` of the file the plainest bars are followed all at once.
    """
    found = _Gathering(context)
    unreadable: dict[int, str] = {}
    chains: Iterable[Chain | None] = repeat(None, len(products))
    if statements is not None:
        followed = list(follow_chains(statements, [product.id() for product in products]))
        _read_swept(found, statements, followed, context.units.length)
        chains = followed
    for product, chain in zip(products, chains, strict=True):
        try:
            found.add(product, chain)
        except UnreadableError as error:
            unreadable[product.id()] = str(error)
        except ILL_TYPED as error:
            unreadable[product.id()] = f"holds what its class does not allow ({error})"
    return _within_reach(_table(found, unreadable, context.units.length))


def _read_swept(
    found: _Gathering, statements: StepTable, chains: Iterable[Chain | None], scale: float
) -> None:
    """Read the shapes of the plainest bars, each once."""
    items = {chain.item for chain in chains if chain is not None and not chain.source}
    for solid in read_swept_texts(statements, np.array(sorted(items), dtype=np.intp), scale):
        found.shapes.add_swept(*solid)


def _within_reach(table: BarTable) -> BarTable:
    """The table without strands that stand nowhere: their coordinates are no lengths."""
    size = np.maximum(np.abs(table.translation).max(axis=1, initial=0.0), 0.0)
    size = np.maximum(size, np.abs(table.rotation).max(axis=(1, 2), initial=0.0))
    near = size <= FARTHEST  # false for what is no number
    if near.all():
        return table
    lost = {table.bars[bar].step_id: "stands nowhere" for bar in table.bar[~near].tolist()}
    return replace(
        table,
        bar=table.bar[near],
        path=table.path[near],
        rotation=table.rotation[near],
        translation=table.translation[near],
        unreadable={**table.unreadable, **lost},
    )


def _table(found: _Gathering, unreadable: Mapping[int, str], scale: float) -> BarTable:
    bar, path, outer, inner = np.array(found.rows, dtype=np.intp).reshape(-1, 4).T
    outers = np.array(found.outer.all).reshape(-1, 4, 4)[outer]
    inners = np.array(found.inner.all).reshape(-1, 4, 4)[inner]
    offsets = np.array(found.offsets, dtype=float).reshape(-1, 3)[bar] * scale
    place = offsets + inners[:, :3, 3]
    turned = np.einsum("sij,sj->si", outers[:, :3, :3], place)
    return BarTable(
        bars=found.bars,
        sizes=found.data.sizes,
        grades=found.data.grades,
        paths=found.shapes.paths,
        bar=bar,
        path=path,
        rotation=outers[:, :3, :3] @ inners[:, :3, :3],
        translation=turned + outers[:, :3, 3],
        unreadable=unreadable,
    )
