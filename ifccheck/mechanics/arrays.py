"""The arrays that formulas work on: one row per beam, per bar layer and per station."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Self, TypeVar

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]
Ints = npt.NDArray[np.intp]
Bools = npt.NDArray[np.bool_]
Scalar = TypeVar("Scalar", bound=np.generic)

ANCHOR_STRAIGHT, ANCHOR_HOOK, ANCHOR_FULL = 0, 1, 2
OWN, NEAR_WEB, IN_FLANGE = 0, 1, 2
"""Where the bars of a layer lie: in the beam itself, in slab that is its flange within the reach of
the web, in that slab farther out"""


def rows_of(values: npt.NDArray[Scalar], rows: Ints) -> npt.NDArray[Scalar]:
    """The given rows of the first axis, laid out in memory so that sums over the others are
    quick."""
    taken: npt.NDArray[Scalar] = values.T.take(rows, axis=-1, mode="clip").T
    return taken


@dataclass(frozen=True, slots=True)
class Members:
    """One row per beam (B), padded bar layers (B, L) and one row per section (K).

    A layer is a set of equal bars at one height with the same ends. Padding layers have
    area 0, diameter 1 and height 0.
    """

    concrete_strength: Floats
    """f'c [MPa] (B)"""
    density_factor: Floats
    """lambda for low-density concrete, 1 for normal (B)"""
    aggregate_size: Floats
    """Nominal largest aggregate [mm] (B)"""
    span: Floats
    """Span for the effective flange width [mm] (B)"""
    layer_height: Floats
    """Bar centres above the soffit [mm] (B, L)"""
    layer_area: Floats
    """Area of all the bars of the layer [mm2] (B, L)"""
    layer_bar_area: Floats
    """Area of one bar [mm2] (B, L)"""
    layer_diameter: Floats
    """[mm] (B, L)"""
    layer_yield: Floats
    """[MPa] (B, L)"""
    layer_start: Floats
    """x of the bars' start [mm] (B, L); -inf is allowed"""
    layer_end: Floats
    layer_start_anchor: Ints
    """ANCHOR_STRAIGHT, ANCHOR_HOOK or ANCHOR_FULL (B, L)"""
    layer_end_anchor: Ints
    layer_cover_distance: Floats
    """dcs: least of the distance from bar centre to the nearest concrete surface and 2/3 of
    the centre spacing in the layer [mm] (B, L)"""
    strips: Floats
    """Width profile: strips (z0, z1, w0, w1) from the soffit up [mm] (K, S, 4); padding strips
    have z0 = z1 = top of the section and no width"""
    overhang_left: Floats
    """Overhang of the wider top flange beyond the web, to the left [mm] (K); 0 without one"""
    overhang_right: Floats
    flange_thickness: Floats
    """Thickness of that flange [mm] (K); 0 without one"""
    layer_bundle: Ints | None = None
    """The most bars that are in contact with a bar of the layer, itself included (B, L); None
    where none is"""
    layer_lapped: Bools | None = None
    """Some bar of the layer laps another (B, L); None where none does"""
    layer_beyond: Floats | None = None
    """Length of the same bars beyond start and end of the layer [mm] (B, L, 2), where they go on
    bent or at another height and develop too; None where none does"""
    layer_place: Ints | None = None
    """OWN, NEAR_WEB or IN_FLANGE (B, L); None where all are the beams' own. Bars of a slab count
    where the top is in tension, never in shear; in longitudinal tension those near the web"""


@dataclass(frozen=True, slots=True)
class Chords:
    """How top and soffit are inclined to the axis, one row per station (N)."""

    top_rise: Floats
    """Rise of the top for each mm along x"""
    soffit_rise: Floats
    steel_follows: Bools
    """The bars near a face lie along it, else parallel to the axis"""


@dataclass(frozen=True, slots=True)
class Stations:
    """Places along the beams, one row each (N), sorted by beam, then x, then side."""

    beam: Ints
    """Row of Members (N)"""
    section: Ints
    """Row of Members.strips (N)"""
    x: Floats
    """[mm] from the beam's start (N)"""
    side: Ints
    """-1 just left, +1 just right of x, 0 where nothing jumps (N)"""
    stirrup_area: Floats
    """Area of all legs that cross the section [mm2] (N); 0 where there are none, nan where
    not known"""
    stirrup_spacing: Floats
    """[mm] (N); inf where there are none"""
    stirrup_yield: Floats
    """[MPa] (N)"""
    inside: Bools
    """Between the faces of the supports: where shear is checked (N)"""
    shear_loss: Floats
    """Depth that openings take away from what carries shear [mm] (N); nan where the section
    cannot be rated in shear"""
    chords: Chords | None = None
    """None where no chord is inclined"""


@dataclass(frozen=True, slots=True)
class Demand:
    """What acts at each station together; arrays of one shape (..., N).

    Every field is linear in the factor of a rated case.
    """

    moment: Floats
    """[N*mm], sagging positive"""
    shear: Floats
    """[N], positive when the left part pushes up"""
    critical_shear: Floats
    """The shear to check with: that at the critical section where the standard lets
    stations nearer to the support use it, else ``shear`` itself [N]"""
    peak_sagging: Floats
    """Upper bound of the sagging moment anywhere on the beam in the combination [N*mm], >= 0; a
    looser bound never makes a utilisation less"""
    peak_hogging: Floats
    """The same for hogging, as a positive number [N*mm]"""
    can_sag: Bools
    """Some arrangement of the loads puts the soffit in tension here"""
    can_hog: Bools

    def take(self, rows: Ints | slice) -> Self:
        """The same arrays at the given rows of the last axis."""
        return type(self)(*(getattr(self, name)[..., rows] for name in self.__slots__))

    def at(self, places: tuple[Ints, ...]) -> Self:
        """The same arrays at the given places, one index for each axis."""
        return type(self)(*(getattr(self, name)[places] for name in self.__slots__))
