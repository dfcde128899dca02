"""From beams to arrays: what every formula of the run works on."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ifccheck.analysis.loads import (
    LoadTable,
    join_loads,
    load_table,
    on_spans,
)
from ifccheck.analysis.parts import Parts, parts_of
from ifccheck.analysis.spans import FREE, SpanTable, span_table
from ifccheck.analysis.stations import SAME_PLACE, StationTable
from ifccheck.analysis.stiffness import Curvature
from ifccheck.beam import SELF, Anchor, BarPlace, Case, Nature
from ifccheck.mechanics.arrays import (
    ANCHOR_FULL,
    ANCHOR_HOOK,
    ANCHOR_STRAIGHT,
    IN_FLANGE,
    NEAR_WEB,
    OWN,
    Bools,
    Floats,
    Ints,
    Members,
    Stations,
)
from ifccheck.mechanics.width_profile import pack_strips
from ifccheck.rating.covers import bonds_of, column
from ifccheck.rating.runs import (
    DRAWN,
    RunTable,
    Section,
    along_axis,
    chords_at,
    profile_of,
    run_at,
    run_table,
    sections_at,
)
from ifccheck.rating.runways import Runways, runways_of
from ifccheck.rating.stiffness import curvature_of
from ifccheck.rating.subject import Subject
from ifccheck.rating.weights import self_weight
from ifccheck.rating.zones import (
    LossTable,
    StirrupTable,
    Stretches,
    disturbed_stretches,
    loss_table,
    losses_at,
    stirrup_table,
    stirrups_at,
)

END_COVER = 100.0
"""Greatest distance from a free end at which bars may stop and count as covered only [mm]"""
_INSIDE_LAST_BAR = 25.0

_ANCHOR = {
    Anchor.STRAIGHT: ANCHOR_STRAIGHT,
    Anchor.HOOK: ANCHOR_HOOK,
    Anchor.ANCHORED: ANCHOR_FULL,
}
_PLACE: dict[BarPlace, int] = {"own": OWN, "near web": NEAR_WEB, "in flange": IN_FLANGE}


@dataclass(frozen=True, slots=True)
class Frame:
    """The batch as tables, before stations."""

    members: Members
    runs: RunTable
    zones: StirrupTable
    losses: LossTable
    spans: SpanTable
    """Of all beams, in their order (S); what is said of spans has their rows"""
    beam_of: Ints
    """Beam of each span (S)"""
    faces: Floats
    """(S, 2)"""
    loads: LoadTable
    """On spans, by the parts of their cases"""
    parts: Parts
    end_moments: Floats | None
    """That its line adds at the start and the end of each span, by part [N*mm] (P, S, 2); None
    where every span stands alone"""
    beside: Floats | None
    """What the beams next to it in its line bring to the supports at the start and the end of
    each beam, by part [N] (P, B, 2); None where every span stands alone"""
    curvature: Curvature | None
    """Of beams whose stiffness varies along them, where their moments depend on it"""
    self_case: int
    """Part that self weight makes"""
    checked: Floats
    """Where checks begin and end on each span [mm] (S, 2)"""
    disturbed: Stretches
    """Where nothing is checked"""
    side_loaded: Bools
    """Members frame into the side of the beam: its loads do not compress its top (S)"""
    direct: Bools
    """Each end stands on its support, which compresses it (S, 2)"""
    natures: tuple[frozenset[Nature], ...]
    """Of the loads on each beam, its own weight included (B)"""
    runways: Runways | None = None
    """Where trains run; None where none does"""


def frame_of(subjects: Sequence[Subject], cases: Sequence[Case]) -> Frame:
    """The beams as tables."""
    follows = [
        subject.reinforcement_source != DRAWN or any(bar.along < 1.0 for bar in subject.bars)
        for subject in subjects
    ]
    runs, sections = run_table([subject.runs for subject in subjects], follows)
    counts = np.array([len(subject.spans) for subject in subjects])
    beam_of = np.repeat(np.arange(counts.size), counts)
    each = [one for subject in subjects for one in subject.spans]
    spans = span_table([one.span for one in each])
    row_of_case = {case.name: row for row, case in enumerate(cases)}
    row_of_beam = {subject.beam.key: row for row, subject in enumerate(subjects)}
    stated = [load for subject in subjects for load in subject.loads if load.travel is None]
    apart = [load for load in stated if load.apart]
    if apart:
        stated = [load for load in stated if not load.apart]
    place, parts = _parts(subjects, cases, apart=bool(apart))
    unit_weights = np.array([subject.unit_weight.value for subject in subjects])
    ends = np.array([subject.ends for subject in subjects])
    weight = self_weight(_weighed(subjects, follows, runs), ends, row_of_case[SELF], unit_weights)
    members = members_of(subjects, sections)
    lengths = np.array([subject.beam.length for subject in subjects])
    together = join_loads(load_table(stated, row_of_beam, row_of_case), weight)
    loads = parts.of(on_spans(together, spans, beam_of), place, apart=False)
    if apart:
        alone = on_spans(load_table(apart, row_of_beam, row_of_case), spans, beam_of)
        loads = join_loads(loads, parts.of(alone, place, apart=True))
    bodies = [subject.beam.runs for subject in subjects]
    return Frame(
        members=members,
        runs=runs,
        zones=stirrup_table(subjects),
        losses=loss_table(subjects),
        spans=spans,
        beam_of=beam_of,
        faces=np.array([one.faces for one in each]),
        loads=loads,
        curvature=curvature_of(bodies, spans, beam_of, loads, members, runs),
        parts=parts,
        end_moments=_end_moments(subjects, parts, beam_of),
        beside=_beside(subjects, parts),
        self_case=int(parts.first[row_of_case[SELF]]),
        checked=checked_stretch(members, spans, beam_of, lengths),
        disturbed=disturbed_stretches(subjects),
        side_loaded=np.array([subject.side_loaded for subject in subjects])[beam_of],
        direct=np.array([one.direct for one in each]),
        natures=_natures(subjects, cases),
        runways=runways_of([subject.runway for subject in subjects], beam_of, parts, row_of_case),
    )


def _weighed(subjects: Sequence[Subject], follows: Sequence[bool], rated: RunTable) -> RunTable:
    """What self weight is that of: what is rated, where every beam is rated as its body alone."""
    if not any(subject.body for subject in subjects):
        return rated
    return run_table([subject.weighed for subject in subjects], follows)[0]


def _parts(
    subjects: Sequence[Subject], cases: Sequence[Case], *, apart: bool
) -> tuple[Ints, Parts]:
    """Which span of its line each span is (S), and the parts of the cases."""
    goes_on = [subject.continuity for subject in subjects]
    places = [
        place
        for subject, own in zip(subjects, goes_on, strict=True)
        for place in (own.places if own else [0] * len(subject.spans))
    ]
    longest = max([own.spans for own in goes_on if own], default=1)
    apart = apart or any(own.parts.apart for own in goes_on if own)
    return np.array(places), parts_of([case.by_spans for case in cases], longest, apart=apart)


def _end_moments(subjects: Sequence[Subject], parts: Parts, beam_of: Ints) -> Floats | None:
    """What lines add at the ends of spans, by part (P, S, 2); None where there is no line."""
    if not any(subject.continuity for subject in subjects):
        return None
    moments = np.zeros((parts.case.size, beam_of.size, 2))
    first = np.searchsorted(beam_of, np.arange(len(subjects))).tolist()
    for row, subject in zip(first, subjects, strict=True):
        if subject.continuity:
            given = subject.continuity.in_parts(subject.continuity.moments, parts)
            moments[:, row : row + given.shape[1]] = given
    return moments


def _beside(subjects: Sequence[Subject], parts: Parts) -> Floats | None:
    """What lines bring to the supports at both ends of beams (P, B, 2); None without a line."""
    if not any(subject.continuity for subject in subjects):
        return None
    forces = np.zeros((parts.case.size, len(subjects), 2))
    for row, subject in enumerate(subjects):
        if subject.continuity:
            forces[:, row] = subject.continuity.in_parts(subject.continuity.beside, parts)
    return forces


def _natures(subjects: Sequence[Subject], cases: Sequence[Case]) -> tuple[frozenset[Nature], ...]:
    nature = {case.name: case.nature for case in cases}
    return tuple(
        frozenset({nature[SELF], *(nature[case] for case in subject.acting)})
        for subject in subjects
    )


def members_of(subjects: Sequence[Subject], sections: Sequence[Section]) -> Members:
    """The beams as arrays, one row each."""
    profiles = [profile_of(*section) for section in sections]
    flanges = np.array([profile.overhangs for profile in profiles])
    return Members(
        concrete_strength=np.array([s.concrete_strength.value for s in subjects]),
        density_factor=np.array([s.density_factor.value for s in subjects]),
        aggregate_size=np.array([s.aggregate_size.value for s in subjects]),
        span=np.array([min([one.length for one in s.spans]) for s in subjects]),
        **_layers(subjects),
        strips=pack_strips([profile.strips for profile in profiles]),
        overhang_left=flanges[:, 0],
        overhang_right=flanges[:, 1],
        flange_thickness=flanges[:, 2],
    )


def _layers(subjects: Sequence[Subject]) -> dict[str, Any]:
    """The layers of all beams by the names of Members, padded (B, L)."""
    bars = [bar for subject in subjects for bar in subject.bars]
    counts = np.array([len(subject.bars) for subject in subjects])
    beam = np.repeat(np.arange(counts.size), counts)
    slot = np.arange(beam.size) - np.repeat(np.cumsum(counts) - counts, counts)
    shape = (counts.size, max(1, int(counts.max())))

    def packed(values: Iterable[float], padding: float = 0.0) -> Floats:
        table = np.full(shape, padding)
        table[beam, slot] = column(values)
        return table

    bonds = bonds_of(subjects)
    beyond = np.stack(
        [packed(bar.start_beyond for bar in bars), packed(bar.end_beyond for bar in bars)], axis=-1
    )
    place = packed(_PLACE[bar.place] for bar in bars)
    anchors = [
        packed(_ANCHOR[end] for end in ends).astype(np.intp)
        for ends in ([bar.start_anchor for bar in bars], [bar.end_anchor for bar in bars])
    ]

    return {
        "layer_height": packed(bar.z for bar in bars),
        "layer_area": packed(
            bar.count * bar.area * along_axis(subject, bar)
            for subject in subjects
            for bar in subject.bars
        ),
        "layer_bar_area": packed((bar.area for bar in bars), 1.0),
        "layer_diameter": packed((bar.diameter for bar in bars), 1.0),
        "layer_yield": packed((g.value for s in subjects for g in s.bar_yield), 400.0),
        "layer_start": packed(bar.start for bar in bars),
        "layer_end": packed(bar.end for bar in bars),
        "layer_start_anchor": anchors[0],
        "layer_end_anchor": anchors[1],
        "layer_cover_distance": packed(bonds.cover_distance),
        "layer_bundle": packed(bonds.bundle, 1.0).astype(np.intp),
        "layer_lapped": packed(bonds.lapped).astype(np.bool_),
        "layer_beyond": beyond if beyond.any() else None,
        "layer_place": place.astype(np.intp) if place.any() else None,
    }


def make_station_arrays(
    frame: Frame, span: Ints, x: Floats, side: Ints
) -> tuple[Members, Stations]:
    """Look up section, stirrups and openings at every station.

    Parameters
    ----------
    frame
        Sections and stirrups along the beams, and the faces of their supports.
    span, x, side
        The stations (N).

    Returns
    -------
    tuple
        The members, with a section for every station in a taper, and the stations.
    """
    beam = frame.beam_of[span]
    area, spacing, strength = stirrups_at(beam, x, side, frame.zones)
    runs = frame.runs
    row = run_at(runs, beam, x, side)
    members, section = sections_at(frame.members, runs, row, x)
    return members, Stations(
        beam=beam,
        section=section,
        shear_loss=losses_at(beam, x, side, frame.losses),
        x=x,
        side=side,
        stirrup_area=area,
        stirrup_spacing=spacing,
        stirrup_yield=strength,
        inside=_between(x, frame.faces[span]),
        chords=chords_at(runs, row),
    )


def checked_stretch(members: Members, spans: SpanTable, beam_of: Ints, lengths: Floats) -> Floats:
    """Where the checks of each span begin and end [mm] (S, 2).

    The span, as far as the beam's body goes (0 to its length); but at a free end whose bars stop
    in the end cover, the last END_COVER at most is plain concrete, and checks end a little inside
    the last bar, whose stress there is next to nothing. What stands on that stretch acts on the
    rest all the same.
    """
    present = members.layer_area > 0.0
    if members.layer_place is not None:
        present &= members.layer_place == OWN
    first = np.where(present, members.layer_start, np.inf).min(axis=1)[beam_of]
    last = np.where(present, members.layer_end, -np.inf).max(axis=1)[beam_of]
    start_tip = (spans.start_kind == FREE) & (first - spans.start <= END_COVER)
    end_tip = (spans.end_kind == FREE) & (spans.end - last <= END_COVER)
    start, end = np.maximum(spans.start, 0.0), np.minimum(spans.end, lengths[beam_of])
    return np.stack(
        [
            np.where(start_tip, np.maximum(start, first + _INSIDE_LAST_BAR), start),
            np.where(end_tip, np.minimum(end, last - _INSIDE_LAST_BAR), end),
        ],
        axis=-1,
    )


def within(stations: StationTable, stretch: Floats) -> StationTable:
    """The stations that lie on a stretch of each span (S, 2); at its ends those just inside."""
    low, high = stretch[stations.beam].T
    x, side = stations.x, stations.side
    first, last = np.abs(x - low) <= SAME_PLACE, np.abs(x - high) <= SAME_PLACE
    kept = (x >= low - SAME_PLACE) & (x <= high + SAME_PLACE)
    kept &= ~(first & (side < 0)) & ~(last & (side > 0))
    side = np.where(first, 1, np.where(last, -1, side))
    x = np.minimum(np.maximum(x, low), high)  # rounding must not leave the stretch, nor its steel
    return StationTable(stations.beam[kept], x[kept], side[kept])


def _between(x: Floats, faces: Floats) -> Bools:
    tolerance = 1e-6
    return np.asarray((x >= faces[:, 0] - tolerance) & (x <= faces[:, 1] + tolerance))
