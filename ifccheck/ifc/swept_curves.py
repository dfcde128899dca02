"""Curves that bars are swept along, read many at once from the file's text.

They take listed points in order, or run straight from point to point.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from ifccheck.ifc.bar_chains import read_points
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_samples import PathTable, offsets, spread
from ifccheck.ifc.equal_rows import first_of_each, renumbered
from ifccheck.ifc.step_cursors import read_numbers, read_whole_numbers
from ifccheck.ifc.step_table import Rests, StepTable

_TRIPLE = np.frombuffer(b"(,,),", np.uint8)
"""The structure of the triples of a list, a comma after each."""
_SEGMENTS = re.compile(rb"\((IFC(?:LINE|ARC)INDEX\(\([0-9,]+\)\),?)+\)")
_SEGMENT = re.compile(rb"IFC(LINE|ARC)INDEX\(\(([0-9,]+)\)\)")
_CURVE_END = re.compile(rb"(.*),(?:\.[FTU]\.|\$)\);", re.DOTALL)
_LIST_ENDS = (b"));", b"),$);")
"""How a list of points ends after its triples, in earlier schemas and with a list of tags."""
_REFERENCES_END = b"));"
"""How a list of references ends."""
HASH, OPEN, CLOSE, COMMA = b"#(),"


@dataclass(frozen=True, slots=True)
class Lines:
    """Centre lines of curves (C), of which some are the same line (D)."""

    place: Ints
    """Which of the curves asked for each is."""
    paths: PathTable
    """In units of the model."""
    pieces: Floats
    """How many pieces each line has: its last parameter, as the standard counts (D)."""

    def numbered(self, curves: Ints) -> Lines:
        """The same where some of several curves were asked for."""
        return Lines(curves[self.place], self.paths, self.pieces)

    def with_more(self, more: Lines) -> Lines:
        """These lines and more behind them."""
        if not len(more.place):
            return self
        return Lines(
            np.concatenate((self.place, more.place)),
            self.paths.with_more(more.paths),
            np.concatenate((self.pieces, more.pieces)),
        )


@dataclass(frozen=True, slots=True)
class _Lists:
    """Points that are listed (L), those of one list after those of another."""

    number: Ints
    """Which of the lists each of those asked for is; -1 where it is not plain."""
    points: Floats
    """In units of the model (N, 3)."""
    counts: Ints


class _Order(NamedTuple):
    """How a curve takes its points."""

    points: tuple[int, ...]
    """Their indices from 0, in order."""
    arcs: tuple[int, ...]
    """The places in that order at which arcs begin."""
    segments: int


def polylines(table: StepTable, curves: Ints) -> Lines:
    """Curves of straight lines from point to point, by their STEP ids."""
    curve = table.cursors(curves, "IFCPOLYLINE")
    curve.tokens(b"(")
    rests = table.rests(curve, curves).without_blanks()
    plain, counts, ids = _listed_references(rests)
    sound, points = read_points(table, ids)
    kept = np.ones(len(plain), dtype=bool)
    kept[np.repeat(np.arange(len(plain)), counts)[~sound]] = False
    points, counts = points[np.repeat(kept, counts)], counts[kept]
    first, line = offsets(counts), np.arange(len(counts))
    paths = PathTable(points, first, np.zeros(0, dtype=np.intp), line)
    return Lines(plain[kept], paths, counts.astype(float) - 1.0)


def _listed_references(rests: Rests) -> tuple[Ints, Ints, Ints]:
    """Which texts are lists of references, ``#1,#2));``, how many each has, and these."""
    data, stop = rests.data, np.maximum(rests.stop - len(_REFERENCES_END), rests.start)
    hashes = np.flatnonzero(data == HASH)
    first = np.searchsorted(hashes, rests.start)
    row, within = spread(np.searchsorted(hashes, stop) - first)
    begin = hashes[first[row] + within]
    number, end, whole = read_whole_numbers(data, begin + 1)
    before = np.append(0, end[:-1]).astype(np.intp)
    follows = (begin == before + 1) & (data[before] == COMMA)
    wrong = ~whole | ~np.where(within == 0, begin == rests.start[row], follows)
    counts = np.bincount(row, minlength=len(stop))
    last = np.cumsum(counts) - 1
    plain = (counts > 0) & _end_with(rests, _REFERENCES_END)
    plain &= np.append(end, 0)[last] == stop
    plain[row[wrong]] = False
    return np.flatnonzero(plain), counts[plain], number[plain[row]]


