"""What clauses 8, 10, 11 and 12 need of each station before any demand is known."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, fields, replace

import numpy as np

from ifccheck.mechanics.arrays import (
    IN_FLANGE,
    NEAR_WEB,
    OWN,
    Bools,
    Chords,
    Floats,
    Ints,
    Members,
    Stations,
    rows_of,
)
from ifccheck.mechanics.width_profile import SLIVER, bottom_of, gaps_of, top_of
from ifccheck.standards.contract import Options
from ifccheck.standards.csa_a23_3_14 import development, materials
from ifccheck.standards.csa_a23_3_14.critical import (
    Surroundings,
    critical_shear_depth,
    surroundings,
)
from ifccheck.standards.csa_a23_3_14.faces import (
    FaceState,
    sagging_and_hogging,
    soffit_steel,
    top_steel,
)
from ifccheck.standards.csa_a23_3_14.layers import layers_of, with_bars
from ifccheck.standards.csa_a23_3_14.section_states import Layers, SectionState, take_rows

AT_ONCE = 65536
"""Stations worked on together, so that their arrays stay in the processor's cache."""


@dataclass(frozen=True, slots=True)
class Prepared:
    """Sections of clauses 8, 10, 11 and 12 at each station (N)."""

    beam: Ints
    """Row of Members"""
    x: Floats
    """[mm] from the beam's start"""
    inside: Bools
    """Between the faces of the supports"""
    concrete_strength: Floats
    """f'c [MPa]"""
    density_factor: Floats
    """lambda"""
    aggregate_size: Floats
    """ag [mm]"""
    alpha1: Floats
    beta1: Floats
    depth: Floats
    """h [mm]"""
    longitudinal_yield: Floats
    """Greatest fy of all bars that reach the station [MPa]; 0 where there are none"""
    stirrup_area: Floats
    """Av of all legs [mm2]; 0 without stirrups, nan where not known"""
    stirrup_spacing: Floats
    """s [mm]; inf without stirrups"""
    stirrup_yield: Floats
    """[MPa]"""
    sagging: FaceState
    """The soffit in tension"""
    hogging: FaceState
    """The top in tension"""
    beyond_concrete_strength: Bools
    """f'c lies outside 20 to 80 MPa (8.6.1.1)"""
    beyond_yield: Bools
    """A longitudinal bar's fy exceeds 500 MPa (8.5.1)"""
    shear_loss: Floats
    """Depth that openings take off both dv [mm]; nan where shear cannot be rated"""
    surroundings: Surroundings
    """Faces and critical sections as seen from each station: critical.surroundings(...)"""
    chords: Chords | None
    """How the chords are inclined; None where none is"""
    hogging_with_slab: FaceState | None = None
    """The top in tension with all bars of slabs that count; None where none does"""
    top_force: Floats | None = None
    """phi_s fy As of the top in tension, developed, with the bars of slabs that lie near the web
    [N]; None where none does"""

    @property
    def top_in_flexure(self) -> FaceState:
        """The top in tension, as it counts in flexure"""
        return self.hogging_with_slab or self.hogging

    def tension_force(self, *, top: bool) -> Floats:
        """phi_s fy As of one face, developed, as it counts in longitudinal tension [N]"""
        if top:
            return self.hogging.tension_force if self.top_force is None else self.top_force
        return self.sagging.tension_force

    def take(self, rows: Ints) -> Prepared:
        """The same at the given stations; rows may repeat."""
        return take_rows(self, rows)


