"""Stirrups of beams put together, zone by zone."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.beam import Bars, Given, Stirrups
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_samples import spread
from ifccheck.ifc.measured import Measured
from ifccheck.ifc.stirrup_legs import (
    Extents,
    Legs,
    Standing,
    legs_in_one_another,
    overlap_themselves,
    reaches_chords,
)
from ifccheck.ifc.stirrup_sets import (
    Places,
    Ties,
    Zones,
    gather_places,
    same_place,
    zones_of_one_spacing,
)

PARTIAL = "its legs do not run through the height of the section: not counted"
SHORT = (
    "does not run from the outermost bars at the bottom to those at the top: "
    "its legs do not run through the height of the section and are not counted"
)
TWICE = "have legs in one another, as if modelled twice: counted once"
BESIDE = (
    "stand side by side at one place, so near that no concrete comes between them: all their legs"
    " are counted, as of stirrups that are meant to be doubled"
)
LONELY = "the only stirrup: not counted"


def stirrups_by_zone(
    model: Measured, legged: Ties, legs: Legs, bars: Mapping[int, tuple[Bars, ...]]
) -> dict[int, tuple[Stirrups, ...]]:
    """Put stirrups of one spacing together, by row of the beam; ``bars`` are those they hold."""
    if not len(legged.row):
        return {}
    thick = model.places.diameter[model.rows.strand[legged.row]]
    reaches = reaches_chords(_extents(model, legged, thick), bars)
    place = same_place(legged, model.rows.beam[legged.row], thick)
    served, kept = _served(model, legged, legs, thick, reaches, place)
    places = _gathered(model, served.take(kept), place[kept], thick[kept])
    _tell_left_out(model, places, served.legs.min(axis=1) > 0, legged.row, reaches)
    found: dict[int, list[Stirrups]] = {beam: [] for beam in dict.fromkeys(places.beam.tolist())}
    whole = places.take(np.flatnonzero(places.legs > 0))
    _tell_lonely(model, whole)
    length = model.places.frames.length[whole.beam]
    zones = zones_of_one_spacing(whole.beam, whole.x, whole.area, whole.steel(), length)
    beams = whole.beam[zones.first].tolist()
    for beam, stirrups in zip(beams, _all_stirrups(model, whole, zones), strict=True):
        found[beam].append(stirrups)
    return {beam: tuple(stirrups) for beam, stirrups in found.items()}


def _extents(model: Measured, ties: Ties, diameter: Floats) -> Extents:
    return Extents(
        beam=model.rows.beam[ties.row],
        x=ties.x,
        low=ties.low[:, 1],
        high=ties.high[:, 1],
        radius=diameter / 2.0,
        soffit=ties.soffit,
        top=ties.top,
    )


def _served(
    model: Measured, ties: Ties, legs: Legs, diameter: Floats, reaches: Bools, place: Ints
) -> tuple[Ties, Ints]:
    """Ties with the legs that count at each level: those of ties that reach the bars there, and
    of legs in one another one. Also returns which ties have any."""
    serves = np.column_stack([reaches[:, 0], np.ones(len(reaches), dtype=bool), reaches[:, 1]])
    crowded = np.bincount(place)[place] > 1
    thick = np.zeros(int(ties.shape.max()) + 1)
    thick[ties.shape] = diameter
    known = legs.take(np.flatnonzero(legs.shape < len(thick)))
    looked = np.flatnonzero(crowded | overlap_themselves(known, thick)[ties.shape])
    standing = Standing(
        ties.shape[looked],
        ties.x[looked],
        diameter[looked],
        model.yields()[model.places.grade[model.rows.strand[ties.row[looked]]]],
        place[looked],
        serves[looked],
    )
    doubled = legs_in_one_another(legs, standing)
    counts = ties.legs.copy()
    counts[looked] -= doubled.counts
    for pair in looked[doubled.pairs]:
        model.remark(ties.row[pair], TWICE)
    model.remark(ties.row[looked[doubled.beside]], BESIDE)
    left_out = np.where(serves, counts, 0).max(axis=1) == 0
    left_out &= np.where(serves, ties.legs, 0).max(axis=1) > 0
    return replace(ties, legs=np.where(serves, counts, 0)), np.flatnonzero(~left_out)


def _gathered(model: Measured, ties: Ties, place: Ints, diameter: Floats) -> Places:
    strand = model.rows.strand[ties.row]
    areas = np.array([size.area for size in model.places.table.sizes], dtype=float)
    area, grade = areas[model.places.size[strand]], model.places.grade[strand]
    return gather_places(ties, place, model.rows.beam[ties.row], diameter, area, grade)


def _tell_left_out(
    model: Measured, places: Places, whole: Bools, row: Ints, reaches: Bools
) -> None:
    """Tell of stirrups that do not count because they stop short of the bars at a face."""
    short = np.zeros(len(model.rows.beam), dtype=bool)
    short[row] = ~reaches.all(axis=1)
    counts = np.zeros(len(model.rows.beam), dtype=bool)
    counts[row] = whole
    of_place = np.repeat(np.arange(len(places.x)), np.diff(places.first_tie))
    has_whole = np.bincount(of_place, counts[places.ties], len(places.x)) > 0
    silent = short[places.ties] & (has_whole | (places.legs == 0))[of_place]
    model.remark(places.ties[silent], SHORT)
    dead = (places.legs == 0)[of_place] & ~short[places.ties]
    model.remark(places.ties[dead], PARTIAL)


def _tell_lonely(model: Measured, places: Places) -> None:
    """Tell of stirrups at the only place of their beam."""
    other = np.diff(places.beam, prepend=-1, append=-1) != 0
    alone = np.flatnonzero(other[1:] & other[:-1])
    place, within = spread(np.diff(places.first_tie)[alone])
    model.remark(places.ties[places.first_tie[alone[place]] + within], LONELY)


@dataclass(frozen=True, slots=True)
class _Extremes:
    """What bounds the stirrups of each zone (Z)."""

    closed: Bools
    bottom: Floats
    top: Floats
    half_width: Floats
    lowest_grade: Ints
    highest_grade: Ints
    least: Ints
    """Its first place of the least area."""


def _extremes(places: Places, zones: Zones) -> _Extremes:
    bounds = np.stack([zones.first, zones.last + 1], axis=1).reshape(-1)

    def reduced(ufunc: np.ufunc, values: np.ndarray) -> np.ndarray:
        """Neighbouring zones share a place, so that each is reduced between two bounds."""
        return np.asarray(ufunc.reduceat(np.append(values, values[-1:]), bounds)[::2])

    zone, within = spread(zones.last - zones.first + 1)
    place = zones.first[zone] + within
    is_least = places.area[place] == reduced(np.minimum, places.area)[zone]
    zone, place = zone[is_least], place[is_least]
    return _Extremes(
        closed=reduced(np.logical_and, places.closed),
        bottom=reduced(np.minimum, places.bottom),
        top=reduced(np.maximum, places.top),
        half_width=reduced(np.maximum, places.half_width),
        lowest_grade=reduced(np.minimum, places.grade),
        highest_grade=reduced(np.maximum, places.grade),
        least=place[np.flatnonzero(np.diff(zone, prepend=-1))],
    )


def _all_stirrups(model: Measured, places: Places, zones: Zones) -> Iterator[Stirrups]:
    if not len(zones.first):
        return
    bounds = _extremes(places, zones)
    least, rows = bounds.least, places.ties.tolist()
    held = (places.first_tie[zones.first], places.first_tie[zones.last + 1])
    names = model.names(model.bar[places.ties], *held)
    size = model.places.size[model.rows.strand[places.ties[places.first_tie[least]]]]
    stretch = (zones.start, zones.end, zones.spacing)
    legs = (places.diameter[least], places.area[least] / places.legs[least], places.legs[least])
    reach = (bounds.bottom, bounds.top, bounds.half_width)
    steel = (bounds.closed, size, bounds.lowest_grade, bounds.highest_grade)
    columns = (column.tolist() for column in (*stretch, *legs, *reach, *steel, *held))
    for name, start, end, spacing, diameter, area, count, *more in zip(
        names, *columns, strict=True
    ):
        bottom, top, half_width, closed, number, low, high, a, b = more
        yield Stirrups(
            start=start,
            end=end,
            spacing=spacing,
            diameter=diameter,
            leg_area=area,
            legs=count,
            closed=closed,
            yield_strength=_yield_strength(model, (low, high), rows[a:b]),
            bottom=bottom,
            top=top,
            half_width=half_width,
            designation=model.places.table.sizes[number].designation,
            origin=name,
        )


def _yield_strength(model: Measured, grades: tuple[int, int], rows: Sequence[int]) -> Given | None:
    """The lowest yield strength of a zone's stirrups, from the least and greatest grade."""
    if grades[0] == grades[1] >= 0:
        return model.places.table.grades[grades[0]].given
    strengths = [model.strength(row) for row in rows]
    known = [strength for strength in strengths if strength is not None]
    if known and len(known) < len(strengths):
        model.findings.reason(
            int(model.rows.beam[rows[0]]),
            "the steel of some of its stirrups is known and of others not",
            blocking=False,
        )
        return None
    unread = [strength for strength in known if math.isnan(strength.value)]
    return min(unread or known, key=lambda strength: strength.value, default=None)
