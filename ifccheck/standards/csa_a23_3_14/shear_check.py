"""The shear limit state: clause 11.3 at every station, on the face or faces in tension."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.standards.contract import Check, LimitState, Outside
from ifccheck.standards.csa_a23_3_14 import shear as formulas
from ifccheck.standards.csa_a23_3_14.sections import Prepared
from ifccheck.standards.csa_a23_3_14.shear_lines import SHEAR_LINES
from ifccheck.standards.csa_a23_3_14.stirrups import greatest_stirrup_spacing, minimum_stirrup_area
from ifccheck.standards.csa_a23_3_14.tension_face import (
    TensionFace,
    put,
    utilisation_of,
    worse_face,
)


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
    computable: Bools
    """The concrete term can be worked out"""
    without_steel: Bools
    """The general method finds no developed tension steel: eps_x has no bound"""
    idle: Bools
    """No stirrups, or such as do not count"""
    legs_unknown: Bools
    stirrup_force: Bools
    """The stirrup term can be worked out, and is not 0"""
    beyond_strain: Bools
    beyond_simplified: Bools
    beyond_materials: Bools


def evaluate(face: TensionFace, demand: Demand) -> ShearDetails:
    """Work out the shear resistance with one face in tension.

    The range of each method is kept: outside it the resistance is nan. A face that holds no
    tension steel at all resists no shear, for clause 11.3 presumes that steel.
    """
    acting = _Acting(np.abs(demand.critical_shear), np.abs(demand.shear), np.abs(demand.moment))
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        strain = _strain(face, acting)
        stirrups = _stirrups(face, acting.shear)
        cracks = _cracks(face, strain, stirrups)
        return _details(face, acting, strain, stirrups, cracks, _terms(face, stirrups, cracks))


@dataclass(frozen=True, slots=True)
class _Acting:
    """What acts, without its sense."""

    shear: Floats
    own_shear: Floats
    moment: Floats


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
    minimum: Floats
    greatest_spacing: Floats
    present: Bools
    effective: Bools


@dataclass(frozen=True, slots=True)
class _Terms:
    concrete: Floats
    stirrups: Floats
    greatest: Floats


@dataclass(frozen=True, slots=True)
class _Cracks:
    aggregate: Floats
    spacing: Floats
    beta: Floats
    theta: Floats


def _strain(face: TensionFace, acting: _Acting) -> _Strain:
    """eps_x at the place, or where it is less, at the critical section nearer to midspan.

    The latter is open to a place nearer to a support than its critical section, where the shear
    at that section is used too; the moment there is bounded from the place's own.
    """
    moment = np.maximum(acting.moment, acting.shear * face.shear_depth)
    own = formulas.longitudinal_strain(
        moment=moment,
        shear=acting.shear,
        shear_depth=face.shear_depth,
        tension_area=face.tension_area,
    )
    at_place = _Strain(
        present=face.tension_area_full > 0.0,
        area=face.tension_area,
        distance=np.zeros(face.shear_depth.shape),
        moment=moment,
        strain=own,
    )
    nearer = np.nonzero((acting.shear < acting.own_shear) & (face.critical_distance > 0.0))
    if nearer[0].size == 0:
        return at_place
    return _strain_at_critical(face.take(nearer[-1]), acting, at_place, nearer)


def _strain_at_critical(
    face: TensionFace, acting: _Acting, own: _Strain, nearer: tuple[Ints, ...]
) -> _Strain:
    """The strain with that at the critical section put in where it is less."""
    shear, own_shear = acting.shear[nearer], acting.own_shear[nearer]
    moment = np.maximum(
        acting.moment[nearer] + own_shear * face.critical_distance, shear * face.shear_depth
    )
    strain = formulas.longitudinal_strain(
        moment=moment, shear=shear, shear_depth=face.shear_depth, tension_area=face.critical_area
    )
    less = strain < own.strain[nearer]
    places = tuple(index[less] for index in nearer)
    shape = own.strain.shape
    present = np.broadcast_to(own.present, shape)
    return _Strain(
        present=put(present, nearer, present[nearer] | (face.critical_area > 0.0)),
        area=put(np.broadcast_to(own.area, shape), places, face.critical_area[less]),
        distance=put(np.broadcast_to(own.distance, shape), places, face.critical_distance[less]),
        moment=put(own.moment, places, moment[less]),
        strain=put(own.strain, places, strain[less]),
    )


def _stirrups(face: TensionFace, shear: Floats) -> _Stirrups:
    minimum = minimum_stirrup_area(
        concrete_strength=face.concrete_strength,
        web_width=face.web_width,
        spacing=face.stirrup_spacing,
        stirrup_yield=face.stirrup_yield,
    )
    greatest = greatest_stirrup_spacing(
        shear=shear,
        concrete_strength=face.concrete_strength,
        density_factor=face.density_factor,
        web_width=face.web_width,
        shear_depth=face.shear_depth,
    )
    present = face.stirrup_area > 0.0
    enough = present & (face.stirrup_area >= minimum)
    return _Stirrups(minimum, greatest, present, enough & (face.stirrup_spacing <= greatest))


def _cracks(face: TensionFace, strain: _Strain, stirrups: _Stirrups) -> _Cracks:
    aggregate = formulas.effective_aggregate_size(
        concrete_strength=face.concrete_strength, aggregate_size=face.aggregate_size
    )
    plain_spacing = formulas.equivalent_crack_spacing(
        shear_depth=face.shear_depth, aggregate_size=aggregate
    )
    spacing = np.where(stirrups.effective, formulas.STIRRUP_CRACK_SPACING, plain_spacing)
    if face.simplified.all():
        beta = formulas.simplified_beta(
            stirrups=stirrups.effective,
            shear_depth=face.shear_depth,
            crack_spacing=plain_spacing,
            aggregate_size=aggregate,
        )
        theta = np.full(face.shear_depth.shape, formulas.SIMPLIFIED_THETA)
        return _Cracks(aggregate, spacing, beta, theta)
    return _Cracks(
        aggregate=aggregate,
        spacing=spacing,
        beta=formulas.general_beta(strain=strain.strain, crack_spacing=spacing),
        theta=formulas.general_theta(strain=strain.strain),
    )


def _terms(face: TensionFace, stirrups: _Stirrups, cracks: _Cracks) -> _Terms:
    concrete = formulas.concrete_resistance(
        beta=cracks.beta,
        concrete_strength=face.concrete_strength,
        density_factor=face.density_factor,
        web_width=face.web_width,
        shear_depth=face.shear_depth,
    )
    steel = formulas.stirrup_resistance(
        stirrup_area=face.stirrup_area,
        stirrup_yield=face.stirrup_yield,
        stirrup_spacing=face.stirrup_spacing,
        shear_depth=face.shear_depth,
        theta=cracks.theta,
    )
    idle = np.where(np.isnan(face.stirrup_area), np.nan, 0.0)
    greatest = formulas.greatest_resistance(
        concrete_strength=face.concrete_strength,
        web_width=face.web_width,
        shear_depth=face.shear_depth,
    )
    return _Terms(concrete, np.where(stirrups.effective, steel, idle), greatest)


def _details(
    face: TensionFace,
    acting: _Acting,
    strain: _Strain,
    stirrups: _Stirrups,
    cracks: _Cracks,
    terms: _Terms,
) -> ShearDetails:
    beyond_strain = strain.present & ~face.simplified & (strain.strain > formulas.GREATEST_STRAIN)
    outside = beyond_strain | face.beyond_simplified | face.beyond_materials
    resistance = np.minimum(terms.concrete + terms.stirrups, terms.greatest)
    resistance = np.where(strain.present, resistance, 0.0)
    return ShearDetails(
        shear=acting.shear,
        own_shear=acting.own_shear,
        moment=acting.moment,
        top_in_tension=face.top_in_tension,
        shear_depth=face.shear_depth,
        web_width=face.web_width,
        concrete_strength=face.concrete_strength,
        density_factor=face.density_factor,
        aggregate_size=cracks.aggregate,
        tension_area=strain.area,
        distance=strain.distance,
        strain_moment=strain.moment,
        strain=strain.strain,
        crack_spacing=cracks.spacing,
        beta=cracks.beta,
        theta=cracks.theta,
        stirrup_area=face.stirrup_area,
        stirrup_spacing=face.stirrup_spacing,
        stirrup_yield=face.stirrup_yield,
        minimum_stirrup_area=stirrups.minimum,
        greatest_spacing=stirrups.greatest_spacing,
        concrete_term=terms.concrete,
        stirrup_term=terms.stirrups,
        greatest=terms.greatest,
        steel_present=strain.present.astype(np.float64),
        resistance=np.where(outside, np.nan, resistance),
        **_methods(face, strain, stirrups, cracks),
        beyond_strain=beyond_strain,
        beyond_simplified=face.beyond_simplified,
        beyond_materials=face.beyond_materials,
    )


def _methods(
    face: TensionFace, strain: _Strain, stirrups: _Stirrups, cracks: _Cracks
) -> dict[str, Bools]:
    """Which method and which of its forms holds, by the names of the details."""
    simplified = face.simplified
    effective, plain = stirrups.effective, ~stirrups.effective
    by_depth = cracks.aggregate >= formulas.SIMPLIFIED_AGGREGATE
    general = ~simplified & (strain.area > 0.0)
    computable = simplified | general
    return {
        "has_stirrups": stirrups.present,
        "effective": effective,
        "plain": plain,
        "general": general,
        "general_effective": effective & general,
        "general_plain": plain & general,
        "simplified": simplified,
        "simplified_effective": effective & simplified,
        "simplified_plain_depth": plain & simplified & by_depth,
        "simplified_plain_spacing": plain & simplified & ~by_depth,
        "computable": computable,
        "without_steel": ~computable,
        "idle": plain & ~np.isnan(face.stirrup_area),
        "legs_unknown": np.isnan(face.stirrup_area),
        "stirrup_force": effective & computable,
    }


def outside_of(details: Any, checked: Bools) -> tuple[Outside, ...]:
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


def _evaluate(face: TensionFace, demand: Demand) -> tuple[ShearDetails, Floats]:
    details = evaluate(face, demand)
    return details, utilisation_of(details.shear, details.resistance, face.inside)


def check(prepared: Prepared, demand: Demand) -> Check:
    """Check shear by 11.3.6.3 or 11.3.6.4 at every station and arrangement."""
    details, utilisation = worse_face(prepared, demand, _evaluate)
    shear = np.abs(demand.critical_shear)
    return Check(
        demand=shear,
        resistance=details.resistance,
        utilisation=utilisation,
        outside=outside_of(details, (shear > 0.0) & prepared.inside),
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
