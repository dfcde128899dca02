"""Runs of bars along beams put together: equal bars of a layer."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

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
    model.remark(runs.row[steep].tolist(), "crosses the middle of the section, not counted")
    sloping = ~steep & (runs.highest - runs.lowest > SLOPING)
    model.remark(
        runs.row[sloping].tolist(), "slopes: taken at its height nearest to the section's middle"
    )
    bent = runs.row[runs.poor_bend]
    model.remark(bent.tolist(), "ends in a bend short of a standard hook: taken as straight")
    runs, counted = without_clashes(model, runs, beam, ~steep)
    labels = _labels(model, runs, beam, counted)
    found: dict[int, list[Bars]] = {}
    for run, bars in _equal(model, runs, labels, height):
        if counted[run]:
            found.setdefault(int(beam[run]), []).append(bars)
    return {
        key: tuple(sorted(one, key=lambda b: (b.z, b.start, b.end))) for key, one in found.items()
    }


def _labels(model: Measured, runs: Runs, beam: Ints, counted: Bools) -> Ints:
    """Number the runs so that only those of one beam, size, grade and anchors have one number,
    and those that count another than those that do not."""
    table, strand = model.places.table, model.rows.strand[runs.row]
    sizes, grades = model.places.size[strand], model.places.grade[strand]
    label = beam * len(table.sizes) + sizes
    label = label * len(table.grades) + grades
    return ((label * 2 + runs.start_hook) * 2 + runs.end_hook) * 2 + counted


def _equal(model: Measured, runs: Runs, labels: Ints, height: Floats) -> Iterator[tuple[int, Bars]]:
    """Groups of equal bars, each with one of its runs."""
    order, first = equal_bars(labels, runs, height)
    if not len(order):
        return
    stop = np.append(first[1:], len(order))
    columns = (
        order[first],
        first,
        stop,
        np.maximum.reduceat(runs.start[order], first),
        np.minimum.reduceat(runs.end[order], first),
        np.add.reduceat(height[order], first) / (stop - first),
    )
    bars, ys = model.bar[runs.row[order]].tolist(), runs.y[order].tolist()
    for run, a, b, start, end, z in zip(*(column.tolist() for column in columns), strict=True):
        yield run, _bars(model, runs, run, bars[a:b], tuple(ys[a:b]), start, end, z)


def _bars(
    model: Measured,
    runs: Runs,
    run: int,
    bars: Sequence[int],
    ys: tuple[float, ...],
    start: float,
    end: float,
    z: float,
) -> Bars:
    row = int(runs.row[run])
    size = model.size(row)
    return Bars(
        count=len(bars),
        diameter=size.diameter,
        area=size.area,
        start=start,
        end=end,
        z=z,
        ys=ys,
        yield_strength=model.strength(row),
        start_anchor=Anchor.HOOK if runs.start_hook[run] else Anchor.STRAIGHT,
        end_anchor=Anchor.HOOK if runs.end_hook[run] else Anchor.STRAIGHT,
        designation=size.designation,
        origin=model.names(bars),
    )
