"""Rating factors of a rated case, for all beams together.

The rating factor of a beam is the upper end of the interval from 0 throughout which every
counted utilisation stays at or below 1 while the rated case's loads are multiplied and all
else stays at its full value.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.rating.elements import Elements, greatest_of_beams
from ifccheck.standards import LimitState

GREATEST_FACTOR = 1000.0
"""A case that does not govern up to this many times its loads is not limited."""
_TOLERANCE = 1e-9
_MOST_STEPS = 200
_AT_ONCE = 8192
"""Elements evaluated together, so that their arrays stay in the processor's cache"""
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


@dataclass(frozen=True, slots=True)
class _Problem:
    """One limit state under a rated case, at the elements (E) of the beams that it acts on."""

    state: LimitState
    basis: Any
    """What the limit state needs at each element"""
    rest: Demand
    share: Demand
    beam: Ints
    element: Ints
    """What each element stands for in the batch"""

    def everywhere(self, factor: Floats) -> Floats:
        """Utilisation of every element, each beam at its own factor (B)."""
        return _counted(
            utilisation_everywhere(
                self.state, self.basis, self.beam.size, lambda rows: self._demand(rows, factor)
            )
        )

    def at(self, rows: Ints, factor: Floats) -> Floats:
        """Utilisation at some elements, each beam at its own factor (B)."""
        demand = self._demand(rows, factor)
        return _counted(self.state.quick.utilisation(self.basis.take(rows), demand))

    def _demand(self, rows: Ints | slice, factor: Floats) -> Demand:
        return _grown(self.rest.take(rows), self.share.take(rows), factor[self.beam[rows]])


def utilisation_everywhere(
    state: LimitState, basis: Any, size: int, demand: Callable[[slice], Demand]
) -> Floats:
    """Utilisation of a limit state at all elements (E), given the demand of some of them."""
    found = np.empty(size)
    for start in range(0, size, _AT_ONCE):
        rows = slice(start, start + _AT_ONCE)
        found[rows] = state.quick.utilisation(basis.take(rows), demand(rows))
    return found


def _counted(utilisation: Floats) -> Floats:
    """What cannot be worked out counts as exceeding."""
    return np.where(np.isnan(utilisation), np.inf, utilisation)


def rating_factors(
    states: Sequence[LimitState], bases: Sequence[Any], elements: Elements, share: Demand
) -> Factors:
    """Solve the rating factor of one case on all beams at once.

    Parameters
    ----------
    states
        The counted limit states.
    bases
        What each of them needs, at the elements (E).
    elements
        Demand of everything.
    share
        The part of it that the rated case makes (E).

    Returns
    -------
    Factors
        Accurate to 1e-8 relative.
    """
    beams = elements.first_of_beam.size
    factor = np.full(beams, np.inf)
    state_row = np.full(beams, -1, dtype=np.intp)
    element = np.full(beams, -1, dtype=np.intp)
    problems = _problems(states, bases, elements, share)
    for row in sorted(range(len(problems)), key=lambda i: not states[i].linear):
        found, at = _least_factor(problems[row], np.minimum(factor, GREATEST_FACTOR))
        better = found < factor
        factor[better], element[better], state_row[better] = found[better], at[better], row
    return Factors(factor, state_row, element)


def _problems(
    states: Sequence[LimitState], bases: Sequence[Any], elements: Elements, share: Demand
) -> list[_Problem]:
    """The limit states at the elements of the beams that the rated case acts on."""
    moved = (share.moment != 0.0) | (share.shear != 0.0)
    reached = np.logical_or.reduceat(moved, elements.first_of_beam)[elements.beam]
    rows: Ints | slice = slice(None) if reached.all() else np.flatnonzero(reached)
    if not reached.any():
        return []
    share = share.take(rows)
    rest = _less(elements.total.take(rows), share)
    beam, element = elements.beam[rows], elements.element[rows]
    taken = {id(basis): basis.take(rows) for basis in bases}
    return [
        _Problem(state, taken[id(basis)], rest, share, beam, element)
        for state, basis in zip(states, bases, strict=True)
    ]


def _least_factor(problem: _Problem, ceiling: Floats) -> tuple[Floats, Ints]:
    """Least factor below ``ceiling`` at which this limit state exceeds 1, per beam; inf if none.

    Where utilisation need not rise throughout, the bracket is looked into at several places.
    """
    at = np.full(ceiling.size, -1, dtype=np.intp)
    low, high = np.zeros_like(ceiling), ceiling.copy()
    below = problem.everywhere(low)
    _mark(at, problem, np.flatnonzero(below > 1.0))
    high[at >= 0] = 0.0
    above = problem.everywhere(high)
    over = above > 1.0
    if not problem.state.linear:  # the greater of nothing and a straight line has no hump
        _look_inside(problem, over, above, high)
    rows = np.flatnonzero(over & (high[problem.beam] > 0.0))
    _mark(at, problem, rows)
    _close_in(problem, rows, _bracket(problem, rows, low, high, below, above), at)
    return np.where(at >= 0, high, np.inf), at


