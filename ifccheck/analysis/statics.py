"""Exact moment, shear and deflection of spans, for every case at every station.

Four constants per span (reaction, moment, slope and deflection at its start) follow from what
all its loads do about its end and from how its two ends are held; the rest is the sum of the
loads left of a section.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.arrangements import MovingEffects, join_moving
from ifccheck.analysis.brackets import Brackets, Sections, sum_brackets
from ifccheck.analysis.loads import LINE, MOMENT, POINT, LoadTable, intensity_at, join_loads
from ifccheck.analysis.spans import FIXED, FREE, PINNED, SpanTable, alone, require_standing
from ifccheck.analysis.stations import SAME_PLACE, StationTable
from ifccheck.mechanics.arrays import Bools, Floats, Ints

NEGLIGIBLE = 1e-6
"""Share of a case's greatest effect on a beam below which its effect is zero."""

_ROUNDING = 1e-12
"""Share of a case's whole load on a beam that rounding may leave behind."""


@dataclass(frozen=True, slots=True)
class CaseEffects:
    """What each case (K), unfactored, does at each station (N) and to each beam (B)."""

    beam: Ints
    """Row of the beam of each station (N)"""
    x: Floats
    """Place of each station [mm] (N)"""
    moment: Floats
    """[N*mm], sagging positive (K, N)"""
    shear: Floats
    """[N], positive where the left part pushes up (K, N)"""
    deflection: Floats | None
    """Deflection times EI, downward positive, for one EI along the span [N*mm3] (K, N); None
    where it was not asked for"""
    reactions: Floats
    """Upward force of the start and the end support on the beam [N] (K, B, 2)"""
    end_moments: Floats
    """Moment just inside the start and the end of the span [N*mm] (K, B, 2)"""
    moving: MovingEffects | None = None
    """What moves of the cases, besides what stands still above; None where nothing does"""


@dataclass(frozen=True, slots=True)
class Start:
    """Reaction, moment, slope and deflection (times EI, downward) at the start of a span,
    before what acts there (K, B)."""

    reaction: Floats
    moment: Floats
    slope: Floats
    deflection: Floats


def case_effects(
    spans: SpanTable,
    loads: LoadTable,
    stations: StationTable,
    cases: int,
    deflections: bool = True,
) -> CaseEffects:
    """Moment, shear and deflection of every case at every station.

    M(s) = M0 + R0 s - sum of the moments of the loads left of s; V(s) = R0 - sum of their
    forces; EI v'' = -M with v downward.

    Parameters
    ----------
    spans
        One span per beam (B).
    loads
        Loads on those beams, sorted by beam. What lies beyond a supported end acts at that
        end, so that its force goes straight into the support; what lies beyond a free end acts
        where it is.
    stations
        Places within the spans, sorted by beam (N). Side -1 is just left of a point load or a
        moment, +1 just right, 0 as -1; at the ends of a span all are just inside.
    cases
        Number of cases (K).
    deflections
        Whether deflections are wanted.

    Returns
    -------
    CaseEffects
        Moments and shears below 1e-6 of the greatest of the same case on the same beam are 0.

    Raises
    ------
    ValueError
        Where a span has no length or is not held by its supports.

    Notes
    -----
    A moment load lowers the moment by its value from left to right: positive is anticlockwise
    with x to the right and z up. EI is constant along a span, on which moment and shear of spans
    that are statically determinate do not depend; see ``stiffness`` for the others.

    References
    ----------
    First principles: equilibrium, and the elastic line by brackets.
    """
    return effects_at(solve(spans, loads, cases), stations, deflections)


@dataclass(frozen=True, slots=True)
class Solved:
    """Spans with what follows from all their loads."""

    spans: SpanTable
    loads: LoadTable
    """With x from the start of their span, none beyond a supported end"""
    totals: Brackets
    """What all loads of each case do about the end of each span (K, B)"""
    start: Start
    force_scale: Floats
    """Sum of the sizes of each case's loads on each beam, as a force [N] (K, B)"""
    moment_scale: Floats
    """The same as a moment [N*mm]"""


