"""Where utilisation first exceeds 1 as a case grows, where resistance depends on the loads.

Utilisation is known at factor 1 and looked at at 0. The chord of the two tells which few elements
are likely to limit a beam; those are solved. Then every element is looked at just below the
factor found, and those that may not rise steadily also within it: what exceeds there is solved
in its turn, until nothing does.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from ifccheck.analysis.stations import starts
from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.elements import Elements, demand_of, greatest_of_beams, stretches
from ifccheck.rating.utilisation import Found
from ifccheck.standards import Quick

_TOLERANCE = 1e-9
_MOST_STEPS = 200
_DRIVEN = slice(0, 3)
"""The numbers of a demand that may have either sense; the rest are bounds, which only grow with
a case, and utilisation with them"""

_LIKELY = 0.8
"""Part of the least estimated factor over an element's own, from which on it is solved at once"""

_BESIDE = 1e-6
"""Part of a factor by which what it must not exceed is looked at below it"""

_INTERIOR = (0.1, 0.35, 0.7)
"""Parts of a factor at which elements that the case first relieves are looked at"""


@dataclass(frozen=True, slots=True)
class Least:
    """The least factor of each beam, and the limit state and the element that give it (B)."""

    factor: Floats
    """inf where there is none"""
    state: Ints
    element: Ints


def no_factor(beams: int) -> Least:
    """Beams that nothing limits."""
    return Least(np.full(beams, np.inf), *np.full((2, beams), -1, dtype=np.intp))


def mark(least: Least, chosen: Bools, beam: Ints, element: Ints) -> None:
    """Note, for each beam, the first limit state of those chosen (S, E), and the first of its
    elements in the batch."""
    for state in reversed(range(len(chosen))):
        rows = np.flatnonzero(chosen[state])
        if rows.size:
            beams = beam[rows]
            first = starts(beams)
            least.element[beams[first]] = np.minimum.reduceat(element[rows], first)
            least.state[beams[first]] = state


@dataclass(frozen=True, slots=True)
class _Growing:
    """Limit states (S) at some elements (E), sorted by beam, under a case that grows."""

    quick: Quick
    basis: Any
    """What the limit states need at each station"""
    station: Ints
    total: Floats
    """The numbers of a Demand (NUMBERS, E)"""
    share: Floats
    """The part of the case"""
    can_sag: Bools
    can_hog: Bools
    beam: Ints
    element: Ints
    """What each element stands for in the batch"""

    def utilisation(self, factor: Floats) -> Floats:
        """Utilisation (S, E), each element at its own factor (E); inf where it cannot be worked
        out."""
        found = np.empty((len(self.quick.states), self.beam.size))
        for rows in stretches(self.beam.size):
            for state, (utilisation, _) in enumerate(self._evaluated(factor, rows)):
                found[state, rows] = utilisation
        return known(found)

    def _evaluated(self, factor: Floats, rows: slice) -> Any:
        more = self.share[:, rows] * (factor[rows] - 1.0)
        more += self.total[:, rows]
        demand = demand_of(more, self.can_sag[rows], self.can_hog[rows])
        return self.quick.evaluate(self.basis.take(self.station[rows]), demand)

    def turns(self) -> Sequence[Floats]:
        """Factors at which another rule begins to hold (E)."""
        if self.quick.turns is None:
            return ()
        total, share = (
            demand_of(numbers, self.can_sag, self.can_hog) for numbers in (self.total, self.share)
        )
        return self.quick.turns(self.basis.take(self.station), total, share)

    def take(self, rows: Ints) -> _Growing:
        """The same at some of the elements."""
        return replace(
            self,
            station=self.station.take(rows, mode="clip"),
            total=self.total.take(rows, axis=1, mode="clip"),
            share=self.share.take(rows, axis=1, mode="clip"),
            can_sag=self.can_sag.take(rows, mode="clip"),
            can_hog=self.can_hog.take(rows, mode="clip"),
            beam=self.beam.take(rows, mode="clip"),
            element=self.element.take(rows, mode="clip"),
        )


def known(utilisation: Floats) -> Floats:
    """What cannot be worked out counts as exceeding; in place."""
    missing = np.isnan(utilisation)
    if missing.any():
        utilisation[missing] = np.inf
    return utilisation


