"""The shear limit state: clause 11.3 at every station, on the face or faces in tension."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.mechanics.arrays import Bools, Demand, Floats
from ifccheck.standards.contract import Check, LimitState, Outside
from ifccheck.standards.csa_a23_3_14 import shear as formulas
from ifccheck.standards.csa_a23_3_14.materials import GREATEST_YIELD
from ifccheck.standards.csa_a23_3_14.sections import Prepared
from ifccheck.standards.csa_a23_3_14.shear_lines import SHEAR_LINES
from ifccheck.standards.csa_a23_3_14.stirrups import greatest_stirrup_spacing, minimum_stirrup_area
from ifccheck.standards.csa_a23_3_14.tension_face import utilisation_of, worse_face

ROUNDING = 1e-9
"""What a limit may be exceeded by for rounding in the conversion of units"""


@dataclass(frozen=True, slots=True)
class ShearDetails:
    """A section in shear with one face in tension; arrays of one shape."""

    shear: Floats
    """Vf, at the critical section where that is allowed [N]"""
    own_shear: Floats
    """Shear at the place itself [N]"""
    moment: Floats
    """Moment that goes with it [N*mm]"""
    top_in_tension: Bools
    shear_depth: Floats
    web_width: Floats
    concrete_strength: Floats
    density_factor: Floats
    aggregate_size: Floats
    """Effective [mm]"""
    tension_area: Floats
    distance: Floats
    """Distance to the section at which eps_x is taken [mm]"""
    strain_moment: Floats
    strain: Floats
    crack_spacing: Floats
    beta: Floats
    theta: Floats
    stirrup_area: Floats
    stirrup_spacing: Floats
    stirrup_yield: Floats
    minimum_stirrup_area: Floats
    greatest_spacing: Floats
    concrete_term: Floats
    stirrup_term: Floats
    greatest: Floats
    steel_present: Floats
    """1 where the face holds any tension steel, else 0"""
    resistance: Floats
    has_stirrups: Bools
    effective: Bools
    """Stirrups that count: at least the minimum, within the spacing limit"""
    plain: Bools
    general: Bools
    general_effective: Bools
    general_plain: Bools
    simplified: Bools
    simplified_effective: Bools
    simplified_plain_depth: Bools
    simplified_plain_spacing: Bools
    beyond_strain: Bools
    beyond_simplified: Bools
    beyond_materials: Bools


def evaluate(prepared: Prepared, demand: Demand, top: Bools) -> ShearDetails:
    """Work out the shear resistance with the soffit, or where ``top`` the top, in tension.

    The range of each method is kept: outside it the resistance is nan. A face that holds no
    tension steel at all resists no shear, for clause 11.3 presumes that steel.
    """
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        return _evaluate(prepared, demand, top)


@dataclass(frozen=True, slots=True)
class _Section:
    """The section, and what acts on it."""

    shear: Floats
    own_shear: Floats
    moment: Floats
    top: Bools
    depth: Floats
    width: Floats
    strength: Floats
    lam: Floats


@dataclass(frozen=True, slots=True)
class _Strain:
    present: Bools
    """The face holds tension steel, developed or not, where the strain is taken"""
    area: Floats
    distance: Floats
    moment: Floats
    strain: Floats


@dataclass(frozen=True, slots=True)
class _Stirrups:
    area: Floats
    minimum: Floats
    greatest_spacing: Floats
    present: Bools
    effective: Bools


@dataclass(frozen=True, slots=True)
class _Cracks:
    aggregate: Floats
    spacing: Floats
    beta: Floats
    theta: Floats


def _evaluate(prepared: Prepared, demand: Demand, top: Bools) -> ShearDetails:
    section = _section(prepared, demand, top)
    strain = _strain(prepared, section)
    stirrups = _stirrups(prepared, section)
    cracks = _cracks(prepared, section, strain, stirrups)
    concrete = formulas.concrete_resistance(
        beta=cracks.beta,
        concrete_strength=section.strength,
        density_factor=section.lam,
        web_width=section.width,
        shear_depth=section.depth,
    )
    steel = formulas.stirrup_resistance(
        stirrup_area=stirrups.area,
        stirrup_yield=prepared.stirrup_yield,
        stirrup_spacing=prepared.stirrup_spacing,
        shear_depth=section.depth,
        theta=cracks.theta,
    )
    steel = np.where(stirrups.effective, steel, np.where(np.isnan(stirrups.area), np.nan, 0.0))
    greatest = formulas.greatest_resistance(
        concrete_strength=section.strength, web_width=section.width, shear_depth=section.depth
    )
    return _details(prepared, section, strain, stirrups, cracks, (concrete, steel, greatest))


def _section(prepared: Prepared, demand: Demand, top: Bools) -> _Section:
    soffit_face, top_face = prepared.sagging, prepared.hogging
    return _Section(
        shear=np.abs(demand.critical_shear),
        own_shear=np.abs(demand.shear),
        moment=np.abs(demand.moment),
        top=top,
        depth=np.where(top, top_face.shear_depth, soffit_face.shear_depth),
        width=np.where(top, top_face.web_width, soffit_face.web_width),
        strength=prepared.concrete_strength,
        lam=prepared.density_factor,
    )


def _strain(prepared: Prepared, section: _Section) -> _Strain:
    """eps_x at the place, or where it is less, at the critical section nearer to midspan.

    The latter is open to a place nearer to a support than its critical section, where the shear
    at that section is used too; the moment there is bounded from the place's own.
    """
    around = prepared.surroundings
    own_area = np.where(section.top, prepared.hogging.tension_area, prepared.sagging.tension_area)
    critical_area = np.where(
        section.top, around.critical_area_hogging, around.critical_area_sagging
    )
    own_moment = np.maximum(section.moment, section.shear * section.depth)
    critical_moment = np.maximum(
        section.moment + section.own_shear * around.critical_distance,
        section.shear * section.depth,
    )
    own = formulas.longitudinal_strain(
        moment=own_moment,
        shear=section.shear,
        shear_depth=section.depth,
        tension_area=own_area,
    )
    critical = formulas.longitudinal_strain(
        moment=critical_moment,
        shear=section.shear,
        shear_depth=section.depth,
        tension_area=critical_area,
    )
    nearer = (section.shear < section.own_shear) & (around.critical_distance > 0.0)
    there = nearer & (critical < own)
    full = np.where(
        section.top, prepared.hogging.tension_area_full, prepared.sagging.tension_area_full
    )
    return _Strain(
        present=(full > 0.0) | (nearer & (critical_area > 0.0)),
        area=np.where(there, critical_area, own_area),
        distance=np.where(there, around.critical_distance, 0.0),
        moment=np.where(there, critical_moment, own_moment),
        strain=np.where(there, critical, own),
    )


def _stirrups(prepared: Prepared, section: _Section) -> _Stirrups:
    minimum = minimum_stirrup_area(
        concrete_strength=section.strength,
        web_width=section.width,
        spacing=prepared.stirrup_spacing,
        stirrup_yield=prepared.stirrup_yield,
    )
    greatest = greatest_stirrup_spacing(
        shear=section.shear,
        concrete_strength=section.strength,
        density_factor=section.lam,
        web_width=section.width,
        shear_depth=section.depth,
    )
    area = np.broadcast_to(prepared.stirrup_area, section.shear.shape)
    present = area > 0.0
    effective = present & (area >= minimum) & (prepared.stirrup_spacing <= greatest)
    return _Stirrups(area, minimum, greatest, present, effective)


def _cracks(prepared: Prepared, section: _Section, strain: _Strain, stirrups: _Stirrups) -> _Cracks:
    aggregate = formulas.effective_aggregate_size(
        concrete_strength=section.strength, aggregate_size=prepared.aggregate_size
    )
    spacing = formulas.equivalent_crack_spacing(shear_depth=section.depth, aggregate_size=aggregate)
    simplified_beta = formulas.simplified_beta(
        stirrups=stirrups.effective,
        shear_depth=section.depth,
        crack_spacing=spacing,
        aggregate_size=aggregate,
    )
    spacing = np.where(stirrups.effective, formulas.STIRRUP_CRACK_SPACING, spacing)
    general_beta = formulas.general_beta(strain=strain.strain, crack_spacing=spacing)
    general_theta = formulas.general_theta(strain=strain.strain)
    simplified = prepared.surroundings.simplified
    return _Cracks(
        aggregate=aggregate,
        spacing=spacing,
        beta=np.where(simplified, simplified_beta, general_beta),
        theta=np.where(simplified, formulas.SIMPLIFIED_THETA, general_theta),
    )


def _details(
    prepared: Prepared,
    section: _Section,
    strain: _Strain,
    stirrups: _Stirrups,
    cracks: _Cracks,
    terms: tuple[Floats, Floats, Floats],
) -> ShearDetails:
    concrete, steel, greatest = terms
    simplified = prepared.surroundings.simplified
    beyond_strain = strain.present & ~simplified & (strain.strain > formulas.GREATEST_STRAIN)
    beyond_simplified = simplified & _beyond_simplified(prepared)
    beyond_materials = _beyond_materials(prepared)
    outside = beyond_strain | beyond_simplified | beyond_materials
    resistance = np.where(strain.present, np.minimum(concrete + steel, greatest), 0.0)
    return ShearDetails(
        shear=section.shear,
        own_shear=section.own_shear,
        moment=section.moment,
        top_in_tension=section.top,
        shear_depth=section.depth,
        web_width=section.width,
        concrete_strength=section.strength,
        density_factor=section.lam,
        aggregate_size=cracks.aggregate,
        tension_area=strain.area,
        distance=strain.distance,
        strain_moment=strain.moment,
        strain=strain.strain,
        crack_spacing=cracks.spacing,
        beta=cracks.beta,
        theta=cracks.theta,
        stirrup_area=stirrups.area,
        stirrup_spacing=prepared.stirrup_spacing,
        stirrup_yield=prepared.stirrup_yield,
        minimum_stirrup_area=stirrups.minimum,
        greatest_spacing=stirrups.greatest_spacing,
        concrete_term=concrete,
        stirrup_term=steel,
        greatest=greatest,
        steel_present=strain.present.astype(np.float64),
        resistance=np.where(outside, np.nan, resistance),
        **_methods(prepared, stirrups, cracks),
        beyond_strain=beyond_strain,
        beyond_simplified=beyond_simplified,
        beyond_materials=beyond_materials,
    )


def _methods(prepared: Prepared, stirrups: _Stirrups, cracks: _Cracks) -> dict[str, Bools]:
    """Which method and which of its forms holds, by the names of the details."""
    simplified = prepared.surroundings.simplified
    effective, plain = stirrups.effective, ~stirrups.effective
    by_depth = cracks.aggregate >= formulas.SIMPLIFIED_AGGREGATE
    return {
        "has_stirrups": stirrups.present,
        "effective": effective,
        "plain": plain,
        "general": ~simplified,
        "general_effective": effective & ~simplified,
        "general_plain": plain & ~simplified,
        "simplified": simplified,
        "simplified_effective": effective & simplified,
        "simplified_plain_depth": plain & simplified & by_depth,
        "simplified_plain_spacing": plain & simplified & ~by_depth,
    }


def _beyond_simplified(prepared: Prepared) -> Bools:
    beyond: Bools = (
        prepared.longitudinal_yield > formulas.SIMPLIFIED_GREATEST_YIELD * (1.0 + ROUNDING)
    ) | (prepared.concrete_strength > formulas.SIMPLIFIED_GREATEST_STRENGTH * (1.0 + ROUNDING))
    return beyond


def _beyond_materials(prepared: Prepared) -> Bools:
    strong_stirrups = (prepared.stirrup_area > 0.0) & (
        prepared.stirrup_yield > GREATEST_YIELD * (1.0 + ROUNDING)
    )
    beyond: Bools = prepared.beyond_concrete_strength | prepared.beyond_yield | strong_stirrups
    return beyond


def outside_of(details: ShearDetails, checked: Bools) -> tuple[Outside, ...]:
    """Where shear lies outside the validity of a clause, among the places checked."""
    found = (
        ("11.3.6.4", "longitudinal strain above 0.003", details.beyond_strain),
        (
            "11.3.6.3",
            "the simplified method holds for longitudinal fy up to 400 MPa and f'c up to 60 MPa",
            details.beyond_simplified,
        ),
        (
            "8.5.1, 8.6.1.1",
            "fy above 500 MPa, or f'c outside 20 to 80 MPa",
            details.beyond_materials,
        ),
    )
    return tuple(Outside(clause, text, mask & checked) for clause, text, mask in found)


def _evaluate_face(prepared: Prepared, demand: Demand, top: Bools) -> tuple[ShearDetails, Floats]:
    details = evaluate(prepared, demand, top)
    return details, utilisation_of(details.shear, details.resistance, prepared.inside)


def check(prepared: Prepared, demand: Demand) -> Check:
    """Check shear by 11.3.6.3 or 11.3.6.4 at every station and arrangement."""
    details, utilisation = worse_face(prepared, demand, _evaluate_face)
    checked = (details.shear > 0.0) & prepared.inside
    return Check(
        demand=details.shear,
        resistance=details.resistance,
        utilisation=utilisation,
        outside=outside_of(details, checked),
        details=details,
    )


SHEAR = LimitState(
    name="Shear",
    title="shear",
    clause="11.3",
    covers="shear",
    demand_unit="N",
    linear=False,
    check=check,
    lines=SHEAR_LINES,
)
