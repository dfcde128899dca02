"""Clause 11.3.9: the tension that moment and shear together put on longitudinal steel."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np

from ifccheck.mechanics.arrays import Bools, Demand, Floats
from ifccheck.standards.contract import CalculationLine, Check, LimitState
from ifccheck.standards.csa_a23_3_14.sections import Prepared
from ifccheck.standards.csa_a23_3_14.shear_check import ShearDetails, evaluate, outside_of
from ifccheck.standards.csa_a23_3_14.shear_lines import (
    CRACK_LINES,
    SECTION_LINES,
    STIRRUP_LINES,
    STIRRUP_TERM_LINES,
    given,
)
from ifccheck.standards.csa_a23_3_14.tension_face import TensionFace, utilisation_of, worse_face


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
    shift = (shear - 0.5 * np.minimum(stirrup_term, shear)) / np.tan(np.radians(theta))
    own = moment / shear_depth
    return np.fmin(own + shift, greatest_moment / lever_arm)


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
    shift = (shear - 0.5 * np.minimum(stirrup_term, shear)) / np.tan(np.radians(theta))
    limit = greatest_moment / lever_arm
    return np.maximum(np.fmin(shift - moment / shear_depth, limit), 0.0)


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
    details, utilisation = worse_face(prepared, demand, _evaluate)
    return Check(
        demand=details.force,
        resistance=np.where(details.beyond_materials, np.nan, details.steel),
        utilisation=utilisation,
        outside=outside_of(details, np.isnan(utilisation)),
        details=details,
    )


def _evaluate(face: TensionFace, demand: Demand) -> tuple[LongitudinalDetails, Floats]:
    with np.errstate(divide="ignore", invalid="ignore"):
        return _both_sides(face, demand, evaluate(face, demand))


def _both_sides(
    face: TensionFace, demand: Demand, shear: ShearDetails
) -> tuple[LongitudinalDetails, Floats]:
    """The worse of both sides.

    Where theta or the stirrups are not known, the force that need not be exceeded stands in;
    the steel that suffices for that suffices, and nothing is said otherwise.
    """
    legs_unknown = np.isnan(face.stirrup_area)
    outside = shear.beyond_strain | shear.beyond_simplified | shear.without_steel
    known = replace(shear, stirrup_term=np.where(legs_unknown, 0.0, shear.stirrup_term))
    theta = np.where(outside, np.nan, shear.theta)
    peaks = demand.peak_sagging, demand.peak_hogging
    peak, other_peak = (np.where(face.top_in_tension, a, b) for a, b in (peaks[::-1], peaks))
    tension = tension_side_force(
        moment=shear.moment,
        shear=shear.own_shear,
        stirrup_term=known.stirrup_term,
        shear_depth=shear.shear_depth,
        theta=theta,
        greatest_moment=peak,
        lever_arm=face.lever_arm,
    )
    compression = _compression(face, demand, known, theta, other_peak)
    first = utilisation_of(tension, face.steel, face.inside)
    second = utilisation_of(compression, face.other_steel, face.inside)
    governs = second > first
    steel = np.where(governs, face.other_steel, face.steel)
    utilisation = np.where(governs, second, first)
    doubtful = (outside | legs_unknown) & (utilisation > 1.0) & (steel > 0.0)
    missing = doubtful | (face.beyond_materials & (utilisation > 0.0))
    details = LongitudinalDetails(
        **{f.name: getattr(known, f.name) for f in fields(known)},
        greatest_moment=np.where(governs, other_peak, peak),
        lever_arm=np.where(governs, face.other_lever_arm, face.lever_arm),
        tension_side=~governs & ~outside,
        compression_side=governs & ~outside,
        by_limit=outside,
        force=np.where(governs, compression, tension),
        steel=steel,
    )
    return details, np.where(missing, np.nan, utilisation)


def _compression(
    face: TensionFace, demand: Demand, shear: ShearDetails, theta: Floats, peak: Floats
) -> Floats:
    """Tension on the compression side; none where no moment ever tensions that side, nor where
    the inclined crack that would tension it starts beyond the face of a support.

    That crack starts dv cot(theta) away on the side to which the moment lessens; within that
    length of a face the compression fans out from the support and no such crack forms.
    """
    if not peak.any():
        return np.zeros(shear.own_shear.shape)
    force = compression_side_force(
        moment=shear.moment,
        shear=shear.own_shear,
        stirrup_term=shear.stirrup_term,
        shear_depth=shear.shear_depth,
        theta=theta,
        greatest_moment=peak,
        lever_arm=face.other_lever_arm,
    )
    sense = np.where(face.top_in_tension, -1.0, 1.0)
    to_face = np.where(sense * demand.shear > 0.0, face.start_distance, face.end_distance)
    in_fan = to_face * np.tan(np.radians(theta)) < shear.shear_depth
    return np.where(in_fan, 0.0, force)


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
