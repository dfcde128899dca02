"""Whether steel lies within the outlines of beams whose sections do not fill their boxes."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines
from ifccheck.ifc.bar_samples import spread
from ifccheck.ifc.bars import Runs
from ifccheck.ifc.beam_frames import BeamFrames
from ifccheck.ifc.outline_points import inside_outlines
from ifccheck.ifc.stirrup_legs import Legs

FIT_TOLERANCE = 1.0
"""Steel may lie outside its section by this [mm]."""
LEAST_STRETCH = 5.0
"""Bars that reach into the next stretch of a beam by no more than this [mm] do not run there."""
PARTS = np.array([0.0, 0.5, 1.0])
"""Where along a stretch a bar is looked at."""


def runs_outside(frames: BeamFrames, beam: Ints, runs: Runs, diameter: Floats) -> Bools:
    """Whether runs of bars leave the concrete between the ends of their beams (M).

    Rectangles from end to end are left to the box round them.
    """
    outside = np.zeros(len(beam), dtype=bool)
    looked = np.flatnonzero(~frames.plain()[beam])
    first = frames.first_run[beam[looked]]
    which, within = spread(frames.first_run[beam[looked] + 1] - first)
    bar, stretch = looked[which], first[which] + within
    line = runs.line[bar]
    start = np.maximum(line[:, 0, 0], frames.run_start[stretch])
    end = np.minimum(line[:, 1, 0], frames.run_end[stretch])
    held = end - start > LEAST_STRETCH
    bar, stretch, line, start, end = (a[held] for a in (bar, stretch, line, start, end))
    x = start + PARTS[:, None] * (end - start)
    share = (x - line[:, 0, 0]) / (line[:, 1, 0] - line[:, 0, 0])
    place = line[:, 0, 1:] + share[:, :, None] * (line[:, 1, 1:] - line[:, 0, 1:])
    reach = np.tile(diameter[bar] / 2.0 - FIT_TOLERANCE, len(PARTS))
    points = np.concatenate((x[:, :, None], place), axis=2).reshape(-1, 3)
    inside = inside_outlines(frames, np.tile(stretch, len(PARTS)), points, reach)
    outside[bar[~inside.reshape(len(PARTS), -1).all(axis=0)]] = True
    return outside


def bends_outside(frames: BeamFrames, beam: Ints, lines: CentreLines, looked: Bools) -> Ints:
    """Points of bars that lie in the box round the section, but outside of the concrete, between
    the ends of their beams; beam of each bar and which are ``looked`` at (R)."""
    row, x = lines.row, lines.points[:, 0]
    at = np.flatnonzero(looked[row] & ~frames.plain()[beam[row]])
    at = at[(x[at] >= 0.0) & (x[at] <= frames.length[beam[row[at]]])]
    stretch = frames.run_at(beam[row[at]], x[at])
    reach = lines.diameter[row[at]] / 2.0 - FIT_TOLERANCE
    return at[~inside_outlines(frames, stretch, lines.points[at], reach)]


def without_hooks(lines: CentreLines, runs: Runs, leaving: Ints) -> tuple[Runs, Ints, Ints]:
    """Runs without the hooks that hold some of the points ``leaving`` the concrete.

    Also the bars that lose a hook, and those of which something else leaves the concrete.
    """
    ends = {"start": runs.start_hook.copy(), "end": runs.end_hook.copy()}
    unhooked: set[int] = set()
    left: set[int] = set()
    for point in leaving.tolist():
        row = int(lines.row[point])
        x = lines.points[point, 0]
        own = np.flatnonzero(runs.row == row)
        away = np.abs(runs.line[own, :, 0] - x)
        run, end = divmod(int(away.argmin()), 2)
        name = ("start", "end")[end]
        if (runs.start_hook, runs.end_hook)[end][own[run]]:
            ends[name][own[run]] = False
            unhooked.add(row)
        else:
            left.add(row)
    tips = {
        name: np.where(ends[name], getattr(runs, name), runs.line[:, end, 0])
        for end, name in enumerate(("start", "end"))
    }
    kept = replace(
        runs,
        start=np.where(runs.start_hook, tips["start"], runs.start),
        end=np.where(runs.end_hook, tips["end"], runs.end),
        start_hook=ends["start"],
        end_hook=ends["end"],
    )
    return kept, np.array(sorted(unhooked), np.intp), np.array(sorted(left), np.intp)


def legs_outside(
    frames: BeamFrames, beam: Ints, middle: Floats, legs: Legs, diameter: Floats
) -> Bools:
    """Whether bars that lie square have legs that lie outside the concrete where they are
    counted; beam, place along it and diameter of each bar (S)."""
    outside = np.zeros(len(beam), dtype=bool)
    legs = legs.take(np.flatnonzero(~frames.plain()[beam[legs.shape]]))
    x = middle[legs.shape] + legs.x
    stretch = frames.run_at(beam[legs.shape], x)
    reach = diameter[legs.shape] / 2.0 - FIT_TOLERANCE
    points = np.stack((x, legs.y, legs.z), axis=1)
    outside[legs.shape[~inside_outlines(frames, stretch, points, reach)]] = True
    return outside
