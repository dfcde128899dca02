"""What acts on a batch of beams, whatever the standard then asks of it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.combinations import factor_array
from ifccheck.analysis.effects import Demands, Effects, combine, demands
from ifccheck.analysis.loads import LINE
from ifccheck.analysis.spans import FREE, by_spans
from ifccheck.analysis.statics import (
    CaseEffects,
    Solved,
    effects_at,
    join_effects,
    solve,
    with_end_moments,
)
from ifccheck.analysis.stations import (
    NOWHERE,
    Places,
    StationTable,
    critical_rows,
    insert_stations,
    join_places,
    make_stations,
    places,
)
from ifccheck.analysis.stiffness import with_varying_stiffness
from ifccheck.analysis.turns import turning_places
from ifccheck.beam import Case, Combination
from ifccheck.mechanics.arrays import Bools, Floats, Members, Stations
from ifccheck.rating.assembly import Frame, make_station_arrays, within
from ifccheck.rating.elements import Elements, ask_nothing, distinct_elements
from ifccheck.standards import Standard


@dataclass(frozen=True, slots=True)
class Loaded:
    """Beams (B) under their loads, at every station (N)."""

    frame: Frame
    solved: Solved
    stations: StationTable
    """With the rows of the beams; the effects know the span of each"""
    members: Members
    """With a section for every station in a taper"""
    arrays: Stations
    effects: Effects
    factors: Floats
    """Unfavourable and favourable factor of each part in each combination (C, P, 2)"""
    acting: Demands
    elements: Elements
    disturbed: Bools
    """Stations beside steps, at which nothing is demanded of a section (N)"""


def loaded(
    frame: Frame,
    standard: Standard,
    cases: Sequence[Case],
    combinations: Sequence[Combination],
    more: Places = NOWHERE,
) -> Loaded:
    """Find the stations of the beams and what acts there.

    Parameters
    ----------
    frame
        At least one beam (B).
    standard
        Tells where shear is critical.
    cases
        All load cases, ``self`` among them.
    combinations
        Strength combinations, exclusions already worked out.
    more
        Places on beams at which stations are wanted besides.
    """
    factors = factor_array(combinations, cases)[:, frame.parts.case]
    critical = _critical_sections(frame, standard)
    solved = solved_frame(frame)
    effects, of_spans = _effects(frame, solved, critical, factors, more)
    acting = demands(
        effects,
        critical_rows(of_spans, critical[:, 0], critical[:, 1]),
        [row for row, case in enumerate(cases) if case.rated],
        unbounded=frame.side_loaded,
        parts=frame.parts.case,
    )
    arrays = make_station_arrays(frame, of_spans.beam, of_spans.x, of_spans.side)
    stations = replace(of_spans, beam=arrays[1].beam)
    disturbed = frame.disturbed.hold(stations.beam, stations.x)
    elements = distinct_elements(effects, acting, stations.beam)
    ask_nothing(elements, disturbed)
    return Loaded(frame, solved, stations, *arrays, effects, factors, acting, elements, disturbed)


def solved_frame(frame: Frame) -> Solved:
    """Reactions and end moments of every part of every case on every span."""
    solved = solve(frame.spans, frame.loads, frame.parts.case.size)
    if frame.curvature:
        solved = with_varying_stiffness(solved, frame.curvature)
    if frame.end_moments is not None:
        start, end = np.moveaxis(frame.end_moments, -1, 0)
        solved = with_end_moments(solved, start, end, np.any(start != 0.0, axis=0))
    return solved


def effects_on(frame: Frame, solved: Solved, stations: StationTable) -> CaseEffects:
    """What each part of each case does at stations with the rows of the spans, trains included."""
    found = effects_at(solved, stations, deflections=False)
    if frame.runways is None:
        return found
    return replace(found, moving=frame.runways.effects(stations))


def _critical_sections(frame: Frame, standard: Standard) -> Floats:
    """x of the critical section for shear at either end of each span [mm] (S, 2).

    nan where nearer stations must be checked with their own shear: a free end, an end whose
    reaction does not compress it, or a concentrated load or an opening between the face and that
    section.
    """
    spans = len(frame.faces)
    span = np.repeat(np.arange(spans), 2)
    side = np.tile([1, -1], spans)
    at_faces = make_station_arrays(frame, span, frame.faces.ravel(), side)
    distance = standard.critical_distance(*at_faces)
    if frame.runs.beam.size > frame.runs.beam[-1] + 1 or frame.runs.tapers:
        reach = np.where(np.isnan(distance), 0.0, distance)
        there = make_station_arrays(frame, span, frame.faces.ravel() + reach * side, side)
        distance = np.minimum(distance, standard.critical_distance(*there))
    distance = distance.reshape(spans, 2)
    critical = frame.faces + distance * np.array([1.0, -1.0])
    held = np.stack([frame.spans.start_kind, frame.spans.end_kind], axis=-1) != FREE
    middle = frame.faces.mean(axis=1, keepdims=True)
    short = (critical - middle) * np.array([1.0, -1.0]) > 0.0
    usable = frame.direct & held & ~short
    usable &= ~_concentrated(frame, critical) & ~_opened(frame, critical)
    return np.where(usable, critical, np.nan)


def _concentrated(frame: Frame, critical: Floats) -> Bools:
    """Whether a concentrated load or moment lies between the face and the section (S, 2).

    A line load is one where it is shorter than twice the distance between them, or than a
    quarter of the distance between the faces: it comes down as a strut of its own. The weight of
    the beam itself, which is cut at every run, is none; that of a beam which rests on it is.
    A wheel may stand anywhere.
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
        lump &= (loads.case != frame.self_case) | (loads.kind != LINE)
        found[loads.beam[near & lump], end] = True
    if frame.runways is not None:
        found[frame.runways.passed] = True
    return found


