"""Which strand is looked at in which beam: by relations, and by place where they leave it open."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.bar_hosts import BarHosts, Tie
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines, cut_into_pieces, place
from ifccheck.ifc.bar_samples import Samples, offsets, sample, spread
from ifccheck.ifc.bar_table import BarTable
from ifccheck.ifc.beam_frames import BeamFrames, part_inside
from ifccheck.ifc.equal_rows import first_of_each, first_of_each_number

INSIDE_TOLERANCE = 5.0
"""A bar may lie outside the box of its beam by this [mm] and still lie in it."""
INSIDE_SHARE = 0.5
"""Part of its length from which on a bar lies in a beam."""
NOTICED_RUN, NOTICED_LENGTH = 20.0, 300.0
"""A bar that no relation ties is noticed in a beam from this many diameters and this length [mm]
along it, however far it goes on."""


MOST_TOLD = 8
"""A bar that lies in none of the beams of its assembly is told to no more beams than this."""
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


@dataclass(frozen=True, slots=True)
class Found:
    """Strands by beam."""

    tied: Rows
    """Bars of the beam."""
    astray: Rows
    """Beside the beam in its assembly, but in none of the beams there."""
    loose: Rows
    """In the beam, but tied to nothing."""


class BarPlaces:
    """Places the strands of a table in the axes of beams."""

    def __init__(self, table: BarTable, frames: BeamFrames) -> None:
        self.table = table
        self.frames = frames
        self.samples: Samples = sample(table.paths)
        self.size: Ints = table.size[table.bar]
        self.grade: Ints = table.grade[table.bar]
        """Size and grade of each strand."""
        thick = np.array([size.diameter for size in table.sizes], dtype=float)
        self.diameter: Floats = thick[self.size]

    def label(self, strand: int) -> str:
        """What people call the bar of a strand."""
        return self.table.label(int(self.table.bar[strand]))

    def motions(self, rows: Rows) -> tuple[Floats, Floats]:
        """Rotations (R, 3, 3) and translations (R, 3) of strands into the axes of their beams."""
        turn, rotations = self._turns(rows)
        return rotations[turn], self._translations(rows)

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
        path, diameter = self.table.path[rows.strand], self.diameter[rows.strand]
        return place(self.samples, path, *self.motions(rows), diameter)

    def alike(self, rows: Rows) -> tuple[Ints, Floats]:
        """Find strands that differ by their place along a prismatic beam alone.

        Returns for each row the row that stands for it, and how far beyond that it lies [mm].
        """
        turn, rotations = self._turns(rows)
        translation = self._translations(rows)
        _, rotation = first_of_each(_in_steps(*(rotations.reshape(-1, 9).T * ROTATION_STEPS)))
        prismatic = self.frames.prismatic()[rows.beam]
        own = np.where(prismatic, -1, np.arange(len(rows.beam)))
        place = _in_steps(
            *(translation[:, 1:].T * PLACE_STEPS), self.diameter[rows.strand] * PLACE_STEPS
        )
        path = self.table.path[rows.strand]
        key = np.column_stack((rows.beam, own, path, rotation[turn], place))
        first, inverse = first_of_each(key)
        stands_for = first[inverse]
        return stands_for, translation[:, 0] - translation[stands_for, 0]

    def world_lines(self, strands: Ints) -> CentreLines:
        """The centre lines of strands in the building."""
        return place(
            self.samples,
            self.table.path[strands],
            self.table.rotation[strands],
            self.table.translation[strands],
            self.diameter[strands],
        )


def _in_steps(*columns: Floats) -> npt.NDArray[np.int64]:
    """Columns rounded to whole numbers, side by side."""
    return np.column_stack([np.rint(column).astype(np.int64) for column in columns])


def find_rows(places: BarPlaces, hosts: BarHosts) -> Found:
    """Find the beams of all strands; ``hosts`` of the bars of the table."""
    hosts = hosts.take(places.table.bar)
    tied = _candidates(places, hosts, "part")
    beside, astray = _beside(places, hosts)
    strand, beam = (
        np.concatenate(pair) for pair in ((tied.strand, beside.strand), (tied.beam, beside.beam))
    )
    return Found(Rows(strand, beam), astray, _noticed(places, hosts))


def _candidates(places: BarPlaces, hosts: BarHosts, tie: Tie, most: int | None = None) -> Rows:
    """Strands of one tie with each of their beams, those with more than ``most`` left out."""
    index = places.frames.index()
    count = np.array([len(host.beams) for host in hosts.hosts], dtype=np.intp)
    beams = np.array([index[beam] for host in hosts.hosts for beam in host.beams], dtype=np.intp)
    chosen = np.flatnonzero(hosts.tied(tie))
    if most is not None:
        chosen = chosen[count[hosts.number[chosen]] <= most]
    host = hosts.number[chosen]
    row, within = spread(count[host])
    return Rows(chosen[row], beams[offsets(count)[host[row]] + within])


def _beside(places: BarPlaces, hosts: BarHosts) -> tuple[Rows, Rows]:
    """Of the beams beside each strand the one that holds most of it, and strands in none.

    Where an assembly holds many beams, a strand in none of them is nothing to tell each of them.
    """
    strands = np.flatnonzero(hosts.tied("beside"))
    if not len(strands):
        return NO_ROWS, NO_ROWS
    index = places.frames.index()
    near = _overlapping(places, strands)
    own = [
        beam in {index[one] for one in hosts.of(strand).beams}
        for strand, beam in zip(near.strand.tolist(), near.beam.tolist(), strict=True)
    ]
    held = _fullest(places, near.take(np.array(own, dtype=bool)))
    listed = _candidates(places, hosts, "beside", MOST_TOLD)
    return held, listed.take(~np.isin(listed.strand, held.strand))


def _inside(places: BarPlaces, rows: Rows) -> tuple[Floats, Floats]:
    """Part of each row's length that lies in its beam, and how far that runs along it [mm]."""
    if not len(rows.strand):
        return np.zeros(0), np.zeros(0)
    pieces = cut_into_pieces(places.centre_lines(rows))
    low, high = places.frames.boxes()
    beam = rows.beam[pieces.row]
    enter, leave = part_inside(
        pieces.start, pieces.end, low[beam] - INSIDE_TOLERANCE, high[beam] + INSIDE_TOLERANCE
    )
    inside = (leave - enter) * pieces.length
    count = len(rows.strand)
    total = np.bincount(pieces.row, pieces.length, count)
    along = np.bincount(pieces.row, inside * np.abs(pieces.direction[:, 0]), count)
    held = np.bincount(pieces.row, inside, count)
    return np.asarray(held / np.maximum(total, 1e-9)), np.asarray(along, dtype=float)