def indexed_curves(table: StepTable, curves: Ints) -> Lines:
    """Curves that take listed points in order, by their STEP ids."""
    place, lists, segments, texts = _segments(table, curves)
    listed = _listed_points(table, lists)
    plain = np.flatnonzero(listed.number >= 0)
    first, line = first_of_each(listed.number[plain], segments[plain])
    lists, segments = listed.number[plain[first]], segments[plain[first]]
    first, number = first_of_each(segments, listed.counts[lists])
    found = zip(segments[first].tolist(), listed.counts[lists[first]].tolist(), strict=True)
    orders = [_order(texts[segment], count) for segment, count in found]
    kept = np.array([order is not None for order in orders], dtype=bool)[number]
    used, number = renumbered(number[kept], len(orders))
    taken = [order for order in (orders[one] for one in used.tolist()) if order is not None]
    begin = offsets(listed.counts)[lists[kept]]
    pieces = np.array([order.segments for order in taken], dtype=float)[number]
    of_kept = kept[line]
    line = (np.cumsum(kept) - 1)[line[of_kept]]
    return Lines(
        place[plain[of_kept]], _in_order(listed.points, begin, taken, number, line), pieces
    )


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
    first, number = rests.first_of_each()
    plain, counts, begins, ends = _triples(rests.take(first))
    numbers, stop, sound = read_numbers(rests.data, begins)
    are_three = (sound & (stop == ends)).reshape(-1, 3).all(axis=1)
    kept = np.ones(len(plain), dtype=bool)
    kept[np.repeat(np.arange(len(plain)), counts)[~are_three]] = False
    points = numbers.reshape(-1, 3)[np.repeat(kept, counts)]
    place = np.full(len(first), -1)
    place[plain[kept]] = np.arange(int(kept.sum()))
    return _Lists(place[number], points, counts[kept])


def _triples(rests: Rests) -> tuple[Ints, Ints, Ints, Ints]:
    """Which lists of points are triples, ``1.,2.,3.),(4.,5.,6.)));``, after three brackets.

    Returns these, how many triples each has, and where their numbers begin and end.
    """
    data = rests.data
    signs = np.flatnonzero((data == OPEN) | (data == CLOSE) | (data == COMMA))
    first = np.searchsorted(signs, rests.start)
    held = np.searchsorted(signs, _before_ends(rests)) - first
    row, within = spread(held)
    sign, place = first[row] + within, (within + 1) % len(_TRIPLE)
    plain = held % len(_TRIPLE) == len(_TRIPLE) - 2
    plain[row[data[signs[sign]] != _TRIPLE[place]]] = False
    end = np.flatnonzero(plain[row] & (place > 0) & (place < 4))
    begins = np.where(within[end] == 0, rests.start[row[end]], signs[sign[end] - 1] + 1)
    kept = np.flatnonzero(plain)
    return kept, (held[kept] + 2) // len(_TRIPLE), begins, signs[sign[end]]


def _before_ends(rests: Rests) -> Ints:
    """Where the triples of lists end; where the lists begin for those that end otherwise."""
    found = rests.start
    for end in _LIST_ENDS:
        found = np.where(_end_with(rests, end), rests.stop - len(end), found)
    return found


def _end_with(rests: Rests, end: bytes) -> Bools:
    """Whether texts end in some way and hold more than that."""
    found = rests.stop - rests.start > len(end)
    for place, sign in enumerate(end):
        found &= rests.data.take(rests.stop - len(end) + place, mode="clip") == sign
    return found


def _order(segments: bytes, count: int) -> _Order | None:
    """The order in which a curve takes its points; None where it is not plain."""
    if segments == b"$":
        return _Order(tuple(range(count)), (), count - 1)
    if not _SEGMENTS.fullmatch(segments):
        return None
    order: list[int] = []
    arcs: list[int] = []
    found = _SEGMENT.findall(segments)
    for kind, text in found:
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
    return _Order(tuple(order), tuple(arcs), len(found))


def _in_order(
    points: Floats, begin: Ints, orders: Sequence[_Order], number: Ints, lines: Ints
) -> PathTable:
    """Lines that take points in numbered orders; those of each begin at a place. ``lines`` are
    those that the centre lines are."""
    line, index = _laid_out([order.points for order in orders], number)
    arc_line, arc = _laid_out([order.arcs for order in orders], number)
    first = offsets(np.bincount(line, minlength=len(number)))
    return PathTable(points[begin[line] + index], first, first[arc_line] + arc, lines)


def _laid_out(runs: Sequence[tuple[int, ...]], number: Ints) -> tuple[Ints, Ints]:
    """The entries of numbered runs one after another, and which of ``number`` each is of."""
    counts = np.array([len(run) for run in runs], dtype=np.intp)
    entries = np.array([entry for run in runs for entry in run], dtype=np.intp)
    line, within = spread(counts[number])
    return line, entries[offsets(counts)[number[line]] + within]
