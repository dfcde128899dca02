"""Sections along the beams: runs of one outline, and runs that taper between two."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import lru_cache

import numpy as np

from ifccheck.beam import Bars, Outline, Run
from ifccheck.mechanics.arrays import Chords, Floats, Ints, Members
from ifccheck.mechanics.outlines import bounds, rings_between
from ifccheck.mechanics.overhangs import overhangs
from ifccheck.mechanics.width_profile import pack_strips, strips_of
from ifccheck.rating.subject import Subject

WEIGHED = 8
"""Parts of a taper whose weight is taken as a trapezoid each, where its area is no straight line"""

DRAWN = "bars"
"""Source of reinforcement whose bars lie where they were drawn, and not along the faces"""


@dataclass(frozen=True, slots=True)
class Taper:
    """A run between two outlines whose corners correspond."""

    first: Outline
    last: Outline

    def at(self, share: float) -> Outline:
        """The outline part of the way along it."""
        return Outline(rings_between(self.first.rings, self.last.rings, share))


@dataclass(frozen=True, slots=True)
class RunTable:
    """The runs of all beams, one row each (R), sorted by beam and start."""

    beam: Ints
    start: Floats
    end: Floats
    section: Ints
    """Row of Members.strips; of a taper that of its start"""
    area: Floats
    """[mm2]; of a taper that at its start"""
    taper: Ints
    """Row of ``tapers``, -1 for a constant run"""
    tapers: tuple[Taper, ...]
    top_rise: Floats
    """Rise of the top for each mm along x"""
    soffit_rise: Floats
    steel_follows: Ints
    """1 where the bars were given by number, and so lie along the faces, else 0"""


@dataclass(frozen=True, slots=True)
class Profile:
    """What is measured of an outline."""

    strips: Floats
    overhangs: tuple[float, float, float]
    """To the left, to the right, and the thickness of that flange [mm]"""
    area: float
    """[mm2]"""


Section = tuple[Outline, Outline | None]
"""An outline, and what it was before openings were taken off it where there are such"""


@lru_cache(maxsize=4096)  # few outlines make most buildings
def profile_of(outline: Outline, whole: Outline | None = None) -> Profile:
    """Measure an outline, of which ``whole`` is what it was before openings were taken off."""
    strips = strips_of(outline.rings)
    area = float(np.sum((strips[:, 1] - strips[:, 0]) * (strips[:, 2] + strips[:, 3]) / 2.0))
    return Profile(strips, overhangs(outline.rings, whole.rings if whole else None), area)


def run_table(
    runs_of_beams: Sequence[Sequence[Run]], follows: Sequence[bool]
) -> tuple[RunTable, tuple[Section, ...]]:
    """Number the distinct sections and list where each beam has which.

    Parameters
    ----------
    runs_of_beams, follows
        The runs of each beam, and whether its bars lie along its faces.
    """
    rows: dict[Section, int] = {}
    tapers: dict[Taper, int] = {}
    table: list[tuple[float, ...]] = []
    for beam, (runs, along) in enumerate(zip(runs_of_beams, follows, strict=True)):
        for run in runs:
            section = rows.setdefault((run.outline, run.whole), len(rows))
            taper, rises = -1, (0.0, 0.0)
            if run.outline_end is not None:
                taper = tapers.setdefault(Taper(run.outline, run.outline_end), len(tapers))
                rises = _rises(run, run.outline_end)
            table.append((beam, run.start, run.end, section, taper, *rises, along))
    beam, start, end, section, taper, top, soffit, steel = np.array(table, dtype=np.float64).T
    areas = np.array([profile_of(*section).area for section in rows])
    section = section.astype(np.intp)
    return RunTable(
        beam=beam.astype(np.intp),
        start=start,
        end=end,
        section=section,
        area=areas[section],
        taper=taper.astype(np.intp),
        tapers=tuple(tapers),
        top_rise=top,
        soffit_rise=soffit,
        steel_follows=steel.astype(np.intp),
    ), tuple(rows)


def _rises(run: Run, last: Outline) -> tuple[float, float]:
    """How far top and soffit rise for each mm along a run."""
    length = max(run.end - run.start, 1e-9)
    _, _, soffit, top = bounds(run.outline.rings)
    _, _, last_soffit, last_top = bounds(last.rings)
    return (last_top - top) / length, (last_soffit - soffit) / length


def run_at(runs: RunTable, beam: Ints, x: Floats, side: Ints | int = 0) -> Ints:
    """Row of the run that holds each station (N); a beam's first also holds what lies before."""
    reach = 2.0 * (np.max(np.abs(runs.start)) + np.max(np.abs(x)) + 1.0)
    key = runs.beam * reach + runs.start
    place = np.searchsorted(key, beam * reach + x + 1e-6 * np.sign(side), side="right") - 1
    first = np.searchsorted(runs.beam, beam)
    return np.asarray(np.maximum(place, first), dtype=np.intp)


