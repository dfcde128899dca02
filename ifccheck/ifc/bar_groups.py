"""Runs of bars along beams put together: equal bars of a layer."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from ifccheck.beam import Anchor, Bars
from ifccheck.ifc.bar_clashes import without_clashes
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bars import Runs, equal_bars, settle_heights
from ifccheck.ifc.measured import Measured

SLOPING = 10.0
"""A bar that rises by more than this [mm] is remarked on."""


def longitudinal_bars(model: Measured, runs: Runs) -> dict[int, tuple[Bars, ...]]:
    """Put equal runs along the beams together, by row of the beam."""
    beam = model.rows.beam[runs.row]
    centre = np.clip((runs.start + runs.end) / 2.0, 0.0, model.places.frames.length[beam])
    bounds = model.places.frames.bounds_at(beam, centre)
    height, steep = settle_heights(runs, (bounds[:, 2] + bounds[:, 3]) / 2.0)
    model.remark(runs.row[steep], "crosses the middle of the section, not counted")
    sloping = ~steep & (runs.highest - runs.lowest > SLOPING)
    model.remark(runs.row[sloping], "slopes: taken at its height nearest to the section's middle")
    bent = runs.row[runs.poor_bend]
    model.remark(bent, "ends in a bend short of a standard hook: taken as straight")
    runs, counted = without_clashes(model, runs, beam, ~steep)
    labels = _labels(model, runs, beam, counted)
    groups = _equal(runs, labels, height)
    groups = groups.take(np.flatnonzero(counted[groups.run]))
    order = np.lexsort((groups.end, groups.start, groups.z, beam[groups.run]))
    groups = groups.take(order)
    found: dict[int, list[Bars]] = {}
    beams = beam[groups.run].tolist()
    for key, bars in zip(beams, _all_bars(model, runs, groups), strict=True):
        found.setdefault(key, []).append(bars)
    return {key: tuple(bars) for key, bars in found.items()}


def _labels(model: Measured, runs: Runs, beam: Ints, counted: Bools) -> Ints:
    """Number the runs so that only those of one beam, size, grade and anchors have one number,
    and those that count another than those that do not."""
    table, strand = model.places.table, model.rows.strand[runs.row]
    sizes, grades = model.places.size[strand], model.places.grade[strand]
    label = beam * len(table.sizes) + sizes
    label = label * len(table.grades) + grades
    return ((label * 2 + runs.start_hook) * 2 + runs.end_hook) * 2 + counted


@dataclass(frozen=True, slots=True)
class _Groups:
    """Equal runs of bars (G)."""

    run: Ints
    """One of the runs of each."""
    first: Ints
    """Where the runs of each begin and stop in ``runs``."""
    stop: Ints
    start: Floats
    end: Floats
    z: Floats
    runs: Ints
    """The runs, those of one group after those of another."""

    def take(self, kept: Ints) -> _Groups:
        """Some of the groups."""
        return _Groups(
            self.run[kept],
            self.first[kept],
            self.stop[kept],
            self.start[kept],
            self.end[kept],
            self.z[kept],
            self.runs,
        )


def _equal(runs: Runs, labels: Ints, height: Floats) -> _Groups:
    order, first = equal_bars(labels, runs, height)
    stop = np.append(first[1:], len(order)).astype(np.intp)[: len(first)]
    if not len(order):
        return _Groups(first, first, stop, height, height, height, order)
    return _Groups(
        run=order[first],
        first=first,
        stop=stop,
        start=np.maximum.reduceat(runs.start[order], first),
        end=np.minimum.reduceat(runs.end[order], first),
        z=np.add.reduceat(height[order], first) / (stop - first),
        runs=order,
    )


def _all_bars(model: Measured, runs: Runs, groups: _Groups) -> Iterator[Bars]:
    """The bars of each group."""
    table, run = model.places.table, groups.run
    strand = model.rows.strand[runs.row[run]]
    ys = runs.y[groups.runs].tolist()
    names = model.names(model.bar[runs.row[groups.runs]], groups.first, groups.stop)
    columns = (
        *(groups.first, groups.stop, groups.start, groups.end, groups.z),
        *(model.places.size[strand], model.places.grade[strand]),
        *(runs.start_hook[run], runs.end_hook[run]),
    )
    listed = zip(names, *(column.tolist() for column in columns), strict=True)
    for name, a, b, start, end, z, number, grade, start_hook, end_hook in listed:
        size = table.sizes[number]
        yield Bars(
            count=b - a,
            diameter=size.diameter,
            area=size.area,
            start=start,
            end=end,
            z=z,
            ys=tuple(ys[a:b]),
            yield_strength=table.grades[grade].strength,
            start_anchor=Anchor.HOOK if start_hook else Anchor.STRAIGHT,
            end_anchor=Anchor.HOOK if end_hook else Anchor.STRAIGHT,
            designation=size.designation,
            origin=name,
        )