def _opened(frame: Frame, critical: Floats) -> Bools:
    """Whether an opening begins to take depth between the face and the section (S, 2)."""
    found = np.zeros(critical.shape, dtype=np.bool_)
    row, span = by_spans(frame.beam_of, frame.losses.beam)
    start, end = frame.losses.start[row], frame.losses.end[row]
    (first, last), (near, far) = frame.faces[span].T, critical[span].T
    found[span[(start > first) & (start <= near)], 0] = True
    found[span[(end < last) & (end >= far)], 1] = True
    return found


def _effects(
    frame: Frame, solved: Solved, critical: Floats, factors: Floats, more: Places
) -> tuple[Effects, StationTable]:
    """Effects at stations that include every place where a greatest moment turns, and the stations
    with the rows of the spans."""
    along = _on_spans(join_places(*_fixed_places(frame), more), frame)
    fixed = join_places(*_places_of_spans(frame, critical), along)
    if frame.runways is not None:
        fixed = join_places(fixed, frame.runways.places(frame.spans))
    stations = within(make_stations(frame.spans, frame.loads, fixed), frame.checked)
    found = effects_on(frame, solved, stations)
    beam, x = turning_places(found, factors).places()
    there = effects_on(frame, solved, StationTable(beam, x, np.zeros_like(beam)))
    stations, rows = insert_stations(stations, beam, x)
    return combine(join_effects(found, there, rows), factors), stations


def _on_spans(found: Places, frame: Frame) -> Places:
    """Places on beams as places on their spans; those within none of them are left out later."""
    if frame.beam_of.size == frame.beam_of[-1] + 1:
        return found
    row, span = by_spans(frame.beam_of, found.beam)
    return Places(span, found.x[row], found.two_sided[row])


def _places_of_spans(frame: Frame, critical: Floats) -> list[Places]:
    """Where spans are held, and their shear is critical."""
    span = np.repeat(np.arange(critical.shape[0]), 2)
    return [
        places(span, frame.faces.ravel(), two_sided=True),
        places(span, frame.checked.ravel(), two_sided=False),
        places(span, critical.ravel(), two_sided=False),
    ]


def _fixed_places(frame: Frame) -> list[Places]:
    """Everything but loads and supports at which something changes along the beams."""
    m, runs, zones, losses = frame.members, frame.runs, frame.zones, frame.losses
    row, layer = np.nonzero(m.layer_area > 0.0)
    edges = [
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
