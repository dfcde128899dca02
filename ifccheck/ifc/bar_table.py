"""The bars of a model gathered into arrays: one row per bar, and one per strand."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import TypeVar

import numpy as np

from ifccheck.ifc.bar_columns import BarColumns, BarReaders, Gathered, concatenated
from ifccheck.ifc.bar_helices import TOLD, find_helices, long_lines
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_samples import PathTable, offsets, spread, tabulate
from ifccheck.ifc.bar_shapes import FARTHEST
from ifccheck.ifc.bar_sizes import BarSize, Grade
from ifccheck.ifc.context import Context
from ifccheck.ifc.equal_rows import first_of_each_number
from ifccheck.ifc.plain_bars import read_plain_bars
from ifccheck.ifc.step_table import StepTable
from ifccheck.ifc.thorough_bars import read_thoroughly

Entry = TypeVar("Entry")


@dataclass(frozen=True, slots=True)
class BarTable:
    """The bars of a model (B) and their centre lines in the building (S)."""

    product: Ints
    """Which of the products that were asked for each bar is."""
    step_ids: Ints
    name: Ints
    """Index into ``names``."""
    names: Sequence[str]
    role: Ints
    """Index into ``roles``."""
    roles: Sequence[str]
    """LIGATURE, MAIN ..., of the occurrence or else of its type; "" where neither tells."""
    size: Ints
    """Index into ``sizes``."""
    grade: Ints
    """Index into ``grades``."""
    sizes: Sequence[BarSize]
    grades: Sequence[Grade]
    paths: PathTable
    bar: Ints
    """Bar of each strand (S)."""
    path: Ints
    turn: Ints
    """Index into ``rotations``."""
    rotations: Floats
    """(D, 3, 3)"""
    translation: Floats
    """(S, 3) [mm]"""
    unreadable: Mapping[int, str]
    """What is wrong with products that could not be read, by their place."""
    notes: Mapping[int, str]
    """What is to be told of products that were read, by their place."""

    @property
    def rotation(self) -> Floats:
        """Rotation of each strand (S, 3, 3)."""
        return self.rotations[self.turn]

    def label(self, bar: int) -> str:
        """What people call a bar."""
        return _label(self.names[self.name.item(bar)], self.step_ids.item(bar))

    def labels(self, bars: Ints) -> list[str]:
        """What people call some bars."""
        names = map(self.names.__getitem__, self.name[bars].tolist())
        step_ids = self.step_ids[bars].tolist()
        return [_label(name, step_id) for name, step_id in zip(names, step_ids, strict=True)]


def _label(name: str, step_id: int) -> str:
    return f"{name} #{step_id}" if name else f"#{step_id}"


def gather_bars(context: Context, bars: Ints, statements: StepTable | None = None) -> BarTable:
    """Gather bars by their STEP ids: their data, and the centre line of each strand with its
    place.

    With the ``statements`` of the file those that are written plainly are read all at once.
    """
    readers = BarReaders(context)
    by_id = context.file.by_id
    if statements is None:
        found = read_thoroughly(readers, ((p, by_id(i)) for p, i in enumerate(bars.tolist())))
        return _unwound(_within_reach(_table(readers, bars, found)))
    plain, left = read_plain_bars(readers, statements, bars)
    others = read_thoroughly(readers, ((p, by_id(int(bars[p]))) for p in left.tolist()))
    columns = concatenated(plain.columns, others.columns)
    unreadable = plain.unreadable | others.unreadable
    notes = plain.notes | others.notes
    return _unwound(_within_reach(_table(readers, bars, Gathered(columns, unreadable, notes))))


def _unwound(table: BarTable) -> BarTable:
    """The table with the turns of spirals in the place of the spirals."""
    if not len(long_lines(table.paths)):
        return table
    paths, line = table.paths, table.paths.line[table.path]
    thick = np.array([size.diameter for size in table.sizes], dtype=float)
    diameter = np.zeros(len(paths.first) - 1)
    np.maximum.at(diameter, line, thick[table.size[table.bar]])
    turns = find_helices(paths, diameter)
    if not turns:
        return table
    rings = tabulate([ring for one in turns.values() for ring in one])
    count = np.ones(len(diameter), dtype=np.intp)
    count[list(turns)] = [len(one) for one in turns.values()]
    begin = np.zeros(len(diameter), dtype=np.intp)
    begin[list(turns)] = len(paths) + offsets(count[list(turns)])[:-1]
    row, within = spread(count[line])
    is_turn = np.isin(line, list(turns))
    path = np.where(is_turn[row], begin[line][row] + within, table.path[row])
    spirals = table.product[table.bar[is_turn]].tolist()
    return replace(
        table,
        paths=paths.with_more(rings),
        bar=table.bar[row],
        path=path,
        turn=table.turn[row],
        translation=table.translation[row],
        notes={**table.notes, **dict.fromkeys(spirals, TOLD)},
    )


def _within_reach(table: BarTable) -> BarTable:
    """The table without strands that stand nowhere: their coordinates are no lengths."""
    turned = np.abs(table.rotations).reshape(-1, 9).max(axis=1) <= FARTHEST
    near: Bools = turned[table.turn]
    for column in table.translation.T:
        near &= np.abs(column) <= FARTHEST  # false for what is no number
    if near.all():
        return table
    lost = {int(table.product[bar]): "stands nowhere" for bar in table.bar[~near].tolist()}
    return replace(
        table,
        bar=table.bar[near],
        path=table.path[near],
        turn=table.turn[near],
        translation=table.translation[near],
        unreadable={**table.unreadable, **lost},
    )


def _table(readers: BarReaders, bars: Ints, found: Gathered) -> BarTable:
    columns = found.columns
    turn, rotations, translation = _motions(readers, columns)
    size = np.array([data.size for data in columns.data], dtype=np.intp)
    grade = np.array([data.grade for data in columns.data], dtype=np.intp)
    size, sizes = _by_appearance(size[columns.datum], readers.data.sizes)
    grade, grades = _by_appearance(grade[columns.datum], readers.data.grades)
    return BarTable(
        product=columns.product,
        step_ids=bars[columns.product],
        name=columns.name,
        names=columns.names,
        role=columns.datum,
        roles=[data.role for data in columns.data],
        size=size,
        grade=grade,
        sizes=sizes,
        grades=grades,
        paths=readers.paths(),
        bar=columns.bar,
        path=columns.path,
        turn=turn,
        rotations=rotations,
        translation=translation,
        unreadable=dict(sorted(found.unreadable.items())),
        notes=found.notes,
    )


def _motions(readers: BarReaders, columns: BarColumns) -> tuple[Ints, Floats, Floats]:
    """Which rotation each strand has, the rotations, and the translation of each strand."""
    outer, inner = columns.outer[columns.bar], columns.inner
    outers = np.array(readers.outer.all).reshape(-1, 4, 4)
    inners = np.array(readers.inner.all).reshape(-1, 4, 4)
    first, turn = first_of_each_number(outer * len(inners) + inner)
    rotations = outers[outer[first], :3, :3] @ inners[inner[first], :3, :3]
    place = columns.move[columns.bar] * readers.context.units.length + inners[inner, :3, 3]
    turned = np.einsum("sij,sj->si", outers[outer, :3, :3], place)
    return turn, rotations, turned + outers[outer, :3, 3]


def _by_appearance(number: Ints, entries: Sequence[Entry]) -> tuple[Ints, list[Entry]]:
    """Number entries in the order in which rows use them, whichever was read first."""
    first, _ = first_of_each_number(number)
    order = number[np.sort(first)]
    new = np.zeros(len(entries), dtype=np.intp)
    new[order] = np.arange(len(order))
    return new[number], [entries[at] for at in order.tolist()]