def solve(spans: SpanTable, loads: LoadTable, cases: int) -> Solved:
    """Find the reactions of every span; parameters as for ``case_effects``.

    Spans of lines stand alone here (see ``spans.alone``): ``lines.continuous`` joins them.
    """
    require_standing(spans)
    local = _within_spans(spans, loads)
    totals = sum_brackets(local, _span_ends(spans), cases)
    start = _start_constants(alone(spans), totals)
    return Solved(spans, local, totals, start, *_load_scales(spans, local, cases))


def effects_at(solved: Solved, stations: StationTable, deflections: bool = True) -> CaseEffects:
    """Moment, shear and deflection of every case at every station; see ``case_effects``."""
    spans, start, totals = solved.spans, solved.start, solved.totals
    left = _left_of(solved, stations, deflections)
    moment, shear = _along(spans, stations, start, left)
    first = stations.first_rows(len(spans.start))
    return CaseEffects(
        beam=stations.beam,
        x=stations.x,
        moment=_without_noise(moment, stations, first, solved.moment_scale),
        shear=_without_noise(shear, stations, first, solved.force_scale),
        deflection=_deflection(spans, stations, start, left) if deflections else None,
        reactions=np.stack([start.reaction, totals.force - start.reaction], axis=-1),
        end_moments=_end_moments(spans, solved.loads, start, totals),
    )


def moments_at(solved: Solved, stations: StationTable) -> Floats:
    """Moment of every case at every station, however small [N*mm] (K, N)."""
    return _along(solved.spans, stations, solved.start, _left_of(solved, stations, False))[0]


def with_end_moments(solved: Solved, start: Floats, end: Floats, varying: Bools) -> Solved:
    """The same spans with more moment at their ends [N*mm] (K, B).

    Deflections are those of one stiffness along the span: of ``varying`` spans (B) they are nan.
    """
    turned = np.where(varying, np.nan, 0.0)
    constants = Start(
        reaction=solved.start.reaction + (end - start) / solved.spans.length,
        moment=solved.start.moment + start,
        slope=solved.start.slope + turned,
        deflection=solved.start.deflection + turned,
    )
    return replace(solved, start=constants)


def _left_of(solved: Solved, stations: StationTable, integrals: bool) -> Brackets:
    sections, cases = _sections(solved.spans, stations), len(solved.totals.force)
    return sum_brackets(solved.loads, sections, cases, integrals=integrals)


def _within_spans(spans: SpanTable, loads: LoadTable) -> LoadTable:
    """Loads with x from the start of their span, those beyond a supported end moved to it."""
    origin, length = spans.start[loads.beam], spans.length[loads.beam]
    low = np.where(spans.start_kind[loads.beam] == FREE, -np.inf, 0.0)
    high = np.where(spans.end_kind[loads.beam] == FREE, np.inf, length)
    whole = replace(loads, start=loads.start - origin, end=loads.end - origin)
    start, end = np.clip(whole.start, low, high), np.clip(whole.end, low, high)
    moved = replace(
        whole,
        start=start,
        end=end,
        value_start=np.where(loads.kind == LINE, intensity_at(whole, start), loads.value_start),
        value_end=np.where(loads.kind == LINE, intensity_at(whole, end), loads.value_end),
    )
    before = np.flatnonzero((loads.kind == LINE) & (whole.start < low))
    after = np.flatnonzero((loads.kind == LINE) & (whole.end > high))
    if not (before.size or after.size):
        return moved
    off_start = _as_points(whole.take(before), low[before], -np.inf, low[before])
    off_end = _as_points(whole.take(after), high[after], high[after], np.inf)
    return join_loads(moved, off_start, off_end)


def _as_points(line: LoadTable, at: Floats, low: Floats | float, high: Floats | float) -> LoadTable:
    """The force of what a line has between low and high, as a point load."""
    start, end = np.maximum(line.start, low), np.minimum(line.end, high)
    force = (intensity_at(line, start) + intensity_at(line, end)) / 2.0 * (end - start)
    kind = np.full_like(line.kind, POINT)
    return replace(line, kind=kind, start=at, end=at, value_start=force, value_end=force)