def prepare(members: Members, stations: Stations, options: Options) -> Prepared:
    """Sections of clauses 8, 10, 11 and 12 at each station.

    Parameters
    ----------
    members, stations
        The beams and the places along them.
    options
        Choices within the standard: the method for shear.

    Returns
    -------
    Prepared

    Notes
    -----
    Equilibrium is solved once for neighbouring stations of a beam that have the same section
    and equally developed bars. Stations are worked off by the number of layers and strips that
    they really have, so that one intricate section does not slow the others. A section that an
    opening divides is not rated in shear where less than its height is said to be lost.
    Bars of slabs count in nothing but the resistance of the top in tension, and in its
    longitudinal tension where they lie near the web.
    """
    strength = members.concrete_strength[stations.beam]
    every, members = members, with_bars(members, OWN)
    bars = layers_of(members)
    *faces, steel_yield = _faces(members, bars, stations)
    strips = members.strips
    lost = stations.shear_loss
    lost = np.where(gaps_of(strips)[stations.section] > lost + SLIVER, np.nan, lost)
    sagging, hogging = (_opened(face, lost) for face in faces)
    return Prepared(
        beam=stations.beam,
        x=stations.x,
        inside=stations.inside,
        concrete_strength=strength,
        density_factor=members.density_factor[stations.beam],
        aggregate_size=members.aggregate_size[stations.beam],
        alpha1=materials.block_stress_ratio(strength),
        beta1=materials.block_depth_ratio(strength),
        depth=(top_of(strips) - bottom_of(strips))[stations.section],
        longitudinal_yield=steel_yield,
        stirrup_area=stations.stirrup_area,
        stirrup_spacing=stations.stirrup_spacing,
        stirrup_yield=stations.stirrup_yield,
        sagging=sagging,
        hogging=hogging,
        beyond_concrete_strength=materials.beyond_concrete_strength(strength),
        beyond_yield=materials.beyond_yield(steel_yield),
        shear_loss=lost,
        surroundings=_surroundings(stations, sagging, hogging, options),
        chords=stations.chords,
        hogging_with_slab=_top_with(every, IN_FLANGE, stations),
        top_force=_force_with(_top_with(every, NEAR_WEB, stations), faces[1]),
    )


def _top_with(members: Members, farthest: int, stations: Stations) -> FaceState | None:
    """The top in tension with bars of slabs; None where there are none."""
    if members.layer_place is None:
        return None
    members = with_bars(members, farthest)
    return _faces(members, layers_of(members), stations)[1]


def _force_with(near: FaceState | None, own: FaceState) -> Floats | None:
    """Force of the top in tension with the bars of slabs near the web [N].

    The tension is told with dv to the beam's own bars: what bars of slabs take dv from takes as
    much of their force.
    """
    if near is None:
        return None
    force = near.tension_force * np.minimum(near.shear_depth / own.shear_depth, 1.0)
    return np.maximum(force, own.tension_force)


def with_options(prepared: Prepared, options: Options) -> Prepared:
    """The same sections by another method for shear."""
    simplified = options.shear_method == "simplified"
    return replace(prepared, surroundings=replace(prepared.surroundings, simplified=simplified))


def critical_distance(members: Members, stations: Stations) -> Floats:
    """Distance of the critical section for shear from the face of a support [mm] (N).

    Parameters
    ----------
    members, stations
        The beams, and stations at the faces of their supports.

    References
    ----------
    CSA A23.3-14, 11.3.2
    """
    members = with_bars(members, OWN)
    bars, distance = layers_of(members), np.empty(stations.x.shape)
    for rows, layers, strips in _groups(members, stations):
        section, state = _distinct(members, bars, stations, rows, layers, strips)
        soffit, top = soffit_steel(section), top_steel(section)
        depth = critical_shear_depth(
            sagging_depth=soffit.shear_depth,
            hogging_depth=top.shear_depth,
            sagging_area=soffit.full.sum(axis=1),
            hogging_area=top.full.sum(axis=1),
        )
        distance[rows] = depth[state]
    return distance - stations.shear_loss


def _opened(face: FaceState, shear_loss: Floats) -> FaceState:
    """The face with dv less what openings take away."""
    if not shear_loss.any():
        return face
    return replace(face, shear_depth=face.shear_depth - shear_loss)


def _surroundings(
    stations: Stations, sagging: FaceState, hogging: FaceState, options: Options
) -> Surroundings:
    """Faces of the supports and critical sections as seen from each station."""
    return surroundings(
        simplified=options.shear_method == "simplified",
        beam=stations.beam,
        x=stations.x,
        inside=stations.inside,
        sagging_depth=sagging.shear_depth,
        hogging_depth=hogging.shear_depth,
        sagging_area=sagging.tension_area,
        hogging_area=hogging.tension_area,
        sagging_area_full=sagging.tension_area_full,
        hogging_area_full=hogging.tension_area_full,
        sagging_lever=_lever(sagging),
        hogging_lever=_lever(hogging),
    )


def _lever(face: FaceState) -> Floats:
    """Mr over the force of the flexural tension steel; nan where there is none."""
    steel = face.tension_force > 0.0
    return np.where(
        steel, face.moment_resistance / np.where(steel, face.tension_force, 1.0), np.nan
    )


