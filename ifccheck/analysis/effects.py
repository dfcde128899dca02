"""Cases put together: the extremes of moment and shear, each with what acts at the same time.

In each combination and at each station four arrangements of the cases are looked at: those
that give the greatest and the least moment, and the greatest and the least shear. A case takes
its unfavourable or its favourable factor as a whole, by its own effect on that extreme; a case
without effect on it takes the factor that makes the accompanying effect worse.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.statics import CaseEffects
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints

GREATEST_MOMENT, LEAST_MOMENT, GREATEST_SHEAR, LEAST_SHEAR = range(4)
ARRANGEMENTS = 4


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
    upward: Bools
    """Whether cases without effect on the extreme make the accompanying effect greater rather
    than less (C, 4, N)"""


def combine(cases: CaseEffects, factors: Floats, arrangements: int = ARRANGEMENTS) -> Effects:
    """Extremes of moment and shear in every combination at every station.

    Parameters
    ----------
    cases
        Effects of each case alone (K, N).
    factors
        Unfavourable and favourable factor of each case (C, K, 2).
    arrangements
        How many of the arrangements are wanted: 2 are those of the moments.
    """
    shape = (len(factors), arrangements, cases.moment.shape[1])
    greater, lesser = factors.max(axis=2), factors.min(axis=2)
    moment, shear, upward = np.empty(shape), np.empty(shape), np.empty(shape, np.bool_)
    for arrangement in range(arrangements):
        own, other, most = _roles(cases, arrangement)
        extreme, together, up = _extreme(own, other, greater, lesser, most=most)
        of_moment = arrangement in (GREATEST_MOMENT, LEAST_MOMENT)
        moment[:, arrangement], shear[:, arrangement] = (
            (extreme, together) if of_moment else (together, extreme)
        )
        upward[:, arrangement] = up
    return Effects(cases, greater, lesser, moment, shear, upward)


def _roles(cases: CaseEffects, arrangement: int) -> tuple[Floats, Floats, bool]:
    """The effect that the arrangement drives, the one that comes with it, and whether the
    greatest is sought."""
    most = arrangement in (GREATEST_MOMENT, GREATEST_SHEAR)
    if arrangement in (GREATEST_MOMENT, LEAST_MOMENT):
        return cases.moment, cases.shear, most
    return cases.shear, cases.moment, most


def _extreme(
    own: Floats, other: Floats, greater: Floats, lesser: Floats, *, most: bool
) -> tuple[Floats, Floats, Bools]:
    """The extreme (C, N), what acts with it, and the way that cases without effect on it go."""
    raising, lowering = (greater, lesser) if most else (lesser, greater)
    extreme = _weighted(raising, np.maximum(own, 0.0)) + _weighted(lowering, np.minimum(own, 0.0))
    worse = own > 0.0 if most else own < 0.0
    together = _weighted(greater, other * worse) + _weighted(lesser, other * ~worse)
    upward = np.ones(extreme.shape, np.bool_)
    columns = np.flatnonzero(((own == 0.0) & (other != 0.0)).any(axis=0))
    if columns.size:
        together[:, columns], upward[:, columns] = _with_idle(
            own[:, columns], other[:, columns], worse[:, columns], greater, lesser
        )
    return extreme, together, upward


def _weighted(factors: Floats, effects: Floats) -> Floats:
    """Sum of the cases' effects (K, N), each times its factor (C, K), for every combination.

    Not a matrix product, which would wake a pool of threads for a sum over few cases.
    """
    return np.asarray(np.einsum("ck,kn->cn", factors, effects))


def _with_idle(
    own: Floats, other: Floats, worse: Bools, greater: Floats, lesser: Floats
) -> tuple[Floats, Bools]:
    """What acts with an extreme on which some cases have no effect: the worse of the two ways
    that those may go together (C, N), and whether that is upward."""
    idle = own == 0.0
    steady = np.where(idle, 0.0, other)
    base = _weighted(greater, steady * worse) + _weighted(lesser, steady * ~worse)
    up = np.where(idle, np.maximum(other, 0.0), 0.0)
    down = np.where(idle, np.minimum(other, 0.0), 0.0)
    highest = base + _weighted(greater, up) + _weighted(lesser, down)
    lowest = base + _weighted(lesser, up) + _weighted(greater, down)
    upward = np.abs(highest) >= np.abs(lowest)
    return np.where(upward, highest, lowest), upward


def case_share(effects: Effects, case: int) -> tuple[Floats, Floats]:
    """The part that one case has in moment and shear of every arrangement (C, 4, N)."""
    moment, shear = effects.cases.moment[case], effects.cases.shear[case]
    factor = np.empty(effects.moment.shape)
    greater, lesser = effects.greater[:, case, None], effects.lesser[:, case, None]
    for arrangement in range(ARRANGEMENTS):
        own, other = (moment, shear) if arrangement < GREATEST_SHEAR else (shear, moment)
        most = arrangement in (GREATEST_MOMENT, GREATEST_SHEAR)
        worse = own > 0.0 if most else own < 0.0
        idle = own == 0.0
        upward = effects.upward[:, arrangement]
        full = worse | (idle & (upward == (other > 0.0)))
        factor[:, arrangement] = np.where(full, greater, lesser)
    return factor * moment, factor * shear


@dataclass(frozen=True, slots=True)
class Demands:
    """What acts at each station, and the part of each case that may be multiplied.

    With its loads multiplied by k, case ``scaled[i]`` makes every field of numbers
    ``total + (k - 1) * shares[i]``; ``can_sag`` and ``can_hog`` hold for every k >= 0.
    """

    total: Demand
    scaled: tuple[int, ...]
    shares: tuple[Demand, ...]


def demands(
    effects: Effects,
    critical: Ints,
    scaled: Sequence[int] = (),
    unbounded: Bools | None = None,
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

    Notes
    -----
    The shear at the critical section serves a nearer station only where, in the same
    arrangement, the reaction compresses the end whatever a scaled case is multiplied by; else
    the station's own shear is checked.
    """
    parts = [case_share(effects, case) for case in scaled]
    serves = _compressed(effects, critical, [shear for _, shear in parts])
    sag, hog = _reversible(effects, [moment for moment, _ in parts])
    sagging, hogging = case_peaks(effects.cases)
    shape = effects.moment.shape
    station_beam = effects.cases.beam

    def demand_of(moment: Floats, shear: Floats, factors: Floats, rows: Ints) -> Demand:
        return Demand(
            moment=moment,
            shear=shear,
            critical_shear=_critical_shear(shear, critical, serves),
            peak_sagging=_spread(_weighted(factors, sagging[rows]), station_beam, shape),
            peak_hogging=_spread(_weighted(factors, hogging[rows]), station_beam, shape),
            can_sag=np.broadcast_to(sag, shape),
            can_hog=np.broadcast_to(hog, shape),
        )

    every = np.arange(effects.greater.shape[1])
    total = demand_of(effects.moment, effects.shear, effects.greater, every)
    if unbounded is not None and unbounded.any():
        total = _without_bounds(total, unbounded[station_beam])
    shares = tuple(
        demand_of(moment, shear, effects.greater[:, [case]], np.array([case]))
        for case, (moment, shear) in zip(scaled, parts, strict=True)
    )
    return Demands(total, tuple(scaled), shares)