def _span_ends(spans: SpanTable) -> Sections:
    """The end of each span, about which all its loads are summed."""
    count = len(spans.start)
    return Sections(np.arange(count + 1), spans.length, np.ones(count, np.bool_), whole=True)


def _sections(spans: SpanTable, stations: StationTable) -> Sections:
    """Stations with x from the start of the span; the ends of the span seen from inside."""
    x = stations.x - spans.start[stations.beam]
    at_start = x <= SAME_PLACE
    at_end = x >= spans.length[stations.beam] - SAME_PLACE
    right = ((stations.side > 0) | at_start) & ~at_end
    return Sections(stations.first_rows(len(spans.start)), x, right)


def _start_constants(spans: SpanTable, totals: Brackets) -> Start:
    """Constants at the start of each span from the conditions at its two ends (K, B)."""
    length = spans.length
    force, moment, slope, deflection = totals.force, totals.moment, totals.slope, totals.deflection
    simple = moment / length
    fixed_far = 3.0 * (slope * length - deflection) / length**3
    fixed_near = 3.0 * (moment * length**2 / 2.0 - deflection) / length**3
    fixed_both = 6.0 * (slope * length - 2.0 * deflection) / length**3
    reaction = _by_pair(spans, simple, fixed_far, fixed_near, fixed_both, force, 0.0 * force)
    none = np.zeros_like(force)
    start_moment = _by_pair(
        spans,
        none,
        none,
        moment - fixed_near * length,
        slope / length - fixed_both * length / 2.0,
        moment - force * length,
        none,
    )
    start_slope = _by_pair(
        spans,
        simple * length**2 / 6.0 - deflection / length,
        fixed_far * length**2 / 2.0 - slope,
        none,
        none,
        none,
        -slope,
    )
    free_near = spans.start_kind == FREE
    start_deflection = np.where(free_near, slope * length - deflection, 0.0)
    return Start(reaction, start_moment, start_slope, start_deflection)


def _by_pair(
    spans: SpanTable,
    pinned_pinned: Floats,
    pinned_fixed: Floats,
    fixed_pinned: Floats,
    fixed_fixed: Floats,
    fixed_free: Floats,
    free_fixed: Floats,
) -> Floats:
    """The value of each span's own pair of supports (K, B)."""
    values = np.full_like(pinned_pinned, np.nan)
    for (start, end), value in {
        (PINNED, PINNED): pinned_pinned,
        (PINNED, FIXED): pinned_fixed,
        (FIXED, PINNED): fixed_pinned,
        (FIXED, FIXED): fixed_fixed,
        (FIXED, FREE): fixed_free,
        (FREE, FIXED): free_fixed,
    }.items():
        held = np.flatnonzero((spans.start_kind == start) & (spans.end_kind == end))
        if held.size:
            values[:, held] = value[:, held]
    return values


def _along(
    spans: SpanTable, stations: StationTable, start: Start, left: Brackets
) -> tuple[Floats, Floats]:
    """Moment and shear at every station (K, N)."""
    beam = stations.beam
    s = stations.x - spans.start[beam]
    reaction, moment = (
        values.take(beam, axis=1, mode="clip") for values in (start.reaction, start.moment)
    )
    moment += reaction * s
    moment -= left.moment
    reaction -= left.force
    return moment, reaction


def _deflection(spans: SpanTable, stations: StationTable, start: Start, left: Brackets) -> Floats:
    """Deflection at every station (K, N)."""
    beam = stations.beam
    s = stations.x - spans.start[beam]
    reaction, fixing = start.reaction[:, beam], start.moment[:, beam]
    bent = start.slope[:, beam] - (fixing / 2.0 + reaction * s / 6.0) * s
    deflection: Floats = start.deflection[:, beam] + bent * s + left.deflection
    return deflection


