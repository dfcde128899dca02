"""Cases put together: the extremes of moment and shear, each with what acts at the same time.

In each combination and at each station four arrangements of the cases are looked at: those
that give the greatest and the least moment, and the greatest and the least shear. A case takes
its unfavourable or its favourable factor as a whole, by its own effect on that extreme; a case
without effect on it takes the factor that makes the accompanying effect worse. A case that
moves stands in each arrangement where it makes the extreme greatest; parts of a case take their
factors each for itself.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.arrangements import (
    ARRANGEMENTS,
    GREATEST_MOMENT,
    GREATEST_SHEAR,
    LEAST_MOMENT,
    put_in,
    weighted,
)
from ifccheck.analysis.peaks import case_peaks
from ifccheck.analysis.statics import CaseEffects
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints


@dataclass(frozen=True, slots=True)
class Effects:
    """Moment and shear of every arrangement, with what is needed to tell each case's part."""

    cases: CaseEffects
    greater: Floats
    """The greater factor of each case in each combination (C, K)"""
    lesser: Floats
    """The lesser factor (C, K)"""
    moment: Floats
    """[N*mm] (C, 4, N)"""
    shear: Floats
    """[N], acting together with the moment (C, 4, N)"""
    full: Bools
    """Whether each case makes the extreme greater and so takes its greater factor (4, K, N)"""
    upward: Bools
    """Whether cases without effect on the extreme make the accompanying effect greater rather
    than less (C, 4, N)"""
    idle: Ints
    """Stations at which a case has a moment but no shear, or a shear but no moment"""


def combine(cases: CaseEffects, factors: Floats) -> Effects:
    """Extremes of moment and shear in every combination at every station.

    Parameters
    ----------
    cases
        Effects of each case alone (K, N).
    factors
        Unfavourable and favourable factor of each case (C, K, 2).
    """
    greater, lesser = factors.max(axis=2), factors.min(axis=2)
    arranged = _arranged(cases, slice(None))
    together = np.zeros((2, len(factors), ARRANGEMENTS, cases.x.size))
    full = np.empty((ARRANGEMENTS, *cases.moment.shape), np.bool_)
    upward = np.ones(together.shape[1:], np.bool_)
    idle = _idle_stations(arranged if cases.moving else arranged[:1])
    for arrangement, both in enumerate(arranged):
        own, most = _driving(arrangement)
        np.copyto(full[arrangement], both[:, own] > 0.0 if most else both[:, own] < 0.0)
        _add_weighted(together[:, :, arrangement], greater, lesser, both, full[arrangement])
        if idle.size:
            alone = both[:, 1 - own, idle] * (both[:, own, idle] == 0.0)
            beside = together[1 - own, :, arrangement]
            beside[:, idle], upward[:, arrangement, idle] = _with_idle(
                beside[:, idle], alone, greater - lesser
            )
    moment, shear = together
    return Effects(cases, greater, lesser, moment, shear, full, upward, idle)


def _arranged(cases: CaseEffects, rows: slice) -> list[Floats]:
    """Moment and shear of some cases (R, 2, N) in each arrangement."""
    if cases.moving is None:
        return [_both(cases.moment, cases.shear, rows)] * ARRANGEMENTS
    return [
        _both(*put_in(cases.moving, arrangement, cases.moment, cases.shear), rows)
        for arrangement in range(ARRANGEMENTS)
    ]


def _both(moment: Floats, shear: Floats, rows: slice) -> Floats:
    return np.stack([moment[rows], shear[rows]], axis=1)


def _idle_stations(arranged: Sequence[Floats]) -> Ints:
    """Where some case has a moment but no shear, or a shear but no moment."""
    found = np.zeros(arranged[0].shape[-1], np.bool_)
    for both in arranged:
        found |= ((both[:, 0] == 0.0) != (both[:, 1] == 0.0)).any(axis=0)
    return np.flatnonzero(found)


def _driving(arrangement: int) -> tuple[int, bool]:
    """The effect that the arrangement drives, 0 for the moment and 1 for the shear, and whether
    the greatest is sought."""
    own = 0 if arrangement in (GREATEST_MOMENT, LEAST_MOMENT) else 1
    return own, arrangement in (GREATEST_MOMENT, GREATEST_SHEAR)


def _add_weighted(
    total: Floats, greater: Floats, lesser: Floats, both: Floats, full: Bools
) -> None:
    """Add the cases' effects (K, 2, N) to the total (2, C, N), each times its greater factor
    where it is full (K, N), else its lesser one, in every combination (C, K)."""
    for case, effects in enumerate(both):
        raised = effects * full[case].astype(np.float64)
        rest = effects - raised
        for combination in range(len(greater)):
            for factors, part in ((greater, raised), (lesser, rest)):
                factor = factors[combination, case]
                if factor != 0.0:
                    total[:, combination] += factor * part


