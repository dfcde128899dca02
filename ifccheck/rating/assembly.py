"""From beams to arrays: what every formula of the run works on."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.spans import FREE, SpanTable
from ifccheck.analysis.stations import SAME_PLACE, StationTable
from ifccheck.beam import Anchor, Bars, Outline
from ifccheck.mechanics.arrays import (
    ANCHOR_FULL,
    ANCHOR_HOOK,
    ANCHOR_STRAIGHT,
    Bools,
    Floats,
    Ints,
    Members,
    Stations,
)
from ifccheck.mechanics.spacing import distance_to_surface, nearest_neighbour
from ifccheck.mechanics.width_profile import overhangs, pack_strips, strips_of
from ifccheck.rating.subject import Subject

END_COVER = 100.0
"""Greatest distance from a free end at which bars may stop and count as covered only [mm]"""
_INSIDE_LAST_BAR = 25.0

_ANCHOR = {
    Anchor.STRAIGHT: ANCHOR_STRAIGHT,
    Anchor.HOOK: ANCHOR_HOOK,
    Anchor.ANCHORED: ANCHOR_FULL,
}
_LAYER_FIELDS = (
    "height", "area", "bar_area", "diameter", "yield", "start", "end", "cover_distance",
)  # fmt: skip
_LAYER_PADDING = {"bar_area": 1.0, "diameter": 1.0, "yield": 400.0}


@dataclass(frozen=True, slots=True)
class RunTable:
    """The runs of all beams, one row each (R), sorted by beam and start."""

    beam: Ints
    start: Floats
    end: Floats
    section: Ints
    """Row of Members.strips"""
    area: Floats
    """[mm2]"""


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


def run_table(subjects: Sequence[Subject]) -> tuple[RunTable, tuple[Outline, ...]]:
    """Number the distinct outlines and list where each beam has which."""
    rows: dict[Outline, int] = {}
    table = [
        (beam, run.start, run.end, rows.setdefault(run.outline, len(rows)))
        for beam, subject in enumerate(subjects)
        for run in subject.beam.runs
    ]
    beam, start, end, section = (np.array(column) for column in zip(*table, strict=True))
    outlines = tuple(rows)
    areas = np.array([_area(outline) for outline in outlines])
    return RunTable(beam, start, end, section, areas[section]), outlines


def _area(outline: Outline) -> float:
    strips = strips_of(outline.rings)
    return float(np.sum((strips[:, 1] - strips[:, 0]) * (strips[:, 2] + strips[:, 3]) / 2.0))


def members_of(subjects: Sequence[Subject], outlines: Sequence[Outline]) -> Members:
    """The beams as arrays, one row each."""
    layers = [_layers(subject) for subject in subjects]
    deepest = max(1, max(layer["height"].size for layer in layers))
    packed = {name: _padded(layers, name, deepest) for name in _LAYER_FIELDS}
    flanges = np.array([overhangs(outline.rings) for outline in outlines])
    return Members(
        concrete_strength=np.array([s.concrete_strength.value for s in subjects]),
        density_factor=np.array([s.density_factor.value for s in subjects]),
        aggregate_size=np.array([s.aggregate_size.value for s in subjects]),
        span=np.array([s.span.end - s.span.start for s in subjects]),
        **{f"layer_{name}": packed[name] for name in _LAYER_FIELDS},
        layer_start_anchor=_padded(layers, "start_anchor", deepest).astype(np.intp),
        layer_end_anchor=_padded(layers, "end_anchor", deepest).astype(np.intp),
        strips=pack_strips([strips_of(outline.rings) for outline in outlines]),
        overhang_left=flanges[:, 0],
        overhang_right=flanges[:, 1],
        flange_thickness=flanges[:, 2],
    )


def _layers(subject: Subject) -> dict[str, Floats]:
    bars = subject.bars
    return {
        "height": np.array([b.z for b in bars], dtype=np.float64),
        "area": np.array([b.count * b.area for b in bars], dtype=np.float64),
        "bar_area": np.array([b.area for b in bars], dtype=np.float64),
        "diameter": np.array([b.diameter for b in bars], dtype=np.float64),
        "yield": np.array([g.value for g in subject.bar_yield], dtype=np.float64),
        "start": np.array([b.start for b in bars], dtype=np.float64),
        "end": np.array([b.end for b in bars], dtype=np.float64),
        "start_anchor": np.array([_ANCHOR[b.start_anchor] for b in bars], dtype=np.float64),
        "end_anchor": np.array([_ANCHOR[b.end_anchor] for b in bars], dtype=np.float64),
        "cover_distance": cover_distances(bars, subject.beam.runs[0].outline),
    }


def _padded(layers: Sequence[dict[str, Floats]], name: str, width: int) -> Floats:
    packed = np.full((len(layers), width), _LAYER_PADDING.get(name, 0.0))
    for row, layer in enumerate(layers):
        packed[row, : layer[name].size] = layer[name]
    return packed


def cover_distances(bars: Sequence[Bars], outline: Outline) -> Floats:
    """dcs of each layer: the least over its bars of the distance of the bar's centre from the
    concrete surface and of 2/3 of the centre spacing (CSA A23.3 and others) [mm] (L)."""
    if not bars:
        return np.zeros(0)
    layer = np.repeat(np.arange(len(bars)), [len(b.ys) for b in bars])
    y = np.array([place for b in bars for place in b.ys], dtype=np.float64)
    z = np.array([b.z for b in bars], dtype=np.float64)[layer]
    start = np.array([b.start for b in bars], dtype=np.float64)[layer]
    end = np.array([b.end for b in bars], dtype=np.float64)[layer]
    spacing = nearest_neighbour(y, z, start, end)
    nearest = np.minimum(distance_to_surface(y, z, outline.rings), spacing * 2.0 / 3.0)
    least = np.full(len(bars), np.inf)
    np.minimum.at(least, layer, nearest)
    return least


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


def make_station_arrays(
    beam: Ints, x: Floats, side: Ints, runs: RunTable, zones: StirrupTable, faces: Floats
) -> Stations:
    """Look up section and stirrups at every station.

    Parameters
    ----------
    beam, x, side
        The stations (N).
    runs, zones
        Sections and stirrups along the beams.
    faces
        Faces of the two supports of each beam [mm] (B, 2).
    """
    area, spacing, strength = _stirrups_at(beam, x, side, zones)
    return Stations(
        beam=beam,
        section=runs.section[_row_at(beam, x, side, runs.beam, runs.start)],
        x=x,
        side=side,
        stirrup_area=area,
        stirrup_spacing=spacing,
        stirrup_yield=strength,
        inside=_between(x, faces[beam]),
    )


def checked_stretch(members: Members, spans: SpanTable) -> Floats:
    """Where the checks of each beam begin and end [mm] (B, 2).

    The span; but at a free end whose bars stop in the end cover, the last END_COVER at most is
    plain concrete, and checks end a little inside the last bar, whose stress there is next to
    nothing. What stands on that stretch acts on the rest all the same.
    """
    present = members.layer_area > 0.0
    first = np.where(present, members.layer_start, np.inf).min(axis=1)
    last = np.where(present, members.layer_end, -np.inf).max(axis=1)
    start_tip = (spans.start_kind == FREE) & (first - spans.start <= END_COVER)
    end_tip = (spans.end_kind == FREE) & (spans.end - last <= END_COVER)
    return np.stack(
        [
            np.where(start_tip, np.maximum(spans.start, first + _INSIDE_LAST_BAR), spans.start),
            np.where(end_tip, np.minimum(spans.end, last - _INSIDE_LAST_BAR), spans.end),
        ],
        axis=-1,
    )


def within(stations: StationTable, stretch: Floats) -> StationTable:
    """The stations that lie on a stretch of each beam (B, 2)."""
    low, high = stretch[stations.beam].T
    kept = (stations.x >= low - SAME_PLACE) & (stations.x <= high + SAME_PLACE)
    return StationTable(stations.beam[kept], stations.x[kept], stations.side[kept])


def _between(x: Floats, faces: Floats) -> Bools:
    tolerance = 1e-6
    return np.asarray((x >= faces[:, 0] - tolerance) & (x <= faces[:, 1] + tolerance))


def _row_at(beam: Ints, x: Floats, side: Ints, row_beam: Ints, row_start: Floats) -> Ints:
    """Row of a table sorted by beam and start that holds each station; the first row of a
    beam also serves what lies before it."""
    reach = 2.0 * (np.max(np.abs(row_start)) + np.max(np.abs(x)) + 1.0)
    key = row_beam * reach + row_start
    place = np.searchsorted(key, beam * reach + x + 1e-6 * np.sign(side), side="right") - 1
    first = np.searchsorted(row_beam, beam)
    return np.asarray(np.maximum(place, first), dtype=np.intp)


def _stirrups_at(
    beam: Ints, x: Floats, side: Ints, zones: StirrupTable
) -> tuple[Floats, Floats, Floats]:
    """Area, spacing and yield strength at each station: the weakest of the zones that hold it."""
    area, spacing = np.zeros(x.size), np.full(x.size, np.inf)
    strength = np.full(x.size, 400.0)
    order = np.argsort(beam, kind="stable")
    first, last = (
        np.searchsorted(beam[order], zones.beam),
        np.searchsorted(beam[order], zones.beam, side="right"),
    )
    lengths = last - first
    station = order[
        np.repeat(first - np.cumsum(lengths) + lengths, lengths) + np.arange(lengths.sum())
    ]
    zone = np.repeat(np.arange(zones.beam.size), lengths)
    place = x[station] + 1e-6 * side[station]
    held = (place >= zones.start[zone] - 1e-9) & (place <= zones.end[zone] + 1e-9)
    station, zone = station[held], zone[held]
    ratio = zones.area[zone] / zones.spacing[zone]
    weakest_first = np.lexsort((np.where(np.isnan(ratio), -1.0, ratio), station))
    station, zone = station[weakest_first], zone[weakest_first]
    chosen, row = np.unique(station, return_index=True)
    area[chosen], spacing[chosen] = zones.area[zone[row]], zones.spacing[zone[row]]
    strength[chosen] = zones.yield_strength[zone[row]]
    return area, spacing, strength
