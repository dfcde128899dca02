"""How near the bars of a batch lie to the concrete's surface and to one another."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, fields
from typing import NamedTuple

import numpy as np

from ifccheck.beam import Bars, Outline, Run
from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.mechanics.spacing import (
    BarPlace,
    bundled,
    distance_to_edges,
    distance_to_surface,
    edges_of,
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
    runs = _runs_of(subjects)
    bar, run = _pairs(runs, counts)
    meets = (start[bar] < runs.end[run]) & (end[bar] > runs.start[run])
    beyond = (end[bar] <= runs.start[run]) | (start[bar] >= runs.last[run])
    told = np.where(runs.tapered[run], False, meets) | (runs.first[run] & beyond)
    distance = np.full(y.size, np.inf)
    rows, edges = bar[told], _edges(runs.outlines)
    of_each = edges[runs.outline[run[told]]]
    np.minimum.at(distance, rows, distance_to_edges(y[rows], z[rows], of_each))
    for row, taper in zip(*(each[meets & runs.tapered[run]] for each in (bar, run)), strict=True):
        tapering = runs.runs[taper]
        for place in (max(tapering.start, start[row]), min(tapering.end, end[row])):
            rings = outline_at(tapering, place).rings
            near = distance_to_surface(y[row : row + 1], z[row : row + 1], rings)
            distance[row] = min(distance[row], near[0])
    return distance


class _Runs(NamedTuple):
    """The runs of all beams (R)."""

    runs: Sequence[Run]
    beam: Ints
    start: Floats
    end: Floats
    last: Floats
    """Where the last run of the beam ends"""
    first: Bools
    """It is the first of its beam, and tells of bars that run through none"""
    tapered: Bools
    outline: Ints
    """Which of the outlines it has"""
    outlines: Sequence[Outline]


def _runs_of(subjects: Sequence[Subject]) -> _Runs:
    runs = [run for subject in subjects for run in subject.runs]
    counts = [len(subject.runs) for subject in subjects]
    beam = np.repeat(np.arange(len(counts)), counts)
    number: dict[Outline, int] = {}
    outline = [number.setdefault(run.outline, len(number)) for run in runs]
    return _Runs(
        runs=runs,
        beam=beam,
        start=column(run.start for run in runs),
        end=column(run.end for run in runs),
        last=column(subject.runs[-1].end for subject in subjects)[beam],
        first=np.diff(beam, prepend=-1) > 0,
        tapered=np.array([run.outline_end is not None for run in runs]),
        outline=np.array(outline),
        outlines=tuple(number),
    )


def _pairs(runs: _Runs, counts: Ints) -> tuple[Ints, Ints]:
    """Every bar with every run of its beam."""
    first = np.cumsum(counts) - counts
    of_run = counts[runs.beam]
    run = np.repeat(np.arange(of_run.size), of_run)
    within = np.arange(run.size) - np.repeat(np.cumsum(of_run) - of_run, of_run)
    return first[runs.beam[run]] + within, run


def _edges(outlines: Sequence[Outline]) -> Floats:
    """Edges of each outline; where it has fewer than others its last one again (O, E, 2, 2)."""
    each = [edges_of(outline.rings) for outline in outlines]
    most = max(map(len, each))
    return np.array([[*edges, *[edges[-1]] * (most - len(edges))] for edges in each])


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
