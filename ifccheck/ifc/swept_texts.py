"""The plainest swept bars read from the file's text at once: whole curves of lines and arcs."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.ifc.bar_courses import PARAMETER_TOLERANCE
from ifccheck.ifc.bar_paths import Bools, Floats, Ints, arc_frames
from ifccheck.ifc.bar_samples import PathTable, others
from ifccheck.ifc.bar_shapes import FARTHEST
from ifccheck.ifc.many_vectors import sizes
from ifccheck.ifc.step_table import StepTable
from ifccheck.ifc.swept_curves import Lines, indexed_curves, polylines


@dataclass(frozen=True, slots=True)
class SweptSolids:
    """Swept solids that were read (M)."""

    place: Ints
    """Which of the solids asked for each is."""
    paths: PathTable
    diameter: Floats
    """[mm]"""


@dataclass(frozen=True, slots=True)
class _Solids:
    """What plain solids say (N)."""

    place: Ints
    """Which of the solids asked for each is."""
    curve: Ints
    radius: Floats
    start: Floats
    """Parameters between which the curve is swept; nan for its own ends."""
    end: Floats


def read_swept_texts(table: StepTable, solids: Ints, scale: float) -> SweptSolids:
    """Read swept solids by their STEP ids.

    ``scale`` is in mm per unit of the model. Solids that are not written in the plainest way,
    that are swept over a part of their curve, or whose curves are of another kind, are left out.
    """
    asked = _solids(table, solids)
    lines = indexed_curves(table, asked.curve)
    left = others(len(asked.curve), lines.place)
    lines = lines.with_more(polylines(table, asked.curve[left]).numbered(left))
    whole = _whole(lines, asked.start[lines.place], asked.end[lines.place])
    row, paths = lines.place[whole], lines.paths.take(whole)
    paths = PathTable(paths.points * scale, paths.first, paths.arcs, paths.line)
    return _on_earth(SweptSolids(asked.place[row], paths, 2.0 * asked.radius[row] * scale))


def _solids(table: StepTable, solids: Ints) -> _Solids:
    solid = table.cursors(solids, "IFCSWEPTDISKSOLID")
    curve = solid.reference()
    solid.tokens(b",")
    radius = solid.number()
    solid.tokens(b",", b"$", b",")
    start = solid.number_or_nothing()
    solid.tokens(b",")
    end = solid.number_or_nothing()
    solid.tokens(b")", b";")
    kept = np.flatnonzero(solid.plain)
    return _Solids(kept, curve[kept], radius[kept], start[kept], end[kept])


def _whole(lines: Lines, start: Floats, end: Floats) -> Bools:
    """Whether parameters are the ends of curves, counted by pieces or by length.

    Where it is a matter of rounding whether a parameter is the length, it is left open.
    """
    begins: Bools = np.isnan(start) | (start == 0.0)
    if np.isnan(end).all():
        return begins
    pieces, length = lines.pieces[lines.paths.line], _lengths(lines.paths)[lines.paths.line]
    ends: Bools = np.isnan(end) | (np.abs(end - pieces) <= PARAMETER_TOLERANCE * pieces)
    ends |= np.abs(end - length) <= PARAMETER_TOLERANCE / 2.0 * length
    return np.asarray(begins & ends)


def _lengths(paths: PathTable) -> Floats:
    """Lengths along lines and arcs of each line, in their own unit."""
    steps = sizes(np.diff(paths.points, axis=0, append=0.0))
    steps[paths.first[1:] - 1] = 0.0
    if len(paths.arcs):
        _, across, _, half = arc_frames(paths.points, paths.arcs)
        for step in (0, 1):
            along = sizes(across) * half[:, step]
            steps[paths.arcs + step] = np.maximum(steps[paths.arcs + step], along)
    return np.asarray(np.add.reduceat(steps, paths.first[:-1]))


def _on_earth(found: SweptSolids) -> SweptSolids:
    """Those of two points or more within reach; of the others the thorough reader tells."""
    points, first = found.paths.points, found.paths.first
    far = np.flatnonzero(~(np.abs(points) < FARTHEST).all(axis=1))
    sound = np.diff(first) >= 2
    sound[np.searchsorted(first, far, side="right") - 1] = False
    kept = sound[found.paths.line]
    return SweptSolids(found.place[kept], found.paths.take(kept), found.diameter[kept])
