"""At which height runs of bars along a beam are taken: sloping ones in pieces."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import Pieces
from ifccheck.ifc.bar_samples import spread
from ifccheck.ifc.bars import ALONG, Runs, group
from ifccheck.ifc.beam_frames import BeamFrames

LEVEL = 2.0
"""A run rises by no more than this [mm] and is still level."""
RISE, MOST_PIECES = 10.0, 12
"""What a run rises by within a piece of one height [mm], and how many pieces it is cut into."""
STEEPEST = 1.0 / np.sqrt(10.0)
"""Sine of the slope (1 in 3) up to which a bar may follow a face of the beam."""
SIDEWAYS = np.sqrt(1.0 - ALONG**2)
"""Sine of the angle by which such a bar may lean across the beam."""
SAME_LAYER, SAME_END, SAME_SLOPE = 1.0, 5.0, 1e-3
"""Bars of one layer differ by no more than this in height, at their ends [mm], and in the part of
their strength along the axis."""


def leaning_with_tapers(frames: BeamFrames, beam: Ints, pieces: Pieces) -> Bools:
    """Whether pieces of bars slope as faces do, where their beams taper; beam of each piece (P)."""
    slope, aside = np.abs(pieces.direction[:, 2]), np.abs(pieces.direction[:, 1])
    leaning = pieces.straight & (slope <= STEEPEST) & (aside <= SIDEWAYS)
    leaning &= np.abs(pieces.direction[:, 0]) < ALONG
    at = np.flatnonzero(leaning)
    middle = (pieces.start[at, 0] + pieces.end[at, 0]) / 2.0
    leaning[at] = frames.tapers[frames.run_at(beam[at], middle)]
    return np.asarray(leaning)


@dataclass(frozen=True, slots=True)
class Levels:
    """Runs cut into pieces of one height each (L)."""

    runs: Runs
    of: Ints
    """The run that each is a piece of."""
    height: Floats
    """[mm]"""
    crosses: Bools
    """It passes the middle of the section and is not taken."""
    along: Floats
    """Part of the strength of each that acts along the axis."""


def in_levels(frames: BeamFrames, beam: Ints, runs: Runs) -> Levels:
    """Cut runs that are not level into pieces, each at its height nearest to the middle of the
    section, where it does least."""
    count = _pieces(runs)
    of, within = spread(count)
    pieces = _cut(runs, of, within, count[of])
    centre = np.clip((pieces.start + pieces.end) / 2.0, 0.0, frames.length[beam[of]])
    bounds = frames.bounds_at(beam[of], centre)
    height, crosses = _settle(pieces, (bounds[:, 2] + bounds[:, 3]) / 2.0)
    return Levels(pieces, of, height, crosses, _along_axis(runs)[of])


def _along_axis(runs: Runs) -> Floats:
    """Part of the strength along the axis: the cube of the cosine of the slope, one for the force
    and two for the strain, which is less along the bar than along the beam."""
    step = runs.line[:, 1] - runs.line[:, 0]
    cosine = step[:, 0] / np.maximum(np.sqrt((step**2).sum(axis=1)), 1e-9)
    return np.where(cosine >= ALONG, 1.0, cosine**3)


def _pieces(runs: Runs) -> Ints:
    """How many pieces of one height each run is cut into; a kinked one is left whole."""
    ends = runs.line[:, :, 2]
    rise = runs.highest - runs.lowest
    straight = rise - np.abs(ends[:, 1] - ends[:, 0]) <= LEVEL
    count = np.clip(np.ceil(rise / RISE), 1, MOST_PIECES)
    return np.where(straight & (rise > LEVEL), count, 1).astype(np.intp)


def _cut(runs: Runs, of: Ints, within: Ints, count: Ints) -> Runs:
    """The pieces of runs, by the number of each within its run."""
    whole = runs.take(of)
    drawn = _between_ends(whole)
    first, last = within == 0, within == count - 1
    step = (drawn[:, 1] - drawn[:, 0]) / count[:, None]
    line = drawn[:, :1] + step[:, None, :] * (within[:, None] + [0, 1])[:, :, None]
    start = np.where(first, whole.start, line[:, 0, 0])
    end = np.where(last, whole.end, line[:, 1, 0])
    single = count == 1
    before, after = line[:, 0, 0] - whole.start, whole.end - line[:, 1, 0]
    return replace(
        whole,
        start=start,
        end=end,
        lowest=np.where(single, whole.lowest, line[:, :, 2].min(axis=1)),
        highest=np.where(single, whole.highest, line[:, :, 2].max(axis=1)),
        line=line,
        start_beyond=whole.start_beyond + np.where(first, 0.0, before),
        end_beyond=whole.end_beyond + np.where(last, 0.0, after),
    )


def _between_ends(runs: Runs) -> Floats:
    """The straight lines of runs, of those that were shortened the part that is left (M, 2, 3)."""
    line = runs.line
    ends = np.stack([np.maximum(runs.start, line[:, 0, 0]), np.minimum(runs.end, line[:, 1, 0])], 1)
    part = (ends - line[:, :1, 0]) / np.maximum(line[:, 1:, 0] - line[:, :1, 0], 1e-9)
    return np.asarray(line[:, :1] + part[:, :, None] * (line[:, 1:] - line[:, :1]))


def _settle(runs: Runs, middle: Floats) -> tuple[Floats, Bools]:
    """The height that each run is taken at, and whether it passes the middle of the section."""
    level = runs.highest - runs.lowest <= LEVEL
    inner = np.where(runs.highest <= middle, runs.highest, runs.lowest)
    crosses = ~level & (runs.highest > middle) & (runs.lowest < middle)
    return np.where(level, (runs.highest + runs.lowest) / 2.0, inner), crosses


def equal_bars(labels: Ints, levels: Levels) -> tuple[Ints, Ints]:
    """Group pieces of one label that lie in one layer with equal ends.

    Returns the pieces in the order of groups, in each from right to left across the beam, and the
    place at which each group begins.
    """
    runs = levels.runs
    found = group(group(labels, levels.height, SAME_LAYER), levels.along, SAME_SLOPE)
    for ends in (runs.start, runs.end, runs.start_beyond, runs.end_beyond):
        found = group(found, ends, SAME_END)
    order = np.lexsort((runs.y, found))
    return order, np.flatnonzero(np.diff(found[order], prepend=-1))
