"""Centre lines of many bars as arrays, and their arcs cut into chords."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Floats, Ints, Path, arc_frames

CHORD_ANGLE = math.pi / 7.0
"""Greatest angle [rad] that one chord of a sampled arc spans."""


@dataclass(frozen=True, slots=True)
class PathTable:
    """Many centre lines (n), of which some are the same line (m); the points of one line after
    those of another (N)."""

    points: Floats
    """(N, 3) [mm]"""
    first: Ints
    """Index of the first point of each line, and N at the end (m + 1)."""
    arcs: Ints
    """Indices of points at which an arc runs through three points."""
    line: Ints
    """Which line each centre line is (n)."""

    def __len__(self) -> int:
        """How many centre lines."""
        return len(self.line)

    def take(self, kept: Ints | Bools) -> PathTable:
        """Some of the centre lines."""
        return PathTable(self.points, self.first, self.arcs, self.line[kept])

    def with_more(self, more: PathTable) -> PathTable:
        """Return these centre lines and more behind them."""
        offset = len(self.points)
        return PathTable(
            np.concatenate((self.points, more.points)),
            np.concatenate((self.first, more.first[1:] + offset)),
            np.concatenate((self.arcs, more.arcs + offset)),
            np.concatenate((self.line, more.line + len(self.first) - 1)),
        )


def tabulate(paths: Sequence[Path]) -> PathTable:
    """Put centre lines into a table."""
    first = offsets([len(path.points) for path in paths])
    points = np.array([point for path in paths for point in path.points], dtype=float)
    arcs = [
        offset + index
        for path, offset in zip(paths, first.tolist(), strict=False)
        for index in path.arcs
    ]
    line = np.arange(len(paths))
    return PathTable(points.reshape(-1, 3), first, np.array(arcs, dtype=np.intp), line)


def offsets(counts: Sequence[int] | Ints) -> Ints:
    """Where each of several runs begins, and the total at the end."""
    return np.concatenate(([0], np.cumsum(counts, dtype=np.intp))).astype(np.intp)


def others(count: int, taken: Ints) -> Ints:
    """Numbers below a count without those taken."""
    left = np.ones(count, dtype=bool)
    left[taken] = False
    return np.flatnonzero(left)


def spread(counts: Ints) -> tuple[Ints, Ints]:
    """Number of the run of each entry of several runs, and its place in that run."""
    run = np.repeat(np.arange(len(counts)), counts)
    return run, np.arange(len(run)) - np.repeat(offsets(counts)[:-1], counts)


@dataclass(frozen=True, slots=True)
class Samples:
    """Many lines as points one after another (m)."""

    points: Floats
    """(N, 3) [mm]"""
    arc: Bools
    """Whether the step from each point to the next is a chord of an arc (N); false at ends."""
    first: Ints
    """Index of the first point of each line, and the number of points at the end (m + 1)."""


def sample(paths: PathTable) -> Samples:
    """Sample lines into points: straight parts by their ends, arcs by chords."""
    if not paths.arcs.size:
        return Samples(paths.points, np.zeros(len(paths.points), dtype=bool), paths.first)
    return _with_arcs(paths.points, paths.first, paths.arcs)


def _with_arcs(points: Floats, first: Ints, starts: Ints) -> Samples:
    """Put chords in the place of the two steps of every arc."""
    centre, across, turned, half = arc_frames(points, starts)
    chords = np.ceil(half / CHORD_ANGLE - 1e-9).astype(np.intp)  # (arcs, 2)
    count = np.ones(len(points), dtype=np.intp)
    owner = np.full(len(points), -1, dtype=np.intp)
    for step in (0, 1):
        count[starts + step] = np.maximum(chords[:, step], 1)
        owner[starts + step] = np.where(chords[:, step] > 0, np.arange(len(starts)), -1)
    begin = np.concatenate(([0], np.cumsum(count)))
    source = np.repeat(np.arange(len(points)), count)
    within = np.arange(len(source)) - begin[source]
    sampled = points[source]
    inner = np.flatnonzero(within > 0)
    arc, origin = owner[source[inner]], source[inner]
    second = (origin != starts[arc]).astype(np.intp)
    angle = within[inner] / count[origin] * half[arc, second] + second * half[arc, 0]
    sampled[inner] = (
        centre[arc] + np.cos(angle)[:, None] * across[arc] + np.sin(angle)[:, None] * turned[arc]
    )
    return Samples(sampled, owner[source] >= 0, begin[first])
