"""How strands lie in beams: how much of each, and whether as a stirrup or along the beam."""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines, Pieces, count_by_row, cut_into_pieces
from ifccheck.ifc.bar_rows import BarPlaces, Rows
from ifccheck.ifc.beam_frames import BeamFrames, part_inside
from ifccheck.ifc.many_vectors import sizes
from ifccheck.ifc.outline_points import inside_outlines
from ifccheck.ifc.stirrup_sets import HOOKED_MEETING, is_closed, lies_square, upright_legs

INSIDE_TOLERANCE = 5.0
"""A bar may lie outside the box of its beam by this [mm] and still lie in it."""
SAMPLES = 48
"""Places along a bar at which it is asked whether it lies in a section that is no rectangle."""


@dataclass(frozen=True, slots=True)
class Held:
    """How each strand lies in the beam of its row (R)."""

    length: Floats
    """Of the strand [mm]."""
    share: Floats
    """Part of its length that lies in the beam."""
    along: Floats
    """How far that runs along it [mm]."""
    in_line: Floats
    """Part of its length within the box round the sections, prolonged beyond both ends."""
    square: Bools
    closed: Bools
    tie: Bools
    """It has a leg."""

    def take(self, kept: Ints) -> Held:
        """Some of the rows."""
        return Held(*(getattr(self, one.name)[kept] for one in fields(self)))


def held_in(places: BarPlaces, rows: Rows) -> Held:
    """Measure how strands lie in beams."""
    lines = places.centre_lines(rows)
    pieces = cut_into_pieces(lines)
    count = len(rows.strand)
    total = _sum(pieces, pieces.length, count)
    inside = _inside(places.frames, rows, pieces)
    share = _sum(pieces, inside, count) / np.maximum(total, 1e-9)
    along = _sum(pieces, inside * np.abs(pieces.direction[:, 0]), count)
    in_line = _sum(pieces, _inside(places.frames, rows, pieces, True), count)
    shaped = _of_shapes(places, rows, share)
    along = along * np.divide(shaped, share, out=np.ones(count), where=share > 0.0)
    closed, square, tie = _kinds(lines, pieces)
    return Held(total, shaped, along, in_line / np.maximum(total, 1e-9), square, closed, tie)


def _sum(pieces: Pieces, lengths: Floats, count: int) -> Floats:
    """Lengths of pieces, summed for each strand [mm]."""
    return np.asarray(np.bincount(pieces.row, lengths, count), dtype=float)


def _kinds(lines: CentreLines, pieces: Pieces) -> tuple[Bools, Bools, Bools]:
    """Whether each strand ends where it begins, lies square to the beam, and has a leg."""
    if not lines.count:
        nothing = np.zeros(0, dtype=bool)
        return nothing, nothing, nothing
    upright = upright_legs(pieces, is_closed(lines, pieces), lines.diameter)
    legs = count_by_row(pieces.row, upright, lines.count)
    between = lines.points[lines.first[:-1]] - lines.points[lines.first[1:] - 1]
    closed: Bools = sizes(between) <= HOOKED_MEETING * lines.diameter
    return closed, lies_square(lines), legs > 0


def _inside(frames: BeamFrames, rows: Rows, pieces: Pieces, endless: bool = False) -> Floats:
    """Length of each piece in the box of its beam, or in that box prolonged beyond its ends."""
    low, high = frames.boxes()
    if endless:
        low[:, 0], high[:, 0] = -np.inf, np.inf
    beam = rows.beam[pieces.row]
    enter, leave = part_inside(
        pieces.start, pieces.end, low[beam] - INSIDE_TOLERANCE, high[beam] + INSIDE_TOLERANCE
    )
    return np.asarray((leave - enter) * pieces.length)


def _of_shapes(places: BarPlaces, rows: Rows, share: Floats) -> Floats:
    """Part of each strand in its beam, where the beam does not fill its box by samples."""
    looked = np.flatnonzero(~places.frames.plain()[rows.beam] & (share > 0.0))
    if not len(looked):
        return share
    found = share.copy()
    found[looked] = np.minimum(
        share[looked], sampled_inside(places, rows.take(looked)).mean(axis=1)
    )
    return found


def sampled_inside(places: BarPlaces, rows: Rows) -> Bools:
    """Whether places evenly along each strand lie in its beam (R, SAMPLES); the places are the
    same in every beam that a strand is looked at in."""
    count = len(rows.strand)
    if not count:
        return np.zeros((0, SAMPLES), dtype=bool)
    points = _evenly(cut_into_pieces(places.centre_lines(rows)), count)
    beam = np.repeat(rows.beam, SAMPLES)
    low, high = places.frames.boxes()
    slack = INSIDE_TOLERANCE
    within = (points >= low[beam] - slack) & (points <= high[beam] + slack)
    inside: Bools = np.asarray(within.all(axis=1))
    at = np.flatnonzero(inside & ~places.frames.plain()[beam])
    stretch = places.frames.run_at(beam[at], points[at, 0])
    inside[at] = inside_outlines(places.frames, stretch, points[at])
    return inside.reshape(count, SAMPLES)


def _evenly(pieces: Pieces, count: int) -> Floats:
    """Points evenly along bars by their length (count * SAMPLES, 3)."""
    total = np.bincount(pieces.row, pieces.length, count)
    before = np.cumsum(total) - total
    part = (np.arange(SAMPLES) + 0.5) / SAMPLES
    at = (before[:, None] + part * total[:, None]).reshape(-1)
    reached = np.cumsum(pieces.length)
    piece = np.minimum(np.searchsorted(reached, at, side="right"), len(reached) - 1)
    back = (reached[piece] - at)[:, None]
    return np.asarray(pieces.end[piece] - back * pieces.direction[piece])


def overlapping(places: BarPlaces, strands: Ints) -> Rows:
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
