"""How stiff the beams are along their spans, where their sections vary."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ifccheck.analysis.loads import LoadTable
from ifccheck.analysis.spans import SpanTable, by_spans
from ifccheck.analysis.stations import make_stations, places
from ifccheck.analysis.stiffness import Curvature, indeterminate, places_between
from ifccheck.beam import Run
from ifccheck.mechanics.arrays import Floats, Ints, Members
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
    beam_of: Ints,
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
    spans, beam_of, loads
        Spans of the beams, the beam of each (S), and loads on them.
    members, runs
        Sections, and where the beams have which.
    """
    wanted = np.array([varies(body) for body in bodies])[beam_of] & indeterminate(spans)
    if not wanted.any():
        return None
    row, span = by_spans(beam_of, np.concatenate([runs.beam, runs.beam]))
    changes = places(span, np.concatenate([runs.start, runs.end])[row], two_sided=False)
    span, x, length = places_between(make_stations(spans, loads, changes))
    kept = wanted[span]
    span, x, length = span[kept], x[kept], length[kept]
    with_sections, section = sections_at(members, runs, run_at(runs, beam_of[span], x), x)
    return Curvature(span, x, length / second_moments(with_sections.strips[section]))


def second_moments(strips: Floats) -> Floats:
    """Second moment of area of sections (n, S, 4) about the level axis through their centroid
    [mm4] (n)."""
    strips = from_soffit(strips)
    top = top_of(strips)
    area, first = area_below(strips, top), first_moment_below(strips, top)
    inertia: Floats = second_moment_below(strips, top) - first**2 / area
    return inertia
