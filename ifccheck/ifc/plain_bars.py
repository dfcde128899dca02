"""Plainly written bars read all at once from the file's text.

Only places and centre lines are taken from the text, as no two bars share them. Of all else the
text tells which bars say the same; one of these is read through its entity for all of them.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Collection, Hashable, Sequence
from dataclasses import dataclass
from typing import Generic, TypeVar, cast

import numpy as np

from ifccheck.ifc.bar_chains import Chains, follow_chains
from ifccheck.ifc.bar_columns import (
    BarColumns,
    BarReaders,
    Gathered,
    name_of,
    thinnest,
    what_is_wrong,
)
from ifccheck.ifc.bar_data import Data
from ifccheck.ifc.bar_paths import Bools, Ints
from ifccheck.ifc.bar_samples import offsets, others, spread
from ifccheck.ifc.bar_shapes import Strand
from ifccheck.ifc.bar_texts import BarTexts, read_bar_texts
from ifccheck.ifc.entity import ILL_TYPED, UnreadableError
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

    def of_rows(self, kept: Bools) -> list[Value]:
        """The values of rows, each of which could be read."""
        values = cast(Sequence[Value], self.values)
        return [values[number] for number in self.number[kept].tolist()]


def shared(keys: Sequence[Hashable], read: Callable[[int], Value]) -> Shared[Value]:
    """Read the value of each distinct key by its first row."""
    numbers: dict[Hashable, int] = {}
    number = np.array([numbers.setdefault(key, len(numbers)) for key in keys], dtype=np.intp)
    first = np.zeros(len(numbers), dtype=np.intp)
    first[number[::-1]] = np.arange(len(keys))[::-1]
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
    thickness: Sequence[float | None]
    wrong: Sequence[str | None]


def read_plain_bars(readers: BarReaders, table: StepTable, bars: Ints) -> tuple[Gathered, Ints]:
    """Read bars by their STEP ids; returns them and the places of those that are left."""
    texts = read_bar_texts(table, bars)
    chains = follow_chains(table, texts.placement, texts.shape)
    texts = texts.take(chains.place)
    step_ids = bars[texts.place].tolist()
    shapes = _read_shapes(readers, table, chains)
    parents = shared(chains.parent.tolist(), lambda row: readers.parent(int(chains.parent[row])))
    names = _read_names(readers, step_ids, texts)
    data = _read_data(readers, step_ids, texts, names, shapes)
    wrong = _wrong((shapes, parents, names, data))
    columns = _columns(texts.place, wrong.keys(), chains, (shapes, parents, names, data))
    unreadable = {int(texts.place[row]): text for row, text in wrong.items()}
    return Gathered(columns, unreadable), others(len(bars), texts.place)


def _read_shapes(readers: BarReaders, table: StepTable, chains: Chains) -> _Shapes:
    key = np.where(chains.source > 0, (chains.source << _HALF) | chains.target, chains.item)
    _, row, number = np.unique(key, return_index=True, return_inverse=True)
    solids = np.flatnonzero(chains.source[row] == 0)
    scale = readers.context.units.length
    swept = read_swept_texts(table, chains.item[row[solids]], scale)
    readers.swept_paths = swept.paths
    read = solids[swept.place]
    thickness: list[float | None] = [None] * len(row)
    for shape, diameter in zip(read.tolist(), swept.diameter.tolist(), strict=True):
        thickness[shape] = diameter
    wrong: list[str | None] = [None] * len(row)
    strands: list[tuple[int, int, int]] = []
    for shape in others(len(row), read).tolist():
        found, wrong[shape] = _tried(lambda at: _strands(readers, chains, at), int(row[shape]))
        if found is not None:
            thickness[shape] = thinnest(found)
            for strand in found:
                inner = readers.inner.index(strand.matrix)
                strands.append((shape, readers.path(strand), inner))
    straight = np.full(len(read), readers.inner.index(IDENTITY))
    columns = np.column_stack((read, np.arange(len(read)), straight))
    columns = np.concatenate((columns, np.array(strands, dtype=np.intp).reshape(-1, 3)))
    shape, path, inners = columns[np.argsort(columns[:, 0], kind="stable")].T
    first = offsets(np.bincount(shape, minlength=len(row)))
    return _Shapes(number.reshape(-1), first, path, inners, thickness, wrong)


def _strands(readers: BarReaders, chains: Chains, row: int) -> tuple[Strand, ...]:
    item, source, target = (int(c[row]) for c in (chains.item, chains.source, chains.target))
    strands = readers.shapes.of_item(item, source, target, readers.context.file)
    thinnest(strands)
    return strands


def _read_names(readers: BarReaders, step_ids: Sequence[int], texts: BarTexts) -> Shared[str]:
    keys = [
        (name, tag) if name.strip() in NAMELESS else name
        for name, tag in zip(texts.name, texts.tag, strict=True)
    ]

    def read(row: int) -> str:
        itself = _ITSELF.fullmatch(texts.name[row])
        if itself is not None:
            return itself[1].decode("ascii")
        return name_of(readers.context.file.by_id(step_ids[row]))

    return shared(keys, read)


def _read_data(
    readers: BarReaders,
    step_ids: Sequence[int],
    texts: BarTexts,
    names: Shared[str],
    shapes: _Shapes,
) -> Shared[Data]:
    sizes = [readers.data.size_in(name or "") for name in names.values]
    thickness = [shapes.thickness[shape] for shape in shapes.number.tolist()]
    of_rows = names.number.tolist()
    related = readers.data.all_related(step_ids)
    keys = list(zip(texts.data, [sizes[n] for n in of_rows], related, thickness, strict=True))

    def read(row: int) -> Data:
        product = readers.context.file.by_id(step_ids[row])
        return readers.settled(product, names.values[of_rows[row]] or "", thickness[row])

    return shared(keys, read)


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
    return BarColumns(
        product=place[kept],
        names=names.of_rows(kept),
        data=data.of_rows(kept),
        outer=np.array(parents.of_rows(kept), dtype=np.intp),
        move=chains.move[kept],
        bar=bar,
        path=shapes.path[strand],
        inner=shapes.inner[strand],
    )
