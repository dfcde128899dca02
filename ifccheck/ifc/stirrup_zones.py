"""Stirrups of beams put together, zone by zone."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.beam import Given, Stirrups
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.measured import Measured
from ifccheck.ifc.stirrup_sets import Places, Ties, Zone, gather_places, zones_of_one_spacing

PARTIAL = "its legs do not run through the height of the section: not counted"
LONELY = "the only stirrup: not counted"


def stirrups_by_zone(model: Measured, legged: Ties) -> dict[int, tuple[Stirrups, ...]]:
    """Put stirrups of one spacing together, by row of the beam."""
    if not len(legged.row):
        return {}
    strand, beam = model.rows.strand[legged.row], model.rows.beam[legged.row]
    areas = np.array([size.area for size in model.places.table.sizes], dtype=float)
    thick, area = model.places.diameter[strand], areas[model.places.size[strand]]
    places, twice = gather_places(legged, beam, thick, area, model.places.grade[strand])
    model.remark(legged.row[twice].tolist(), "modelled twice, counted once")
    for place in np.flatnonzero(places.legs == 0).tolist():
        model.remark(places.ties_of(place), PARTIAL)
    found: dict[int, list[Stirrups]] = {beam: [] for beam in np.unique(places.beam).tolist()}
    whole = places.take(np.flatnonzero(places.legs > 0))
    zones = list(_zones(model, whole))
    for zone, stirrups in zip(zones, _all_stirrups(model, whole, zones), strict=True):
        found[int(whole.beam[zone.first])].append(stirrups)
    return {beam: tuple(stirrups) for beam, stirrups in found.items()}


def _zones(model: Measured, places: Places) -> Iterator[Zone]:
    """The zones of all beams, with their places counted through."""
    if not len(places.x):
        return
    lengths = model.places.frames.length
    first = np.flatnonzero(np.diff(places.beam, prepend=-1))
    stop = np.append(first[1:], len(places.x))
    columns = (first, stop, lengths[places.beam[first]])
    xs, areas, steel = places.x.tolist(), places.area.tolist(), places.steel().tolist()
    for a, b, length in zip(*(column.tolist() for column in columns), strict=True):
        if b - a == 1:
            model.remark(places.ties_of(a), LONELY)
        for zone in zones_of_one_spacing(xs[a:b], areas[a:b], steel[a:b], length):
            yield zone.shifted(a)


@dataclass(frozen=True, slots=True)
class _Extremes:
    """What bounds the stirrups of each zone (Z)."""

    closed: Bools
    bottom: Floats
    top: Floats
    half_width: Floats
    lowest_grade: Ints
    highest_grade: Ints


def _extremes(places: Places, zones: Sequence[Zone]) -> _Extremes:
    bounds = np.array([(zone.first, zone.last + 1) for zone in zones], dtype=np.intp)

    def reduced(ufunc: np.ufunc, values: np.ndarray) -> np.ndarray:
        """Neighbouring zones share a place, so that each is reduced between two bounds."""
        return np.asarray(ufunc.reduceat(np.append(values, values[-1:]), bounds.reshape(-1))[::2])

    return _Extremes(
        closed=reduced(np.logical_and, places.closed),
        bottom=reduced(np.minimum, places.bottom),
        top=reduced(np.maximum, places.top),
        half_width=reduced(np.maximum, places.half_width),
        lowest_grade=reduced(np.minimum, places.grade),
        highest_grade=reduced(np.maximum, places.grade),
    )


def _all_stirrups(model: Measured, places: Places, zones: Sequence[Zone]) -> Iterator[Stirrups]:
    if not zones:
        return
    of_zones = _extremes(places, zones)
    columns = (of_zones.closed, of_zones.bottom, of_zones.top, of_zones.half_width)
    areas, rows = places.area.tolist(), places.ties.tolist()
    bars, begin = model.bar[places.ties].tolist(), places.first_tie.tolist()
    listed = zip(zones, *(column.tolist() for column in columns), strict=True)
    for number, (zone, closed, bottom, top, half_width) in enumerate(listed):
        least = min(range(zone.first, zone.last + 1), key=areas.__getitem__)
        held = slice(begin[zone.first], begin[zone.last + 1])
        size, legs = model.size(rows[begin[least]]), int(places.legs[least])
        grades = int(of_zones.lowest_grade[number]), int(of_zones.highest_grade[number])
        yield Stirrups(
            start=zone.start,
            end=zone.end,
            spacing=zone.spacing,
            diameter=float(places.diameter[least]),
            leg_area=areas[least] / legs,
            legs=legs,
            closed=closed,
            yield_strength=_yield_strength(model, grades, rows[held]),
            bottom=bottom,
            top=top,
            half_width=half_width,
            designation=size.designation,
            origin=model.names(bars[held]),
        )


def _yield_strength(model: Measured, grades: tuple[int, int], rows: Sequence[int]) -> Given | None:
    """The lowest yield strength of a zone's stirrups, from the least and greatest grade."""
    if grades[0] == grades[1] >= 0:
        return model.places.table.grades[grades[0]].strength
    strengths = [model.strength(row) for row in rows]
    known = [strength for strength in strengths if strength is not None]
    if known and len(known) < len(strengths):
        model.findings.reason(
            int(model.rows.beam[rows[0]]),
            "the steel of some of its stirrups is known and of others not",
            blocking=False,
        )
        return None
    return min(known, key=lambda strength: strength.value, default=None)
