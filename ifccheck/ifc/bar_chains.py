"""The plainest bars of a model followed all at once: bars that are moved, not turned, and whose
shape is one item."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import NamedTuple

import numpy as np

from ifccheck.ifc.bar_paths import Floats, Ints
from ifccheck.ifc.step_table import StepTable


class Chain(NamedTuple):
    """Where a plain bar stands and which shape it has."""

    parent: int
    """STEP id of the placement that it is moved in; 0 for the building itself."""
    move: Sequence[float]
    """In units of the model."""
    item: int
    """STEP id of its item."""
    source: int
    """STEP ids of what is mapped and of how; 0 where the item is not mapped."""
    target: int


def follow_chains(table: StepTable, bars: Sequence[int]) -> Iterator[Chain | None]:
    """Follow bars by their STEP ids; None for one that is not of the plainest form."""
    references = table.references(table.rows(np.array(bars, dtype=np.intp)))
    placement, shape = references.at(-2), references.at(-1)
    parent, move = _places(table, placement)
    item, source, target = _items(table, shape)
    plain = ~np.isnan(move).any(axis=1) & (item > 0)
    columns = (plain, parent, move, item, source, target)
    for is_plain, *values in zip(*(column.tolist() for column in columns), strict=True):
        yield Chain(*values) if is_plain else None


def _places(table: StepTable, placement: Ints) -> tuple[Ints, Floats]:
    """The parent of each placement and its move; nan where it turns or is of another kind."""
    rows = table.rows(placement)
    references = table.references(rows)
    is_local = table.named(rows, "IFCLOCALPLACEMENT") & (references.count >= 1)
    parent = np.where(references.count == 2, references.at(0), 0)
    axes = table.rows(references.at(-1))
    points = table.references(axes)
    moved = is_local & (references.count <= 2)
    moved &= table.named(axes, "IFCAXIS2PLACEMENT3D") & (points.count == 1)
    place = table.rows(points.at(0))
    moved &= table.named(place, "IFCCARTESIANPOINT")
    move = np.full((len(rows), 3), np.nan)
    move[moved] = table.coordinates(place[moved])
    return parent, move


def _items(table: StepTable, shape: Ints) -> tuple[Ints, Ints, Ints]:
    """The only item of each shape, and of a mapped one its source and target; else 0."""
    rows = table.rows(shape)
    representations = table.references(rows)
    single = table.named(rows, "IFCPRODUCTDEFINITIONSHAPE") & (representations.count == 1)
    body = table.rows(representations.at(0))
    items = table.references(body)
    single &= table.named(body, "IFCSHAPEREPRESENTATION") & (items.count == 2)
    item = np.where(single, items.at(1), 0)
    item_rows = table.rows(item)
    mapped = single & table.named(item_rows, "IFCMAPPEDITEM")
    parts = table.references(item_rows)
    source, target = (np.where(mapped, parts.at(k), 0) for k in (0, 1))
    return item, source, target
