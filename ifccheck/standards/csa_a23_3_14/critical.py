"""What a shear check must know of a station's surroundings: the faces of the supports."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats, Ints

REACH = 1e-5
"""Places nearer to one another than this are one [mm]."""


@dataclass(frozen=True, slots=True)
class Surroundings:
    """The critical section and the faces as seen from each station; one row per station (N)."""

    simplified: bool
    """Shear by 11.3.6.3, else by 11.3.6.4"""
    critical_distance: Floats
    """Distance to the critical section at dv from the nearer face [mm]; 0 beyond it"""
    critical_area_sagging: Floats
    """Developed tension steel of the soffit at that section [mm2]; the station's own beyond"""
    critical_area_hogging: Floats
    """The same of the top [mm2]"""
    start_distance: Floats
    """Distance from the face at the beam's start [mm]"""
    end_distance: Floats
    """Distance from the face at the beam's end [mm]"""
    peak_lever_sagging: Floats
    """Least lever arm that the beam's soffit steel has in flexure, or the least dv if that is
    greater [mm]; inf where the beam has no steel there"""
    peak_lever_hogging: Floats
    """The same of the top [mm]"""


def critical_shear_depth(
    *,
    sagging_depth: Floats,
    hogging_depth: Floats,
    sagging_area: Floats,
    hogging_area: Floats,
) -> Floats:
    """Distance of the critical section for shear from the face of a support.

    The lesser dv of the faces that have steel; of both where neither has any. The lesser
    distance is the safe one: the shear there is the greater.

    Parameters
    ----------
    sagging_depth, hogging_depth
        dv with the soffit and with the top in tension [mm] (N).
    sagging_area, hogging_area
        Steel of the soffit and of the top, as if fully developed [mm2] (N).

    References
    ----------
    CSA A23.3-14, 11.3.2
    """
    least = np.minimum(sagging_depth, hogging_depth)
    only_soffit = (sagging_area > 0.0) & ~(hogging_area > 0.0)
    only_top = (hogging_area > 0.0) & ~(sagging_area > 0.0)
    return np.where(only_soffit, sagging_depth, np.where(only_top, hogging_depth, least))


def surroundings(
    *,
    simplified: bool,
    beam: Ints,
    x: Floats,
    inside: Bools,
    sagging_depth: Floats,
    hogging_depth: Floats,
    sagging_area: Floats,
    hogging_area: Floats,
    sagging_area_full: Floats,
    hogging_area_full: Floats,
    sagging_lever: Floats,
    hogging_lever: Floats,
) -> Surroundings:
    """Find the faces and critical sections that belong to every station.

    Parameters
    ----------
    simplified
        Whether the brief chooses the simplified method for shear.
    beam, x, inside
        Stations, sorted by beam and x: row of the beam, place [mm] and whether it lies between
        the faces of the supports (N).
    sagging_depth, hogging_depth
        dv with the soffit and with the top in tension [mm] (N).
    sagging_area, hogging_area
        Tension steel of each face, reduced where it is not developed [mm2] (N).
    sagging_area_full, hogging_area_full
        The same as if fully developed [mm2] (N).
    sagging_lever, hogging_lever
        Mr over the force of the flexural tension steel [mm] (N); nan where there is none.

    Notes
    -----
    The first and the last station between the faces stand at the faces.
    """
    first = np.flatnonzero(np.diff(beam, prepend=-1))
    counts = np.diff(first, append=beam.size)
    faces = np.stack(
        [
            np.minimum.reduceat(np.where(inside, x, np.inf), first),
            np.maximum.reduceat(np.where(inside, x, -np.inf), first),
        ]
    )
    distance = critical_shear_depth(
        sagging_depth=sagging_depth,
        hogging_depth=hogging_depth,
        sagging_area=sagging_area_full,
        hogging_area=hogging_area_full,
    )
    rows, reach = _critical_rows(x, faces, distance, first, counts)
    start, end = np.repeat(faces, counts, axis=1)
    return Surroundings(
        simplified=simplified,
        critical_distance=reach,
        critical_area_sagging=sagging_area[rows],
        critical_area_hogging=hogging_area[rows],
        start_distance=x - start,
        end_distance=end - x,
        peak_lever_sagging=_least_lever(sagging_lever, sagging_depth, first, counts),
        peak_lever_hogging=_least_lever(hogging_lever, hogging_depth, first, counts),
    )


def _least_lever(lever: Floats, shear_depth: Floats, first: Ints, counts: Ints) -> Floats:
    """Least lever arm of each beam, or least dv where that is greater, at all its stations."""
    known = np.isfinite(lever + shear_depth)
    least = np.minimum.reduceat(np.where(known, lever, np.inf), first)
    depth = np.minimum.reduceat(np.where(known, shear_depth, np.inf), first)
    return np.repeat(np.maximum(least, depth), counts)


def _critical_rows(
    x: Floats, faces: Floats, distance: Floats, first: Ints, counts: Ints
) -> tuple[Ints, Floats]:
    """Row of the critical section of each station (itself beyond it), and how far it is.

    The faces are those at the start and at the end of each beam (2, B).
    """
    from_face = distance[_rows_at(x, faces, first, counts)]
    sections = faces + np.array([[1.0], [-1.0]]) * from_face
    found = _rows_at(x, sections, first, counts)
    held = np.isfinite(faces) & (np.abs(x[found] - sections) <= REACH)
    middle = np.where(np.isfinite(faces), faces, 0.0).mean(axis=0)
    half = (x > np.repeat(middle, counts)) * first.size
    half += np.repeat(np.arange(first.size), counts)
    place = sections.ravel()[half]
    before = np.where(half < first.size, place - x, x - place)
    nearer = held.ravel()[half] & (before > REACH)
    rows = np.where(nearer, found.ravel()[half], np.arange(x.size))
    return rows, np.where(nearer, before, 0.0)


def _rows_at(x: Floats, place: Floats, first: Ints, counts: Ints) -> Ints:
    """Row of the station that lies nearest to each place of a beam (places, B)."""
    span = float(np.ptp(x)) + 1.0
    low = float(x.min(initial=0.0))
    wanted = np.clip(np.nan_to_num(place, posinf=low, neginf=low) - low, 0.0, span)
    beam = np.arange(first.size)
    key = np.repeat(2.0 * span * beam, counts) + (x - low)
    last = first + counts - 1
    right = np.clip(np.searchsorted(key, 2.0 * span * beam + wanted), first, last)
    left = np.clip(right - 1, first, last)
    nearest: Ints = np.where(np.abs(x[left] - place) < np.abs(x[right] - place), left, right)
    return nearest
