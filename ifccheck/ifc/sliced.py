"""A solid as a straight member: slices square to its span give runs along its axis.

Runs are constant, taper linearly, or meet in a step. All of them are measured in one frame: x
along the axis, z from the lowest place of any section, y from the middle of the first section's
width. An end that is cut obliquely is where the line through the centroid of the first full
section comes out of the solid, as for an extrusion that is cut.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.beam import Axis, Box, Outline, Reason, Run
from ifccheck.ifc.blemishes import bridged, without_recesses
from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.figures import Figure, alike, matched, polygon_of
from ifccheck.ifc.hollows import Hollows, hollows
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.solid_axis import span_direction
from ifccheck.ifc.solids import Solid
from ifccheck.ifc.straight import (
    OBLIQUE_SHARE,
    STEEP_CUT,
    Straight,
    member_axes,
    rolled,
    told_of_slip,
)
from ifccheck.ifc.tracing import SHORT, Piece, trace
from ifccheck.ifc.vectors import Triple, added, combined, rounded
from ifccheck.mechanics.inclination import inclination_of

NOISE = 0.2
"""Sections that differ by less than this are one [mm]."""
END_CUT = 0.5
"""A face that the section grows along by more than this for each mm ends the member."""
MOST_RUNS = 12
"""A member with more runs is curved, or too intricate to be checked run by run."""
CORE = 0.5
"""Part of the least depth and width that one straight line of sight along the member needs."""
TWIST = math.radians(3.0)
"""All long sides of a section turned by more than this one way are a twist."""
BEYOND = "a hole in its body lies beyond the middle of its oblique end"
LONG_SIDE = 0.1
"""Sides longer than this part of the outline's length tell of a twist."""


def slice_solid(solid: Solid, placement: Matrix, axis: Cloud | None) -> Straight:
    """Return a solid in the building as a straight member.

    Parameters
    ----------
    solid
        In the building [mm].
    placement
        Of the element.
    axis
        Direction of its Axis representation in the building, where it has a straight one.

    Raises
    ------
    UnreadableError
        Where it is none: vertical, bent, twisted, curved, not closed, in parts.
    """
    parts = list(solid.added())
    if not parts:
        raise UnreadableError("body is a half-space alone")
    axes = member_axes(span_direction(parts, placement, axis), placement)
    base: Triple = tuple(np.round(parts[0].points[0], 3).tolist())
    name = next((part.name for part in parts if part.name), "")
    straight = _about(solid, axes, base, name)
    slip = inclination_of(straight.outline.rings).slip
    if not slip:
        return straight
    level = _about(solid, rolled(axes, slip), base, name)
    return replace(level, remarks=(*level.remarks, *told_of_slip(slip)))


def _about(solid: Solid, axes: tuple[Triple, Triple, Triple], base: Triple, name: str) -> Straight:
    """The solid about the axes of a member."""
    lying = solid.moved(_into(axes, base))
    found = trace(lying)
    if not found:
        raise UnreadableError("nothing is left of the body after its cuts")
    whole, blemishes = bridged(found)
    runs, recesses = without_recesses(_runs(whole))
    ended = _ended(runs)
    _require_straight(ended.runs)
    blemishes += recesses
    return _in_frame(ended, axes, base, name, hollows(lying, runs, found, blemishes))


def _into(axes: tuple[Triple, Triple, Triple], base: Triple) -> Matrix:
    matrix = np.eye(4)
    matrix[:3, :3] = axes
    matrix[:3, 3] = -matrix[:3, :3] @ base
    return matrix


# Runs ------------------------------------------------------------------------------------------


def _runs(pieces: Sequence[Piece]) -> list[Piece]:
    """Pieces that go on alike made one."""
    runs: list[Piece] = []
    for piece in pieces:
        joined = _joined(runs[-1], piece) if runs else None
        if joined is None:
            if runs:
                runs[-1] = runs[-1].moved_to(runs[-1].start, piece.start)
            runs.append(piece)
        else:
            runs[-1] = joined
    return runs