def least_crossing(
    found: Found, elements: Elements, share: Floats, ceiling: Floats
) -> tuple[Least, Floats]:
    """Least factor below ``ceiling`` at which a limit state exceeds 1, per beam; inf if none.

    Parameters
    ----------
    found
        Limit states under the loads as they are.
    elements
        Demand of everything (E).
    share
        The part of it that the case makes (NUMBERS, E).
    ceiling
        Factors above which no one asks (B); 0 where no one asks at all.

    Returns
    -------
    tuple
        The factors, and the utilisation of each limit state and element just below that of its
        beam, or below the ceiling (S, E); 0 where that is 0.
    """
    e = elements
    growing = _Growing(
        found.quick, found.basis, e.station, e.total, share, e.can_sag, e.can_hog, e.beam, e.element
    )
    search = _Search(
        growing, ceiling, no_factor(ceiling.size), np.zeros((len(found.peaks), e.beam.size))
    )
    now = known(np.array([peaks.each for peaks in found.peaks]))
    worst = now.max(axis=0)
    driven = np.any(share[_DRIVEN] != 0.0, axis=0)
    rows = np.flatnonzero((driven | (worst > 1.0)) & (ceiling > 0.0)[e.beam])
    some, least = growing.take(rows), search.least
    alone = some.utilisation(np.zeros(rows.size))
    mark(least, alone > 1.0, some.beam, some.element)
    least.factor[least.element >= 0] = 0.0
    _solve_likely(search, some, alone.max(axis=0), now.take(rows, axis=1, mode="clip"))
    _solve_the_rest(search, worst)
    return least, search.reached


@dataclass(frozen=True, slots=True)
class _Search:
    """Elements under a growing case, and what is known so far of the factors of their beams."""

    growing: _Growing
    ceiling: Floats
    """(B)"""
    least: Least
    reached: Floats
    """Utilisation just below the reach, where it was looked at last (S, E)"""

    @property
    def reach(self) -> Floats:
        """Factors up to which elements must not exceed (B)."""
        return np.minimum(self.least.factor, self.ceiling)


@dataclass(frozen=True, slots=True)
class _Bracket:
    """Factors between which each beam begins to exceed (B), and by how much it does there."""

    low: Floats
    high: Floats
    below: Floats
    """Greatest utilisation less 1 at ``low``"""
    above: Floats
    """The same at ``high``; nan where it is not known, and may be below 0"""
    trial: Floats
    """Where to look first"""


def _solve_likely(search: _Search, some: _Growing, alone: Floats, now: Floats) -> None:
    """Solve the elements whose chords reach 1 first.

    Parameters
    ----------
    search
        Lowered to their factors.
    some
        Elements that the case drives (E).
    alone
        Their utilisation at factor 0 (E).
    now
        That of every limit state at factor 1 (S, E).
    """
    ceiling, beams = search.ceiling, search.ceiling.size
    worst = now.max(axis=0)
    with np.errstate(divide="ignore", invalid="ignore"):
        rate = (worst - alone) / (1.0 - alone)
    greatest = greatest_of_beams(rate, some.beam, beams)
    wanted = np.where((search.reach > 0.0) & (greatest > 0.0), _LIKELY * greatest, np.nan)
    rows = np.flatnonzero(rate >= wanted[some.beam])
    few, now = some.take(rows), now.take(rows, axis=1, mode="clip")
    excess = greatest_of_beams(worst[rows] - 1.0, few.beam, beams)
    over, within = (excess > 0.0) & (ceiling >= 1.0), (excess <= 0.0) & (ceiling > 1.0)
    mark(search.least, (now > 1.0) & over[few.beam], few.beam, few.element)
    search.least.factor[over] = 1.0
    below = greatest_of_beams(alone[rows] - 1.0, few.beam, beams)
    bracket = _Bracket(
        low=np.where(within, 1.0, 0.0),
        high=np.where(over, 1.0, ceiling),
        below=np.where(within, excess, below),
        above=np.where(over, excess, np.nan),
        trial=np.minimum(1.0 / np.maximum(greatest, 1e-300), ceiling),
    )
    _close_in(few, bracket, search.least)


def _solve_the_rest(search: _Search, now: Floats) -> None:
    """Lower factors, in place, until no element exceeds where it is looked at up to them."""
    growing, least, beams = search.growing, search.least, search.ceiling.size
    pending = search.reach > 0.0
    while pending.any():
        rows, factor = _exceeding(search, pending)
        if not rows.size:
            return
        bound = -greatest_of_beams(-factor, growing.beam[rows], beams)
        rows = rows[factor <= bound[growing.beam[rows]]]
        few, pending = growing.take(rows), np.isfinite(bound)
        least.factor[pending] = bound[pending]
        within = (bound > 1.0) & (greatest_of_beams(now[rows], few.beam, beams) <= 1.0)
        low = np.where(within, 1.0, 0.0)
        lower, upper = (few.utilisation(at[few.beam]) for at in (low, bound))
        mark(least, upper > 1.0, few.beam, few.element)
        below = greatest_of_beams(lower.max(axis=0) - 1.0, few.beam, beams)
        above = greatest_of_beams(upper.max(axis=0) - 1.0, few.beam, beams)
        bracket = _Bracket(low, np.where(pending, bound, 0.0), below, above, low)
        _close_in(few, replace(bracket, trial=_chord(bracket)), least)


