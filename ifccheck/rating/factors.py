"""Rating factors of a rated case, for all beams together.

The rating factor of a beam is the upper end of the interval from 0 throughout which every
counted utilisation stays at or below 1 while the rated case's loads are multiplied and all
else stays at its full value.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.mechanics.arrays import Demand, Floats, Ints
from ifccheck.rating.crossing import Least, least_crossing, mark, no_factor
from ifccheck.rating.elements import Elements, demand_of
from ifccheck.rating.utilisation import Found, Peaks
from ifccheck.standards import LimitState

GREATEST_FACTOR = 1000.0
"""A case that does not govern up to this many times its loads is not limited."""

_ALIKE = 1e-9
"""Part of a factor within which two elements exceed together: the first limit state and the first
element of those is named"""

_LEAST_MARGIN = 1e-9
"""What is left of a resistance, at least [N or N*mm]: a quotient by it is finite"""

_LEAST_SHARE = 1e-30
"""What a case must make of a demand to move it [N or N*mm]: no multiple of less reaches a margin"""


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


def rating_factors(
    states: Sequence[LimitState],
    found: Sequence[Found],
    elements: Elements,
    share: Floats,
    x: Floats,
    ceiling: Floats | None = None,
    reached: list[Floats] | None = None,
) -> Factors:
    """Solve the rating factor of one case on all beams at once.

    Parameters
    ----------
    states
        All limit states, by which those that limit are numbered.
    found
        Limit states under the loads as they are, at the elements (E).
    elements
        Demand of everything.
    share
        The part of it that the rated case makes (NUMBERS, E).
    x
        Stations [mm] (N).
    ceiling
        Factors above which no one asks (B).
    reached
        Filled with the utilisation at each station just below the factor (N), of every limit
        state whose resistance depends on the loads.

    Returns
    -------
    Factors
        Accurate to 1e-8 relative.
    """
    beams = elements.first_of_beam.size
    moved = np.any(np.abs(share[:2]) > _LEAST_SHARE, axis=0)
    touched = np.logical_or.reduceat(moved, elements.first_of_beam)
    most = np.where(touched, GREATEST_FACTOR, 0.0)
    if ceiling is not None:
        most = np.minimum(most, ceiling)
    least = no_factor(beams)
    for one in sorted(found, key=lambda one: one.quick.demanded is None):
        lower = _solve(one, elements, share, np.minimum(least.factor, most), reached)
        rows = np.array([states.index(state) for state in one.quick.states])
        better = np.flatnonzero(lower.factor < least.factor)
        least.factor[better], least.element[better] = lower.factor[better], lower.element[better]
        least.state[better] = rows[lower.state[better]]
    place = np.where(least.element >= 0, x[least.element % x.size], np.nan)
    return Factors(least.factor, least.state, least.element, place)


def least_of(first: Factors, second: Factors) -> Factors:
    """The lesser factor of each beam, the first where both are one."""
    lesser = second.factor < first.factor
    return Factors(
        *(
            np.where(lesser, getattr(second, name), getattr(first, name))
            for name in Factors.__slots__
        )
    )


def _solve(
    found: Found, elements: Elements, share: Floats, ceiling: Floats, reached: list[Floats] | None
) -> Least:
    """Least factor below ``ceiling`` at which a limit state exceeds 1, per beam; inf if none.

    Where the ceiling is 0 no one asks.
    """
    if not found.quick.loaded:
        return _unmoved(found, elements, ceiling)
    if found.quick.demanded is not None:
        return _straight(found, found.quick.demanded, elements, share, ceiling)
    least, seen = least_crossing(found, elements, share, ceiling)
    if reached is not None:
        reached.extend(np.maximum.reduceat(seen, elements.first_of_station, axis=1))
    return least


def _unmoved(found: Found, elements: Elements, ceiling: Floats) -> Least:
    """Limit states that the loads do not change exceed at 0 or never."""
    least, asked = no_factor(ceiling.size), (ceiling > 0.0)[elements.beam]
    exceeds = np.array([peaks.missing | (peaks.utilisation > 1.0) for peaks in found.peaks])
    if exceeds.any():
        mark(least, exceeds[:, elements.station] & asked, elements.beam, elements.element)
        least.factor[least.element >= 0] = 0.0
    return least


def _straight(
    found: Found,
    demanded: Callable[[Demand], Sequence[Floats]],
    elements: Elements,
    share: Floats,
    ceiling: Floats,
) -> Least:
    """Limit states whose demand is a straight line below a resistance that stays as it is."""
    growth = demanded(demand_of(share, elements.can_sag, elements.can_hog))
    rates = np.array(
        [_rate(peaks, elements, each) for peaks, each in zip(found.peaks, growth, strict=True)]
    )
    greatest = np.maximum.reduceat(rates, elements.first_of_beam, axis=1).max(axis=0)
    least = no_factor(ceiling.size)
    with np.errstate(over="ignore"):  # a rate next to nothing limits nothing
        np.divide(1.0, greatest, out=least.factor, where=greatest > 0.0)
    limited = least.factor < ceiling
    least.factor[~limited] = np.inf
    alike = np.where(limited, greatest * (1.0 - _ALIKE), np.nan)
    mark(least, rates >= alike[elements.beam], elements.beam, elements.element)
    return least


def _rate(peaks: Peaks, elements: Elements, growth: Floats) -> Floats:
    """1 over the factor at which demand reaches resistance (E), not above 0 where it never does;
    inf where it is exceeded at 0. A resistance that is not known is none."""
    resistance = np.where(np.isnan(peaks.resistance), 0.0, peaks.resistance)
    left = resistance.take(elements.station, mode="clip")
    left -= peaks.demand
    left += growth
    exceeded = left < 0.0
    rate: Floats = growth / np.maximum(left, _LEAST_MARGIN)
    rate[exceeded] = np.inf
    return rate
