"""One face of a section in tension: its strength and the depths that shear needs."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.mechanics.flexure import (
    AT_MIDDLE,
    FlexuralStrength,
    centroid_depth,
    flexural_strength,
    tension_side,
)
from ifccheck.mechanics.width_profile import (
    area_below,
    bottom_of,
    first_moment_below,
    flipped,
    from_soffit,
    greatest_width,
    least_width,
    second_moment_below,
    top_of,
)
from ifccheck.standards.csa_a23_3_14 import flange, materials
from ifccheck.standards.csa_a23_3_14.section_states import SectionState, take_rows, twice

LEAST_WEB = 10.0
"""An outline that is narrower than this somewhere within the effective depth, as at a tip or along
a face that is a little out of level, has no web that resists shear [mm]"""


@dataclass(frozen=True, slots=True)
class FaceState:
    """A section with one face in tension; one row per station (N).

    Flexural tension steel is what lies within half the depth of the tension face, each bar
    reduced pro rata where it is not fully developed. Depths are measured from the
    compression face.
    """

    moment_resistance: Floats
    """Mr [N*mm]; 0 without flexural tension steel, nan outside the standard's range"""
    effective_depth: Floats
    """d to the centroid of the flexural tension steel [mm]; nan where there is none"""
    shear_depth: Floats
    """dv, the greater of 0.9 d and 0.72 h [mm]; 0.72 h where there is no tension steel; less what
    openings take away"""
    web_width: Floats
    """bw, the least width between the compression face and the depth d [mm]; nan where that is
    less than LEAST_WEB"""
    tension_area: Floats
    """As, flexural tension steel, developed [mm2]"""
    tension_area_full: Floats
    """The same as if fully developed [mm2]"""
    tension_force: Floats
    """phi_s fy As of the flexural tension steel, developed [N]"""
    tension_yield: Floats
    """Greatest fy of the flexural tension steel [MPa]; 0 where there is none"""
    neutral_axis_depth: Floats
    """c [mm]"""
    block_depth: Floats
    """a = beta1 c, at most h [mm]"""
    lever_arm: Floats
    """Distance between the resultants of tension and compression [mm]"""
    compression_area: Floats
    """Concrete area under the stress block, effective flange width counted [mm2]"""
    compression_depth: Floats
    """Depth of the centroid of that area [mm]"""
    concrete_force: Floats
    """alpha1 phi_c f'c times that area [N]"""
    compression_steel_force: Floats
    """Force in compression steel less the concrete that it displaces [N]"""
    compression_steel_depth: Floats
    """Depth of that force [mm]; 0 where there is none"""
    tension_resultant: Floats
    """Force of all steel in tension at the resistance Mr [N]"""
    tension_resultant_depth: Floats
    """Depth of that force [mm]; 0 where there is none"""
    minimum_area: Floats
    """Minimum flexural reinforcement of 10.5.1.2 [mm2]"""
    cracking_moment: Floats
    """Mcr of the gross section [N*mm]"""
    beyond_ductility: Bools
    """c/d exceeds 700/(700 + fy) (10.5.2): Mr is nan"""
    bars_outside: Bools
    """A bar lies above or below the concrete: Mr is nan"""

    def take(self, rows: Ints | slice) -> FaceState:
        """The same at the given stations; rows may repeat."""
        return take_rows(self, rows)


@dataclass(frozen=True, slots=True)
class TensionSteel:
    """The flexural tension steel of sections with one face in tension; one row each."""

    side: Bools
    """Layers on the tension side"""
    full: Floats
    """Area of each such layer that reaches the section [mm2]"""
    developed: Floats
    """The same, as far as it is developed [mm2]"""
    effective_depth: Floats
    """d [mm]; nan where there is none"""
    shear_depth: Floats
    """dv [mm]"""


def soffit_steel(section: SectionState) -> TensionSteel:
    """The soffit in tension."""
    return _tension_steel(section, _depth_from_top(section))


def top_steel(section: SectionState) -> TensionSteel:
    """The top in tension."""
    return _tension_steel(section, _depth_from_soffit(section))


def _depth_from_top(section: SectionState) -> Floats:
    return top_of(section.strips)[:, None] - section.bars.height


def _depth_from_soffit(section: SectionState) -> Floats:
    return section.bars.height - bottom_of(section.strips)[:, None]


def _tension_steel(section: SectionState, layer_depth: Floats) -> TensionSteel:
    h = section.depth
    side = tension_side(layer_depth, section.bars.area, h)
    full = np.where(side & section.present, section.bars.area, 0.0)
    developed = full * section.pulled
    d = centroid_depth(layer_depth, developed)
    return TensionSteel(side, full, developed, d, np.fmax(0.9 * d, 0.72 * h))


def sagging_and_hogging(section: SectionState) -> tuple[FaceState, FaceState]:
    """The soffit in tension with the flange in compression, and the top in tension, where only
    the flange's steel counts; solved together."""
    compressed = flange.effective_strips(
        section.strips,
        left=section.overhang_left,
        right=section.overhang_right,
        thickness=section.flange_thickness,
        span=section.span,
    )
    one, both = section.overhang_left > 0.0, section.overhang_right > 0.0
    widest = np.select([one & both, one | both], [2.5, 1.5], np.inf)
    faces = _face(
        twice(section),
        np.concatenate([from_soffit(flipped(compressed)), from_soffit(section.strips)]),
        np.concatenate([_depth_from_top(section), _depth_from_soffit(section)]),
        np.concatenate([np.full_like(widest, np.inf), widest]),
    )
    return faces.take(slice(0, len(widest))), faces.take(slice(len(widest), None))


