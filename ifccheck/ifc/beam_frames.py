"""The axes and sections of many beams as arrays, to measure bars in."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.beam import Outline, Ring
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.context import BeamFrame

FAR = 1e9
"""Further [mm] than any beam is long."""
SAME_AREA = 1e-6
"""Part of its box that an outline may leave out and still be a rectangle."""


@dataclass(frozen=True, slots=True)
class BeamFrames:
    """The beams that host bars, one row each (B), and their runs (K)."""

    ids: Sequence[int]
    rotation: Floats
    """Rows are the beam's x, y, z in the building (B, 3, 3)."""
    origin: Floats
    """[mm] (B, 3)"""
    length: Floats
    first_run: Ints
    """First run of each beam, and K at the end (B + 1)."""
    run_start: Floats
    run_end: Floats
    bounds: Floats
    """Least y, greatest y, least z, greatest z at the start of each run [mm] (K, 4)."""
    end_bounds: Floats
    outlines: Sequence[Outline]
    """At the start of each run (K)."""
    end_outlines: Sequence[Outline]
    """At its end (K)."""
    tapers: Bools
    """Whether each run has another outline at its end (K)."""
    fills_box: Bools
    """Whether the outline of each run is a rectangle (K)."""

    def index(self) -> dict[int, int]:
        """Row of each beam by its STEP id."""
        return {step_id: row for row, step_id in enumerate(self.ids)}

    def prismatic(self) -> Bools:
        """Whether each beam has one outline from end to end."""
        single = np.diff(self.first_run) == 1
        first = self.first_run[:-1]
        same: Bools = (self.bounds[first] == self.end_bounds[first]).all(axis=1)
        return np.asarray(single & same)

    def plain(self) -> Bools:
        """Whether each beam is a rectangular prism from end to end."""
        return np.asarray(self.prismatic() & self.fills_box[self.first_run[:-1]])

    def run_at(self, beam: Ints, x: Floats) -> Ints:
        """The run of beams at places along them."""
        keys = np.repeat(np.arange(len(self.ids)), np.diff(self.first_run)) * FAR + self.run_start
        run = np.searchsorted(keys, beam * FAR + np.clip(x, 0.0, None), side="right") - 1
        return np.clip(run, self.first_run[beam], self.first_run[beam + 1] - 1)

    def bounds_at(self, beam: Ints, x: Floats) -> Floats:
        """The box round the outline of beams at places along them (N, 4)."""
        run = self.run_at(beam, x)
        length = np.maximum(self.run_end[run] - self.run_start[run], 1e-9)
        part = np.clip((x - self.run_start[run]) / length, 0.0, 1.0)[:, None]
        return np.asarray(self.bounds[run] * (1.0 - part) + self.end_bounds[run] * part)

    def boxes(self) -> tuple[Floats, Floats]:
        """Least and greatest corner of each beam in its own axes (B, 3)."""
        both = np.stack([self.bounds, self.end_bounds])
        least = np.minimum.reduceat(both.min(axis=0), self.first_run[:-1], axis=0)
        greatest = np.maximum.reduceat(both.max(axis=0), self.first_run[:-1], axis=0)
        zero = np.zeros(len(self.ids))
        low = np.stack([zero, least[:, 0], least[:, 2]], axis=1)
        high = np.stack([self.length, greatest[:, 1], greatest[:, 3]], axis=1)
        return low, high


def make_frames(hosts: Mapping[int, BeamFrame]) -> BeamFrames:
    """Put beams into arrays; each has at least one run."""
    frames = list(hosts.values())
    axes = [frame.axis for frame in frames]
    runs = [run for frame in frames for run in frame.runs]
    counts = [len(frame.runs) for frame in frames]
    outlines = [run.outline for run in runs]
    end_outlines = [run.outline_end or run.outline for run in runs]
    bounds = _bounds(outlines)
    return BeamFrames(
        ids=list(hosts),
        rotation=np.array([(a.x, a.y, a.z) for a in axes], dtype=float).reshape(-1, 3, 3),
        origin=np.array([a.origin for a in axes], dtype=float).reshape(-1, 3),
        length=np.array([a.length for a in axes], dtype=float),
        first_run=np.concatenate(([0], np.cumsum(counts))).astype(np.intp),
        run_start=np.array([run.start for run in runs], dtype=float),
        run_end=np.array([run.end for run in runs], dtype=float),
        bounds=bounds,
        end_bounds=_bounds(end_outlines),
        outlines=outlines,
        end_outlines=end_outlines,
        tapers=np.array([run.outline_end is not None for run in runs], dtype=bool),
        fills_box=_fill_boxes(outlines, bounds),
    )


def _bounds(outlines: Sequence[Outline]) -> Floats:
    known: dict[int, tuple[float, float, float, float]] = {}
    for outline in outlines:
        if id(outline) not in known:
            ys = [y for y, _ in outline.rings[0]]
            zs = [z for _, z in outline.rings[0]]
            known[id(outline)] = (min(ys), max(ys), min(zs), max(zs))
    return np.array([known[id(outline)] for outline in outlines], dtype=float).reshape(-1, 4)


def _fill_boxes(outlines: Sequence[Outline], bounds: Floats) -> Bools:
    """Whether outlines are rectangles along the axes of their sections."""
    known: dict[int, float] = {}
    for outline in outlines:
        if id(outline) not in known:
            known[id(outline)] = _area(outline.rings[0]) if len(outline.rings) == 1 else 0.0
    area = np.array([known[id(outline)] for outline in outlines])
    box = (bounds[:, 1] - bounds[:, 0]) * (bounds[:, 3] - bounds[:, 2])
    return np.asarray(area >= box * (1.0 - SAME_AREA))


def _area(ring: Ring) -> float:
    """Area within a ring [mm2]."""
    pairs = zip(ring, (*ring[1:], ring[0]), strict=True)
    return abs(sum(y0 * z1 - y1 * z0 for (y0, z0), (y1, z1) in pairs)) / 2.0


def part_inside(start: Floats, end: Floats, low: Floats, high: Floats) -> tuple[Floats, Floats]:
    """Parameters (0 to 1) between which straight pieces lie inside boxes (N, 3); equal where
    they do not."""
    along = end - start
    still: Bools = np.abs(along) < 1e-9
    safe = np.where(still, 1.0, along)
    one, other = (low - start) / safe, (high - start) / safe
    within = (start >= low) & (start <= high)
    enter = np.where(still, np.where(within, 0.0, 1.0), np.minimum(one, other)).max(axis=1)
    leave = np.where(still, np.where(within, 1.0, 0.0), np.maximum(one, other)).min(axis=1)
    enter, leave = np.clip(enter, 0.0, 1.0), np.clip(leave, 0.0, 1.0)
    return enter, np.maximum(enter, leave)
