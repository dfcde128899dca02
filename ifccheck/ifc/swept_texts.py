"""The plainest swept bars read from the file's text at once: whole curves of lines and arcs."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.ifc.bar_paths import Floats, Ints
from ifccheck.ifc.bar_samples import PathTable, offsets, spread
from ifccheck.ifc.bar_shapes import FARTHEST
from ifccheck.ifc.equal_rows import first_of_each, renumbered
from ifccheck.ifc.step_cursors import read_numbers
from ifccheck.ifc.step_table import Rests, StepTable

_TRIPLE = np.frombuffer(b"(,,),", np.uint8)
"""The structure of the triples of a list, a comma after each."""
_SEGMENTS = re.compile(rb"\((IFC(?:LINE|ARC)INDEX\(\([0-9,]+\)\),?)+\)")
_SEGMENT = re.compile(rb"IFC(LINE|ARC)INDEX\(\(([0-9,]+)\)\)")
_CURVE_END = re.compile(rb"(.*),(?:\.[FTU]\.|\$)\);", re.DOTALL)
_LIST_ENDS = (b"));", b"),$);")
"""How a list of points ends after its triples, in earlier schemas and with a list of tags."""
OPEN, CLOSE, COMMA = b"(),"

Order = tuple[tuple[int, ...], tuple[int, ...]]
"""Indices of points in order from 0, and the places in that order at which arcs begin."""


@dataclass(frozen=True, slots=True)
class SweptSolids:
    """Swept solids that were read (M)."""

    place: Ints
    """Which of the solids asked for each is."""
    paths: PathTable
    diameter: Floats
    """[mm]"""


@dataclass(frozen=True, slots=True)
class _Lists:
    """Points that are listed (L), those of one list after those of another."""

    place: Ints
    """Which of the lists asked for each is."""
    points: Floats
    """In units of the model (N, 3)."""
    counts: Ints


@dataclass(frozen=True, slots=True)
class _Lines:
    """Centre lines of curves (C)."""

    place: Ints
    """Which of the curves asked for each is."""
    paths: PathTable
    """In units of the model."""


def read_swept_texts(table: StepTable, solids: Ints, scale: float) -> SweptSolids:
    """Read swept solids by their STEP ids.

    ``scale`` is in mm per unit of the model. Solids that are not written in the plainest way, or
    whose curves are of another kind, are left out.
    """
    place, curves, radius = _solids(table, solids)
    lines = _indexed_curves(table, curves)
    points, first, arcs = lines.paths.points * scale, lines.paths.first, lines.paths.arcs
    found = place[lines.place]
    diameter = 2.0 * radius[lines.place] * scale
    return _on_earth(SweptSolids(found, PathTable(points, first, arcs), diameter))


def _solids(table: StepTable, solids: Ints) -> tuple[Ints, Ints, Floats]:
    """Of the plain solids: which they are, their curves and their radii."""
    solid = table.cursors(solids, "IFCSWEPTDISKSOLID")
    curve = solid.reference()
    solid.tokens(b",")
    radius = solid.number()
    solid.tokens(b",", b"$", b",", b"$", b",", b"$", b")", b";")
    return np.flatnonzero(solid.plain), curve[solid.plain], radius[solid.plain]


def _indexed_curves(table: StepTable, curves: Ints) -> _Lines:
    """Curves that take listed points in order, by their STEP ids."""
    place, lists, segments, texts = _segments(table, curves)
    listed = _listed_points(table, lists)
    key = np.column_stack((segments[listed.place], listed.counts))
    first, number = first_of_each(key)
    orders = [_order(texts[segment], count) for segment, count in key[first].tolist()]
    kept = np.array([order is not None for order in orders], dtype=bool)[number]
    begin = offsets(listed.counts)[:-1][kept]
    used, number = renumbered(number[kept], len(orders))
    runs = [order for order in (orders[one] for one in used.tolist()) if order is not None]
    return _Lines(place[listed.place[kept]], _in_order(listed.points, begin, runs, number))


def _segments(table: StepTable, curves: Ints) -> tuple[Ints, Ints, Ints, list[bytes]]:
    """Of the plain curves: which they are, their lists of points, and which of several texts
    their segments are; and those texts."""
    curve = table.cursors(curves, "IFCINDEXEDPOLYCURVE")
    points = curve.reference()
    curve.tokens(b",")
    rests = table.rests(curve, curves).without_blanks()
    first, number = rests.first_of_each()
    found = [_CURVE_END.fullmatch(rests.of(row)) for row in first.tolist()]
    plain = np.array([one is not None for one in found], dtype=bool)[number]
    texts = [b"" if one is None else one[1] for one in found]
    return np.flatnonzero(plain), points[plain], number[plain], texts


def _listed_points(table: StepTable, lists: Ints) -> _Lists:
    """The points of plain lists, by STEP ids."""
    cursors = table.cursors(lists, "IFCCARTESIANPOINTLIST3D")
    cursors.tokens(b"(", b"(")
    rests = table.rests(cursors, lists).without_blanks()
    plain, counts, begins, ends = _triples(rests)
    numbers, stop, sound = read_numbers(rests.data, begins)
    are_three = (sound & (stop == ends)).reshape(-1, 3).all(axis=1)
    kept = np.ones(len(plain), dtype=bool)
    kept[np.repeat(np.arange(len(plain)), counts)[~are_three]] = False
    points = numbers.reshape(-1, 3)
    return _Lists(plain[kept], points[np.repeat(kept, counts)], counts[kept])


def _triples(rests: Rests) -> tuple[Ints, Ints, Ints, Ints]:
    """Which lists of points are triples, ``1.,2.,3.),(4.,5.,6.)));``, after three brackets.

    Returns these, how many triples each has, and where their numbers begin and end.
    """
    data, first = rests.data, rests.first[:-1]
    signs = np.flatnonzero((data == OPEN) | (data == CLOSE) | (data == COMMA))
    bounds = np.searchsorted(signs, rests.first)
    held = np.searchsorted(signs, _before_ends(rests)) - bounds[:-1]
    row, within = spread(np.diff(bounds))
    place = (within + 1) % len(_TRIPLE)
    wrong = (data[signs] != _TRIPLE[place]) & (within < held[row])
    plain = held % len(_TRIPLE) == len(_TRIPLE) - 2
    plain[row[wrong]] = False
    ends = np.flatnonzero(plain[row] & (within < held[row]) & (place > 0) & (place < 4))
    begins = np.where(within[ends] == 0, first[row[ends]], signs[ends - 1] + 1)
    kept = np.flatnonzero(plain)
    return kept, (held[kept] + 2) // len(_TRIPLE), begins, signs[ends]


def _before_ends(rests: Rests) -> Ints:
    """Where the triples of lists end; where the lists begin for those that end otherwise."""
    first, stop = rests.first[:-1], rests.first[1:]
    found = first
    for end in _LIST_ENDS:
        ends = stop - first > len(end)
        for place, sign in enumerate(end):
            ends &= rests.data.take(stop - len(end) + place, mode="clip") == sign
        found = np.where(ends, stop - len(end), found)
    return found


def _order(segments: bytes, count: int) -> Order | None:
    """The order in which a curve takes its points; None where it is not plain."""
    if segments == b"$":
        return tuple(range(count)), ()
    if not _SEGMENTS.fullmatch(segments):
        return None
    order: list[int] = []
    arcs: list[int] = []
    for kind, text in _SEGMENT.findall(segments):
        indices = [int(index) - 1 for index in text.split(b",")]
        if order and order[-1] != indices[0]:
            return None
        if kind == b"ARC":
            if len(indices) != 3:
                return None
            arcs.append(max(len(order) - 1, 0))
        order.extend(indices[1:] if order else indices)
    if not 0 <= min(order) <= max(order) < count:
        return None
    return tuple(order), tuple(arcs)


def _in_order(points: Floats, begin: Ints, orders: Sequence[Order], number: Ints) -> PathTable:
    """Centre lines that take points in numbered orders; those of each begin at a place."""
    line, index = _laid_out([indices for indices, _ in orders], number)
    arc_line, arc = _laid_out([arcs for _, arcs in orders], number)
    first = offsets(np.bincount(line, minlength=len(number)))
    return PathTable(points[begin[line] + index], first, first[arc_line] + arc)


def _laid_out(runs: Sequence[tuple[int, ...]], number: Ints) -> tuple[Ints, Ints]:
    """The entries of numbered runs one after another, and which of ``number`` each is of."""
    counts = np.array([len(run) for run in runs], dtype=np.intp)
    entries = np.array([entry for run in runs for entry in run], dtype=np.intp)
    line, within = spread(counts[number])
    return line, entries[offsets(counts)[number[line]] + within]


def _on_earth(found: SweptSolids) -> SweptSolids:
    """Those of two points or more within reach; of the others the thorough reader tells."""
    points, first = found.paths.points, found.paths.first
    near = (np.abs(points) < FARTHEST).all(axis=1)
    count = np.diff(first)
    line = np.repeat(np.arange(len(count)), count)
    kept = (count >= 2) & (np.bincount(line[~near], minlength=len(count)) == 0)
    if kept.all():
        return found
    index = np.cumsum(kept[line]) - 1
    arc_kept = kept[line[found.paths.arcs]]
    paths = PathTable(points[kept[line]], offsets(count[kept]), index[found.paths.arcs[arc_kept]])
    return SweptSolids(found.place[kept], paths, found.diameter[kept])
