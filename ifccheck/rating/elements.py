"""The distinct elements of a batch: every arrangement at every station, equal ones once."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.effects import Demands, Effects
from ifccheck.analysis.stations import starts
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints

NUMBERS = ("moment", "shear", "critical_shear", "peak_sagging", "peak_hogging")
"""Fields of a Demand that grow with the loads"""
_PEAKS = NUMBERS[3:]

AT_ONCE = 16384
"""Elements evaluated together, so that their arrays stay in the processor's cache"""


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
    first_of_station: Ints
    """First element of each station (N)"""
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

    def first(self) -> Demand:
        """What acts at the first element of each station (N)."""
        rows = self.first_of_station
        total = self.total.take(rows, axis=1, mode="clip")
        return demand_of(total, self.can_sag[rows], self.can_hog[rows])


def stretches(size: int) -> Iterator[slice]:
    """Elements, so many at a time that arrays stay in the processor's cache."""
    for start in range(0, size, AT_ONCE):
        yield slice(start, min(start + AT_ONCE, size))


def demand_of(numbers: Floats, can_sag: Bools, can_hog: Bools) -> Demand:
    """A Demand of its numbers (NUMBERS, E)."""
    moment, shear, critical_shear, peak_sagging, peak_hogging = numbers
    return Demand(moment, shear, critical_shear, peak_sagging, peak_hogging, can_sag, can_hog)


def distinct_elements(effects: Effects, acting: Demands, beam: Ints) -> Elements:
    """Elements of a batch without those that equal an earlier arrangement.

    Parameters
    ----------
    effects
        Moment and shear of every arrangement.
    acting
        Demand of every arrangement (C, A, N).
    beam
        Beam of each station (N), ascending from 0, every beam with a station.
    """
    arrangements, stations = acting.total.moment.shape[-2:]
    kept = _kept(effects, acting).reshape(-1, stations)
    station, row = np.nonzero(np.ascontiguousarray(kept.T))
    element = row * stations + station
    of_combination = row // arrangements * stations + station

    def numbers(demand: Demand) -> Floats:
        rows = np.empty((len(NUMBERS), element.size))
        for out, name in zip(rows, NUMBERS, strict=True):
            values = getattr(demand, name)
            if name not in _PEAKS:
                np.take(values, element, out=out, mode="clip")
            else:
                np.take(values[:, 0], of_combination, out=out, mode="clip")
        return rows

    of_beam = beam[station]
    return Elements(
        element=element,
        station=station,
        beam=of_beam,
        first_of_station=starts(station),
        first_of_beam=starts(of_beam),
        total=numbers(acting.total),
        shares=tuple(numbers(share) for share in acting.shares),
        can_sag=acting.total.can_sag[0, 0].take(station, mode="clip"),
        can_hog=acting.total.can_hog[0, 0].take(station, mode="clip"),
    )


def ask_nothing(elements: Elements, disturbed: Bools) -> None:
    """Take away, in place, what acts at some stations (N), whose sections nothing is asked of.

    The peaks stay: the greatest moment of a beam may stand there.
    """
    if disturbed.any():
        rows = disturbed[elements.station]
        for numbers in (elements.total, *elements.shares):
            numbers[: len(NUMBERS) - len(_PEAKS), rows] = 0.0


def _kept(effects: Effects, acting: Demands) -> Bools:
    """Whether an arrangement differs from all earlier ones that bound as much (C, A, N).

    Two arrangements of a combination in which the same cases have their greater factors are one;
    so is one in two combinations in which every case has the same factor, where the later one's
    peaks are no greater, for a looser bound never makes a utilisation less. Where a case is idle
    or moves the numbers are compared, and where another station's shear may be checked that one,
    too.
    """
    demands = acting.total, *acting.shares
    kept = np.ones(acting.total.moment.shape, dtype=np.bool_)
    combinations, arrangements = acting.total.moment.shape[:-1]
    compared = _compared(effects)
    numbers = _numbers_at(demands, compared)
    telling = effects.greater != effects.lesser
    for later, earlier in _pairs(arrangements):
        unlike = effects.full[later] != effects.full[earlier]
        apart = np.array([unlike[cases].any(axis=0) for cases in telling])
        apart[:, compared] = _differ(numbers[:, :, later], numbers[:, :, earlier])
        apart |= apart.take(acting.critical, axis=1, mode="clip")
        kept[:, later] &= apart
    first = starts(effects.cases.beam)
    span = np.repeat(np.arange(first.size), np.diff(first, append=effects.cases.beam.size))
    bounded = _bounded(demands, first)
    for later, earlier in _pairs(combinations):
        if bounded[later, earlier].any():
            apart = _unlike_factors(effects, later, earlier)
            apart[:, compared] = _differ(numbers[:, later], numbers[:, earlier])
            apart |= apart.take(acting.critical, axis=1, mode="clip")
            kept[later] &= apart | ~bounded[later, earlier][span]
    return kept