def join_effects(first: CaseEffects, second: CaseEffects, rows: Ints) -> CaseEffects:
    """Effects of the same loads on the same beams at the stations of both.

    Parameters
    ----------
    first, second
        Effects at two sets of stations (N) and (Q).
    rows
        Order of the joint stations, sorted by beam: rows of the first, then of the second.
    """
    beam = np.concatenate([first.beam, second.beam])[rows]
    stretch = np.flatnonzero(np.diff(beam, prepend=-1))
    place = np.repeat(np.arange(stretch.size), np.diff(stretch, append=beam.size))

    def joined(one: Floats, other: Floats) -> Floats:
        effect = np.concatenate([one, other], axis=1).take(rows, axis=1, mode="clip")
        size = np.abs(effect)
        limit = np.maximum.reduceat(size, stretch, axis=1) * NEGLIGIBLE
        np.copyto(effect, 0.0, where=size <= limit.take(place, axis=1, mode="clip"))
        return effect

    deflection = None
    if first.deflection is not None and second.deflection is not None:
        deflection = np.concatenate([first.deflection, second.deflection], axis=1)[:, rows]
    return CaseEffects(
        beam=beam,
        x=np.concatenate([first.x, second.x])[rows],
        moment=joined(first.moment, second.moment),
        shear=joined(first.shear, second.shear),
        deflection=deflection,
        reactions=first.reactions,
        end_moments=first.end_moments,
        moving=join_moving(first.moving, second.moving, rows),
    )


def _load_scales(spans: SpanTable, loads: LoadTable, cases: int) -> tuple[Floats, Floats]:
    """Sum of the sizes of each case's loads on each beam, as a force and as a moment (K, B)."""
    length = spans.length[loads.beam]
    line = (np.abs(loads.value_start) + np.abs(loads.value_end)) * (loads.end - loads.start)
    size = np.abs(loads.value_start)
    other = np.where(loads.kind == MOMENT, size / length, size)
    force = np.where(loads.kind == LINE, line, other)
    cell = loads.case * len(spans.start) + loads.beam
    count = cases * len(spans.start)
    summed = np.bincount(cell, weights=force, minlength=count).astype(np.float64, copy=False)
    total = summed.reshape(cases, len(spans.start))
    return total, total * spans.length


def _without_noise(
    effect: Floats, stations: StationTable, first: Ints, load_scale: Floats
) -> Floats:
    """The effect (K, N), in place, with zero where it is negligible beside the greatest on its
    beam."""
    if not effect.size:
        return effect
    held = np.flatnonzero(np.diff(first))
    size = np.abs(effect)
    limit = load_scale * _ROUNDING
    peak = np.maximum.reduceat(size, first[held], axis=1)
    limit[:, held] = np.maximum(limit[:, held], peak * NEGLIGIBLE)
    negligible = size <= limit.take(stations.beam, axis=1, mode="clip")
    np.copyto(effect, 0.0, where=negligible)
    return effect


def _end_moments(spans: SpanTable, loads: LoadTable, start: Start, totals: Brackets) -> Floats:
    """Moment just inside both ends of each span: without the moment loads at the end (K, B, 2)."""
    at_start = _moments_at(spans, loads, np.abs(loads.start) <= SAME_PLACE, totals)
    near_end = np.abs(loads.start - spans.length[loads.beam]) <= SAME_PLACE
    at_end = _moments_at(spans, loads, near_end, totals)
    far = start.moment + start.reaction * spans.length - totals.moment
    return np.stack([start.moment - at_start, far + at_end], axis=-1)


def _moments_at(spans: SpanTable, loads: LoadTable, there: Bools, totals: Brackets) -> Floats:
    """Sum of the moment loads of the given rows, by case and beam (K, B)."""
    rows = np.flatnonzero(there & (loads.kind == MOMENT))
    cell = loads.case[rows] * len(spans.start) + loads.beam[rows]
    sums = np.bincount(cell, loads.value_start[rows], minlength=totals.force.size)
    return sums.astype(np.float64, copy=False).reshape(totals.force.shape)
