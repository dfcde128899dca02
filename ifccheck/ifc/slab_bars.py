"""Bars and meshes of slabs that run along beams, beside them or over them.

A relation ties them to a slab, or nothing ties them to anything; whether they lie in slab that is
the flange of a beam is judged where its flanges are known (``frame/slab_bars.py``).
"""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.beam import Bars, Outline, Remark, Run
from ifccheck.ifc.bar_findings import LISTED, STAGE, Findings, name_bars
from ifccheck.ifc.bar_groups import longitudinal_bars
from ifccheck.ifc.bar_hosts import BarHosts, Host, Hosts
from ifccheck.ifc.bar_paths import Bools, Ints
from ifccheck.ifc.bar_rows import BarPlaces
from ifccheck.ifc.bar_table import gather_bars
from ifccheck.ifc.bars import Runs, find_runs
from ifccheck.ifc.bars_in_beams import overlapping
from ifccheck.ifc.beam_frames import BeamFrames, make_frames
from ifccheck.ifc.context import BeamFrame, Context
from ifccheck.ifc.couplers import Couplers
from ifccheck.ifc.measured import Measured, measure
from ifccheck.ifc.physical import judge_data
from ifccheck.ifc.reinforcement import all_bars, all_meshes
from ifccheck.ifc.step_table import StepTable

REACH = 0.1
"""Part of a beam's length beyond which no flange counts on either side"""
ABOVE = 1000.0
"""Greatest thickness of slab on top of a beam [mm]"""


@dataclass(frozen=True, slots=True)
class SlabBars:
    """Bars of slabs along one beam."""

    bars: tuple[Bars, ...] = ()
    doubts: tuple[str, ...] = ()
    fault: str = ""
    """Why none of them may count"""


def read_slab_bars(
    context: Context, beams: Mapping[int, BeamFrame], statements: StepTable | None
) -> tuple[dict[int, SlabBars], tuple[Remark, ...]]:
    """Read the bars of slabs that run along beams of one section, by STEP id of the beam."""
    slabs = {slab.id() for slab in context.file.by_type("IfcSlab")}
    wide = {
        step_id: replace(frame, runs=(_widened(frame),))
        for step_id, frame in beams.items()
        if len(frame.runs) == 1 and frame.runs[0].outline_end is None
    }
    bars = np.concatenate((all_bars(context, statements), all_meshes(context)))
    ties = Hosts(context.file, context.relations, {*beams, *slabs}).of_all(bars)
    bars = bars[_of_slabs(ties, slabs)]
    if not wide or not len(bars):
        return {}, ()
    frames = make_frames(wide)
    table = gather_bars(context, bars, statements)
    places = BarPlaces(table, frames, Couplers(context))
    findings = Findings([frame.guid for frame in wide.values()])
    unread = _unread(bars[list(table.unreadable)])
    if not len(table.bar):
        return {}, unread
    rows = overlapping(places, np.arange(len(table.bar)))
    model = measure(places, rows, places.centre_lines(rows), findings)
    return _by_beam(frames, _along(model), findings), unread


def _unread(bars: Ints) -> tuple[Remark, ...]:
    """Tell of bars that cannot be read; it is not known which beams they lie beside."""
    if not len(bars):
        return ()
    names = name_bars([f"#{bar}" for bar in bars[:LISTED].tolist()], len(bars))
    text = f"{names} of slabs, or tied to nothing, cannot be read: not counted in any flange"
    return (Remark(None, STAGE, text, "doubt"),)


def _widened(frame: BeamFrame) -> Run:
    """A box round all that may be a flange of a beam; its middle lies below all steel of slabs."""
    run = frame.runs[0]
    ys, zs = zip(*(point for ring in run.outline.rings for point in ring), strict=True)
    aside = REACH * frame.axis.length
    right, left, top = min(ys) - aside, max(ys) + aside, max(zs) + ABOVE
    low = 2.0 * min(zs) - top
    ring = ((right, low), (left, low), (left, top), (right, top))
    return Run(run.start, run.end, Outline((ring,)))


def _of_slabs(ties: BarHosts, slabs: Collection[int]) -> Bools:
    """Whether each bar may be one of a slab: tied to slabs alone, beside one, or to nothing."""

    def may(host: Host) -> bool:
        held = [beam in slabs for beam in host.beams]
        return {"part": all(held), "beside": any(held), "loose": True}.get(host.tie, False)

    of_hosts = np.array([may(host) for host in ties.hosts], dtype=bool)
    return np.asarray(of_hosts[ties.number])


def _along(model: Measured) -> dict[int, tuple[Bars, ...]]:
    """Bars along beams, their ends taken as straight, by row of the beam."""
    if not model.lines.count:
        return {}
    level = np.zeros(len(model.pieces.row), dtype=bool)
    runs = _straight(find_runs(model.lines, model.pieces, level))
    runs = runs.take(_beside(model, runs))
    counted = np.zeros(model.lines.count, dtype=bool)
    counted[runs.row] = True
    judge_data(model, counted)
    return longitudinal_bars(model, runs)


def _straight(runs: Runs) -> Runs:
    """The straight parts alone, each as far from the middle of its beam as it anywhere is."""
    ends = runs.line[:, :, 1]
    outer = np.abs(ends).argmax(axis=1)
    none = np.zeros(len(runs.row), dtype=bool)
    return replace(
        runs,
        start=runs.line[:, 0, 0],
        end=runs.line[:, 1, 0],
        y=ends[np.arange(len(ends)), outer],
        start_hook=none,
        end_hook=none,
        poor_bend=none,
        start_beyond=np.zeros(len(ends)),
        end_beyond=np.zeros(len(ends)),
    )


def _beside(model: Measured, runs: Runs) -> Ints:
    """Which runs lie in the boxes round what may be flange."""
    frames, beam = model.places.frames, model.rows.beam[runs.row]
    low, high = (corner[beam] for corner in frames.boxes())
    inside = (runs.y > low[:, 1]) & (runs.y < high[:, 1])
    inside &= (runs.lowest > low[:, 2]) & (runs.highest < high[:, 2])
    inside &= (runs.end > 0.0) & (runs.start < frames.length[beam])
    return np.flatnonzero(inside)


def _by_beam(
    frames: BeamFrames, bars: Mapping[int, tuple[Bars, ...]], findings: Findings
) -> dict[int, SlabBars]:
    """What was read, by STEP id."""
    found: dict[int, SlabBars] = {}
    for beam in sorted({*bars, *findings.beams()}):
        reasons = findings.reasons(beam)
        found[frames.ids[beam]] = SlabBars(
            bars=bars.get(beam, ()),
            doubts=tuple(remark.text for remark in findings.remarks(beam)),
            fault=reasons[0].text if reasons else "",
        )
    return found
