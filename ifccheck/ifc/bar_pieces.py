"""Centre lines of bars in the axes of their beams, cut into straight pieces and chords."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_samples import Samples, offsets, spread
from ifccheck.ifc.many_vectors import dots, sizes

LEAST_STEP = 1e-3
"""Shorter steps [mm] of a centre line are left out."""
COLLINEAR = math.cos(math.radians(0.5))
"""Cosine of the turn below which two straight steps are one piece."""


@dataclass(frozen=True, slots=True)
class CentreLines:
    """Bars in the axes of the beam that each is looked at in; one row per bar (R)."""

    points: Floats
    """(N, 3) [mm]: along the beam, to the left, up from the soffit."""
    arc: Bools
    """The step from this point to the next is a chord of an arc (N)."""
    row: Ints
    """Bar of each point (N)."""
    first: Ints
    """First point of each bar, and N at the end (R + 1)."""
    diameter: Floats
    """[mm] (R)"""

    @property
    def count(self) -> int:
        """How many bars."""
        return len(self.first) - 1

    def take(self, kept: Ints) -> CentreLines:
        """Some of the bars, in any order."""
        counts = np.diff(self.first)[kept]
        row, within = spread(counts)
        point = self.first[kept][row] + within
        diameter = self.diameter[kept]
        return CentreLines(self.points[point], self.arc[point], row, offsets(counts), diameter)

    def with_more(self, more: CentreLines) -> CentreLines:
        """These bars and more behind them."""
        return CentreLines(
            np.concatenate((self.points, more.points)),
            np.concatenate((self.arc, more.arc)),
            np.concatenate((self.row, more.row + self.count)),
            np.concatenate((self.first, more.first[1:] + len(self.points))),
            np.concatenate((self.diameter, more.diameter)),
        )

    def lowest(self) -> Floats:
        """Least coordinates of each bar's centre line (R, 3)."""
        return np.minimum.reduceat(self.points, self.first[:-1], axis=0)

    def highest(self) -> Floats:
        """Greatest coordinates of each bar's centre line (R, 3)."""
        return np.maximum.reduceat(self.points, self.first[:-1], axis=0)


@dataclass(frozen=True, slots=True)
class Turned:
    """Lines turned into the axes of beams, not yet moved (L)."""

    points: Floats
    arc: Bools
    first: Ints

    def placed(self, number: Ints, translation: Floats, diameter: Floats) -> CentreLines:
        """Bars that have these lines, each moved by its translation (R, 3)."""
        counts = np.diff(self.first)[number]
        row, within = spread(counts)
        source = self.first[number][row] + within
        points = self.points[source] + translation[row]
        return CentreLines(points, self.arc[source], row, offsets(counts), diameter)


def turned(samples: Samples, line: Ints, rotation: Floats) -> Turned:
    """Turn sampled lines, each by its rotation (L, 3, 3)."""
    counts = np.diff(samples.first)[line]
    row, within = spread(counts)
    source = samples.first[line][row] + within
    points = np.einsum("nij,nj->ni", rotation[row], samples.points[source])
    return Turned(points, samples.arc[source], offsets(counts))


@dataclass(frozen=True, slots=True)
class Pieces:
    """Straight pieces and chords of arcs, in order along each bar (P)."""

    row: Ints
    start: Floats
    """(P, 3) [mm]"""
    end: Floats
    direction: Floats
    """Unit vector (P, 3)"""
    length: Floats
    straight: Bools
    """False for a chord of an arc."""

    def neighbour(self, step: int) -> Ints:
        """The piece before (-1) or after (+1) on the same bar, -1 where there is none (P)."""
        index = np.arange(len(self.row)) + step
        inside = (index >= 0) & (index < len(self.row))
        clipped = np.clip(index, 0, max(len(self.row) - 1, 0))
        return np.where(inside & (self.row[clipped] == self.row), clipped, -1)

    def merged(self, begins: Bools) -> Pieces:
        """Join pieces: each run from one that ``begins`` to the next becomes one."""
        first = np.flatnonzero(begins)
        last = np.concatenate((first[1:] - 1, [len(self.row) - 1])).astype(np.intp)
        return make_pieces(
            self.row[first], self.start[first], self.end[last[: len(first)]], self.straight[first]
        )


def make_pieces(row: Ints, start: Floats, end: Floats, straight: Bools) -> Pieces:
    """Give pieces their direction and length."""
    along = end - start
    length = sizes(along)
    direction = along / np.where(length > 0.0, length, 1.0)[:, None]
    return Pieces(row, start, end, direction, length, straight)


def cut_into_pieces(lines: CentreLines) -> Pieces:
    """Cut centre lines into straight pieces, joining straight steps in one line."""
    index = np.flatnonzero(lines.row[1:] == lines.row[:-1])
    step = lines.points[index + 1] - lines.points[index]
    index = index[dots(step, step) > LEAST_STEP**2]
    steps = make_pieces(
        lines.row[index], lines.points[index], lines.points[index + 1], ~lines.arc[index]
    )
    return steps.merged(_without_drift(steps, ~_goes_on(steps, COLLINEAR)))


def _without_drift(steps: Pieces, begins: Bools) -> Bools:
    """Begin a piece also where steps that each go on straight have turned too far together."""
    run = np.cumsum(begins) - 1
    first = np.flatnonzero(begins)[run]
    on = np.flatnonzero(~begins)
    away = dots(steps.direction[on], steps.direction[first[on]]) < COLLINEAR
    if not away.any():
        return begins
    on = on[np.isin(run[on], run[on[away]])]
    turn = np.zeros(len(begins))
    cosine = dots(steps.direction[on], steps.direction[on - 1])
    turn[on] = np.arccos(np.clip(cosine, -1.0, 1.0))
    turned = np.cumsum(turn)
    part = np.floor((turned - turned[first]) / math.acos(COLLINEAR)).astype(np.intp)
    result = begins.copy()
    result[on] = part[on] != part[on - 1]
    return result


def _goes_on(pieces: Pieces, cosine: float) -> Bools:
    """Whether each piece goes on straight from the one before."""
    result = np.zeros(len(pieces.row), dtype=bool)
    turn = dots(pieces.direction[1:], pieces.direction[:-1])
    result[1:] = (
        (pieces.row[1:] == pieces.row[:-1])
        & pieces.straight[1:]
        & pieces.straight[:-1]
        & (turn >= cosine)
    )
    return result


def count_by_row(row: Ints, mask: Bools, rows: int) -> Ints:
    """How many entries of ``mask`` are true on each bar."""
    counted: npt.NDArray[np.intp] = np.bincount(row[mask], minlength=rows)
    return counted
