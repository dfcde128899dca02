"""Whether steel lies within the outlines of beams whose sections do not fill their boxes."""

from __future__ import annotations

import numpy as np

from ifccheck.beam import Outline
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_samples import spread
from ifccheck.ifc.bars import Runs
from ifccheck.ifc.beam_frames import BeamFrames
from ifccheck.ifc.stirrup_legs import Legs

FIT_TOLERANCE = 1.0
"""Steel may lie outside its section by this [mm]."""
LEAST_STRETCH = 5.0
"""Bars that reach into the next stretch of a beam by no more than this [mm] do not run there."""
PARTS = np.array([0.0, 0.5, 1.0])
"""Where along a stretch a bar is looked at."""


def runs_outside(frames: BeamFrames, beam: Ints, runs: Runs, diameter: Floats) -> Bools:
    """Whether runs of bars leave the concrete between the ends of their beams (M).

    Rectangles from end to end are left to the box round them, and so are stretches that taper.
    """
    outside = np.zeros(len(beam), dtype=bool)
    looked = np.flatnonzero(~frames.plain()[beam])
    first = frames.first_run[beam[looked]]
    which, within = spread(frames.first_run[beam[looked] + 1] - first)
    bar, stretch = looked[which], first[which] + within
    line = runs.line[bar]
    start = np.maximum(line[:, 0, 0], frames.run_start[stretch])
    end = np.minimum(line[:, 1, 0], frames.run_end[stretch])
    held = (end - start > LEAST_STRETCH) & ~frames.tapers[stretch]
    bar, stretch, line, start, end = (a[held] for a in (bar, stretch, line, start, end))
    x = start + PARTS[:, None] * (end - start)
    share = (x - line[:, 0, 0]) / (line[:, 1, 0] - line[:, 0, 0])
    place = line[:, 0, 1:] + share[:, :, None] * (line[:, 1, 1:] - line[:, 0, 1:])
    reach = np.tile(diameter[bar] / 2.0 - FIT_TOLERANCE, len(PARTS))
    flat = place.reshape(-1, 2)
    inside = _inside(frames, np.tile(stretch, len(PARTS)), flat[:, 0], flat[:, 1], reach)
    outside[bar[~inside.reshape(len(PARTS), -1).all(axis=0)]] = True
    return outside


def legs_outside(
    frames: BeamFrames, beam: Ints, middle: Floats, legs: Legs, diameter: Floats
) -> Bools:
    """Whether bars that lie square have legs that lie outside the concrete where they are
    counted; beam, place along it and diameter of each bar (S)."""
    outside = np.zeros(len(beam), dtype=bool)
    legs = legs.take(np.flatnonzero(~frames.plain()[beam[legs.shape]]))
    stretch = frames.run_at(beam[legs.shape], middle[legs.shape] + legs.x)
    legs, stretch = legs.take(~frames.tapers[stretch]), stretch[~frames.tapers[stretch]]
    reach = diameter[legs.shape] / 2.0 - FIT_TOLERANCE
    outside[legs.shape[~_inside(frames, stretch, legs.y, legs.z, reach)]] = True
    return outside


def _inside(frames: BeamFrames, stretch: Ints, y: Floats, z: Floats, reach: Floats) -> Bools:
    """Whether points lie in the outlines of stretches, ``reach`` from their surface [mm]."""
    numbers: dict[Outline, int] = {}
    used, index = np.unique(stretch, return_inverse=True)
    outlines = [frames.outlines[one] for one in used.tolist()]
    number = np.array([numbers.setdefault(one, len(numbers)) for one in outlines], dtype=np.intp)
    of_point = number[index.reshape(-1)]
    order = np.argsort(of_point, kind="stable")
    first = np.searchsorted(of_point[order], np.arange(len(numbers) + 1))
    inside = np.zeros(len(y), dtype=bool)
    for outline, row in numbers.items():
        points = order[first[row] : first[row + 1]]
        inside[points] = _within(outline, y[points], z[points], reach[points])
    return inside


def _within(outline: Outline, y: Floats, z: Floats, reach: Floats) -> Bools:
    import shapely

    polygon = shapely.Polygon(outline.rings[0], outline.rings[1:])
    shapely.prepare(polygon)
    points = shapely.points(y, z)
    away = shapely.distance(polygon.boundary, points)
    return np.asarray(shapely.contains(polygon, points) & (away >= reach))
