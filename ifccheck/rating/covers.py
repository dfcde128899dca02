"""How near the bars of a batch lie to the concrete's surface and to one another."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, fields

import numpy as np

from ifccheck.beam import Bars, Outline, Run
from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.mechanics.spacing import (
    BarPlace,
    bundled,
    distance_to_surface,
    lapped,
    nearest_neighbour,
)
from ifccheck.rating.runs import outline_at
from ifccheck.rating.subject import Subject


def column(values: Iterable[float]) -> Floats:
    """Numbers as an array."""
    return np.fromiter(values, dtype=np.float64)


@dataclass(frozen=True, slots=True)
class Bonds:
    """What the development of each layer depends on beside its own steel (L)."""

    cover_distance: Floats
    """dcs: the least over its bars of the distance of the bar's centre from the concrete surface
    and of 2/3 of the centre spacing (CSA A23.3 and others) [mm]"""
    bundle: Ints
    """Bars in contact, itself included: the most over its bars"""
    lapped: Bools
    """Some bar of it laps another"""


def bonds_of(subjects: Sequence[Subject]) -> Bonds:
    """How the layers of all beams are bonded, one after another."""
    layers = [bar for subject in subjects for bar in subject.bars]
    sizes = np.array([len(bar.ys) for bar in layers], dtype=np.intp)
    layer = np.repeat(np.arange(sizes.size), sizes)
    y = column(place for bar in layers for place in bar.ys)
    z, start, end, diameter, start_beyond, end_beyond = (
        column(getattr(bar, name) for bar in layers)[layer]
        for name in ("z", "start", "end", "diameter", "start_beyond", "end_beyond")
    )
    counts = np.array([sum(len(bar.ys) for bar in subject.bars) for subject in subjects])
    places = BarPlace(y, z, diameter, start, end, start - start_beyond, end + end_beyond)
    spacing, bundle, laps = _neighbours(places, counts)
    nearest = np.minimum(_to_surface(subjects, y, z, start, end, counts), spacing * 2.0 / 3.0)
    least = np.full(sizes.size, np.inf)
    np.minimum.at(least, layer, nearest)
    _share_between_pieces(subjects, layers, least)
    most, lapped = np.ones(sizes.size, dtype=np.intp), np.zeros(sizes.size, dtype=np.bool_)
    np.maximum.at(most, layer, bundle)
    np.logical_or.at(lapped, layer, laps)
    return Bonds(least, most, lapped)


def _share_between_pieces(
    subjects: Sequence[Subject], layers: Sequence[Bars], least: Floats
) -> None:
    """Give layers of bars that go on elsewhere the least distance of all such bars of their size.

    They are pieces of the same bars: they develop where they go on, and no better than there.
    """
    going_on = [k for k, bar in enumerate(layers) if bar.start_beyond > 0.0 or bar.end_beyond > 0.0]
    if not going_on:
        return
    beam = np.repeat(np.arange(len(subjects)), [len(subject.bars) for subject in subjects])
    groups: dict[tuple[int, float], list[int]] = defaultdict(list)
    for k in going_on:
        groups[int(beam[k]), layers[k].diameter].append(k)
    for pieces in groups.values():
        least[pieces] = least[pieces].min()


def _to_surface(
    subjects: Sequence[Subject], y: Floats, z: Floats, start: Floats, end: Floats, counts: Ints
) -> Floats:
    """Distance of each bar from the surface of the sections of its beam that it runs through [mm]:
    the least of them."""
    distance = np.full(y.size, np.inf)
    for outline, parts in _bars_of_outlines(subjects, start, end, counts).items():
        bars = np.concatenate(parts)
        found = distance_to_surface(y[bars], z[bars], outline.rings)
        distance[bars] = np.minimum(distance[bars], found)
    return distance


def _bars_of_outlines(
    subjects: Sequence[Subject], start: Floats, end: Floats, counts: Ints
) -> dict[Outline, list[Ints]]:
    """Rows of the bars that run through each outline; one that runs through none is told by the
    first of its beam. In a taper a bar runs through those at the ends of what it has of it."""
    found: dict[Outline, list[Ints]] = defaultdict(list)
    first = 0
    for subject, count in zip(subjects, counts.tolist(), strict=True):
        bars = np.arange(first, first + count)
        first += count
        for run in subject.runs:
            meets = bars[(start[bars] < run.end) & (end[bars] > run.start)]
            for outline, rows in _within(run, meets, start, end):
                found[outline].append(rows)
            if run is subject.runs[0]:
                beyond = (end[bars] <= run.start) | (start[bars] >= subject.runs[-1].end)
                found[run.outline].append(bars[beyond])
    return found


def _within(run: Run, bars: Ints, start: Floats, end: Floats) -> Iterator[tuple[Outline, Ints]]:
    """The outlines of a run with the bars that lie in each."""
    if run.outline_end is None:
        yield run.outline, bars
        return
    for row in bars:
        for place in (max(run.start, start[row]), min(run.end, end[row])):
            yield outline_at(run, place), np.array([row])


def _neighbours(places: BarPlace, counts: Ints) -> tuple[Floats, Ints, Bools]:
    """Distance of each bar to the nearest beside it that is none of its bundle [mm], the bars of
    that bundle, and whether it laps another."""
    first = np.cumsum(counts) - counts
    total = places.y.size
    spacing, bundle = np.empty(total), np.ones(total, dtype=np.intp)
    laps = np.zeros(total, dtype=np.bool_)
    for count in np.unique(counts[counts > 0]).tolist():
        bars = first[counts == count][:, None] + np.arange(count)
        of_beams = BarPlace(*(getattr(places, one.name)[bars] for one in fields(places)))
        together = bundled(of_beams)
        spacing[bars] = nearest_neighbour(of_beams, together)
        bundle[bars] += together.sum(axis=-1)
        laps[bars] = lapped(of_beams)
    return spacing, bundle, laps
