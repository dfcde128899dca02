"""Rates a batch of beams at once: stations, demand, checks, rating factors, on arrays."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ifccheck.analysis.combinations import factor_array
from ifccheck.analysis.effects import (
    GREATEST_MOMENT,
    GREATEST_SHEAR,
    LEAST_MOMENT,
    LEAST_SHEAR,
    Effects,
    combine,
    demands,
    turning_places,
)
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
from ifccheck.rating.elements import Elements, distinct_elements
from ifccheck.rating.factors import Factors, rating_factors
from ifccheck.rating.subject import Subject
from ifccheck.rating.turning import Growth, with_turns
from ifccheck.rating.uplift import Uplift, uplift_of
from ifccheck.rating.utilisation import Peaks, by_state, evaluate, worst_of
from ifccheck.rating.verdict import Evaluated
from ifccheck.standards import Note, Options, Standard

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
    arrays = make_station_arrays(
        stations.beam, stations.x, stations.side, frame.runs, frame.zones, frame.faces
    )
    prepared = standard.prepare(frame.members, arrays, options)
    rated = tuple(row for row, case in enumerate(cases) if case.rated)
    acting = demands(
        effects,
        critical_rows(stations, critical[:, 0], critical[:, 1]),
        rated,
        unbounded=frame.side_loaded,
    )
    elements = distinct_elements(effects, acting, stations.beam)
    found = [evaluate(quick, quick.basis(prepared), elements) for quick in standard.quick]
    peaks = by_state(found)
    factors = factor_array(combinations, cases)
    return Batch(
        subjects=tuple(subjects),
        stations=stations,
        first=stations.first_rows(len(subjects)),
        prepared=prepared,
        demand=acting.total,
        states=_states(standard, prepared, acting.total, peaks, elements),
        factors={
            cases[row].name: with_turns(
                rating_factors(standard.limit_states, found, elements, share, stations.x),
                Growth(frame, effects, row, factors),
                standard,
                options,
            )
            for row, share in zip(acting.scaled, elements.shares, strict=True)
        },
        places=_places(subjects, cases, combinations, effects, stations),
        envelope=_envelope(acting.total, peaks),
        uplift=uplift_of(effects, frame.spans),
        notes=standard.notes(prepared),
        basis=standard.basis(prepared),
    )


def _states(
    standard: Standard,
    prepared: Any,
    demand: Demand,
    peaks: dict[str, Peaks],
    elements: Elements,
) -> tuple[Evaluated, ...]:
    """The limit states of the standard where each beam's utilisation is the greatest."""
    found = []
    for state in standard.limit_states:
        worst = worst_of(peaks[state.name], elements)
        places = np.unravel_index(worst.shown, demand.moment.shape)
        check = state.check(prepared.take(places[-1]), demand.at(places))
        found.append(Evaluated(state, worst, check))
    return tuple(found)


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
    reaction does not compress it, or a concentrated load between the face and that section.
    """
    beams = len(subjects)
    beam = np.repeat(np.arange(beams), 2)
    side = np.tile([1, -1], beams)
    at_faces = make_station_arrays(
        beam, frame.faces.ravel(), side, frame.runs, frame.zones, frame.faces
    )
    distance = standard.critical_distance(frame.members, at_faces).reshape(beams, 2)
    critical = frame.faces + distance * np.array([1.0, -1.0])
    direct = np.array([subject.direct for subject in subjects])
    held = np.stack([frame.spans.start_kind, frame.spans.end_kind], axis=-1) != FREE
    middle = frame.faces.mean(axis=1, keepdims=True)
    short = (critical - middle) * np.array([1.0, -1.0]) > 0.0
    usable = direct & held & ~short & ~_concentrated(frame, critical)
    return np.where(usable, critical, np.nan)


def _concentrated(frame: Frame, critical: Floats) -> Bools:
    """Whether a concentrated load or moment lies between the face and the section (B, 2).

    A line load is one where it is shorter than twice the distance between them, or than a
    quarter of the distance between the faces: it comes down as a strut of its own.
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
        found[loads.beam[near & lump], end] = True
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
    beam, x = turning_places(found, factors)
    turns = StationTable(beam, x, np.zeros_like(beam))
    stations, rows = insert_stations(stations, beam, x)
    return combine(join_effects(found, at(turns), rows), factors), stations


def _fixed_places(frame: Frame, critical: Floats) -> list[Places]:
    """Everything but loads at which something changes along the beams."""
    beams = np.arange(critical.shape[0])
    m, runs, zones = frame.members, frame.runs, frame.zones
    row, layer = np.nonzero(m.layer_area > 0.0)
    edges = [
        (np.repeat(beams, 2), frame.faces.ravel(), True),
        (np.repeat(beams, 2), frame.checked.ravel(), False),
        (np.repeat(beams, 2), critical.ravel(), False),
        (runs.beam, runs.start, True),
        (runs.beam, runs.end, True),
        (row, m.layer_start[row, layer], True),
        (row, m.layer_end[row, layer], True),
        (zones.beam, zones.start, True),
        (zones.beam, zones.end, True),
    ]
    return [
        places(beam[finite], x[finite], two_sided=both)
        for beam, x, both in edges
        for finite in [np.isfinite(x)]
    ]


def _envelope(demand: Demand, peaks: dict[str, Peaks]) -> Envelope:
    """Extremes of demand, which are each an arrangement's own, and resistances."""
    return Envelope(
        demand.moment[:, GREATEST_MOMENT].max(axis=0),
        demand.moment[:, LEAST_MOMENT].min(axis=0),
        demand.shear[:, GREATEST_SHEAR].max(axis=0),
        demand.shear[:, LEAST_SHEAR].min(axis=0),
        {name: each.resistance for name, each in peaks.items()},
    )
