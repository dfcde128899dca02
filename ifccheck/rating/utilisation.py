"""The greatest utilisation of each station and beam, and where it stands, from every element."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.elements import Elements, first_greatest, stretches
from ifccheck.standards import Quick


@dataclass(frozen=True, slots=True)
class Peaks:
    """A limit state at every station (N), under the loads as they are."""

    utilisation: Floats
    """The greatest that could be worked out (N); -inf where none could"""
    missing: Bools
    """Some could not be worked out (N)"""
    resistance: Floats
    """That of the greatest utilisation, or of one that could not be worked out (N)"""
    demand: Floats | None = None
    """Of each element (E), where the resistance is the same for all of a station"""
    each: Floats | None = None
    """Utilisation of each element (E), where it is not"""

    def at(self, rows: Ints, station: Ints) -> Floats:
        """Utilisation of some elements, and the stations that they stand at."""
        if self.each is not None:
            return self.each[rows]
        if self.demand is not None:
            return ratio(self.demand[rows], self.resistance[station])
        return np.where(self.missing, np.nan, self.utilisation)[station]


@dataclass(frozen=True, slots=True)
class Found:
    """Limit states that are evaluated together, under the loads as they are."""

    quick: Quick
    basis: Any
    """What they need of each station"""
    peaks: tuple[Peaks, ...]


def evaluate(quick: Quick, basis: Any, elements: Elements) -> Found:
    """Evaluate limit states at all elements; where no resistance depends on the loads, each
    station needs it but once."""
    if quick.loaded and quick.demanded is None:
        return Found(quick, basis, _peaks_of_elements(quick, basis, elements))
    evaluated = quick.evaluate(basis, elements.first())
    if quick.demanded is None:
        return Found(quick, basis, tuple(_peaks(*known) for known in evaluated))
    demands = quick.demanded(elements.demand(slice(None)))
    peaks = []
    for demand, (_, resistance) in zip(demands, evaluated, strict=True):
        greatest = np.maximum.reduceat(demand, elements.first_of_station)
        peaks.append(_peaks(ratio(greatest, resistance), resistance, demand))
    return Found(quick, basis, tuple(peaks))


def ratio(demand: Floats, resistance: Floats) -> Floats:
    """Demand over resistance: 0 where nothing is demanded, inf where nothing resists."""
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(demand <= 0.0, 0.0, demand / resistance)


def _peaks(utilisation: Floats, resistance: Floats, demand: Floats | None = None) -> Peaks:
    missing = np.isnan(utilisation)
    return Peaks(np.where(missing, -np.inf, utilisation), missing, resistance, demand)


def _peaks_of_elements(quick: Quick, basis: Any, elements: Elements) -> tuple[Peaks, ...]:
    utilisation, resistance = np.empty((2, len(quick.states), elements.element.size))
    for rows in stretches(elements.element.size):
        evaluated = quick.evaluate(basis.take(elements.station[rows]), elements.demand(rows))
        for state, found in enumerate(evaluated):
            utilisation[state, rows], resistance[state, rows] = found
    return tuple(
        peaks_of(*known, elements.first_of_station, elements.station)
        for known in zip(utilisation, resistance, strict=True)
    )


def peaks_of(
    utilisation: Floats, resistance: Floats, first_of_station: Ints, station: Ints
) -> Peaks:
    """The greatest utilisation of every station.

    Parameters
    ----------
    utilisation, resistance
        Of a limit state at every element, station after station (E).
    first_of_station
        Row of the first element of each station, ascending (N).
    station
        Station of each element (E).
    """
    absent = np.isnan(utilisation)
    if not absent.any():
        greatest, row = first_greatest(utilisation, first_of_station, station)
        missing = np.zeros(greatest.shape, dtype=np.bool_)
        return Peaks(greatest, missing, resistance[row], each=utilisation)
    _, row = first_greatest(np.where(absent, np.inf, utilisation), first_of_station, station)
    greatest = np.maximum.reduceat(np.where(absent, -np.inf, utilisation), first_of_station)
    missing = np.logical_or.reduceat(absent, first_of_station)
    return Peaks(greatest, missing, resistance[row], each=utilisation)


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

    @property
    def shown(self) -> Ints:
        """The element that a rating tells of (B): one without a utilisation, unless another
        exceeds 1."""
        incomplete = self.incomplete & (self.utilisation <= 1.0)
        return np.where(incomplete, self.incomplete_element, self.element)


def worst_of(peaks: Peaks, elements: Elements) -> Worst:
    """Find the greatest utilisation of every beam."""
    first = elements.station[elements.first_of_beam]
    greatest, station = first_greatest(peaks.utilisation, first)
    element = _first_element(peaks, elements, station, missing=False)
    incomplete, incomplete_element = np.zeros(first.shape, dtype=np.bool_), element
    if peaks.missing.any():
        lacks, lacking = first_greatest(peaks.missing.astype(np.float64), first)
        incomplete = lacks > 0.0
        incomplete_element = _first_element(peaks, elements, lacking, missing=True)
    return Worst(np.maximum(greatest, 0.0), element, incomplete, incomplete_element)


def _first_element(peaks: Peaks, elements: Elements, station: Ints, *, missing: bool) -> Ints:
    """The first element of each station with the greatest utilisation, or without any."""
    first = elements.first_of_station
    counts = np.append(first[1:], elements.element.size)[station] - first[station]
    begin = np.cumsum(counts) - counts
    rows = np.arange(counts.sum()) + np.repeat(first[station] - begin, counts)
    known = peaks.at(rows, np.repeat(station, counts))
    absent = np.isnan(known)
    values = absent.astype(np.float64) if missing else np.where(absent, -np.inf, known)
    chosen: Ints = elements.element[rows[first_greatest(values, begin)[1]]]
    return chosen


def by_state(found: Sequence[Found]) -> dict[str, Peaks]:
    """The peaks of each limit state by its name."""
    return {
        state.name: peaks
        for one in found
        for state, peaks in zip(one.quick.states, one.peaks, strict=True)
    }
