"""Rating factors of a rated case, for all beams together.

The rating factor of a beam is the upper end of the interval from 0 throughout which every
counted utilisation stays at or below 1 while the rated case's loads are multiplied and all
else stays at its full value.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.elements import Elements, demand_of, greatest_of_beams
from ifccheck.standards import LimitState, Quick

GREATEST_FACTOR = 1000.0
"""A case that does not govern up to this many times its loads is not limited."""
_TOLERANCE = 1e-9
_MOST_STEPS = 200
_TURNING = slice(0, 3)
"""The numbers of a demand that may change their sense"""
_AT_ONCE = 32768
"""Elements evaluated together, so that their arrays stay in the processor's cache"""
_BESIDE = 1e-6
"""Part of a factor by which what it must not exceed is looked at below it"""
_INTERIOR = (0.1, 0.35, 0.7)
"""Fractions of the bracket at which elements that may not be monotone are looked at."""


@dataclass(frozen=True, slots=True)
class Factors:
    """Rating factors of one case, one row per beam (B)."""

    factor: Floats
    """inf where not limited, 0 where the rest alone exceeds"""
    state: Ints
    """Row of the limit state that limits it, -1 where none does"""
    element: Ints
    """Flattened (arrangement, station) that limits it, -1 where none does"""
    x: Floats
    """Where that stands [mm]; nan where none does"""


@dataclass(frozen=True, slots=True)
class _Problem:
    """Limit states (S) under a rated case at some elements (E), sorted by beam."""

    quick: Quick
    basis: Any
    """What the limit states need at each element"""
    total: Floats
    """The numbers of a Demand (NUMBERS, E)"""
    share: Floats
    """The part of the case"""
    can_sag: Bools
    can_hog: Bools
    beam: Ints
    element: Ints
    """What each element stands for in the batch"""

    def everywhere(self, factor: Floats) -> Floats:
        """Utilisation of every element (S, E), each beam at its own factor (B).

        What cannot be worked out counts as exceeding.
        """

        found = np.empty((len(self.quick.states), self.beam.size))
        for rows in stretches(self.beam.size):
            more = self.share[:, rows] * (factor[self.beam[rows]] - 1.0)
            more += self.total[:, rows]
            demand = demand_of(more, self.can_sag[rows], self.can_hog[rows])
            evaluated = self.quick.evaluate(self.basis.take(rows), demand)
            for state, (utilisation, _) in enumerate(evaluated):
                found[state, rows] = utilisation
        found[np.isnan(found)] = np.inf
        return found

    def take(self, rows: Ints) -> _Problem:
        """The same at some of the elements."""
        return _Problem(
            quick=self.quick,
            basis=self.basis.take(rows),
            total=self.total[:, rows],
            share=self.share[:, rows],
            can_sag=self.can_sag[rows],
            can_hog=self.can_hog[rows],
            beam=self.beam[rows],
            element=self.element[rows],
        )


def stretches(size: int) -> Iterator[slice]:
    """Elements, so many at a time that arrays stay in the processor's cache."""
    for start in range(0, size, _AT_ONCE):
        yield slice(start, start + _AT_ONCE)


def evaluate_everywhere(quick: Quick, basis: Any, elements: Elements) -> tuple[Floats, Floats]:
    """Utilisation and resistance of limit states at all elements (S, E)."""
    utilisation, resistance = np.empty((2, len(quick.states), elements.element.size))
    for rows in stretches(elements.element.size):
        evaluated = quick.evaluate(basis.take(rows), elements.demand(rows))
        for state, found in enumerate(evaluated):
            utilisation[state, rows], resistance[state, rows] = found
    return utilisation, resistance