def _faces(
    members: Members, bars: Layers, stations: Stations
) -> tuple[FaceState, FaceState, Floats]:
    """Both faces and the greatest fy at all stations."""
    sagging: list[FaceState] = []
    hogging: list[FaceState] = []
    steel_yield = []
    index, known = np.empty_like(stations.beam), 0
    for rows, layers, strips in _groups(members, stations):
        section, state = _distinct(members, bars, stations, rows, layers, strips)
        index[rows] = known + state
        known += len(section.strength)
        for found, face in zip((sagging, hogging), sagging_and_hogging(section), strict=True):
            found.append(face)
        steel_yield.append(section.steel_yield)
    return (
        _join(sagging).take(index),
        _join(hogging).take(index),
        np.concatenate(steel_yield)[index],
    )


def _join(states: Sequence[FaceState]) -> FaceState:
    """States one after another."""
    return FaceState(
        *(np.concatenate([getattr(s, f.name) for s in states]) for f in fields(FaceState))
    )


def _groups(members: Members, stations: Stations) -> Iterator[tuple[Ints, int, int]]:
    """Rows of stations with about as many layers and strips, and those numbers."""
    layers = _room(~(members.layer_area <= 0.0))[stations.beam]
    strips = _room(members.strips[..., 1] > members.strips[..., 0])[stations.section]
    most = int(strips.max(initial=1)) + 1
    kind = layers * most + strips
    if not len(kind):
        yield np.arange(0), 1, 1
    for code in np.flatnonzero(np.bincount(kind)).tolist():
        rows = np.flatnonzero(kind == code)
        for start in range(0, len(rows), AT_ONCE):
            yield rows[start : start + AT_ONCE], code // most, code % most


def _room(used: Bools) -> Ints:
    """How many leading columns of each row are needed, as a power of two."""
    width = used.shape[1]
    last = np.where(used, np.arange(1, width + 1), 1).max(axis=1, initial=1)
    room: Ints = np.minimum(2 ** np.ceil(np.log2(last)).astype(np.intp), max(width, 1))
    return room


def _distinct(
    members: Members, bars: Layers, stations: Stations, rows: Ints, layers: int, strips: int
) -> tuple[SectionState, Ints]:
    """Sections that differ among some stations, and which of them each station has."""
    beam, section = stations.beam[rows], stations.section[rows]
    place = (stations.x[rows], stations.side[rows])
    pulled = _developed(bars, beam, layers, *place, bars.start_length, bars.end_length)
    pushed = pulled
    if bars.slower_in_compression:
        pushed = _developed(bars, beam, layers, *place, bars.start_push, bars.end_push)
    new = _differs(beam, section, pulled, pushed)
    first, state = np.flatnonzero(new), np.cumsum(new) - 1
    section_state = SectionState(
        strength=members.concrete_strength[beam[first]],
        density_factor=members.density_factor[beam[first]],
        span=members.span[beam[first]],
        strips=rows_of(members.strips[:, :strips], section[first]),
        overhang_left=members.overhang_left[section[first]],
        overhang_right=members.overhang_right[section[first]],
        flange_thickness=members.flange_thickness[section[first]],
        bars=bars.take(beam[first], layers),
        pulled=rows_of(pulled, first),
        pushed=rows_of(pushed, first),
    )
    return section_state, state


def _developed(
    bars: Layers,
    beam: Ints,
    layers: int,
    x: Floats,
    side: Ints,
    start_length: Floats,
    end_length: Floats,
) -> Floats:
    """Part of fy that each layer reaches at the stations."""
    start, end, start_length, end_length, start_beyond, end_beyond = (
        rows_of(a[:, :layers], beam)
        for a in (
            *(bars.start, bars.end, start_length, end_length),
            *(bars.start_beyond, bars.end_beyond),
        )
    )
    return development.developed_fraction(
        x=x[:, None],
        side=side[:, None],
        bar_start=start,
        bar_end=end,
        start_length=start_length,
        end_length=end_length,
        start_beyond=start_beyond,
        end_beyond=end_beyond,
    )


def _differs(beam: Ints, section: Ints, pulled: Floats, pushed: Floats) -> Bools:
    """Whether a station's section or bars differ from those of the station before."""
    new = np.ones(len(beam), dtype=np.bool_)
    new[1:] = (beam[1:] != beam[:-1]) | (section[1:] != section[:-1])
    new[1:] |= (pulled[1:] != pulled[:-1]).any(axis=1) | (pushed[1:] != pushed[:-1]).any(axis=1)
    return new
