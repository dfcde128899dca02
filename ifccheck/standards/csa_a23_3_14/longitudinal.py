"""Clause 11.3.9: the tension that moment and shear together put on longitudinal steel."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np

from ifccheck.mechanics.angles import cotangent
from ifccheck.mechanics.arrays import Bools, Demand, Floats
from ifccheck.standards.contract import CalculationLine, Check, LimitState
from ifccheck.standards.csa_a23_3_14.cracked import Acting, Cracked, acting, area_there
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
from ifccheck.standards.csa_a23_3_14.web import Web


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
    """Greatest moment that tensions the side that governs [N*mm]; inf where it bounds nothing"""
    bounded: Bools
    unbounded: Bools
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
    if not web.doubtful:
        return sides.utilisation, sides.steel
    beyond = web.rest.beyond_materials[web.rows()]
    return sides.utilisation, np.where(beyond, np.nan, sides.steel)


def _evaluate(section: Section, demand: Demand) -> tuple[LongitudinalDetails, Floats]:
    web, (shear, cracked) = section.web, evaluate(section, demand)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        sides = _both_sides(web, demand, acting(web, demand), cracked)
    never, (peak, other_peak) = np.zeros(sides.force.shape, np.bool_), _peaks(web, demand)
    governs = never if sides.compressed is None else sides.compressed
    outside = never if sides.outside is None else sides.outside
    greatest_moment = np.where(governs, other_peak, peak)
    known = replace(shear, stirrup_term=sides.stirrup_term)
    details = LongitudinalDetails(
        **{f.name: getattr(known, f.name) for f in fields(known)},
        greatest_moment=greatest_moment,
        bounded=np.isfinite(greatest_moment),
        unbounded=~np.isfinite(greatest_moment),
        lever_arm=np.where(governs, web.rest.other_lever_arm[web.rows()], web.lever_arm),
        tension_side=~governs & ~outside,
        compression_side=governs & ~outside,
        by_limit=outside,
        force=sides.force,
        steel=sides.steel,
    )
    return details, sides.utilisation


@dataclass(frozen=True, slots=True)
class _Sides:
    """The worse of the flexural tension side and the compression side."""

    compressed: Bools | None
    """The flexural compression side governs; None where it nowhere does"""
    outside: Bools | None
    """The angle is outside its range; None where it nowhere is"""
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
    outside, cot_theta, stirrup_term = (
        _outside(web, cracked),
        cracked.cot_theta,
        cracked.stirrup_term,
    )
    if outside is not None:
        cot_theta = np.where(outside, np.nan, cot_theta)
    if web.doubtful:
        stirrup_term = np.where(web.rest.legs_unknown[web.rows()], 0.0, stirrup_term)
    shift = _shift(acts.own_shear, stirrup_term, cot_theta)
    by_moment = acts.moment / web.shear_depth
    peak, other_peak = _peaks(web, demand)
    force, steel = _tension_side(by_moment, shift, peak / web.lever_arm), web.steel
    found, compressed = utilisation_of(force, steel, web.outside), None
    if other_peak.any():  # where no moment ever tensions that side, there is no force
        rest, rows = web.rest, web.rows()
        limit = other_peak / rest.other_lever_arm[rows]
        compression = _compression_side(by_moment, shift, limit)
        compression = np.where(_in_fan(web, demand, cot_theta), 0.0, compression)
        other_steel = rest.other_steel[rows]
        second = utilisation_of(compression, other_steel, web.outside)
        compressed = second > found
        force = np.where(compressed, compression, force)
        steel = np.where(compressed, other_steel, steel)
        found = np.where(compressed, second, found)
    if outside is not None or web.doubtful:
        found = _known(web, outside, found, steel)
    return _Sides(compressed, outside, stirrup_term, force, steel, found)


def _outside(web: Web, cracked: Cracked) -> Bools | None:
    """Where the angle is outside its range."""
    if not web.doubtful:
        return cracked.beyond_strain
    beyond = web.rest.beyond_simplified[web.rows()] | np.isnan(web.shear_depth)
    outside: Bools = np.broadcast_to(beyond, cracked.counting.shape)
    if cracked.beyond_strain is not None:
        outside = outside | cracked.beyond_strain
    return outside if web.simplified else outside | ~(area_there(web, cracked) > 0.0)


def _known(web: Web, outside: Bools | None, utilisation: Floats, steel: Floats) -> Floats:
    """The utilisation, nan where nothing can be said."""
    rest, rows = web.rest, web.rows()
    doubtful = rest.legs_unknown[rows]
    doubtful = doubtful if outside is None else doubtful | outside
    missing = doubtful & (utilisation > 1.0) & (steel > 0.0)
    missing |= rest.beyond_materials[rows] & (utilisation > 0.0)
    return np.where(missing, np.nan, utilisation)


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
    start, end = (
        distance[web.rows()] for distance in (web.rest.start_distance, web.rest.end_distance)
    )
    to_face = np.where(lessens_to_start, start, end)
    fan: Bools = to_face < web.shear_depth * cot_theta
    return fan


FORCE_LINES = (
    CalculationLine(
        "M_max",
        "greatest moment that tensions this side",
        "",
        "greatest_moment",
        "N*mm",
        "",
        "bounded",
    ),
    CalculationLine(
        "M_max",
        "greatest moment, no bound here: another member frames into the side of the beam, so that"
        " its load does not press on the compression face",
        "",
        "greatest_moment",
        "N*mm",
        "11.3.9.4",
        "unbounded",
    ),
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
    check=check,
    lines=(*SECTION_LINES, *STIRRUP_LINES, *CRACK_LINES, *STIRRUP_TERM_LINES, *FORCE_LINES),
)
