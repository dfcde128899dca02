"""Places between stations where moments turn, which should be stations themselves."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.arrangements import GREATEST_MOMENT, LEAST_MOMENT, put_in, weighted
from ifccheck.analysis.statics import CaseEffects
from ifccheck.analysis.stations import SAME_PLACE
from ifccheck.mechanics.arrays import Bools, Floats, Ints

NEAR = 1e-3
"""Places nearer to a station than this need none of their own [mm]"""


@dataclass(frozen=True, slots=True)
class Turns:
    """Places between stations where the moment of a combination, or of a case alone, turns (T)."""

    row: Ints
    """Station before each"""
    beam: Ints
    x: Floats
    """[mm]"""
    moment: Floats
    """About what it reaches there, sagging positive [N*mm]"""

    def take(self, rows: Ints | Bools) -> Turns:
        """Some of them."""
        return Turns(self.row[rows], self.beam[rows], self.x[rows], self.moment[rows])

    def places(self) -> tuple[Ints, Floats]:
        """Row of the beam and x [mm] of each place, once, sorted: to be made stations."""
        x = np.round(self.x, 3)
        order = np.lexsort((x, self.beam))
        beam, x = self.beam[order], x[order]
        new: Bools = np.ones(len(x), np.bool_)
        new[1:] = (beam[1:] != beam[:-1]) | (x[1:] != x[:-1])
        return beam[new], x[new]


def turning_places(cases: CaseEffects, factors: Floats, *, alone: bool = True) -> Turns:
    """Places between stations where the moment of a combination, or of a case alone, turns.

    Between two stations a case keeps the factor that fits the sum of its moments at both, and
    the shear is taken as a straight line. A case that moves has the shear that goes with its
    greatest or its least moment, and as that tells only about where its wheel is, the crests of
    the greatest moments themselves are taken, too.

    Parameters
    ----------
    cases
        Effects of each case alone at stations (K, N).
    factors
        Unfavourable and favourable factor of each case (C, K, 2).
    alone
        Whether the moments of the cases alone are looked at, too.
    """
    greater, lesser = factors.max(axis=2), factors.min(axis=2)
    if alone:
        single = np.eye(greater.shape[1])
        greater, lesser = np.concatenate([greater, single]), np.concatenate([lesser, single])
    found = [_turns(cases, greater, lesser, sign) for sign in (1.0, -1.0)]
    if cases.moving is not None:
        found += [_crests(cases, greater, lesser, sign) for sign in (1.0, -1.0)]
    return Turns(
        *(np.concatenate([getattr(part, name) for part in found]) for name in Turns.__slots__)
    )


def _turns(cases: CaseEffects, greater: Floats, lesser: Floats, sign: float) -> Turns:
    """Where the greatest sagging (sign 1) or hogging (sign -1) moment lies within an interval."""
    own = GREATEST_MOMENT if sign > 0.0 else LEAST_MOMENT
    moments, shears = put_in(cases.moving, own, cases.moment, cases.shear)
    every = lesser.min(initial=0.0) < 0.0
    rows = np.arange(cases.x.size - 1) if every else _may_turn(shears, sign)
    gap = cases.x[rows + 1] - cases.x[rows]
    rows = rows[(cases.beam[rows + 1] == cases.beam[rows]) & (gap > 1.0)]
    moment, after = (moments.take(at, axis=1) * sign for at in (rows, rows + 1))
    worse: Bools = moment + after > 0.0

    def combined(effect: Floats) -> Floats:
        return weighted(greater, effect * worse) + weighted(lesser, effect * ~worse)

    first, last = (combined(shears.take(at, axis=1) * sign) for at in (rows, rows + 1))
    combination, interval = np.nonzero((first > 0.0) & (last < 0.0))
    before, beyond = first[combination, interval], last[combination, interval]
    full = np.where(worse[:, interval], greater.T[:, combination], lesser.T[:, combination])
    start = (full * moment[:, interval]).sum(axis=0)
    at = rows[interval]
    part, width = before / (before - beyond), cases.x[at + 1] - cases.x[at]
    apex = start + before * part * width / 2.0
    inner: Bools = (part > 1e-3) & (part < 1.0 - 1e-3) & (apex > 0.0)
    found = Turns(at, cases.beam[at], cases.x[at] + part * width, apex * sign)
    return found.take(inner)


def _crests(cases: CaseEffects, greater: Floats, lesser: Floats, sign: float) -> Turns:
    """Where parabolas through three stations that follow each other crest, beside a station at
    which the greatest sagging (sign 1) or hogging (sign -1) moment is no less than beside it."""
    own = GREATEST_MOMENT if sign > 0.0 else LEAST_MOMENT
    moments, _ = put_in(cases.moving, own, cases.moment, cases.shear)
    apart = np.append(True, (np.diff(cases.x) > SAME_PLACE) | (np.diff(cases.beam) != 0))
    rows = np.flatnonzero(apart)
    twins = np.append(rows[1:], cases.x.size) - 1
    size = moments[:, rows] * sign
    total = weighted(greater, np.maximum(size, 0.0)) + weighted(lesser, np.minimum(size, 0.0))
    before, here, after = total[:, :-2], total[:, 1:-1], total[:, 2:]
    combination, top = np.nonzero((here > 0.0) & (here >= before) & (here >= after))
    found = []
    for first in (-1, 0, 1):
        three = top[:, None] + first + np.arange(3)
        inside = (three[:, 0] >= 0) & (three[:, 2] < rows.size)
        three, of, peak = three[inside], combination[inside], top[inside] + 1
        place, height = _crest(cases, total[of[:, None], three], rows[three])
        found.append(_beside(cases, place, height * sign, rows[peak], twins[peak]))
    return Turns(
        *(np.concatenate([getattr(part, name) for part in found]) for name in Turns.__slots__)
    )


def _crest(cases: CaseEffects, values: Floats, rows: Ints) -> tuple[Floats, Floats]:
    """Place and height of the crest of parabolas through values at stations (T, 3); nan where they
    have none or lie on several spans (T)."""
    x, beam = cases.x[rows], cases.beam[rows]
    with np.errstate(divide="ignore", invalid="ignore"):
        rise = np.diff(values, axis=1) / np.diff(x, axis=1)
        bend = (rise[:, 1] - rise[:, 0]) / (x[:, 2] - x[:, 0])
        place = (x[:, 0] + x[:, 1]) / 2.0 - rise[:, 0] / (2.0 * bend)
        height = values[:, 0] + (place - x[:, 0]) * (rise[:, 0] + bend * (place - x[:, 1]))
    crests = (beam == beam[:, :1]).all(axis=1) & (bend < 0.0)
    return np.where(crests, place, np.nan), height


def _beside(cases: CaseEffects, place: Floats, moment: Floats, first: Ints, last: Ints) -> Turns:
    """Those of some places that lie in the interval before or after a station, of which the first
    and the last twin are given; neither is at an end of all stations."""
    x = cases.x
    left = (place > x[first - 1] + NEAR) & (place < x[first] - NEAR)
    right = (place > x[last] + NEAR) & (place < x[last + 1] - NEAR)
    row = np.where(left, first - 1, last)
    return Turns(row, cases.beam[first], place, moment).take(left | right)


def _may_turn(shear: Floats, sign: float) -> Ints:
    """Intervals at whose start some case's shear raises the moment of that sense and at whose end
    some case's lowers it: no sum of theirs, each times a factor not below 0, turns elsewhere."""
    rising: Bools = np.any(shear * sign > 0.0, axis=0)
    falling: Bools = np.any(shear * sign < 0.0, axis=0)
    return np.flatnonzero(rising[:-1] & falling[1:])