def _joined(run: Piece, piece: Piece) -> Piece | None:
    """Both as one where the same lines run through both."""
    if run.constant and piece.constant:
        one = alike(run.first, piece.first, NOISE)
        return replace(run, end=piece.end) if one else None
    if run.constant or piece.constant:
        return None
    last = matched(run.last, piece.last)
    if last is None or not alike(run.last, piece.first, NOISE):
        return None
    whole = Piece(run.start, piece.end, "whole", run.first, last)
    return whole if alike(whole.at(run.end), run.last, NOISE) else None


# Ends ------------------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class _Ended:
    """Runs from the start of the axis to its end, and what was cut off obliquely."""

    runs: tuple[Piece, ...]
    reach: tuple[float, float]
    """Where the body begins and ends [mm]"""
    oblique: tuple[float, float]
    steep: tuple[bool, bool]


def _ended(runs: Sequence[Piece]) -> _Ended:
    """The runs with both ends made square."""
    reach = runs[0].start, runs[-1].end
    first = next((k for k, run in enumerate(runs) if not _ends(run, growing=True)), len(runs))
    last = next((k for k, run in enumerate(runs[::-1]) if not _ends(run, growing=False)), len(runs))
    kept = list(runs[first : len(runs) - last])
    if not kept or sum(run.end - run.start for run in kept) < OBLIQUE_SHARE * (reach[1] - reach[0]):
        raise UnreadableError("its ends are cut so obliquely that no section is left whole")
    head, tail = runs[:first], runs[len(runs) - last :]
    start = kept[0].start - _length_of(head, kept[0].first)
    kept[0] = kept[0].moved_to(start, kept[0].end)
    kept[-1] = kept[-1].moved_to(kept[-1].start, kept[-1].end + _length_of(tail, kept[-1].last))
    return _Ended(
        tuple(kept),
        reach,
        (_stretch(head), _stretch(tail)),
        (any(map(_steep, head)), any(map(_steep, tail))),
    )


def _ends(run: Piece, *, growing: bool) -> bool:
    """Whether a run is part of an oblique end."""
    if run.rate < END_CUT:
        return False
    first, last = polygon_of(run.first).area, polygon_of(run.last).area
    return first < last if growing else last < first


def _stretch(cut: Sequence[Piece]) -> float:
    return sum(run.end - run.start for run in cut)


def _length_of(cut: Sequence[Piece], full: Figure) -> float:
    """How far the line through the centroid of the full section runs through an oblique end;
    where the centroid lies in a void, the length of full section that makes the same volume."""
    if not cut:
        return 0.0
    section = polygon_of(full)
    if section.contains(section.centroid):
        return sum(_covered(run, full) for run in cut)
    return sum(_volume(run) for run in cut) / section.area


def _covered(run: Piece, full: Figure) -> float:
    """Length along a run over which it holds the centroid of the full section [mm]."""
    centre = polygon_of(full).centroid
    places = [polygon_of(run.at(x)).contains(centre) for x in (run.start, run.end)]
    if places[0] == places[1]:
        return (run.end - run.start) * places[0]
    low, high = run.start, run.end
    for _ in range(40):
        middle = (low + high) / 2.0
        if polygon_of(run.at(middle)).contains(centre) == places[0]:
            low = middle
        else:
            high = middle
    return run.end - low if places[1] else low - run.start


def _volume(run: Piece) -> float:
    areas = [polygon_of(run.at(x)).area for x in (run.start, (run.start + run.end) / 2.0, run.end)]
    return (areas[0] + 4.0 * areas[1] + areas[2]) / 6.0 * (run.end - run.start)


def _steep(run: Piece) -> bool:
    """Whether an oblique end slants in elevation so far that the depth near it is in doubt.

    A face with the normal (n_x, n_y, n_z) moves its side of the section along its normal in the
    section by n_x / |n_y, n_z| for each mm.
    """
    for first, last in zip(run.first, run.last, strict=True):
        sides = np.roll(first, -1, axis=0) - first + np.roll(last, -1, axis=0) - last
        sizes = np.hypot(sides[:, 0], sides[:, 1])
        out = np.stack([sides[:, 1], -sides[:, 0]], axis=1) / np.maximum(sizes, 1e-9)[:, None]
        middles = (last - first + np.roll(last - first, -1, axis=0)) / 2.0
        rate = np.abs((middles * out).sum(axis=1)) / (run.end - run.start)
        moves = (sizes > NOISE) & (rate > END_CUT / 10.0)
        if (moves & (np.abs(out[:, 1]) > STEEP_CUT * rate)).any():
            return True
    return False


