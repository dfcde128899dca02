"""The greatest utilisation of each beam, and where it stands, from a check at every station."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.standards import Check


@dataclass(frozen=True, slots=True)
class Worst:
    """One row per beam (B): the greatest utilisation of a limit state.

    A nan is never dropped: ``incomplete`` tells that some station has none, and
    ``incomplete_element`` which one. Elements index the flattened (arrangements, stations).
    """

    utilisation: Floats
    """Greatest of the utilisations that could be worked out (B)"""
    element: Ints
    """Where it stands (B)"""
    incomplete: Bools
    incomplete_element: Ints
    """(B); meaningful where incomplete"""


def worst_of(check: Check, first_station: Ints) -> Worst:
    """Find the greatest utilisation of every beam.

    Parameters
    ----------
    check
        A limit state at (..., N) arrangements and stations.
    first_station
        First station of each beam, ascending (B); beams follow one another without a gap.
    """
    stations = check.utilisation.shape[-1]
    utilisation = check.utilisation.reshape(-1, stations)
    missing = np.isnan(utilisation)
    known = np.where(missing, -np.inf, utilisation)
    greatest, element = _first_greatest(known, first_station)
    lacks, lacking_element = _first_greatest(missing.astype(np.float64), first_station)
    return Worst(np.maximum(greatest, 0.0), element, lacks > 0.0, lacking_element)


def _first_greatest(values: Floats, first_station: Ints) -> tuple[Floats, Ints]:
    """Greatest value of each beam over all rows, and its flattened element."""
    stations = values.shape[-1]
    row = np.argmax(values, axis=0)
    column_best = values[row, np.arange(stations)]
    best = np.maximum.reduceat(column_best, first_station)
    lengths = np.diff(np.append(first_station, stations))
    is_best = column_best == np.repeat(best, lengths)
    candidates = np.where(is_best, np.arange(stations), stations)
    station = np.minimum.reduceat(candidates, first_station)
    return best, row[station] * stations + station
