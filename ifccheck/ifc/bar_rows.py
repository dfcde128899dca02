"""Strands of bars, each looked at in the axes of one beam."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines, turned
from ifccheck.ifc.bar_samples import Samples, sample
from ifccheck.ifc.bar_table import BarTable
from ifccheck.ifc.beam_frames import BeamFrames
from ifccheck.ifc.couplers import Couplers
from ifccheck.ifc.equal_rows import first_of_each, first_of_each_number

ROTATION_STEPS, PLACE_STEPS = 1e7, 1e4
"""Steps per unit of a rotation and per mm within which strands are alike."""


@dataclass(frozen=True, slots=True)
class Rows:
    """Strands, each in one beam (R)."""

    strand: Ints
    beam: Ints

    def take(self, kept: Ints | Bools) -> Rows:
        """Some of the rows."""
        return Rows(self.strand[kept], self.beam[kept])


NO_ROWS = Rows(np.zeros(0, dtype=np.intp), np.zeros(0, dtype=np.intp))


class BarPlaces:
    """Places the strands of a table in the axes of beams."""

    def __init__(self, table: BarTable, frames: BeamFrames, couplers: Couplers) -> None:
        self.table = table
        self.frames = frames
        self._couplers = couplers
        self.guests: Rows = NO_ROWS
        """Strands that run on into a beam from another one that holds more of them."""
        self.samples: Samples = sample(table.paths)
        self.size: Ints = table.size[table.bar]
        self.grade: Ints = table.grade[table.bar]
        """Size and grade of each strand."""
        thick = np.array([size.diameter for size in table.sizes], dtype=float)
        self.diameter: Floats = thick[self.size]

    def are_guests(self, rows: Rows) -> Bools:
        """Whether each row is one of a guest."""
        beams = len(self.frames.ids)
        guests = self.guests.strand * beams + self.guests.beam
        return np.asarray(np.isin(rows.strand * beams + rows.beam, guests))

    def coupled(self, beam: Ints, places: Floats) -> Bools:
        """Whether a coupler stands at each place in the axes of a beam (N, 3)."""
        turned = np.einsum("nij,ni->nj", self.frames.rotation[beam], places)
        return self._couplers.at(self.frames.origin[beam] + turned)

    def label(self, strand: int) -> str:
        """What people call the bar of a strand."""
        return self.table.label(int(self.table.bar[strand]))

    def _turns(self, rows: Rows) -> tuple[Ints, Floats]:
        """Which rotation each strand has in the axes of its beam, and those rotations."""
        turn, rotations = self.table.turn[rows.strand], self.table.rotations
        first, number = first_of_each_number(rows.beam * len(rotations) + turn)
        return number, self.frames.rotation[rows.beam[first]] @ rotations[turn[first]]

    def _translations(self, rows: Rows) -> Floats:
        to_beam = self.frames.rotation[rows.beam]
        offset = self.table.translation[rows.strand] - self.frames.origin[rows.beam]
        return np.asarray(np.einsum("rij,rj->ri", to_beam, offset))

    def centre_lines(self, rows: Rows) -> CentreLines:
        """The centre lines of strands in the axes of their beams."""
        turn, rotations = self._turns(rows)
        _, same = first_of_each(*rotations.reshape(-1, 9).T.view(np.int64))
        shape, number = first_of_each_number(self._lines(rows.strand) * len(same) + same[turn])
        shapes = turned(self.samples, self._lines(rows.strand[shape]), rotations[turn[shape]])
        return shapes.placed(number, self._translations(rows), self.diameter[rows.strand])

    def alike(self, rows: Rows) -> tuple[Ints, Floats]:
        """Find strands that differ by their place along a prismatic beam alone.

        Returns for each row the row that stands for it, and how far beyond that it lies [mm].
        """
        turn, rotations = self._turns(rows)
        translation = self._translations(rows)
        _, rotation = first_of_each(*_in_steps(rotations.reshape(-1, 9).T * ROTATION_STEPS))
        prismatic = self.frames.prismatic()[rows.beam]
        own = np.where(prismatic, -1, np.arange(len(rows.beam)))
        place = _in_steps(translation[:, 1:].T * PLACE_STEPS)
        thick = _in_steps(self.diameter[rows.strand] * PLACE_STEPS)
        path = self.table.path[rows.strand]
        first, inverse = first_of_each(rows.beam, own, path, rotation[turn], *place, thick)
        stands_for = first[inverse]
        return stands_for, translation[:, 0] - translation[stands_for, 0]

    def world_lines(self, strands: Ints) -> CentreLines:
        """The centre lines of strands in the building."""
        shapes = turned(self.samples, self._lines(strands), self.table.rotation[strands])
        translation = self.table.translation[strands]
        return shapes.placed(np.arange(len(strands)), translation, self.diameter[strands])

    def _lines(self, strands: Ints) -> Ints:
        """Which line the centre line of each strand is."""
        return self.table.paths.line[self.table.path[strands]]


def _in_steps(values: Floats) -> npt.NDArray[np.int64]:
    return np.rint(values).astype(np.int64)
