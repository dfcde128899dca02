"""Self weight of beams as loads on them."""

from __future__ import annotations

import numpy as np

from ifccheck.analysis.loads import LoadTable, self_weight_lines
from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.runs import RunTable, weighed_parts


def self_weight(runs: RunTable, ends: Floats, case: int, unit_weights: Floats) -> LoadTable:
    """The weight of all runs; that of the first and last reaches as far as the spans do.

    Parameters
    ----------
    runs
        Of all beams (B).
    ends
        x of the start of the first span and of the end of the last of each [mm] (B, 2).
    case
        Row of the case that it makes.
    unit_weights
        [N/mm3] (B).
    """
    row, start, end, area_start, area_end = weighed_parts(runs)
    beam = runs.beam[row]
    return self_weight_lines(
        beam=beam,
        case=case,
        start=np.where(_first_of(beam), np.minimum(start, ends[beam, 0]), start),
        end=np.where(_last_of(beam), np.maximum(end, ends[beam, 1]), end),
        area_start=area_start,
        area_end=area_end,
        unit_weight=unit_weights[beam],
    )


def _first_of(beam: Ints) -> Bools:
    """Whether each row is the first of its beam."""
    return np.append(True, beam[1:] != beam[:-1])[: beam.size]


def _last_of(beam: Ints) -> Bools:
    """Whether each row is the last of its beam."""
    return np.append(beam[1:] != beam[:-1], True)[: beam.size]
