"""The distinct elements of a batch: every arrangement at every station, equal ones once."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TypeVar

import numpy as np

from ifccheck.analysis.effects import Demands
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints

Values = TypeVar("Values", Floats, Bools)

NUMBERS = ("moment", "shear", "critical_shear", "peak_sagging", "peak_hogging")
"""Fields of a Demand that grow with the loads"""
_ACTING = NUMBERS[:3]


@dataclass(frozen=True, slots=True)
class Elements:
    """Distinct elements, sorted by station and then by arrangement (E).

    Where the arrangement of the greatest moment is also that of the greatest shear, as it is
    along half of most beams, it is evaluated once.
    """

    element: Ints
    """Index into the flattened (combinations, arrangements, stations)"""
    station: Ints
    beam: Ints
    stations: Ints
    """The stations that have elements, in their order"""
    first_of_station: Ints
    """First element of each of those"""
    first_of_beam: Ints
    """First element of each beam (B)"""
    total: Floats
    """The numbers of a Demand, one row each (NUMBERS, E)"""
    shares: tuple[Floats, ...]
    """The part that each rated case has (NUMBERS, E)"""
    can_sag: Bools
    can_hog: Bools
    """For every multiple of a rated case, as in a Demand (E)"""

    def demand(self, rows: slice) -> Demand:
        """What acts at a stretch of the elements."""
        return demand_of(self.total[:, rows], self.can_sag[rows], self.can_hog[rows])


def demand_of(numbers: Floats, can_sag: Bools, can_hog: Bools) -> Demand:
    """A Demand of its numbers (NUMBERS, E)."""
    moment, shear, critical_shear, peak_sagging, peak_hogging = numbers
    return Demand(moment, shear, critical_shear, peak_sagging, peak_hogging, can_sag, can_hog)


def distinct_elements(acting: Demands, beam: Ints, skipped: Bools) -> Elements:
    """Elements of a batch without those that equal an earlier arrangement.

    Parameters
    ----------
    acting
        Demand of every arrangement (C, A, N).
    beam
        Beam of each station (N), ascending from 0, every beam with a station.
    skipped
        Stations at which nothing is evaluated (N); not all of a beam's.
    """
    shape = acting.total.moment.shape
    kept = (_kept((acting.total, *acting.shares)) & ~skipped).reshape(-1, shape[-1])
    station, row = np.nonzero(np.ascontiguousarray(kept.T))
    combination, element = row // shape[1], row * shape[-1] + station

    def at(values: Values) -> Values:
        return _gather(values, combination, station, element)

    def numbers(demand: Demand) -> Floats:
        rows = np.empty((len(NUMBERS), element.size))
        for row, name in zip(rows, NUMBERS, strict=True):
            row[:] = at(getattr(demand, name))
        return rows

    first = np.flatnonzero(np.diff(station, prepend=-1))
    return Elements(
        element=element,
        station=station,
        beam=beam[station],
        stations=station[first],
        first_of_station=first,
        first_of_beam=np.flatnonzero(np.diff(beam[station], prepend=-1)),
        total=numbers(acting.total),
        shares=tuple(numbers(share) for share in acting.shares),
        can_sag=at(acting.total.can_sag),
        can_hog=at(acting.total.can_hog),
    )


def _kept(demands: Sequence[Demand]) -> Bools:
    """Whether an arrangement differs from all earlier ones of its combination (C, A, N).

    The peaks belong to the combination, and what can sag or hog to the station.
    """
    shape = demands[0].moment.shape
    kept = np.ones(shape, dtype=np.bool_)
    values = [getattr(demand, name) for demand in demands for name in _ACTING]
    for later in range(1, shape[1]):
        for earlier in range(later):
            same = np.ones((shape[0], shape[2]), dtype=np.bool_)
            for array in values:
                same &= array[:, later] == array[:, earlier]
            kept[:, later] &= ~same
    return kept


def _gather(values: Values, combination: Ints, station: Ints, element: Ints) -> Values:
    """Values (C, A, N) at the elements, without spreading out what is broadcast."""
    along_combinations, along_arrangements, _ = (stride != 0 for stride in values.strides)
    if along_arrangements:
        return values.reshape(-1)[element]
    first: Values = values[:, 0]
    if not along_combinations:
        first, combination = first[:1], np.zeros_like(combination)
    rows: Ints = combination * values.shape[-1] + station
    return first.reshape(-1)[rows]


def greatest_of_beams(values: Floats, beam: Ints, beams: int) -> Floats:
    """Greatest value of each beam (B), -inf where it has none; beams ascend."""
    greatest = np.full(beams, -np.inf)
    if beam.size:
        first = np.flatnonzero(np.diff(beam, prepend=-1))
        greatest[beam[first]] = np.maximum.reduceat(values, first)
    return greatest


def first_greatest(values: Floats, first: Ints) -> tuple[Floats, Ints]:
    """Greatest value of each stretch that begins at ``first``, and its first row."""
    greatest = np.maximum.reduceat(values, first)
    lengths = np.diff(np.append(first, values.size))
    rows = np.arange(values.size)
    candidates = np.where(values == np.repeat(greatest, lengths), rows, values.size)
    return greatest, np.minimum.reduceat(candidates, first)