def sections_at(members: Members, runs: RunTable, row: Ints, x: Floats) -> tuple[Members, Ints]:
    """Members with a section for each station in a taper, and the section of each station.

    Parameters
    ----------
    members
        With the sections of ``runs``.
    row, x
        Run of each station, and its place [mm] (N).
    """
    section, taper = runs.section[row], runs.taper[row]
    inside = np.flatnonzero(taper >= 0)
    if not inside.size:
        return members, section
    start, end = runs.start[row[inside]], runs.end[row[inside]]
    share = np.clip((x[inside] - start) / np.maximum(end - start, 1e-9), 0.0, 1.0)
    profiles = [
        _profile_between(runs.tapers[number], part)
        for number, part in zip(taper[inside].tolist(), share.tolist(), strict=True)
    ]
    section = section.copy()
    section[inside] = len(members.strips) + np.arange(inside.size)
    return _with_profiles(members, profiles), section


@lru_cache(maxsize=4096)
def _profile_between(taper: Taper, share: float) -> Profile:
    return profile_of(taper.at(share))


def _with_profiles(members: Members, profiles: Sequence[Profile]) -> Members:
    """Members with more sections after those that they have."""
    known = [_trimmed(strips) for strips in members.strips]
    flanges = np.array([profile.overhangs for profile in profiles])
    return replace(
        members,
        strips=pack_strips([*known, *(profile.strips for profile in profiles)]),
        overhang_left=np.concatenate([members.overhang_left, flanges[:, 0]]),
        overhang_right=np.concatenate([members.overhang_right, flanges[:, 1]]),
        flange_thickness=np.concatenate([members.flange_thickness, flanges[:, 2]]),
    )


def _trimmed(strips: Floats) -> Floats:
    """The strips of a section without those that only pad it."""
    return np.asarray(strips[strips[:, 1] > strips[:, 0]])


def outline_at(run: Run, x: float) -> Outline:
    """The outline of a run at a place [mm]; beyond its ends that at the nearer end."""
    if run.outline_end is None:
        return run.outline
    share = (x - run.start) / max(run.end - run.start, 1e-9)
    return Taper(run.outline, run.outline_end).at(min(max(share, 0.0), 1.0))


def outline_of(runs: Sequence[Run], x: float) -> Outline:
    """The outline of a beam at a place [mm]; at a step that of the later run."""
    if len(runs) == 1:
        return outline_at(runs[0], x)
    held = [run for run in runs if run.start <= x]
    return outline_at(held[-1] if held else runs[0], x)


def along_axis(subject: Subject, bars: Bars) -> float:
    """Part of their force that bars along an inclined face have along the axis.

    The cosine of the greatest inclination of the nearer face on their way; of bars that were drawn
    what their own slope leaves.
    """
    if subject.reinforcement_source == DRAWN:
        return bars.along
    steepest = 0.0
    for run in subject.beam.runs:
        if run.outline_end is not None and bars.start < run.end and bars.end > run.start:
            _, _, soffit, top = bounds(run.outline.rings)
            rises = _rises(run, run.outline_end)
            steepest = max(steepest, abs(rises[bars.z < (soffit + top) / 2.0]))
    return 1.0 / math.hypot(1.0, steepest)


def chords_at(runs: RunTable, row: Ints) -> Chords | None:
    """How the chords are inclined at each station; None where none is.

    Parameters
    ----------
    row
        Run of each station (N).
    """
    if not runs.tapers:
        return None
    return Chords(runs.top_rise[row], runs.soffit_rise[row], runs.steel_follows[row] == 1)


def weighed_parts(runs: RunTable) -> tuple[Ints, Floats, Floats, Floats, Floats]:
    """Run, start, end [mm] and the area at both ends [mm2] of stretches that are weighed.

    Along a taper the area may be no straight line: it is cut into parts, so that trapezoids
    come near enough.
    """
    if not runs.tapers:
        return np.arange(runs.beam.size), runs.start, runs.end, runs.area, runs.area
    parts: list[tuple[float, ...]] = []
    for row, number in enumerate(runs.taper.tolist()):
        start, end = float(runs.start[row]), float(runs.end[row])
        if number < 0:
            parts.append((row, start, end, runs.area[row], runs.area[row]))
            continue
        areas = _areas(runs.tapers[number])
        places = np.linspace(start, end, len(areas)).tolist()
        parts += zip([row] * WEIGHED, places, places[1:], areas, areas[1:], strict=False)
    row_of, start_of, end_of, first, last = np.array(parts, dtype=np.float64).T
    return row_of.astype(np.intp), start_of, end_of, first, last


@lru_cache(maxsize=4096)
def _areas(taper: Taper) -> tuple[float, ...]:
    """Areas at even places along a taper, its ends alone where they make a straight line."""
    areas = [_profile_between(taper, k / WEIGHED).area for k in range(WEIGHED + 1)]
    bow = max(abs(a - (areas[0] + (areas[-1] - areas[0]) * k / WEIGHED))
              for k, a in enumerate(areas))  # fmt: skip
    return tuple(areas) if bow > 1e-9 * areas[0] else (areas[0], areas[-1])