def _look_inside(problem: _Problem, over: Bools, above: Floats, high: Floats) -> None:
    """Find elements that exceed within the bracket, where the case first relieves them.

    Mark them in ``over``, lower ``high`` to where they do, and bring ``above``, the utilisation
    there, up to date.
    """
    odd = np.flatnonzero(_may_turn(problem) & (high[problem.beam] > 0.0))
    if not odd.size:
        return
    bound, beam = high.copy(), problem.beam[odd]
    for fraction in reversed(_INTERIOR):
        seen = problem.at(odd, fraction * high) > 1.0
        over[odd[seen]] = True
        bound[beam[seen]] = fraction * high[beam[seen]]
    rows = np.flatnonzero((bound < high)[problem.beam] & over)
    high[:] = bound
    if rows.size:
        above[rows] = problem.at(rows, high)


def _may_turn(problem: _Problem) -> Bools:
    """Elements whose moment or shear the case first relieves."""
    opposed = np.zeros(problem.beam.size, dtype=np.bool_)
    for name in ("moment", "shear", "critical_shear"):
        opposed |= getattr(problem.rest, name) * getattr(problem.share, name) < 0.0
    return opposed


@dataclass(frozen=True, slots=True)
class _Bracket:
    """Factors between which each beam begins to exceed (B), and by how much it does there."""

    low: Floats
    high: Floats
    below: Floats
    """Greatest utilisation less 1 at ``low``; -1 at least"""
    above: Floats


def _bracket(
    problem: _Problem, rows: Ints, low: Floats, high: Floats, below: Floats, above: Floats
) -> _Bracket:
    """The bracket of each beam from the utilisation of its elements at both ends (E)."""
    beam = problem.beam[rows]
    ends = (greatest_of_beams(found[rows] - 1.0, beam, low.size) for found in (below, above))
    return _Bracket(low, high, *ends)


def _close_in(problem: _Problem, rows: Ints, bracket: _Bracket, at: Ints) -> None:
    """Narrow every beam's bracket in place, keeping only elements that can still govern.

    Regula falsi in its Illinois form, exact in one step where utilisation is linear; every
    fourth step halves the bracket, for what jumps.
    """
    low, high, below, above = bracket.low, bracket.high, bracket.below, bracket.above
    last = np.zeros(low.size, dtype=np.intp)
    for step in range(1, _MOST_STEPS):
        if not rows.size:
            return
        beam = problem.beam[rows]
        trial = low + 0.5 * (high - low) if step % 4 == 0 else _chord(bracket)
        found = problem.at(rows, trial) - 1.0
        excess = greatest_of_beams(found, beam, low.size)
        over, under = excess > 0.0, (excess <= 0.0) & np.isfinite(excess)
        hit = found > 0.0
        _mark(at, problem, rows[hit])
        below[over & (last > 0)] *= 0.5
        above[under & (last < 0)] *= 0.5
        high[over], above[over], last[over] = trial[over], excess[over], 1
        low[under], below[under], last[under] = trial[under], excess[under], -1
        open_ = high - low > _TOLERANCE * np.maximum(high, 1e-6)
        rows = rows[open_[beam] & (hit | ~over[beam])]


def _chord(bracket: _Bracket) -> Floats:
    """Where the chord crosses 1, a little past it so that the far end closes in too."""
    low, high, below, above = bracket.low, bracket.high, bracket.below, bracket.above
    with np.errstate(invalid="ignore"):
        share = below / (below - above)
    share = np.where(np.isfinite(share) & np.isfinite(above), share, 0.5)
    width = high - low
    nudge = np.minimum(0.25 * _TOLERANCE * np.maximum(high, 1e-6) / np.maximum(width, 1e-300), 0.5)
    return low + width * np.clip(share, nudge, 1.0 - nudge)


def _mark(at: Ints, problem: _Problem, rows: Ints) -> None:
    """Note, for each beam, the first in the batch of some elements."""
    if rows.size:
        beam = problem.beam[rows]
        first = np.flatnonzero(np.diff(beam, prepend=-1))
        at[beam[first]] = np.minimum.reduceat(problem.element[rows], first)


def _less(total: Demand, share: Demand) -> Demand:
    return _linear(total, share, lambda whole, part: whole - part)


def _grown(rest: Demand, share: Demand, factor: Floats) -> Demand:
    return _linear(rest, share, lambda base, part: base + factor * part)


def _linear(first: Demand, second: Demand, join: Callable[[Floats, Floats], Floats]) -> Demand:
    """Demand of two parts together; what can sag or hog holds for every factor."""
    return Demand(
        moment=join(first.moment, second.moment),
        shear=join(first.shear, second.shear),
        critical_shear=join(first.critical_shear, second.critical_shear),
        peak_sagging=join(first.peak_sagging, second.peak_sagging),
        peak_hogging=join(first.peak_hogging, second.peak_hogging),
        can_sag=first.can_sag,
        can_hog=first.can_hog,
    )
