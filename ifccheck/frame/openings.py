"""What openings do to a beam: what they leave of it, and what they make impossible."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Protocol

from ifccheck.beam import (
    Bars,
    Beam,
    Contact,
    Load,
    Opening,
    RatedBody,
    RatedSpan,
    Reason,
    Remark,
    Run,
    Stirrups,
)
from ifccheck.frame.net_outlines import NOTHING, net_runs, place_of, with_flanges
from ifccheck.frame.opening_shear import RULE, Surroundings, judged_openings, losses_of, told
from ifccheck.frame.slab_flanges import Counted
from ifccheck.frame.spans import Standing
from ifccheck.units import show

STAGE = "openings"
NO_SLAB = Counted()
GROSS_WEIGHT = "self weight is that of the beam without its openings"
NET_WEIGHT = "self weight may relieve: it is that of the beam less the boxes round its openings"


@dataclass(frozen=True, slots=True)
class Net:
    """What is rated of a beam: with slab that counts as a flange, without its openings."""

    body: RatedBody | None = None
    """None where it is that of the beam, or where none of it can be rated"""
    reasons: tuple[Reason, ...] = ()
    remarks: tuple[Remark, ...] = ()


class Steel(Protocol):
    """The reinforcement that is counted on."""

    @property
    def bars(self) -> Sequence[Bars]:
        """Longitudinal bars"""
        ...

    @property
    def stirrups(self) -> Sequence[Stirrups]:
        """Stirrups"""
        ...


def net_of(
    beam: Beam,
    standing: Standing,
    loads: Sequence[Load],
    steel: Steel,
    slab: Counted = NO_SLAB,
    resting: Sequence[Contact] = (),
) -> Net:
    """Add the slab that counts as a flange to a beam, take its openings off, and judge shear.

    Self weight stays that of the whole body, which is the greater, but where it may relieve: with
    a fixed end, a moment or a load that acts upward. A bar that runs through an opening is a
    reason.

    Parameters
    ----------
    beam, standing, loads, steel, slab
        The beam, how it stands, and all that is counted on.
    resting
        Members that may bring a reaction to it between its supports.
    """
    if not beam.openings:
        return _without_openings(beam, slab)
    impossible = [*_tapered(beam), *_cut_bars(beam.openings, steel.bars)]
    impossible += _cut_bends(beam.openings, steel.bars)
    runs, gone = net_runs(with_flanges(beam.runs, slab.flanges), beam.openings)
    if impossible or gone:
        return Net(reasons=(*slab.reasons, *impossible, *gone), remarks=slab.remarks)
    changes = [run.start for run in beam.runs[1:]]
    around = Surroundings(standing.spans, loads, steel.stirrups, changes, resting)
    judged = judged_openings(beam, around)
    light = _bends_back(standing.spans) or _upward(loads)
    notes = [Remark(beam.key, STAGE, told(one), "note") for one in judged]
    taken = (RULE, NET_WEIGHT if light else GROSS_WEIGHT)
    losses = (*slab.losses, *(loss for one in judged for loss in losses_of(one)))
    left, _ = net_runs(beam.runs, beam.openings, beyond=False)
    return Net(
        RatedBody(runs, losses, left if light else beam.runs, slab.flanges, slab.source),
        reasons=(*slab.reasons, *(one.reason for one in judged if one.faults)),
        remarks=(
            *slab.remarks, *notes,
            *(Remark(beam.key, STAGE, text, "assumption") for text in taken),
        ),
    )  # fmt: skip


def _bends_back(spans: Sequence[RatedSpan]) -> bool:
    """Whether weight on one part of the beam may relieve another."""
    kinds = spans[0].span.start_support.kind, spans[-1].span.end_support.kind
    return len(spans) > 1 or ("free" not in kinds and set(kinds) != {"pinned"})


def _without_openings(beam: Beam, slab: Counted) -> Net:
    if not slab.flanges:
        return Net(remarks=slab.remarks)
    runs = with_flanges(beam.runs, slab.flanges)
    body = RatedBody(runs, slab.losses, beam.runs, slab.flanges, slab.source)
    return Net(body, slab.reasons, slab.remarks)


def _tapered(beam: Beam) -> Iterator[Reason]:
    for run in beam.runs:
        for opening in beam.openings:
            if run.outline_end is not None and _overlap(run, opening):
                yield Reason(f"{place_of(opening)} lies where the section varies: not read yet")


def _overlap(run: Run, opening: Opening) -> bool:
    return run.start < opening.end - NOTHING and run.end > opening.start + NOTHING


def _cut_bars(openings: Sequence[Opening], bars: Sequence[Bars]) -> Iterator[Reason]:
    """Bars that run through an opening, or without cover along its edge, cannot be there."""
    for opening in openings:
        for layer in bars:
            radius = layer.diameter / 2.0
            beside = layer.end <= opening.start or layer.start >= opening.end
            level = opening.bottom - radius < layer.z < opening.top + radius
            cut = [y for y in layer.ys if opening.right - radius < y < opening.left + radius]
            if cut and level and not beside:
                count = f"{len(cut)} bar{'s' if len(cut) > 1 else ''}"
                place = show(layer.z, "dimension")
                yield Reason(f"{count} at z = {place} would run through the {place_of(opening)}")


def _cut_bends(openings: Sequence[Opening], bars: Sequence[Bars]) -> Iterator[Reason]:
    """Bars that may run through an opening where they are bent from one height to another."""
    for start, end, low, high in _bends(bars):
        for opening in openings:
            level = low < opening.top and high > opening.bottom
            if level and start < opening.end and end > opening.start:
                yield Reason(f"bars that are bent may run through the {place_of(opening)}")


def _bends(bars: Sequence[Bars]) -> Iterator[tuple[float, float, float, float]]:
    """Where bars go on between their level parts: the box round that, of any height where no
    next part is found [mm]."""
    for layer in bars:
        r = layer.diameter / 2.0
        after = [
            one
            for one in bars
            if one.start_beyond > 0.0 and layer.end <= one.start <= layer.end + layer.end_beyond
        ]
        if layer.end_beyond > 0.0 and after:
            next_part = min(after, key=lambda one: one.start)
            low, high = sorted((layer.z, next_part.z))
            yield layer.end, next_part.start, low - r, high + r
        elif layer.end_beyond > 0.0:
            yield layer.end, layer.end + layer.end_beyond, -math.inf, math.inf
        before = [
            one
            for one in bars
            if one.end_beyond > 0.0 and layer.start - layer.start_beyond <= one.end <= layer.start
        ]
        if layer.start_beyond > 0.0 and not before:
            yield layer.start - layer.start_beyond, layer.start, -math.inf, math.inf


def _upward(loads: Sequence[Load]) -> bool:
    return any(load.kind == "moment" or min(load.values) < 0.0 for load in loads)
