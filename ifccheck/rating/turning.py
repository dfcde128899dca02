"""Rating factors where the greatest moment moves as a case grows.

Stations stand where the moments turn under the loads as they are. Under a multiple of a rated
case they turn elsewhere, between stations, and a little higher than at those.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TypeVar

import numpy as np

from ifccheck.analysis.effects import combine, demands, scaled_case
from ifccheck.analysis.stations import StationTable, rows_before
from ifccheck.analysis.turns import Turns, turning_places
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.rating.assembly import make_station_arrays
from ifccheck.rating.elements import distinct_elements
from ifccheck.rating.factors import Factors, rating_factors
from ifccheck.rating.loaded import Loaded, effects_on
from ifccheck.rating.utilisation import Found, evaluate
from ifccheck.standards import Options, Standard

Values = TypeVar("Values", Floats, Ints)

SETTLED = 1e-8
"""Relative change of a factor that moves no moment any more"""

MOST_ROUNDS = 6


CRITICAL = 0.98
"""Utilisation by the resistances beside it above which a place where a moment turns is looked at"""


@dataclass(frozen=True, slots=True)
class Growth:
    """A rated case that may be multiplied."""

    under: Loaded
    case: int
    """Row of the rated case"""
    found: tuple[Found, ...]
    """The limit states whose resistance does not depend on the loads"""


def with_turns(factors: Factors, growth: Growth, standard: Standard, options: Options) -> Factors:
    """Factors that hold at the places where moments turn under those factors, too.

    Only limit states whose resistance does not depend on the loads are looked at there: what
    depends on moment and shear together is never worst where the shear is nothing.
    """
    moving = np.isfinite(factors.factor) & (factors.factor > 0.0)
    for _ in range(MOST_ROUNDS):
        span, x = _turns(factors.factor, moving, growth)
        rated = ~growth.under.frame.disturbed.hold(growth.under.frame.beam_of[span], x)
        span, x = span[rated], x[rated]
        if not span.size:
            return factors
        lower = _factors_at(span, x, factors, growth, standard, options)
        moving = lower.factor < factors.factor * (1.0 - SETTLED)
        factors = lower
    return factors


def _turns(factor: Floats, moving: Bools, growth: Growth) -> tuple[Ints, Floats]:
    """Where on spans the moments of the moving beams turn with the case multiplied, and may be
    critical."""
    cases, factors = growth.under.effects.cases, growth.under.factors
    frame = growth.under.frame
    grown, multiple = cases, np.where(moving, factor, 0.0)[growth.under.stations.beam]
    for row in frame.parts.rows(growth.case).tolist():
        grown = scaled_case(grown, row, multiple)
    turns = turning_places(grown, factors, alone=False)
    turns = turns.take(moving[frame.beam_of[turns.beam]])
    return turns.take(_critical(turns, growth.found)).places()


def _critical(turns: Turns, found: Sequence[Found]) -> Bools:
    """Whether a moment comes near the lesser of the resistances at the stations beside it, which
    is about the least between them."""
    nothing, never = np.zeros(turns.x.shape), np.zeros(turns.x.shape, dtype=np.bool_)
    acting = Demand(turns.moment, nothing, nothing, nothing, nothing, never, never)
    critical = never
    for one in found:
        if one.quick.demanded is not None:
            for demand, peaks in zip(one.quick.demanded(acting), one.peaks, strict=True):
                beside = np.minimum(peaks.resistance[turns.row], peaks.resistance[turns.row + 1])
                critical = critical | ((demand > 0.0) & ~(demand < CRITICAL * beside))
    return critical


def _factors_at(
    span: Ints,
    x: Floats,
    found: Factors,
    growth: Growth,
    standard: Standard,
    options: Options,
) -> Factors:
    """The factors, lowered to what holds at some more places."""
    under, side = growth.under, np.zeros_like(span)
    frame, stations = under.frame, StationTable(span, x, side)
    cases = effects_on(frame, under.solved, stations)
    effects = combine(cases, under.factors)
    acting = demands(effects, np.arange(x.size), (growth.case,), parts=frame.parts.case)
    arrays = make_station_arrays(frame, span, x, side)
    beams, row = np.unique(arrays[1].beam, return_inverse=True)
    elements = distinct_elements(effects, acting, row)
    prepared = standard.prepare(*arrays, options)
    there = [
        evaluate(one.quick, one.quick.basis(prepared), elements)
        for one in growth.found
        if one.quick.demanded is not None
    ]
    lower = rating_factors(
        standard.limit_states, there, elements, elements.shares[0], x, found.factor[beams]
    )
    return _lowered(found, lower, beams, growth, x.size)


def _lowered(found: Factors, lower: Factors, beams: Ints, growth: Growth, places: int) -> Factors:
    """The lesser factors of both; an element is named after the station before its place."""
    better = lower.factor < found.factor[beams]
    changed, stations = beams[better], growth.under.stations
    station = rows_before(stations.beam, stations.x, changed, lower.x[better])
    element = lower.element[better] // places * stations.x.size + station
    return Factors(
        factor=put(found.factor, changed, lower.factor[better]),
        state=put(found.state, changed, lower.state[better]),
        element=put(found.element, changed, element),
        x=put(found.x, changed, lower.x[better]),
    )


def put(values: Values, rows: Ints, others: Values) -> Values:
    """A copy of the values with others at the given rows."""
    changed = values.copy()
    changed[rows] = others
    return changed
