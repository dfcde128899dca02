"""Runs of bars along beams put together: equal bars of a layer."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, fields, replace

import numpy as np

from ifccheck.beam import Anchor, Bars
from ifccheck.ifc.bar_bundles import judge_bundles
from ifccheck.ifc.bar_clashes import without_clashes
from ifccheck.ifc.bar_joints import joined
from ifccheck.ifc.bar_levels import Levels, equal_bars, in_levels
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bars import Runs
from ifccheck.ifc.measured import Measured

SLOPING = 10.0
"""A bar that rises by more than this [mm] is remarked on."""
SLOPES = "slopes: taken in pieces, each at its height nearest to the section's middle"


def longitudinal_bars(model: Measured, runs: Runs) -> dict[int, tuple[Bars, ...]]:
    """Put equal runs along the beams together, by row of the beam."""
    beam = model.rows.beam[runs.row]
    model.remark(runs.row[runs.highest - runs.lowest > SLOPING], SLOPES)
    bent = runs.row[runs.poor_bend]
    model.remark(bent, "ends in a bend short of a standard hook: taken as straight")
    runs, counted = without_clashes(model, runs, beam)
    judge_bundles(model, runs, beam, counted)
    runs = joined(model, runs, beam, counted)
    levels = in_levels(model.places.frames, beam, runs)
    crossing = np.unique(levels.of[levels.crosses])
    model.remark(runs.row[crossing], "crosses the middle of the section, not counted there")
    beam, counted = beam[levels.of], counted[levels.of] & ~levels.crosses
    labels = _labels(model, levels.runs, beam, counted)
    groups = _equal(levels, labels)
    groups = groups.take(np.flatnonzero(counted[groups.run]))
    order = np.lexsort((groups.end, groups.start, groups.z, beam[groups.run]))
    groups = groups.take(order)
    found: dict[int, list[Bars]] = {}
    beams = beam[groups.run].tolist()
    for key, bars in zip(beams, _all_bars(model, levels, groups), strict=True):
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
    start_beyond: Floats
    end_beyond: Floats
    z: Floats
    runs: Ints
    """The runs, those of one group after those of another."""

    def take(self, kept: Ints) -> _Groups:
        """Some of the groups."""
        names = [one.name for one in fields(self) if one.name != "runs"]
        return replace(self, **{name: getattr(self, name)[kept] for name in names})


def _equal(levels: Levels, labels: Ints) -> _Groups:
    runs = levels.runs
    order, first = equal_bars(labels, levels)
    stop = np.append(first[1:], len(order)).astype(np.intp)[: len(first)]
    if not len(order):
        nothing = np.zeros(0)
        return _Groups(first, first, stop, nothing, nothing, nothing, nothing, nothing, order)
    return _Groups(
        run=order[first],
        first=first,
        stop=stop,
        start=np.maximum.reduceat(runs.start[order], first),
        end=np.minimum.reduceat(runs.end[order], first),
        start_beyond=np.minimum.reduceat(runs.start_beyond[order], first),
        end_beyond=np.minimum.reduceat(runs.end_beyond[order], first),
        z=np.add.reduceat(levels.height[order], first) / (stop - first),
        runs=order,
    )


def _all_bars(model: Measured, levels: Levels, groups: _Groups) -> Iterator[Bars]:
    """The bars of each group."""
    table, run, runs = model.places.table, groups.run, levels.runs
    strand = model.rows.strand[runs.row[run]]
    ys = runs.y[groups.runs].tolist()
    names = model.names(model.bar[runs.row[groups.runs]], groups.first, groups.stop)
    hooks = (runs.start_hook[run], runs.end_hook[run])
    sizes, grades = model.places.size[strand], model.places.grade[strand]
    lengths = (groups.start, groups.end, groups.z, groups.start_beyond, groups.end_beyond)
    columns = (groups.first, groups.stop, sizes, grades, *hooks, *lengths, levels.along[run])
    listed = zip(names, *(column.tolist() for column in columns), strict=True)
    for name, a, b, number, grade, start_hook, end_hook, *place in listed:
        start, end, z, start_beyond, end_beyond, along = place
        size = table.sizes[number]
        yield Bars(
            count=b - a,
            diameter=size.diameter,
            area=size.area,
            start=start,
            end=end,
            z=z,
            ys=tuple(ys[a:b]),
            yield_strength=table.grades[grade].given,
            start_anchor=Anchor.HOOK if start_hook else Anchor.STRAIGHT,
            end_anchor=Anchor.HOOK if end_hook else Anchor.STRAIGHT,
            designation=size.designation,
            origin=name,
            start_beyond=start_beyond,
            end_beyond=end_beyond,
            along=along,
        )
