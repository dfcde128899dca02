"""Bars that meet end to end on one axis: one bar where a coupler joins them, else both end."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from ifccheck.ifc.bar_clashes import CLASH, force_of
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bars import Runs, group
from ifccheck.ifc.measured import Measured

WIDEST_GAP = 15.0
"""Bars on one axis meet where no more than this is between their ends [mm]."""
OFF_AXIS = 0.25
"""Centres of bars on one axis are no further apart than this part of the lesser diameter."""
COUPLED = "meet in a coupler: taken as one bar, if the coupler has the strength of the bar"
APART = "meet end to end, and no coupler is found there: both end there"


def joined(model: Measured, runs: Runs, beam: Ints, counted: Bools) -> Runs:
    """Let bars that a coupler joins develop in one another; tell of those that only meet.

    A bar goes on in another only where that is as strong.
    """
    first, second = _meeting(model, runs, beam, counted)
    if not len(first):
        return runs
    place = (runs.line[first, 1] + runs.line[second, 0]) / 2.0
    coupled = model.places.coupled(beam[first], place)
    for held, text in ((coupled, COUPLED), (~coupled, APART)):
        model.remark(runs.row[np.concatenate((first[held], second[held]))], text)
    return _in_one(model, runs, first[coupled], second[coupled], place[coupled, 0])


def _meeting(model: Measured, runs: Runs, beam: Ints, counted: Bools) -> tuple[Ints, Ints]:
    """Pairs of runs of which the second begins where the first ends."""
    at = np.flatnonzero(counted)
    diameter = model.lines.diameter[runs.row]
    if len(at) < 2:
        return at[:0], at[:0]
    reach = OFF_AXIS * float(diameter.max())
    cluster = group(beam[at], runs.line[at, 0, 1], reach)
    cluster = group(cluster, runs.line[at, 0, 2], reach)
    order = np.lexsort((runs.start[at], cluster))
    same = np.flatnonzero(np.diff(cluster[order]) == 0)
    first, second = at[order[same]], at[order[same + 1]]
    thick = np.minimum(diameter[first], diameter[second])
    gap = runs.start[second] - runs.end[first]
    aside = np.abs(runs.line[first, 1, 1:] - runs.line[second, 0, 1:]).max(axis=1)
    meets = (gap <= WIDEST_GAP) & (gap >= -CLASH * thick) & (aside <= OFF_AXIS * thick)
    meets &= ~(runs.end_hook[first] | runs.start_hook[second])
    meets &= (runs.end_beyond[first] == 0.0) & (runs.start_beyond[second] == 0.0)
    return first[meets], second[meets]


def _in_one(model: Measured, runs: Runs, first: Ints, second: Ints, x: Floats) -> Runs:
    """Runs of which some go on in others, that they meet at places along the beam."""
    start, end = runs.start.copy(), runs.end.copy()
    start_beyond, end_beyond = runs.start_beyond.copy(), runs.end_beyond.copy()
    end[first] = start[second] = x
    pairs = list(zip(first.tolist(), second.tolist(), strict=True))
    pairs.sort(key=lambda pair: float(runs.start[pair[0]]))
    forces = {run: force_of(model, int(runs.row[run])) for pair in pairs for run in pair}
    for one, other in pairs:
        if forces[other] <= forces[one]:
            start_beyond[other] = end[one] - start[one] + start_beyond[one]
    for one, other in reversed(pairs):
        if forces[one] <= forces[other]:
            end_beyond[one] = end[other] - start[other] + end_beyond[other]
    return replace(runs, start=start, end=end, start_beyond=start_beyond, end_beyond=end_beyond)