def _with_idle(beside: Floats, idle: Floats, more: Floats) -> tuple[Floats, Bools]:
    """What acts with an extreme on which some cases have no effect: the worse of the two ways
    that those may go together (C, M), and whether that is upward.

    Parameters
    ----------
    beside
        What acts with it while those cases have their lesser factors (C, M).
    idle
        Their effects (K, M), 0 for all others.
    more
        By how much the greater factor of each case exceeds the lesser (C, K).
    """
    highest = beside + weighted(more, np.maximum(idle, 0.0))
    lowest = beside + weighted(more, np.minimum(idle, 0.0))
    upward = np.abs(highest) >= np.abs(lowest)
    return np.where(upward, highest, lowest), upward


def case_share(effects: Effects, case: int, parts: Ints | None = None) -> tuple[Floats, Floats]:
    """The part that one case has in moment and shear of every arrangement (C, 4, N).

    Parameters
    ----------
    effects
        Of all rows of cases, or of parts of cases.
    case
        The case.
    parts
        Case of each row of the effects, where cases were split into parts.
    """
    rows = [case] if parts is None else np.flatnonzero(parts == case).tolist()
    share = _row_share(effects, rows[0])
    for row in rows[1:]:
        share += _row_share(effects, row)
    return share[0], share[1]


def _row_share(effects: Effects, row: int) -> Floats:
    """The part of one row in moment and shear of every arrangement (2, C, 4, N)."""
    share = np.zeros((2, *effects.moment.shape))
    greater, lesser = effects.greater[:, [row]], effects.lesser[:, [row]]
    for arrangement, (both,) in enumerate(_arranged(effects.cases, slice(row, row + 1))):
        full = effects.full[arrangement, row]
        _add_weighted(share[:, :, arrangement], greater, lesser, both[None], full[None])
        own, _ = _driving(arrangement)
        idle = np.flatnonzero((both[own] == 0.0) & (both[1 - own] != 0.0))
        if idle.size:
            other = both[1 - own, idle]
            rising = effects.upward[:, arrangement, idle] == (other > 0.0)
            share[1 - own, :, arrangement, idle] = (np.where(rising, greater, lesser) * other).T
    return share


def scaled_case(
    cases: CaseEffects, case: int, multiple: Floats, parts: Ints | None = None
) -> CaseEffects:
    """The effects with the loads of one case multiplied at each station (N); its rows as for
    ``case_share``."""
    rows = np.array([case]) if parts is None else np.flatnonzero(parts == case)
    moment, shear = cases.moment.copy(), cases.shear.copy()
    moment[rows] *= multiple
    shear[rows] *= multiple
    moving = None if cases.moving is None else cases.moving.times(rows, multiple)
    return replace(cases, moment=moment, shear=shear, moving=moving)


@dataclass(frozen=True, slots=True)
class Demands:
    """What acts at each station, and the part of each case that may be multiplied.

    With its loads multiplied by k, case ``scaled[i]`` makes every field of numbers
    ``total + (k - 1) * shares[i]``; ``can_sag`` and ``can_hog`` hold for every k >= 0.
    """

    total: Demand
    scaled: tuple[int, ...]
    shares: tuple[Demand, ...]
    critical: Ints
    """Station whose shear is checked at each where that serves (N)"""