def _compared(effects: Effects) -> Ints:
    """Stations at which like factors do not mean like effects: where a case is idle, and where a
    train may stand elsewhere in each arrangement."""
    moving = effects.cases.moving
    if moving is None:
        return effects.idle
    acts = ((moving.moment != 0.0) | (moving.shear != 0.0)).any(axis=(0, 1))
    return np.union1d(effects.idle, np.flatnonzero(acts))


def _pairs(count: int) -> Iterator[tuple[int, int]]:
    """Every one with each earlier one."""
    return ((later, earlier) for later in range(count) for earlier in range(later))


def _numbers_at(demands: Sequence[Demand], stations: Ints) -> Floats:
    """Moments and shears at some stations (numbers, C, A, stations)."""
    return np.array(
        [
            values.take(stations, axis=-1, mode="clip")
            for demand in demands
            for values in (demand.moment, demand.shear)
        ]
    )


def _differ(numbers: Floats, others: Floats) -> Bools:
    """Whether any of the numbers (numbers, ...) differs from the other."""
    different: Bools = numbers[0] != others[0]
    for one, other in zip(numbers[1:], others[1:], strict=True):
        different |= one != other
    return different


def _unlike_factors(effects: Effects, later: int, earlier: int) -> Bools:
    """Whether some case that acts has another factor in the later combination (A, N)."""
    unlike = np.zeros(effects.full[:, 0].shape, dtype=np.bool_)
    for case in range(effects.greater.shape[1]):
        full = effects.full[:, case]
        if effects.greater[later, case] != effects.greater[earlier, case]:
            unlike |= full
        if effects.lesser[later, case] != effects.lesser[earlier, case]:
            acts = (effects.cases.moment[case] != 0.0) | (effects.cases.shear[case] != 0.0)
            unlike |= acts & ~full
    return unlike


def _bounded(demands: Sequence[Demand], first: Ints) -> Bools:
    """Whether the peaks of a combination are no greater than those of another on a span, whatever
    a case is multiplied by (C, C, S); ``first`` is the first station of each span."""
    total, *shares = demands
    bounded = np.ones((len(total.moment), len(total.moment), first.size), dtype=np.bool_)
    for name in _PEAKS:
        whole = getattr(total, name)[:, 0, first]
        parts = [getattr(share, name)[:, 0, first] for share in shares]
        for each in (whole, *parts, *(whole - part for part in parts)):
            bounded &= each[:, None] <= each
    return bounded


def greatest_of_beams(values: Floats, beam: Ints, beams: int) -> Floats:
    """Greatest value of each beam (B), -inf where it has none; beams ascend."""
    greatest = np.full(beams, -np.inf)
    if beam.size:
        first = starts(beam)
        greatest[beam[first]] = np.maximum.reduceat(values, first)
    return greatest


def first_greatest(values: Floats, first: Ints, stretch: Ints | None = None) -> tuple[Floats, Ints]:
    """Greatest value of each stretch that begins at ``first``, and its first row; ``stretch``
    numbers the stretches of the values, where that is known."""
    greatest = np.maximum.reduceat(values, first)
    if stretch is None:
        stretch = np.repeat(np.arange(first.size), np.diff(first, append=values.size))
    rows = np.flatnonzero(values == greatest.take(stretch, mode="clip"))
    return greatest, rows[starts(stretch[rows])]