# Straight --------------------------------------------------------------------------------------


def _require_straight(runs: Sequence[Piece]) -> None:
    if len(runs) > MOST_RUNS:
        raise UnreadableError(
            f"not straight: its section changes at {len(runs) - 1} places: curved, or too intricate"
        )
    rings = [figure[0] for run in runs for figure in (run.first, run.last)]
    low = np.array([ring.min(axis=0) for ring in rings])
    high = np.array([ring.max(axis=0) for ring in rings])
    least = (high - low).min(axis=0)
    if min(least) < SHORT:
        raise UnreadableError("its section runs out to nothing")
    if ((high.min(axis=0) - low.max(axis=0)) < CORE * least).any():
        raise UnreadableError("not straight: its sections lie beside each other: bent or cranked")
    if any(_twisted(run) for run in runs):
        raise UnreadableError("not straight: twisted about its axis")


def _twisted(run: Piece) -> bool:
    first, last = (np.roll(f[0], -1, axis=0) - f[0] for f in (run.first, run.last))
    sizes = np.hypot(first[:, 0], first[:, 1])
    long = sizes > LONG_SIDE * sizes.sum()
    sine = first[long, 0] * last[long, 1] - first[long, 1] * last[long, 0]
    turns = np.arctan2(sine, (first[long] * last[long]).sum(axis=1))
    return bool(len(turns)) and bool((turns > TWIST).all() or (turns < -TWIST).all())


# The frame of the beam -------------------------------------------------------------------------


def _in_frame(
    ended: _Ended,
    axes: tuple[Triple, Triple, Triple],
    base: Triple,
    name: str,
    hollow: Hollows,
) -> Straight:
    runs = ended.runs
    points = np.concatenate([figure[0] for run in runs for figure in (run.first, run.last)])
    low, high = points.min(axis=0), points.max(axis=0)
    start, length = runs[0].start, runs[-1].end - runs[0].start
    first = runs[0].first[0][:, 0]
    middle, soffit = (first.min() + first.max()) / 2.0, low[1]
    shift = np.array((middle, soffit))
    named = name if len(runs) == 1 and runs[0].constant else ""
    origin = rounded(added(base, combined(axes, (start, middle, soffit))))
    centre = (sum(ended.reach) / 2.0, *((low + high) / 2.0))
    half = ((ended.reach[1] - ended.reach[0]) / 2.0, *((high - low) / 2.0))
    x, y, z = (rounded(axis) for axis in axes)
    found = [one.in_beam(start, middle, soffit, length) for one in hollow.read]
    return Straight(
        axis=Axis(origin, x, y, z, round(length, 6)),
        outline=_outline(runs[0].first, shift, name),
        box=Box(rounded(added(base, combined(axes, centre))), (x, y, z), rounded(half)),
        oblique=ended.oblique,
        steep=ended.steep,
        runs=tuple(_run(run, start, length, shift, named) for run in runs),
        reasons=tuple(
            Reason(
                f"{what} at x = {(a - start) / 1e3:.2f} to {(b - start) / 1e3:.2f} m: not read",
                blocking=False,
            )
            for what, a, b in hollow.unread
        ),
        openings=tuple(each for each in found if each is not None),
        remarks=(BEYOND,) if None in found else (),
    )


def _run(run: Piece, start: float, length: float, shift: Cloud, name: str) -> Run:
    end = None if run.constant else _outline(run.last, shift, name)
    x0, x1 = (round(min(max(x - start, 0.0), length), 6) for x in (run.start, run.end))
    return Run(x0, x1, _outline(run.first, shift, name), end)


def _outline(figure: Figure, shift: Cloud, name: str) -> Outline:
    rings = tuple(
        tuple((float(y), float(z)) for y, z in np.round(ring - shift, 6)) for ring in figure
    )
    return Outline(rings, name)