def _face(
    section: SectionState, strips: Floats, layer_depth: Floats, tension_width_limit: Floats
) -> FaceState:
    """One face in tension; strips and depths from the compression face.

    ``tension_width_limit`` is the greatest bt/bw that 10.5.1.2 asks for.
    """
    h, bars = section.depth, section.bars
    steel = _tension_steel(section, layer_depth)
    full, developed, d = steel.full, steel.developed, steel.effective_depth
    tension_yield = np.where(full > 0.0, bars.yield_strength, 0.0).max(axis=1, initial=0.0)
    bw = least_width(strips, np.zeros_like(h), np.where(np.isnan(d), h, d))
    bw = np.where(bw < LEAST_WEB, np.nan, bw)
    s = _strength(section, strips, layer_depth, steel.side)
    tension_area = developed.sum(axis=1)
    beyond_ductility: Bools = np.greater(s.neutral_axis_depth, ductility_limit(tension_yield) * d)
    outside: Bools = np.logical_or.reduce(
        [
            beyond_ductility,
            materials.beyond_concrete_strength(section.strength),
            materials.beyond_yield(section.steel_yield),
            section.bars_outside,
        ]
    )
    some_web = np.where(bw > 0.0, bw, np.inf)  # an outline may end in a point
    bt = np.minimum(greatest_width(strips, h / 2, h), tension_width_limit * some_web)
    return FaceState(
        moment_resistance=np.where(outside, np.nan, s.moment),
        effective_depth=d,
        shear_depth=steel.shear_depth,
        web_width=bw,
        tension_area=tension_area,
        tension_area_full=full.sum(axis=1),
        tension_force=materials.STEEL_FACTOR * (developed * bars.yield_strength).sum(axis=1),
        tension_yield=tension_yield,
        neutral_axis_depth=s.neutral_axis_depth,
        block_depth=np.minimum(s.block_depth, h),
        lever_arm=s.lever_arm,
        compression_area=s.block_area,
        compression_depth=s.block_centroid,
        concrete_force=s.concrete_force,
        compression_steel_force=s.compression_steel_force,
        compression_steel_depth=s.compression_steel_depth,
        tension_resultant=s.tension_force,
        tension_resultant_depth=s.tension_depth,
        minimum_area=minimum_area(section.strength, tension_yield, bt, h),
        cracking_moment=_cracking_moment(section, strips),
        beyond_ductility=beyond_ductility,
        bars_outside=section.bars_outside,
    )


def _strength(
    section: SectionState, strips: Floats, layer_depth: Floats, side: Bools
) -> FlexuralStrength:
    """Equilibrium with the factors of the standard and each bar's usable stress; none at all
    where no tension steel is developed. A layer at mid-depth may be pulled or pushed."""
    middle = ~side & (layer_depth >= section.depth[:, None] * (0.5 - AT_MIDDLE))
    pushed = np.where(middle, np.minimum(section.pulled, section.pushed), section.pushed)
    usable = np.where(side, section.pulled, pushed) * section.bars.yield_strength
    held = (side & section.present).any(axis=1, keepdims=True)
    ratio = materials.block_stress_ratio(section.strength)
    return flexural_strength(
        strips=strips,
        layer_depth=layer_depth,
        layer_area=section.bars.area,
        layer_yield=np.where(held, usable, 0.0),
        layer_diameter=section.bars.diameter,
        block_stress=ratio * materials.CONCRETE_FACTOR * section.strength,
        block_factor=materials.block_depth_ratio(section.strength),
        crushing_strain=materials.CRUSHING_STRAIN,
        steel_modulus=materials.STEEL_MODULUS,
        steel_factor=materials.STEEL_FACTOR,
    )


def _cracking_moment(section: SectionState, strips: Floats) -> Floats:
    """fr I / yt of the section without its steel."""
    h = section.depth
    area, first = area_below(strips, h), first_moment_below(strips, h)
    centroid = first / area
    inertia = second_moment_below(strips, h) - area * centroid**2
    stress = materials.cracking_stress(
        concrete_strength=section.strength, density_factor=section.density_factor
    )
    moment: Floats = stress * inertia / (h - centroid)
    return moment


def ductility_limit(steel_yield: Floats) -> Floats:
    """Greatest c/d at which the tension steel may be taken to yield.

    c/d <= 700 / (700 + fy)

    Parameters
    ----------
    steel_yield : array [MPa]

    References
    ----------
    CSA A23.3-14, 10.5.2
    """
    limit: Floats = 700.0 / (700.0 + steel_yield)
    return limit


def minimum_area(
    concrete_strength: Floats, steel_yield: Floats, tension_width: Floats, depth: Floats
) -> Floats:
    """Minimum flexural reinforcement [mm2].

    As,min = 0.2 sqrt(f'c) / fy * bt h

    Parameters
    ----------
    concrete_strength, steel_yield : arrays [MPa]
    tension_width, depth : arrays [mm]
        bt and h

    Returns
    -------
    array [mm2]
        nan where there is no steel.

    Notes
    -----
    bt is the greatest width in the tension half. A flange in tension counts up to 1.5 bw with
    a flange on one side of the web and 2.5 bw with one on both (recalled).

    Examples
    --------
    >>> round(float(minimum_area(*map(np.array, (40.0, 400.0, 400.0, 600.0)))))
    759

    References
    ----------
    CSA A23.3-14, 10.5.1.2
    """
    fy = np.where(steel_yield > 0.0, steel_yield, np.nan)
    area: Floats = 0.2 * np.sqrt(concrete_strength) / fy * tension_width * depth
    return area
