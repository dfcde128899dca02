"""Longitudinal bars: straight runs along the beam, and how their ends are anchored."""

from __future__ import annotations

import math
from dataclasses import dataclass, fields

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines, Pieces
from ifccheck.ifc.many_vectors import dots

ALONG = math.cos(math.radians(2.0))
"""Cosine of the angle to the axis within which a piece runs along the beam."""
LEAST_RUN = 20.0
"""A run along the beam is longer than this many diameters."""
SQUARE_TURN = math.cos(math.radians(88.0))
"""Cosine of the turn from which on a bend counts as one of 90 degrees."""
FULL_TURN = math.cos(math.radians(177.0))
"""Cosine of the turn from which on a bend counts as one of 180 degrees."""
SQUARE_HOOK_TAIL = 12.0
"""Straight extension of a standard 90 degree hook in diameters (CSA A23.1, from memory)."""
FULL_HOOK_TAIL, FULL_HOOK_LEAST = 4.0, 60.0
"""Straight extension of a standard 180 degree hook: 4 diameters, at least 60 mm (the same)."""
TAIL_TOLERANCE = 0.99
"""Part of a standard extension that passes for the whole: rounding of models."""
WIDEST_HOOK = 8.0
"""A hook stands beyond its run by no more than this many diameters: the bend of a standard one has
a radius of 3.5 to 5.9 (CSA A23.1, from memory), and round a wider one a bar leaves its height."""
LONGEST_CHORD = 6.0
"""A piece of a bend that is modelled by chords is no longer than this many diameters."""
BEND_DIAMETERS, BEND_RADII = (26.0, 36.0), (3.6, 4.7, 5.9)
"""Radius of the centre line of a least bend, in diameters, up to each diameter [mm]
(CSA A23.1, grade 400R, from memory): what a corner drawn sharp takes from a tail."""


@dataclass(frozen=True, slots=True)
class Runs:
    """Runs of bars along the beam (M)."""

    row: Ints
    """Bar that each is a run of."""
    start: Floats
    """x of the less end [mm]: the outside of a hook, else the end of the straight run."""
    end: Floats
    y: Floats
    lowest: Floats
    """Least height of the centre line above the soffit [mm]."""
    highest: Floats
    start_hook: Bools
    end_hook: Bools
    poor_bend: Bools
    """The bar goes on round a bend at either end, short of a standard hook."""
    line: Floats
    """Where the straight run begins and ends, in order of x [mm] (M, 2, 3)."""
    start_beyond: Floats
    """Length of the bar beyond its start where it goes on bent, by less than a square [mm]."""
    end_beyond: Floats

    def take(self, kept: Ints) -> Runs:
        """Some of the runs; they may repeat."""
        return Runs(*(getattr(self, one.name)[kept] for one in fields(self)))


def find_runs(lines: CentreLines, pieces: Pieces, leaning: Bools) -> Runs:
    """Find the runs along the beam: pieces within 2 degrees of the axis, and those ``leaning`` with
    it (P), 20 diameters long."""
    level = pieces.straight & (np.abs(pieces.direction[:, 0]) >= ALONG)
    along = level | leaning
    before = pieces.neighbour(-1)
    follows = along & (before >= 0) & along[before]
    follows &= pieces.direction[:, 0] * pieces.direction[before, 0] > 0.0
    turn = dots(pieces.direction, pieces.direction[before]) if len(before) else np.zeros(0)
    follows &= (level & level[before]) | (turn >= ALONG)
    joined = pieces.merged(~follows)
    first = np.flatnonzero(~follows)
    heights = np.stack([pieces.start[:, 2], pieces.end[:, 2]])
    lowest = np.minimum.reduceat(heights.min(axis=0), first) if first.size else np.zeros(0)
    highest = np.maximum.reduceat(heights.max(axis=0), first) if first.size else np.zeros(0)
    run = np.flatnonzero(along[first] & (joined.length > LEAST_RUN * lines.diameter[joined.row]))
    return _ended(joined, run, lines.diameter, lowest[run], highest[run])


def _ended(pieces: Pieces, run: Ints, diameter: Floats, lowest: Floats, highest: Floats) -> Runs:
    thick = diameter[pieces.row[run]]
    tails = _straight_tails(pieces, thick, run)
    ends = [_follow_end(pieces, run, thick, tails, step) for step in (-1, 1)]
    forward = pieces.direction[run, 0] > 0.0
    drawn = np.stack([pieces.start[run], pieces.end[run]], axis=1)
    (back_x, back_hook, back_bend), (fore_x, fore_hook, fore_bend) = ends
    back, fore = (
        np.where(hook | bend, 0.0, _beyond(pieces, run, step))
        for step, (_, hook, bend) in zip((-1, 1), ends, strict=True)
    )
    return Runs(
        row=pieces.row[run],
        start=np.where(forward, back_x, fore_x),
        end=np.where(forward, fore_x, back_x),
        y=(pieces.start[run, 1] + pieces.end[run, 1]) / 2.0,
        lowest=lowest,
        highest=highest,
        start_hook=np.where(forward, back_hook, fore_hook),
        end_hook=np.where(forward, fore_hook, back_hook),
        poor_bend=back_bend | fore_bend,
        line=np.where(forward[:, None, None], drawn, drawn[:, ::-1]),
        start_beyond=np.where(forward, back, fore),
        end_beyond=np.where(forward, fore, back),
    )


