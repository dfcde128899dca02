"""Clause 11.3.9: the tension that moment and shear together put on longitudinal steel."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace
from typing import Any

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
from ifccheck.standards.csa_a23_3_14.tension_face import utilisation_of, worse_face


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


@dataclass(frozen=True, slots=True)
class _Side:
    """One side of the section: the greatest moment that tensions it, its lever arm, its steel."""

    moment: Floats
    lever_arm: Floats
    steel: Floats


def check(prepared: Prepared, demand: Demand) -> Check:
    """Check the longitudinal steel of both sides at every station and arrangement.

    The shear is that of the place itself, not the lesser one of the critical section, while Vs
    and theta are those of the shear check: never less than the clause asks for.
    """
    details, utilisation = worse_face(prepared, demand, _evaluate_face)
    unknown = np.isnan(utilisation)
    return Check(
        demand=details.force,
        resistance=np.where(details.beyond_materials, np.nan, details.steel),
        utilisation=utilisation,
        outside=outside_of(details, unknown),
        details=details,
    )


def _evaluate_face(
    prepared: Prepared, demand: Demand, top: Bools
) -> tuple[LongitudinalDetails, Floats]:
    with np.errstate(divide="ignore", invalid="ignore"):
        return _both_sides(prepared, demand, evaluate(prepared, demand, top))


def _both_sides(
    prepared: Prepared, demand: Demand, shear: ShearDetails
) -> tuple[LongitudinalDetails, Floats]:
    """The worse of both sides.

    Where theta or the stirrups are not known, the force that need not be exceeded stands in;
    the steel that suffices for that suffices, and nothing is said otherwise.
    """
    legs_unknown = np.isnan(shear.stirrup_area)
    outside = shear.beyond_strain | shear.beyond_simplified
    stirrup_term = np.where(legs_unknown, 0.0, shear.stirrup_term)
    theta = np.where(outside, np.nan, shear.theta)
    soffit, top = _sides(prepared, demand)
    tensioned = _pick(shear.top_in_tension, top, soffit)
    pressed = _pick(shear.top_in_tension, soffit, top)
    tension = tension_side_force(
        moment=shear.moment,
        shear=shear.own_shear,
        stirrup_term=stirrup_term,
        shear_depth=shear.shear_depth,
        theta=theta,
        greatest_moment=tensioned.moment,
        lever_arm=tensioned.lever_arm,
    )
    compression = compression_side_force(
        moment=shear.moment,
        shear=shear.own_shear,
        stirrup_term=stirrup_term,
        shear_depth=shear.shear_depth,
        theta=theta,
        greatest_moment=pressed.moment,
        lever_arm=pressed.lever_arm,
    )
    compression = np.where(_in_fan(prepared, demand, shear, theta), 0.0, compression)
    inside = prepared.inside
    first = utilisation_of(tension, tensioned.steel, inside)
    second = utilisation_of(compression, pressed.steel, inside)
    governs = second > first
    side = _pick(governs, pressed, tensioned)
    utilisation = np.where(governs, second, first)
    doubtful = (outside | legs_unknown) & (utilisation > 1.0) & (side.steel > 0.0)
    details = LongitudinalDetails(
        **_named(replace(shear, stirrup_term=stirrup_term)),
        greatest_moment=side.moment,
        lever_arm=side.lever_arm,
        tension_side=~governs & ~outside,
        compression_side=governs & ~outside,
        by_limit=np.broadcast_to(outside, governs.shape),
        force=np.where(governs, compression, tension),
        steel=side.steel,
    )
    missing = doubtful | (shear.beyond_materials & (utilisation > 0.0))
    return details, np.where(missing, np.nan, utilisation)


def _named(details: ShearDetails) -> dict[str, Any]:
    return {f.name: getattr(details, f.name) for f in fields(details)}


def _sides(prepared: Prepared, demand: Demand) -> tuple[_Side, _Side]:
    around = prepared.surroundings
    depths = (
        (around.peak_lever_sagging, prepared.sagging.shear_depth),
        (around.peak_lever_hogging, prepared.hogging.shear_depth),
    )
    soffit, top = (np.where(np.isfinite(peak), peak, own) for peak, own in depths)
    return (
        _Side(demand.peak_sagging, soffit, prepared.sagging.tension_force),
        _Side(demand.peak_hogging, top, prepared.hogging.tension_force),
    )


def _pick(condition: Bools, one: _Side, other: _Side) -> _Side:
    return _Side(
        np.where(condition, one.moment, other.moment),
        np.where(condition, one.lever_arm, other.lever_arm),
        np.where(condition, one.steel, other.steel),
    )


def _in_fan(prepared: Prepared, demand: Demand, shear: ShearDetails, theta: Floats) -> Bools:
    """Whether the inclined crack that would tension the compression side starts beyond a face.

    It starts dv cot(theta) away on the side to which the moment lessens; within that length of
    the face of a support the compression fans out from the support and no such crack forms.
    """
    sense = np.where(shear.top_in_tension, -1.0, 1.0)
    around = prepared.surroundings
    to_face = np.where(sense * demand.shear > 0.0, around.start_distance, around.end_distance)
    reach = shear.shear_depth / np.tan(np.radians(theta))
    fan: Bools = to_face < reach
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
