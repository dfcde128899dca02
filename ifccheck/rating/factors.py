"""Rating factors of a rated case, for all beams together.

The rating factor of a beam is the upper end of the interval from 0 throughout which every
counted utilisation stays at or below 1 while the rated case's loads are multiplied and all
else stays at its full value.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields
from typing import Any

import numpy as np

from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.standards import LimitState

GREATEST_FACTOR = 1000.0
"""A case that does not govern up to this many times its loads is not limited."""
_TOLERANCE = 1e-9
_MOST_STEPS = 200
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
    """One limit state under a rated case; elements flatten (arrangements, N)."""

    state: LimitState
    prepared: Any
    rest: Demand
    share: Demand
    beam: Ints
    """Beam of each station (N)"""

    def everywhere(self, factor: Floats) -> Floats:
        """Utilisation of every element, each beam at its own factor (B)."""
        return self._utilisation(self.prepared, self.rest, self.share, factor[self.beam]).reshape(
            -1
        )

    def at(self, elements: Ints, factor: Floats) -> Floats:
        """Utilisation at the elements, each at its own factor."""
        prepared = self.prepared.take(self.station(elements))
        rest, share = _flat(self.rest, elements), _flat(self.share, elements)
        return self._utilisation(prepared, rest, share, factor)

    def station(self, elements: Ints) -> Ints:
        """Station of each element."""
        return elements % self.beam.size

    def _utilisation(self, prepared: Any, rest: Demand, share: Demand, factor: Floats) -> Floats:
        """What cannot be worked out counts as exceeding."""
        found = self.state.check(prepared, _grown(rest, share, factor)).utilisation
        return np.where(np.isnan(found), np.inf, found)


def rating_factors(
    states: Sequence[LimitState],
    prepared: Any,
    total: Demand,
    share: Demand,
    beam: Ints,
    beams: int,
) -> Factors:
    """Solve the rating factor of one case on all beams at once.

    Parameters
    ----------
    states
        The counted limit states.
    prepared
        The standard's arrays at the stations (N).
    total, share
        Demand of everything, and the part of it that the rated case makes (..., N).
    beam
        Beam of each station (N), ascending from 0.
    beams
        Number of beams (B).

    Returns
    -------
    Factors
        Accurate to 1e-8 relative.
    """
    rest = _less(total, share)
    factor = np.full(beams, np.inf)
    state_row = np.full(beams, -1, dtype=np.intp)
    element = np.full(beams, -1, dtype=np.intp)
    for row in sorted(range(len(states)), key=lambda i: not states[i].linear):
        problem = _Problem(states[row], prepared, rest, share, beam)
        found, at = _least_factor(problem, np.minimum(factor, GREATEST_FACTOR))
        better = found < factor
        factor[better], element[better], state_row[better] = found[better], at[better], row
    return Factors(factor, state_row, element)


def _least_factor(problem: _Problem, ceiling: Floats) -> tuple[Floats, Ints]:
    """Least factor below ``ceiling`` at which this limit state exceeds 1, per beam; inf if none.

    Where utilisation need not rise throughout, the bracket is looked into at several places.
    """
    at = np.full(ceiling.size, -1, dtype=np.intp)
    low, high = np.zeros_like(ceiling), ceiling.copy()
    reached = _reached(problem, ceiling.size)
    at_once = np.flatnonzero((problem.everywhere(low) > 1.0) & reached)
    _mark(at, problem.beam[problem.station(at_once)], at_once)
    high[at >= 0] = 0.0
    over = (problem.everywhere(high) > 1.0) & reached
    upper = _look_inside(problem, over, np.flatnonzero(_may_turn(problem) & reached), high)
    elements = np.flatnonzero(over)
    beam = problem.beam[problem.station(elements)]
    elements, beam = elements[high[beam] > 0.0], beam[high[beam] > 0.0]
    _mark(at, beam, elements)
    np.minimum.at(high, beam, upper[elements])
    _close_in(problem, elements, beam, low, high, at)
    return np.where(at >= 0, high, np.inf), at


def _reached(problem: _Problem, beams: int) -> Bools:
    """Elements of the beams that the rated case acts on."""
    share = problem.share
    moved = (share.moment != 0.0) | (share.shear != 0.0)
    reached = np.zeros(beams, dtype=np.bool_)
    reached[problem.beam[np.any(moved.reshape(-1, problem.beam.size), axis=0)]] = True
    return np.broadcast_to(reached[problem.beam], moved.shape).reshape(-1)


def _may_turn(problem: _Problem) -> Bools:
    """Elements whose moment or shear the case first relieves."""
    opposed = np.zeros(problem.rest.moment.shape, dtype=np.bool_)
    for name in ("moment", "shear", "critical_shear"):
        opposed |= getattr(problem.rest, name) * getattr(problem.share, name) < 0.0
    return opposed.reshape(-1)


def _look_inside(problem: _Problem, over: Bools, odd: Ints, high: Floats) -> Floats:
    """Mark in ``over`` the odd elements that exceed within the bracket; where each was seen to."""
    upper = np.broadcast_to(high[problem.beam], problem.rest.moment.shape).reshape(-1).copy()
    beam = problem.beam[problem.station(odd)]
    for fraction in reversed(_INTERIOR):
        trial = fraction * high[beam]
        seen = problem.at(odd, trial) > 1.0
        over[odd[seen]] = True
        upper[odd[seen]] = trial[seen]
    return upper


def _close_in(
    problem: _Problem, elements: Ints, beam: Ints, low: Floats, high: Floats, at: Ints
) -> None:
    """Narrow every beam's bracket in place, keeping only elements that can still govern.

    Regula falsi in its Illinois form, exact in one step where utilisation is linear; every
    fourth step halves the bracket, for what jumps.
    """
    beams = low.size
    below, above = np.full(beams, -1.0), np.full(beams, np.inf)
    last = np.zeros(beams, dtype=np.intp)
    if elements.size:
        below = _excess(problem, elements, beam, low)
        above = _excess(problem, elements, beam, high)
    for step in range(1, _MOST_STEPS):
        if not elements.size:
            return
        trial = low + 0.5 * (high - low) if step % 4 == 0 else _chord(low, high, below, above)
        found = problem.at(elements, trial[beam]) - 1.0
        excess = _greatest_by_beam(found, beam, beams)
        over, under = excess > 0.0, (excess <= 0.0) & np.isfinite(excess)
        hit = found > 0.0
        _mark(at, beam[hit], elements[hit])
        below[over & (last > 0)] *= 0.5
        above[under & (last < 0)] *= 0.5
        high[over], above[over], last[over] = trial[over], excess[over], 1
        low[under], below[under], last[under] = trial[under], excess[under], -1
        open_ = high - low > _TOLERANCE * np.maximum(high, 1e-6)
        keep = open_[beam] & (hit | ~over[beam])
        elements, beam = elements[keep], beam[keep]


def _chord(low: Floats, high: Floats, below: Floats, above: Floats) -> Floats:
    """Where the chord crosses 1, a little past it so that the far end closes in too."""
    with np.errstate(invalid="ignore"):
        share = below / (below - above)
    share = np.where(np.isfinite(share), share, 0.5)
    width = high - low
    nudge = np.minimum(0.25 * _TOLERANCE * np.maximum(high, 1e-6) / np.maximum(width, 1e-300), 0.5)
    return low + width * np.clip(share, nudge, 1.0 - nudge)


def _excess(problem: _Problem, elements: Ints, beam: Ints, factor: Floats) -> Floats:
    return _greatest_by_beam(problem.at(elements, factor[beam]) - 1.0, beam, factor.size)


def _greatest_by_beam(values: Floats, beam: Ints, beams: int) -> Floats:
    greatest = np.full(beams, -np.inf)
    np.maximum.at(greatest, beam, values)
    return greatest


def _mark(at: Ints, beam: Ints, elements: Ints) -> None:
    """Keep, for each beam, the first of the elements."""
    at[beam[::-1]] = elements[::-1]


def _flat(demand: Demand, elements: Ints) -> Demand:
    shape = demand.moment.shape
    return Demand(
        **{
            f.name: np.broadcast_to(getattr(demand, f.name), shape).reshape(-1)[elements]
            for f in fields(demand)
        }
    )


def _less(total: Demand, share: Demand) -> Demand:
    return _linear(total, share, lambda whole, part: whole - part)


def _grown(rest: Demand, share: Demand, factor: Floats) -> Demand:
    return _linear(rest, share, lambda base, part: base + factor * part)


def _linear(first: Demand, second: Demand, join: Any) -> Demand:
    return Demand(
        **{
            f.name: join(getattr(first, f.name), getattr(second, f.name))
            for f in fields(first)
            if not f.name.startswith("can_")
        },
        can_sag=first.can_sag | second.can_sag,
        can_hog=first.can_hog | second.can_hog,
    )
