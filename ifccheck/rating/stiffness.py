"""How stiff the beams are along their spans, where their sections vary."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ifccheck.analysis.loads import LoadTable
from ifccheck.analysis.spans import SpanTable
from ifccheck.analysis.stations import make_stations, places
from ifccheck.analysis.stiffness import Curvature, indeterminate, places_between
from ifccheck.beam import Run
from ifccheck.mechanics.arrays import Floats, Members
from ifccheck.mechanics.width_profile import (
    area_below,
    first_moment_below,
    from_soffit,
    second_moment_below,
    top_of,
)
from ifccheck.rating.runs import RunTable, run_at, sections_at


def varies(runs: Sequence[Run]) -> bool:
    """Whether a beam has more than one section."""
    if len(runs) == 1:
        return runs[0].outline_end is not None
    return any(run.outline_end is not None or run.outline != runs[0].outline for run in runs)


def curvature_of(
    bodies: Sequence[Sequence[Run]],
    spans: SpanTable,
    loads: LoadTable,
    members: Members,
    runs: RunTable,
) -> Curvature | None:
    """Where curvature is summed along the spans whose moments depend on it; None where none is.

    Stiffness is that of the concrete outline, uncracked and without steel.

    Parameters
    ----------
    bodies
        The runs of each beam as it was read (B): with one outline it has one stiffness, whatever
        openings or slabs do to what is rated of it.
    spans, loads
        Of the beams.
    members, runs
        Sections, and where the beams have which.
    """
    wanted = np.array([varies(body) for body in bodies]) & indeterminate(spans)
    if not wanted.any():
        return None
    changes = places(
        np.concatenate([runs.beam, runs.beam]), np.concatenate([runs.start, runs.end]),
        two_sided=False,
    )  # fmt: skip
    beam, x, length = places_between(make_stations(spans, loads, changes))
    kept = wanted[beam]
    beam, x, length = beam[kept], x[kept], length[kept]
    with_sections, section = sections_at(members, runs, run_at(runs, beam, x), x)
    return Curvature(beam, x, length / second_moments(with_sections.strips[section]))


def second_moments(strips: Floats) -> Floats:
    """Second moment of area of sections (n, S, 4) about the level axis through their centroid
    [mm4] (n)."""
    strips = from_soffit(strips)
    top = top_of(strips)
    area, first = area_below(strips, top), first_moment_below(strips, top)
    inertia: Floats = second_moment_below(strips, top) - first**2 / area
    return inertia