def rating_factors(
    states: Sequence[LimitState],
    evaluations: Sequence[tuple[Quick, Any]],
    elements: Elements,
    share: Floats,
    x: Floats,
    ceiling: Floats | None = None,
) -> Factors:
    """Solve the rating factor of one case on all beams at once.

    Parameters
    ----------
    states
        All limit states, by which those that limit are numbered.
    evaluations
        Limit states, each group with what it needs at the elements (E).
    elements
        Demand of everything.
    share
        The part of it that the rated case makes (NUMBERS, E).
    x
        Stations [mm] (N).
    ceiling
        Factors above which no one asks (B).

    Returns
    -------
    Factors
        Accurate to 1e-8 relative.
    """
    beams = elements.first_of_beam.size
    least = _Least(np.full(beams, np.inf), *np.full((2, beams), -1, dtype=np.intp))
    most = np.full(beams, GREATEST_FACTOR) if ceiling is None else ceiling
    for problem in sorted(
        _problems(evaluations, elements, share), key=lambda problem: not problem.quick.linear
    ):
        rows = np.array([states.index(state) for state in problem.quick.states])
        found = _least_factor(problem, np.minimum(least.factor, most))
        if not problem.quick.linear:
            _step_down(problem, found)
        better = np.flatnonzero(found.factor < least.factor)
        least.factor[better], least.element[better] = found.factor[better], found.element[better]
        least.state[better] = rows[found.state[better]]
    place = np.where(least.element >= 0, x[least.element % x.size], np.nan)
    return Factors(least.factor, least.state, least.element, place)


@dataclass(frozen=True, slots=True)
class _Least:
    """The least factor of each beam, and the limit state and the element that give it (B)."""

    factor: Floats
    state: Ints
    element: Ints


def _problems(
    evaluations: Sequence[tuple[Quick, Any]], elements: Elements, share: Floats
) -> list[_Problem]:
    """The limit states at the elements of the beams that the rated case acts on."""
    moved = np.any(share[:2] != 0.0, axis=0)
    reached = np.logical_or.reduceat(moved, elements.first_of_beam)[elements.beam]
    if not reached.any():
        return []
    e = elements
    problems = [
        _Problem(quick, basis, e.total, share, e.can_sag, e.can_hog, e.beam, e.element)
        for quick, basis in evaluations
    ]
    if reached.all():
        return problems
    rows = np.flatnonzero(reached)
    return [problem.take(rows) for problem in problems]


def _least_factor(problem: _Problem, ceiling: Floats) -> _Least:
    """Least factor below ``ceiling`` at which a limit state exceeds 1, per beam; inf if none.

    Where utilisation need not rise throughout, the bracket is looked into at several places.
    """
    low, high = np.zeros_like(ceiling), ceiling.copy()
    least = _Least(high, *np.full((2, ceiling.size), -1, dtype=np.intp))
    below = problem.everywhere(low)
    _mark(least, problem, below > 1.0)
    high[least.element >= 0] = 0.0
    if problem.quick.loaded:
        above = problem.everywhere(high)
        over = np.any(above > 1.0, axis=0)
        if not problem.quick.linear:  # the greater of nothing and a straight line has no hump
            _look_inside(problem, over, above, high)
        rows = np.flatnonzero(over & (high[problem.beam] > 0.0))
        if rows.size:
            governing, below, above = problem.take(rows), below[:, rows], above[:, rows]
            _mark(least, governing, above > 1.0)
            _close_in(governing, _bracket(governing, low, high, below, above), least)
    high[least.element < 0] = np.inf
    return least


def _step_down(problem: _Problem, least: _Least) -> None:
    """Lower factors, in place, just below which some element exceeds that no longer does at them.

    A utilisation may drop as a case grows, where another face or rule begins to hold.
    """
    for _ in range(_MOST_STEPS):
        limited = np.isfinite(least.factor) & (least.factor > 0.0)
        rows = np.flatnonzero(limited[problem.beam])
        if not rows.size:
            return
        beside = np.where(limited, least.factor * (1.0 - _BESIDE), 0.0)
        over = np.any(problem.take(rows).everywhere(beside) > 1.0, axis=0)
        beams = np.unique(problem.beam[rows[over]])
        if not beams.size:
            return
        again = problem.take(np.flatnonzero(np.isin(problem.beam, beams)))
        lower = _least_factor(again, beside)
        least.factor[beams], least.state[beams] = lower.factor[beams], lower.state[beams]
        least.element[beams] = lower.element[beams]


def _look_inside(problem: _Problem, over: Bools, above: Floats, high: Floats) -> None:
    """Find elements that exceed within the bracket, where the case first relieves them.

    Mark them in ``over``, lower ``high`` to where they do, and bring ``above``, the utilisation
    there, up to date.
    """
    rows = np.flatnonzero(_may_turn(problem) & (high[problem.beam] > 0.0))
    if not rows.size:
        return
    odd, bound = problem.take(rows), high.copy()
    for fraction in reversed(_INTERIOR):
        seen = np.any(odd.everywhere(fraction * high) > 1.0, axis=0)
        over[rows[seen]] = True
        bound[odd.beam[seen]] = fraction * high[odd.beam[seen]]
    lowered = np.flatnonzero((bound < high)[problem.beam] & over)
    high[:] = bound
    if lowered.size:
        above[:, lowered] = problem.take(lowered).everywhere(high)