def _beyond(pieces: Pieces, run: Ints, step: int) -> Floats:
    """Length of bars beyond one end of their runs, as far as they do not turn off by a square."""
    outward = pieces.direction[run] * step
    length = np.zeros(len(run))
    neighbour = pieces.neighbour(step)
    left = np.flatnonzero(neighbour[run] >= 0)
    at = neighbour[run[left]]
    while len(left):
        goes_on = dots(pieces.direction[at] * step, outward[left]) > SQUARE_TURN
        left, at = left[goes_on], at[goes_on]
        length[left] += pieces.length[at]
        left, at = left[neighbour[at] >= 0], neighbour[at[neighbour[at] >= 0]]
    return length


def _follow_end(
    pieces: Pieces, run: Ints, diameter: Floats, tail: Floats, step: int
) -> tuple[Floats, Bools, Bools]:
    """Follow bars beyond one end of their runs: x of the end, whether hooked, whether bent."""
    outward = pieces.direction[run] * step
    sign = np.sign(outward[:, 0])
    far = pieces.end if step > 0 else pieces.start
    tip = far[run, 0] * sign
    reach = tip.copy()
    neighbour = pieces.neighbour(step)
    hooked, bent = np.zeros(len(run), dtype=bool), np.zeros(len(run), dtype=bool)
    left = np.flatnonzero(neighbour[run] >= 0)
    at = neighbour[run[left]]
    while len(left):
        turn = dots(pieces.direction[at] * step, outward[left])
        straight, thick = pieces.straight[at], diameter[left]
        reach[left] = np.maximum(reach[left], far[at, 0] * sign[left])
        hook = straight & _is_hook(turn, tail[at], thick)
        hook &= reach[left] - tip[left] <= WIDEST_HOOK * thick
        inclined = straight & (turn > SQUARE_TURN) & (pieces.length[at] > LONGEST_CHORD * thick)
        hooked[left] = hook
        bent[left] |= turn <= SQUARE_TURN
        goes_on = ~hook & ~inclined & (neighbour[at] >= 0)
        left, at = left[goes_on], neighbour[at[goes_on]]
    x = np.where(hooked, reach + diameter / 2.0, tip) * sign
    return x, hooked, bent & ~hooked


def _is_hook(turn: Floats, tail: Floats, diameter: Floats) -> Bools:
    square = (turn <= SQUARE_TURN) & (tail >= TAIL_TOLERANCE * SQUARE_HOOK_TAIL * diameter)
    least = TAIL_TOLERANCE * np.maximum(FULL_HOOK_TAIL * diameter, FULL_HOOK_LEAST)
    return square | ((turn <= FULL_TURN) & (tail >= least))


def _straight_tails(pieces: Pieces, diameter: Floats, run: Ints) -> Floats:
    """Length of each piece [mm] less what the bends at corners drawn sharp take from it."""
    by_row = np.ones(int(pieces.row.max(initial=-1)) + 1)
    by_row[pieces.row[run]] = diameter
    lost = np.zeros(len(pieces.row) + 1)
    sharp = (pieces.row[1:] == pieces.row[:-1]) & pieces.straight[1:] & pieces.straight[:-1]
    corner = np.flatnonzero(sharp)
    turn = dots(pieces.direction[corner + 1], pieces.direction[corner])
    half = np.arccos(np.clip(turn, -0.999, 1.0)) / 2.0
    lost[corner + 1] = bend_radius(by_row[pieces.row[corner]]) * np.tan(half)
    return np.asarray(pieces.length - lost[:-1] - lost[1:])


def bend_radius(diameter: Floats) -> Floats:
    """Return the radius of the centre line of a least bend [mm]."""
    times = np.array(BEND_RADII)[np.searchsorted(BEND_DIAMETERS, diameter)]
    return np.asarray(times * diameter)


def group(labels: Ints, values: Floats, gap: float) -> Ints:
    """Split groups where sorted values differ by more than ``gap``; returns new labels."""
    order = np.lexsort((values, labels))
    split = np.ones(len(order), dtype=bool)
    split[1:] = (np.diff(labels[order]) != 0) | (np.diff(values[order]) > gap)
    found = np.empty(len(order), dtype=np.intp)
    found[order] = np.cumsum(split) - 1
    return found
