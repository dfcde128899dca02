"""Plainly written bars read all at once from the file's text.

Only places and centre lines are taken from the text, as no two bars share them. Of all else the
text tells which bars say the same; one of these is read through its entity for all of them.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Collection, Mapping, Sequence
from dataclasses import dataclass
from typing import Generic, TypeVar, cast

import numpy as np

from ifccheck.ifc.bar_chains import Chains, follow_chains
from ifccheck.ifc.bar_columns import (
    BarColumns,
    BarReaders,
    Gathered,
    name_of,
    noted,
    thinnest,
    what_is_wrong,
)
from ifccheck.ifc.bar_data import Data, Named
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_samples import offsets, others, spread
from ifccheck.ifc.bar_shapes import Strand
from ifccheck.ifc.bar_texts import BarTexts, read_bar_texts
from ifccheck.ifc.entity import ILL_TYPED, UnreadableError
from ifccheck.ifc.equal_rows import first_of_each, first_of_each_number, renumbered
from ifccheck.ifc.placements import IDENTITY
from ifccheck.ifc.step_table import StepTable
from ifccheck.ifc.swept_texts import read_swept_texts

NAMELESS = frozenset((b"$", b"''"))
_ITSELF = re.compile(rb"'([ -&(-\[\]-~]+)'")
"""A text that says itself: without escapes."""
_HALF = 32
"""Bits of one STEP id in a pair of them."""
Value = TypeVar("Value")


@dataclass(frozen=True, slots=True)
class Shared(Generic[Value]):
    """Values that rows share."""

    number: Ints
    """Which value each row has."""
    values: Sequence[Value | None]
    wrong: Sequence[str | None]
    """What keeps a value from being read."""

    def of_rows(self, kept: Bools) -> tuple[Ints, list[Value]]:
        """Which value rows have, and those values; each could be read."""
        used, number = renumbered(self.number[kept], len(self.values))
        values = cast(Sequence[Value], self.values)
        return number, [values[one] for one in used.tolist()]


def shared(first: Ints, number: Ints, read: Callable[[int], Value]) -> Shared[Value]:
    """Read each value by the first of the rows that share it."""
    read_or_not = [_tried(read, row) for row in first.tolist()]
    return Shared(number, [value for value, _ in read_or_not], [text for _, text in read_or_not])


def _tried(read: Callable[[int], Value], row: int) -> tuple[Value | None, str | None]:
    try:
        return read(row), None
    except (UnreadableError, *ILL_TYPED) as error:
        return None, what_is_wrong(error)


@dataclass(frozen=True, slots=True)
class _Shapes:
    """The distinct shapes of bars (D), and their strands (S)."""

    number: Ints
    """Shape of each bar."""
    first: Ints
    """Where the strands of each shape begin, and S at the end (D + 1)."""
    path: Ints
    inner: Ints
    thickness: Floats
    """nan where no strand has a diameter."""
    widest: Floats
    """What the diameter is at most; it differs from ``thickness`` for polygons alone."""
    notes: Mapping[int, str]
    """What is to be told of bars of some shapes."""
    wrong: Sequence[str | None]


def read_plain_bars(readers: BarReaders, table: StepTable, bars: Ints) -> tuple[Gathered, Ints]:
    """Read bars by their STEP ids; returns them and the places of those that are left."""
    texts = read_bar_texts(table, bars)
    chains = follow_chains(table, texts.placement, texts.shape)
    texts = texts.take(chains.place)
    step_ids = bars[texts.place]
    shapes = _read_shapes(readers, table, chains)
    parents = _read_parents(readers, chains)
    names = _read_names(readers, step_ids, texts)
    data = _read_data(readers, step_ids, texts, names, shapes)
    wrong = _wrong((shapes, parents, names, data))
    columns = _columns(texts.place, wrong.keys(), chains, (shapes, parents, names, data))
    unreadable = {int(texts.place[row]): text for row, text in wrong.items()}
    notes = _notes(shapes, texts.place, wrong)
    return Gathered(columns, unreadable, notes), others(len(bars), texts.place)


def _notes(shapes: _Shapes, place: Ints, wrong: Collection[int]) -> dict[int, str]:
    """What is to be told of bars that were read, by their places."""
    if not shapes.notes:
        return {}
    rows = np.flatnonzero(np.isin(shapes.number, list(shapes.notes))).tolist()
    return {int(place[r]): shapes.notes[int(shapes.number[r])] for r in rows if r not in wrong}


def _read_shapes(readers: BarReaders, table: StepTable, chains: Chains) -> _Shapes:
    key = np.where(chains.source > 0, (chains.source << _HALF) | chains.target, chains.item)
    row, number = first_of_each_number(key)
    solids = np.flatnonzero(chains.source[row] == 0)
    scale = readers.context.units.length
    swept = read_swept_texts(table, chains.item[row[solids]], scale)
    readers.swept_paths = swept.paths
    read = solids[swept.place]
    thickness = np.full(len(row), np.nan)
    thickness[read] = swept.diameter
    widest, notes = thickness.copy(), dict[int, str]()
    wrong: list[str | None] = [None] * len(row)
    strands: list[tuple[int, int, int]] = []
    for shape in others(len(row), read).tolist():
        found, wrong[shape] = _tried(lambda at: _strands(readers, chains, at), int(row[shape]))
        if found is not None:
            thickness[shape], widest[shape] = thinnest(found) or (np.nan, np.nan)
            if note := noted(found):
                notes[shape] = note
            for strand in found:
                inner = readers.inner.index(strand.matrix)
                strands.append((shape, readers.path(strand), inner))
    straight = np.full(len(read), readers.inner.index(IDENTITY))
    columns = np.column_stack((read, np.arange(len(read)), straight))
    columns = np.concatenate((columns, np.array(strands, dtype=np.intp).reshape(-1, 3)))
    shape, path, inners = columns[np.argsort(columns[:, 0], kind="stable")].T
    first = offsets(np.bincount(shape, minlength=len(row)))
    return _Shapes(number, first, path, inners, thickness, widest, notes, wrong)


def _strands(readers: BarReaders, chains: Chains, row: int) -> tuple[Strand, ...]:
    item, source, target = (int(c[row]) for c in (chains.item, chains.source, chains.target))
    strands = readers.shapes.of_item(item, source, target, readers.context.file)
    thinnest(strands)
    return strands


def _read_parents(readers: BarReaders, chains: Chains) -> Shared[int]:
    first, number = first_of_each_number(chains.parent)
    return shared(first, number, lambda row: readers.parent(int(chains.parent[row])))


def _read_names(readers: BarReaders, step_ids: Ints, texts: BarTexts) -> Shared[str]:
    first, number = texts.name.first_of_each()
    nameless = np.array(
        [texts.name.of(row).strip() in NAMELESS for row in first.tolist()], dtype=bool
    )
    if nameless.any():
        tag = np.where(nameless[number], texts.tag.first_of_each()[1], -1)
        first, number = first_of_each(number, tag)

    def read(row: int) -> str:
        itself = _ITSELF.fullmatch(texts.name.of(row))
        if itself is not None:
            return itself[1].decode("ascii")
        return name_of(readers.context.file.by_id(int(step_ids[row])))

    return shared(first, number, read)


def _read_data(
    readers: BarReaders,
    step_ids: Ints,
    texts: BarTexts,
    names: Shared[str],
    shapes: _Shapes,
) -> Shared[Data]:
    sizes: dict[Named, int] = {}
    size_of = [
        sizes.setdefault(readers.data.said_in(name or ""), len(sizes)) for name in names.values
    ]
    thickness = shapes.thickness[shapes.number]
    said = [column.first_of_each()[1] for column in texts.data]
    size = np.array(size_of, dtype=np.intp)[names.number]
    related = readers.data.relations_of(step_ids)
    widest = shapes.widest[shapes.number]
    swept = [thickness.view(np.int64)]
    if (shapes.widest > shapes.thickness).any():
        swept.append(widest.view(np.int64))
    first, number = first_of_each(*said, size, *related, *swept)

    def read(row: int) -> Data:
        product = readers.context.file.by_id(int(step_ids[row]))
        least, most = float(thickness[row]), float(widest[row])
        name = names.values[int(names.number[row])] or ""
        return readers.settled(product, name, None if np.isnan(least) else (least, most))

    return shared(first, number, read)


def _wrong(parts: Sequence[_Shapes | Shared[int] | Shared[str] | Shared[Data]]) -> dict[int, str]:
    """What is wrong with bars, by their rows; of several things that which is asked first."""
    wrong: dict[int, str] = {}
    for part in parts:
        failed = [number for number, text in enumerate(part.wrong) if text is not None]
        for row in np.flatnonzero(np.isin(part.number, failed)).tolist() if failed else ():
            text = part.wrong[int(part.number[row])]
            wrong.setdefault(row, text or "")
    return wrong


def _columns(
    place: Ints,
    wrong: Collection[int],
    chains: Chains,
    parts: tuple[_Shapes, Shared[int], Shared[str], Shared[Data]],
) -> BarColumns:
    shapes, parents, names, data = parts
    kept = np.ones(len(place), dtype=bool)
    kept[list(wrong)] = False
    number = shapes.number[kept]
    bar, within = spread(np.diff(shapes.first)[number])
    strand = shapes.first[number[bar]] + within
    parent, outers = parents.of_rows(kept)
    name, all_names = names.of_rows(kept)
    datum, all_data = data.of_rows(kept)
    return BarColumns(
        product=place[kept],
        name=name,
        names=all_names,
        datum=datum,
        data=all_data,
        outer=np.array(outers, dtype=np.intp)[parent],
        move=chains.move[kept],
        bar=bar,
        path=shapes.path[strand],
        inner=shapes.inner[strand],
    )