def _exceeding(search: _Search, pending: Bools) -> tuple[Ints, Floats]:
    """Elements of the pending beams that exceed up to their reach, and the least factor at which
    each was seen to."""
    growing, reach = search.growing, search.reach
    rows = np.flatnonzero(pending[growing.beam])
    if rows.size < growing.beam.size:
        growing = growing.take(rows)
    beside = np.where(pending, reach * (1.0 - _BESIDE), 0.0)[growing.beam]
    utilisation = growing.utilisation(beside)
    search.reached[:, rows] = utilisation
    least = np.where(utilisation.max(axis=0) > 1.0, beside, np.inf)
    reversible = growing.can_sag & growing.can_hog
    relieved = np.flatnonzero(_relieved(growing) | reversible)
    if relieved.size:
        _look_within(growing.take(relieved), beside[relieved], least, relieved)
    found = np.flatnonzero(np.isfinite(least))
    return rows[found], least[found]


def _relieved(growing: _Growing) -> Bools:
    """Elements whose moment or shear the case first relieves."""
    relieved = np.zeros(growing.beam.size, dtype=np.bool_)
    for total, share in zip(growing.total[_DRIVEN], growing.share[_DRIVEN], strict=True):
        rest = total - share
        rest *= share
        relieved |= rest < 0.0
    return relieved


def _look_within(few: _Growing, most: Floats, least: Floats, rows: Ints) -> None:
    """Note in ``least`` at ``rows`` where elements exceed below ``most`` that may do so there and
    no longer at it: at several places, and on both sides of those where another rule begins to
    hold."""
    for fraction in _INTERIOR:
        _note(few, fraction * most, least, rows)
    both = np.flatnonzero(few.can_sag & few.can_hog)
    few, most, rows = few.take(both), most[both], rows[both]
    for turn in few.turns():
        within = np.flatnonzero((turn > 0.0) & (turn < most))
        some = few.take(within)
        for side in (1.0 - _BESIDE, 1.0 + _BESIDE):
            _note(some, turn[within] * side, least, rows[within])


def _note(few: _Growing, factor: Floats, least: Floats, rows: Ints) -> None:
    """Lower ``least`` at ``rows`` to the factors at which the few exceed."""
    if rows.size:
        seen = (few.utilisation(factor) > 1.0).any(axis=0)
        least[rows[seen]] = np.minimum(least[rows[seen]], factor[seen])


def _close_in(few: _Growing, bracket: _Bracket, least: Least) -> None:
    """Narrow every beam's bracket in place, keeping only elements that can still govern.

    Regula falsi in its Illinois form, exact in one step where utilisation is linear; a bracket
    that three steps do not halve is halved, for what jumps.
    """
    b, trial = bracket, bracket.trial
    last, width = np.zeros(trial.size, dtype=np.intp), b.high - b.low
    for step in range(1, _MOST_STEPS):
        found = few.utilisation(trial[few.beam])
        excess = greatest_of_beams(found.max(axis=0) - 1.0, few.beam, trial.size)
        over, under = excess > 0.0, (excess <= 0.0) & np.isfinite(excess)
        mark(least, found > 1.0, few.beam, few.element)
        least.factor[over] = trial[over]
        further = _extrapolated(b, trial, excess)
        b.below[over & (last > 0)] *= 0.5
        b.above[under & (last < 0)] *= 0.5
        b.high[over], b.above[over], last[over] = trial[over], excess[over], 1
        b.low[under], b.below[under], last[under] = trial[under], excess[under], -1
        open_ = b.high - b.low > _TOLERANCE * np.maximum(b.high, 1e-6)
        kept = open_[few.beam] & (~over[few.beam] | (found > 1.0).any(axis=0))
        if not kept.any():
            return
        if not kept.all():
            few = few.take(np.flatnonzero(kept))
        trial = np.where(np.isnan(b.above), further, _chord(b))
        if step % 3 == 0:
            slow = ~(b.high - b.low <= 0.5 * width) & ~np.isnan(b.above)
            trial = np.where(slow, b.low + 0.5 * (b.high - b.low), trial)
            width = b.high - b.low


def _chord(bracket: _Bracket) -> Floats:
    """Where the chord crosses 1, a little past it so that the far end closes in too."""
    low, high, below, above = bracket.low, bracket.high, bracket.below, bracket.above
    with np.errstate(invalid="ignore"):
        share = below / (below - above)
    share = np.where(np.isfinite(share) & np.isfinite(above), share, 0.5)
    width = high - low
    nudge = np.minimum(0.25 * _TOLERANCE * np.maximum(high, 1e-6) / np.maximum(width, 1e-300), 0.5)
    return low + width * np.clip(share, nudge, 1.0 - nudge)


def _extrapolated(bracket: _Bracket, trial: Floats, excess: Floats) -> Floats:
    """Where the chord from the bracket's low end through a trial reaches 1 beyond it, a little
    past that, and nowhere beyond the bracket's high end."""
    with np.errstate(divide="ignore", invalid="ignore"):
        slope = (excess - bracket.below) / (trial - bracket.low)
        further = trial - excess / slope * (1.0 + _TOLERANCE) + _TOLERANCE * trial
    return np.where(slope > 0.0, np.fmin(further, bracket.high), bracket.high)
