"""Rates a batch of beams at once: stations, demand, checks, rating factors, on arrays."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ifccheck.analysis.combinations import factor_array
from ifccheck.analysis.effects import Effects, combine, demands, turning_places
from ifccheck.analysis.loads import LINE
from ifccheck.analysis.spans import FREE
from ifccheck.analysis.statics import CaseEffects, case_effects, join_effects
from ifccheck.analysis.stations import (
    Places,
    StationTable,
    critical_rows,
    insert_stations,
    join_places,
    make_stations,
    places,
)
from ifccheck.beam import SELF, Case, Combination
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.rating import verdict
from ifccheck.rating.assembly import (
    Frame,
    frame_of,
    make_station_arrays,
    within,
)
from ifccheck.rating.elements import Elements, distinct_elements, first_greatest
from ifccheck.rating.factors import Factors, evaluate_everywhere, rating_factors
from ifccheck.rating.subject import Subject
from ifccheck.rating.turning import Growth, with_turns
from ifccheck.rating.uplift import Uplift, uplift_of
from ifccheck.rating.utilisation import worst_of
from ifccheck.rating.verdict import Evaluated
from ifccheck.standards import LimitState, Note, Options, Quick, Standard

BATCH = 400
"""Beams rated together"""

LARGEST_BLOCK = 30_000_000
"""Bytes; beyond 32 MB glibc does not learn from a block"""


@dataclass(frozen=True, slots=True)
class Envelope:
    """Demand and resistance at every station (N), for the diagrams."""

    moment_high: Floats
    moment_low: Floats
    shear_high: Floats
    shear_low: Floats
    resistance: dict[str, Floats]
    """By limit state: the resistance that goes with its greatest utilisation"""


@dataclass(frozen=True, slots=True)
class Batch:
    """A batch of rated beams; beams are rows (B), stations are rows (N)."""

    subjects: tuple[Subject, ...]
    stations: StationTable
    first: Ints
    """First station of each beam, and the number of stations (B + 1)"""
    prepared: Any
    demand: Demand
    states: tuple[Evaluated, ...]
    factors: dict[str, Factors]
    """By rated case"""
    places: verdict.Places
    envelope: Envelope
    uplift: Uplift
    notes: tuple[Note, ...]
    basis: dict[str, Floats]


def batches(
    subjects: Sequence[Subject],
    standard: Standard,
    options: Options,
    cases: Sequence[Case],
    combinations: Sequence[Combination],
) -> Iterator[Batch]:
    """Rate the subjects, a batch at a time."""
    keep_memory()
    for batch in batches_of(subjects):
        yield rate_batch(batch, standard, options, cases, combinations)


def batches_of(subjects: Sequence[Subject]) -> Iterator[Sequence[Subject]]:
    """The subjects, so many at a time that the cost of a call counts little."""
    for start in range(0, len(subjects), BATCH):
        yield subjects[start : start + BATCH]


def keep_memory() -> None:
    """Let the allocator keep the memory of one array for the next.

    Common allocators give large blocks back to the system at once, which then clears every
    page anew: a sixth of the time of a run. They stop doing so for blocks up to the size of
    the largest that they have seen freed; this one is never written to, and costs nothing.
    """
    np.empty(LARGEST_BLOCK, dtype=np.uint8)


def rate_batch(
    subjects: Sequence[Subject],
    standard: Standard,
    options: Options,
    cases: Sequence[Case],
    combinations: Sequence[Combination],
) -> Batch:
    """Rate beams together.

    Parameters
    ----------
    subjects
        At least one beam (B).
    cases
        All load cases, ``self`` among them.
    combinations
        Strength combinations, exclusions already worked out.
    """
    return rate_frame(frame_of(subjects, cases), subjects, standard, options, cases, combinations)


def rate_frame(
    frame: Frame,
    subjects: Sequence[Subject],
    standard: Standard,
    options: Options,
    cases: Sequence[Case],
    combinations: Sequence[Combination],
) -> Batch:
    """Rate beams of which the tables are made already: numbers alone."""
    critical = _critical_sections(subjects, frame, standard)
    effects, stations = _effects(frame, critical, cases, combinations)
    arrays = make_station_arrays(frame, stations.beam, stations.x, stations.side)
    prepared = standard.prepare(*arrays, options)
    rated = tuple(row for row, case in enumerate(cases) if case.rated)
    acting = demands(
        effects,
        critical_rows(stations, critical[:, 0], critical[:, 1]),
        rated,
        unbounded=frame.side_loaded,
    )
    skipped = frame.disturbed.hold(stations.beam, stations.x)
    elements = distinct_elements(acting, stations.beam, skipped)
    evaluations = [
        (quick, quick.basis(prepared).take(elements.station)) for quick in standard.quick
    ]
    found = _found(standard, evaluations, elements)
    factors = factor_array(combinations, cases)
    return Batch(
        subjects=tuple(subjects),
        stations=stations,
        first=stations.first_rows(len(subjects)),
        prepared=prepared,
        demand=acting.total,
        states=_states(standard, prepared, acting.total, found, elements),
        factors={
            cases[row].name: with_turns(
                rating_factors(standard.limit_states, evaluations, elements, share, stations.x),
                Growth(frame, effects, row, factors),
                standard,
                options,
            )
            for row, share in zip(acting.scaled, elements.shares, strict=True)
        },
        places=_places(subjects, cases, combinations, effects, stations),
        envelope=_envelope(standard, acting.total, found, elements),
        uplift=uplift_of(effects, frame.spans),
        notes=standard.notes(prepared),
        basis=standard.basis(prepared),
    )


def _states(
    standard: Standard,
    prepared: Any,
    demand: Demand,
    found: Sequence[tuple[Floats, Floats]],
    elements: Elements,
) -> tuple[Evaluated, ...]:
    return tuple(
        _evaluated(state, prepared, demand, utilisation, elements)
        for state, (utilisation, _) in zip(standard.limit_states, found, strict=True)
    )


def _found(
    standard: Standard, evaluations: Sequence[tuple[Quick, Any]], elements: Elements
) -> list[tuple[Floats, Floats]]:
    """Utilisation and resistance of each limit state of the standard at the elements."""
    found = {}
    for quick, basis in evaluations:
        every = evaluate_everywhere(quick, basis, elements)
        for state, utilisation, resistance in zip(quick.states, *every, strict=True):
            found[state.name] = utilisation, resistance
    return [found[state.name] for state in standard.limit_states]


def _places(
    subjects: Sequence[Subject],
    cases: Sequence[Case],
    combinations: Sequence[Combination],
    effects: Effects,
    stations: StationTable,
) -> verdict.Places:
    nature = {case.name: case.nature for case in cases}
    return verdict.Places(
        combinations=tuple(combinations),
        arrangements=effects.moment.shape[1],
        x=stations.x,
        natures=tuple(
            frozenset({nature[SELF], *(nature[load.case] for load in subject.loads)})
            for subject in subjects
        ),
    )


def _critical_sections(subjects: Sequence[Subject], frame: Frame, standard: Standard) -> Floats:
    """x of the critical section for shear at either end of each beam [mm] (B, 2).

    nan where nearer stations must be checked with their own shear: a free end, an end whose
    reaction does not compress it, or a concentrated load or an opening between the face and that
    section.
    """
    beams = len(subjects)
    beam = np.repeat(np.arange(beams), 2)
    side = np.tile([1, -1], beams)
    at_faces = make_station_arrays(frame, beam, frame.faces.ravel(), side)
    distance = standard.critical_distance(*at_faces)
    if frame.runs.beam.size > beams or frame.runs.tapers:
        reach = np.where(np.isnan(distance), 0.0, distance)
        there = make_station_arrays(frame, beam, frame.faces.ravel() + reach * side, side)
        distance = np.minimum(distance, standard.critical_distance(*there))
    distance = distance.reshape(beams, 2)
    critical = frame.faces + distance * np.array([1.0, -1.0])
    direct = np.array([subject.direct for subject in subjects])
    held = np.stack([frame.spans.start_kind, frame.spans.end_kind], axis=-1) != FREE
    middle = frame.faces.mean(axis=1, keepdims=True)
    short = (critical - middle) * np.array([1.0, -1.0]) > 0.0
    usable = direct & held & ~short & ~_concentrated(frame, critical) & ~_opened(frame, critical)
    return np.where(usable, critical, np.nan)


def _concentrated(frame: Frame, critical: Floats) -> Bools:
    """Whether a concentrated load or moment lies between the face and the section (B, 2).

    A line load is one where it is shorter than twice the distance between them, or than a
    quarter of the distance between the faces: it comes down as a strut of its own. Self weight,
    which is cut at every run, is none.
    """
    found = np.zeros(critical.shape, dtype=np.bool_)
    loads, faces = frame.loads, frame.faces
    distance = np.abs(critical - faces)
    short = np.maximum(2.0 * distance, 0.25 * np.abs(faces[:, 1:] - faces[:, :1]))
    for end, near in (
        (0, loads.start <= critical[loads.beam, 0]),
        (1, loads.end >= critical[loads.beam, 1]),
    ):
        lump = (loads.kind != LINE) | (loads.end - loads.start < short[loads.beam, end])
        lump &= loads.case != frame.self_case
        found[loads.beam[near & lump], end] = True
    return found


def _opened(frame: Frame, critical: Floats) -> Bools:
    """Whether an opening begins to take depth between the face and the section (B, 2)."""
    found = np.zeros(critical.shape, dtype=np.bool_)
    losses = frame.losses
    (first, last), (near, far) = frame.faces[losses.beam].T, critical[losses.beam].T
    found[losses.beam[(losses.start > first) & (losses.start <= near)], 0] = True
    found[losses.beam[(losses.end < last) & (losses.end >= far)], 1] = True
    return found


def _effects(
    frame: Frame, critical: Floats, cases: Sequence[Case], combinations: Sequence[Combination]
) -> tuple[Effects, StationTable]:
    """Effects at stations that include every place where a greatest moment turns."""
    factors = factor_array(combinations, cases)
    fixed = join_places(*_fixed_places(frame, critical))
    stations = within(make_stations(frame.spans, frame.loads, fixed), frame.checked)

    def at(where: StationTable) -> CaseEffects:
        return case_effects(frame.spans, frame.loads, where, len(cases), deflections=False)

    found = at(stations)
    beam, x = turning_places(combine(found, factors, arrangements=2))
    turns = StationTable(beam, x, np.zeros_like(beam))
    stations, rows = insert_stations(stations, beam, x)
    return combine(join_effects(found, at(turns), rows), factors), stations


def _fixed_places(frame: Frame, critical: Floats) -> list[Places]:
    """Everything but loads at which something changes along the beams."""
    beams = np.arange(critical.shape[0])
    m, runs, zones, losses = frame.members, frame.runs, frame.zones, frame.losses
    row, layer = np.nonzero(m.layer_area > 0.0)
    edges = [
        (np.repeat(beams, 2), frame.faces.ravel(), True),
        (np.repeat(beams, 2), frame.checked.ravel(), False),
        (np.repeat(beams, 2), critical.ravel(), False),
        (runs.beam, runs.start, True),
        (runs.beam, runs.end, True),
        (row, m.layer_start[row, layer], True),
        (row, m.layer_end[row, layer], True),
        (frame.disturbed.beam, frame.disturbed.start, False),
        (frame.disturbed.beam, frame.disturbed.end, False),
        (zones.beam, zones.start, True),
        (zones.beam, zones.end, True),
        (losses.beam, losses.start, True),
        (losses.beam, losses.end, True),
    ]
    return [
        places(beam[finite], x[finite], two_sided=both)
        for beam, x, both in edges
        for finite in [np.isfinite(x)]
    ]


def _evaluated(
    state: LimitState, prepared: Any, demand: Demand, utilisation: Floats, elements: Elements
) -> Evaluated:
    worst = worst_of(utilisation, elements.element, elements.first_of_beam)
    places = np.unravel_index(worst.shown, demand.moment.shape)
    return Evaluated(state, worst, state.check(prepared.take(places[-1]), demand.at(places)))


def _envelope(
    standard: Standard,
    demand: Demand,
    found: Sequence[tuple[Floats, Floats]],
    elements: Elements,
) -> Envelope:
    """Extremes of demand, and resistances, from the utilisation and resistance at elements."""
    stations = demand.moment.shape[-1]
    moment, shear = demand.moment.reshape(-1, stations), demand.shear.reshape(-1, stations)
    return Envelope(
        moment.max(axis=0),
        moment.min(axis=0),
        shear.max(axis=0),
        shear.min(axis=0),
        {
            state.name: _at_stations(
                resistance[_worst_elements(utilisation, elements)], elements, stations
            )
            for state, (utilisation, resistance) in zip(standard.limit_states, found, strict=True)
        },
    )


def _at_stations(values: Floats, elements: Elements, stations: int) -> Floats:
    """Values of the stations that have elements at all stations (N), nan at the others."""
    if values.size == stations:
        return values
    spread = np.full(stations, np.nan)
    spread[elements.stations] = values
    return spread


def _worst_elements(utilisation: Floats, elements: Elements) -> Ints:
    """Row of the greatest utilisation of each station that has elements, one that is not known
    before all."""
    known = np.where(np.isnan(utilisation), np.inf, utilisation)
    return first_greatest(known, elements.first_of_station)[1]
