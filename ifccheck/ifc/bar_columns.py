"""Bars of a model column by column, and the readers that all ways of gathering them share."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

from ifccheck.ifc.bar_data import NOTHING_SAID, BarData, Data, Said, Swept
from ifccheck.ifc.bar_paths import Floats, Ints
from ifccheck.ifc.bar_samples import PathTable, tabulate
from ifccheck.ifc.bar_shapes import BarShapes, Strand
from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import Entity, UnreadableError
from ifccheck.ifc.placements import IDENTITY, Matrix

NO_MOVE = (0.0, 0.0, 0.0)


@dataclass(frozen=True, slots=True)
class BarColumns:
    """Bars (B) and their strands (S)."""

    product: Ints
    """Which of the products asked for each bar is."""
    name: Ints
    """Which of the names each bar has."""
    names: Sequence[str]
    datum: Ints
    """Which of the data each bar has."""
    data: Sequence[Data]
    outer: Ints
    """Outer matrix of each bar."""
    move: Floats
    """Place of each bar in its outer matrix, in units of the model (B, 3)."""
    bar: Ints
    """Bar of each strand; those of one bar follow those of the bar before."""
    path: Ints
    inner: Ints


@dataclass(frozen=True, slots=True)
class Gathered:
    """Bars that were read, and what is wrong with others."""

    columns: BarColumns
    unreadable: dict[int, str] = field(default_factory=dict)
    """By the place of the product."""
    notes: dict[int, str] = field(default_factory=dict)
    """What is to be told of bars that were read, likewise."""


class Matrices:
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


class BarReaders:
    """What reads the shapes, the data and the places of bars."""

    def __init__(self, context: Context) -> None:
        self.context = context
        self.shapes = BarShapes(context.units, context.placements)
        self.data = BarData(context)
        self.outer, self.inner = Matrices(), Matrices()
        self.swept_paths = tabulate(())
        """Centre lines that were read from the file's text."""
        self._parents: dict[int, int] = {0: self.outer.index(IDENTITY)}

    def parent(self, step_id: int) -> int:
        """The outer matrix of a placement, by its STEP id; 0 is the building itself.

        Raises UnreadableError.
        """
        if step_id not in self._parents:
            placements = self.context.placements
            matrix = placements.known(step_id)
            if matrix is None:
                matrix = placements.placement(self.context.file.by_id(step_id))
            self._parents[step_id] = self.outer.index(matrix)
        return self._parents[step_id]

    def path(self, strand: Strand) -> int:
        """Number of the centre line of a strand in ``paths()``."""
        return len(self.swept_paths) + strand.path

    def paths(self) -> PathTable:
        """All centre lines that were read."""
        return self.swept_paths.with_more(tabulate(self.shapes.paths))

    def settled(
        self, product: Entity, name: str, swept: Swept | None, said: Said = NOTHING_SAID
    ) -> Data:
        """Return what is settled of a bar; raises UnreadableError."""
        data = self.data.of(product, product.id(), name, swept, said)
        if data.size < 0:
            raise UnreadableError("is of a diameter that nobody states")
        if data.not_covered:
            raise UnreadableError(data.not_covered)
        return data


def thinnest(strands: Sequence[Strand]) -> Swept | None:
    """The least diameter of the strands of a bar; None where none has one."""
    if not strands:
        raise UnreadableError("has no shape")
    known = ((s.diameter, s.widest or s.diameter) for s in strands if s.diameter is not None)
    return min(known, default=None)


def noted(strands: Sequence[Strand]) -> str:
    """What is to be told of how the strands of a bar were read."""
    return "; ".join(dict.fromkeys(strand.note for strand in strands if strand.note))


def name_of(product: Entity) -> str:
    """The name of a bar, or else its tag."""
    name: str = product.get_argument(2) or product.get_argument(7) or ""
    return name


def what_is_wrong(error: Exception) -> str:
    """Say what keeps a bar from being read."""
    if isinstance(error, UnreadableError):
        return str(error)
    return f"holds what its class does not allow ({error})"


def concatenated(first: BarColumns, second: BarColumns) -> BarColumns:
    """The bars of both, in the order of the products."""
    if not len(second.product):
        return first
    count = len(first.product)
    product = np.concatenate((first.product, second.product))
    order = np.argsort(product, kind="stable")
    rank = np.empty(len(order), dtype=np.intp)
    rank[order] = np.arange(len(order))
    bar = rank[np.concatenate((first.bar, second.bar + count))]
    strand = np.argsort(bar, kind="stable")
    return BarColumns(
        product=product[order],
        name=np.concatenate((first.name, second.name + len(first.names)))[order],
        names=[*first.names, *second.names],
        datum=np.concatenate((first.datum, second.datum + len(first.data)))[order],
        data=[*first.data, *second.data],
        outer=np.concatenate((first.outer, second.outer))[order],
        move=np.concatenate((first.move, second.move))[order],
        bar=bar[strand],
        path=np.concatenate((first.path, second.path))[strand],
        inner=np.concatenate((first.inner, second.inner))[strand],
    )
