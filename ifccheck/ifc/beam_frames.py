"""The axes and sections of many beams as arrays, to measure bars in."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.beam import Outline
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.context import BeamFrame

FAR = 1e9
"""Further [mm] than any beam is long."""


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

    def index(self) -> dict[int, int]:
        """Row of each beam by its STEP id."""
        return {step_id: row for row, step_id in enumerate(self.ids)}

    def prismatic(self) -> Bools:
        """Whether each beam has one outline from end to end."""
        single = np.diff(self.first_run) == 1
        first = self.first_run[:-1]
        same: Bools = (self.bounds[first] == self.end_bounds[first]).all(axis=1)
        return np.asarray(single & same)

    def bounds_at(self, beam: Ints, x: Floats) -> Floats:
        """The box round the outline of beams at places along them (N, 4)."""
        keys = np.repeat(np.arange(len(self.ids)), np.diff(self.first_run)) * FAR + self.run_start
        run = np.searchsorted(keys, beam * FAR + np.clip(x, 0.0, None), side="right") - 1
        run = np.clip(run, self.first_run[beam], self.first_run[beam + 1] - 1)
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
    return BeamFrames(
        ids=list(hosts),
        rotation=np.array([(a.x, a.y, a.z) for a in axes], dtype=float).reshape(-1, 3, 3),
        origin=np.array([a.origin for a in axes], dtype=float).reshape(-1, 3),
        length=np.array([a.length for a in axes], dtype=float),
        first_run=np.concatenate(([0], np.cumsum(counts))).astype(np.intp),
        run_start=np.array([run.start for run in runs], dtype=float),
        run_end=np.array([run.end for run in runs], dtype=float),
        bounds=_bounds([run.outline for run in runs]),
        end_bounds=_bounds([run.outline_end or run.outline for run in runs]),
    )


def _bounds(outlines: Sequence[Outline]) -> Floats:
    known: dict[int, tuple[float, float, float, float]] = {}
    for outline in outlines:
        if id(outline) not in known:
            ys = [y for y, _ in outline.rings[0]]
            zs = [z for _, z in outline.rings[0]]
            known[id(outline)] = (min(ys), max(ys), min(zs), max(zs))
    return np.array([known[id(outline)] for outline in outlines], dtype=float).reshape(-1, 4)


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
