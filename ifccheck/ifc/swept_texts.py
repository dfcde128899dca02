"""The plainest swept bars read from the file's text at once: whole curves of lines and arcs."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from functools import lru_cache

import numpy as np

from ifccheck.ifc.bar_paths import Ints, Path
from ifccheck.ifc.step_table import StepTable, read_floats

_HEAD = rb"#\d+\s?=\s?"
_SOLID = re.compile(_HEAD + rb"IFCSWEPTDISKSOLID\(#(\d+),([0-9.E+-]+),\$,\$,\$\);")
_CURVE = re.compile(_HEAD + rb"IFCINDEXEDPOLYCURVE\(#(\d+),([^;]*),(?:\.[FTU]\.|\$)\);")
_POINTS = re.compile(_HEAD + rb"IFCCARTESIANPOINTLIST3D\(\(\(([0-9.,()E+-]*)\)\)(?:,\$)?\);")
_SEGMENTS = re.compile(rb"\((IFC(?:LINE|ARC)INDEX\(\([0-9,]+\)\),?)+\)")
_SEGMENT = re.compile(rb"IFC(LINE|ARC)INDEX\(\(([0-9,]+)\)\)")

Order = tuple[tuple[int, ...], tuple[int, ...]]
"""Indices of points in order from 0, and the places in that order at which arcs begin."""


def read_swept_texts(
    table: StepTable, solids: Ints, scale: float
) -> Iterator[tuple[int, Path, float]]:
    """Read swept solids by their STEP ids: id, centre line and diameter [mm].

    ``scale`` is in mm per unit of the model. Solids that are not written in the plainest way, or
    whose curves are of another kind, are left out.
    """
    ids, radii, curves = _followed(table, solids, _SOLID)
    kept, segments, lists = _followed(table, curves, _CURVE)
    points_kept, texts, _ = _followed(table, lists, _POINTS)
    coordinates = _coordinates(texts)
    for place, points in zip(points_kept.tolist(), coordinates, strict=True):
        solid = int(kept[place])
        order = _order(segments[place], len(points) // 3)
        if order is not None and points:
            indices, arcs = order
            x, y, z = (points[axis::3] for axis in range(3))
            line = tuple((x[i] * scale, y[i] * scale, z[i] * scale) for i in indices)
            yield int(solids[ids[solid]]), Path(line, arcs), 2.0 * float(radii[solid]) * scale


def _followed(
    table: StepTable, ids: Ints, pattern: re.Pattern[bytes]
) -> tuple[Ints, list[bytes], Ints]:
    """Statements that a pattern matches: their places among ``ids``, the text that it finds last,
    and the reference that it finds first."""
    found = [pattern.fullmatch(text) for text in table.texts(table.rows(ids))]
    places = [place for place, match in enumerate(found) if match is not None]
    matches = [match for match in found if match is not None]
    references = [int(match[1]) if match.re.groups > 1 else 0 for match in matches]
    texts = [match[match.re.groups] for match in matches]
    return np.array(places, dtype=np.intp), texts, np.array(references, dtype=np.intp)


def _coordinates(texts: Sequence[bytes]) -> list[list[float]]:
    """Numbers of lists of points, ``1.,2.,3.),(4.,5.,6.``; none where they are no triples."""
    plain = [text.replace(b"),(", b",") for text in texts]
    counts = [text.count(b",") + 1 for text in plain]
    triples = [
        count == 3 * (text.count(b"),(") + 1) for count, text in zip(counts, texts, strict=True)
    ]
    if not texts or not all(triples):
        return [[] for _ in texts]
    numbers = read_floats(b",".join(plain).split(b","))
    if np.isnan(numbers).any():
        return [[] for _ in texts]
    ends = np.cumsum(counts).tolist()
    listed = numbers.tolist()
    return [listed[end - count : end] for end, count in zip(ends, counts, strict=True)]


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