def _without_bounds(total: Demand, unbounded: Bools) -> Demand:
    def freed(peak: Floats) -> Floats:
        return np.where(unbounded & (peak > 0.0), np.inf, peak)

    return replace(
        total, peak_sagging=freed(total.peak_sagging), peak_hogging=freed(total.peak_hogging)
    )


def _spread(per_beam: Floats, station_beam: Ints, shape: tuple[int, ...]) -> Floats:
    """Values (C, B) at every station and arrangement (C, 4, N)."""
    return np.broadcast_to(per_beam[:, None, station_beam], shape)


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
    shear = effects.shear[..., rows] * pushing
    serves = shear > 0.0
    for share in shares:
        part = share[..., rows] * pushing
        serves &= (part >= 0.0) & (shear - part >= -1e-9 * np.abs(shear))
    return _Near(rows, serves)


def _critical_shear(shear: Floats, critical: Ints, near: _Near) -> Floats:
    if not near.rows.size:
        return shear
    checked = shear.copy()
    there = shear[..., critical[near.rows]]
    checked[..., near.rows] = np.where(near.serves, there, shear[..., near.rows])
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


def case_peaks(cases: CaseEffects) -> tuple[Floats, Floats]:
    """Upper bounds of the sagging and of the hogging moment of each case (K, B), both >= 0.

    Between two stations the moment of a steady load stays below the tangents at both.
    """
    if not cases.moment.size:
        empty = np.zeros(cases.end_moments.shape[:2])
        return empty, empty
    return _peaks(cases, cases.moment, cases.shear), _peaks(cases, -cases.moment, -cases.shear)


