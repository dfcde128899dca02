"""Clause 11.3.9: the tension that moment and shear together put on longitudinal steel."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np

from ifccheck.mechanics.angles import cotangent
from ifccheck.mechanics.arrays import Bools, Demand, Floats
from ifccheck.standards.contract import CalculationLine, Check, LimitState
from ifccheck.standards.csa_a23_3_14.sections import Prepared
from ifccheck.standards.csa_a23_3_14.shear_check import (
    Section,
    ShearDetails,
    evaluate,
    outside_of,
    sections,
)
from ifccheck.standards.csa_a23_3_14.shear_lines import (
    CRACK_LINES,
    SECTION_LINES,
    STIRRUP_LINES,
    STIRRUP_TERM_LINES,
    given,
)
from ifccheck.standards.csa_a23_3_14.tension_face import (
    utilisation_of,
    worse_face,
)
from ifccheck.standards.csa_a23_3_14.web import Acting, Cracked, Web, acting


def tension_side_force(
    *,
    moment: Floats,
    shear: Floats,
    stirrup_term: Floats,
    shear_depth: Floats,
    theta: Floats,
    greatest_moment: Floats,
    lever_arm: Floats,
) -> Floats:
    """Tension on the flexural tension side.

    Flt = Mf / dv + (Vf - 0.5 Vs) cot(theta), with Vs <= Vf; need not exceed M / z, what the
    greatest moment that tensions this side needs alone

    Parameters
    ----------
    moment
        Mf, not negative [N*mm]
    shear
        Vf, not negative [N]
    stirrup_term
        Vs [N]
    shear_depth
        dv [mm]
    theta
        [deg]
    greatest_moment
        Greatest moment of this sense on the beam [N*mm]
    lever_arm
        Lever arm of the steel in flexure, or dv, for that moment [mm]

    Returns
    -------
    Floats
        Flt [N]; the force that need not be exceeded where theta is nan

    Examples
    --------
    >>> force = tension_side_force(
    ...     moment=np.array(100e6),
    ...     shear=np.array(200e3),
    ...     stirrup_term=np.array(200e3),
    ...     shear_depth=np.array(500.0),
    ...     theta=np.array(45.0),
    ...     greatest_moment=np.array(200e6),
    ...     lever_arm=np.array(500.0),
    ... )
    >>> round(float(force))
    300000

    References
    ----------
    CSA A23.3-14, 11.3.9.2, 11.3.9.4
    """
    shift = _shift(shear, stirrup_term, cotangent(theta))
    return _tension_side(moment / shear_depth, shift, greatest_moment / lever_arm)


def compression_side_force(
    *,
    moment: Floats,
    shear: Floats,
    stirrup_term: Floats,
    shear_depth: Floats,
    theta: Floats,
    greatest_moment: Floats,
    lever_arm: Floats,
) -> Floats:
    """Tension that shear puts on the flexural compression side.

    Flc = (Vf - 0.5 Vs) cot(theta) - Mf / dv, with Vs <= Vf; not less than 0, and not more
    than M / z, what the greatest moment that tensions this side needs alone

    Parameters
    ----------
    moment, shear, stirrup_term, shear_depth, theta
        As for the tension side.
    greatest_moment, lever_arm
        Greatest moment that tensions this side [N*mm], and the lever arm for it [mm]

    Returns
    -------
    Floats
        Flc [N]; the force that need not be exceeded where theta is nan

    Notes
    -----
    Moments about the flexural steel where the inclined crack starts give the force on this side
    as M / dv of that place and what the stirrups add in compression, so that it cannot exceed
    the tension at the greatest moment that tensions this side; where no moment does, there is
    none.

    References
    ----------
    CSA A23.3-14, 11.3.9.3
    """
    shift = _shift(shear, stirrup_term, cotangent(theta))
    return _compression_side(moment / shear_depth, shift, greatest_moment / lever_arm)


def _shift(shear: Floats, stirrup_term: Floats, cot_theta: Floats) -> Floats:
    """Tension that shear adds on either side [N]."""
    shift: Floats = (shear - 0.5 * np.minimum(stirrup_term, shear)) * cot_theta
    return shift


def _tension_side(by_moment: Floats, shift: Floats, limit: Floats) -> Floats:
    force: Floats = np.fmin(by_moment + shift, limit)
    return force


def _compression_side(by_moment: Floats, shift: Floats, limit: Floats) -> Floats:
    force: Floats = np.maximum(np.fmin(shift - by_moment, limit), 0.0)
    return force


@dataclass(frozen=True, slots=True)
class LongitudinalDetails(ShearDetails):
    """Longitudinal tension with one face in flexural tension; arrays of one shape."""

    greatest_moment: Floats
    """Greatest moment that tensions the side that governs [N*mm]"""
    lever_arm: Floats
    """Lever arm for that moment [mm]"""
    tension_side: Bools
    """The flexural tension side governs"""
    compression_side: Bools
    by_limit: Bools
    """The angle is outside its range: the force that need not be exceeded stands in"""
    force: Floats
    steel: Floats
    """phi_s fy As of that side, developed [N]"""


def check(prepared: Prepared, demand: Demand) -> Check:
    """Check the longitudinal steel of both sides at every station and arrangement.

    The shear is that of the place itself, not the lesser one of the critical section, while Vs
    and theta are those of the shear check: never less than the clause asks for.
    """
    details, utilisation = worse_face(sections(prepared), demand, _evaluate)
    return Check(
        demand=details.force,
        resistance=np.where(details.beyond_materials, np.nan, details.steel),
        utilisation=utilisation,
        outside=outside_of(details, np.isnan(utilisation)),
        details=details,
    )


def quick_face(web: Web, demand: Demand, acts: Acting, cracked: Cracked) -> tuple[Floats, Floats]:
    """Utilisation and resistance alone, with one face in flexural tension."""
    sides = _both_sides(web, demand, acts, cracked)
    return sides.utilisation, np.where(web.beyond_materials, np.nan, sides.steel)


def _evaluate(section: Section, demand: Demand) -> tuple[LongitudinalDetails, Floats]:
    web, (shear, cracked) = section.web, evaluate(section, demand)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        sides = _both_sides(web, demand, acting(web, demand), cracked)
    governs, (peak, other_peak) = sides.compressed, _peaks(web, demand)
    known = replace(shear, stirrup_term=sides.stirrup_term)
    details = LongitudinalDetails(
        **{f.name: getattr(known, f.name) for f in fields(known)},
        greatest_moment=np.where(governs, other_peak, peak),
        lever_arm=np.where(governs, web.other_lever_arm, web.lever_arm),
        tension_side=~governs & ~sides.outside,
        compression_side=governs & ~sides.outside,
        by_limit=sides.outside,
        force=sides.force,
        steel=sides.steel,
    )
    return details, sides.utilisation


@dataclass(frozen=True, slots=True)
class _Sides:
    """The worse of the flexural tension side and the compression side."""

    compressed: Bools
    """The flexural compression side governs"""
    outside: Bools
    """The angle is outside its range"""
    stirrup_term: Floats
    """Vs, as far as it is known [N]"""
    force: Floats
    """[N]"""
    steel: Floats
    """phi_s fy As of the side that governs [N]"""
    utilisation: Floats


def _both_sides(web: Web, demand: Demand, acts: Acting, cracked: Cracked) -> _Sides:
    """The worse of both sides.

    Where theta or the stirrups are not known, the force that need not be exceeded stands in;
    the steel that suffices for that suffices, and nothing is said otherwise.
    """
    outside = cracked.beyond_strain | web.beyond_simplified
    outside |= ~(web.simplified | (cracked.area > 0.0)) | np.isnan(web.shear_depth)
    stirrup_term = np.where(web.legs_unknown, 0.0, cracked.stirrup_term)
    cot_theta = np.where(outside, np.nan, cracked.cot_theta)
    shift = _shift(acts.own_shear, stirrup_term, cot_theta)
    by_moment = acts.moment / web.shear_depth
    peak, other_peak = _peaks(web, demand)
    tension = _tension_side(by_moment, shift, peak / web.lever_arm)
    force, steel = tension, web.steel
    found = utilisation_of(tension, steel, web.inside)
    compressed = np.zeros(found.shape, dtype=np.bool_)
    if other_peak.any():  # where no moment ever tensions that side, there is no force
        limit = other_peak / web.other_lever_arm
        compression = _compression_side(by_moment, shift, limit)
        compression = np.where(_in_fan(web, demand, cot_theta), 0.0, compression)
        second = utilisation_of(compression, web.other_steel, web.inside)
        compressed = second > found
        force = np.where(compressed, compression, tension)
        steel = np.where(compressed, web.other_steel, steel)
        found = np.where(compressed, second, found)
    doubtful = (outside | web.legs_unknown) & (found > 1.0) & (steel > 0.0)
    missing = doubtful | (web.beyond_materials & (found > 0.0))
    utilisation = np.where(missing, np.nan, found)
    return _Sides(compressed, outside, stirrup_term, force, steel, utilisation)


def _peaks(web: Web, demand: Demand) -> tuple[Floats, Floats]:
    """Greatest moment that tensions this face, and the other one."""
    if web.top:
        return demand.peak_hogging, demand.peak_sagging
    return demand.peak_sagging, demand.peak_hogging


def _in_fan(web: Web, demand: Demand, cot_theta: Floats) -> Bools:
    """Whether the inclined crack that would tension the compression side starts beyond a face.

    It starts dv cot(theta) away on the side to which the moment lessens; within that length of
    the face of a support the compression fans out from the support and no such crack forms.
    """
    lessens_to_start = demand.shear < 0.0 if web.top else demand.shear > 0.0
    to_face = np.where(lessens_to_start, web.start_distance, web.end_distance)
    fan: Bools = to_face < web.shear_depth * cot_theta
    return fan


FORCE_LINES = (
    given("M_max", "greatest moment that tensions this side", "greatest_moment", "N*mm"),
    given("z", "lever arm of this side's steel, or dv", "lever_arm", "mm"),
    CalculationLine(
        "F",
        "tension on the flexural tension side",
        "min(Mf / dv + (V - 0.5 * min(Vs, V)) / tan(radians(theta)), M_max / z)",
        "force",
        "N",
        "11.3.9.2, 11.3.9.4",
        "tension_side",
    ),
    CalculationLine(
        "F",
        "tension on the flexural compression side",
        "max(min((V - 0.5 * min(Vs, V)) / tan(radians(theta)) - Mf / dv, M_max / z), 0)",
        "force",
        "N",
        "11.3.9.3",
        "compression_side",
    ),
    CalculationLine(
        "F",
        "tension that need not be exceeded, for the angle is outside its range",
        "M_max / z",
        "force",
        "N",
        "11.3.9.4",
        "by_limit",
    ),
    given("T", "developed steel of this side, phi_s fy As", "steel", "N", "11.3.9.1, 12.1"),
)

LONGITUDINAL = LimitState(
    name="LongitudinalTension",
    title="longitudinal tension",
    clause="11.3.9",
    covers="longitudinal tension",
    demand_unit="N",
    linear=False,
    check=check,
    lines=(*SECTION_LINES, *STIRRUP_LINES, *CRACK_LINES, *STIRRUP_TERM_LINES, *FORCE_LINES),
)
