"""Placements of many products worked out at once from the file's text.

Composed as ``Placements`` composes them, to the last bit; what is not written plainly goes its way.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ifccheck.ifc.bar_chains import read_points
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.entity import ILL_TYPED, UnreadableError
from ifccheck.ifc.placements import IDENTITY, Matrix, Placements, rigid
from ifccheck.ifc.step_table import StepTable

Ratios = tuple[float, ...]
_HALF = 32
"""Bits of one STEP id in a pair of them."""


@dataclass(frozen=True, slots=True)
class PlainPlacements:
    """Placements in the building by STEP id, sorted (N)."""

    ids: Ints
    found: Bools
    matrix: Floats
    """(N, 4, 4) [mm]"""

    def rows(self, ids: Ints) -> Ints:
        """Row of each placement by its STEP id, -1 where it is not known."""
        if not len(self.ids):
            return np.full(len(ids), -1)
        row = np.minimum(np.searchsorted(self.ids, ids), len(self.ids) - 1)
        return np.where((self.ids[row] == ids) & self.found[row], row, -1)


def read_placements(
    file: Any, placements: Placements, table: StepTable, ids: Ints
) -> PlainPlacements:
    """Work out object placements, with all those that they are placed in."""
    known, parent, position = _with_parents(table, ids)
    own = read_axes(table, position, placements.scale)
    plain = own.plain & (position > 0)
    matrix = np.concatenate((np.zeros((len(known), 4, 4)), IDENTITY[None]))
    found = np.append(np.zeros(len(known), dtype=bool), True)
    for row in np.flatnonzero(~plain).tolist():
        try:
            matrix[row] = placements.placement(file.by_id(int(known[row])))
            found[row] = True
        except (UnreadableError, *ILL_TYPED):
            continue  # the reader of each product says what is wrong with it
    above = np.where(parent > 0, np.searchsorted(known, parent), len(known))
    waiting = plain
    while (ready := np.flatnonzero(waiting & found[above])).size:
        outer = matrix[above[ready]]
        still = own.still[ready, None, None]
        matrix[ready] = np.where(still, outer, outer @ own.matrix[ready])
        found[ready], waiting[ready] = True, False
    return PlainPlacements(known, found[:-1], matrix[:-1])


def _with_parents(table: StepTable, ids: Ints) -> tuple[Ints, Ints, Ints]:
    """Placements and all that they are placed in, sorted: their STEP ids, their parents and their
    axes, 0 for none; those that are not plain have no axes."""
    asked, seen = np.unique(ids), np.zeros(0, dtype=np.intp)
    columns: list[Ints] = []
    while len(asked):
        local = table.cursors(asked, "IFCLOCALPLACEMENT")
        parent = local.reference_or_nothing()
        local.tokens(b",")
        position = local.reference()
        local.tokens(b")", b";")
        parent, position = (np.where(local.plain, one, 0) for one in (parent, position))
        columns.append(np.stack((asked, parent, position)))
        seen = np.union1d(seen, asked)
        asked = np.setdiff1d(parent[parent > 0], seen)
    known, parent, position = np.concatenate((np.zeros((3, 0), dtype=np.intp), *columns), axis=1)
    order = np.argsort(known)
    return known[order], parent[order], position[order]


@dataclass(frozen=True, slots=True)
class PlainAxes:
    """Axis placements in space (N)."""

    plain: Bools
    still: Bools
    """Whether each is the identity."""
    matrix: Floats


def read_axes(table: StepTable, ids: Ints, scale: float) -> PlainAxes:
    """Read axis placements by their STEP ids; 0 stands for the identity."""
    distinct, number = np.unique(ids, return_inverse=True)
    axes = table.cursors(distinct, "IFCAXIS2PLACEMENT3D")
    location = axes.reference()
    axes.tokens(b",")
    axis = axes.reference_or_nothing()
    axes.tokens(b",")
    reference = axes.reference_or_nothing()
    axes.tokens(b")", b";")
    turned, matrix = _rotations(table, axis, reference)
    placed, origin = read_points(table, np.where(axes.plain, location, 0))
    nothing = distinct == 0
    plain = nothing | (axes.plain & turned & placed & np.isfinite(origin.sum(axis=1)))
    still = nothing | ((axis == 0) & (reference == 0) & ~origin.any(axis=1))
    matrix[:, :3, 3] = origin * scale
    matrix[still] = IDENTITY
    return PlainAxes(plain[number], still[number], matrix[number])


def _rotations(table: StepTable, axis: Ints, reference: Ints) -> tuple[Bools, Floats]:
    """Rotations by the STEP ids of two directions, 0 for none, and which of them are sound."""
    pairs, number = np.unique((axis << _HALF) | reference, return_inverse=True)
    first, second = pairs >> _HALF, pairs & ((1 << _HALF) - 1)
    ratios: dict[int, Ratios | None] = {0: None, **read_directions(table, np.append(first, second))}
    known: dict[tuple[Ratios | None, Ratios | None], Matrix | None] = {}
    found, matrix = np.zeros(len(pairs), dtype=bool), np.zeros((len(pairs), 4, 4))
    for row, (one, other) in enumerate(zip(first.tolist(), second.tolist(), strict=True)):
        if one not in ratios or other not in ratios:
            continue
        key = ratios[one], ratios[other]
        if key not in known:
            known[key] = _rotation(*key)
        if (rotation := known[key]) is not None:
            found[row], matrix[row] = True, rotation
    return found[number], matrix[number]


def _rotation(axis: Ratios | None, reference: Ratios | None) -> Matrix | None:
    try:
        return rigid(axis, reference)
    except UnreadableError:
        return None


def read_directions(table: StepTable, ids: Ints) -> dict[int, Ratios]:
    """Read directions in space by their STEP ids: the ratios of those that are plain."""
    distinct = np.unique(ids)
    plain, ratios = read_points(table, distinct, "IFCDIRECTION")
    plain &= np.isfinite(ratios.sum(axis=1))
    return dict(zip(distinct[plain].tolist(), map(tuple, ratios[plain].tolist()), strict=True))
