"""Places between stations at which a beam may be used more than at any station.

Stations stand where moments turn and where anything is known to change. What depends on moment
and shear together, or on bars that develop, may be greatest in between, and may jump there where
another rule begins to hold.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.stations import NOWHERE, Places, StationTable, join_places, places
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.rating.elements import demand_of
from ifccheck.rating.factors import Factors
from ifccheck.rating.loaded import Loaded
from ifccheck.rating.utilisation import Found, Worst, ratio

TOLERANCE = 5e-5
"""Part of a utilisation by which it may be exceeded between stations"""

PARTS = 8
"""Parts that an interval between two stations is cut into where it may be exceeded"""

NEAR = 0.5
"""Part of a limit that is reached at a station beside an interval in which it may be exceeded"""

NARROW = 0.05
"""Stations nearer to each other have nothing between them [mm]"""


@dataclass(frozen=True, slots=True)
class _Level:
    """What utilisations are held against, and what is multiplied before."""

    level: Floats
    """(B); inf where nothing is asked"""
    factor: Floats | None = None
    """Of the rated case (B)"""
    case: int = 0
    """Which of the rated cases"""


def exceeded_between(found: Sequence[Found], worst: Sequence[Worst], under: Loaded) -> Places:
    """Places between stations at which the greatest utilisation of a beam may be exceeded.

    Parameters
    ----------
    found
        All limit states under the loads as they are.
    worst
        The greatest of each on every beam.
    """
    greatest = np.max([each.utilisation for each in worst], axis=0)
    whole = ~np.any([each.incomplete for each in worst], axis=0)
    level = _Level(np.where(whole & (greatest > 0.0), greatest, np.inf))
    intervals = [
        _exceeded(one, [peaks.utilisation for peaks in one.peaks], level, under)
        for one in found
        if one.quick.loaded
    ]
    return _within(np.unique(np.concatenate(intervals)), under)


def limited_between(
    factors: Mapping[int, Factors],
    reached: Mapping[int, Sequence[Floats]],
    found: Sequence[Found],
    under: Loaded,
) -> Places:
    """Places between stations at which utilisation may exceed 1 below a rating factor.

    Parameters
    ----------
    factors
        Of each rated case, by its row.
    reached
        Greatest utilisation at each station under those factors (S, N), of the limit states
        whose resistance depends on the loads.
    found
        All limit states under the loads as they are.
    """
    places_of_cases = [NOWHERE]
    for number, case in enumerate(under.acting.scaled):
        factor = factors[case].factor
        limited = np.isfinite(factor) & (factor > 0.0)
        level = _Level(np.where(limited, 1.0, np.inf), np.where(limited, factor, 1.0), number)
        intervals = [
            _exceeded(one, _grown(one, level, under), level, under)
            if one.quick.steady
            else _exceeded(one, reached[case], level, under)
            for one in found
            if one.quick.loaded
        ]
        places_of_cases.append(_within(np.unique(np.concatenate(intervals)), under))
    return join_places(*places_of_cases)


def _grown(found: Found, level: _Level, under: Loaded) -> list[Floats]:
    """Greatest utilisation at each station with a case multiplied, of limit states whose demand
    is linear (S, N); nothing where the stations beside bound it anyway."""
    e, demanded = under.elements, found.quick.demanded
    unchanged = [np.zeros(under.stations.x.size) for _ in found.peaks]
    if demanded is None or level.factor is None or not _varies(found, under.stations):
        return unchanged
    more = (level.factor - 1.0)[e.beam]
    growth = demanded(demand_of(e.shares[level.case], e.can_sag, e.can_hog))
    return [
        ratio(np.maximum.reduceat(peaks.demand + more * each, e.first_of_station), peaks.resistance)
        for peaks, each in zip(found.peaks, growth, strict=True)
        if peaks.demand is not None
    ]


def _varies(found: Found, stations: StationTable) -> bool:
    """Whether any resistance differs between stations, but for places where it jumps."""
    wide = np.diff(stations.x) > NARROW
    wide &= stations.beam[1:] == stations.beam[:-1]
    return any(bool((np.diff(peaks.resistance)[wide] != 0.0).any()) for peaks in found.peaks)


def _exceeded(found: Found, utilisation: Sequence[Floats], level: _Level, under: Loaded) -> Ints:
    """Intervals in which one of some limit states may exceed a level, given what each reaches at
    the stations (S, N)."""
    stations, quick = under.stations, found.quick
    limit = level.level[stations.beam[:-1]] * (1.0 + TOLERANCE)
    wide = (np.diff(stations.x) > NARROW) & (stations.beam[1:] == stations.beam[:-1])
    most = None if quick.most is None else quick.most(found.basis, _peaks_of_moment(level, under))
    chosen = []
    for state, (each, peaks) in enumerate(zip(utilisation, found.peaks, strict=True)):
        near = np.maximum(each[:-1], each[1:]) > NEAR * limit
        rows = np.flatnonzero(wide & near)
        if most is not None:
            rows = rows[np.maximum(most[state][rows], most[state][rows + 1]) > limit[rows]]
        held = each, peaks.resistance, rows, limit[rows], stations
        chosen.append(_steady_intervals(*held) if quick.steady else _intervals(*held))
    return np.concatenate(chosen)


def _peaks_of_moment(level: _Level, under: Loaded) -> Demand:
    """The greatest moments of any combination, at every station (N)."""
    total = under.acting.total
    peaks = [total.peak_sagging[:, 0], total.peak_hogging[:, 0]]
    if level.factor is not None:
        more, share = (level.factor - 1.0)[under.stations.beam], under.acting.shares[level.case]
        parts = share.peak_sagging[:, 0], share.peak_hogging[:, 0]
        peaks = [peak + more * part for peak, part in zip(peaks, parts, strict=True)]
    sagging, hogging = (peak.max(axis=0) for peak in peaks)
    nothing, may = np.zeros(sagging.shape), np.ones(sagging.shape, dtype=np.bool_)
    return Demand(nothing, nothing, nothing, sagging, hogging, may, may)


def _steady_intervals(
    utilisation: Floats, resistance: Floats, rows: Ints, limit: Floats, stations: StationTable
) -> Ints:
    """The same of limit states whose resistance does not depend on the loads: no utilisation
    exceeds what the greatest demand and the least resistance make together."""
    apart = _apart(utilisation, resistance, rows) > limit
    return _intervals(utilisation, resistance, rows[apart], limit[apart], stations)


def _intervals(
    utilisation: Floats, resistance: Floats, rows: Ints, limit: Floats, stations: StationTable
) -> Ints:
    """Those of some intervals, each named by the station before, in which a utilisation (N) may
    exceed a limit.

    Straight lines tell that, but where resistance bends within an interval.
    """
    if not rows.size:
        return rows
    with np.errstate(divide="ignore", invalid="ignore"):
        beyond = _highest(_taken_on(utilisation, rows, stations)) > limit
        bends = _bends(_taken_on(resistance, rows, stations))
    beyond |= bends & (_apart(utilisation, resistance, rows) > limit)
    return rows[beyond]


def _apart(utilisation: Floats, resistance: Floats, rows: Ints) -> Floats:
    """What the greater demand and the lesser resistance of both ends make together."""
    with np.errstate(divide="ignore", invalid="ignore"):
        share = resistance[rows] / resistance[rows + 1]
        left = utilisation[rows] * np.maximum(share, 1.0)
        return np.maximum(left, utilisation[rows + 1] / np.minimum(share, 1.0))


@dataclass(frozen=True, slots=True)
class _TakenOn:
    """Values at both ends of some intervals, and as they are taken on from the two stations
    before and from the two after along straight lines."""

    left: Floats
    right: Floats
    ahead: Floats
    """At the end, from before"""
    back: Floats
    """At the start, from after"""


def _taken_on(values: Floats, rows: Ints, stations: StationTable) -> _TakenOn:
    """Values (N) about the intervals after some stations.

    Where there are no two stations before, or after, the slope is taken to change as much as it
    does on the other side.
    """
    before, own, after = (_rise(values, rows + step, stations) for step in (-1, 0, 1))
    gap = stations.x[rows + 1] - stations.x[rows]
    first = np.where(np.isnan(before), 2.0 * own - after, before)
    last = np.where(np.isnan(after), 2.0 * own - before, after)
    left, right = values[rows], values[rows + 1]
    return _TakenOn(left, right, left + first * gap, right - last * gap)


def _rise(values: Floats, rows: Ints, stations: StationTable) -> Floats:
    """Slope of values after some stations [1/mm]; nan where nothing lies between the next."""
    row = np.clip(rows, 0, stations.x.size - 2)
    gap = stations.x[row + 1] - stations.x[row]
    held = (gap > NARROW) & (stations.beam[row] == stations.beam[row + 1]) & (row == rows)
    return np.where(held, (values[row + 1] - values[row]) / gap, np.nan)


def _highest(v: _TakenOn) -> Floats:
    """About the most that values may reach within each interval.

    Where both lines cross within the interval, it stays below; where one lies above the station
    at its far end, something may jump, and it may come as near to that end as one likes.
    """
    rises, falls = v.ahead > v.right, v.back > v.left
    part = (v.back - v.left) / (v.back - v.left + v.ahead - v.right)
    crossing = v.left + part * (v.ahead - v.left)
    return np.where(rises & falls, crossing, np.where(rises, v.ahead, np.where(falls, v.back, 0.0)))


def _bends(v: _TakenOn) -> Bools:
    """Whether values lie on no straight line with the stations before, nor with those after."""
    straight: Bools = np.abs(v.ahead - v.right) <= TOLERANCE * v.right
    straight |= np.abs(v.back - v.left) <= TOLERANCE * v.left
    return ~straight


def _within(rows: Ints, under: Loaded) -> Places:
    """Places that cut the intervals after some stations."""
    stations, part = under.stations, np.arange(1, PARTS) / PARTS
    x = stations.x[rows, None] + part * (stations.x[rows + 1] - stations.x[rows])[:, None]
    beam = np.repeat(stations.beam[rows], part.size)
    asked = ~under.frame.disturbed.hold(beam, x.ravel())
    return places(beam[asked], x.ravel()[asked], two_sided=False)