def _may_turn(problem: _Problem) -> Bools:
    """Elements whose moment or shear the case first relieves."""
    share = problem.share[_TURNING]
    opposed = (problem.total[_TURNING] - share) * share < 0.0
    turning: Bools = np.any(opposed, axis=0)
    return turning


@dataclass(frozen=True, slots=True)
class _Bracket:
    """Factors between which each beam begins to exceed (B), and by how much it does there."""

    low: Floats
    high: Floats
    below: Floats
    """Greatest utilisation less 1 at ``low``; -1 at least"""
    above: Floats


def _bracket(
    problem: _Problem, low: Floats, high: Floats, below: Floats, above: Floats
) -> _Bracket:
    """The bracket of each beam from the utilisation of its elements at both ends (S, E).

    A linear utilisation is nowhere above its chord, so that no element exceeds below the
    least factor at which a chord does.
    """
    at_low = greatest_of_beams(below.max(axis=0) - 1.0, problem.beam, low.size)
    at_high = greatest_of_beams(above.max(axis=0) - 1.0, problem.beam, low.size)
    if problem.quick.linear:
        with np.errstate(invalid="ignore", divide="ignore"):
            crossing = np.where(above > 1.0, (1.0 - below) / (above - below), np.inf)
        least = -greatest_of_beams(-crossing.min(axis=0), problem.beam, low.size)
        better = np.isfinite(least) & (least > _TOLERANCE)
        low[better] += (high - low)[better] * least[better] * (1.0 - _TOLERANCE)
        at_low[better] = -_TOLERANCE
    return _Bracket(low, high, at_low, at_high)


def _close_in(problem: _Problem, bracket: _Bracket, least: _Least) -> None:
    """Narrow every beam's bracket in place, keeping only elements that can still govern.

    Regula falsi in its Illinois form, exact in one step where utilisation is linear; every
    fourth step halves the bracket, for what jumps.
    """
    low, high, below, above = bracket.low, bracket.high, bracket.below, bracket.above
    last = np.zeros(low.size, dtype=np.intp)
    for step in range(1, _MOST_STEPS):
        trial = low + 0.5 * (high - low) if step % 4 == 0 else _chord(bracket)
        found = problem.everywhere(trial) - 1.0
        excess = greatest_of_beams(found.max(axis=0), problem.beam, low.size)
        over, under = excess > 0.0, (excess <= 0.0) & np.isfinite(excess)
        _mark(least, problem, found > 0.0)
        hit = np.any(found > 0.0, axis=0)
        below[over & (last > 0)] *= 0.5
        above[under & (last < 0)] *= 0.5
        high[over], above[over], last[over] = trial[over], excess[over], 1
        low[under], below[under], last[under] = trial[under], excess[under], -1
        open_ = high - low > _TOLERANCE * np.maximum(high, 1e-6)
        kept = open_[problem.beam] & (hit | ~over[problem.beam])
        if not kept.any():
            return
        if not kept.all():
            problem = problem.take(np.flatnonzero(kept))


def _chord(bracket: _Bracket) -> Floats:
    """Where the chord crosses 1, a little past it so that the far end closes in too."""
    low, high, below, above = bracket.low, bracket.high, bracket.below, bracket.above
    with np.errstate(invalid="ignore"):
        share = below / (below - above)
    share = np.where(np.isfinite(share) & np.isfinite(above), share, 0.5)
    width = high - low
    nudge = np.minimum(0.25 * _TOLERANCE * np.maximum(high, 1e-6) / np.maximum(width, 1e-300), 0.5)
    return low + width * np.clip(share, nudge, 1.0 - nudge)


def _mark(least: _Least, problem: _Problem, chosen: Bools) -> None:
    """Note, for each beam, the first limit state of those chosen (S, E), and the first of its
    elements in the batch."""
    for state in reversed(range(len(chosen))):
        beam = problem.beam[chosen[state]]
        if beam.size:
            first = np.flatnonzero(np.diff(beam, prepend=-1))
            elements = np.minimum.reduceat(problem.element[chosen[state]], first)
            least.element[beam[first]], least.state[beam[first]] = elements, state