def _fullest(places: BarPlaces, rows: Rows) -> Rows:
    """For each strand the beam that holds most of it, where one holds half of it."""
    share, _ = _inside(places, rows)
    order = np.lexsort((rows.beam, -share, rows.strand))
    best = np.ones(len(order), dtype=bool)
    best[1:] = np.diff(rows.strand[order]) != 0
    first = order[best]
    return rows.take(first[share[first] >= INSIDE_SHARE])


def _noticed(places: BarPlaces, hosts: BarHosts) -> Rows:
    strands = np.flatnonzero(hosts.tied("loose"))
    if not len(strands):
        return NO_ROWS
    rows = _overlapping(places, strands)
    share, along = _inside(places, rows)
    least = np.maximum(NOTICED_RUN * places.diameter[rows.strand], NOTICED_LENGTH)
    return rows.take((share >= INSIDE_SHARE) | (along >= least))


def _overlapping(places: BarPlaces, strands: Ints) -> Rows:
    """Pairs of strands and beams whose upright boxes in the building overlap."""
    lines = places.world_lines(strands)
    order = np.argsort(lines.lowest()[:, 0], kind="stable")
    low, high = lines.lowest()[order], lines.highest()[order]
    longest = float((high[:, 0] - low[:, 0]).max())
    beam_low, beam_high = _upright_boxes(places.frames)
    begin = np.searchsorted(low[:, 0], beam_low[:, 0] - longest)
    stop = np.searchsorted(low[:, 0], beam_high[:, 0], side="right")
    found: list[Ints] = []
    for beam, (first, last) in enumerate(zip(begin.tolist(), stop.tolist(), strict=True)):
        near = (low[first:last] <= beam_high[beam]) & (high[first:last] >= beam_low[beam])
        hit = order[first + np.flatnonzero(near.all(axis=1))]
        found.append(np.stack([strands[hit], np.full(len(hit), beam)], axis=1))
    pairs = np.concatenate(found).astype(np.intp) if found else np.zeros((0, 2), dtype=np.intp)
    return Rows(pairs[:, 0], pairs[:, 1])


def _upright_boxes(frames: BeamFrames) -> tuple[Floats, Floats]:
    low, high = frames.boxes()
    middle, half = (low + high) / 2.0, (high - low) / 2.0 + INSIDE_TOLERANCE
    centre = frames.origin + np.einsum("bij,bi->bj", frames.rotation, middle)
    reach = np.einsum("bij,bi->bj", np.abs(frames.rotation), half)
    return centre - reach, centre + reach
