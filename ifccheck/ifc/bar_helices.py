"""Spirals: centre lines that wind round an axis and go on along it, taken turn by turn."""

from __future__ import annotations

import math

import numpy as np

from ifccheck.ifc.bar_paths import Floats, Ints, Path
from ifccheck.ifc.bar_samples import PathTable, sample
from ifccheck.ifc.bar_traces import as_point

LEAST_POINTS = 24
"""Centre lines of fewer points are not looked at: no stirrup with hooks has as many."""
LEAST_TURNS = 2
TRIES = 8
"""How often the axis of a spiral is found anew from its turns."""
WAVERING = 1e-3
"""Angle [rad], and part of the pitch, by which a spiral may turn back and still go on."""
LEAST_PITCH = 1.5
"""Diameters: the turns of a bar that is wound more closely lie beside one another."""
STEEPEST = 0.1
"""Rise by length across, up to which the legs of a spiral count as square to its axis."""
ROUND = 1.3
"""Ratio of radii up to which a spiral is a round one, which has no legs."""
TOLD = "a spiral: each of its whole turns is taken as a closed stirrup, square to its axis"


def find_helices(paths: PathTable, diameter: Floats) -> dict[int, list[Path]]:
    """Find the lines that are spirals; of each the turns, flat and square to its axis.

    ``diameter`` is that of each line [mm] (m). What is left of a turn at the end does not count.
    """
    found: dict[int, list[Path]] = {}
    for line in long_lines(paths).tolist():
        turns = turns_of(_sampled(paths, line), float(diameter[line]))
        if turns:
            found[line] = turns
    return found


def long_lines(paths: PathTable) -> Ints:
    """The lines that may be spirals."""
    return np.flatnonzero(np.diff(paths.first) >= LEAST_POINTS)


def _sampled(paths: PathTable, line: int) -> Floats:
    first, stop = paths.first[line : line + 2].tolist()
    arcs = paths.arcs[np.searchsorted(paths.arcs, first) : np.searchsorted(paths.arcs, stop)]
    alone = np.zeros(1, dtype=np.intp)
    own = PathTable(paths.points[first:stop], np.array([0, stop - first]), arcs - first, alone)
    return sample(own).points


def turns_of(points: Floats, diameter: float) -> list[Path]:
    """The whole turns of a spiral, each flattened square to its axis; none where it is none."""
    step = np.diff(points, axis=0)
    points = points[np.append(True, (step * step).sum(axis=1) > 1e-6)]
    axis = _first_axis(points)
    for _ in range(TRIES):
        if axis is None:
            return []
        wound = _longest_winding(points, axis)
        axis = _axis_by_turns(points[wound], axis)
    if axis is None:
        return []
    held = points[_longest_winding(points, axis)]
    angle, radius = _polar(held, axis)
    height = held @ axis
    count = math.floor(angle[-1] / (2.0 * math.pi) + WAVERING)
    pitch = (height[-1] - height[0]) / max(count, 1)
    if count < LEAST_TURNS or pitch < LEAST_PITCH * diameter:
        return []
    _, between = _polar((held[1:] + held[:-1]) / 2.0, axis)
    if radius.max() <= ROUND * min(radius.min(), between.min()):
        return []
    if np.diff(height).min() < -WAVERING * pitch or not _lies_flat(held, axis):
        return []
    return [_turn(held, angle, height, axis, 2.0 * math.pi * number) for number in range(count)]


def _first_axis(points: Floats) -> Floats | None:
    """The axis that a line turns round from step to step."""
    step = np.diff(points, axis=0)
    turned = np.cross(step[:-1], step[1:]).sum(axis=0)
    size = math.sqrt(float(turned @ turned))
    return turned / size if size > 0.0 else None


def _axis_by_turns(points: Floats, axis: Floats) -> Floats | None:
    """The way from each point to that a whole turn later; None where there are none."""
    angle, _ = _polar(points, axis)
    early = angle <= angle[-1] - 2.0 * math.pi
    if angle[-1] < 2.0 * math.pi * LEAST_TURNS * (1.0 - WAVERING):
        return None
    later = np.column_stack([np.interp(angle[early] + 2.0 * math.pi, angle, c) for c in points.T])
    way = np.median(later - points[early], axis=0)
    size = math.sqrt(float(way @ way))
    return way / size if size > 0.0 else None


def _polar(points: Floats, axis: Floats) -> tuple[Floats, Floats]:
    """Angle round an axis from the first point on [rad], and distance from the axis [mm]."""
    x = np.cross(axis, np.eye(3)[int(np.abs(axis).argmin())])
    x /= math.sqrt(float(x @ x))
    across = np.column_stack((points @ x, points @ np.cross(axis, x)))
    arm = across - (across.min(axis=0) + across.max(axis=0)) / 2.0
    angle = np.unwrap(np.arctan2(arm[:, 1], arm[:, 0])) - math.atan2(arm[0, 1], arm[0, 0])
    sign = 1.0 if angle[-1] >= 0.0 else -1.0
    return sign * angle, np.sqrt((arm * arm).sum(axis=1))


def _longest_winding(points: Floats, axis: Floats) -> slice:
    """The longest stretch of a line that turns one way round an axis: hooks are left out."""
    angle, _ = _polar(points, axis)
    back = np.flatnonzero(np.diff(angle) < -WAVERING)
    bounds = np.concatenate(([0], back + 1, [len(points)]))
    longest = int(np.diff(bounds).argmax())
    return slice(int(bounds[longest]), int(bounds[longest + 1]))


def _lies_flat(points: Floats, axis: Floats) -> bool:
    step = np.diff(points, axis=0)
    rise = step @ axis
    across = np.sqrt(np.maximum((step * step).sum(axis=1) - rise**2, 0.0))
    return bool((rise <= STEEPEST * across + 1e-6).all())


def _turn(points: Floats, angle: Floats, height: Floats, axis: Floats, start: float) -> Path:
    end = min(start + 2.0 * math.pi, angle[-1])
    within = (angle > start + 1e-9) & (angle < end - 1e-9)
    first, last = (np.array([np.interp(at, angle, c) for c in points.T]) for at in (start, end))
    level = (np.interp(start, angle, height) + np.interp(end, angle, height)) / 2.0
    ring = np.concatenate(([first], points[within], [last]))
    ring = ring - np.outer(ring @ axis - level, axis)
    return Path(tuple(as_point(place) for place in ring))
