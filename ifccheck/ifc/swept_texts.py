"""The plainest swept bars read from the file's text at once: whole curves of lines and arcs."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_samples import PathTable, offsets, spread
from ifccheck.ifc.bar_shapes import FARTHEST
from ifccheck.ifc.step_cursors import read_numbers
from ifccheck.ifc.step_table import StepTable

BLANKS = b" \t\r\n"
_NOT_STRUCTURE = bytes(byte for byte in range(256) if byte not in b"(),")
_SEGMENTS = re.compile(rb"\((IFC(?:LINE|ARC)INDEX\(\([0-9,]+\)\),?)+\)")
_SEGMENT = re.compile(rb"IFC(LINE|ARC)INDEX\(\(([0-9,]+)\)\)")
_CURVE_END = re.compile(rb"(.*),(?:\.[FTU]\.|\$)\);", re.DOTALL)
_LIST_ENDS = (b")));", b")),$);")
"""How a list of points ends, in earlier schemas and with a list of tags."""

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


def read_swept_texts(table: StepTable, solids: Ints, scale: float) -> SweptSolids:
    """Read swept solids by their STEP ids.

    ``scale`` is in mm per unit of the model. Solids that are not written in the plainest way, or
    whose curves are of another kind, are left out.
    """
    place, curves, radius = _solids(table, solids)
    kept, lists, segments = _curves(table, curves)
    listed, points, counts = _points(table, lists)
    kept = kept[listed]
    orders = [
        _order(segments[at], count)
        for at, count in zip(listed.tolist(), counts.tolist(), strict=True)
    ]
    ordered = np.array([order is not None for order in orders], dtype=bool)
    paths = _in_order(points * scale, offsets(counts)[:-1][ordered], [o for o in orders if o])
    found = kept[ordered]
    return _on_earth(SweptSolids(place[found], paths, 2.0 * radius[found] * scale))


def _solids(table: StepTable, solids: Ints) -> tuple[Ints, Ints, Floats]:
    """Of the plain solids: which they are, their curves and their radii."""
    solid = table.cursors(solids, "IFCSWEPTDISKSOLID")
    curve = solid.reference()
    solid.tokens(b",")
    radius = solid.number()
    solid.tokens(b",", b"$", b",", b"$", b",", b"$", b")", b";")
    return np.flatnonzero(solid.plain), curve[solid.plain], radius[solid.plain]


def _curves(table: StepTable, curves: Ints) -> tuple[Ints, Ints, list[bytes]]:
    """Of the plain curves: which they are, their lists of points and their segments."""
    curve = table.cursors(curves, "IFCINDEXEDPOLYCURVE")
    points = curve.reference()
    curve.tokens(b",")
    segments = [_segments(rest) for rest in table.rest(curve, curves)]
    plain = np.array([text is not None for text in segments], dtype=bool)
    return np.flatnonzero(plain), points[plain], [text for text in segments if text is not None]


@lru_cache(maxsize=4096)
def _segments(rest: bytes) -> bytes | None:
    """The segments of a curve, from the rest of its statement; None where it is not plain."""
    found = _CURVE_END.fullmatch(rest.translate(None, BLANKS))
    return None if found is None else found[1]


def _points(table: StepTable, lists: Ints) -> tuple[Ints, Floats, Ints]:
    """Of the plain lists: which they are, all their points (N, 3) and the number of each."""
    cursors = table.cursors(lists, "IFCCARTESIANPOINTLIST3D")
    cursors.tokens(b"(", b"(")
    texts = [_triples(rest) for rest in table.rest(cursors, lists)]
    found = [place for place, text in enumerate(texts) if text]
    joined = b"".join(texts[place] for place in found)
    if not found:
        return np.zeros(0, dtype=np.intp), np.zeros((0, 3)), np.zeros(0, dtype=np.intp)
    points, sound = _all_numbers(joined)
    counts = np.array([texts[place].count(b"(") for place in found], dtype=np.intp)
    kept = np.logical_and.reduceat(sound, offsets(counts)[:-1])
    points = points[np.repeat(kept, counts)]
    return np.array(found, dtype=np.intp)[kept], points, counts[kept]


def _triples(rest: bytes) -> bytes:
    """The triples of a list of points, ``(1.,2.,3.),(4.,5.,6.),``, from its second bracket on;
    empty where it holds anything else."""
    text = rest.translate(None, BLANKS)
    end = next((end for end in _LIST_ENDS if text.endswith(end)), None)
    if end is None:
        return b""
    body = b"(" + text[: -len(end)] + b"),"
    structure = body.translate(None, _NOT_STRUCTURE)
    return body if structure == b"(,,)," * (len(structure) // 5) else b""


def _all_numbers(triples: bytes) -> tuple[Floats, Bools]:
    """The numbers of triples (N, 3), and which of these are three numbers."""
    data = np.frombuffer(triples, np.uint8)
    opens, commas = (data == sign for sign in b"(,")
    goes_on = np.append(~opens[1:], False)
    begins = np.flatnonzero(opens | (commas & goes_on)) + 1
    numbers, stop, sound = read_numbers(data, begins)
    ends = data.take(stop, mode="clip")
    sound &= (ends == ord(",")) | (ends == ord(")"))
    are_three: Bools = np.asarray(sound.reshape(-1, 3).all(axis=1))
    return numbers.reshape(-1, 3), are_three


@lru_cache(maxsize=4096)
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


def _in_order(points: Floats, begin: Ints, orders: Sequence[Order]) -> PathTable:
    """Centre lines that take points in order; those of each begin at a place."""
    numbers: dict[Order, int] = {}
    number = np.array([numbers.setdefault(order, len(numbers)) for order in orders], dtype=np.intp)
    line, index = _laid_out([indices for indices, _ in numbers], number)
    arc_line, arc = _laid_out([arcs for _, arcs in numbers], number)
    first = offsets(np.bincount(line, minlength=len(orders)))
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