def _peaks(cases: CaseEffects, moment: Floats, shear: Floats) -> Floats:
    """Greatest moment of each case on each beam, between stations too (K, B)."""
    rise, fall = shear[:, :-1], shear[:, 1:]
    gap = np.diff(cases.x)
    turns = (cases.beam[1:] == cases.beam[:-1]) & (rise > 0.0) & (fall < 0.0) & (gap > 0.0)
    case, row = np.nonzero(turns)
    before, after = rise[case, row], fall[case, row]
    low, high, width = moment[case, row], moment[case, row + 1], gap[row]
    reach = np.clip((high - low - after * width) / (before - after), 0.0, width)
    bounded = moment.copy()
    bounded[case, row] = np.maximum(low + before * reach, low)
    peaks = np.zeros(cases.end_moments.shape[:2])
    first = np.flatnonzero(np.diff(cases.beam, prepend=-1))
    peaks[:, cases.beam[first]] = np.maximum.reduceat(bounded, first, axis=1)
    return np.maximum(peaks, 0.0)


def turning_places(effects: Effects, *, alone: bool = True) -> tuple[Ints, Floats]:
    """Places between stations where the moment of a combination, or of a case alone, turns.

    Between two stations a case keeps the factor that fits the sum of its moments at both, and
    the shear is taken as a straight line.

    Parameters
    ----------
    effects
        Effects at stations.
    alone
        Whether the moments of the cases alone are looked at, too.

    Returns
    -------
    tuple
        Row of the beam and x [mm] of each, to be made stations.
    """
    greater, lesser = effects.greater, effects.lesser
    if alone:
        single = np.eye(greater.shape[1])
        greater, lesser = np.concatenate([greater, single]), np.concatenate([lesser, single])
    found = [_turns(effects.cases, greater, lesser, sign) for sign in (1.0, -1.0)]
    beam = np.concatenate([part[0] for part in found])
    x = np.concatenate([part[1] for part in found])
    x = np.round(x, 3)
    order = np.lexsort((x, beam))
    beam, x = beam[order], x[order]
    new = np.ones(len(x), np.bool_)
    new[1:] = (beam[1:] != beam[:-1]) | (x[1:] != x[:-1])
    return beam[new], x[new]


def _turns(cases: CaseEffects, greater: Floats, lesser: Floats, sign: float) -> tuple[Ints, Floats]:
    """Where the greatest sagging (sign 1) or hogging (sign -1) moment lies within an interval."""
    gap = np.diff(cases.x)
    rows = np.flatnonzero((cases.beam[1:] == cases.beam[:-1]) & (gap > 1.0))
    moment, shear = cases.moment * sign, cases.shear * sign
    worse = moment[:, rows] + moment[:, rows + 1] > 0.0

    def combined(effect: Floats) -> Floats:
        return _weighted(greater, effect * worse) + _weighted(lesser, effect * ~worse)

    first, last = combined(shear[:, rows]), combined(shear[:, rows + 1])
    combination, interval = np.nonzero((first > 0.0) & (last < 0.0))
    before, after = first[combination, interval], last[combination, interval]
    full = np.where(worse[:, interval], greater.T[:, combination], lesser.T[:, combination])
    start = (full * moment[:, rows[interval]]).sum(axis=0)
    part, width = before / (before - after), gap[rows[interval]]
    apex = start + before * part * width / 2.0
    inner = (part > 1e-3) & (part < 1.0 - 1e-3) & (apex > 0.0)
    at = rows[interval]
    return cases.beam[at[inner]], (cases.x[at] + part * width)[inner]