def demands(
    effects: Effects,
    critical: Ints,
    scaled: Sequence[int] = (),
    unbounded: Bools | None = None,
    parts: Ints | None = None,
) -> Demands:
    """What acts at each station in every arrangement.

    Parameters
    ----------
    effects
        Moment and shear of every arrangement (C, 4, N).
    critical
        Row of the station whose shear is checked at each station where the reaction compresses
        the end of the beam: a later row near its start, an earlier one near its end, elsewhere
        the station itself (N).
    scaled
        Cases whose loads may be multiplied.
    unbounded
        Beams on which the greatest moment bounds nothing: their peaks are infinite, where they
        are not nothing (B).
    parts
        Case of each row of the effects, where cases were split into parts (K'): the share of a
        case is the sum over its parts.

    Notes
    -----
    The shear at the critical section serves a nearer station only where, in the same
    arrangement, the reaction compresses the end whatever a scaled case is multiplied by; else
    the station's own shear is checked.
    """
    own = [case_share(effects, case, parts) for case in scaled]
    serves = _compressed(effects, critical, [shear for _, shear in own])
    sag, hog = _reversible(effects, [moment for moment, _ in own])
    sagging, hogging = case_peaks(effects.cases)
    shape = effects.moment.shape
    station_beam = effects.cases.beam

    def demand_of(moment: Floats, shear: Floats, factors: Floats, rows: Ints) -> Demand:
        return Demand(
            moment=moment,
            shear=shear,
            critical_shear=_critical_shear(shear, critical, serves),
            peak_sagging=_spread(weighted(factors, sagging[rows]), station_beam, shape),
            peak_hogging=_spread(weighted(factors, hogging[rows]), station_beam, shape),
            can_sag=np.broadcast_to(sag, shape),
            can_hog=np.broadcast_to(hog, shape),
        )

    every = np.arange(effects.greater.shape[1])
    total = demand_of(effects.moment, effects.shear, effects.greater, every)
    if unbounded is not None and unbounded.any():
        total = _without_bounds(total, unbounded[station_beam])
    rows_of = every if parts is None else parts
    of = [np.flatnonzero(rows_of == case) for case in scaled]
    shares = tuple(
        demand_of(moment, shear, effects.greater[:, rows], rows)
        for rows, (moment, shear) in zip(of, own, strict=True)
    )
    return Demands(total, tuple(scaled), shares, critical)


def _without_bounds(total: Demand, unbounded: Bools) -> Demand:
    def freed(peak: Floats) -> Floats:
        return np.where(unbounded & (peak > 0.0), np.inf, peak)

    return replace(
        total, peak_sagging=freed(total.peak_sagging), peak_hogging=freed(total.peak_hogging)
    )


def _spread(per_beam: Floats, station_beam: Ints, shape: tuple[int, ...]) -> Floats:
    """Values (C, B) at every station and arrangement (C, 4, N)."""
    return np.broadcast_to(per_beam.take(station_beam, axis=1, mode="clip")[:, None], shape)


@dataclass(frozen=True, slots=True)
class _Near:
    """Stations nearer to a support than the critical section, and where its shear serves."""

    rows: Ints
    serves: Bools
    """(C, 4, len(rows))"""


def _compressed(effects: Effects, critical: Ints, shares: Sequence[Floats]) -> _Near:
    """Where the reaction compresses the end, whatever a scaled case is multiplied by."""
    rows = np.flatnonzero(critical != np.arange(len(critical))).astype(np.intp, copy=False)
    pushing = np.where(critical[rows] > rows, 1.0, -1.0)
    shear = effects.shear.take(rows, axis=-1, mode="clip") * pushing
    serves = shear > 0.0
    for share in shares:
        part = share.take(rows, axis=-1, mode="clip") * pushing
        serves &= (part >= 0.0) & (shear - part >= -1e-9 * np.abs(shear))
    return _Near(rows, serves)


def _critical_shear(shear: Floats, critical: Ints, near: _Near) -> Floats:
    if not near.rows.size:
        return shear
    checked = shear.copy()
    here, there = (
        shear.take(rows, axis=-1, mode="clip") for rows in (near.rows, critical[near.rows])
    )
    np.copyto(here, there, where=near.serves)
    checked[..., near.rows] = here
    return checked


def _reversible(effects: Effects, shares: Sequence[Floats]) -> tuple[Bools, Bools]:
    """Whether any arrangement can sag, and hog, at each station (N), for every multiple of a
    scaled case; where nothing bends, what the stations beside it do.

    The arrangement of the greatest moment sags, and that of the least hogs, if any does, with
    a scaled case or without it.
    """
    greatest, least = effects.moment[:, GREATEST_MOMENT], effects.moment[:, LEAST_MOMENT]
    sag = np.asarray((greatest > 0.0).any(axis=0))
    hog = np.asarray((least < 0.0).any(axis=0))
    for share in shares:
        raising, lowering = share[:, GREATEST_MOMENT], share[:, LEAST_MOMENT]
        rounding = 1e-9 * np.abs(greatest), 1e-9 * np.abs(least)
        sag |= ((raising > 0.0) | (greatest - raising > rounding[0])).any(axis=0)
        hog |= ((lowering < 0.0) | (least - lowering < -rounding[1])).any(axis=0)
    flat = ~(sag | hog)
    beam = effects.cases.beam
    return sag | (flat & _beside(sag, beam)), hog | (flat & _beside(hog, beam))


def _beside(flag: Bools, beam: Ints) -> Bools:
    """Whether a flag stands at one of the two stations before or after on the same beam."""
    found = np.zeros_like(flag)
    for step in (1, 2):
        same = beam[step:] == beam[:-step]
        found[step:] |= same & flag[:-step]
        found[:-step] |= same & flag[step:]
    return found
