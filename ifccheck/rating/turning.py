"""Rating factors where the greatest moment moves as a case grows.

Stations stand where the moments turn under the loads as they are. Under a multiple of a rated
case they turn elsewhere, between stations, and a little higher than at those.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TypeVar

import numpy as np

from ifccheck.analysis.effects import Effects, combine, demands, turning_places
from ifccheck.analysis.statics import case_effects
from ifccheck.analysis.stations import StationTable, rows_before
from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.assembly import Frame, make_station_arrays
from ifccheck.rating.elements import distinct_elements
from ifccheck.rating.factors import Factors, rating_factors
from ifccheck.standards import Options, Standard

Values = TypeVar("Values", Floats, Ints)

SETTLED = 1e-8
"""Relative change of a factor that moves no moment any more"""

MOST_ROUNDS = 6


@dataclass(frozen=True, slots=True)
class Growth:
    """A rated case that may be multiplied."""

    frame: Frame
    effects: Effects
    """Of all cases at the stations of the batch"""
    case: int
    """Row of the rated case"""
    factors: Floats
    """Factors of the combinations (C, K, 2)"""


def with_turns(found: Factors, growth: Growth, standard: Standard, options: Options) -> Factors:
    """Factors that hold at the places where moments turn under those factors, too.

    Only limit states that are linear in the loads are looked at there: what depends on moment
    and shear together is never worst where the shear is nothing.
    """
    moving = np.isfinite(found.factor) & (found.factor > 0.0)
    for _ in range(MOST_ROUNDS):
        beam, x = _turns(found.factor, moving, growth)
        rated = ~growth.frame.disturbed.hold(beam, x)
        beam, x = beam[rated], x[rated]
        if not beam.size:
            return found
        lower = _factors_at(beam, x, found, growth, standard, options)
        moving = lower.factor < found.factor * (1.0 - SETTLED)
        found = lower
    return found


def _turns(factor: Floats, moving: Bools, growth: Growth) -> tuple[Ints, Floats]:
    """Where the moments of the moving beams turn with the case multiplied."""
    cases = growth.effects.cases
    rows = np.flatnonzero(moving[cases.beam])
    beam, moment, shear = cases.beam[rows], cases.moment[:, rows], cases.shear[:, rows]
    moment[growth.case] *= factor[beam]
    shear[growth.case] *= factor[beam]
    grown = replace(cases, beam=beam, x=cases.x[rows], moment=moment, shear=shear, deflection=None)
    return turning_places(replace(growth.effects, cases=grown), alone=False)


def _factors_at(
    beam: Ints,
    x: Floats,
    found: Factors,
    growth: Growth,
    standard: Standard,
    options: Options,
) -> Factors:
    """The factors, lowered to what holds at some more places."""
    frame, side = growth.frame, np.zeros_like(beam)
    stations = StationTable(beam, x, side)
    cases = case_effects(
        frame.spans, frame.loads, stations, len(growth.effects.cases.moment), deflections=False
    )
    acting = demands(combine(cases, growth.factors), np.arange(x.size), (growth.case,))
    arrays = make_station_arrays(frame, beam, x, side)
    beams, row = np.unique(beam, return_inverse=True)
    elements = distinct_elements(acting, row, np.zeros(x.size, dtype=np.bool_))
    prepared = standard.prepare(*arrays, options)
    evaluations = [
        (quick, quick.basis(prepared).take(elements.station))
        for quick in standard.quick
        if quick.linear
    ]
    lower = rating_factors(
        standard.limit_states, evaluations, elements, elements.shares[0], x, found.factor[beams]
    )
    return _lowered(found, lower, beams, growth, x.size)


def _lowered(found: Factors, lower: Factors, beams: Ints, growth: Growth, places: int) -> Factors:
    """The lesser factors of both; an element is named after the station before its place."""
    better = lower.factor < found.factor[beams]
    changed, cases = beams[better], growth.effects.cases
    station = rows_before(cases.beam, cases.x, changed, lower.x[better])
    element = lower.element[better] // places * cases.x.size + station
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
