"""Rating factors where the greatest moment moves as a case grows.

Stations stand where the moments turn under the loads as they are. Under a multiple of a rated
case they turn elsewhere, between stations, and a little higher than at those.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TypeVar

import numpy as np

from ifccheck.analysis.effects import combine, demands, turning_places
from ifccheck.analysis.statics import case_effects
from ifccheck.analysis.stations import StationTable, rows_before
from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.assembly import make_station_arrays
from ifccheck.rating.elements import distinct_elements
from ifccheck.rating.factors import Factors, rating_factors
from ifccheck.rating.loaded import Loaded
from ifccheck.rating.utilisation import evaluate
from ifccheck.standards import Options, Standard

Values = TypeVar("Values", Floats, Ints)

SETTLED = 1e-8
"""Relative change of a factor that moves no moment any more"""

MOST_ROUNDS = 6


@dataclass(frozen=True, slots=True)
class Growth:
    """A rated case that may be multiplied."""

    under: Loaded
    case: int
    """Row of the rated case"""


def with_turns(found: Factors, growth: Growth, standard: Standard, options: Options) -> Factors:
    """Factors that hold at the places where moments turn under those factors, too.

    Only limit states that are linear in the loads are looked at there: what depends on moment
    and shear together is never worst where the shear is nothing.
    """
    moving = np.isfinite(found.factor) & (found.factor > 0.0)
    for _ in range(MOST_ROUNDS):
        beam, x = _turns(found.factor, moving, growth)
        rated = ~growth.under.frame.disturbed.hold(beam, x)
        beam, x = beam[rated], x[rated]
        if not beam.size:
            return found
        lower = _factors_at(beam, x, found, growth, standard, options)
        moving = lower.factor < found.factor * (1.0 - SETTLED)
        found = lower
    return found


def _turns(factor: Floats, moving: Bools, growth: Growth) -> tuple[Ints, Floats]:
    """Where the moments of the moving beams turn with the case multiplied."""
    cases = growth.under.effects.cases
    rows = np.flatnonzero(moving[cases.beam])
    beam, moment, shear = cases.beam[rows], cases.moment[:, rows], cases.shear[:, rows]
    moment[growth.case] *= factor[beam]
    shear[growth.case] *= factor[beam]
    grown = replace(cases, beam=beam, x=cases.x[rows], moment=moment, shear=shear, deflection=None)
    return turning_places(grown, growth.under.factors, alone=False)


def _factors_at(
    beam: Ints,
    x: Floats,
    found: Factors,
    growth: Growth,
    standard: Standard,
    options: Options,
) -> Factors:
    """The factors, lowered to what holds at some more places."""
    under, side = growth.under, np.zeros_like(beam)
    frame, stations = under.frame, StationTable(beam, x, side)
    cases = case_effects(
        frame.spans, frame.loads, stations, under.factors.shape[1], deflections=False
    )
    effects = combine(cases, under.factors)
    acting = demands(effects, np.arange(x.size), (growth.case,))
    arrays = make_station_arrays(frame, beam, x, side)
    beams, row = np.unique(beam, return_inverse=True)
    elements = distinct_elements(effects, acting, row)
    prepared = standard.prepare(*arrays, options)
    there = [
        evaluate(quick, quick.basis(prepared), elements)
        for quick in standard.quick
        if quick.demanded is not None
    ]
    lower = rating_factors(
        standard.limit_states, there, elements, elements.shares[0], x, found.factor[beams]
    )
    return _lowered(found, lower, beams, growth, x.size)


def _lowered(found: Factors, lower: Factors, beams: Ints, growth: Growth, places: int) -> Factors:
    """The lesser factors of both; an element is named after the station before its place."""
    better = lower.factor < found.factor[beams]
    changed, cases = beams[better], growth.under.effects.cases
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
