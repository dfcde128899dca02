"""From beams to arrays: what every formula of the run works on."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ifccheck.analysis.loads import LoadTable, join_loads, load_table, self_weight_lines
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
from ifccheck.rating.disturbed import disturbed
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
    weighed_parts,
)
from ifccheck.rating.stiffness import curvature_of
from ifccheck.rating.subject import Subject

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
class StirrupTable:
    """The stirrup zones of all beams, one row each (Z)."""

    beam: Ints
    start: Floats
    end: Floats
    spacing: Floats
    area: Floats
    """All legs [mm2]; nan where the legs are not stated"""
    yield_strength: Floats


@dataclass(frozen=True, slots=True)
class Stretches:
    """Stretches of beams, one row each (D), in any order."""

    beam: Ints
    start: Floats
    end: Floats

    def hold(self, beam: Ints, x: Floats) -> Bools:
        """Whether each place of a beam lies within one of its stretches (N)."""
        held = np.zeros(x.shape, dtype=np.bool_)
        for row, start, end in zip(self.beam, self.start, self.end, strict=True):
            held |= (beam == row) & (x > start + SAME_PLACE) & (x < end - SAME_PLACE)
        return held


def disturbed_stretches(subjects: Sequence[Subject]) -> Stretches:
    """The stretches beside steps of all beams."""
    rows = [
        (beam, stretch.start, stretch.end)
        for beam, subject in enumerate(subjects)
        if len(subject.beam.runs) > 1 or subject.beam.runs[0].outline_end is not None
        for stretch in disturbed(subject.beam.runs)
    ]
    beam, start, end = np.array(rows, dtype=np.float64).reshape(-1, 3).T
    return Stretches(beam.astype(np.intp), start, end)


@dataclass(frozen=True, slots=True)
class LossTable:
    """Where openings take away depth that carries shear, one row each (O)."""

    beam: Ints
    start: Floats
    end: Floats
    height: Floats
    """[mm]; nan where shear is not rated"""


@dataclass(frozen=True, slots=True)
class Frame:
    """The batch as tables, before stations."""

    members: Members
    runs: RunTable
    zones: StirrupTable
    losses: LossTable
    spans: SpanTable
    faces: Floats
    """(B, 2)"""
    loads: LoadTable
    curvature: Curvature | None
    """Of beams whose stiffness varies along them, where their moments depend on it"""
    self_case: int
    """Row of the case that self weight makes"""
    checked: Floats
    """Where checks begin and end on each beam [mm] (B, 2)"""
    disturbed: Stretches
    """Where nothing is checked"""
    side_loaded: Bools
    """Members frame into the side of the beam: its loads do not compress its top (B)"""
    direct: Bools
    """Each end stands on its support, which compresses it (B, 2)"""
    natures: tuple[frozenset[Nature], ...]
    """Of the loads on each beam, its own weight included (B)"""


def frame_of(subjects: Sequence[Subject], cases: Sequence[Case]) -> Frame:
    """The beams as tables."""
    follows = [
        subject.reinforcement_source != DRAWN or any(bar.along < 1.0 for bar in subject.bars)
        for subject in subjects
    ]
    runs, sections = run_table([subject.runs for subject in subjects], follows)
    spans = span_table([subject.span for subject in subjects])
    row_of_case = {case.name: row for row, case in enumerate(cases)}
    row_of_beam = {subject.beam.key: row for row, subject in enumerate(subjects)}
    stated = load_table(
        [load for subject in subjects for load in subject.loads], row_of_beam, row_of_case
    )
    unit_weights = np.array([subject.unit_weight.value for subject in subjects])
    body, _ = run_table([subject.weighed for subject in subjects], follows)
    weight = _self_weight(body, spans, row_of_case[SELF], unit_weights)
    members = members_of(subjects, sections)
    lengths = np.array([subject.beam.length for subject in subjects])
    loads = join_loads(stated, weight)
    bodies = [subject.beam.runs for subject in subjects]
    return Frame(
        members=members,
        runs=runs,
        zones=stirrup_table(subjects),
        losses=loss_table(subjects),
        spans=spans,
        faces=np.array([subject.faces for subject in subjects]),
        loads=loads,
        curvature=curvature_of(bodies, spans, loads, members, runs),
        self_case=row_of_case[SELF],
        checked=checked_stretch(members, spans, lengths),
        disturbed=disturbed_stretches(subjects),
        side_loaded=np.array([subject.side_loaded for subject in subjects]),
        direct=np.array([subject.direct for subject in subjects]),
        natures=_natures(subjects, cases),
    )


def _natures(subjects: Sequence[Subject], cases: Sequence[Case]) -> tuple[frozenset[Nature], ...]:
    nature = {case.name: case.nature for case in cases}
    return tuple(
        frozenset({nature[SELF], *(nature[load.case] for load in subject.loads)})
        for subject in subjects
    )


def _self_weight(runs: RunTable, spans: SpanTable, case: int, unit_weights: Floats) -> LoadTable:
    """The weight of all runs; that of the first and last reaches as far as the span does."""
    row, start, end, area_start, area_end = weighed_parts(runs)
    beam = runs.beam[row]
    return self_weight_lines(
        beam=beam,
        case=case,
        start=np.where(_first_of(beam), np.minimum(start, spans.start[beam]), start),
        end=np.where(_last_of(beam), np.maximum(end, spans.end[beam]), end),
        area_start=area_start,
        area_end=area_end,
        unit_weight=unit_weights[beam],
    )


def _first_of(beam: Ints) -> Bools:
    """Whether each row is the first of its beam."""
    return np.append(True, beam[1:] != beam[:-1])[: beam.size]


def _last_of(beam: Ints) -> Bools:
    """Whether each row is the last of its beam."""
    return np.append(beam[1:] != beam[:-1], True)[: beam.size]


def members_of(subjects: Sequence[Subject], sections: Sequence[Section]) -> Members:
    """The beams as arrays, one row each."""
    profiles = [profile_of(*section) for section in sections]
    flanges = np.array([profile.overhangs for profile in profiles])
    return Members(
        concrete_strength=np.array([s.concrete_strength.value for s in subjects]),
        density_factor=np.array([s.density_factor.value for s in subjects]),
        aggregate_size=np.array([s.aggregate_size.value for s in subjects]),
        span=np.array([s.span.end - s.span.start for s in subjects]),
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


def stirrup_table(subjects: Sequence[Subject]) -> StirrupTable:
    """The stirrup zones of all beams; a beam of which no source speaks has one of unknown area."""
    rows: list[tuple[float, ...]] = []
    for beam, subject in enumerate(subjects):
        if not subject.stirrups_known:
            rows.append((beam, -np.inf, np.inf, np.inf, np.nan, np.nan))
        for zone, strength in zip(subject.stirrups, subject.stirrup_yield, strict=True):
            area = np.nan if zone.legs is None else zone.legs * zone.leg_area
            rows.append((beam, zone.start, zone.end, zone.spacing, area, strength.value))
    columns = np.array(rows, dtype=np.float64).reshape(-1, 6).T
    return StirrupTable(columns[0].astype(np.intp), *columns[1:])


def loss_table(subjects: Sequence[Subject]) -> LossTable:
    """Where openings take away depth that carries shear, on all beams."""
    rows = [
        (beam, loss.start, loss.end, loss.height)
        for beam, subject in enumerate(subjects)
        for loss in (subject.body.losses if subject.body else ())
    ]
    columns = np.array(rows, dtype=np.float64).reshape(-1, 4).T
    return LossTable(columns[0].astype(np.intp), *columns[1:])


def make_station_arrays(
    frame: Frame, beam: Ints, x: Floats, side: Ints
) -> tuple[Members, Stations]:
    """Look up section, stirrups and openings at every station.

    Parameters
    ----------
    frame
        Sections and stirrups along the beams, and the faces of their supports.
    beam, x, side
        The stations (N).

    Returns
    -------
    tuple
        The members, with a section for every station in a taper, and the stations.
    """
    area, spacing, strength = _stirrups_at(beam, x, side, frame.zones)
    runs = frame.runs
    row = run_at(runs, beam, x, side)
    members, section = sections_at(frame.members, runs, row, x)
    return members, Stations(
        beam=beam,
        section=section,
        shear_loss=_losses_at(beam, x, side, frame.losses),
        x=x,
        side=side,
        stirrup_area=area,
        stirrup_spacing=spacing,
        stirrup_yield=strength,
        inside=_between(x, frame.faces[beam]),
        chords=chords_at(runs, row),
    )


def checked_stretch(members: Members, spans: SpanTable, lengths: Floats) -> Floats:
    """Where the checks of each beam begin and end [mm] (B, 2).

    The span, as far as the beam's body goes (0 to its length); but at a free end whose bars stop
    in the end cover, the last END_COVER at most is plain concrete, and checks end a little inside
    the last bar, whose stress there is next to nothing. What stands on that stretch acts on the
    rest all the same.
    """
    present = members.layer_area > 0.0
    if members.layer_place is not None:
        present &= members.layer_place == OWN
    first = np.where(present, members.layer_start, np.inf).min(axis=1)
    last = np.where(present, members.layer_end, -np.inf).max(axis=1)
    start_tip = (spans.start_kind == FREE) & (first - spans.start <= END_COVER)
    end_tip = (spans.end_kind == FREE) & (spans.end - last <= END_COVER)
    start, end = np.maximum(spans.start, 0.0), np.minimum(spans.end, lengths)
    return np.stack(
        [
            np.where(start_tip, np.maximum(start, first + _INSIDE_LAST_BAR), start),
            np.where(end_tip, np.minimum(end, last - _INSIDE_LAST_BAR), end),
        ],
        axis=-1,
    )


def within(stations: StationTable, stretch: Floats) -> StationTable:
    """The stations that lie on a stretch of each beam (B, 2); at its ends those just inside."""
    low, high = stretch[stations.beam].T
    x, side = stations.x, stations.side
    first, last = np.abs(x - low) <= SAME_PLACE, np.abs(x - high) <= SAME_PLACE
    kept = (x >= low - SAME_PLACE) & (x <= high + SAME_PLACE)
    kept &= ~(first & (side < 0)) & ~(last & (side > 0))
    side = np.where(first, 1, np.where(last, -1, side))
    return StationTable(stations.beam[kept], x[kept], side[kept])


def _between(x: Floats, faces: Floats) -> Bools:
    tolerance = 1e-6
    return np.asarray((x >= faces[:, 0] - tolerance) & (x <= faces[:, 1] + tolerance))


def _losses_at(beam: Ints, x: Floats, side: Ints, losses: LossTable) -> Floats:
    """Depth that openings take away at each station [mm]: of all that hold it together."""
    lost = np.zeros(x.size)
    if losses.beam.size:
        station, row = _held(beam, x, side, losses, np.arange(losses.beam.size))
        np.add.at(lost, station, losses.height[row])
    return lost


def _held(
    beam: Ints, x: Floats, side: Ints, stretches: StirrupTable | LossTable, rows: Ints
) -> tuple[Ints, Ints]:
    """Every pair of a station and a stretch of its beam that holds it, in the order of the
    stretches' rows."""
    order = np.argsort(beam, kind="stable")
    first, last = (
        np.searchsorted(beam[order], stretches.beam[rows], side=end) for end in ("left", "right")
    )
    lengths = last - first
    station = order[
        np.repeat(first - np.cumsum(lengths) + lengths, lengths) + np.arange(lengths.sum())
    ]
    row = np.repeat(rows, lengths)
    place = x[station] + 1e-6 * side[station]
    held = (place >= stretches.start[row] - 1e-9) & (place <= stretches.end[row] + 1e-9)
    return station[held], row[held]


def _stirrups_at(
    beam: Ints, x: Floats, side: Ints, zones: StirrupTable
) -> tuple[Floats, Floats, Floats]:
    """Area, spacing and yield strength at each station: the weakest of the zones that hold it."""
    area, spacing = np.zeros(x.size), np.full(x.size, np.inf)
    strength = np.full(x.size, 400.0)
    ratio = zones.area / zones.spacing
    strongest_first = np.argsort(np.where(np.isnan(ratio), -1.0, ratio), kind="stable")[::-1]
    station, zone = _held(beam, x, side, zones, strongest_first)
    area[station], spacing[station] = zones.area[zone], zones.spacing[zone]  # the last one stays
    strength[station] = zones.yield_strength[zone]
    return area, spacing, strength
