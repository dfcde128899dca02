"""What touches a beam of varying section, where the box round it is larger than the beam."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from ifccheck.beam import Outline, Run
from ifccheck.frame.boxes import Floats, Ints


def varies(runs: Sequence[Run]) -> bool:
    """Whether a beam has more than one outline."""
    return len(runs) > 1 or any(run.outline_end is not None for run in runs)


def along_runs(
    covered: Floats, runs: Sequence[Sequence[Run]], beam: Ints, tolerance: float
) -> None:
    """Measure common parts with beams of varying section from the soffit and the top that the
    beam has there.

    Parameters
    ----------
    covered
        Common parts of boxes along the axes of the beam, from the middle of its box [mm]
        (P, 3, 2): changed in place. What lies under the soffit, or on the top, is moved to
        that of the box; nan where it does not touch.
    runs, beam
        The runs of each beam, and the row of the beam of each pair.
    tolerance
        Gap up to which they touch [mm].
    """
    varying = np.array([varies(each) for each in runs], np.bool_)
    for row in np.flatnonzero(varying[beam] & ~np.isnan(covered[:, 0, 0])).tolist():
        covered[row] = _measured(covered[row], runs[beam[row]], tolerance)


def _measured(covered: Floats, runs: Sequence[Run], tolerance: float) -> Floats:
    length = runs[-1].end
    low, high = _heights(runs, 0.0, length)
    x, z = covered[0] + length / 2.0, covered[2] + (low + high) / 2.0
    soffit, top = _heights(runs, max(x[0], 0.0), min(x[1], length))
    if z[1] < soffit - tolerance or z[0] > top + tolerance:
        return np.full((3, 2), np.nan)
    moved = covered.copy()
    if z[1] <= soffit + tolerance:
        moved[2] -= soffit - low
    elif z[0] >= top - tolerance:
        moved[2] += high - top
    return moved


def _heights(runs: Sequence[Run], start: float, end: float) -> tuple[float, float]:
    """The lowest soffit and the highest top between two places [mm]."""
    found = [bounds for run in runs for bounds in _of_run(run, start, end)]
    return min(low for low, _ in found), max(high for _, high in found)


def _of_run(run: Run, start: float, end: float) -> Iterator[tuple[float, float]]:
    """Soffit and top of what a run has between two places, at both ends of it."""
    first, last = _bounds(run.outline), _bounds(run.outline_end or run.outline)
    length = max(run.end - run.start, 1e-9)
    if start <= run.end and end >= run.start:
        for place in (max(start, run.start), min(end, run.end)):
            share = (place - run.start) / length
            yield (
                first[0] + (last[0] - first[0]) * share,
                first[1] + (last[1] - first[1]) * share,
            )


def _bounds(outline: Outline) -> tuple[float, float]:
    heights = [z for _, z in outline.rings[0]]
    return min(heights), max(heights)
